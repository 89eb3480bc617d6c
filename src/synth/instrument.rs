//! The imaginary Brindle sounder in its versions: channels, responses, noise.

use super::storage::Storage;
use super::typical_noise::{FINE_INTERFEROMETER, GRATING, INTERFEROMETER};
use crate::forward::Response;

/// How the noise of neighbouring channels goes together.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Correlation {
    /// Not at all: each channel has its own detector.
    None,
    /// As the Hamming apodisation makes it.
    Hamming,
    /// As a Gaussian apodisation of two samples' width makes it.
    Gaussian,
}

/// A spectral band: channels that are stored in one variable.
#[derive(Debug, Clone, PartialEq)]
pub struct Band {
    /// Short name, also in the names of variables; empty for the only band of a file.
    pub name: &'static str,
    /// Channel centres, cm-1, ascending.
    pub wavenumbers: Vec<f64>,
    /// Shape of the channels.
    pub response: Response,
    /// What the file says of the apodisation.
    pub apodisation: &'static str,
    /// Correlation of the noise.
    pub correlation: Correlation,
    /// Noise equivalent radiance, mW m-2 sr-1 (cm-1)-1.
    pub nedn: Vec<f32>,
    /// Radiance at which `nedn` holds where the noise grows with the signal; empty where not.
    pub noise_reference: Vec<f32>,
    /// How values are stored.
    pub storage: Storage,
}

/// An instrument: its bands and how it scans.
#[derive(Debug, Clone, PartialEq)]
pub struct Instrument {
    /// What the file says the spectra were measured with.
    pub description: &'static str,
    /// The bands.
    pub bands: Vec<Band>,
    /// Scan angle between positions, degrees.
    pub position_step: f64,
    /// Detectors along a side of the cluster.
    pub side: usize,
    /// Angle between detectors, degrees.
    pub detector_step: f64,
    /// Seconds for a scan line.
    pub line_seconds: f64,
    /// Radius of a footprint at nadir, km.
    pub footprint_radius: f64,
    /// Unit of the spectral axis: true for m-1, false for cm-1.
    pub axis_per_metre: bool,
}

impl Band {
    /// Factor on the noise for a radiance: photon noise grows with the square root of the signal.
    pub fn growth(&self, channel: usize, radiance: f32) -> f32 {
        match self.noise_reference.get(channel) {
            Some(reference) => (0.7 + 0.3 * (radiance / reference).max(0.0)).sqrt(),
            None => 1.0,
        }
    }

    /// An interferometer's band with Hamming apodisation on its natural grid.
    fn hamming(
        name: &'static str,
        first: f64,
        path_difference: f64,
        count: usize,
        storage: Storage,
    ) -> Band {
        let step = 0.5 / path_difference;
        let wavenumbers: Vec<f64> = (0..count).map(|i| first + i as f64 * step).collect();
        Band {
            name,
            nedn: INTERFEROMETER.nedn(&wavenumbers),
            wavenumbers,
            response: Response::Hamming { path_difference },
            apodisation: "Hamming",
            correlation: Correlation::Hamming,
            noise_reference: Vec::new(),
            storage,
        }
    }

    /// A finely sampled interferometer's band, cut to some intervals (cm-1).
    fn fine(name: &'static str, intervals: &[(f64, f64)], storage: Storage) -> Band {
        let wavenumbers: Vec<f64> = intervals
            .iter()
            .flat_map(|(low, high)| {
                let count = ((high - low) * 4.0).round() as usize;
                (0..=count).map(move |i| low + i as f64 * 0.25)
            })
            .collect();
        Band {
            name,
            nedn: FINE_INTERFEROMETER.nedn(&wavenumbers),
            wavenumbers,
            response: Response::Gaussian { width: 0.5 },
            apodisation: "Gaussian, FWHM 0.5 cm-1",
            correlation: Correlation::Gaussian,
            noise_reference: Vec::new(),
            storage,
        }
    }

