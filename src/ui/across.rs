//! Errands through granules of the Tray that are not on the table: comparing, deciding, screening.
//! They run beside the keys, one at a time, and Esc ends them.

use std::collections::BTreeMap;
use std::path::PathBuf;
use std::sync::Arc;

use jiff::Timestamp;

use crate::flags::FootprintSet;
use crate::review::Yardstick;
use crate::system::Cancel;
use crate::tray::Standing;

use super::app::App;
use super::colour::Tone;
use super::jobs::Job;
use super::keys::Action;
use super::overlay::Deed;
use super::spreading::{self, Reach};
use super::turning;

/// What is to be done in each granule.
#[derive(Debug, Clone)]
pub enum Errand {
    /// See how far its spectra are from one, and which of them a person has decided.
    Compare {
        /// By what.
        yardstick: Arc<Yardstick>,
        /// The one, as it is compared.
        spectrum: Vec<f64>,
    },
    /// Decide about some of its footprints.
    Decide {
        /// What.
        deed: Deed,
        /// Where, by entries of the Tray.
        at: BTreeMap<usize, FootprintSet>,
        /// The step that this is.
        step: String,
        /// When; the same everywhere, so that no granule's part is the later one.
        now: Timestamp,
    },
    /// Take a step back, or put it back.
    Turn {
        /// The step.
        step: String,
        /// Taken back, or else put back.
        back: bool,
        /// When.
        now: Timestamp,
    },
    /// Run the tests and write down what they say.
    Screen,
}

/// What an errand brought from one granule.
#[derive(Debug)]
pub enum Brought {
    /// Its spectra were compared.
    Compared(ComparedGranule),
    /// Something was decided: what its ledgers say now.
    Decided(Box<Standing>),
}

/// A granule whose spectra were compared with one.
#[derive(Debug, Clone, Default)]
pub struct ComparedGranule {
    /// How far each is from the one.
    pub values: Vec<f64>,
    /// Footprints that a person has decided.
    pub decided: Vec<DecidedSpectrum>,
}

/// A footprint that a person has decided, and its spectrum as it is compared.
#[derive(Debug, Clone, PartialEq)]
pub struct DecidedSpectrum {
    /// Which.
    pub footprint: usize,
    /// Its zero-based indices along its dimensions: `(12, 34, 5)`.
    pub position: String,
    /// The flags that it carries.
    pub flags: u32,
    /// The numbers that stand for its spectrum.
    pub spectrum: Vec<f64>,
}

/// An errand under way.
#[derive(Debug)]
pub struct Across {
    request: u64,
    errand: Errand,
    all: usize,
    done: usize,
    /// Granules where it could not be done, with the reason.
    faults: Vec<(usize, String)>,
    cancel: Cancel,
}

impl Across {
    /// Whether it writes decisions.
    pub fn writes(&self) -> bool {
        !matches!(self.errand, Errand::Compare { .. })
    }

    /// How far it has come: "comparing 3 of 11".
    pub fn words(&self) -> String {
        let verb = match &self.errand {
            Errand::Compare { .. } => "comparing",
            Errand::Decide { .. } => "deciding in",
            Errand::Turn { back: true, .. } => "taking back in",
            Errand::Turn { .. } => "putting back in",
            Errand::Screen => "tests in",
        };
        let here = (self.done + 1).min(self.all);
        // The work tells of all granules that it has begun with, which are much of one size.
        let share = self.cancel.share() * (self.done + 1) as f64 - self.done as f64;
        match share.clamp(0.0, 1.0) {
            none if none <= 0.0 => format!("{verb} {here} of {}", self.all),
            share => format!("{verb} {here} of {}, {:.0} %", self.all, (100.0 * share).floor()),
        }
    }
}

/// Whether decisions are being written in other granules; says so where they are.
pub fn is_writing(app: &mut App) -> bool {
    let words = app.across.as_ref().filter(|across| across.writes()).map(Across::words);
    if let Some(words) = &words {
        app.warn(format!("one moment: {words}"));
    }
    words.is_some()
}

/// Ends an errand that only looks: what it was about is on show no longer.
pub fn end_looking(app: &mut App) {
    if let Some(across) = app.across.take_if(|across| !across.writes()) {
        across.cancel.cancel();
    }
}

/// Runs an errand through these entries; one that only looks makes room for it.
pub fn begin(app: &mut App, errand: Errand, entries: &[usize]) -> Vec<Job> {
    if entries.is_empty() || is_writing(app) {
        return Vec::new();
    }
    end_looking(app);
    let request = app.request();
    let path = |entry: &usize| Some((*entry, app.tray.entry(*entry)?.path.clone()));
    let paths: Vec<(usize, PathBuf)> = entries.iter().filter_map(path).collect();
    let cancel = Cancel::new();
    app.across = Some(Across {
        request,
        errand: errand.clone(),
        all: paths.len(),
        done: 0,
        faults: Vec::new(),
        cancel: cancel.clone(),
    });
    vec![Job::Across { request, errand, paths, cancel }]
}

