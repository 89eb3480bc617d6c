//! The spot check: start state, keys, expected. Plain by the rulebook of the trial are the cloudy
//! footprints 0 to 8, the dusty ones 26 to 29, and 12 to 24 without a flag.

use super::screening::{place, screen};
use crate::flags::Act;
use crate::ui::trial::{Place, Trial};

fn begun() -> (Place, Trial) {
    let place = place(&["lowen_001.nc"]);
    let mut trial = place.review(&["lowen_001.nc"]);
    trial.types(":layer doubt").keys("Enter @");
    (place, trial)
}

/// Judges as the tests do, but for footprints 2 and 26, and does not know about 13.
fn judge_all(trial: &mut Trial) -> Vec<usize> {
    let mut asked = Vec::new();
    while trial.bench().is_blind() {
        let at = trial.bench().cursor;
        asked.push(at);
        trial.keys(match at {
            2 | 26 => "y",
            13 => "u",
            0..=8 | 27.. => "n",
            _ => "y",
        });
    }
    asked
}

#[test]
fn a_sample_is_judged_without_the_verdict_and_the_error_rate_is_kept() {
    let (place, mut trial) = begun();
    assert!(trial.message().starts_with("spot check 1 of 26"), "{}", trial.message());
    trial.keys("6");
    for (width, height) in [(80, 24), (200, 60)] {
        let screen = trial.screen(width, height);
        assert!(screen.contains("hidden"), "{screen}");
        for verdict in ["suggested", "cold window", "doubt 0", "doubt 1", "Field doubt"] {
            assert!(!screen.contains(verdict), "{verdict}: {screen}");
        }
    }
    let asked = judge_all(&mut trial);
    let mut sorted = asked.clone();
    sorted.sort_unstable();
    assert_eq!(sorted, (0..9).chain(12..25).chain(26..30).collect::<Vec<_>>());
    assert_ne!(sorted, asked, "the order tells nothing");
    assert!(trial.message().starts_with("spot check: no flag: 0 of 12 wrong"));
    assert!(trial.message().contains("flagged: 2 of 13 wrong: 15.4 %"), "{}", trial.message());
    let wrong: Vec<usize> = trial.bench().selection().footprints.iter().collect();
    assert_eq!(wrong, [2, 26], "what was judged wrong is selected");
    assert!(trial.flagged("cloudy").is_empty(), "no flag was changed");
    let Act::SpotCheck(check) = trial.record().decisions()[0].act.clone() else { panic!() };
    assert!(check.rulebook.starts_with("lowen ("));
    assert_eq!(check.strata.iter().map(|one| one.plain).collect::<Vec<_>>(), [13, 13]);
    trial.keys("Esc S");
    assert!(trial.screen(120, 40).contains("spot check: no flag: 0 of 12 wrong"));
    trial.keys("Esc");
    trial.leave();
    let again = place.review(&["lowen_001.nc"]);
    assert_eq!(again.record().spot_checks().count(), 1);
}

#[test]
fn the_spread_tells_nothing_of_the_verdict_either() {
    let place = place(&["lowen_001.nc"]);
    screen(&place, "lowen_001.nc");
    let mut trial = place.review(&["lowen_001.nc"]);
    trial.keys("4 z");
    let flagged = |screen: &str| screen.lines().skip(2).any(|line| line.contains('#'));
    assert!(flagged(&trial.screen(80, 24)));
    trial.keys("@");
    assert!(trial.bench().is_blind() && trial.screen(80, 24).contains("Spread"));
    assert!(!flagged(&trial.screen(80, 24)), "{}", trial.screen(80, 24));
}

#[test]
fn one_can_go_back_but_not_decide_or_look_at_the_verdict_meanwhile() {
    let (_place, mut trial) = begun();
    let first = trial.bench().cursor;
    trial.keys("y y Backspace Backspace Backspace");
    assert_eq!(trial.bench().cursor, first);
    for key in ["f", "a", "R", "#", "]", ":", "n", "S"] {
        trial.keys(key);
        assert!(trial.message().starts_with("spot check"), "{key}: {}", trial.message());
        trial.keys("Backspace");
    }
    assert_eq!(trial.record().decisions().len(), 0);
    trial.keys("+ b Right Esc");
    assert!(!trial.bench().is_blind());
    assert_eq!(trial.record().decisions().len(), 0, "half a sample is none");
}

#[test]
fn the_number_may_be_chosen_and_what_was_decided_is_not_asked_again() {
    let place = place(&["lowen_001.nc"]);
    let mut trial = place.review(&["lowen_001.nc"]);
    trial.keys("v Down End a").types(":spot 50").keys("Enter");
    let asked = judge_all(&mut trial);
    assert!(asked.iter().all(|at| *at >= 12), "{asked:?}");
    trial.types(":spot 2").keys("Enter");
    assert!(trial.message().starts_with("spot check 1 of 4"), "{}", trial.message());
}
