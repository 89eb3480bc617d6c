//! From a value to a level of the colour map.

use super::Palette;
use super::tables::LEVELS;

/// The range of values that a colour map spans.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Scale {
    /// The map.
    pub palette: Palette,
    /// The value at the map's lower end.
    pub low: f64,
    /// The value at the map's upper end.
    pub high: f64,
}

impl Scale {
    /// The level (0 to 31) of a value; values outside the range take the end's. `None` for NaN.
    /// A range without width puts everything in the middle.
    pub fn level(&self, value: f64) -> Option<u8> {
        if value.is_nan() {
            return None;
        }
        let width = self.high - self.low;
        if !(width > 0.0 && width.is_finite()) {
            return Some((LEVELS / 2) as u8);
        }
        let share = ((value - self.low) / width).clamp(0.0, 1.0);
        // The conversion saturates, so that a share of exactly 1 falls into the last level.
        Some(((share * LEVELS as f64) as u8).min(LEVELS as u8 - 1))
    }

    /// The level at a place of a legend bar, 0 (lower end) to 1 (upper end).
    pub fn level_at(share: f64) -> u8 {
        ((share.clamp(0.0, 1.0) * LEVELS as f64) as u8).min(LEVELS as u8 - 1)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn ends_and_middle() {
        let scale = Scale { palette: Palette::Viridis, low: 200.0, high: 300.0 };
        assert_eq!(scale.level(200.0), Some(0));
        assert_eq!(scale.level(250.0), Some(16));
        assert_eq!(scale.level(300.0), Some(31));
        assert_eq!(scale.level(f64::INFINITY), Some(31));
        assert_eq!(scale.level(f64::NAN), None);
    }

    proptest! {
        #[test]
        fn levels_rise_with_values(low in -1e3f64..1e3, width in 1e-3f64..1e3, a: f64, b: f64) {
            let scale = Scale { palette: Palette::Viridis, low, high: low + width };
            if let (Some(a_level), Some(b_level)) = (scale.level(a), scale.level(b)) {
                prop_assert!(a_level < 32 && b_level < 32);
                prop_assert!(a > b || a_level <= b_level);
            }
        }

        #[test]
        fn any_range_is_survived(low: f64, high: f64, value: f64) {
            let scale = Scale { palette: Palette::Vik, low, high };
            prop_assert_eq!(scale.level(value).is_none(), value.is_nan());
        }
    }
}