    /// A grating's channels: about half a channel width apart, with gaps between the arrays.
    fn grating(arrays: &[(f64, f64)], count: usize, storage: Storage) -> Band {
        let wavenumbers = grating_channels(arrays, count);
        let noise_reference = wavenumbers
            .iter()
            .map(|nu| crate::spectral::planck(*nu, GRATING.temperature) as f32)
            .collect();
        Band {
            name: "",
            nedn: GRATING.nedn(&wavenumbers),
            wavenumbers,
            response: Response::Grating { resolving_power: 1200.0 },
            apodisation: "none",
            correlation: Correlation::None,
            noise_reference,
            storage,
        }
    }
}

/// `count` channels spread over arrays with a spacing in proportion to the wavenumber.
fn grating_channels(arrays: &[(f64, f64)], count: usize) -> Vec<f64> {
    let lengths: Vec<f64> = arrays.iter().map(|(low, high)| (high / low).ln()).collect();
    let total: f64 = lengths.iter().sum();
    let mut channels = Vec::with_capacity(count);
    let mut covered = 0.0;
    for ((low, _), length) in arrays.iter().zip(lengths) {
        covered += length;
        // Rounding the running total gives each array its share and the whole exactly `count`.
        let end = (covered / total * count as f64).round() as usize;
        let own = end - channels.len();
        let step = length / (own.max(2) - 1) as f64;
        // Five decimals are what such a file carries.
        channels.extend((0..own).map(|i| (low * (i as f64 * step).exp() * 1e5).round() / 1e5));
    }
    channels
}

/// Arrays of the full grating, cm-1.
const FULL_ARRAYS: [(f64, f64); 17] = [
    (649.6, 681.9),
    (687.6, 728.4),
    (728.8, 781.9),
    (789.3, 852.4),
    (856.9, 903.8),
    (904.2, 941.0),
    (941.4, 974.3),
    (976.1, 1046.2),
    (1050.0, 1096.5),
    (1104.0, 1136.6),
    (1209.6, 1270.0),
    (1285.0, 1338.9),
    (1339.5, 1443.1),
    (1460.2, 1613.9),
    (2181.5, 2325.1),
    (2328.0, 2446.2),
    (2446.7, 2665.2),
];

/// Arrays of the small sample gratings, cm-1.
const DESERT_ARRAYS: [(f64, f64); 9] = [
    (688.0, 790.0),
    (822.0, 856.0),
    (888.0, 974.0),
    (1012.0, 1082.0),
    (1112.0, 1136.0),
    (1216.0, 1284.0),
    (1300.0, 1392.0),
    (2386.0, 2418.0),
    (2500.0, 2660.0),
];
const STRAIT_ARRAYS: [(f64, f64); 10] = [
    (660.0, 682.0),
    (698.0, 782.0),
    (818.0, 852.0),
    (886.0, 972.0),
    (1018.0, 1072.0),
    (1122.0, 1134.0),
    (1218.0, 1262.0),
    (1296.0, 1350.0),
    (1490.0, 1545.0),
    (2450.0, 2640.0),
];

impl Instrument {
    /// Interferometer at full resolution: 717 + 869 + 637 channels with guard channels.
    pub fn interferometer() -> Instrument {
        let storage = Storage::Float { rounded: false };
        let bands = vec![
            Band::hamming("longwave", 648.75, 0.8, 717, storage),
            Band::hamming("midwave", 1208.75, 0.8, 869, storage),
            Band::hamming("shortwave", 2153.75, 0.8, 637, storage),
        ];
        Instrument { bands, ..Instrument::reduced_interferometer() }
    }

    /// Interferometer at reduced resolution in the short waves: 713 + 433 + 159 channels.
    pub fn reduced_interferometer() -> Instrument {
        let packed = |exponent| Storage::Packed { exponent };
        Instrument {
            description: "interferometer with three bands and 3x3 detectors",
            bands: vec![
                Band::hamming("longwave", 650.0, 0.8, 713, packed(-6)),
                Band::hamming("midwave", 1210.0, 0.4, 433, packed(-8)),
                Band::hamming("shortwave", 2155.0, 0.2, 159, packed(-11)),
            ],
            position_step: 3.33,
            side: 3,
            detector_step: 1.1,
            line_seconds: 8.0,
            footprint_radius: 7.0,
            axis_per_metre: false,
        }
    }

