//! How values go into a file: their type, rounding and missing values.

use crate::netcdf_files::{Samples, ValueKind};
use crate::spectral::brightness_temperature_or_nan;

/// How a band's values are stored.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Storage {
    /// Radiances in f32, rounded to a power of two below a quarter of the channel's noise or not.
    Float {
        /// Whether they are rounded, so that they compress well.
        rounded: bool,
    },
    /// Radiances packed in 16 bits with a scale of `2^exponent`.
    Packed {
        /// Exponent of the scale factor.
        exponent: i32,
    },
    /// Brightness temperature in K, packed in 16 bits with a scale of 1/128 K.
    Temperature,
}

/// Missing value of packed variables.
pub const PACKED_FILL: i16 = -32_768;
/// Missing value of f32 variables.
pub const FLOAT_FILL: f32 = -9999.0;
/// Scale and offset of packed brightness temperatures, K: exact in binary.
pub const TEMPERATURE_SCALE: f64 = 0.007_812_5;
/// See [`TEMPERATURE_SCALE`].
pub const TEMPERATURE_OFFSET: f64 = 250.0;

impl Storage {
    /// The type in the file.
    pub fn kind(self) -> ValueKind {
        match self {
            Storage::Float { .. } => ValueKind::F32,
            Storage::Packed { .. } | Storage::Temperature => ValueKind::I16,
        }
    }

    /// Radiances (mW m-2 sr-1 (cm-1)-1, NaN where missing) of whole spectra as they are stored.
    pub fn encode(self, radiances: &[f32], wavenumbers: &[f64], nedn: &[f32]) -> Samples {
        match self {
            Storage::Float { rounded } => {
                Samples::F32(zipped(radiances, nedn, |r, nedn| float(r, nedn, rounded)))
            }
            Storage::Packed { exponent } => {
                let scale = 2f64.powi(exponent);
                Samples::I16(radiances.iter().map(|r| packed(f64::from(*r) / scale)).collect())
            }
            Storage::Temperature => Samples::I16(zipped(radiances, wavenumbers, |r, nu| {
                let kelvin = brightness_temperature_or_nan(nu, f64::from(r));
                packed((kelvin - TEMPERATURE_OFFSET) / TEMPERATURE_SCALE)
            })),
        }
    }
}

/// Walks spectrum after spectrum along a per-channel table.
fn zipped<T: Copy, U>(radiances: &[f32], table: &[T], value: impl Fn(f32, T) -> U) -> Vec<U> {
    radiances.iter().zip(table.iter().cycle()).map(|(r, t)| value(*r, *t)).collect()
}

/// A NaN, and what 16 bits can't hold, becomes the missing value.
fn packed(value: f64) -> i16 {
    let rounded = value.round();
    if rounded.abs() <= 32_767.0 { rounded as i16 } else { PACKED_FILL }
}

fn float(radiance: f32, nedn: f32, rounded: bool) -> f32 {
    if radiance.is_nan() {
        FLOAT_FILL
    } else if rounded {
        let quantum = quantum(nedn);
        (radiance / quantum).round() * quantum
    } else {
        radiance
    }
}

/// The largest power of two that is no more than a quarter of the noise.
pub fn quantum(nedn: f32) -> f32 {
    (0.25 * nedn).log2().floor().exp2()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rounding_stays_below_the_noise() {
        for nedn in [0.003f32, 0.1, 0.7] {
            let quantum = quantum(nedn);
            assert!(quantum <= 0.25 * nedn && quantum > 0.12 * nedn);
            assert_eq!(quantum.log2().fract(), 0.0);
        }
    }

    #[test]
    fn missing_and_negative_values_are_kept_apart() {
        let storage = Storage::Packed { exponent: -11 };
        let samples = storage.encode(&[f32::NAN, -0.004, 0.5], &[2500.0; 3], &[0.01; 3]);
        assert_eq!(samples, Samples::I16(vec![PACKED_FILL, -8, 1024]));
        let samples = Storage::Temperature.encode(&[-0.004, 85.996_26], &[900.0; 2], &[0.1; 2]);
        // B(900, 280 K) = 85.99626154 (Planck table); 280 K is (280 - 250) * 128 = 3840.
        assert_eq!(samples, Samples::I16(vec![PACKED_FILL, 3840]));
    }
}
