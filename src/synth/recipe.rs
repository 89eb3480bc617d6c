//! What makes a granule: the same recipe gives the same values on any machine.

use super::defects::Defect;
use super::faulty::every_kind;
use super::instrument::Instrument;
use super::perturbation::Perturbation;
use super::scene::Setting;
use super::scenes::SceneName;
use super::shape::Shape;
use super::swath::Swath;
use super::told_noise::ToldNoise;

/// Scene, size and seed of a granule.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Recipe {
    /// What it shows.
    pub scene: SceneName,
    /// How large it is.
    pub shape: Shape,
    /// What its random numbers grow from.
    pub seed: u64,
    /// What another climate is drawn from; `None` for the scene as it is.
    pub perturbed: Option<u64>,
    /// Whether every kind of defect is planted, in place of those of the scene or the climate.
    pub faulty: bool,
    /// Whether, and how, the file tells its noise.
    pub nedn: Option<ToldNoise>,
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
        let perturbed = self.perturbed.map_or_else(String::new, |seed| format!("_perturbed{seed}"));
        let faulty = if self.faulty { "_faulty" } else { "" };
        let nedn = self.nedn.map_or_else(String::new, |told| format!("_nedn_{}", told.label()));
        format!("synthetic_brindle_{scene}{shape}{seed}{perturbed}{faulty}{nedn}.nc")
    }

    /// Name of the file of what a model calculates for the granule.
    pub fn calculated_file_name(&self) -> String {
        format!("{}_calculated.nc", self.file_name().trim_end_matches(".nc"))
    }

    /// The command that follows this recipe.
    pub fn command(&self) -> String {
        let perturbed =
            self.perturbed.map_or_else(String::new, |seed| format!(" --perturbed {seed}"));
        let faulty = if self.faulty { " --faulty" } else { "" };
        let nedn = self.nedn.map_or_else(String::new, |told| format!(" --nedn {}", told.label()));
        format!(
            "radsieve synth --scene {} --shape {} --seed {}{perturbed}{faulty}{nedn}",
            self.scene.label(),
            self.shape.label(),
            self.seed
        )
    }

    pub(super) fn perturbation(&self) -> Option<Perturbation> {
        self.perturbed.map(|seed| Perturbation::drawn(seed, self.scene as u64))
    }

    /// When and where.
    pub(super) fn setting(&self) -> Setting {
        let setting = self.scene.setting();
        self.perturbation().map_or(setting, |perturbation| perturbation.of_setting(setting))
    }

    /// The instrument, how it scans, and what is wrong with it.
    pub(super) fn instrument(&self) -> (Instrument, Swath, Vec<Defect>) {
        let (mut instrument, mut swath) = self.shape.instrument(self.scene, &self.setting());
        let defects = match self.perturbation() {
            None => self.scene.defects().to_vec(),
            Some(perturbation) => {
                perturbation.of_instrument(&mut instrument, &mut swath);
                perturbation.defects(&instrument, &swath)
            }
        };
        let defects = if self.faulty { every_kind(&instrument, &swath) } else { defects };
        (instrument, swath, defects)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_say_what_is_inside() {
        let recipe = |shape, seed| Recipe {
            scene: SceneName::SeaOfLowen,
            shape,
            seed,
            perturbed: None,
            faulty: false,
            nedn: None,
        };
        assert_eq!(recipe(Shape::Sample, 1).file_name(), "synthetic_brindle_sea_of_lowen.nc");
        assert_eq!(
            recipe(Shape::Grating, 7).file_name(),
            "synthetic_brindle_sea_of_lowen_grating_seed7.nc"
        );
        let perturbed = Recipe { perturbed: Some(3), ..recipe(Shape::Sample, 7) };
        assert_eq!(perturbed.file_name(), "synthetic_brindle_sea_of_lowen_seed7_perturbed3.nc");
        assert!(perturbed.command().ends_with("--seed 7 --perturbed 3"));
    }
}
