//! What may be wrong with an instrument, and which footprints and channels it touches.

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

use super::instrument::{Band, Instrument};
use super::shift::shift;
use super::swath::Swath;
use crate::spectral::planck_slope;

/// One thing that is wrong.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Defect {
    /// A detector of a band gives the same small value whatever it sees.
    DeadDetector {
        /// Number of the band.
        band: usize,
        /// Number of the detector.
        detector: usize,
    },
    /// A detector of a band reads too warm throughout.
    Striping {
        /// Number of the band.
        band: usize,
        /// Number of the detector.
        detector: usize,
        /// By how much at 250 K, K.
        kelvin: f64,
    },
    /// A detector of a band is noisier than the others.
    NoisyDetector {
        /// Number of the band.
        band: usize,
        /// Number of the detector.
        detector: usize,
        /// Factor on its noise.
        factor: f32,
    },
    /// The wavenumbers of a detector of a band are off.
    Shift {
        /// Number of the band.
        band: usize,
        /// Number of the detector.
        detector: usize,
        /// By how much, parts per million.
        ppm: f64,
    },
    /// Neighbouring channels of a band go up and down in turns in a block of lines and positions.
    Ringing {
        /// Number of the band.
        band: usize,
        /// First scan line and position.
        first: (usize, usize),
        /// Last scan line and position.
        last: (usize, usize),
        /// Height in units of the noise.
        noises: f32,
    },
    /// A channel jumps to another level for some scan lines.
    PoppingChannel {
        /// Nearest channel, cm-1.
        wavenumber: f64,
        /// Height of the jump in units of its noise.
        noises: f32,
        /// First scan line.
        first: usize,
        /// Last scan line.
        last: usize,
    },
    /// A channel is noisier than its neighbours.
    NoisyChannel {
        /// Nearest channel, cm-1.
        wavenumber: f64,
        /// Factor on its noise.
        factor: f32,
    },
    /// A channel gives no value.
    DeadChannel {
        /// Nearest channel, cm-1.
        wavenumber: f64,
    },
    /// Single channels of single footprints stand out.
    Spikes {
        /// Number of footprints.
        count: usize,
        /// Height in units of the noise.
        noises: f32,
    },
    /// A scan line is missing.
    LostLine {
        /// Number of the scan line.
        line: usize,
    },
    /// A scan line repeats the one before it.
    RepeatedLine {
        /// Number of the scan line.
        line: usize,
    },
    /// A band is missing in a block of scan lines and positions.
    BandLost {
        /// Number of the band.
        band: usize,
        /// First scan line and position.
        first: (usize, usize),
        /// Last scan line and position.
        last: (usize, usize),
    },
    /// Stretches of channels are missing in single footprints.
    Fill {
        /// Number of footprints.
        count: usize,
    },
}

/// Footprint defects by bit, as the truth group names them.
const FOOTPRINT_DEFECTS: [&str; 10] = [
    "dead_detector",
    "striping",
    "spike",
    "lost_scan_line",
    "repeated_scan_line",
    "band_lost",
    "fill_values",
    "noisy_detector",
    "spectral_shift",
    "ringing",
];
/// Defects that every file names, planted or not.
const ALWAYS_NAMED: usize = 7;
/// The bit of a dead detector.
pub const DEAD_DETECTOR: i32 = 1 << 0;
const STRIPING: i32 = 1 << 1;
const SPIKE: i32 = 1 << 2;
const LOST_LINE: i32 = 1 << 3;
/// The bit of a scan line that repeats the one before it.
pub const REPEATED_LINE: i32 = 1 << 4;
const BAND_LOST: i32 = 1 << 5;
const FILL_VALUES: i32 = 1 << 6;
const NOISY_DETECTOR: i32 = 1 << 7;
const SHIFT: i32 = 1 << 8;
const RINGING: i32 = 1 << 9;

/// Channel defects by bit.
pub const CHANNEL_DEFECTS: [&str; 3] = ["dead", "noisy", "popping"];
const CHANNEL_DEAD: i32 = 1 << 0;
const CHANNEL_NOISY: i32 = 1 << 1;
const CHANNEL_POPPING: i32 = 1 << 2;

/// Defects with their places drawn.
#[derive(Debug, Clone)]
pub struct Faults {
    defects: Vec<Defect>,
    /// Footprint, band, channel, noises.
    spikes: Vec<(usize, usize, usize, f32)>,
    /// Footprint, band, first channel, length.
    fills: Vec<(usize, usize, usize, usize)>,
    /// Per band and channel.
    channel_bits: Vec<Vec<i32>>,
}

