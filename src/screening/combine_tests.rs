//! The combination worked by hand.

use proptest::prelude::*;

use super::combine::{Conclusion, Voice, conclude, family_voice};

fn voice(margin: f64) -> Voice {
    Voice { margin, halved: false, against: 1.0 }
}

#[test]
fn a_family_speaks_with_its_strongest_voice_for_or_the_mean_against() {
    assert_eq!(family_voice([voice(0.5), voice(1.0), voice(-1.5)]), Some(3.0));
    assert_eq!(family_voice([voice(-0.5), voice(-1.5)]), Some(-3.0));
    assert_eq!(family_voice([voice(f64::NAN), voice(-0.5)]), Some(-1.5));
    assert_eq!(family_voice([voice(f64::NAN)]), None);
    assert_eq!(family_voice([]), None);
}

#[test]
fn guards_halve_and_a_test_may_speak_against_more_softly() {
    let halved = Voice { halved: true, ..voice(1.0) };
    assert_eq!(family_voice([halved]), Some(1.5));
    let soft = |margin| Voice { against: 0.2, ..voice(margin) };
    assert_eq!(family_voice([soft(1.0)]), Some(3.0));
    assert!((family_voice([soft(-1.0)]).unwrap() + 0.6).abs() < 1e-12);
}

/// Worked by hand: L0 = -1, two families of weight 1 and 0.5 speak +3 and -1.5, a third of weight
/// 0.5 can't. c = 1.5/2 = 0.75, L = -0.75 + 3 - 0.75 = 1.5, p = 1/(1 + e^-1.5) = 0.817574,
/// doubt = 1 - 0.75 x 0.635149 = 0.523638.
#[test]
fn three_families_worked_by_hand() {
    let conclusion = conclude(-1.0, [(1.0, Some(3.0)), (0.5, Some(-1.5)), (0.5, None)]);
    // The hand's six digits.
    assert!((conclusion.probability - 0.817_574).abs() < 5e-7, "{conclusion:?}");
    assert_eq!((conclusion.log_odds, conclusion.coverage), (1.5, 0.75));
    assert!((conclusion.doubt - 0.523_638).abs() < 5e-7, "{conclusion:?}");
}

#[test]
fn one_weak_test_among_many_silent_ones_makes_nothing_plain() {
    let Conclusion { probability, doubt, .. } =
        conclude(0.0, [(1.0, Some(4.5)), (1.0, None), (1.0, None), (1.0, None)]);
    assert!(probability > 0.98 && doubt > 0.75);
}

#[test]
fn nothing_heard_is_not_clear() {
    let silent = conclude(-4.0, [(1.0, None), (2.0, None)]);
    assert!(silent.probability.is_nan());
    assert_eq!((silent.coverage, silent.doubt), (0.0, 1.0));
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]
    #[test]
    fn the_order_of_tests_changes_nothing_but_rounding(
        mut margins in proptest::collection::vec(-1.5..1.5_f64, 1..8), turn in 0_usize..8,
    ) {
        let before = family_voice(margins.iter().map(|margin| voice(*margin))).unwrap();
        let places = turn % margins.len();
        margins.rotate_left(places);
        let after = family_voice(margins.iter().map(|margin| voice(*margin))).unwrap();
        // A mean of at most eight numbers below 4.5.
        prop_assert!((before - after).abs() < 1e-13);
    }

    #[test]
    fn probability_and_doubt_stay_in_their_range(
        start in -5.0..5.0_f64,
        voices in proptest::collection::vec((0.0..2.0_f64, proptest::option::of(-4.5..4.5_f64)), 0..7),
    ) {
        let Conclusion { probability, coverage, doubt, .. } = conclude(start, voices);
        prop_assert!(probability.is_nan() || (0.0..=1.0).contains(&probability));
        prop_assert!((0.0..=1.0).contains(&coverage) && (0.0..=1.0).contains(&doubt));
    }
}
