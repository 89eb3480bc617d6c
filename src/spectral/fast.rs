//! Brightness temperatures of many radiances in f32: for pictures and searches, never for numbers
//! that decide.
//!
//! The logarithm is a polynomial that the compiler turns into vector code. On x86-64 processors
//! with AVX2 and FMA, asked for at run time, it works on eight values at once. Within 1 mK of
//! [`super::brightness_temperature`] for 150 to 350 K and 600 to 2800 cm-1; NaN where that has an
//! error, judged in the range of f32.

use super::constants::C2;
use super::planck::cubed;

/// Brightness temperatures (K) of `radiances` (mW m-2 sr-1 (cm-1)-1) of one channel at `wavenumber`
/// (cm-1). Of two unequal lengths the shorter counts.
pub fn brightness_temperatures(wavenumber: f64, radiances: &[f32], temperatures: &mut [f32]) {
    let theta = (C2 * wavenumber) as f32;
    let scale = cubed(wavenumber) as f32;
    vectorised::channel(theta, scale, radiances, temperatures);
}

/// The inverse Planck function for whole spectra: what depends on the channels is worked out once.
#[derive(Debug, Clone, PartialEq)]
pub struct SpectrumInverse {
    /// `c2 nu` of each channel, K.
    theta: Vec<f32>,
    /// `c1 nu^3` of each channel, mW m-2 sr-1 (cm-1)-1.
    scale: Vec<f32>,
}

impl SpectrumInverse {
    /// For channels at `wavenumbers` (cm-1).
    pub fn new(wavenumbers: &[f64]) -> Self {
        Self {
            theta: wavenumbers.iter().map(|wavenumber| (C2 * wavenumber) as f32).collect(),
            scale: wavenumbers.iter().map(|wavenumber| cubed(*wavenumber) as f32).collect(),
        }
    }

    /// Brightness temperatures (K) of `radiances` (mW m-2 sr-1 (cm-1)-1), whole spectra one behind
    /// another, channel fastest. Of two unequal lengths the shorter counts.
    pub fn brightness_temperatures(&self, radiances: &[f32], temperatures: &mut [f32]) {
        let channels = self.theta.len().max(1);
        for (radiances, temperatures) in
            radiances.chunks(channels).zip(temperatures.chunks_mut(channels))
        {
            vectorised::spectrum(&self.theta, &self.scale, radiances, temperatures);
        }
    }
}

/// One value. `FUSED` uses fused multiply-add, which is an instruction only where the processor has
/// one and a slow library call elsewhere.
#[inline(always)]
fn temperature<const FUSED: bool>(theta: f32, scale: f32, radiance: f32) -> f32 {
    let ratio = scale / radiance;
    let temperature = theta / logarithm::<FUSED>(1.0 + ratio);
    // A comparison with NaN is false, so one test catches zero, negative, missing and overflow.
    let sensible = radiance > 0.0 && ratio < f32::MAX && temperature < f32::MAX;
    if sensible { temperature } else { f32::NAN }
}

