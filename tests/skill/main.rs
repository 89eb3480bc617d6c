//! What the built-in rulebook promises, on perturbed synthetic granules that nothing was fitted to.
//!
//! Granules, questions and truth are those of `benches/skill`, which prints the whole account;
//! `docs/skill.md` holds it. No test of the rulebook sees the truth: it is only scored with.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

#[path = "../../benches/skill/cases.rs"]
#[expect(dead_code, reason = "the bench prints more than is promised here")]
mod cases;
#[path = "../../benches/skill/limits.rs"]
mod limits;
#[path = "../../benches/skill/sets.rs"]
mod sets;

use cases::Granule;
use limits::{
    CLEAR_SEA, CLIMATES, CLOUD, DUST, LOSSES, NO_DUST, Question, SLIGHT, SOUND, Share, of_scenes,
};
use radsieve::granule::Opening;
use radsieve::netcdf_files::ReaderProgram;
use radsieve::screening::builtin;

fn skill_set() -> Vec<Granule> {
    let folder = tempfile::tempdir().unwrap();
    let opening = Opening::new(ReaderProgram::new(env!("CARGO_BIN_EXE_radsieve")));
    let rulebook = builtin().unwrap();
    let mut granules = Vec::new();
    for recipe in sets::SKILL.recipes() {
        let file = sets::made(recipe, folder.path()).unwrap();
        granules.push(Granule::screened(&opening, &file, &rulebook).unwrap());
        std::fs::remove_file(file).unwrap();
    }
    granules
}

/// Enough footprints for a rate of a few per cent to mean something.
const ENOUGH: usize = 100;

#[test]
fn limits_hold_in_their_climates() {
    let granules = skill_set();
    let mut broken = Vec::new();
    for (climate, scenes) in CLIMATES {
        let mut check = |question: &Question, holds: fn(f64) -> bool| {
            let share = question.answer(of_scenes(&granules, scenes));
            if share.all < ENOUGH || !holds(share.rate()) {
                broken.push(format!("{climate}: {}: {share}", question.head));
            }
        };
        check(&CLOUD, |rate| rate >= 0.95);
        check(&CLEAR_SEA, |rate| rate <= 0.03);
        check(&NO_DUST, |rate| rate <= 0.02);
        check(&LOSSES, |rate| rate == 1.0);
        check(&SLIGHT, |rate| rate == 1.0);
        check(&SOUND, |rate| rate <= 0.005);
        // There is no dust in the polar winter, nor volcano.
        if climate != "polar winter" {
            check(&DUST, |rate| rate >= 0.90);
        }
    }
    let channels = |of: fn(&Granule) -> Share| {
        let shares = granules.iter().map(of);
        shares.fold((0, 0), |sum, share| (sum.0 + share.held, sum.1 + share.all))
    };
    let (found, planted) = channels(|granule| granule.defective_channels);
    if planted < 30 || found < planted {
        broken.push(format!("dead, noisy and popping channels: {found} of {planted} found"));
    }
    let (suspected, sound) = channels(|granule| granule.sound_channels);
    if suspected * 1000 > sound {
        broken.push(format!("{suspected} of {sound} sound channels suspected"));
    }
    assert!(broken.is_empty(), "{broken:#?}");
}

#[test]
fn calibration_choice_and_measurement_have_no_seed_in_common() {
    let seeds = |set: &sets::Set| -> Vec<(u64, Option<u64>)> {
        set.recipes().iter().map(|recipe| (recipe.seed, recipe.perturbed)).collect()
    };
    let (fitted, chosen) = (seeds(&sets::CALIBRATION), seeds(&sets::VALIDATION));
    let measured = seeds(&sets::SKILL);
    assert!(chosen.iter().all(|seed| !fitted.contains(seed)));
    assert!(measured.iter().all(|seed| !fitted.contains(seed) && !chosen.contains(seed)));
    assert!(measured.iter().all(|(_, perturbed)| perturbed.is_some()));
}
