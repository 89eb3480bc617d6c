//! The granules of the trial: every scene, each in a climate of its own, defects in some.
//!
//! No seed is used by the calibration or the skill set, so the rulebook has seen nothing of them.

use std::path::{Path, PathBuf};

use radsieve::synth::{Recipe, SceneName, Shape, make_granule};
use radsieve::system::Cancel;

use crate::Mishap;

/// 12 scan lines of 10 clusters of 9, 24 scan lines of 30 footprints.
const INTERFEROMETER: (Shape, u64) = (Shape::Custom { lines: 12, positions: 10, side: 3 }, 901);
const GRATING: (Shape, u64) = (Shape::Custom { lines: 24, positions: 30, side: 1 }, 951);

/// Scenes seen by the second instrument too, and whether a defect of every kind is planted.
const AGAIN: [(SceneName, bool); 5] = [
    (SceneName::SeaOfLowen, false),
    (SceneName::NorrikPlateau, false),
    (SceneName::IskelSound, false),
    (SceneName::HeskIsles, true),
    (SceneName::StraitOfPell, true),
];

fn recipes() -> Vec<Recipe> {
    let recipe = |scene, (shape, seed): (Shape, u64), faulty| Recipe {
        scene,
        shape,
        seed,
        perturbed: Some(seed),
        faulty,
        nedn: None,
    };
    let first = SceneName::ALL.into_iter().map(|scene| recipe(scene, INTERFEROMETER, false));
    let second = AGAIN.into_iter().map(|(scene, faulty)| recipe(scene, GRATING, faulty));
    first.chain(second).collect()
}

/// The twelve files in a folder, in the order of their names; those that are there already are taken.
pub fn made(folder: &Path) -> Result<Vec<PathBuf>, Mishap> {
    let mut files = Vec::new();
    for recipe in recipes() {
        let file = folder.join(recipe.file_name());
        if !file.exists() {
            make_granule(recipe, &file, &Cancel::new(), &mut |_, _| ())?;
        }
        files.push(file);
    }
    files.sort();
    Ok(files)
}