/// Natural logarithm of a finite normal number, relative error about 1e-7.
///
/// The argument is split into `2^exponent * mantissa` with the mantissa between sqrt(1/2) and
/// sqrt(2); polynomial as in the Cephes mathematical library (Moshier 1989), function logf.
#[inline(always)]
fn logarithm<const FUSED: bool>(value: f32) -> f32 {
    const SQRT_HALF_BITS: u32 = 0x3f35_04f3;
    const ONE_BITS: u32 = 0x3f80_0000;
    const LN_2_HIGH: f32 = 0.693_359_4;
    const LN_2_LOW: f32 = -2.121_944_4e-4;
    const POLYNOMIAL: [f32; 9] = [
        7.037_683_6e-2,
        -1.151_461e-1,
        1.167_699_87e-1,
        -1.242_014_1e-1,
        1.424_932_3e-1,
        -1.666_805_7e-1,
        2.000_071_5e-1,
        -2.499_999_4e-1,
        3.333_333e-1,
    ];
    let shifted = value.to_bits().wrapping_add(ONE_BITS - SQRT_HALF_BITS);
    let exponent = ((shifted >> 23) as i32 - 127) as f32;
    let mantissa = f32::from_bits((shifted & 0x007f_ffff) + SQRT_HALF_BITS);
    let f = mantissa - 1.0;
    let mut sum = POLYNOMIAL[0];
    for coefficient in &POLYNOMIAL[1..] {
        sum = multiply_add::<FUSED>(sum, f, *coefficient);
    }
    let square = f * f;
    let small = multiply_add::<FUSED>(sum * f, square, exponent * LN_2_LOW);
    let small = multiply_add::<FUSED>(-0.5, square, small);
    multiply_add::<FUSED>(exponent, LN_2_HIGH, f + small)
}

#[inline(always)]
fn multiply_add<const FUSED: bool>(a: f32, b: f32, c: f32) -> f32 {
    if FUSED { a.mul_add(b, c) } else { a * b + c }
}

#[inline(always)]
fn channel_loop<const FUSED: bool>(theta: f32, scale: f32, radiances: &[f32], out: &mut [f32]) {
    for (radiance, out) in radiances.iter().zip(out) {
        *out = temperature::<FUSED>(theta, scale, *radiance);
    }
}

#[inline(always)]
fn spectrum_loop<const FUSED: bool>(
    theta: &[f32],
    scale: &[f32],
    radiances: &[f32],
    out: &mut [f32],
) {
    let constants = theta.iter().zip(scale);
    for ((radiance, out), (theta, scale)) in radiances.iter().zip(out).zip(constants) {
        *out = temperature::<FUSED>(*theta, *scale, *radiance);
    }
}

/// The choice of processor. Calling code compiled for AVX2 and FMA is `unsafe` because a processor
/// without them would meet unknown instructions; each call stands behind the question whether they
/// are there.
#[cfg(target_arch = "x86_64")]
#[allow(unsafe_code)]
mod vectorised {
    use super::{channel_loop, spectrum_loop};

    pub fn channel(theta: f32, scale: f32, radiances: &[f32], out: &mut [f32]) {
        if has_avx2_and_fma() {
            // SAFETY: the processor has just been asked for both features.
            unsafe { channel_avx2(theta, scale, radiances, out) }
        } else {
            channel_loop::<false>(theta, scale, radiances, out);
        }
    }

    pub fn spectrum(theta: &[f32], scale: &[f32], radiances: &[f32], out: &mut [f32]) {
        if has_avx2_and_fma() {
            // SAFETY: the processor has just been asked for both features.
            unsafe { spectrum_avx2(theta, scale, radiances, out) }
        } else {
            spectrum_loop::<false>(theta, scale, radiances, out);
        }
    }

    /// The answer is kept by the standard library after the first question.
    fn has_avx2_and_fma() -> bool {
        is_x86_feature_detected!("avx2") && is_x86_feature_detected!("fma")
    }

    #[target_feature(enable = "avx2,fma")]
    fn channel_avx2(theta: f32, scale: f32, radiances: &[f32], out: &mut [f32]) {
        channel_loop::<true>(theta, scale, radiances, out);
    }

    #[target_feature(enable = "avx2,fma")]
    fn spectrum_avx2(theta: &[f32], scale: &[f32], radiances: &[f32], out: &mut [f32]) {
        spectrum_loop::<true>(theta, scale, radiances, out);
    }
}

/// Elsewhere the compiler's own vector code for the target is used.
#[cfg(not(target_arch = "x86_64"))]
mod vectorised {
    use super::{channel_loop, spectrum_loop};

    pub fn channel(theta: f32, scale: f32, radiances: &[f32], out: &mut [f32]) {
        channel_loop::<false>(theta, scale, radiances, out);
    }

