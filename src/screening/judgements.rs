//! What tests said, lent to expressions: `doubt`, `doubt("cloudy")`, `margin("T01 gross window")`.

use super::screened::{FlagResult, Screened};
use crate::layers::{Judgement, Judgements, LayerUnit, NameError, Values};

impl Judgements for Screened {
    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError> {
        let all = 0..self.footprints();
        let assessed = |at: usize, value: f64| if self.assessed[at] { value } else { f64::NAN };
        let values = match (judgement, of) {
            (Judgement::Doubt, None) => all.map(|at| assessed(at, self.doubt[at])).collect(),
            (Judgement::Margin, Some(test)) => self.margins_of(test)?,
            (judgement, Some(flag)) => {
                let flag = self.flag_named(flag)?;
                all.map(|at| of_flag(judgement, flag, at)).collect()
            }
            (judgement, None) => return Err(NameError::NotJudged(judgement.word())),
        };
        let unit = if judgement == Judgement::Flag { LayerUnit::Truth } else { LayerUnit::One };
        Ok(Values { values, unit })
    }
}

/// Missing where no test of the flag speaks.
fn of_flag(judgement: Judgement, flag: &FlagResult, footprint: usize) -> f64 {
    let conclusion = flag.conclusions[footprint];
    match judgement {
        _ if conclusion.probability.is_nan() => f64::NAN,
        Judgement::Doubt => conclusion.doubt,
        Judgement::Probability => conclusion.probability,
        Judgement::Flag | Judgement::Margin => f64::from(u8::from(flag.is_set(footprint))),
    }
}

impl Screened {
    fn flag_named(&self, name: &str) -> Result<&FlagResult, NameError> {
        self.flags.iter().find(|flag| flag.flag == name).ok_or_else(|| {
            let known = self.flags.iter().map(|flag| flag.flag.clone()).collect();
            NameError::Unknown { name: format!("flag \"{name}\""), known }
        })
    }

    fn margins_of(&self, name: &str) -> Result<Vec<f64>, NameError> {
        let tests = self.rulebook.tests.iter();
        match tests.clone().position(|test| test.name == name) {
            Some(place) => Ok(self.tests[place].margins.clone()),
            None => {
                let known = tests.map(|test| test.name.clone()).collect();
                Err(NameError::Unknown { name: format!("test \"{name}\""), known })
            }
        }
    }
}
