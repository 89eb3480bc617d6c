//! What a spectrum carries away, interval by interval, and what its gases take of it.

use super::band_integral::band_integral;
use super::channel_axis::ChannelAxis;
use super::planck::{brightness_temperature, planck};

/// An interval of the energy view.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct EnergyBand {
    /// What absorbs most in it, or `window`.
    pub label: &'static str,
    /// Lower end, cm-1.
    pub low: f64,
    /// Upper end, cm-1.
    pub high: f64,
}

/// The intervals, side by side from 600 to 2800 cm-1.
///
/// A division of our own along the bands of [`super::ABSORPTION_BANDS`]; windows lie between them.
/// It is a reading aid: lines of water lie in every interval.
pub const ENERGY_BANDS: &[EnergyBand] = &[
    EnergyBand { label: "CO2 15 um", low: 600.0, high: 770.0 },
    EnergyBand { label: "window 11 um", low: 770.0, high: 980.0 },
    EnergyBand { label: "O3 9.6 um", low: 980.0, high: 1080.0 },
    EnergyBand { label: "window 8.7 um", low: 1080.0, high: 1210.0 },
    EnergyBand { label: "CH4 and N2O", low: 1210.0, high: 1380.0 },
    EnergyBand { label: "H2O 6.3 um", low: 1380.0, high: 2100.0 },
    EnergyBand { label: "CO and N2O", low: 2100.0, high: 2230.0 },
    EnergyBand { label: "CO2 4.3 um", low: 2230.0, high: 2400.0 },
    EnergyBand { label: "window 4 um", low: 2400.0, high: 2800.0 },
];

/// Places at which the window temperature is looked for, the most transparent first; cm-1.
const WINDOWS: [(f64, f64); 5] =
    [(895.0, 905.0), (957.0, 965.0), (826.0, 836.0), (1226.0, 1236.0), (1125.0, 1131.0)];

/// Channels of a spectrum with their values, in the order of the file.
#[derive(Debug, Clone, Copy)]
pub struct Stretch<'s> {
    /// Their wavenumbers.
    pub axis: &'s ChannelAxis,
    /// mW m-2 sr-1 (cm-1)-1, missing as NaN.
    pub radiances: &'s [f64],
}

/// One interval of a spectrum.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Energy {
    /// The interval.
    pub band: EnergyBand,
    /// How much of it the channels with a value cover, cm-1.
    pub covered: f64,
    /// What the spectrum carries there, W m-2 sr-1.
    pub radiance: f64,
    /// What a black body of the window temperature would carry there, W m-2 sr-1.
    pub black_body: f64,
}

impl Energy {
    /// What is taken away on the way from the window's black body to the spectrum, W m-2 sr-1.
    pub fn taken(&self) -> f64 {
        self.black_body - self.radiance
    }
}

