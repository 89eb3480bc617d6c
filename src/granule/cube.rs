//! The values of all bands in memory, in slabs that arrive one after another.

use std::convert::Infallible;
use std::ops::{Deref, Range};
use std::sync::OnceLock;
use std::sync::atomic::{AtomicBool, AtomicU64, AtomicUsize, Ordering};

use super::band::Band;
use super::conversion::Conversion;
use super::decoder::Decoder;
use super::footprints::FootprintGrid;
use super::memory_plan::MemoryPlan;
use super::problem::Problem;
use crate::netcdf_files::Samples;
use crate::spectral::Hamming3;

/// Whether values have been read yet.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Presence {
    /// They are here.
    Here,
    /// They are still to be read.
    NotYet,
}

/// The values of all bands, as far as they have been read, in the file's own types.
///
/// Slabs lie along the first footprint dimension. Each is set once; readers never wait for it. Where
/// not all of them fit into the memory that they may take, the others are never set; who needs them
/// asks [`super::Granule`], which reads them.
#[derive(Debug)]
pub struct Cube {
    footprints: usize,
    row_length: usize,
    bands: Vec<BandCube>,
    /// Bytes that the cube may take.
    most: u64,
    taken: AtomicU64,
    full: AtomicBool,
}

#[derive(Debug)]
struct BandCube {
    name: String,
    rows: usize,
    rows_per_slab: usize,
    value_size: usize,
    conversion: Conversion,
    slabs: Vec<OnceLock<Samples>>,
    /// Slabs whose values have been looked through.
    looked_through: Vec<AtomicBool>,
    undeclared_fills: AtomicUsize,
}

/// How a band's values are stored and handed on.
pub(super) struct BandStorage {
    pub decoder: Decoder,
    pub rows_per_slab: usize,
    /// Bytes of a value.
    pub value_size: usize,
    pub apodise: Option<Hamming3>,
}

impl Cube {
    /// An empty cube for the given bands, each with its decoder and the rows that its slabs hold.
    pub(super) fn new(
        footprints: &FootprintGrid,
        bands: &[Band],
        storage: Vec<BandStorage>,
        memory: &MemoryPlan,
    ) -> Self {
        let rows = footprints.lengths().first().copied().unwrap_or(0);
        let band_cube = |(band, storage): (&Band, BandStorage)| BandCube {
            name: band.name.clone(),
            rows,
            rows_per_slab: storage.rows_per_slab,
            value_size: storage.value_size,
            conversion: Conversion::new(band, storage.decoder, storage.apodise),
            slabs: (0..rows.div_ceil(storage.rows_per_slab)).map(|_| OnceLock::new()).collect(),
            looked_through: (0..rows.div_ceil(storage.rows_per_slab))
                .map(|_| AtomicBool::new(false))
                .collect(),
            undeclared_fills: AtomicUsize::new(0),
        };
        let mut cube = Self {
            footprints: footprints.count(),
            row_length: footprints.row_length(),
            bands: bands.iter().zip(storage).map(band_cube).collect(),
            most: 0,
            taken: AtomicU64::new(0),
            full: AtomicBool::new(false),
        };
        cube.most = memory.kept(cube.bytes());
        cube
    }

    /// How many footprints the cube spans.
    pub fn footprints(&self) -> usize {
        self.footprints
    }

    /// How many slabs a band has.
    pub fn slabs(&self, band: usize) -> usize {
        self.bands[band].slabs.len()
    }

    /// The slab of a band that holds a footprint.
    pub fn slab_of(&self, band: usize, footprint: usize) -> usize {
        footprint / (self.bands[band].rows_per_slab * self.row_length).max(1)
    }

    /// The footprints of a slab.
    pub fn footprints_of(&self, band: usize, slab: usize) -> Range<usize> {
        let rows = self.rows_of(band, slab);
        rows.start * self.row_length..rows.end * self.row_length
    }

    /// Places along the first footprint dimension that a slab spans.
    pub(super) fn rows_of(&self, band: usize, slab: usize) -> Range<usize> {
        let band = &self.bands[band];
        let start = slab * band.rows_per_slab;
        start..(start + band.rows_per_slab).min(band.rows)
    }

    /// Whether a slab has been read.
    pub fn has_slab(&self, band: usize, slab: usize) -> bool {
        self.bands[band].slabs[slab].get().is_some()
    }

    /// Whether all of a band has been read.
    pub fn is_complete(&self, band: usize) -> bool {
        self.bands[band].slabs.iter().all(|slab| slab.get().is_some())
    }

    /// Bytes of the values that are here.
    pub fn held_bytes(&self) -> u64 {
        self.taken.load(Ordering::Relaxed)
    }

    /// Bytes that all values take together.
    pub fn bytes(&self) -> u64 {
        (0..self.bands.len()).map(|band| self.bytes_over(band, self.footprints)).sum()
    }

    /// Whether memory is used up, and slabs have been left out.
    pub fn is_full(&self) -> bool {
        self.full.load(Ordering::Relaxed)
    }

    /// Bytes of a slab's values.
    pub(super) fn slab_bytes(&self, band: usize, slab: usize) -> u64 {
        self.bytes_over(band, self.footprints_of(band, slab).len())
    }

    fn bytes_over(&self, band: usize, footprints: usize) -> u64 {
        let band = &self.bands[band];
        footprints.saturating_mul(band.conversion.channels()).saturating_mul(band.value_size) as u64
    }

    /// The values of a slab, if they are here.
    pub(super) fn slab(&self, band: usize, slab: usize) -> Option<&Samples> {
        self.bands[band].slabs[slab].get()
    }