impl Faults {
    /// Draws the places of the scattered defects.
    pub fn new(defects: &[Defect], instrument: &Instrument, swath: &Swath, seed: u64) -> Faults {
        let mut random = ChaCha8Rng::seed_from_u64(seed ^ 0xDEFEC7);
        let footprints = swath.lines * swath.positions * swath.detectors();
        let mut below = |limit: usize| (random.next_u64() % limit.max(1) as u64) as usize;
        let mut place = |reserve: usize| {
            let band = below(instrument.bands.len());
            let channels = instrument.bands[band].wavenumbers.len();
            (below(footprints), band, below(channels.saturating_sub(reserve)))
        };
        let (mut spikes, mut fills) = (Vec::new(), Vec::new());
        for defect in defects {
            match *defect {
                Defect::Spikes { count, noises } => spikes.extend((0..count).map(|number| {
                    let (footprint, band, channel) = place(0);
                    (footprint, band, channel, if number % 3 == 0 { -noises } else { noises })
                })),
                Defect::Fill { count } => fills.extend((0..count).map(|_| {
                    let (footprint, band, channel) = place(12);
                    (footprint, band, channel, 12)
                })),
                _ => {}
            }
        }
        let channel_bits = channel_bits(defects, instrument);
        Faults { defects: defects.to_vec(), spikes, fills, channel_bits }
    }

    /// Defect bits of each channel of a band.
    pub fn channel_bits(&self, band: usize) -> &[i32] {
        &self.channel_bits[band]
    }

    /// Names of the footprint defects by bit.
    pub fn names(&self) -> &'static [&'static str] {
        let later = |defect: &Defect| {
            use Defect::{NoisyDetector, Ringing, Shift};
            matches!(defect, NoisyDetector { .. } | Shift { .. } | Ringing { .. })
        };
        match self.defects.iter().any(later) {
            true => &FOOTPRINT_DEFECTS,
            false => &FOOTPRINT_DEFECTS[..ALWAYS_NAMED],
        }
    }

    /// Whether a scan line repeats the one before it.
    pub fn repeats(&self, line: usize) -> bool {
        self.defects.contains(&Defect::RepeatedLine { line })
    }

    /// Whether a spectrum lacks values in channels that are not dead for good.
    pub fn lacks_values(&self, band: usize, spectrum: &[f32]) -> bool {
        let dead = CHANNEL_DEAD;
        spectrum
            .iter()
            .zip(&self.channel_bits[band])
            .any(|(v, bits)| v.is_nan() && bits & dead == 0)
    }

    /// Changes one spectrum, to which `noise` has been added already; returns its defect bits.
    pub fn spoil(&self, at: &Place, band: &Band, noise: &[f32], spectrum: &mut [f32]) -> i32 {
        let mut bits = 0;
        for defect in &self.defects {
            bits |= spoil_by(defect, at, band, noise, spectrum);
        }
        for (footprint, of_band, channel, noises) in &self.spikes {
            if *footprint == at.footprint && *of_band == at.band {
                spectrum[*channel] += noises * band.nedn[*channel];
                bits |= SPIKE;
            }
        }
        for (footprint, of_band, first, length) in &self.fills {
            if *footprint == at.footprint && *of_band == at.band {
                spectrum[*first..first + length].fill(f32::NAN);
                bits |= FILL_VALUES;
            }
        }
        bits
    }
}

/// Which spectrum is looked at.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Place {
    /// Scan line.
    pub line: usize,
    /// Position.
    pub position: usize,
    /// Detector.
    pub detector: usize,
    /// Flat number of the footprint.
    pub footprint: usize,
    /// Number of the band.
    pub band: usize,
}

