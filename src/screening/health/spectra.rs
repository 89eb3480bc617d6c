//! Every spectrum of a band: what is missing, how well the components rebuild it, what stands out.

use rayon::prelude::*;

use super::detectors::DetectorChannels;
use super::grid::ScanGrid;
use super::readings::BandReadings;
use super::shift::{LineSums, Lines};
use crate::screening::unusual::{Basis, ManyResiduals, score};
use crate::spectral::{Ringing, RingingWindows};

/// The search in f32 keeps what comes this near to a limit; the f64 path decides.
const NEAR: f64 = 0.97;
/// A spike is one channel's own if its neighbours have less than this share of it.
const NEIGHBOURS_SHARE: f64 = 0.5;
/// Every so many channels make the key by which repeated spectra are found.
const KEY_STEP: usize = 16;

/// How the spectra of a band are looked through.
pub struct SpectraCheck<'c> {
    /// The band.
    pub readings: BandReadings<'c>,
    /// The components, if there are any.
    pub basis: Option<&'c Basis>,
    /// For each channel of the basis what its residual is multiplied with to be in units of its
    /// noise; 0 where no spikes are looked for.
    pub spike_scale: Vec<f32>,
    /// Channels of the band that may be missing without being missed.
    pub excused: &'c [bool],
    /// What detectors are compared in.
    pub compared: &'c DetectorChannels,
    /// Lines that show a spectral shift, if the band has some.
    pub lines: Option<&'c Lines>,
    /// Limits of a spike and of the score.
    pub spike: f64,
    /// Score from which on a spectrum is unusual.
    pub unusual: f64,
}

/// What was found about one spectrum.
#[derive(Debug, Clone, PartialEq)]
pub struct SpectrumReading {
    /// Channels without a value, of those that should have one.
    pub missing: usize,
    /// The longest stretch of them.
    pub stretch: usize,
    /// Reconstruction score; NaN without components or where too much is missing.
    pub score: f64,
    /// Ringing, where it can be told.
    pub ringing: Option<Ringing>,
    /// Channels of the band that stand out, with the noises that they do so by.
    pub spikes: Vec<(usize, f64)>,
    /// What the band's windows are warmer by than the mean of the sample, K; NaN where missing.
    pub window: f64,
    /// The same of the channels that vary the least.
    pub uniform: f64,
    /// The same for spectra that are the same; 0 for those with hardly a value.
    pub key: u64,
}

/// Room for one line, used again for the next.
#[derive(Default)]
struct Buffers {
    radiances: Vec<f64>,
    /// Residuals of whole spectra, one behind the other.
    block: Vec<f32>,
}

