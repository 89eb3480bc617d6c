//! Work that runs beside the keys: jobs are values, their answers are events.

use std::path::PathBuf;
use std::sync::Arc;

use crate::flags::{FootprintSet, GranuleIdentity};
use crate::review::{ManySpectra, Measure, Review, ThresholdChange};
use crate::system::Cancel;

use super::across::Errand;
pub use super::job_answers::Answer;
use super::place::Place;
use super::selecting::Join;
use super::trace_look::ReferenceFile;

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
    /// Measure all spectra, to be compared later.
    Measure {
        /// The request.
        request: u64,
        /// The granule.
        review: Arc<Review>,
        /// By what they are compared.
        measure: Measure,
        /// Ends it early.
        cancel: Cancel,
    },
    /// Run an errand through granules that are not on the table, one answer for each.
    Across {
        /// The request.
        request: u64,
        /// What is to be done there.
        errand: Errand,
        /// The entries of the Tray with their files.
        paths: Vec<(usize, PathBuf)>,
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
        /// The request.
        request: u64,
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
        /// Ends it early.
        cancel: Cancel,
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
