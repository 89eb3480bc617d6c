//! What a rulebook says.

use std::collections::BTreeMap;

use super::health::HealthLimits;
use super::threshold::{Sense, Threshold};
use crate::layers::Expression;

/// Screening tests with what they are made of. Read by [`Rulebook::parse`].
#[derive(Debug, Clone)]
pub struct Rulebook {
    /// Names its decisions in ledgers.
    pub name: String,
    /// One line about it.
    pub title: String,
    /// What a user should know.
    pub note: String,
    /// How `start` and `weights` were come by.
    pub calibration: String,
    /// Footprints are doubtful from this doubt on, 0 to 1.
    pub doubt_cut: f64,
    /// Flags that must have been tested before a footprint without a flag counts as assessed.
    pub assess: Vec<String>,
    /// Names that stand for expressions.
    pub definitions: Vec<Definition>,
    /// What tests see.
    pub families: Vec<Family>,
    /// Kinds of ground; a footprint takes the first that holds there.
    pub surfaces: Vec<Surface>,
    /// The tests.
    pub tests: Vec<Test>,
    /// Limits of instrument health and of unusual spectra.
    pub health: HealthLimits,
    /// Names the text: the beginning of its BLAKE3 hash.
    pub fingerprint: String,
    /// The definitions as expressions find them.
    pub(super) by_name: BTreeMap<String, Expression>,
}

/// A name that stands for an expression.
#[derive(Debug, Clone)]
pub struct Definition {
    /// The name.
    pub name: String,
    /// What it stands for.
    pub expression: Expression,
    /// Its unit, as written.
    pub unit: String,
    /// The range in which it usually lies.
    pub usual: Option<(f64, f64)>,
    /// What it shows.
    pub shows: String,
    /// When it misleads.
    pub fails: String,
    /// Where it comes from.
    pub source: String,
}

/// Tests that see the same thing, and so speak with one voice.
#[derive(Debug, Clone)]
pub struct Family {
    /// Its name.
    pub name: String,
    /// What its tests see.
    pub sees: String,
    /// Whether it counts only where it speaks, for it rests on what few files have: its silence is no
    /// loss of coverage.
    pub optional: bool,
}

/// A kind of ground with its own starting points and weights.
#[derive(Debug, Clone)]
pub struct Surface {
    /// Its name.
    pub name: String,
    /// Where it is: the first of these that the file allows; everywhere else where there is none.
    pub places: Vec<Expression>,
    /// Whether it stands for ground of which nothing is known: what is lost against the ground that is
    /// known best counts as silent.
    pub unknown: bool,
    /// What a user should know.
    pub note: String,
    /// Log-odds to start from, by flag; 0 where none is given.
    pub start: BTreeMap<String, f64>,
    /// Weights by flag, then family; 1 where none is given.
    pub weights: BTreeMap<String, BTreeMap<String, f64>>,
}

impl Surface {
    /// Log-odds of a flag before any test has spoken.
    pub fn start_of(&self, flag: &str) -> f64 {
        self.start.get(flag).copied().unwrap_or(0.0)
    }

    /// Weight of a family's voice about a flag.
    pub fn weight_of(&self, flag: &str, family: &str) -> f64 {
        self.weights.get(flag).and_then(|weights| weights.get(family)).copied().unwrap_or(1.0)
    }
}

/// One test.
#[derive(Debug, Clone)]
pub struct Test {
    /// Its name.
    pub name: String,
    /// The family that it belongs to.
    pub family: String,
    /// The flag that it speaks about.
    pub flag: String,
    /// Surfaces on which it is used, by place in [`Rulebook::surfaces`].
    pub surfaces: Vec<usize>,
    /// Where it applies; everywhere where this is `None`.
    pub when: Option<Expression>,
    /// Where it speaks with half its voice.
    pub halved_when: Option<Expression>,
    /// Factor on its voice where it speaks against the flag, 0 to 1.
    pub against: f64,
    /// The test itself, then substitutes for files that lack its channels.
    pub ways: Vec<Way>,
}

/// One way to do a test.
#[derive(Debug, Clone)]
pub struct Way {
    /// What is looked at.
    pub expression: Expression,
    /// On which side of the threshold the flag lies.
    pub sense: Sense,
    /// The limit.
    pub threshold: Threshold,
    /// How far from the threshold the margin is 1, in the expression's unit.
    pub softness: f64,
    /// Where it is published.
    pub source: String,
    /// What a user should know.
    pub note: String,
}

impl Test {
    /// Every expression of the test: guards, values, what thresholds are worked out from.
    pub fn expressions(&self) -> Vec<&Expression> {
        let mut all: Vec<&Expression> = self.when.iter().chain(&self.halved_when).collect();
        for way in &self.ways {
            all.push(&way.expression);
            all.extend(way.threshold.expressions());
        }
        all
    }
}

impl Rulebook {
    /// The flags that its tests speak about, in the order of the tests.
    pub fn flags(&self) -> Vec<&str> {
        let mut flags: Vec<&str> = Vec::new();
        for test in &self.tests {
            if !flags.contains(&test.flag.as_str()) {
                flags.push(&test.flag);
            }
        }
        flags
    }
}
