//! The fine grid on which absorption is computed.

/// Evenly spaced wavenumbers.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Grid {
    /// First wavenumber, cm-1.
    pub start: f64,
    /// Spacing, cm-1.
    pub step: f64,
    /// Number of points.
    pub count: usize,
}

impl Grid {
    /// The grid on multiples of `step` that covers `low` to `high` (cm-1).
    pub fn covering(low: f64, high: f64, step: f64) -> Grid {
        let first = (low / step).floor();
        let last = (high / step).ceil();
        Grid { start: first * step, step, count: (last - first) as usize + 1 }
    }

    /// Wavenumber of a point, cm-1.
    pub fn at(&self, index: usize) -> f64 {
        self.start + index as f64 * self.step
    }

    /// Last wavenumber, cm-1.
    pub fn end(&self) -> f64 {
        self.at(self.count.saturating_sub(1))
    }

    /// Indices of the points within `half_width` of `centre`.
    pub fn around(&self, centre: f64, half_width: f64) -> std::ops::Range<usize> {
        let low = ((centre - half_width - self.start) / self.step).ceil().max(0.0);
        let high = ((centre + half_width - self.start) / self.step).floor() + 1.0;
        let end = high.clamp(0.0, self.count as f64) as usize;
        (low as usize).min(end)..end
    }

    /// A grid `factor` times coarser that covers this one, with a point to spare at the end.
    pub fn coarser(&self, factor: usize) -> Grid {
        Grid {
            start: self.start,
            step: self.step * factor as f64,
            count: self.count.div_ceil(factor) + 1,
        }
    }

    /// Adds values of the `coarser` grid to `values` by linear interpolation.
    pub fn add_interpolated(&self, factor: usize, coarse: &[f32], values: &mut [f32]) {
        for (block, pair) in values.chunks_mut(factor).zip(coarse.windows(2)) {
            let slope = (pair[1] - pair[0]) / factor as f32;
            for (index, value) in block.iter_mut().enumerate() {
                *value += pair[0] + slope * index as f32;
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_straight_line_survives_interpolation() {
        let grid = Grid::covering(700.0, 701.0, 0.0125);
        let coarse = grid.coarser(8);
        let values: Vec<f32> = (0..coarse.count).map(|i| coarse.at(i) as f32 - 700.0).collect();
        let mut fine = vec![0.0; grid.count];
        grid.add_interpolated(8, &values, &mut fine);
        for (index, value) in fine.iter().enumerate() {
            // f32 holds 700 to 6e-5.
            assert!((f64::from(*value) - (grid.at(index) - 700.0)).abs() < 1e-4);
        }
    }

    #[test]
    fn around_takes_the_points_inside() {
        let grid = Grid { start: 10.0, step: 0.5, count: 5 };
        assert_eq!(grid.around(11.0, 0.6), 1..4);
        assert_eq!(grid.around(9.0, 0.5), 0..0);
        assert_eq!(grid.around(10.0, 100.0), 0..5);
    }
}
