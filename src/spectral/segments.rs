//! Where an axis is continuous: stretches of channels without a gap.

use std::ops::Range;

/// A spacing this many times the usual one around it is a gap. One channel left out makes 2.
const GAP: f64 = 1.8;
/// Spacings on each side that count as "around": few, so that one stretch is not judged by the
/// sampling of the next, and three, so that a second gap close by does not count as usual. With
/// fewer on a side, both sides are taken together.
const WINDOW: usize = 3;

/// Splits ascending wavenumbers into ranges without gaps.
pub fn segments(ascending: &[f64]) -> Vec<Range<usize>> {
    let spacings: Vec<f64> = ascending.windows(2).map(|pair| pair[1] - pair[0]).collect();
    let mut segments = Vec::new();
    let mut begin = 0;
    for position in 0..spacings.len() {
        if is_gap(&spacings, position) {
            segments.push(begin..position + 1);
            begin = position + 1;
        }
    }
    segments.push(begin..ascending.len());
    segments
}

/// Spacings may change slowly along the axis (grating instruments) or in a step (bands of different
/// resolution side by side): so a gap must stand out against both of its sides.
fn is_gap(spacings: &[f64], position: usize) -> bool {
    let before = &spacings[position.saturating_sub(WINDOW)..position];
    let behind = &spacings[position + 1..(position + 1 + WINDOW).min(spacings.len())];
    let usual = match (before.len() == WINDOW, behind.len() == WINDOW) {
        (true, true) => lower_median(before).max(lower_median(behind)),
        (true, false) if behind.is_empty() => lower_median(before),
        (false, true) if before.is_empty() => lower_median(behind),
        _ => usual_spacing(spacings, position),
    };
    spacings[position] > GAP * usual
}

/// The median spacing around `position` of the list of spacings, itself included.
pub fn usual_spacing(spacings: &[f64], position: usize) -> f64 {
    let end = (position + 1 + WINDOW).min(spacings.len());
    lower_median(&spacings[position.saturating_sub(WINDOW)..end])
}

/// Of an even count the lower middle value, because gaps only ever make spacings larger.
fn lower_median(values: &[f64]) -> f64 {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    sorted.get(sorted.len().saturating_sub(1) / 2).copied().unwrap_or(0.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// First place and end of each segment.
    fn ends(axis: &[f64]) -> Vec<(usize, usize)> {
        segments(axis).iter().map(|segment| (segment.start, segment.end)).collect()
    }

    fn of_spacings(spacings: &[f64]) -> Vec<(usize, usize)> {
        let mut axis = vec![650.0];
        for spacing in spacings {
            axis.push(axis[axis.len() - 1] + spacing);
        }
        ends(&axis)
    }

    #[test]
    fn an_even_axis_is_one_segment() {
        assert_eq!(of_spacings(&[0.625; 9]), [(0, 10)]);
        assert_eq!(ends(&[900.0]), [(0, 1)]);
        assert_eq!(ends(&[900.0, 1000.0]), [(0, 2)]);
    }

    #[test]
    fn one_channel_left_out_is_a_gap() {
        assert_eq!(of_spacings(&[1.0, 1.0, 1.0, 2.0, 1.0, 1.0, 1.0]), [(0, 4), (4, 8)]);
    }

    #[test]
    fn a_slow_change_of_spacing_is_no_gap() {
        // A grating of constant resolving power 1200, sampled twice per width, 650 to 2665 cm-1.
        let mut axis = vec![650.0];
        while axis[axis.len() - 1] < 2665.0 {
            axis.push(axis[axis.len() - 1] * (1.0 + 1.0 / 2400.0));
        }
        assert_eq!(ends(&axis), [(0, axis.len())]);
    }

    #[test]
    fn a_step_in_spacing_is_no_gap() {
        let mut spacings = vec![0.625; 20];
        spacings.extend([2.5; 20]);
        assert_eq!(of_spacings(&spacings), [(0, 41)]);
    }

    #[test]
    fn three_bands_of_different_spacing() {
        let mut spacings = vec![0.625; 20];
        spacings.push(112.5);
        spacings.extend([1.25; 20]);
        spacings.push(402.5);
        spacings.extend([2.5; 20]);
        assert_eq!(of_spacings(&spacings), [(0, 21), (21, 42), (42, 63)]);
    }

    #[test]
    fn short_stretches_beside_others_stay_whole() {
        assert_eq!(of_spacings(&[1.0, 1.0, 1.0, 247.0, 2.0, 2.0, 2.0]), [(0, 4), (4, 8)]);
        assert_eq!(of_spacings(&[2.0, 2.0, 2.0, 247.0, 1.0, 1.0, 1.0]), [(0, 4), (4, 8)]);
    }

    #[test]
    fn gaps_close_to_each_other_are_seen() {
        assert_eq!(
            of_spacings(&[1.0, 1.0, 1.0, 2.0, 1.0, 2.0, 1.0, 1.0]),
            [(0, 4), (4, 6), (6, 9)]
        );
    }

    #[test]
    fn islands_stand_alone() {
        assert_eq!(of_spacings(&[1.0, 1.0, 50.0, 50.0, 1.0, 1.0]), [(0, 3), (3, 4), (4, 7)]);
        assert_eq!(of_spacings(&[1.0, 1.0, 1.0, 1.0, 50.0, 50.0]), [(0, 5), (5, 6), (6, 7)]);
    }
}
