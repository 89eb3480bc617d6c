//! The values of a granule: filling the cube, and reading what is not in it.

use std::ops::{Deref, Range};
use std::sync::Arc;

use super::cube::{Cube, Presence};
use super::error::GranuleError;
use super::granule_file::Granule;
use super::side_by_side::{own_threads, side_by_side};
use crate::netcdf_files::{Demand, Samples};
use crate::system::Cancel;

/// How far reading has come.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Progress {
    /// Slabs that are here, or for which there is no room.
    pub done: usize,
    /// All slabs.
    pub total: usize,
}

/// The values of a slab, in the cube or passing by.
enum Slab<'g> {
    Kept(&'g Samples),
    Passing(Arc<Samples>),
}

impl Deref for Slab<'_> {
    type Target = Samples;

    fn deref(&self) -> &Samples {
        match self {
            Self::Kept(samples) => samples,
            Self::Passing(samples) => samples,
        }
    }
}

impl Granule {
    /// The values read so far. It fills up behind while it is used, as far as memory allows.
    pub fn cube(&self) -> Arc<Cube> {
        Arc::clone(&self.cube)
    }

    /// Reads the slabs that are not here yet, band by band, with several threads; tells after each
    /// slab how many are done. Slabs beyond the memory that the values may take are left out:
    /// [`Self::values`] and [`Self::channels_over`] read them when they are asked for.
    ///
    /// # Errors
    /// A slab could not be read (of several, the first one), or `cancel` was asked for; what is here
    /// stays.
    pub fn fill(
        &self,
        cancel: &Cancel,
        progress: &mut (dyn FnMut(Progress) + Send),
    ) -> Result<(), GranuleError> {
        self.fill_bands(0..self.bands.len(), cancel, progress)
    }

    /// The same for some bands only, in their order.
    pub fn fill_bands(
        &self,
        bands: impl IntoIterator<Item = usize>,
        cancel: &Cancel,
        progress: &mut (dyn FnMut(Progress) + Send),
    ) -> Result<(), GranuleError> {
        let slabs = |band| (0..self.cube.slabs(band)).map(move |slab| (band, slab));
        let slabs: Vec<(usize, usize)> = bands.into_iter().flat_map(slabs).collect();
        let fill = |(band, slab)| match cancel.is_cancelled() {
            true => Err(GranuleError::Cancelled),
            false => self.fill_slab_until(band, slab, Some(cancel)),
        };
        let _at_work = self.reader.at_work();
        let mut tell = |done| progress(Progress { done, total: slabs.len() });
        side_by_side(&slabs, fill, &mut tell)
    }

    /// Reads one slab of a band, if it is not here yet and there is room for it.
    pub fn fill_slab(&self, band: usize, slab: usize) -> Result<(), GranuleError> {
        self.fill_slab_until(band, slab, None)
    }

    fn fill_slab_until(
        &self,
        band: usize,
        slab: usize,
        cancel: Option<&Cancel>,
    ) -> Result<(), GranuleError> {
        if self.cube.has_slab(band, slab) || !self.cube.take_room(band, slab) {
            return Ok(());
        }
        match self.read_slab(band, slab, Demand { cancel, ..Demand::default() }) {
            Ok(samples) => self.cube.set_slab(band, slab, samples),
            Err(error) => {
                self.cube.give_room(band, slab);
                return Err(error);
            }
        }
        Ok(())
    }

    fn read_slab(
        &self,
        band: usize,
        slab: usize,
        demand: Demand<'_>,
    ) -> Result<Samples, GranuleError> {
        let layout = &self.sources[band].layout;
        let (start, count) = layout.rows(self.cube.rows_of(band, slab));
        let variable = self.band_variable(band);
        let samples = self.reader.read_on_demand(variable, &start, &count, demand)?;
        Ok(layout.footprint_major(&count, samples))
    }

    /// A slab out of the cube, or read and held for a while.
    fn slab(
        &self,
        band: usize,
        slab: usize,
        cancel: Option<&Cancel>,
    ) -> Result<Slab<'_>, GranuleError> {
        if let Some(samples) = self.cube.slab(band, slab) {
            return Ok(Slab::Kept(samples));
        }
        let bytes = self.cube.slab_bytes(band, slab);
        let read = || {
            // The slab's place is locked meanwhile.
            let demand = Demand { cancel, alone: true, ..Demand::default() };
            let samples = self.read_slab(band, slab, demand)?;
            self.cube.look_through(band, slab, &samples);
            Ok(samples)
        };
        self.passing.get((band, slab), bytes, read).map(Slab::Passing)
    }

    /// One footprint's values over all channels, into `out`, as [`Cube::values`] gives them; read
    /// where they are not in the cube. Costs least for one footprint after another.
    pub fn values(
        &self,
        band: usize,
        footprint: usize,
        cancel: Option<&Cancel>,
        out: &mut Vec<f64>,
    ) -> Result<(), GranuleError> {
        let number = self.cube.slab_of(band, footprint);
        let slab = self.slab(band, number, cancel)?;
        self.cube.values_of(band, number, &slab, footprint, out);
        Ok(())
    }

    /// Some channels' values over some footprints, into `out`, as [`Cube::channels_over`] gives them;
    /// read where they are not in the cube. Costs least for [`Self::footprints_at_once`] footprints.
    pub fn channels_over(
        &self,
        band: usize,
        channels: &[usize],
        footprints: Range<usize>,
        cancel: Option<&Cancel>,
        out: &mut [f64],
    ) -> Result<(), GranuleError> {
        let find = |slab| self.slab(band, slab, cancel).map(Some);
        self.cube.channels_of(band, channels, footprints, out, find).map(|_| ())
    }

    /// How many footprints, from the first one on, are best asked for together where they are read.
    pub fn footprints_at_once(&self) -> usize {
        let longest =
            (0..self.bands.len()).map(|band| self.cube.footprints_of(band, 0).len()).max();
        longest.unwrap_or(1).max(1)
    }

    /// Does work that reads much: in threads of its own, so that a picture drawn meanwhile does not
    /// wait for it, and with the memory for chunks kept at hand.
    pub fn at_work<Done: Send>(&self, work: impl FnOnce() -> Done + Send) -> Done {
        let _at_work = self.reader.at_work();
        match own_threads() {
            Some(threads) => threads.install(work),
            None => work(),
        }
    }

    /// One footprint's values over all channels, in mW m-2 sr-1 (cm-1)-1 or K by the band's quantity,
    /// missing as NaN: out of the cube, or straight from the file before all background reading.
    pub fn read_spectrum(&self, band: usize, footprint: usize) -> Result<Vec<f64>, GranuleError> {
        let mut values = Vec::new();
        if self.cube.values(band, footprint, &mut values) == Presence::Here {
            return Ok(values);
        }
        let slab = self.cube.slab_of(band, footprint);
        if let Some(samples) = self.passing.peek((band, slab)) {
            self.cube.values_of(band, slab, &samples, footprint, &mut values);
            return Ok(values);
        }
        let position = self.footprints.position(footprint);
        let (start, count) = self.sources[band].layout.spectrum(&position);
        let samples = self.reader.read(self.band_variable(band), &start, &count)?;
        Ok(self.cube.decode_spectrum(band, &samples))
    }

    /// Bytes of the values in memory, in the cube and passing by.
    pub fn held_bytes(&self) -> u64 {
        self.cube.held_bytes() + self.passing.bytes()
    }

    /// Bytes that all values take in memory.
    pub fn cube_bytes(&self) -> usize {
        usize::try_from(self.cube.bytes()).unwrap_or(usize::MAX)
    }
}