fn spoil_by(defect: &Defect, at: &Place, band: &Band, noise: &[f32], spectrum: &mut [f32]) -> i32 {
    match *defect {
        Defect::DeadDetector { band: b, detector } if (b, detector) == (at.band, at.detector) => {
            for (value, nedn) in spectrum.iter_mut().zip(&band.nedn) {
                *value = 0.25 * nedn;
            }
            DEAD_DETECTOR
        }
        Defect::Striping { band: b, detector, kelvin }
            if (b, detector) == (at.band, at.detector) =>
        {
            for (value, nu) in spectrum.iter_mut().zip(&band.wavenumbers) {
                *value += (kelvin * planck_slope(*nu, 250.0)) as f32;
            }
            STRIPING
        }
        Defect::NoisyDetector { band: b, detector, factor }
            if (b, detector) == (at.band, at.detector) =>
        {
            for (value, noise) in spectrum.iter_mut().zip(noise) {
                *value += (factor - 1.0) * noise;
            }
            NOISY_DETECTOR
        }
        Defect::Shift { band: b, detector, ppm } if (b, detector) == (at.band, at.detector) => {
            shift(&band.wavenumbers, ppm, spectrum);
            SHIFT
        }
        Defect::Ringing { band: b, first, last, noises }
            if b == at.band
                && (first.0..=last.0).contains(&at.line)
                && (first.1..=last.1).contains(&at.position) =>
        {
            for (channel, (value, nedn)) in spectrum.iter_mut().zip(&band.nedn).enumerate() {
                *value += if channel % 2 == 0 { noises * nedn } else { -noises * nedn };
            }
            RINGING
        }
        Defect::PoppingChannel { wavenumber, noises, first, last }
            if (first..=last).contains(&at.line) =>
        {
            if let Some(channel) = nearest(band, wavenumber) {
                spectrum[channel] += noises * band.nedn[channel];
            }
            0
        }
        Defect::NoisyChannel { wavenumber, factor } => {
            if let Some(channel) = nearest(band, wavenumber) {
                spectrum[channel] += (factor - 1.0) * noise[channel];
            }
            0
        }
        Defect::DeadChannel { wavenumber } => {
            if let Some(channel) = nearest(band, wavenumber) {
                spectrum[channel] = f32::NAN;
            }
            0
        }
        Defect::LostLine { line } if line == at.line => {
            spectrum.fill(f32::NAN);
            LOST_LINE
        }
        Defect::RepeatedLine { line } if line == at.line => REPEATED_LINE,
        Defect::BandLost { band: b, first, last }
            if b == at.band
                && (first.0..=last.0).contains(&at.line)
                && (first.1..=last.1).contains(&at.position) =>
        {
            spectrum.fill(f32::NAN);
            BAND_LOST
        }
        _ => 0,
    }
}

/// The band's channel nearest to a wavenumber, if it lies within 1 cm-1.
fn nearest(band: &Band, wavenumber: f64) -> Option<usize> {
    let distance = |index: &usize| (band.wavenumbers[*index] - wavenumber).abs();
    (0..band.wavenumbers.len())
        .min_by(|a, b| distance(a).total_cmp(&distance(b)))
        .filter(|index| distance(index) < 1.0)
}

fn channel_bits(defects: &[Defect], instrument: &Instrument) -> Vec<Vec<i32>> {
    let of_band = |band: &Band| {
        let mut bits = vec![0; band.wavenumbers.len()];
        for defect in defects {
            let (wavenumber, bit) = match *defect {
                Defect::PoppingChannel { wavenumber, .. } => (wavenumber, CHANNEL_POPPING),
                Defect::NoisyChannel { wavenumber, .. } => (wavenumber, CHANNEL_NOISY),
                Defect::DeadChannel { wavenumber } => (wavenumber, CHANNEL_DEAD),
                _ => continue,
            };
            if let Some(channel) = nearest(band, wavenumber) {
                bits[channel] |= bit;
            }
        }
        bits
    };
    instrument.bands.iter().map(of_band).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn place(band: usize) -> Place {
        Place { line: 3, position: 2, detector: 1, footprint: 17, band }
    }

    fn spoiled(defect: Defect, at: &Place) -> (Vec<f32>, i32) {
        let band = &Instrument::reduced_interferometer().bands[at.band];
        let noise = vec![0.5; band.wavenumbers.len()];
        let mut spectrum = vec![80.0; band.wavenumbers.len()];
        let bits = spoil_by(&defect, at, band, &noise, &mut spectrum);
        (spectrum, bits)
    }

    #[test]
    fn a_lost_line_is_missing_and_nothing_else_is() {
        let (spectrum, bits) = spoiled(Defect::LostLine { line: 3 }, &place(0));
        assert!(spectrum.iter().all(|value| value.is_nan()));
        assert_eq!(bits, LOST_LINE);
        let (spectrum, bits) = spoiled(Defect::LostLine { line: 4 }, &place(0));
        assert!(spectrum.iter().all(|value| *value == 80.0) && bits == 0);
    }

    #[test]
    fn a_lost_band_leaves_the_others() {
        let defect = Defect::BandLost { band: 1, first: (2, 2), last: (3, 5) };
        assert!(spoiled(defect, &place(1)).0[0].is_nan());
        assert_eq!(spoiled(defect, &place(0)).0[0], 80.0);
    }

    #[test]
    fn a_popping_channel_is_alone() {
        let defect = Defect::PoppingChannel { wavenumber: 724.5, noises: 14.0, first: 0, last: 9 };
        let (spectrum, _) = spoiled(defect, &place(0));
        assert_eq!(spectrum.iter().filter(|value| **value != 80.0).count(), 1);
        let instrument = Instrument::reduced_interferometer();
        assert_eq!(channel_bits(&[defect], &instrument)[0].iter().sum::<i32>(), CHANNEL_POPPING);
    }
}
