//! What a granule on the table is made of, as the screen holds it.

use std::sync::Arc;

use crate::review::{OnRecord, Record, Spectrum};
use crate::screening::Screened;
use crate::system::Cancel;

/// What was decided about the granule.
pub enum RecordState {
    /// Its content and its ledgers are still being read.
    Reading,
    /// All is known, and new decisions can be written.
    Open(Box<Record>),
    /// It can't be; in words.
    Failed(String),
}

impl RecordState {
    /// The record, if it is open.
    pub fn open(&self) -> Option<&Record> {
        match self {
            RecordState::Open(record) => Some(record),
            _ => None,
        }
    }

    /// The record, if it is open, to decide.
    pub fn open_mut(&mut self) -> Option<&mut Record> {
        match self {
            RecordState::Open(record) => Some(record),
            _ => None,
        }
    }
}

/// What the signs over the Field tell.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Signs {
    /// The flags that stand.
    #[default]
    Flags,
    /// The flags that the tests set.
    Tests,
    /// The doubt of the tests in tenths.
    Doubt,
    /// Nothing: the layer alone.
    None,
}

impl Signs {
    /// The next, round and round.
    pub fn next(self) -> Signs {
        match self {
            Signs::Flags => Signs::Tests,
            Signs::Tests => Signs::Doubt,
            Signs::Doubt => Signs::None,
            Signs::None => Signs::Flags,
        }
    }

    /// In words, for the status line.
    pub fn words(self) -> &'static str {
        match self {
            Signs::Flags => "signs: the flags that stand",
            Signs::Tests => "signs: the flags that the tests set",
            Signs::Doubt => "signs: doubt in tenths, from 2 on",
            Signs::None => "no signs: the layer alone",
        }
    }
}

/// A footprint pinned to compare.
pub struct Pinned {
    /// Which.
    pub footprint: usize,
    /// Its letter on the map and at the curve.
    pub letter: char,
    /// Its spectrum, once it is there.
    pub spectrum: Option<Spectrum>,
}

/// An index of the Evidence.
pub struct Index {
    /// The expression.
    pub text: String,
    /// What it tells, in two words.
    pub label: String,
    /// Its unit's label.
    pub unit: String,
    /// One value per footprint, or why there are none.
    pub values: Result<Vec<f64>, String>,
}

/// A variable of the producer's on quality.
pub struct Quality {
    /// Its number among the granule's variables.
    pub variable: usize,
    /// One value per footprint, or why there are none.
    pub values: Result<Vec<f64>, String>,
}

/// How far the reading of the spectra has come.
#[derive(Default)]
pub struct Filling {
    /// The request of the job that reads.
    pub request: u64,
    /// Ends that job.
    pub cancel: Cancel,
    /// The share that is there, 0 to 1.
    pub share: f64,
    /// All that the first layer needs is there.
    pub of_layer: bool,
    /// All is there.
    pub done: bool,
    /// Why some of it can't be read, if so.
    pub problem: Option<String>,
}

/// What the tests of the rulebook say about the granule.
#[derive(Default)]
pub struct Tests {
    /// Ends the job that runs them.
    pub cancel: Cancel,
    /// What they say, once they have run over all spectra.
    pub screened: Option<Arc<Screened>>,
    /// How that compares with what stands in the ledgers as tests' decisions.
    pub on_record: OnRecord,
    /// Why they could not run, if so.
    pub problem: Option<String>,
}

/// Ends the jobs whose answers have been overtaken by a newer request: where the granule does not fit
/// into memory each of them reads the whole file.
#[derive(Default)]
pub struct Overtaken {
    /// The layer.
    pub layer: Cancel,
    /// The indices.
    pub indices: Cancel,
    /// The comparison of spectra.
    pub alike: Cancel,
    /// The second layer of the Spread.
    pub against: Cancel,
    /// Measuring the spectra.
    pub measured: Cancel,
    /// What the Trace shows beside the spectrum.
    pub trace: Cancel,
}

impl Overtaken {
    /// Ends all jobs.
    pub fn end_all(&self) {
        self.layer.cancel();
        self.indices.cancel();
        self.alike.cancel();
        self.against.cancel();
        self.measured.cancel();
        self.trace.cancel();
    }
}

/// Ends the job before, and lends what ends the next one.
pub fn overtake(job: &mut Cancel) -> Cancel {
    job.cancel();
    *job = Cancel::new();
    job.clone()
}

/// The numbers of requests whose answers are waited for; 0 is none.
#[derive(Debug, Clone, Copy, Default)]
pub struct Awaited {
    /// Reading the ledgers.
    pub record: u64,
    /// Reading the ledgers once more.
    pub reread: u64,
    /// Evaluating the layer.
    pub layer: u64,
    /// Reading the spectrum under the cursor.
    pub spectrum: u64,
    /// Reading the spectra of pins.
    pub pins: u64,
    /// Evaluating the indices.
    pub indices: u64,
    /// Reading what the producer says about quality.
    pub quality: u64,
    /// Finding what the Trace shows beside the spectrum.
    pub trace: u64,
    /// Reading what stands beside the spectrum under the cursor.
    pub beside: u64,
    /// Running the tests.
    pub screen: u64,
    /// Evaluating the second layer of the Spread.
    pub against: u64,
    /// Comparing spectra.
    pub alike: u64,
    /// Measuring the spectra.
    pub measured: u64,
    /// Finding footprints to select.
    pub select: u64,
}
