//! One channel's departure from what was calculated, without the bias between them.

use super::bias::Bias;
use super::scene::{Classes, Window};
use crate::granule::Channel;
use crate::layers::{Expression, Input, LayerUnit, Names, Retrieval, Retrieved};

/// The window that tells which footprints are clear, cm-1.
const WINDOW: f64 = 900.3;

/// What every retrieval of this kind takes, and where among the inputs.
pub const OBSERVED: usize = 0;
pub const LAND: usize = 2;
pub const ZENITH: usize = 3;
pub const COMMON: usize = 4;

/// `departure(nu)` and `departure_bias(nu)`.
#[derive(Debug, Default)]
pub struct Departures;

impl Departures {
    /// Departures are the same for every granule, so one is enough.
    pub fn shared() -> &'static Departures {
        &Departures
    }
}

/// The inputs that tell which footprints are clear.
pub fn common_inputs() -> Vec<Input> {
    let (observed, calculated) = (format!("bt({WINDOW})"), format!("bt_clear({WINDOW})"));
    let texts = [
        (observed, true),
        (calculated, true),
        ("land".to_owned(), false),
        ("view_zenith".to_owned(), false),
    ];
    texts.into_iter().filter_map(|(text, needed)| input(&text, needed)).collect()
}

/// What was observed and what was calculated for a channel.
pub fn pair_of(channel: &Channel) -> impl Iterator<Item = Input> {
    let at = channel.wavenumber;
    [format!("bt({at})"), format!("bt_clear({at})")]
        .into_iter()
        .filter_map(|text| input(&text, true))
}

fn input(text: &str, needed: bool) -> Option<Input> {
    Some(Input { layer: Expression::parse(text).ok()?, needed })
}

/// Observed minus calculated, K.
pub fn difference(inputs: &[Option<&[f64]>], observed: usize) -> Vec<f64> {
    let column = |place: usize| inputs.get(place).copied().flatten().unwrap_or_default();
    let pairs = column(observed).iter().zip(column(observed + 1));
    pairs.map(|(observed, calculated)| observed - calculated).collect()
}

/// Detectors and view angles, and which footprints are taken for clear.
pub fn scene(names: &dyn Names, inputs: &[Option<&[f64]>]) -> (Classes, Vec<usize>) {
    let lent = |place: usize| inputs.get(place).copied().flatten();
    let classes = Classes::of(names.cluster(), lent(ZENITH), names.footprints());
    let window = Window {
        departures: difference(inputs, OBSERVED),
        lines: names.lengths().first().copied().unwrap_or(0),
        detectors: classes.detectors(),
        land: lent(LAND),
    };
    (classes, window.clear())
}

impl Retrieval for Departures {
    fn outputs(&self) -> &[(&'static str, LayerUnit)] {
        &[]
    }

    fn functions(&self) -> &[(&'static str, LayerUnit)] {
        &[
            ("departure", LayerUnit::KelvinDifference),
            ("departure_bias", LayerUnit::KelvinDifference),
        ]
    }

    fn inputs(&self, _: &dyn Names, channel: Option<&Channel>) -> Vec<Input> {
        common_inputs().into_iter().chain(channel.into_iter().flat_map(pair_of)).collect()
    }

    fn run(&self, names: &dyn Names, inputs: &[Option<&[f64]>], _: Option<&Channel>) -> Retrieved {
        let (classes, clear) = scene(names, inputs);
        let departures = difference(inputs, COMMON);
        let bias = Bias::of(&departures, &clear, &classes);
        let bias: Vec<f64> = (0..departures.len()).map(|at| bias.at(at, &classes)).collect();
        let left = departures.iter().zip(&bias).map(|(departure, bias)| departure - bias).collect();
        Retrieved { columns: vec![left, bias], notes: classes.words(&clear) }
    }
}
