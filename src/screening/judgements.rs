//! What tests said, lent to expressions: `doubt`, `doubt("cloudy")`, `margin("T01 gross window")`.

use super::combine::Conclusion;
use super::rulebook::Rulebook;
use super::run_tests::TestResult;
use super::screened::{Councils, Screened};
use crate::layers::{Judgement, Judgements, LayerUnit, NameError, Values};

impl Judgements for Screened {
    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError> {
        let all = 0..self.footprints();
        let assessed = |at: usize, value: f64| if self.assessed[at] { value } else { f64::NAN };
        let values = match (judgement, of) {
            (Judgement::Doubt, None) => all.map(|at| assessed(at, self.doubt[at])).collect(),
            (Judgement::Margin, Some(test)) => margins_of(&self.rulebook, &self.tests, test)?,
            (judgement, Some(name)) => {
                let flag = self.flags.iter().find(|flag| flag.flag == name);
                let known = self.flags.iter().map(|flag| flag.flag.as_str());
                let flag = flag.ok_or_else(|| no_flag(name, known))?;
                all.map(|at| of_flag(judgement, flag.conclusions[at])).collect()
            }
            (judgement, None) => return Err(NameError::NotJudged(judgement.word())),
        };
        Ok(Values { values, unit: unit_of(judgement) })
    }
}

/// Missing where no test of the flag speaks.
fn of_flag(judgement: Judgement, conclusion: Conclusion) -> f64 {
    match judgement {
        _ if conclusion.probability.is_nan() => f64::NAN,
        Judgement::Doubt => conclusion.doubt,
        Judgement::Probability => conclusion.probability,
        Judgement::Flag | Judgement::Margin => f64::from(u8::from(conclusion.is_set())),
    }
}

fn margins_of(
    rulebook: &Rulebook,
    results: &[TestResult],
    name: &str,
) -> Result<Vec<f64>, NameError> {
    let tests = rulebook.tests.iter();
    match tests.clone().position(|test| test.name == name) {
        Some(place) => Ok(results[place].margins.clone()),
        None => {
            let known = tests.map(|test| test.name.clone()).collect();
            Err(NameError::Unknown { name: format!("test \"{name}\""), known })
        }
    }
}

fn no_flag<'f>(name: &str, known: impl Iterator<Item = &'f str>) -> NameError {
    let known = known.map(str::to_owned).collect();
    NameError::Unknown { name: format!("flag \"{name}\""), known }
}

/// What the tests of a rulebook have said while others have still to run; asked only about tests that
/// have run, and about flags all of whose tests have.
pub struct SoFar<'s> {
    /// The rulebook.
    pub rulebook: &'s Rulebook,
    /// The surface of each footprint.
    pub surfaces: &'s [Option<usize>],
    /// The results, in the order of the rulebook.
    pub tests: &'s [TestResult],
}

impl Judgements for SoFar<'_> {
    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError> {
        let values = match (judgement, of) {
            (_, None) => return Err(NameError::NotJudged(judgement.word())),
            (Judgement::Margin, Some(test)) => margins_of(self.rulebook, self.tests, test)?,
            (judgement, Some(flag)) => {
                let flags = self.rulebook.flags();
                if !flags.contains(&flag) {
                    return Err(no_flag(flag, flags.into_iter()));
                }
                let councils = Councils::of(self.rulebook);
                let conclude = |(at, surface): (usize, &Option<usize>)| {
                    of_flag(judgement, councils.conclude(flag, *surface, at, self.tests))
                };
                self.surfaces.iter().enumerate().map(conclude).collect()
            }
        };
        Ok(Values { values, unit: unit_of(judgement) })
    }
}

fn unit_of(judgement: Judgement) -> LayerUnit {
    if judgement == Judgement::Flag { LayerUnit::Truth } else { LayerUnit::One }
}
