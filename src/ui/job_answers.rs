//! What jobs answer.

use std::path::PathBuf;
use std::sync::Arc;

use crate::flags::{LedgerReading, RulebookChange};
use crate::layers::Layer;
use crate::review::{Measured, Record, Review, Spectrum};
use crate::screening::Screened;
use crate::tray::Standing;

use super::across::Brought;
use super::bench::Quality;
use super::jobs::TraceFound;
use super::panes::strip::Group;
use super::place::Place;
use super::selecting::{Found, Join};
use super::spreading::{Against, Alike};
use super::trace_look::Beside;

/// What a job found.
pub enum Answer {
    /// All spectra were compared with one.
    Alike {
        /// The request.
        request: u64,
        /// How far they are from it.
        found: Result<Alike, String>,
    },
    /// All spectra were measured.
    Measured {
        /// The request.
        request: u64,
        /// The spectra as they are compared.
        found: Result<Arc<Measured>, String>,
    },
    /// An errand ended in a fault of the program.
    AcrossFailed {
        /// The request.
        request: u64,
        /// In words.
        why: String,
    },
    /// An errand in one granule is done.
    Across {
        /// The request.
        request: u64,
        /// The entry of the Tray.
        entry: usize,
        /// What it brought.
        found: Result<Brought, String>,
    },
    /// The second layer of the Spread was evaluated.
    Against {
        /// The request.
        request: u64,
        /// The layer.
        found: Result<Against, String>,
    },
    /// A threshold was taken over: in words.
    Adopted {
        /// The request.
        request: u64,
        /// What was done.
        found: Result<String, String>,
    },
    /// What the ledgers say about an entry of the Tray, or why it can't be used.
    Standing {
        /// The entry.
        entry: usize,
        /// What was found.
        found: Result<Standing, String>,
    },
    /// A granule was signed off by rule, or was not.
    SignedOff {
        /// The request.
        request: u64,
        /// The entry.
        entry: usize,
        /// What its ledgers say now.
        found: Result<Standing, String>,
    },
    /// A granule was opened, or could not be.
    Opened {
        /// The request.
        request: u64,
        /// The granule.
        found: Result<Arc<Review>, String>,
    },
    /// So much of the spectra is there.
    Filling {
        /// The request.
        request: u64,
        /// The share, 0 to 1.
        share: f64,
        /// Whether all that the first layer needs is among them.
        of_layer: bool,
    },
    /// The reading of the spectra ended.
    Filled {
        /// The request.
        request: u64,
        /// What could not be read.
        found: Result<(), String>,
    },
    /// The ledgers were read.
    Record {
        /// The request.
        request: u64,
        /// The record, and where one was in the granule the last time.
        found: Result<(Box<Record>, Option<Place>), String>,
    },
    /// What was changed in the campaign's rulebook, and what of it could not be read.
    Changes(Vec<RulebookChange>, Vec<String>),
    /// The ledgers were read once more.
    Reread {
        /// The request.
        request: u64,
        /// What they hold.
        found: LedgerReading,
    },
    /// The layer was evaluated.
    Layer {
        /// The request.
        request: u64,
        /// The layer.
        found: Result<Layer, String>,
    },
    /// The indices were evaluated.
    Indices {
        /// The request.
        request: u64,
        /// The layers in the order of the request.
        found: Vec<Result<Layer, String>>,
    },
    /// What the producer says about quality was read.
    Quality {
        /// The request.
        request: u64,
        /// The variables with their values.
        found: Vec<Quality>,
    },
    /// The tests have run, or could not.
    Screened {
        /// The request.
        request: u64,
        /// What they say.
        found: Result<Arc<Screened>, String>,
    },
    /// A spectrum was read.
    Spectrum {
        /// The request.
        request: u64,
        /// The spectrum.
        found: Result<Spectrum, String>,
    },
    /// Spectra of pins were read; those that cannot be are left out.
    Pinned {
        /// The request.
        request: u64,
        /// The spectra.
        found: Vec<Spectrum>,
    },
    /// What the Trace shows beside the spectrum was found.
    Trace {
        /// The request.
        request: u64,
        /// What was found.
        found: Result<TraceFound, String>,
    },
    /// A layer was summed up in a granule.
    Along {
        /// The request.
        request: u64,
        /// The entry of the Tray.
        entry: usize,
        /// What it came to; nothing where no footprint has a value.
        found: Result<Option<Group>, String>,
    },
    /// What stands beside a footprint's spectrum was read.
    Beside {
        /// The request.
        request: u64,
        /// What was found.
        found: Beside,
    },
    /// The footprints that are to be selected were found.
    Selected {
        /// The request.
        request: u64,
        /// How they go together with what is selected.
        join: Join,
        /// The footprints, and what has to be said about them.
        found: Found,
    },
    /// The flag mask was written.
    Exported {
        /// The request.
        request: u64,
        /// Where, and what has to be said about it.
        found: Result<(PathBuf, Vec<String>), String>,
    },
}
