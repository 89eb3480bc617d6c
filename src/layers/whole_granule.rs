//! Numbers read from the file as they are asked for, and the first fault on the way.

use std::ops::Range;
use std::sync::{Mutex, MutexGuard, PoisonError};

use crate::granule::{Granule, GranuleError};
use crate::system::Cancel;

/// What could not be read, and at which footprint the asking began.
type Fault = (usize, GranuleError);

/// Reads for expressions, which know no errors but missing numbers: a fault is kept for later.
pub struct WholeGranule<'g> {
    cancel: &'g Cancel,
    first: Mutex<Option<Fault>>,
}

impl<'g> WholeGranule<'g> {
    /// Reads until `cancel` is asked for.
    pub fn new(cancel: &'g Cancel) -> Self {
        Self { cancel, first: Mutex::new(None) }
    }

    /// Some channels' values over some footprints; NaN where they cannot be read, and behind the
    /// first place where that was so.
    pub fn channels_over(
        &self,
        granule: &Granule,
        band: usize,
        channels: &[usize],
        footprints: Range<usize>,
        out: &mut [f64],
    ) {
        let start = footprints.start;
        let read = match self.is_lost_before(start) {
            true => return out.fill(f64::NAN),
            false if self.cancel.is_cancelled() => Err(GranuleError::Cancelled),
            false => granule.channels_over(band, channels, footprints, Some(self.cancel), out),
        };
        if let Err(error) = read {
            out.fill(f64::NAN);
            self.note(start, error);
        }
    }

    /// The calculated spectra of a band over some footprints; nothing where there are none, where they
    /// can't be read, and behind the first place where that was so.
    pub fn calculated_over(
        &self,
        granule: &Granule,
        band: usize,
        footprints: Range<usize>,
    ) -> Option<Vec<f64>> {
        let start = footprints.start;
        let read = match self.is_lost_before(start) {
            true => return None,
            false if self.cancel.is_cancelled() => Err(GranuleError::Cancelled),
            false => granule.calculated_clear(band, footprints),
        };
        read.unwrap_or_else(|error| {
            self.note(start, error);
            None
        })
    }

    fn note(&self, start: usize, error: GranuleError) {
        let mut first = self.first();
        if first.as_ref().is_none_or(|(before, _)| start < *before) {
            *first = Some((start, error));
        }
    }

    /// The fault at the first of the footprints that had one, however many threads asked.
    pub fn fault(self) -> Result<(), GranuleError> {
        let first = self.first.into_inner().unwrap_or_else(PoisonError::into_inner);
        first.map_or(Ok(()), |(_, error)| Err(error))
    }

    fn is_lost_before(&self, start: usize) -> bool {
        self.first().as_ref().is_some_and(|(before, _)| *before < start)
    }

    fn first(&self) -> MutexGuard<'_, Option<Fault>> {
        // It is put whole, so a panic elsewhere spoils nothing.
        self.first.lock().unwrap_or_else(PoisonError::into_inner)
    }
}