    /// Takes the room that a slab needs; whether there was enough.
    pub(super) fn take_room(&self, band: usize, slab: usize) -> bool {
        let bytes = self.slab_bytes(band, slab);
        let taken = |taken: u64| taken.checked_add(bytes).filter(|taken| *taken <= self.most);
        let fits = self.taken.fetch_update(Ordering::Relaxed, Ordering::Relaxed, taken).is_ok();
        self.full.fetch_or(!fits, Ordering::Relaxed);
        fits
    }

    /// Gives room back that was taken for a slab.
    pub(super) fn give_room(&self, band: usize, slab: usize) {
        self.taken.fetch_sub(self.slab_bytes(band, slab), Ordering::Relaxed);
    }

    /// Puts a slab in its place, for which room was taken: footprint by footprint, the channels of
    /// each side by side.
    pub(super) fn set_slab(&self, band: usize, slab: usize, samples: Samples) {
        self.look_through(band, slab, &samples);
        // Two that read the same slab read the same values; the first one counts.
        if self.bands[band].slabs[slab].set(samples).is_err() {
            self.give_room(band, slab);
        }
    }

    /// Notices what is odd in the values of a slab, the first time that it is read.
    pub(super) fn look_through(&self, band: usize, slab: usize, samples: &Samples) {
        let band = &self.bands[band];
        if !band.looked_through[slab].swap(true, Ordering::Relaxed) {
            let undeclared = band.conversion.undeclared_fills(samples);
            band.undeclared_fills.fetch_add(undeclared, Ordering::Relaxed);
        }
    }

    /// One footprint's values over all channels, into `out`: mW m-2 sr-1 (cm-1)-1 or K, by the
    /// band's quantity. Missing values are NaN, and so is everything that is not here yet.
    pub fn values(&self, band: usize, footprint: usize, out: &mut Vec<f64>) -> Presence {
        let slab = self.slab_of(band, footprint);
        match self.bands[band].slabs.get(slab).and_then(OnceLock::get) {
            Some(samples) => {
                self.values_of(band, slab, samples, footprint, out);
                Presence::Here
            }
            None => {
                out.clear();
                out.resize(self.bands[band].conversion.channels(), f64::NAN);
                Presence::NotYet
            }
        }
    }

    /// The same, out of the values of the footprint's slab.
    pub(super) fn values_of(
        &self,
        band: usize,
        slab: usize,
        samples: &Samples,
        footprint: usize,
        out: &mut Vec<f64>,
    ) {
        let first = self.footprints_of(band, slab).start;
        let conversion = &self.bands[band].conversion;
        out.clear();
        conversion.decode_spectrum(samples, (footprint - first) * conversion.channels(), out);
    }

    /// One channel's values over all footprints, into `out` (of [`Self::footprints`] values):
    /// mW m-2 sr-1 (cm-1)-1 or K. Missing values and what is not here yet are NaN.
    pub fn channel(&self, band: usize, channel: usize, out: &mut [f64]) -> Presence {
        self.channels_over(band, &[channel], 0..self.footprints, out)
    }

    /// Some channels' values over some footprints, into `out`: all of the first channel, then all of
    /// the second, and so on; otherwise as [`Self::channel`]. Each spectrum is gone through once.
    pub fn channels_over(
        &self,
        band: usize,
        channels: &[usize],
        footprints: Range<usize>,
        out: &mut [f64],
    ) -> Presence {
        let find = |slab| -> Result<_, Infallible> { Ok(self.slab(band, slab)) };
        let Ok(all) = self.channels_of(band, channels, footprints, out, find);
        if all { Presence::Here } else { Presence::NotYet }
    }

    /// The same, with the values of each slab from `find`; those of a slab that it has not are NaN.
    /// Whether it had all of them.
    pub(super) fn channels_of<Slab: Deref<Target = Samples>, Fault>(
        &self,
        band: usize,
        channels: &[usize],
        footprints: Range<usize>,
        out: &mut [f64],
        find: impl Fn(usize) -> Result<Option<Slab>, Fault>,
    ) -> Result<bool, Fault> {
        let (length, mut all) = (footprints.len(), true);
        let mut at = footprints.start;
        while at < footprints.end {
            let slab = self.slab_of(band, at);
            let held = self.footprints_of(band, slab);
            let part = at..held.end.min(footprints.end);
            let place = part.start - footprints.start..part.end - footprints.start;
            match find(slab)? {
                Some(samples) => {
                    let first = part.start - held.start;
                    let conversion = &self.bands[band].conversion;
                    conversion.decode_channels(&samples, first, channels, place, length, out);
                }
                None => {
                    out.chunks_mut(length).for_each(|out| out[place.clone()].fill(f64::NAN));
                    all = false;
                }
            }
            at = part.end;
        }
        Ok(all)
    }

    /// The running mean that a band's values are apodised by, where that was asked for.
    pub(super) fn apodised_by(&self, band: usize) -> Option<&Hamming3> {
        self.bands[band].conversion.apodise()
    }

    /// Decodes values that were read past the cube: one footprint's channels.
    pub(super) fn decode_spectrum(&self, band: usize, samples: &Samples) -> Vec<f64> {
        let mut out = Vec::new();
        self.bands[band].conversion.decode_spectrum(samples, 0, &mut out);
        out
    }

    /// What was noticed in the values read so far.
    pub fn notes(&self) -> Vec<Problem> {
        let notes = self.bands.iter().filter_map(|band| {
            let count = band.undeclared_fills.load(Ordering::Relaxed);
            (count > 0).then(|| {
                Problem::note(
                    &format!(
                        "{count} values of -900 or less, which the file does not declare as missing"
                    ),
                    &band.name,
                    "taken as missing; give them as _FillValue or missing_value",
                )
            })
        });
        notes.collect()
    }
}
