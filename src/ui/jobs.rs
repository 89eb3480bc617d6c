//! Work that runs beside the keys: jobs are values, their answers are events.

use std::path::PathBuf;
use std::sync::Arc;

use crate::flags::{FootprintSet, GranuleIdentity, LedgerReading};
use crate::layers::Layer;
use crate::review::{ManySpectra, Measure, Record, Review, Spectrum, ThresholdChange};
use crate::screening::Screened;
use crate::system::Cancel;
use crate::tray::Standing;

use super::bench::Quality;
use super::panes::strip::Group;
use super::place::Place;
use super::selecting::{Found, Join};
use super::spreading::{Against, Alike};
use super::trace_look::{Beside, ReferenceFile};

/// Something to be done. Each carries the number of its request, which the answer repeats: an
/// answer whose number is no longer waited for is dropped.
pub enum Job {
    /// Compare all spectra with one.
    Alike {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The one.
        footprint: usize,
        /// By what.
        measure: Measure,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Evaluate the second layer of the Spread.
    Against {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The expression.
        text: String,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Take a threshold over into the campaign's rulebook.
    Adopt {
        /// The request.
        request: u64,
        /// What changes.
        change: ThresholdChange,
    },
    /// Look what the ledgers say about a granule, without opening it on the table.
    Standing {
        /// The entry of the Tray.
        entry: usize,
        /// The file.
        path: PathBuf,
    },
    /// Sign a granule off that is not on the table, if it still lies within the limits.
    SignOff {
        /// The entry of the Tray.
        entry: usize,
        /// The file.
        path: PathBuf,
    },
    /// Open a granule.
    Open {
        /// The request.
        request: u64,
        /// The file.
        path: PathBuf,
    },
    /// Read all spectra of a granule.
    Fill {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The layer whose bands are read before the others.
        layer: String,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Hash a granule, read its ledgers, make ready to write.
    Record {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
    },
    /// Look whether others have decided something meanwhile.
    Reread {
        /// The request.
        request: u64,
        /// The granule by its content.
        identity: GranuleIdentity,
    },
    /// Evaluate the layer on show.
    Layer {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The expression.
        text: String,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Evaluate the indices of the Evidence.
    Indices {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The expressions.
        texts: Vec<String>,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Read what the producer says about quality.
    Quality {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
    },
    /// Run the campaign's rulebook, or the built-in one, over all spectra.
    Screen {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Read one spectrum before all others.
    Spectrum {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The footprint.
        footprint: usize,
    },
    /// Read the spectra of pins that are not in memory.
    Pinned {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The footprints.
        footprints: Vec<usize>,
    },
    /// Find what the Trace shows beside the spectrum.
    Trace {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// What is asked for.
        ask: TraceAsk,
    },
    /// Read what the Trace shows beside a footprint's spectrum: noise, calculated spectrum.
    Beside {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The footprint.
        footprint: usize,
    },
    /// Find the footprints that are to be selected.
    Select {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// How they go together with what is selected.
        join: Join,
        /// The condition that holds there.
        text: String,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Sum a layer up in granules, one answer for each.
    Along {
        /// The request.
        request: u64,
        /// The expression.
        text: String,
        /// The entries of the Tray with their files.
        paths: Vec<(usize, PathBuf)>,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Keep a place.
    Keep {
        /// The granule by its content.
        identity: GranuleIdentity,
        /// The place in it.
        place: Place,
    },
    /// Write the flag mask.
    Export {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// The folder to write into.
        folder: PathBuf,
        /// Files that must never be written to.
        inputs: Vec<PathBuf>,
    },
}

/// What the Trace may ask for.
pub enum TraceAsk {
    /// The mean of all spectra.
    Mean,
    /// How the spectra of these footprints lie; the selection in words.
    Envelope(FootprintSet, String),
    /// The spectrum in this file.
    File(PathBuf),
}

/// What was found for the Trace.
pub enum TraceFound {
    /// The mean of all spectra.
    Mean(ManySpectra),
    /// How the spectra of a selection lie; the selection in words.
    Envelope(ManySpectra, String),
    /// A spectrum out of a file.
    File(ReferenceFile),
}

/// What a job found.
pub enum Answer {
    /// All spectra were compared with one.
    Alike {
        /// The request.
        request: u64,
        /// How far they are from it.
        found: Result<Alike, String>,
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