    /// Finely sampled interferometer with 2x2 detectors, cut to some intervals.
    pub fn fine_interferometer() -> Instrument {
        let packed = |exponent| Storage::Packed { exponent };
        let window = [
            (826.0, 836.0),
            (895.0, 905.0),
            (956.0, 966.0),
            (1036.0, 1048.0),
            (1226.0, 1236.0),
            (1300.0, 1312.0),
        ];
        let short_wave = [(2386.0, 2396.0), (2500.0, 2512.0), (2608.0, 2624.0)];
        Instrument {
            description: "finely sampled interferometer with 2x2 detectors, cut to some intervals",
            bands: vec![
                Band::fine("longwave", &[(645.0, 770.0)], packed(-5)),
                Band::fine("window", &window, packed(-6)),
                Band::fine("shortwave", &short_wave, packed(-10)),
            ],
            position_step: 3.33,
            side: 2,
            detector_step: 1.6,
            line_seconds: 8.0,
            footprint_radius: 6.0,
            axis_per_metre: false,
        }
    }

    /// Grating with 2378 channels.
    pub fn grating() -> Instrument {
        Instrument::of_grating(&FULL_ARRAYS, 2378, Storage::Float { rounded: false }, false)
    }

    /// A grating cut to some arrays, radiances in rounded floats.
    pub fn desert_grating() -> Instrument {
        Instrument::of_grating(&DESERT_ARRAYS, 1120, Storage::Float { rounded: true }, false)
    }

    /// A grating cut to some arrays, stored as brightness temperature along an axis in m-1.
    pub fn strait_grating() -> Instrument {
        Instrument::of_grating(&STRAIT_ARRAYS, 1180, Storage::Temperature, true)
    }

    fn of_grating(
        arrays: &[(f64, f64)],
        count: usize,
        storage: Storage,
        axis_per_metre: bool,
    ) -> Instrument {
        Instrument {
            description: "grating spectrometer",
            bands: vec![Band::grating(arrays, count, storage)],
            position_step: 1.1,
            side: 1,
            detector_step: 0.0,
            line_seconds: 8.0 / 3.0,
            footprint_radius: 6.75,
            axis_per_metre,
        }
    }

    /// Channels of all bands.
    pub fn channel_count(&self) -> usize {
        self.bands.iter().map(|band| band.wavenumbers.len()).sum()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn full_size_instruments_have_the_counts_of_their_class() {
        let counts: Vec<usize> =
            Instrument::interferometer().bands.iter().map(|b| b.wavenumbers.len()).collect();
        assert_eq!(counts, [717, 869, 637]);
        assert_eq!(Instrument::grating().channel_count(), 2378);
    }

    #[test]
    fn bands_end_where_the_grids_of_the_class_end() {
        let bands = Instrument::interferometer().bands;
        // 648.75 + 716 x 0.625, 1208.75 + 868 x 0.625, 2153.75 + 636 x 0.625: exact in binary.
        let ends: Vec<f64> = bands.iter().map(|b| b.wavenumbers[b.wavenumbers.len() - 1]).collect();
        assert_eq!(ends, [1096.25, 1751.25, 2551.25]);
    }

    #[test]
    fn axes_ascend_and_samples_have_the_channels_of_the_evidence() {
        for instrument in [
            Instrument::interferometer(),
            Instrument::grating(),
            Instrument::reduced_interferometer(),
            Instrument::fine_interferometer(),
            Instrument::desert_grating(),
            Instrument::strait_grating(),
        ] {
            for band in &instrument.bands {
                assert!(band.wavenumbers.windows(2).all(|pair| pair[0] < pair[1]));
                assert!(band.nedn.iter().all(|nedn| *nedn > 0.0 && nedn.is_finite()));
            }
            for wanted in [712.0, 718.0, 831.0, 900.0, 961.0, 1042.0, 1231.0] {
                let nearest = instrument
                    .bands
                    .iter()
                    .flat_map(|band| &band.wavenumbers)
                    .map(|nu| (nu - wanted).abs())
                    .fold(f64::INFINITY, f64::min);
                assert!(nearest < 0.6 * 0.6, "{}: {wanted}", instrument.description);
            }
        }
    }
}
