//! A person's word on what the tests suggest: accepted as it is, or overruled.

use jiff::Timestamp;

use super::rulebook_of::name_of;
use super::tests_decide::flagged_by_tests;
use super::{Record, Refusal};
use crate::flags::{Act, DOUBTFUL, FlagAt, FootprintSet, ReviewState, Ruling};
use crate::screening::Screened;

/// What a ruling came to.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Ruled {
    /// Footprints ruled on.
    pub footprints: usize,
    /// Flags given, with the number of footprints.
    pub given: Vec<(String, usize)>,
    /// Flags withdrawn, `doubtful` apart, with the number of footprints.
    pub withdrawn: Vec<(String, usize)>,
    /// Footprints named that were left as they are: the tests say nothing about them, or a person
    /// had decided them before.
    pub left: usize,
}

/// What a person says of a suggestion.
struct Word {
    ruling: Ruling,
    judged: FootprintSet,
    given: Vec<FlagAt>,
    withdrawn: Vec<FlagAt>,
}

impl Record {
    /// Takes over what the tests suggest: their flags become the person's, and where they suggest
    /// none, none that they could have set stays. Footprints that a person has decided are left
    /// alone, unless all of them are. Footprints that the tests could not assess are left too.
    ///
    /// # Errors
    /// No footprints, none that the tests assessed, or a flag that the campaign does not have.
    pub fn accept(
        &mut self,
        screened: &Screened,
        footprints: &FootprintSet,
        now: Timestamp,
    ) -> Result<Ruled, Refusal> {
        let judged = self.open_ones(screened, footprints)?;
        let given = suggested(screened, &judged);
        let stale = screened.flags.iter().map(|flag| {
            // What the spectra as a set say is suggested, too.
            let said = flagged_by_tests(screened, |name| name == flag.flag);
            let footprints = self.carrying(&flag.flag, &judged).minus(&said);
            FlagAt { flag: flag.flag.clone(), footprints }
        });
        let withdrawn = stale.collect();
        let word = Word { ruling: Ruling::Accepted, judged, given, withdrawn };
        Ok(self.rule(screened, footprints, word, now))
    }

    /// Says that what the tests suggest is not so: the flags that they suggest do not hold.
    ///
    /// # Errors
    /// No footprints, or none with a suggested flag.
    pub fn overrule(
        &mut self,
        screened: &Screened,
        footprints: &FootprintSet,
        now: Timestamp,
    ) -> Result<Ruled, Refusal> {
        let open = self.open_ones(screened, footprints)?;
        let judged: FootprintSet = open.iter().filter(|at| has_suggestion(screened, *at)).collect();
        if judged.is_empty() {
            return Err(Refusal::NothingToOverrule);
        }
        let withdrawn = suggested(screened, &judged);
        let word = Word { ruling: Ruling::Overruled, judged, given: Vec::new(), withdrawn };
        Ok(self.rule(screened, footprints, word, now))
    }

    /// Of the footprints that the tests assessed, those that no person decided, or all of them
    /// where a person has decided every one.
    fn open_ones(
        &self,
        screened: &Screened,
        footprints: &FootprintSet,
    ) -> Result<FootprintSet, Refusal> {
        self.knows(&screened.rulebook.flags())?;
        if footprints.is_empty() {
            return Err(Refusal::NoFootprints);
        }
        let footprints = footprints.clipped(screened.footprints());
        let assessed: FootprintSet =
            footprints.iter().filter(|at| screened.assessed[*at]).collect();
        if assessed.is_empty() {
            return Err(Refusal::NothingSuggested);
        }
        let review = &self.state().review;
        let decided = |at: usize| review.get(at) == Some(&ReviewState::DecidedByPerson);
        let open: FootprintSet = assessed.iter().filter(|at| !decided(*at)).collect();
        Ok(if open.is_empty() { assessed } else { open })
    }

    fn carrying(&self, flag: &str, footprints: &FootprintSet) -> FootprintSet {
        let mask = self.vocabulary().by_name(flag).map_or(0, crate::flags::FlagKind::mask);
        footprints.iter().filter(|at| self.state().any_flags(*at) & mask != 0).collect()
    }

    fn rule(
        &mut self,
        screened: &Screened,
        asked: &FootprintSet,
        word: Word,
        now: Timestamp,
    ) -> Ruled {
        let Word { ruling, judged, mut given, mut withdrawn } = word;
        given.retain(|part| !part.footprints.is_empty());
        withdrawn.retain(|part| !part.footprints.is_empty());
        let counted = |parts: &[FlagAt]| {
            parts.iter().map(|part| (part.flag.clone(), part.footprints.len())).collect()
        };
        let ruled = Ruled {
            footprints: judged.len(),
            given: counted(&given),
            withdrawn: counted(&withdrawn),
            left: asked.len().saturating_sub(judged.len()),
        };
        // A person has settled it: nothing is left in doubt.
        let settled = self.carrying(DOUBTFUL, &judged);
        if !settled.is_empty() {
            withdrawn.push(FlagAt { flag: DOUBTFUL.to_owned(), footprints: settled });
        }
        let why = speakers(screened, &judged);
        let rulebook = name_of(&screened.rulebook);
        let act = Act::Judge { ruling, rulebook, given, withdrawn, footprints: judged };
        self.decide(act, why, now);
        ruled
    }
}

/// Whether the tests suggest a flag at a footprint.
pub fn has_suggestion(screened: &Screened, footprint: usize) -> bool {
    screened.flags.iter().any(|flag| flag.is_set(footprint))
}

/// The flags that the tests suggest, and where.
fn suggested(screened: &Screened, footprints: &FootprintSet) -> Vec<FlagAt> {
    let flags = screened.flags.iter();
    let parts = flags.map(|flag| FlagAt {
        flag: flag.flag.clone(),
        footprints: footprints.iter().filter(|at| flag.is_set(*at)).collect(),
    });
    parts.collect()
}

/// The tests that speak for a suggested flag, with the number of footprints: the suggestion's
/// reason, whatever the person made of it.
fn speakers(screened: &Screened, footprints: &FootprintSet) -> Option<String> {
    let tests = screened.rulebook.tests.iter().zip(&screened.tests);
    let words: Vec<String> = tests
        .filter_map(|(test, result)| {
            let flag = screened.flags.iter().find(|flag| flag.flag == test.flag)?;
            let speaks = |at: &usize| flag.is_set(*at) && result.margins[*at] > 0.0;
            let count = footprints.iter().filter(speaks).count();
            (count > 0).then(|| format!("{} ({count})", test.name))
        })
        .collect();
    (!words.is_empty()).then(|| words.join(", "))
}
