//! The order in which tests run: those that ask what others said come after them.

use std::collections::{BTreeMap, BTreeSet};

use super::rulebook::Test;
use crate::layers::{Expression, Judgement};

/// What an expression asks of tests, straight or through definitions.
pub fn asked<'e>(
    expression: &'e Expression,
    by_name: &'e BTreeMap<String, Expression>,
) -> BTreeSet<(Judgement, Option<&'e str>)> {
    let mut asked = BTreeSet::new();
    let mut seen: BTreeSet<&str> = BTreeSet::new();
    let mut left = vec![expression];
    while let Some(expression) = left.pop() {
        asked.extend(expression.judgements());
        for name in expression.names() {
            if let Some(definition) = by_name.get(name).filter(|_| seen.insert(name)) {
                left.push(definition);
            }
        }
    }
    asked
}

/// The tests that a test must come after, by place.
fn before(test: &Test, tests: &[&Test], by_name: &BTreeMap<String, Expression>) -> BTreeSet<usize> {
    let asked = test.expressions().into_iter().flat_map(|expression| asked(expression, by_name));
    let of = |(judgement, of): (Judgement, Option<&str>)| -> Vec<usize> {
        let is_meant = |other: &Test| match (judgement, of) {
            // The doubt about a footprint follows from all tests.
            (_, None) => true,
            (Judgement::Margin, Some(name)) => other.name == name,
            (_, Some(flag)) => other.flag == flag,
        };
        (0..tests.len()).filter(|place| is_meant(tests[*place])).collect()
    };
    asked.flat_map(of).collect()
}

/// Places of tests in stages, each of which asks nothing but of the stages before it.
///
/// # Errors
/// Tests that lead back to themselves, or ask one that does, by place.
pub fn stages(
    tests: &[&Test],
    by_name: &BTreeMap<String, Expression>,
) -> Result<Vec<Vec<usize>>, Vec<usize>> {
    let needs: Vec<BTreeSet<usize>> =
        tests.iter().map(|test| before(test, tests, by_name)).collect();
    let mut done: BTreeSet<usize> = BTreeSet::new();
    let mut stages = Vec::new();
    while done.len() < tests.len() {
        let ready = |place: &usize| !done.contains(place) && needs[*place].is_subset(&done);
        let stage: Vec<usize> = (0..tests.len()).filter(ready).collect();
        if stage.is_empty() {
            return Err((0..tests.len()).filter(|place| !done.contains(place)).collect());
        }
        done.extend(&stage);
        stages.push(stage);
    }
    Ok(stages)
}
