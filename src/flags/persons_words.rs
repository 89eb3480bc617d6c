//! What persons said about a flag, footprint by footprint, to hold a test against.

use super::{Act, Decision, FlagAt, FootprintSet, Ruling};

/// A person's latest word about a flag at a footprint.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum PersonsWord {
    /// What the tests suggested was accepted. That says little about a test which made the
    /// suggestion: whoever counts it as agreement measures the test against itself.
    Accepted,
    /// It does not hold: withdrawn, or a suggestion overruled.
    HoldsNot,
    /// It holds: given by hand.
    Holds,
}

/// What persons said about any of these flags; where they said different things about several, that
/// one holds counts first. Having looked at a footprint without naming the flag is no word about it.
/// `standing` tells which decisions stand.
pub fn persons_words(
    footprints: usize,
    decisions: &[Decision],
    standing: &[bool],
    flags: &[&str],
) -> Vec<Option<PersonsWord>> {
    let mut all = vec![None; footprints];
    for flag in flags {
        let mut words = vec![None; footprints];
        let stand =
            decisions.iter().zip(standing).filter(|(one, stands)| **stands && one.by_person());
        stand.for_each(|(decision, _)| speak(&decision.act, flag, &mut words));
        for (all, word) in all.iter_mut().zip(words) {
            *all = (*all).max(word);
        }
    }
    all
}

fn speak(act: &Act, about: &str, words: &mut [Option<PersonsWord>]) {
    let mut say = |footprints: &FootprintSet, word: PersonsWord| {
        for run in footprints.clipped(words.len()).runs() {
            words[run.clone()].fill(Some(word));
        }
    };
    match act {
        Act::Flag { flag, footprints, .. } if flag == about => say(footprints, PersonsWord::Holds),
        Act::Withdraw { flag, footprints, bands: None } if flag == about => {
            say(footprints, PersonsWord::HoldsNot);
        }
        Act::Judge { ruling: Ruling::Accepted, footprints, .. } => {
            say(footprints, PersonsWord::Accepted);
        }
        Act::Judge { ruling: Ruling::Overruled, given, withdrawn, .. } => {
            let parts = |parts: &[FlagAt]| -> Vec<FootprintSet> {
                let named = parts.iter().filter(|part| part.flag == about);
                named.map(|part| part.footprints.clone()).collect()
            };
            parts(withdrawn).iter().for_each(|set| say(set, PersonsWord::HoldsNot));
            parts(given).iter().for_each(|set| say(set, PersonsWord::Holds));
        }
        _ => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::flags::{DecisionId, Origin};

    fn decisions(acts: Vec<(Origin, Act)>) -> Vec<Decision> {
        let decision = |(sequence, (origin, act)): (u64, (Origin, Act))| Decision {
            id: DecisionId { writer: "ada".to_owned(), sequence },
            at: jiff::Timestamp::from_second(sequence as i64).unwrap(),
            clock: None,
            person: "ada".to_owned(),
            origin,
            act,
            why: None,
            step: None,
        };
        (1..).zip(acts).map(decision).collect()
    }

    #[test]
    fn only_words_about_the_flag_count_and_the_latest_of_them() {
        use PersonsWord::{Accepted, Holds, HoldsNot};
        let set = |range| FootprintSet::range(range);
        let flag = |flag: &str, range| {
            let flag = flag.to_owned();
            Act::Flag { flag, footprints: set(range), bands: None }
        };
        let judge = |ruling, range: std::ops::Range<usize>| {
            let part = vec![FlagAt { flag: "cloudy".to_owned(), footprints: set(range.clone()) }];
            let (given, withdrawn) = match ruling {
                Ruling::Accepted => (part, Vec::new()),
                Ruling::Overruled => (Vec::new(), part),
            };
            let (rulebook, footprints) = (String::new(), set(range));
            Act::Judge { ruling, rulebook, given, withdrawn, footprints }
        };
        let by = |act| (Origin::Person, act);
        let all = decisions(vec![
            (Origin::Test("T01".to_owned()), flag("cloudy", 0..9)),
            by(flag("cloudy", 0..2)),
            by(flag("so2", 1..3)),
            by(judge(Ruling::Accepted, 3..6)),
            by(judge(Ruling::Overruled, 5..7)),
            by(Act::Assess { footprints: set(0..9) }),
            by(Act::Withdraw { flag: "cloudy".to_owned(), footprints: set(0..1), bands: None }),
        ]);
        let mut stands = vec![true; all.len()];
        let words = |stands: &[bool], flags: &[&str]| persons_words(8, &all, stands, flags);
        let (yes, no, accepted) = (Some(Holds), Some(HoldsNot), Some(Accepted));
        let expected = [no, yes, None, accepted, accepted, no, no, None];
        assert_eq!(words(&stands, &["cloudy"]), expected);
        assert_eq!(words(&stands, &["so2"])[..4], [None, yes, yes, accepted]);
        assert_eq!(words(&stands, &["cloudy", "so2"])[..4], [no, yes, yes, accepted]);
        stands[6] = false;
        assert_eq!(words(&stands, &["cloudy"])[0], yes, "what was taken back counts for nothing");
    }
}
