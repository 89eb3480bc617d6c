//! Spectra whose wavenumbers are off.

/// What a spectrum looks like to a detector whose wavenumbers are off by `ppm`: less the shift times
/// the slope, which is that of the band-limited function through the channels
/// (`sum (-1)^k / k (R[i+k] - R[i-k])` per channel), tapered. Ends of the band stay as they are.
pub fn shift(wavenumbers: &[f64], ppm: f64, spectrum: &mut [f32]) {
    const REACH: usize = 16;
    let before = spectrum.to_vec();
    for at in REACH..spectrum.len().saturating_sub(REACH) {
        let spacing = 0.5 * (wavenumbers[at + 1] - wavenumbers[at - 1]);
        let slope: f64 = (1..=REACH)
            .map(|k| {
                let taper =
                    (0.5 * std::f64::consts::PI * k as f64 / (REACH + 1) as f64).cos().powi(2);
                let sign = if k % 2 == 0 { -1.0 } else { 1.0 };
                let step = f64::from(before[at + k]) - f64::from(before[at - k]);
                sign * taper / k as f64 * step
            })
            .sum();
        spectrum[at] -= (1e-6 * ppm * wavenumbers[at] * slope / spacing) as f32;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synth::instrument::Instrument;

    #[test]
    fn a_shift_moves_a_wave_by_what_it_should() {
        let band = &Instrument::reduced_interferometer().bands[0];
        // A wave of five channels, its phase moved by 2 pi / 5 times the shift in channels.
        let wave = |nu: f64| (2.0 * std::f64::consts::PI * nu / (5.0 * 0.625)).sin();
        let mut spectrum: Vec<f32> =
            band.wavenumbers.iter().map(|nu| 50.0 + wave(*nu) as f32).collect();
        shift(&band.wavenumbers, 20.0, &mut spectrum);
        for (value, nu) in spectrum.iter().zip(&band.wavenumbers).skip(40).take(200) {
            let expected = 50.0 + wave(nu * (1.0 - 20e-6));
            // f32 at 50: 4e-6; the taper spoils the slope by less than a hundredth of 0.045.
            assert!((f64::from(*value) - expected).abs() < 1e-3, "{nu}: {value} {expected}");
        }
    }
}
