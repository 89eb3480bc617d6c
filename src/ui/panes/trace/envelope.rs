//! What a spectrum covers in each column of the screen: the lowest and the highest value of all its
//! channels there and of the lines between them, so that no line is lost at any width.

use super::Segment;

/// The values covered in one column, lowest and highest; the lowest is above the highest where
/// nothing is.
pub(super) type Span = (f64, f64);

const NOTHING: Span = (f64::INFINITY, f64::NEG_INFINITY);

/// The spans of one unbroken run of channels over so many columns from the first wavenumber of a
/// range to the last. Missing values break the line; a channel alone among missing ones is a dot.
pub(super) fn envelope(segment: &Segment<'_>, range: (f64, f64), columns: usize) -> Vec<Span> {
    let mut spans = vec![NOTHING; columns];
    let width = range.1 - range.0;
    if !(width > 0.0 && width.is_finite()) {
        return spans;
    }
    let mut previous: Option<(f64, f64)> = None;
    for (wavenumber, value) in segment.wavenumbers.iter().zip(segment.values) {
        let x = (wavenumber - range.0) / width * columns as f64;
        if !(x.is_finite() && value.is_finite()) {
            previous = None;
            continue;
        }
        let here = (x, *value);
        cover_line(&mut spans, previous.unwrap_or(here), here);
        previous = Some(here);
    }
    spans
}

/// Covers a straight line between two points (column, value), whichever is to the left.
fn cover_line(spans: &mut [Span], one: (f64, f64), other: (f64, f64)) {
    let (left, right) = if one.0 <= other.0 { (one, other) } else { (other, one) };
    let end = spans.len() as f64;
    // The end of the range belongs to the last column.
    if right.0 < 0.0 || left.0 > end || spans.is_empty() {
        return;
    }
    let column = |x: f64| (x.max(0.0) as usize).min(spans.len() - 1);
    let (first, last) = (column(left.0), column(right.0));
    let at = |x: f64| {
        let share = (x - left.0) / (right.0 - left.0);
        left.1 + (right.1 - left.1) * share.clamp(0.0, 1.0)
    };
    for (index, span) in spans.iter_mut().enumerate().take(last + 1).skip(first) {
        let enter = if left.0 >= index as f64 { left.1 } else { at(index as f64) };
        let edge = (index + 1) as f64;
        let leave = if right.0 <= edge { right.1 } else { at(edge) };
        span.0 = span.0.min(enter).min(leave);
        span.1 = span.1.max(enter).max(leave);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn of(wavenumbers: &[f64], values: &[f64], range: (f64, f64), columns: usize) -> Vec<Span> {
        envelope(&Segment { wavenumbers, values }, range, columns)
    }

    #[test]
    fn every_column_keeps_the_extremes_of_its_channels() {
        let spans = of(&[0.1, 0.2, 0.3, 1.5], &[5.0, 9.0, 1.0, 1.0], (0.0, 2.0), 2);
        assert_eq!(spans, [(1.0, 9.0), (1.0, 1.0)]);
    }

    #[test]
    fn a_sloping_line_goes_on_from_column_to_column() {
        let spans = of(&[0.0, 4.0], &[0.0, 4.0], (0.0, 4.0), 4);
        assert_eq!(spans, [(0.0, 1.0), (1.0, 2.0), (2.0, 3.0), (3.0, 4.0)]);
        let falling = of(&[4.0, 0.0], &[4.0, 0.0], (0.0, 4.0), 4);
        assert_eq!(falling, spans, "the order of the axis does not matter");
    }

    #[test]
    fn a_missing_value_leaves_a_gap_and_a_lone_channel_is_a_dot() {
        let spans = of(&[0.5, 1.5, 2.5, 3.5], &[1.0, f64::NAN, 3.0, f64::NAN], (0.0, 4.0), 4);
        assert_eq!(spans, [(1.0, 1.0), NOTHING, (3.0, 3.0), NOTHING]);
    }

    #[test]
    fn a_line_from_outside_enters_at_the_right_height() {
        let spans = of(&[-2.0, 2.0], &[0.0, 4.0], (0.0, 2.0), 2);
        assert_eq!(spans, [(2.0, 3.0), (3.0, 4.0)]);
    }

    proptest! {
        #[test]
        fn a_spike_of_one_channel_is_kept_at_any_width(
            columns in 1usize..300, spike in 0usize..2000, count in 1usize..2000,
        ) {
            let spike = spike % count;
            let wavenumbers: Vec<f64> = (0..count).map(|i| 600.0 + i as f64).collect();
            let mut values = vec![250.0; count];
            values[spike] = 333.0;
            let range = (600.0, 600.0 + count as f64 - 0.5);
            let spans = of(&wavenumbers, &values, range, columns);
            let highest = spans.iter().map(|span| span.1).fold(f64::NEG_INFINITY, f64::max);
            prop_assert_eq!(highest, 333.0);
        }

        #[test]
        fn nothing_outside_the_values_is_covered(
            points in prop::collection::vec((any::<f64>(), -9f64..9.0), 0..30),
            low in -1e3f64..1e3, width: f64, columns in 0usize..100,
        ) {
            let (wavenumbers, values): (Vec<f64>, Vec<f64>) = points.into_iter().unzip();
            for span in of(&wavenumbers, &values, (low, low + width), columns) {
                prop_assert!(span == NOTHING || (-9.0 <= span.0 && span.0 <= span.1 && span.1 <= 9.0));
            }
        }
    }
}
