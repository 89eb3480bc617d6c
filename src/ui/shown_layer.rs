//! The layer that the Field shows, and how its values become colours.

use super::colour::{Palette, Scale};

/// Which values the colours span.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum RangeChoice {
    /// From one percentile to its counterpart at the other end: 1 stands for 1 to 99.
    Percentile(u8),
    /// As far below zero as above it, reaching the percentile 99 of the sizes.
    AroundZero,
    /// From one value to another, in the layer's unit.
    Fixed(f64, f64),
}

impl RangeChoice {
    /// The percentiles that a key goes round: stray values ignored, all of them, the middle.
    const ROUND: [u8; 3] = [1, 0, 5];

    /// The next one.
    pub fn next(self) -> RangeChoice {
        let place = Self::ROUND.iter().position(|tail| self == RangeChoice::Percentile(*tail));
        match place.map(|place| Self::ROUND.get(place + 1)) {
            Some(Some(tail)) => RangeChoice::Percentile(*tail),
            Some(None) => RangeChoice::AroundZero,
            None => RangeChoice::Percentile(Self::ROUND[0]),
        }
    }

    /// In words, for the status line.
    pub fn words(self) -> String {
        match self {
            RangeChoice::Percentile(0) => "colours span all values".to_owned(),
            RangeChoice::Percentile(tail) => {
                format!("colours span the percentiles {tail} to {}", 100 - tail)
            }
            RangeChoice::AroundZero => "colours lie around zero".to_owned(),
            RangeChoice::Fixed(low, high) => format!("colours span {low} to {high}"),
        }
    }
}

/// The layer on show.
#[derive(Debug, Clone)]
pub struct ShownLayer {
    /// The expression as typed.
    pub text: String,
    /// One value per footprint; empty until the first answer.
    pub values: Vec<f64>,
    /// The bands that they come from.
    pub bands: Vec<usize>,
    /// The unit's label.
    pub unit: String,
    /// Whether it is a difference, coloured around zero.
    pub difference: bool,
    /// What is to be said about the values.
    pub notes: Vec<String>,
    /// Why there are no values, if so.
    pub problem: Option<String>,
    /// Which values the colours span.
    pub range: RangeChoice,
    /// The colours.
    pub scale: Scale,
}

impl ShownLayer {
    /// A layer that has no values yet.
    pub fn waiting(text: &str) -> ShownLayer {
        ShownLayer {
            text: text.to_owned(),
            values: Vec::new(),
            bands: Vec::new(),
            unit: String::new(),
            difference: false,
            notes: Vec::new(),
            problem: None,
            range: RangeChoice::Percentile(1),
            scale: Scale::default(),
        }
    }

    /// Takes new values.
    pub fn fill(&mut self, values: Vec<f64>, unit: &str, difference: bool, notes: Vec<String>) {
        self.values = values;
        self.unit = unit.to_owned();
        self.difference = difference;
        self.notes = notes;
        self.problem = None;
        self.set_range(self.range);
    }

    /// Chooses the colours' range.
    pub fn set_range(&mut self, range: RangeChoice) {
        self.range = range;
        let both_signs = || {
            self.values.iter().any(|value| *value < 0.0)
                && self.values.iter().any(|value| *value > 0.0)
        };
        let diverges = match range {
            RangeChoice::AroundZero => true,
            // A range that is the same to both sides was meant to; the middle of any other is not
            // zero, and colours of a difference would lie.
            RangeChoice::Fixed(low, high) => low == -high,
            _ => self.difference && both_signs(),
        };
        let palette = if diverges { Palette::Vik } else { Palette::default() };
        let (mut low, mut high) = match range {
            RangeChoice::AroundZero => tails(&self.values, 1),
            RangeChoice::Fixed(low, high) => (low, high),
            RangeChoice::Percentile(tail) => tails(&self.values, tail),
        };
        if palette.is_diverging() && !matches!(range, RangeChoice::Fixed(..)) {
            let reach = low.abs().max(high.abs());
            (low, high) = (-reach, reach);
        }
        self.scale = Scale { palette, low, high };
    }

    /// The value at a footprint, if there is one.
    pub fn value(&self, footprint: usize) -> Option<f64> {
        self.values.get(footprint).copied().filter(|value| !value.is_nan())
    }
}

/// The values at a percentile and at its counterpart; 0 and 1 where there are none.
fn tails(values: &[f64], percent: u8) -> (f64, f64) {
    let mut finite: Vec<f64> = values.iter().copied().filter(|value| value.is_finite()).collect();
    let Some(last) = finite.len().checked_sub(1) else { return (0.0, 1.0) };
    let tail = (finite.len() * usize::from(percent) / 100).min(last / 2);
    let low = *finite.select_nth_unstable_by(tail, f64::total_cmp).1;
    let high = *finite.select_nth_unstable_by(last - tail, f64::total_cmp).1;
    (low, high)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn layer(values: Vec<f64>, difference: bool) -> ShownLayer {
        let mut layer = ShownLayer::waiting("test");
        layer.fill(values, "K", difference, Vec::new());
        layer
    }

    #[test]
    fn percentiles_leave_stray_and_missing_values_out() {
        let mut values: Vec<f64> = (0..100).map(f64::from).collect();
        values.extend([f64::NAN, 1e9]);
        let mut layer = layer(values, false);
        assert_eq!((layer.scale.low, layer.scale.high), (1.0, 99.0));
        layer.set_range(layer.range.next());
        assert_eq!((layer.scale.low, layer.scale.high), (0.0, 1e9));
        layer.set_range(layer.range.next());
        assert_eq!((layer.scale.low, layer.scale.high), (5.0, 95.0));
        layer.set_range(layer.range.next());
        assert_eq!((layer.scale.low, layer.scale.high), (-99.0, 99.0), "around zero");
        assert!(layer.scale.palette.is_diverging());
        assert_eq!(layer.range.next(), RangeChoice::Percentile(1));
    }

    #[test]
    fn differences_of_both_signs_are_centred() {
        let centred = layer(vec![-1.0, 0.0, 4.0], true);
        assert_eq!((centred.scale.low, centred.scale.high), (-4.0, 4.0));
        assert!(centred.scale.palette.is_diverging());
        assert!(!layer(vec![0.5, 4.0], true).scale.palette.is_diverging());
        for (low, high) in [(-2.0, 10.0), (-5.0, 5.0)] {
            let mut fixed = layer(vec![-1.0, 0.0, 4.0], true);
            fixed.set_range(RangeChoice::Fixed(low, high));
            assert_eq!((fixed.scale.low, fixed.scale.high), (low, high));
            assert_eq!(fixed.scale.palette.is_diverging(), low == -high, "grey is zero or nothing");
        }
    }

    #[test]
    fn a_layer_without_values_has_a_range() {
        let empty = layer(vec![f64::NAN], false);
        assert_eq!((empty.scale.low, empty.scale.high), (0.0, 1.0));
        assert_eq!(empty.value(0), None);
    }
}
