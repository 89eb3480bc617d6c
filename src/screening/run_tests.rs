//! All tests over all footprints: values, thresholds, margins.

use rayon::prelude::*;

use super::judgements::SoFar;
use super::lent_names::LentNames;
use super::order::stages;
use super::rulebook::{Rulebook, Test, Way};
use super::threshold::Threshold;
use super::verdict::Verdict;
use crate::layers::{Expression, Layer, LayerError, Names, evaluate_all};

/// Every expression of the rulebook is evaluated together with the others, once.
type Layers<'l> = Vec<(&'l Expression, Result<Layer, LayerError>)>;

/// What a test gave, footprint by footprint.
#[derive(Debug, Clone)]
pub struct TestResult {
    /// The way of [`Test::ways`] that the file allows; `None` where it allows none.
    pub way: Option<usize>,
    /// Why the file does not allow the test, or not its first way; empty where it does.
    pub lacks: String,
    /// Why the guards can't be decided in this file; empty where they can.
    pub guard_lacks: String,
    /// Values; NaN where missing.
    pub values: Vec<f64>,
    /// Thresholds; NaN where missing.
    pub thresholds: Vec<f64>,
    /// Margins; NaN where the test does not speak.
    pub margins: Vec<f64>,
    /// Whether it speaks with half its voice.
    pub halved: Vec<bool>,
    /// What it says.
    pub verdicts: Vec<Verdict>,
    /// What a reader of the values should know.
    pub notes: Vec<String>,
}

/// Some expressions, each once.
fn once<'e>(all: impl Iterator<Item = &'e Expression>) -> Vec<&'e Expression> {
    let mut once: Vec<&Expression> = Vec::new();
    for expression in all {
        if !once.contains(&expression) {
            once.push(expression);
        }
    }
    once
}

fn layers<'e>(expressions: impl Iterator<Item = &'e Expression>, names: &dyn Names) -> Layers<'e> {
    let expressions = once(expressions);
    let layers = evaluate_all(&expressions, names);
    expressions.into_iter().zip(layers).collect()
}

/// The surface of each footprint, by place in the rulebook, and what each test gave. Tests that ask
/// what others said run after them; the numbers are the same in whatever order they are written.
pub fn run(rulebook: &Rulebook, names: &dyn Names) -> (Vec<Option<usize>>, Vec<TestResult>) {
    let definitions = &rulebook.by_name;
    let tests: Vec<&Test> = rulebook.tests.iter().collect();
    // A rulebook was read only if its tests have an order.
    let stages = stages(&tests, definitions).unwrap_or_default();
    let of_stage = |stage: &[usize]| stage.iter().map(|place| tests[*place]).collect::<Vec<_>>();
    let footprints = names.footprints();
    let first = of_stage(stages.first().map_or(&[], Vec::as_slice));
    let places = rulebook.surfaces.iter().flat_map(|surface| &surface.places);
    let lent = LentNames { names, definitions, judgements: None };
    let together = layers(places.chain(first.iter().flat_map(|test| test.expressions())), &lent);
    let mut surfaces = surfaces(rulebook, &together, footprints);
    // Without a surface no test speaks.
    for (at, surface) in surfaces.iter_mut().enumerate() {
        *surface = surface.filter(|_| !names.is_left_out(at));
    }
    let mut results: Vec<TestResult> = vec![TestResult::silent(footprints); tests.len()];
    let keep = |stage: &[usize], layers: &Layers<'_>, results: &mut Vec<TestResult>| {
        let done: Vec<TestResult> =
            stage.par_iter().map(|place| one(tests[*place], &surfaces, layers)).collect();
        for (place, result) in stage.iter().zip(done) {
            results[*place] = result;
        }
    };
    for (number, stage) in stages.iter().enumerate() {
        if number == 0 {
            keep(stage, &together, &mut results);
            continue;
        }
        let own = of_stage(stage);
        let so_far = SoFar { rulebook, surfaces: &surfaces, tests: &results };
        let lent = LentNames { names, definitions, judgements: Some(&so_far) };
        let layers = layers(own.iter().flat_map(|test| test.expressions()), &lent);
        keep(stage, &layers, &mut results);
    }
    (surfaces, results)
}

/// Each footprint takes the first surface that holds; one that can't be decided does not hold.
fn surfaces(rulebook: &Rulebook, layers: &Layers<'_>, footprints: usize) -> Vec<Option<usize>> {
    // What the file allows, in the order of the rulebook; nothing where a surface holds anywhere.
    let holds: Vec<Option<Vec<&[f64]>>> = rulebook
        .surfaces
        .iter()
        .map(|surface| {
            let allowed = surface.places.iter().filter_map(|place| found(layers, place).ok());
            let allowed = allowed.map(|layer| &layer.values[..]);
            (!surface.places.is_empty()).then(|| allowed.collect())
        })
        .collect();
    // At each footprint the first that is not missing there.
    let holds_at = |holds: &Option<Vec<&[f64]>>, footprint: usize| match holds {
        None => true,
        Some(allowed) => {
            let mut values = allowed.iter().map(|values| values[footprint]);
            values.find(|value| !value.is_nan()).is_some_and(is_true)
        }
    };
    (0..footprints).map(|at| holds.iter().position(|holds| holds_at(holds, at))).collect()
}

