//! The tests' decisions, written into the ledger as the tests', never as a person's.

use std::collections::{BTreeMap, BTreeSet};

use jiff::Timestamp;

use super::rulebook_of::name_of;
use super::spectra_decide::spectra_acts;
use super::{Producer, Record, Refusal};
use crate::flags::{
    Act, DOUBTFUL, Decision, DecisionId, FootprintSet, Origin, PRODUCER, SCREENED_BY, Scope,
};
use crate::screening::Screened;

/// What was written down.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Recorded {
    /// New decisions.
    pub written: usize,
    /// Decisions of the same rulebook that were taken back.
    pub replaced: usize,
    /// Whether the ledger said all of it already.
    pub unchanged: bool,
    /// Other rulebooks whose decisions stand as well.
    pub others: Vec<String>,
}

/// How what tests say compares with the tests' decisions that stand in the ledgers.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub enum OnRecord {
    /// No test's decision stands.
    #[default]
    Nothing,
    /// The ledgers hold just this.
    Same,
    /// They hold another outcome of the rulebook of this name: "rulebook NAME (fingerprint)".
    Differs(String),
    /// They hold decisions of other rulebooks only, by name.
    Others(String),
}

/// What the tests decide about a granule, each with its reason.
pub fn test_acts(screened: &Screened) -> Vec<(Act, Option<String>)> {
    let all = || 0..screened.footprints();
    let mut acts = Vec::new();
    for flag in &screened.flags {
        let footprints: FootprintSet = all().filter(|at| flag.is_set(*at)).collect();
        let speakers = screened.speakers(flag);
        let words = speakers.iter().map(|(test, count)| format!("{test} ({count})"));
        let why = words.collect::<Vec<_>>().join(", ");
        acts.push((flag_act(&flag.flag, footprints), Some(why)));
    }
    let doubtful: FootprintSet = all().filter(|at| screened.is_doubtful(*at)).collect();
    let why = format!("doubt {} or more", screened.rulebook.doubt_cut);
    acts.push((flag_act(DOUBTFUL, doubtful), Some(why)));
    let assessed = all().filter(|at| screened.assessed[*at]).collect();
    let rulebook = &screened.rulebook;
    let why = format!("{SCREENED_BY}{}", name_of(rulebook));
    acts.push((Act::Assess { footprints: assessed }, Some(why)));
    acts.retain(|(act, _)| act.footprints().is_some_and(|footprints| !footprints.is_empty()));
    let of_set = screened.examined.iter().flat_map(spectra_acts);
    acts.extend(of_set.filter_map(|(act, why)| Some((spared(act, screened)?, why))));
    acts
}

/// Where the tests set a flag of which `counts` is true, by the rulebook or by the spectra as a set, in
/// no band only.
pub fn flagged_by_tests(screened: &Screened, counts: impl Fn(&str) -> bool) -> FootprintSet {
    test_acts(screened).into_iter().fold(FootprintSet::empty(), |all, (act, _)| match act {
        Act::Flag { flag, footprints, bands: None } if counts(&flag) => all.union(&footprints),
        _ => all,
    })
}

/// An act without the footprints that were left out; nothing where none are left.
fn spared(act: Act, screened: &Screened) -> Option<Act> {
    let Act::Flag { flag, footprints, bands } = act else { return Some(act) };
    let left_out = screened.left_out.iter().enumerate().filter(|(_, left_out)| **left_out);
    let footprints = footprints.minus(&left_out.map(|(at, _)| at).collect());
    (!footprints.is_empty()).then_some(Act::Flag { flag, footprints, bands })
}

fn say_the_same(decisions: &[Decision], acts: &[(Act, Option<String>)]) -> bool {
    let same =
        |(old, new): (&Decision, &(Act, Option<String>))| (&old.act, &old.why) == (&new.0, &new.1);
    decisions.len() == acts.len() && decisions.iter().zip(acts).all(same)
}

fn flag_act(flag: &str, footprints: FootprintSet) -> Act {
    Act::Flag { flag: flag.to_owned(), footprints, bands: None }
}

impl Record {
    /// Writes down what the tests say, in place of what the same rulebook said before. Where it
    /// says the same again, nothing is written. A person's word stands whatever the tests say.
    ///
    /// # Errors
    /// A flag that the campaign does not have.
    pub fn tests_decide(
        &mut self,
        screened: &Screened,
        now: Timestamp,
    ) -> Result<Recorded, Refusal> {
        self.knows(&screened.rulebook.flags())?;
        let recorded = self.replace(&screened.rulebook.name, test_acts(screened), now);
        self.fold();
        Ok(recorded)
    }

