//! What makes a granule: the same recipe gives the same values on any machine.

use super::instrument::Instrument;
use super::scenes::SceneName;
use super::shape::Shape;
use super::swath::Swath;

/// Scene, size and seed of a granule.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Recipe {
    /// What it shows.
    pub scene: SceneName,
    /// How large it is.
    pub shape: Shape,
    /// What its random numbers grow from.
    pub seed: u64,
}

/// The seed of the sample granules.
pub const DEFAULT_SEED: u64 = 1;

impl Recipe {
    /// Name of the file; it says that the granule is synthetic.
    pub fn file_name(&self) -> String {
        let scene = self.scene.label().replace('-', "_");
        let shape = match self.shape {
            Shape::Sample => String::new(),
            shape => format!("_{}", shape.label()),
        };
        let seed = match self.seed {
            DEFAULT_SEED => String::new(),
            seed => format!("_seed{seed}"),
        };
        format!("synthetic_brindle_{scene}{shape}{seed}.nc")
    }

    /// The command that follows this recipe.
    pub fn command(&self) -> String {
        format!(
            "radsieve synth --scene {} --shape {} --seed {}",
            self.scene.label(),
            self.shape.label(),
            self.seed
        )
    }

    pub(super) fn instrument(&self) -> (Instrument, Swath) {
        self.shape.instrument(self.scene)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_say_what_is_inside() {
        let recipe = |shape, seed| Recipe { scene: SceneName::SeaOfLowen, shape, seed };
        assert_eq!(recipe(Shape::Sample, 1).file_name(), "synthetic_brindle_sea_of_lowen.nc");
        assert_eq!(
            recipe(Shape::Grating, 7).file_name(),
            "synthetic_brindle_sea_of_lowen_grating_seed7.nc"
        );
    }
}