fn is_true(value: f64) -> bool {
    value != 0.0 && !value.is_nan()
}

fn found<'l>(layers: &'l Layers<'_>, wanted: &Expression) -> Result<&'l Layer, &'l LayerError> {
    // Every expression that is looked for was put there by `expressions`.
    let at = layers.iter().position(|(expression, _)| *expression == wanted).unwrap_or_default();
    layers[at].1.as_ref()
}

/// The layers of the way that the file allows.
struct Chosen<'l> {
    place: usize,
    way: &'l Way,
    value: &'l Layer,
    /// What the threshold is worked out from.
    over: Vec<&'l Layer>,
}

fn choose<'l>(test: &'l Test, layers: &'l Layers<'_>) -> (Option<Chosen<'l>>, String) {
    let mut lacks = String::new();
    for (place, way) in test.ways.iter().enumerate() {
        match layers_of(way, layers) {
            Ok((value, over)) => return (Some(Chosen { place, way, value, over }), lacks),
            Err(error) if lacks.is_empty() => lacks = error.mistake().in_one_line(),
            Err(_) => {}
        }
    }
    (None, lacks)
}

fn layers_of<'l>(
    way: &Way,
    layers: &'l Layers<'_>,
) -> Result<(&'l Layer, Vec<&'l Layer>), &'l LayerError> {
    let value = found(layers, &way.expression)?;
    let over = way.threshold.expressions().iter().map(|over| found(layers, over));
    Ok((value, over.collect::<Result<_, _>>()?))
}

impl Chosen<'_> {
    fn threshold(&self, footprint: usize) -> f64 {
        match &self.way.threshold {
            Threshold::Number(number) => *number,
            Threshold::Expression(_) => self.over[0].values[footprint],
            Threshold::Table(table) => {
                let place: Vec<f64> =
                    self.over.iter().map(|layer| layer.values[footprint]).collect();
                table.value(&place)
            }
        }
    }

    fn is_not_positive(&self, footprint: usize) -> bool {
        let mut layers = std::iter::once(&self.value).chain(&self.over);
        layers.any(|layer| layer.not_positive.binary_search(&footprint).is_ok())
    }
}

fn one(test: &Test, surfaces: &[Option<usize>], layers: &Layers<'_>) -> TestResult {
    let footprints = surfaces.len();
    let (chosen, lacks) = choose(test, layers);
    let guard = test.when.as_ref().map(|when| found(layers, when));
    let halving = test.halved_when.as_ref().and_then(|when| found(layers, when).ok());
    let guard_lacks = match &guard {
        Some(Err(error)) => error.mistake().in_one_line(),
        _ => String::new(),
    };
    let mut result = TestResult {
        way: chosen.as_ref().map(|chosen| chosen.place),
        lacks,
        guard_lacks,
        notes: chosen.as_ref().map_or_else(Vec::new, |chosen| chosen.value.notes.clone()),
        ..TestResult::silent(footprints)
    };
    for (footprint, surface) in surfaces.iter().enumerate() {
        if let Some(chosen) = &chosen {
            result.values[footprint] = chosen.value.values[footprint];
            result.thresholds[footprint] = chosen.threshold(footprint);
        }
        let guard = match &guard {
            None => 1.0,
            Some(Err(_)) => f64::NAN,
            Some(Ok(layer)) => layer.values[footprint],
        };
        let used = surface.is_some_and(|surface| test.surfaces.contains(&surface));
        result.verdicts[footprint] = match &chosen {
            _ if !used => Verdict::OtherSurface,
            None => Verdict::NotInFile,
            Some(_) if guard.is_nan() => Verdict::GuardUnknown,
            Some(_) if guard == 0.0 => Verdict::Guarded,
            Some(chosen) => result.speak(chosen, footprint),
        };
        result.halved[footprint] = halving.is_some_and(|layer| is_true(layer.values[footprint]));
    }
    result
}

impl TestResult {
    /// Of a test that has not run.
    fn silent(footprints: usize) -> TestResult {
        TestResult {
            way: None,
            lacks: String::new(),
            guard_lacks: String::new(),
            values: vec![f64::NAN; footprints],
            thresholds: vec![f64::NAN; footprints],
            margins: vec![f64::NAN; footprints],
            halved: vec![false; footprints],
            verdicts: vec![Verdict::NotInFile; footprints],
            notes: Vec::new(),
        }
    }

    fn speak(&mut self, chosen: &Chosen<'_>, footprint: usize) -> Verdict {
        let (value, threshold) = (self.values[footprint], self.thresholds[footprint]);
        let margin = chosen.way.sense.margin(value, threshold, chosen.way.softness);
        self.margins[footprint] = margin;
        if margin > 0.0 {
            Verdict::For
        } else if margin <= 0.0 {
            Verdict::Against
        } else if chosen.is_not_positive(footprint) {
            Verdict::NotPositive
        } else {
            Verdict::Missing
        }
    }
}
