//! A threshold tried out before it is believed.

use super::threshold::Sense;

/// What a threshold would do.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Tried {
    /// Footprints beyond the threshold.
    pub flagged: usize,
    /// Footprints without a value.
    pub missing: usize,
    /// How fast the number beyond it changes, footprints per unit of the value.
    pub steepness: f64,
    /// How it agrees with what persons have decided.
    pub agreement: Agreement,
}

/// How a threshold agrees with decided footprints.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Agreement {
    /// Flagged by both.
    pub hit: usize,
    /// Flagged by persons alone.
    pub missed: usize,
    /// Flagged by the threshold alone.
    pub false_alarm: usize,
    /// Flagged by neither.
    pub quiet: usize,
}

impl Agreement {
    /// All decided footprints that have a value.
    pub fn decided(&self) -> usize {
        self.hit + self.missed + self.false_alarm + self.quiet
    }
}

/// Tries a threshold on values, one per footprint. `decided` tells whether persons have flagged a
/// footprint; `None` where none has decided. The steepness is taken over `reach` to both sides.
pub fn try_threshold(
    values: &[f64],
    sense: Sense,
    threshold: f64,
    reach: f64,
    decided: impl Fn(usize) -> Option<bool>,
) -> Tried {
    let mut tried = Tried::default();
    let mut near = 0usize;
    for (footprint, value) in values.iter().enumerate() {
        if value.is_nan() {
            tried.missing += 1;
            continue;
        }
        let beyond = sense.margin(*value, threshold, 1.0) > 0.0;
        tried.flagged += usize::from(beyond);
        near += usize::from((value - threshold).abs() <= reach);
        let agreement = &mut tried.agreement;
        match (decided(footprint), beyond) {
            (None, _) => {}
            (Some(true), true) => agreement.hit += 1,
            (Some(true), false) => agreement.missed += 1,
            (Some(false), true) => agreement.false_alarm += 1,
            (Some(false), false) => agreement.quiet += 1,
        }
    }
    tried.steepness = near as f64 / (2.0 * reach);
    tried
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_agreement_and_steepness() {
        let values = [250.0, 260.0, 270.0, 280.0, f64::NAN, 265.5];
        let persons = [Some(true), Some(false), Some(true), Some(false), Some(true), None];
        let tried = try_threshold(&values, Sense::Below, 265.0, 5.0, |at| persons[at]);
        assert_eq!((tried.flagged, tried.missing), (2, 1));
        let agreement = Agreement { hit: 1, missed: 1, false_alarm: 1, quiet: 1 };
        assert_eq!(tried.agreement, agreement);
        assert_eq!(tried.agreement.decided(), 4);
        // 260, 265.5 and 270 lie within five kelvins.
        assert_eq!(tried.steepness, 0.3);
        let turned = try_threshold(&values, Sense::Above, 265.5, 5.0, |_| None);
        assert_eq!(turned.flagged, 2, "a value on the threshold is not beyond it");
    }
}
