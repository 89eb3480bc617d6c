//! The state of the Spread.

use std::borrow::Cow;
use std::collections::BTreeMap;
use std::sync::Arc;

use crate::review::{Measure, Measured};
use crate::screening::{Screened, Sense, Threshold, Way, proposed_threshold, usual_range};
use crate::ui::bench::Bench;

/// Whose values the Spread shows.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Source {
    /// The layer on show.
    #[default]
    Layer,
    /// A test of the rulebook, by its place.
    Test(usize),
    /// How far the spectra are from one of them.
    Alike,
}

/// How far the spectra of a granule are from one of them.
#[derive(Debug, Clone)]
pub struct Alike {
    /// The one.
    pub footprint: usize,
    /// All spectra of the granule, as they are compared.
    pub measured: Arc<Measured>,
    /// How far each is from it.
    pub values: Vec<f64>,
    /// The same in other granules, by their entries in the Tray, as far as they were compared.
    pub elsewhere: BTreeMap<usize, Vec<f64>>,
}

impl Alike {
    /// Of compared spectra, how far they are from one of them.
    ///
    /// # Errors
    /// Too much of that one is missing.
    pub fn of(measured: Arc<Measured>, footprint: usize) -> Result<Alike, String> {
        let here = measured.of(footprint);
        if measured.yardstick().far(here, here).is_nan() {
            return Err("too little of this spectrum is there to compare it".to_owned());
        }
        let values = measured.far_from(here);
        Ok(Alike { footprint, measured, values, elsewhere: BTreeMap::new() })
    }

    /// By what they were compared.
    pub fn measure(&self) -> Measure {
        self.measured.yardstick().measure()
    }
}

/// How far one goes from a spectrum to those that are like it.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Reach {
    /// To those that hang together with it.
    #[default]
    Grown,
    /// Anywhere in the granule.
    Here,
    /// Anywhere in the granules of the Tray.
    Tray,
}

/// The Spread of a granule.
#[derive(Debug, Clone, Default)]
pub struct Spread {
    /// Whose values it shows.
    pub source: Source,
    /// How far the spectra are from one of them, once that was asked for.
    pub alike: Option<Alike>,
    /// How far from that one those that are meant may lie.
    pub reach: Reach,
    /// A second layer, which goes upwards.
    pub against: Option<Against>,
    /// The threshold, or the place across that the keys move.
    pub x: Option<f64>,
    /// The place upwards that the keys move.
    pub y: Option<f64>,
    /// Footprints above the threshold are meant, else those below.
    pub above: bool,
}

/// A second layer.
#[derive(Debug, Clone)]
pub struct Against {
    /// The expression.
    pub text: String,
    /// One value per footprint.
    pub values: Vec<f64>,
    /// The unit's label.
    pub unit: String,
}

impl Bench {
    /// The values that the Spread shows; those of a test with a threshold of its own for each
    /// footprint are the differences from it.
    pub fn spread_values(&self) -> Cow<'_, [f64]> {
        if let Some(alike) = self.spread_alike() {
            return Cow::Borrowed(&alike.values);
        }
        let Some((screened, place, way)) = self.spread_test() else {
            return Cow::Borrowed(&self.layer.values);
        };
        let test = &screened.tests[place];
        let is_number = matches!(way.threshold, Threshold::Number(_));
        let all = test.values.iter().zip(&test.thresholds).zip(&test.margins);
        let value = |((value, threshold), margin): ((&f64, &f64), &f64)| match margin.is_nan() {
            true => f64::NAN,
            false if is_number => *value,
            false => value - threshold,
        };
        Cow::Owned(all.map(value).collect())
    }

    /// The test in hand and the way in which the file allows it.
    pub fn spread_test(&self) -> Option<(&Screened, usize, &Way)> {
        let Source::Test(place) = self.spread.source else { return None };
        let screened = self.tests.screened.as_deref()?;
        let way = screened.tests.get(place)?.way?;
        Some((screened, place, screened.rulebook.tests.get(place)?.ways.get(way)?))
    }

    /// The spectra's distances from one of them, while they are on show.
    pub fn spread_alike(&self) -> Option<&Alike> {
        self.spread.alike.as_ref().filter(|_| self.spread.source == Source::Alike)
    }

    /// What the values are, in words.
    pub fn spread_name(&self) -> String {
        if let Some(alike) = self.spread_alike() {
            let place = self.position_words(alike.footprint);
            return format!("{} from {place}", alike.measure().words());
        }
        match self.spread_test() {
            None => self.layer.text.clone(),
            Some((screened, place, way)) => {
                let name = &screened.rulebook.tests[place].name;
                match way.threshold {
                    Threshold::Number(_) => format!("{name}: {}", way.expression.text()),
                    _ => format!("{name}: {} less its threshold", way.expression.text()),
                }
            }
        }
    }

    /// The unit of the values.
    pub fn spread_unit(&self) -> &str {
        match self.spread_alike() {
            Some(alike) => alike.measure().unit(),
            None if self.spread_test().is_some() => "",
            None => &self.layer.unit,
        }
    }

    /// From where to where the values go, and the threshold too.
    pub fn spread_range(&self, values: &[f64]) -> Option<(f64, f64)> {
        let (low, mut high) = usual_range(values)?;
        if self.spread_alike().is_some() {
            // What is not alike at all is of no interest: finer steps are.
            let far = proposed_threshold(values).unwrap_or(high);
            high = high.min(far.max(2.0 * self.spread.x.unwrap_or(0.0)));
        }
        match self.spread.x {
            Some(x) if x.is_finite() => Some((low.min(x), high.max(x))),
            _ => Some((low, high)),
        }
    }

    /// Which side of the threshold is meant.
    pub fn spread_sense(&self) -> Sense {
        if self.spread.above { Sense::Above } else { Sense::Below }
    }

    /// Lets go of what was drawn on values that are not on show any more.
    pub fn forget_spread(&mut self) {
        self.selecting.drop_spread_shape();
        self.spread.x = None;
        self.spread.y = None;
    }

    /// The layer on show makes room for another.
    pub fn layer_leaves(&mut self) {
        self.set_side(None);
        if self.spread.source == Source::Layer {
            self.forget_spread();
        }
    }
}
