//! Two sets of perturbed granules: one to calibrate on, another to measure on.
//!
//! Every granule has its own seed, from which its atmosphere, gases, emissivities, clouds, view, hour, noise
//! and defects are drawn. The sets have no seed in common, so nothing is measured on what it was fitted to.

use std::path::{Path, PathBuf};

use radsieve::synth::{Recipe, SceneName, Shape, make_granule};
use radsieve::system::Cancel;

/// A set of granules: every scene by both classes of instrument, once for each seed.
pub struct Set {
    /// Seeds of the interferometer's granules, then of the grating's.
    seeds: [&'static [u64]; 2],
}

/// Weights, starting points and re-derived limits come from these.
#[allow(dead_code, reason = "the test only measures")]
pub const CALIBRATION: Set =
    Set { seeds: [&[1, 2, 11, 12, 101, 102, 103], &[51, 52, 61, 62, 151, 152, 153]] };
/// Skill is measured on these.
pub const SKILL: Set = Set { seeds: [&[21, 22], &[71, 72]] };

/// 12 scan lines of 10 clusters, 24 scan lines of 30 footprints.
const SHAPES: [Shape; 2] = [
    Shape::Custom { lines: 12, positions: 10, side: 3 },
    Shape::Custom { lines: 24, positions: 30, side: 1 },
];

impl Set {
    /// The granules of a set.
    pub fn recipes(&self) -> Vec<Recipe> {
        let mut recipes = Vec::new();
        for scene in SceneName::ALL {
            for (shape, seeds) in SHAPES.into_iter().zip(self.seeds) {
                for seed in seeds.iter().copied() {
                    recipes.push(Recipe {
                        scene,
                        shape,
                        seed,
                        perturbed: Some(seed),
                        faulty: false,
                    });
                }
            }
        }
        recipes
    }
}

/// Makes the granule of a recipe in a folder, unless it is there already.
pub fn made(recipe: Recipe, folder: &Path) -> Result<PathBuf, Box<dyn std::error::Error>> {
    let path = folder.join(recipe.file_name());
    if !path.exists() {
        make_granule(recipe, &path, &Cancel::new(), &mut |_, _| ())?;
    }
    Ok(path)
}
