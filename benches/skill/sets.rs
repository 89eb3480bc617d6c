//! Three sets of perturbed granules: to calibrate on, to choose with, and to measure on.
//!
//! Every granule has its own seed, from which its atmosphere, gases, emissivities, clouds, view, hour, noise
//! and defects are drawn: a climate. The sets have no seed in common, so nothing is measured on what it was
//! fitted to or chosen with.

use std::path::{Path, PathBuf};

use radsieve::synth::{Recipe, SceneName, Shape, make_granule};
use radsieve::system::Cancel;

/// A set of granules: seeds of the interferometer's, then of the grating's.
pub struct Set {
    /// Once for every scene.
    all_scenes: [&'static [u64]; 2],
    /// Once more for the scenes of `SEAS`: clear sea is rare in them, and what it looks like differs
    /// most from climate to climate.
    seas: [&'static [u64]; 2],
}

const SEAS: [SceneName; 3] = [SceneName::StraitOfPell, SceneName::HeskIsles, SceneName::SeaOfLowen];

/// Weights, starting points and re-derived limits come from these.
#[allow(dead_code, reason = "the test only measures")]
pub const CALIBRATION: Set = Set {
    all_scenes: [&[21, 22, 1000, 1001, 1002, 1003, 1004], &[71, 72, 1500, 1501, 1502, 1503, 1504]],
    seas: [
        &[1100, 1101, 1102, 1103, 1104, 1105, 1106, 1107],
        &[1600, 1601, 1602, 1603, 1604, 1605, 1606, 1607],
    ],
};
/// Between ways of doing it the choice was made on these.
#[allow(dead_code, reason = "the bench alone asks for it")]
pub const VALIDATION: Set =
    Set { all_scenes: [&[2000, 2001, 2002], &[2500, 2501, 2502]], seas: [&[], &[]] };
/// Skill is measured on these. They were drawn once the rulebook stood; whoever changes it after looking
/// at them takes others.
pub const SKILL: Set = Set {
    all_scenes: [&[46_271, 46_272], &[58_301, 58_302]],
    seas: [&[46_281, 46_282, 46_283, 46_284, 46_285], &[58_311, 58_312, 58_313, 58_314, 58_315]],
};

/// 12 scan lines of 10 clusters, 24 scan lines of 30 footprints.
const SHAPES: [Shape; 2] = [
    Shape::Custom { lines: 12, positions: 10, side: 3 },
    Shape::Custom { lines: 24, positions: 30, side: 1 },
];

impl Set {
    /// The granules of a set.
    pub fn recipes(&self) -> Vec<Recipe> {
        let of = |scenes: &[SceneName], seeds: &[&[u64]; 2]| {
            let mut recipes = Vec::new();
            for scene in scenes.iter().copied() {
                for (shape, seeds) in SHAPES.into_iter().zip(seeds) {
                    recipes.extend(seeds.iter().map(|seed| perturbed(scene, shape, *seed)));
                }
            }
            recipes
        };
        let mut recipes = of(&SceneName::ALL, &self.all_scenes);
        recipes.extend(of(&SEAS, &self.seas));
        recipes
    }
}

fn perturbed(scene: SceneName, shape: Shape, seed: u64) -> Recipe {
    Recipe { scene, shape, seed, perturbed: Some(seed), faulty: false, nedn: None }
}

/// Makes the granule of a recipe in a folder, unless it is there already.
pub fn made(recipe: Recipe, folder: &Path) -> Result<PathBuf, Box<dyn std::error::Error>> {
    let path = folder.join(recipe.file_name());
    if !path.exists() {
        make_granule(recipe, &path, &Cancel::new(), &mut |_, _| ())?;
    }
    Ok(path)
}