impl SpectraCheck<'_> {
    /// Power at Nyquist, over the usual one, from which on it is ringing; infinite where it can't be
    /// told.
    pub fn ringing_limit(&self, limit: f64) -> f64 {
        let windows = self.basis.and_then(|basis| RingingWindows::over(&basis.adjacent));
        windows.map_or(f64::INFINITY, |windows| windows.limit(limit))
    }

    /// Looks at all footprints, line by line; with the sums over each line that a shift is told from.
    pub fn all(&self, grid: &ScanGrid) -> (Vec<SpectrumReading>, Vec<LineSums>) {
        let many = self.basis.map(ManyResiduals::new);
        let windows = self.basis.and_then(|basis| RingingWindows::over(&basis.adjacent));
        let expected = self.excused.iter().filter(|excused| !**excused).count();
        let lines = (0..grid.lines).into_par_iter();
        let readings = lines.map_init(Buffers::default, |buffers, line| {
            self.line(grid, line, expected, many.as_ref(), windows.as_ref(), buffers)
        });
        let (readings, sums): (Vec<_>, Vec<_>) = readings.unzip();
        (readings.into_iter().flatten().collect(), sums)
    }

    fn line(
        &self,
        grid: &ScanGrid,
        line: usize,
        expected: usize,
        many: Option<&ManyResiduals<'_>>,
        windows: Option<&RingingWindows>,
        Buffers { radiances: buffer, block }: &mut Buffers,
    ) -> (Vec<SpectrumReading>, LineSums) {
        let width = self.basis.map_or(0, |basis| basis.channels.len());
        let first = line * grid.row_length();
        block.resize(grid.row_length() * width, 0.0);
        let mut readings = Vec::with_capacity(grid.row_length());
        // Spectra of which something is missing go the slow way.
        let mut whole = Vec::with_capacity(grid.row_length());
        let (mut sums, mut position) = (LineSums::default(), Vec::new());
        for offset in 0..grid.row_length() {
            self.readings.radiances(first + offset, buffer);
            self.readings.looked_at();
            self.gather_lines(grid, offset, buffer, &mut position, &mut sums);
            let mut reading = self.plain(buffer, expected);
            if let (Some(many), Some(basis)) = (many, self.basis) {
                if basis.channels.iter().all(|channel| buffer[*channel].is_finite()) {
                    many.normalise(buffer, &mut block[whole.len() * width..][..width]);
                    whole.push(offset);
                } else {
                    self.judge(&basis.residual(buffer), basis, windows, &mut reading);
                }
            }
            readings.push(reading);
        }
        if let (Some(many), Some(basis)) = (many, self.basis) {
            let block = &mut block[..whole.len() * width];
            many.unexplained(block);
            for (offset, rest) in whole.into_iter().zip(block.chunks_exact(width)) {
                if self.looks_plain(rest, windows, &mut readings[offset]) {
                    continue;
                }
                self.readings.radiances(first + offset, buffer);
                self.judge(&basis.residual(buffer), basis, windows, &mut readings[offset]);
            }
        }
        (readings, sums)
    }

    /// Takes the lines of one footprint; with the last detector the position is complete.
    fn gather_lines(
        &self,
        grid: &ScanGrid,
        offset: usize,
        radiances: &[f64],
        position: &mut Vec<f64>,
        sums: &mut LineSums,
    ) {
        // One detector is compared with no other.
        let Some(lines) = self.lines.filter(|lines| lines.alive.len() > 1) else { return };
        let detector = grid.detector(offset);
        if detector == 0 {
            position.clear();
        }
        if lines.alive.contains(&detector) {
            position.extend(lines.channels.iter().map(|channel| radiances[*channel]));
        }
        if detector + 1 == grid.detectors {
            sums.add(position);
        }
    }

    /// What needs no components.
    fn plain(&self, radiances: &[f64], expected: usize) -> SpectrumReading {
        let (mut missing, mut stretch, mut run) = (0, 0, 0);
        // Without a branch, so that several are looked at at once.
        let whole = radiances.iter().fold(true, |whole, value| whole & value.is_finite());
        for channel in self.readings.band.axis.sorted().iter().filter(|_| !whole) {
            if self.excused[*channel] {
                continue;
            }
            if radiances[*channel].is_finite() {
                run = 0;
            } else {
                missing += 1;
                run += 1;
                stretch = stretch.max(run);
            }
        }
        let key = if 2 * missing < expected { key(radiances) } else { 0 };
        let window = self.compared.window.signal(radiances);
        let uniform = self.compared.uniform.signal(radiances);
        let (score, ringing, spikes) = (f64::NAN, None, Vec::new());
        SpectrumReading { missing, stretch, score, ringing, spikes, window, uniform, key }
    }

    /// Score and ringing of a residual, and whether it is so far below all limits that it need not
    /// be worked out again.
    fn looks_plain(
        &self,
        rest: &[f32],
        windows: Option<&RingingWindows>,
        reading: &mut SpectrumReading,
    ) -> bool {
        let (squares, largest) = squares_and_largest(rest, &self.spike_scale);
        reading.score = (squares / rest.len() as f64).sqrt();
        reading.ringing = windows.map(|windows| windows.of_whole(rest));
        let largest = f64::from(largest);
        reading.score < NEAR * self.unusual && largest < NEAR * self.spike
    }

    /// Score, spikes and ringing by the f64 path.
    fn judge(
        &self,
        residual: &[f64],
        basis: &Basis,
        windows: Option<&RingingWindows>,
        reading: &mut SpectrumReading,
    ) {
        reading.score = score(residual);
        let there = residual.iter().filter(|value| value.is_finite()).count() as f64;
        let size = |at: Option<usize>| {
            let scale = |at: usize| f64::from(self.spike_scale[at]);
            let value = at.and_then(|at| Some((residual.get(at)? * scale(at)).abs()));
            value.filter(|value| value.is_finite()).unwrap_or(0.0)
        };
        let mut standing_out = Vec::new();
        for (at, own) in residual.iter().enumerate() {
            let value = size(Some(at));
            let others = there * reading.score.powi(2) - own.powi(2);
            let rest = (others / (there - 1.0)).max(0.0).sqrt();
            let beside = size(at.checked_sub(1)).max(size(Some(at + 1)));
            if value > self.spike * rest.max(1.0) && beside < NEIGHBOURS_SHARE * value {
                standing_out.push(at);
                reading.spikes.push((basis.channels[at], value));
            }
        }
        reading.ringing = windows.map(|windows| {
            windows.of(|at| if standing_out.contains(&at) { 0.0 } else { residual[at] })
        });
    }
}

/// Sums that grow side by side.
const LANES: usize = 8;

/// The sum of squares, and the largest size after scaling.
fn squares_and_largest(values: &[f32], scale: &[f32]) -> (f64, f32) {
    let (mut sums, mut largest) = ([0.0_f64; LANES], [0.0_f32; LANES]);
    let mut values = values.chunks_exact(LANES);
    let mut scale = scale.chunks_exact(LANES);
    for (values, scale) in values.by_ref().zip(scale.by_ref()) {
        for lane in 0..LANES {
            sums[lane] += f64::from(values[lane]) * f64::from(values[lane]);
            let size = (values[lane] * scale[lane]).abs();
            largest[lane] = if size > largest[lane] { size } else { largest[lane] };
        }
    }
    for (value, scale) in values.remainder().iter().zip(scale.remainder()) {
        sums[0] += f64::from(*value) * f64::from(*value);
        largest[0] = largest[0].max((value * scale).abs());
    }
    (sums.iter().sum(), largest.into_iter().fold(0.0, f32::max))
}

/// A number that is the same for the same values; never 0.
fn key(radiances: &[f64]) -> u64 {
    // Multipliers of Knuth's MMIX, The Art of Computer Programming 2, section 3.3.4.
    let values = radiances.iter().step_by(KEY_STEP);
    let mixed = values.fold(1, |key: u64, value| {
        (key.rotate_left(23) ^ value.to_bits()).wrapping_mul(6_364_136_223_846_793_005)
    });
    mixed.max(1)
}
