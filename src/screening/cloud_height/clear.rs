//! Clear footprints of the granule itself, and what is clear around each footprint.

/// Clear footprints are looked for as far away as this, in footprints of a cluster's own spacing.
const REACH: f64 = 11.0;
/// Fewer clear footprints than this say nothing.
const FEWEST: f64 = 4.0;

/// How footprints lie: scan lines, positions, detectors at each.
#[derive(Debug, Clone, Copy)]
pub struct Layout {
    /// Scan lines.
    pub lines: usize,
    /// Positions in a line.
    pub positions: usize,
    /// Detectors at a position.
    pub detectors: usize,
}

impl Layout {
    /// From the lengths of the footprint dimensions.
    pub fn of(lengths: &[usize]) -> Layout {
        Layout {
            lines: lengths.first().copied().unwrap_or(0),
            positions: lengths.get(1).copied().unwrap_or(1),
            detectors: lengths.iter().skip(2).product(),
        }
    }

    fn places(&self) -> usize {
        self.lines * self.positions
    }

    /// Places that lie within reach in each direction; detectors stand closer together than
    /// positions by the square root of their number.
    fn reach(&self) -> usize {
        (REACH / (self.detectors as f64).sqrt()).ceil() as usize
    }
}

/// The largest value around each footprint, among those of the footprint's own kind.
pub fn warmest_around(layout: &Layout, values: &[f64], kinds: &[u8]) -> Vec<f64> {
    let mut out = vec![f64::NAN; values.len()];
    for kind in [0, 1] {
        let own = |at: usize| if kinds[at] == kind { values[at] } else { f64::NAN };
        let places: Vec<f64> = (0..layout.places())
            .map(|place| {
                let detectors = place * layout.detectors..(place + 1) * layout.detectors;
                detectors.map(own).fold(f64::NAN, f64::max)
            })
            .collect();
        let along = sliding(&places, layout.positions, 1, layout, f64::max, f64::NAN);
        let around = sliding(&along, layout.lines, layout.positions, layout, f64::max, f64::NAN);
        for (at, out) in out.iter_mut().enumerate().filter(|(at, _)| kinds[*at] == kind) {
            *out = around[at / layout.detectors];
        }
    }
    out
}

/// Folds values within reach along one direction, in which `count` places stand `stride` apart.
fn sliding(
    values: &[f64],
    count: usize,
    stride: usize,
    layout: &Layout,
    fold: fn(f64, f64) -> f64,
    start: f64,
) -> Vec<f64> {
    let reach = layout.reach();
    (0..values.len())
        .map(|place| {
            let at = place / stride % count;
            let first = at.saturating_sub(reach);
            let last = (at + reach).min(count - 1);
            (first..=last)
                .fold(start, |sum, other| fold(sum, values[place + other * stride - at * stride]))
        })
        .collect()
}

/// Mean and spread of a value over the clear footprints of the own kind around each footprint; NaN
/// where there are too few. A footprint that is clear itself counts among them.
pub fn clear_around(
    layout: &Layout,
    values: &[f64],
    clear: &[bool],
    kinds: &[u8],
) -> Vec<(f64, f64)> {
    let mut out = vec![(f64::NAN, f64::NAN); values.len()];
    for kind in [0, 1] {
        let counts = |at: usize| clear[at] && kinds[at] == kind;
        // Sums of squares are taken about one value, so that they do not cancel.
        let Some(about) = (0..values.len()).find(|at| counts(*at)).map(|at| values[at]) else {
            continue;
        };
        let sum_of = |power: i32| {
            let places: Vec<f64> = (0..layout.places())
                .map(|place| {
                    let detectors = place * layout.detectors..(place + 1) * layout.detectors;
                    let counting = detectors.filter(|at| counts(*at));
                    counting.map(|at| (values[at] - about).powi(power)).sum()
                })
                .collect();
            let add = |one: f64, other: f64| one + other;
            let along = sliding(&places, layout.positions, 1, layout, add, 0.0);
            sliding(&along, layout.lines, layout.positions, layout, add, 0.0)
        };
        let (count, sum, squares) = (sum_of(0), sum_of(1), sum_of(2));
        for (at, out) in out.iter_mut().enumerate().filter(|(at, _)| kinds[*at] == kind) {
            let place = at / layout.detectors;
            if count[place] >= FEWEST {
                let mean = sum[place] / count[place];
                let variance = (squares[place] / count[place] - mean * mean).max(0.0);
                *out = (about + mean, variance.sqrt());
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_warmest_of_the_own_kind_within_reach() {
        let layout = Layout { lines: 1, positions: 30, detectors: 1 };
        let mut values = vec![280.0; 30];
        values[0] = 300.0;
        values[1] = 310.0;
        let mut kinds = vec![0; 30];
        kinds[1] = 1;
        let warmest = warmest_around(&layout, &values, &kinds);
        assert_eq!((warmest[0], warmest[1]), (300.0, 310.0));
        assert_eq!((warmest[11], warmest[12]), (300.0, 280.0), "eleven footprints away");
    }

    #[test]
    fn mean_and_spread_of_what_is_clear() {
        let layout = Layout { lines: 2, positions: 2, detectors: 4 };
        let values: Vec<f64> = (0..16).map(f64::from).collect();
        let mut clear = vec![false; 16];
        for at in [0, 2, 4, 6] {
            clear[at] = true;
        }
        let found = clear_around(&layout, &values, &clear, &[0; 16]);
        // Worked by hand: 0, 2, 4, 6 have the mean 3 and squares of 9 + 1 + 1 + 9 = 20, of four.
        assert!(found.iter().all(|one| one.0 == 3.0 && (one.1 - 5.0_f64.sqrt()).abs() < 1e-12));
        clear[6] = false;
        let few = clear_around(&layout, &values, &clear, &[0; 16]);
        assert!(few.iter().all(|one| one.0.is_nan()), "three are too few");
    }
}