/// The temperature, K, at which a window of the spectrum shines: the mean radiance of the channels
/// near 900 cm-1, inverted at their mean wavenumber; of the next window where the file lacks those.
pub fn window_temperature(spectrum: &[Stretch<'_>]) -> Option<f64> {
    WINDOWS.iter().find_map(|&(low, high)| {
        let (mut count, mut wavenumber, mut radiance) = (0.0, 0.0, 0.0);
        for stretch in spectrum {
            for channel in stretch.axis.between(low, high) {
                let value = stretch.radiances[channel];
                if value.is_finite() {
                    count += 1.0;
                    wavenumber += stretch.axis.wavenumbers()[channel];
                    radiance += value;
                }
            }
        }
        brightness_temperature(wavenumber / count, radiance / count).ok()
    })
}

/// The share of a black body's radiation that is missing at `wavenumber` (cm-1):
/// `1 - L / B(T_window)`, for a radiance in mW m-2 sr-1 (cm-1)-1 and a temperature in K.
///
/// Below zero where the spectrum is warmer than its window, as in an inversion.
pub fn absorption(wavenumber: f64, radiance: f64, window_temperature: f64) -> f64 {
    1.0 - radiance / planck(wavenumber, window_temperature)
}

/// What a spectrum carries in each of [`ENERGY_BANDS`], against a black body of
/// `window_temperature` (K) over the same channels. Intervals without a channel are left out.
///
/// Each channel stands for its cell, which ends halfway to its neighbours and never reaches across a
/// gap or a missing value; where stretches overlap, the first one counts.
pub fn energy_view(spectrum: &[Stretch<'_>], window_temperature: f64) -> Vec<Energy> {
    let mut cells: Vec<(f64, f64, f64)> = spectrum.iter().flat_map(cells).collect();
    cells.sort_by(|one, next| one.0.total_cmp(&next.0));
    let view = ENERGY_BANDS.iter().map(|band| {
        let mut energy = Energy { band: *band, covered: 0.0, radiance: 0.0, black_body: 0.0 };
        let mut reached = band.low;
        for &(low, high, radiance) in &cells {
            let (low, high) = (low.max(reached), high.min(band.high));
            if low < high {
                reached = high;
                energy.covered += high - low;
                energy.radiance += 1e-3 * radiance * (high - low);
                energy.black_body += band_integral(low, high, window_temperature);
            }
        }
        energy
    });
    view.filter(|energy| energy.covered > 0.0).collect()
}

/// The cells of channels that have a value: lower end, upper end, radiance.
fn cells<'s>(stretch: &'s Stretch<'_>) -> impl Iterator<Item = (f64, f64, f64)> + 's {
    let (axis, radiances) = (stretch.axis, stretch.radiances);
    axis.segments()
        .iter()
        .flat_map(move |segment| {
            let channels = &axis.sorted()[segment.clone()];
            let at = |place: usize| axis.wavenumbers()[channels[place]];
            (0..channels.len()).map(move |place| {
                let below = (place > 0).then(|| 0.5 * (at(place) - at(place - 1)));
                let above = (place + 1 < channels.len()).then(|| 0.5 * (at(place + 1) - at(place)));
                let lone = 0.5 * axis.nearest(at(place)).local_spacing;
                let (below, above) =
                    (below.or(above).unwrap_or(lone), above.or(below).unwrap_or(lone));
                (at(place) - below, at(place) + above, radiances[channels[place]])
            })
        })
        .filter(|cell| cell.2.is_finite())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectral::total_radiance;

    fn axis(low: f64, step: f64, count: usize) -> ChannelAxis {
        ChannelAxis::new((0..count).map(|at| low + at as f64 * step).collect()).unwrap()
    }

    fn black_body(axis: &ChannelAxis, temperature: f64) -> Vec<f64> {
        axis.wavenumbers().iter().map(|nu| planck(*nu, temperature)).collect()
    }

    /// Integral of the Planck function over 600 to 2800 cm-1, W m-2 sr-1, by quadrature with 50
    /// digits (tests/reference_tables/stefan_boltzmann_checks.csv).
    const INTEGRALS: [(f64, f64); 3] =
        [(220.0, 17.635_221_72), (270.0, 54.108_964_84), (300.0, 92.549_541_83)];

    #[test]
    fn a_black_body_loses_nothing_and_adds_up_to_the_published_integral() {
        let axis = axis(600.0, 0.625, 3521);
        for (temperature, integral) in INTEGRALS {
            let radiances = black_body(&axis, temperature);
            let spectrum = [Stretch { axis: &axis, radiances: &radiances }];
            let found = window_temperature(&spectrum).unwrap();
            // A mean over 10 cm-1 of a curved function: B'' 10^2 / 24 over B' is about a millikelvin.
            assert!((found - temperature).abs() < 2e-3, "{found}");
            let view = energy_view(&spectrum, temperature);
            assert_eq!(view.len(), ENERGY_BANDS.len());
            let sum: f64 = view.iter().map(|energy| energy.radiance).sum();
            // The midpoint rule is off by h^2 / 24 times the change of slope: below 1e-7 of the sum.
            assert!((sum / integral - 1.0).abs() < 1e-6, "{sum}");
            for energy in &view {
                assert!((energy.covered - (energy.band.high - energy.band.low)).abs() < 1e-9);
                assert!(energy.taken().abs() < 2e-6 * total_radiance(temperature), "{energy:?}");
            }
        }
    }

    #[test]
    fn a_grey_gas_takes_its_share() {
        let axis = axis(650.0, 0.5, 600);
        let mut radiances = black_body(&axis, 290.0);
        for (radiance, nu) in radiances.iter_mut().zip(axis.wavenumbers()) {
            if *nu < 770.0 {
                *radiance *= 0.7;
            }
        }
        let spectrum = [Stretch { axis: &axis, radiances: &radiances }];
        let view = energy_view(&spectrum, 290.0);
        let carbon_dioxide = &view[0];
        // The first cell begins half a spacing below the first channel.
        assert!((carbon_dioxide.covered - 120.25).abs() < 1e-9);
        let expected = 0.3 * band_integral(649.75, 770.0, 290.0);
        // The cell at 770 cm-1 reaches a quarter below it and is full: 0.3 of 0.25 in 120 cm-1.
        assert!((carbon_dioxide.taken() / expected - 1.0).abs() < 3e-3);
        assert!((absorption(700.0, 0.7 * planck(700.0, 290.0), 290.0) - 0.3).abs() < 1e-15);
        assert!(view[1].taken().abs() < 1e-4);
    }

    #[test]
    fn what_is_missing_is_left_out_on_both_sides() {
        let axis = axis(700.0, 1.0, 500);
        let mut radiances = black_body(&axis, 280.0);
        radiances[100..160].fill(f64::NAN);
        let view = energy_view(&[Stretch { axis: &axis, radiances: &radiances }], 280.0);
        let window = view.iter().find(|energy| energy.band.label == "window 11 um").unwrap();
        assert_eq!(window.covered, 210.0 - 60.0);
        assert!(window.taken().abs() < 1e-5, "{window:?}");
        assert!(view.iter().all(|energy| energy.band.low < 1200.0), "no channels, no interval");
    }

    #[test]
    fn stretches_that_overlap_count_once() {
        let (first, second) = (axis(800.0, 0.5, 401), axis(900.0, 0.25, 801));
        let radiances = [black_body(&first, 285.0), black_body(&second, 285.0)];
        let spectrum = [
            Stretch { axis: &first, radiances: &radiances[0] },
            Stretch { axis: &second, radiances: &radiances[1] },
        ];
        let covered: f64 = energy_view(&spectrum, 285.0).iter().map(|one| one.covered).sum();
        // From 799.75 to 1100.125 cm-1.
        assert!((covered - 300.375).abs() < 1e-9, "{covered}");
    }

    #[test]
    fn without_a_window_there_is_no_window_temperature() {
        let axis = axis(2200.0, 0.5, 100);
        let radiances = black_body(&axis, 280.0);
        assert_eq!(window_temperature(&[Stretch { axis: &axis, radiances: &radiances }]), None);
    }
}
