//! A black body's radiance over a spectral interval.
//!
//! With `t = c2 nu / T` the integral of the Planck function is `sigma T^4 / pi` times the integral
//! of `15/pi^4 t^3 / (e^t - 1)`. Widger & Woodall 1976 sum the part above x term by term; for small
//! x that needs hundreds of terms, so the part below x is summed instead, from the power series of
//! the same integrand.

use std::f64::consts::PI;

use super::constants::{C2, C2_METRE, STEFAN_BOLTZMANN};

/// Radiance of a black body over all wavenumbers, W m-2 sr-1: `sigma T^4 / pi`.
pub fn total_radiance(temperature: f64) -> f64 {
    STEFAN_BOLTZMANN * temperature.powi(4) / PI
}

/// Radiance of a black body between two wavenumbers (cm-1), W m-2 sr-1, at `temperature` (K).
/// Exchanged limits give the negative.
///
/// Source: Widger & Woodall 1976, with the complement below `c2 nu / T = 1`. Relative error below
/// 1e-10 for intervals of 1 cm-1 and more.
pub fn band_integral(from: f64, to: f64, temperature: f64) -> f64 {
    let (low, high) = (C2 * from / temperature, C2 * to / temperature);
    let share = match (low < SPLIT, high < SPLIT) {
        // Both on one side of the split: the difference there loses the fewest digits.
        (true, true) => share_below(high) - share_below(low),
        (false, false) => share_above(low) - share_above(high),
        (true, false) => 1.0 - share_below(low) - share_above(high),
        (false, true) => share_below(high) + share_above(low) - 1.0,
    };
    total_radiance(temperature) * share
}

/// The share of a black body's radiation at wavelengths shorter than lambda, for the product
/// lambda T in um K.
///
/// Source: Widger & Woodall 1976. Relative error below 1e-10.
pub fn blackbody_fraction(wavelength_temperature: f64) -> f64 {
    let x = C2_METRE * 1e6 / wavelength_temperature;
    if x < SPLIT { 1.0 - share_below(x) } else { share_above(x) }
}

/// Where the two series meet: both reach full precision there within about 20 terms.
const SPLIT: f64 = 1.0;

/// The integral of `t^3 / (e^t - 1)` over all t is `pi^4 / 15`.
const NORMALISATION: f64 = 15.0 / (PI * PI * PI * PI);

/// Widger & Woodall's sum `e^{-n x} (x^3/n + 3 x^2/n^2 + 6 x/n^3 + 6/n^4)`.
fn share_above(x: f64) -> f64 {
    if !x.is_finite() {
        return 0.0;
    }
    // Terms fall by e^-x each; the count leaves out less than 1e-16 for x of 1 and more.
    let terms = (2.0 + 40.0 / x).ceil() as u32;
    let sum: f64 = (1..=terms)
        .map(f64::from)
        .map(|n| {
            (-n * x).exp() * (((x / n + 3.0 / (n * n)) * x + 6.0 / n.powi(3)) * x + 6.0 / n.powi(4))
        })
        .sum();
    NORMALISATION * sum
}

/// The integral from 0 to x of the power series of `t^3 / (e^t - 1)`, whose coefficients are
/// Bernoulli numbers: `x^3 (1/3 - x/8 + x^2/60 - x^4/5040 + ...)`, Abramowitz & Stegun 27.1.1.
fn share_below(x: f64) -> f64 {
    /// `B_2k / (2k)!` for k = 1, 2, ... 10. The next term at x = 1 is below 1e-19.
    const BERNOULLI: [f64; 10] = [
        1.0 / 12.0,
        -1.0 / 720.0,
        1.0 / 30_240.0,
        -1.0 / 1_209_600.0,
        1.0 / 47_900_160.0,
        -691.0 / 1_307_674_368_000.0,
        1.0 / 74_724_249_600.0,
        -3617.0 / 10_670_622_842_880_000.0,
        43_867.0 / 5_109_094_217_170_944_000.0,
        -174_611.0 / 802_857_662_698_291_200_000.0,
    ];
    let even: f64 = BERNOULLI
        .iter()
        .zip(1..)
        .map(|(coefficient, k)| coefficient * x.powi(2 * k) / f64::from(2 * k + 3))
        .sum();
    NORMALISATION * x.powi(3) * (1.0 / 3.0 - x / 8.0 + even)
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::spectral::planck;

    #[test]
    fn both_series_agree_where_they_meet() {
        for x in [0.5, 0.8, 1.0, 1.2] {
            // Both reach full precision around the split; a few roundings of f64.
            assert!((share_below(x) + share_above(x) - 1.0).abs() < 2e-15, "{x}");
        }
    }

    #[test]
    fn the_ends_are_nothing_and_all() {
        assert_eq!(share_above(f64::INFINITY), 0.0);
        assert_eq!(share_below(0.0), 0.0);
        let all = band_integral(0.0, f64::INFINITY, 288.15);
        assert!((all / total_radiance(288.15) - 1.0).abs() < 1e-15);
    }

    #[test]
    fn far_infrared_intervals_keep_their_digits() {
        // For small x the radiance is c1 / c2 T nu^2 to first order (Rayleigh and Jeans), so the
        // integral is c1 / (3 c2) T (b^3 - a^3) (1 - (3 / 8) x ...), with x up to 5e-5 here.
        let (from, to, temperature) = (0.009, 0.01, 300.0);
        let cubes = 1e-6 - 0.729e-6;
        let expected = 1e-3 * crate::spectral::constants::C1 / C2 * temperature * cubes / 3.0;
        assert!((band_integral(from, to, temperature) / expected - 1.0).abs() < 1e-4);
    }

    proptest! {
        #[test]
        fn intervals_add_up(
            from in 100.0..1000.0f64,
            first in 1.0..500.0f64,
            second in 1.0..500.0f64,
            temperature in 180.0..330.0f64,
        ) {
            let (middle, to) = (from + first, from + first + second);
            let parts = band_integral(from, middle, temperature)
                + band_integral(middle, to, temperature);
            let whole = band_integral(from, to, temperature);
            // Differences of shares that are rounded at 1e-16 each.
            prop_assert!((parts - whole).abs() < 1e-15 * total_radiance(temperature));
        }

        /// A narrow interval against the Planck function at its middle, by Simpson's rule.
        #[test]
        fn a_narrow_interval_is_the_planck_function(
            middle in 100.0..3000.0f64,
            temperature in 180.0..330.0f64,
        ) {
            let half = 0.5;
            let radiances = [-half, 0.0, half].map(|step| planck(middle + step, temperature));
            let simpson = 1e-3 * (radiances[0] + 4.0 * radiances[1] + radiances[2]) / 6.0;
            let integral = band_integral(middle - half, middle + half, temperature);
            // Simpson is off by less than (c2 h / T)^4 / 180, 1e-11; the difference of shares
            // loses digits by their size, 1e-16 of the whole.
            let rounding = 4e-16 * total_radiance(temperature);
            prop_assert!((integral - simpson).abs() < 1e-9 * simpson + rounding);
        }
    }
}
