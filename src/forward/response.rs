//! Instrument response: how much each fine-grid point counts in a channel.

use std::f64::consts::{LN_2, PI};

use super::grid::Grid;

/// Shape of a channel.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Response {
    /// Interferometer without apodisation: `sinc(2 pi nu L)`, L in cm.
    Sinc {
        /// Longest optical path difference, cm.
        path_difference: f64,
    },
    /// Interferometer with Hamming apodisation, `A(x) = 0.54 + 0.46 cos(pi x / L)`: exactly the
    /// three-point mean 0.23, 0.54, 0.23 of the unapodised shape on its natural grid 1/(2L).
    Hamming {
        /// Longest optical path difference, cm.
        path_difference: f64,
    },
    /// Grating: a Gaussian of FWHM `nu / R` (Strow et al. 2003).
    Grating {
        /// Resolving power R.
        resolving_power: f64,
    },
    /// Interferometer with Gaussian apodisation.
    Gaussian {
        /// Full width at half maximum, cm-1.
        width: f64,
    },
    /// The plain mean over an interval.
    Box {
        /// Width of the interval, cm-1.
        width: f64,
    },
}

/// Lobes of an unapodised shape that are kept on either side; the rest is below 0.5 % each.
const SINC_LOBES: f64 = 32.0;
/// The same with Hamming apodisation, where lobes fall below 0.04 % beyond this.
const HAMMING_LOBES: f64 = 8.0;

impl Response {
    /// Distance from the channel's centre beyond which nothing counts, cm-1.
    pub fn reach(&self, wavenumber: f64) -> f64 {
        match *self {
            Response::Sinc { path_difference } => SINC_LOBES / (2.0 * path_difference),
            Response::Hamming { path_difference } => HAMMING_LOBES / (2.0 * path_difference),
            Response::Grating { resolving_power } => 1.6 * wavenumber / resolving_power,
            Response::Gaussian { width } => 1.6 * width,
            Response::Box { width } => 0.5 * width,
        }
    }

    /// Weight at a distance from the centre (cm-1), up to a factor.
    fn weight(&self, wavenumber: f64, distance: f64) -> f64 {
        match *self {
            Response::Sinc { path_difference } => sinc(2.0 * path_difference * distance),
            Response::Hamming { path_difference } => {
                let lobe = 2.0 * path_difference * distance;
                0.54 * sinc(lobe) + 0.23 * (sinc(lobe - 1.0) + sinc(lobe + 1.0))
            }
            Response::Grating { resolving_power } => {
                gauss(distance / (wavenumber / resolving_power))
            }
            Response::Gaussian { width } => gauss(distance / width),
            Response::Box { .. } => 1.0,
        }
    }
}

fn sinc(x: f64) -> f64 {
    if x.abs() < 1e-9 { 1.0 } else { (PI * x).sin() / (PI * x) }
}

/// A Gaussian of unit height and FWHM 1.
fn gauss(x: f64) -> f64 {
    (-4.0 * LN_2 * x * x).exp()
}

/// The weights of one channel on a fine grid; they sum to one.
#[derive(Debug, Clone, PartialEq)]
pub struct Weights {
    first: usize,
    weights: Vec<f32>,
}

impl Weights {
    /// Weights of the channel at `wavenumber` (cm-1); the grid must cover its reach.
    pub fn new(response: &Response, wavenumber: f64, grid: &Grid) -> Weights {
        let range = grid.around(wavenumber, response.reach(wavenumber));
        let raw: Vec<f64> = range
            .clone()
            .map(|index| response.weight(wavenumber, grid.at(index) - wavenumber))
            .collect();
        let sum: f64 = raw.iter().sum();
        Weights { first: range.start, weights: raw.iter().map(|w| (w / sum) as f32).collect() }
    }

    /// Weighted mean of fine-grid values.
    pub fn apply(&self, values: &[f32]) -> f32 {
        // Eight partial sums: in a fixed order, and several at a time.
        let values = &values[self.first..self.first + self.weights.len()];
        let mut sums = [0.0f32; 8];
        let (blocks, rest) = values.as_chunks::<8>();
        let (weight_blocks, weight_rest) = self.weights.as_chunks::<8>();
        for (block, weights) in blocks.iter().zip(weight_blocks) {
            for lane in 0..8 {
                sums[lane] += block[lane] * weights[lane];
            }
        }
        let tail: f32 = rest.iter().zip(weight_rest).map(|(v, w)| v * w).sum();
        sums.iter().sum::<f32>() + tail
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn full_width(response: &Response, wavenumber: f64) -> f64 {
        let half = 0.5 * response.weight(wavenumber, 0.0);
        let mut distance = 0.0;
        while response.weight(wavenumber, distance) > half {
            distance += 1e-5;
        }
        2.0 * distance
    }

    #[test]
    fn widths_are_the_published_ones() {
        // FWHM in units of 1/(2L): unapodised 1.20671, Hamming 1.81522 (tables of apodisation
        // functions); the search steps by 1e-5 cm-1.
        let unit = 0.625;
        let sinc = full_width(&Response::Sinc { path_difference: 0.8 }, 900.0) / unit;
        assert!((sinc - 1.20671).abs() < 1e-4, "{sinc}");
        let hamming = full_width(&Response::Hamming { path_difference: 0.8 }, 900.0) / unit;
        assert!((hamming - 1.81522).abs() < 1e-4, "{hamming}");
        let grating = full_width(&Response::Grating { resolving_power: 1200.0 }, 900.0);
        assert!((grating - 0.75).abs() < 1e-4, "{grating}");
    }

    #[test]
    fn hamming_is_the_three_point_mean_of_the_unapodised_shape() {
        // A smooth hump on a wide grid; truncating the sinc at 32 lobes costs less than 1 %.
        let grid = Grid::covering(850.0, 950.0, 0.0125);
        let hump: Vec<f32> = (0..grid.count)
            .map(|i| (1.0 + (-((grid.at(i) - 900.0) / 3.0).powi(2)).exp()) as f32)
            .collect();
        let at = |response: Response, nu: f64| Weights::new(&response, nu, &grid).apply(&hump);
        let sinc = Response::Sinc { path_difference: 0.8 };
        let mean = 0.23 * (at(sinc, 899.375) + at(sinc, 900.625)) + 0.54 * at(sinc, 900.0);
        let direct = at(Response::Hamming { path_difference: 0.8 }, 900.0);
        assert!((mean - direct).abs() < 0.01, "{mean} {direct}");
    }

    #[test]
    fn a_flat_spectrum_stays_flat() {
        let grid = Grid::covering(690.0, 710.0, 0.0125);
        let flat = vec![3.5f32; grid.count];
        for response in [
            Response::Hamming { path_difference: 0.8 },
            Response::Grating { resolving_power: 1200.0 },
            Response::Gaussian { width: 0.5 },
            Response::Box { width: 1.0 },
        ] {
            let value = Weights::new(&response, 700.0, &grid).apply(&flat);
            assert!((value - 3.5).abs() < 1e-5);
        }
    }
}
