//! The arithmetic of CO2 slicing over levels of air.

use crate::spectral::planck;

/// Why a ratio has no height.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NoHeight {
    /// No level has the ratio.
    NoRoot,
    /// Several have it: the air is inverted or isothermal there.
    SeveralRoots,
}

/// What an opaque cloud at each level takes from a channel's clear radiance, mW m-2 sr-1 (cm-1)-1:
/// `G(i) = Σ ½ (τ[j] + τ[j+1]) (B[j+1] - B[j])` over the levels `j < i`, from the ground upward.
/// `jump` is what the ground's black-body radiance exceeds that of the air at the ground by.
pub fn overcast(
    wavenumber: f64,
    temperatures: &[f64],
    transmittances: &[f64],
    jump: f64,
) -> Vec<f64> {
    let black: Vec<f64> =
        temperatures.iter().map(|temperature| planck(wavenumber, *temperature)).collect();
    overcast_black(&black, transmittances, jump)
}

/// The same where the black-body radiances of the levels are known already.
pub fn overcast_black(black: &[f64], transmittances: &[f64], jump: f64) -> Vec<f64> {
    let mut sum = -jump * transmittances.first().copied().unwrap_or(0.0);
    let mut all = Vec::with_capacity(black.len());
    all.push(sum);
    for level in 1..black.len() {
        let passes = 0.5 * (transmittances[level - 1] + transmittances[level]);
        sum += passes * (black[level] - black[level - 1]);
        all.push(sum);
    }
    all
}

/// The pressure, hPa, at which `one / other` has the observed ratio, linear in pressure between
/// levels; only levels up to `last` are looked at.
///
/// # Errors
/// No level has it, or more than one.
pub fn pressure(
    pressures: &[f64],
    (one, other): (&[f64], &[f64]),
    last: usize,
    ratio: f64,
) -> Result<f64, NoHeight> {
    let beyond = |level: usize| one[level] / other[level] - ratio;
    let mut found = None;
    for level in 2..=last.min(pressures.len() - 1) {
        let (below, above) = (beyond(level - 1), beyond(level));
        // A level that has the ratio itself belongs to the interval below it.
        let crosses = (below < 0.0 && above >= 0.0) || (below > 0.0 && above <= 0.0);
        if !crosses {
            continue;
        }
        if found.is_some() {
            return Err(NoHeight::SeveralRoots);
        }
        let share = below / (below - above);
        found = Some(pressures[level - 1] + share * (pressures[level] - pressures[level - 1]));
    }
    found.ok_or(NoHeight::NoRoot)
}

/// A value at a pressure, linear in pressure between levels.
pub fn at_pressure(pressures: &[f64], values: &[f64], pressure: f64) -> f64 {
    let above = pressures.partition_point(|level| *level >= pressure).clamp(1, pressures.len() - 1);
    let (low, high) = (pressures[above - 1], pressures[above]);
    let share = (low - pressure) / (low - high);
    values[above - 1] + share * (values[above] - values[above - 1])
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Pressure, temperature, transmittances at 704, 733 and 900 cm-1, ratio.
    /// Source: a worked case of the discrete form of [Menzel et al. 1983], computed apart from this
    /// program with the Planck function in 50 digits; printed to six digits.
    const CASE: [(f64, f64, [f64; 3], f64); 11] = [
        (1000.0, 294.0, [0.02, 0.30, 0.80], f64::NAN),
        (925.0, 290.5, [0.04, 0.37, 0.84], 0.088649),
        (850.0, 287.0, [0.08, 0.44, 0.87], 0.120194),
        (700.0, 278.0, [0.20, 0.58, 0.93], 0.215984),
        (600.0, 271.0, [0.31, 0.67, 0.955], 0.284990),
        (500.0, 262.0, [0.44, 0.75, 0.975], 0.365940),
        (400.0, 250.0, [0.58, 0.83, 0.987], 0.454292),
        (300.0, 235.0, [0.72, 0.895, 0.994], 0.538821),
        (250.0, 226.0, [0.79, 0.925, 0.997], 0.579591),
        (200.0, 217.0, [0.86, 0.95, 0.998], 0.614988),
        (150.0, 212.0, [0.92, 0.97, 0.999], 0.633341),
    ];
    const WAVENUMBERS: [f64; 3] = [704.0, 733.0, 900.0];
    const CLEAR: [f64; 3] = [81.097290, 105.010592, 102.946058];
    const OBSERVED: [f64; 3] = [68.220601, 81.112713, 72.467392];

    fn curves() -> (Vec<f64>, [Vec<f64>; 3]) {
        let temperatures: Vec<f64> = CASE.iter().map(|level| level.1).collect();
        let curve = |channel: usize| {
            let transmittances: Vec<f64> = CASE.iter().map(|level| level.2[channel]).collect();
            overcast(WAVENUMBERS[channel], &temperatures, &transmittances, 0.0)
        };
        (CASE.iter().map(|level| level.0).collect(), [curve(0), curve(1), curve(2)])
    }

    #[test]
    fn every_ratio_of_the_worked_case() {
        let (_, [one, other, _]) = curves();
        for (level, case) in CASE.iter().enumerate().skip(1) {
            let ratio = one[level] / other[level];
            // Half of the last digit printed.
            assert!((ratio - case.3).abs() < 5.1e-7, "{} hPa: {ratio}", case.0);
        }
    }

    #[test]
    fn height_and_amount_of_the_worked_case() {
        let (pressures, [one, other, window]) = curves();
        let forcing = |channel: usize| OBSERVED[channel] - CLEAR[channel];
        let ratio = forcing(0) / forcing(1);
        assert!((ratio - 0.5388214436).abs() < 1e-7, "{ratio}");
        let found = pressure(&pressures, (&one, &other), 10, ratio).unwrap();
        // Radiances are printed to 1e-6; the ratio changes by 8e-4 per hPa.
        assert!((found - 300.0).abs() < 1e-3, "{found}");
        let amount = forcing(2) / at_pressure(&pressures, &window, found);
        assert!((amount - 0.45).abs() < 1e-6, "{amount}");
    }

    #[test]
    fn ratios_without_a_height_say_why() {
        let (pressures, [one, other, _]) = curves();
        let height = |last, ratio| pressure(&pressures, (&one, &other), last, ratio);
        assert_eq!(height(10, 0.7), Err(NoHeight::NoRoot));
        assert_eq!(height(5, 0.55), Err(NoHeight::NoRoot), "above the last level");
        // A curve that turns has two heights for one ratio.
        let turned: Vec<f64> = [1.0, 1.0, 2.0, 3.0, 2.0, 1.0].into();
        let flat = [1.0; 6];
        let twice = pressure(&pressures[..6], (&turned, &flat), 5, 1.5);
        assert_eq!(twice, Err(NoHeight::SeveralRoots));
    }

    #[test]
    fn ground_that_is_warmer_than_the_air_adds_to_what_a_cloud_takes() {
        let plain = overcast(900.0, &[280.0, 270.0], &[0.5, 0.7], 0.0);
        let jump = planck(900.0, 290.0) - planck(900.0, 280.0);
        let warm = overcast(900.0, &[280.0, 270.0], &[0.5, 0.7], jump);
        assert!((plain[1] - warm[1] - 0.5 * jump).abs() < 1e-12);
    }
}