/// Entries of the Tray that can be used and are not on the table.
pub fn others(app: &App) -> Vec<usize> {
    let here = app.current_entry();
    let entries = app.tray.entries().iter().enumerate();
    let usable = entries.filter(|(entry, row)| row.error.is_none() && Some(*entry) != here);
    usable.map(|(entry, _)| entry).collect()
}

/// Takes what one granule brought.
pub fn take(app: &mut App, request: u64, entry: usize, found: Result<Brought, String>) -> Vec<Job> {
    let on_table = app.bench().is_some_and(|bench| bench.entry == entry);
    let Some(across) = app.across.as_mut().filter(|across| across.request == request) else {
        // It was ended meanwhile; what was decided before is on the disk all the same.
        return match found {
            Ok(Brought::Decided(_)) if on_table => turning::look_for_others(app),
            Ok(Brought::Decided(standing)) => {
                app.tray.set_standing(entry, *standing);
                Vec::new()
            }
            _ => Vec::new(),
        };
    };
    across.done += 1;
    let over = across.done >= across.all;
    let mut jobs = Vec::new();
    match found {
        Ok(Brought::Compared(granule)) => spreading::compared(app, entry, granule),
        // It was opened meanwhile, perhaps before that was decided.
        Ok(Brought::Decided(_)) if on_table => jobs.extend(turning::look_for_others(app)),
        Ok(Brought::Decided(standing)) => app.tray.set_standing(entry, *standing),
        Err(why) => {
            let name = app.tray.entry(entry).map(|entry| entry.name.clone()).unwrap_or_default();
            if let Some(across) = &mut app.across {
                across.faults.push((entry, format!("{name}: {why}")));
            }
        }
    }
    if over {
        jobs.extend(finish(app));
    }
    jobs
}

/// An errand ended in a fault of the program.
pub fn failed(app: &mut App, request: u64, why: String) {
    if app.across.as_ref().is_some_and(|across| across.request == request) {
        app.across = None;
        app.message = (why, Tone::Bad);
    }
}

fn finish(app: &mut App) -> Vec<Job> {
    let Some(across) = app.across.take() else { return Vec::new() };
    let granules = across.all - across.faults.len();
    let undo = app.keymap.hint(Action::Undo);
    match &across.errand {
        Errand::Compare { .. } => spreading::say_in_tray(app),
        Errand::Decide { deed, at, .. } => {
            let failed = |entry: &usize| across.faults.iter().any(|(fault, _)| fault == entry);
            let done = at.iter().filter(|(entry, _)| !failed(entry));
            let count: usize = done.map(|(_, footprints)| footprints.len()).sum();
            let words = match deed {
                // How many of them carried it, their ledgers know.
                Deed::Flag { give: false, .. } => deed.words(),
                _ => format!("{} at {count} more", deed.words()),
            };
            app.say(format!("{words} in {granules} granules; {undo} takes all back"));
        }
        Errand::Turn { back, .. } => {
            let verb = if *back { "taken back" } else { "put back" };
            app.say(format!("{}; {verb} in {granules} more granules", app.message.0));
        }
        // The question would take the next key, which may be meant for something else.
        Errand::Screen => {
            let sign = app.keymap.hint(Action::ByRule);
            app.say(format!("the tests have run in {granules} granules; {sign} signs off by rule"));
        }
    }
    if let Some((_, first)) = across.faults.first() {
        let count = across.faults.len();
        let more = if count > 1 { format!(" (and {} more)", count - 1) } else { String::new() };
        let said = app.message.0.clone();
        app.message = (format!("{said}; not in {first}{more}"), Tone::Bad);
    }
    turning::leave_if_done(app);
    Vec::new()
}

/// Ends the errand under way; false where there is none. What was decided stays.
pub fn give_up(app: &mut App) -> bool {
    let Some(across) = app.across.take() else { return false };
    across.cancel.cancel();
    let (done, all) = (across.done, across.all);
    match &across.errand {
        Errand::Compare { .. } => {
            if let Some(bench) = app.bench_mut() {
                bench.spread.reach = Reach::Here;
            }
            app.say(format!("compared in {done} of {all} granules and no further"));
        }
        _ => app.warn(format!("ended: done in {done} of {all} granules, or one more")),
    }
    true
}