    /// Writes down whom the producer's quality rejects, in place of what it rejected before: as
    /// decisions of tests that are called `producer: ` and the variable's name.
    ///
    /// # Errors
    /// A flag that the campaign does not have.
    pub fn producer_decides(
        &mut self,
        producer: &Producer,
        now: Timestamp,
    ) -> Result<Recorded, Refusal> {
        let flags: Vec<&str> = producer.rejections.iter().map(|one| one.flag.as_str()).collect();
        self.knows(&flags)?;
        let mut acts: BTreeMap<String, Vec<(Act, Option<String>)>> = BTreeMap::new();
        // A variable that rejects nobody any more takes back what it said; not one that could not be
        // read.
        let is_unread = |name: &String| {
            let variable = name.strip_prefix(PRODUCER);
            variable.is_some_and(|variable| producer.unread.iter().any(|one| one == variable))
        };
        for name in self.producers().into_iter().filter(|name| !is_unread(name)) {
            acts.entry(name).or_default();
        }
        for one in &producer.rejections {
            let act = flag_act(&one.flag, one.footprints.clone());
            let name = format!("{PRODUCER}{}", one.variable);
            acts.entry(name).or_default().push((act, Some(one.why.clone())));
        }
        let mut all = Recorded { unchanged: true, ..Recorded::default() };
        for (name, acts) in acts {
            let recorded = self.replace(&name, acts, now);
            all.written += recorded.written;
            all.replaced += recorded.replaced;
            all.unchanged &= recorded.unchanged;
        }
        if !all.unchanged {
            self.fold();
        }
        Ok(all)
    }

    /// Puts what one test says in place of what it said before; the caller folds.
    fn replace(
        &mut self,
        name: &str,
        acts: Vec<(Act, Option<String>)>,
        now: Timestamp,
    ) -> Recorded {
        let (earlier, others) = self.standing_tests(name);
        let mut recorded = Recorded { others, ..Recorded::default() };
        if say_the_same(&earlier, &acts) {
            recorded.unchanged = true;
            return recorded;
        }
        let ids: Vec<DecisionId> = earlier.into_iter().map(|decision| decision.id).collect();
        recorded.replaced = ids.len();
        recorded.written = acts.len();
        for decision in ids {
            self.decide_as_test(name, Act::Revoke { decision }, None, now);
        }
        for (act, why) in acts {
            self.decide_as_test(name, act, why, now);
        }
        recorded
    }

    /// Compares what tests say with what stands in the ledgers.
    pub fn compare_tests(&self, screened: &Screened) -> OnRecord {
        let (own, others) = self.standing_tests(&screened.rulebook.name);
        match own.last() {
            None if others.is_empty() => OnRecord::Nothing,
            None => OnRecord::Others(others.join(", ")),
            Some(_) if say_the_same(&own, &test_acts(screened)) => OnRecord::Same,
            // The last says which rulebook it was.
            Some(last) => OnRecord::Differs(last.why.clone().unwrap_or_default()),
        }
    }

    /// Whether the campaign has all of the flags.
    ///
    /// # Errors
    /// The first that it does not have.
    pub fn knows(&self, flags: &[&str]) -> Result<(), Refusal> {
        let kinds = self.vocabulary().of_scope(Scope::Footprint);
        let known: Vec<&str> = kinds.iter().map(|kind| kind.name.as_str()).collect();
        match flags.iter().find(|flag| !known.contains(*flag)) {
            None => Ok(()),
            Some(flag) => {
                let (name, known) = ((*flag).to_owned(), known.join(", "));
                Err(Refusal::UnknownFlag { name, known })
            }
        }
    }

    /// The producer's variables whose decisions stand, by the names of their tests.
    fn producers(&self) -> BTreeSet<String> {
        let standing = self.decisions().iter().zip(self.standing());
        let standing = standing
            .filter(|(decision, stands)| **stands && !matches!(decision.act, Act::Revoke { .. }));
        let names = standing.filter_map(|(decision, _)| match &decision.origin {
            Origin::Test(name) if name.starts_with(PRODUCER) => Some(name.clone()),
            _ => None,
        });
        names.collect()
    }

    /// The decisions of one rulebook that stand, in their order, and who else decided as a test.
    fn standing_tests(&self, rulebook: &str) -> (Vec<Decision>, Vec<String>) {
        let (mut own, mut others) = (Vec::new(), Vec::new());
        let standing_ones =
            self.decisions().iter().zip(self.standing()).filter(|(_, stands)| **stands);
        for (decision, _) in standing_ones {
            match &decision.origin {
                Origin::Test(_) if matches!(decision.act, Act::Revoke { .. }) => {}
                Origin::Test(name) if name == rulebook => own.push(decision.clone()),
                Origin::Test(name) if name.starts_with(PRODUCER) => {}
                Origin::Test(name) if !others.contains(name) => others.push(name.clone()),
                _ => {}
            }
        }
        own.sort_by(|one, other| one.order().cmp(&other.order()));
        (own, others)
    }
}