    pub fn spectrum(theta: &[f32], scale: &[f32], radiances: &[f32], out: &mut [f32]) {
        spectrum_loop::<false>(theta, scale, radiances, out);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::spectral::{brightness_temperature_or_nan, planck};

    /// The limit that the module promises, K.
    const PROMISED: f64 = 1e-3;

    /// The worst difference from the f64 path over 150 to 350 K and 600 to 2800 cm-1.
    fn worst_error(inverse: impl Fn(f64, &[f32], &mut [f32])) -> f64 {
        let temperatures: Vec<f64> = (0..=2000).map(|step| 150.0 + 0.1 * f64::from(step)).collect();
        let mut worst = 0.0f64;
        for wavenumber in (0..=220).map(|step| 600.0 + 10.0 * f64::from(step)) {
            let radiances: Vec<f32> = temperatures
                .iter()
                .map(|temperature| planck(wavenumber, *temperature) as f32)
                .collect();
            let mut found = vec![0.0f32; radiances.len()];
            inverse(wavenumber, &radiances, &mut found);
            for (radiance, found) in radiances.iter().zip(&found) {
                let exact = brightness_temperature_or_nan(wavenumber, f64::from(*radiance));
                let error = (f64::from(*found) - exact).abs();
                assert!(error.is_finite(), "{wavenumber} {radiance}");
                worst = worst.max(error);
            }
        }
        worst
    }

    #[test]
    fn within_the_promise_on_this_processor() {
        let worst = worst_error(brightness_temperatures);
        assert!(worst < PROMISED, "{worst}");
        // Measured 5.6e-5 K, which is four roundings of 350 K in f32: more means a worse formula.
        assert!(worst < 1e-4, "{worst}");
    }

    #[test]
    fn within_the_promise_on_plain_processors() {
        let worst = worst_error(|wavenumber, radiances, out| {
            let (theta, scale) = ((C2 * wavenumber) as f32, cubed(wavenumber) as f32);
            channel_loop::<false>(theta, scale, radiances, out);
        });
        assert!(worst < 1e-4, "{worst}");
    }

    #[test]
    fn whole_spectra_give_the_same_as_single_channels() {
        let wavenumbers: Vec<f64> = (0..100).map(|step| 600.0 + 22.0 * f64::from(step)).collect();
        let radiances: Vec<f32> = (0..250)
            .map(|place| planck(wavenumbers[place % 100], 200.0 + place as f64 / 3.0) as f32)
            .collect();
        let mut spectra = vec![0.0f32; radiances.len()];
        SpectrumInverse::new(&wavenumbers).brightness_temperatures(&radiances, &mut spectra);
        for (place, radiance) in radiances.iter().enumerate() {
            let mut single = [0.0f32];
            brightness_temperatures(wavenumbers[place % 100], &[*radiance], &mut single);
            assert_eq!(spectra[place], single[0]);
        }
    }

    #[test]
    fn what_has_no_temperature_is_missing() {
        let senseless = [
            0.0,
            -0.0,
            -1.0,
            -1e9,
            f32::NAN,
            f32::INFINITY,
            f32::NEG_INFINITY,
            1e-37,
            f32::from_bits(1),
        ];
        let mut fused = [0.0f32; 9];
        brightness_temperatures(2616.5, &senseless, &mut fused);
        let mut plain = [0.0f32; 9];
        let (theta, scale) = ((C2 * 2616.5) as f32, cubed(2616.5) as f32);
        channel_loop::<false>(theta, scale, &senseless, &mut plain);
        assert!(fused.iter().chain(&plain).all(|temperature| temperature.is_nan()), "{fused:?}");
    }

    #[test]
    fn an_axis_without_channels_is_no_trap() {
        let mut out = [1.0f32];
        SpectrumInverse::new(&[]).brightness_temperatures(&[2.0], &mut out);
        assert_eq!(out, [1.0]);
    }
}
