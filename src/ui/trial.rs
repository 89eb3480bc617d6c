//! The screen without a terminal, for tests: a state, keys, what follows. Jobs are done at once
//! and in order, or held back.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicI64, Ordering};
use std::time::{Duration, Instant};

use jiff::{SignedDuration, Timestamp};
use ratatui::Terminal;
use ratatui::backend::TestBackend;
use ratatui::layout::Size;

use super::app::{App, Outside};
use super::bench::Bench;
use super::colour::{Background, ColourDepth, Theme};
use super::event::{Event, Input};
use super::jobs::{Answer, Job};
use super::key::Key;
use super::{draw, turning, update, work};
use crate::flags::{Author, Campaign};
use crate::granule::Opening;
use crate::netcdf_files::{NetcdfWriter, ReaderProgram, Samples, ValueKind, VariableDraft};
use crate::review::Record;
use crate::spectral::planck;
use crate::tray::Tray;

/// Scan lines of a granule for tests.
pub const LINES: usize = 5;
/// Positions in a scan line.
pub const POSITIONS: usize = 6;

/// Writes a granule whose footprint `n` is a black body of 250 + n kelvins.
pub fn write_granule(path: &Path) {
    let mut writer = NetcdfWriter::create(path).unwrap();
    writer.dimension("line", LINES).unwrap();
    writer.dimension("position", POSITIONS).unwrap();
    let place = ["line", "position"];
    let mut put = |draft: VariableDraft, values: Vec<f64>| {
        writer.variable(&draft).unwrap();
        writer.put_all(&draft.path, &Samples::F64(values)).unwrap();
    };
    let field = |path: &str, units: &str| {
        VariableDraft::new(path, ValueKind::F64, &place).attribute("units", units)
    };
    let over_all = |value: fn(usize) -> f64| (0..LINES * POSITIONS).map(value).collect::<Vec<_>>();
    put(field("latitude", "degrees_north"), over_all(|n| 10.0 - (n / POSITIONS) as f64));
    put(field("longitude", "degrees_east"), over_all(|n| 30.0 + (n % POSITIONS) as f64));
    for (band, wavenumbers) in
        [("long", vec![830.0, 831.0, 832.0, 899.0, 900.0, 901.0]), ("mid", vec![1230.0, 1231.0])]
    {
        writer.dimension(band, wavenumbers.len()).unwrap();
        let axis = VariableDraft::new(band, ValueKind::F64, &[band]).attribute("units", "cm-1");
        writer.variable(&axis).unwrap();
        writer.put_all(band, &Samples::F64(wavenumbers.clone())).unwrap();
        let name = format!("radiance_{band}");
        let draft = VariableDraft::new(&name, ValueKind::F64, &["line", "position", band])
            .attribute("units", "mW m-2 sr-1 (cm-1)-1")
            .attribute("standard_name", "toa_outgoing_radiance_per_unit_wavenumber");
        let values = (0..LINES * POSITIONS)
            .flat_map(|n| wavenumbers.iter().map(move |nu| planck(*nu, 250.0 + n as f64)));
        writer.variable(&draft).unwrap();
        writer.put_all(&name, &Samples::F64(values.collect())).unwrap();
    }
    writer.close().unwrap();
}

/// A folder with granules and a campaign. Its clock goes on by a second at every look.
pub struct Place {
    folder: tempfile::TempDir,
    seconds: Arc<AtomicI64>,
    /// Why nothing can be decided, if so.
    pub look_only: Option<String>,
}

impl Place {
    /// Granules of these names.
    pub fn with(names: &[&str]) -> Place {
        let folder = tempfile::tempdir().unwrap();
        for name in names {
            write_granule(&folder.path().join(name));
        }
        Place { folder, seconds: Arc::default(), look_only: None }
    }

    fn clock(&self) -> Arc<dyn Fn() -> Timestamp + Send + Sync> {
        let seconds = Arc::clone(&self.seconds);
        let noon: Timestamp = "2026-03-01T12:00:00Z".parse().unwrap();
        Arc::new(move || {
            let passed = seconds.fetch_add(1, Ordering::Relaxed);
            noon.checked_add(SignedDuration::from_secs(passed)).unwrap()
        })
    }

    /// A path in the folder.
    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// Begins a review of these files by `ada`.
    pub fn review(&self, names: &[&str]) -> Trial {
        let mut trial = self.review_held(names);
        trial.settle();
        trial
    }

    /// The same by somebody else.
    pub fn review_by(&self, person: &str, names: &[&str]) -> Trial {
        let mut trial = self.held(person, names);
        trial.settle();
        trial
    }

    /// A review by `ada` with no job done yet.
    pub fn review_held(&self, names: &[&str]) -> Trial {
        self.held("ada", names)
    }

    fn held(&self, person: &str, names: &[&str]) -> Trial {
        let campaign = Campaign::open_or_create(&self.path("campaign")).unwrap();
        let outside = Outside {
            opening: Opening::new(ReaderProgram::in_process()),
            campaign,
            author: Author { person: person.into(), host: "desk".into(), process: 7 },
            program: "0.0.0".to_owned(),
            clock: self.clock(),
            keys: Vec::new(),
            look_only: self.look_only.clone(),
            first_layer: None,
        };
        let theme = Theme { depth: ColourDepth::None, ascii: true, background: Background::Dark };
        let tray = Tray::new(names.iter().map(|name| self.path(name)).collect());
        let mut app = App::new(outside, theme, tray);
        app.lay_out(Size::new(80, 24));
        let jobs = turning::start(&mut app);
        Trial { app, jobs }
    }
}

/// The screen on trial.
pub struct Trial {
    /// The state.
    pub app: App,
    /// Jobs that were named and not done yet.
    pub jobs: Vec<Job>,
}

impl Trial {
    /// Presses keys, written as the help writes them, with spaces between; after each, all jobs
    /// are done and all decisions kept.
    pub fn keys(&mut self, keys: &str) -> &mut Trial {
        for key in keys.split_whitespace() {
            self.press(key);
            self.settle();
        }
        self
    }

    /// Types text, key by key.
    pub fn types(&mut self, text: &str) -> &mut Trial {
        for letter in text.chars() {
            self.event(Event::Input(Input::Key(Key::char(letter))));
        }
        self.settle();
        self
    }

    /// Presses one key and does nothing more.
    pub fn press(&mut self, key: &str) {
        let key = key_named(key);
        self.event(Event::Input(Input::Key(key)));
    }

    /// Lets an event happen; its jobs wait.
    pub fn event(&mut self, event: Event) {
        let jobs = update(&mut self.app, event);
        self.jobs.extend(jobs);
    }

    /// Does the first job that waits and returns its answers, which have not been given yet.
    pub fn answers_of_next(&mut self) -> Vec<Answer> {
        let job = self.jobs.remove(0);
        let answers = std::sync::Mutex::new(Vec::new());
        let keep = |answer| answers.lock().unwrap().push(answer);
        work::perform(&job, &self.app.outside, &keep);
        answers.into_inner().unwrap()
    }

    /// Does all jobs, and those that follow from them; waits until all decisions are kept or
    /// have failed.
    pub fn settle(&mut self) {
        let patience = Instant::now() + Duration::from_secs(60);
        loop {
            while !self.jobs.is_empty() {
                for answer in self.answers_of_next() {
                    self.event(Event::Answer(answer));
                }
            }
            let waits = self.app.pending() > 0 && self.app.write_failure().is_none();
            if !waits {
                return;
            }
            assert!(Instant::now() < patience, "the ledger's writer says nothing");
            std::thread::sleep(Duration::from_millis(1));
            self.event(Event::LedgerMoved);
        }
    }

    /// The granule on the table.
    pub fn bench(&self) -> &Bench {
        self.app.bench().expect("a granule is on the table")
    }

    /// Its record.
    pub fn record(&self) -> &Record {
        self.bench().record.open().expect("the record is open")
    }

    /// The footprints that carry a flag.
    pub fn flagged(&self, flag: &str) -> Vec<usize> {
        let mask = self.record().vocabulary().by_name(flag).unwrap().mask();
        let flags = &self.record().state().footprint_flags;
        (0..flags.len()).filter(|one| flags[*one] & mask != 0).collect()
    }

    /// What the status line says.
    pub fn message(&self) -> &str {
        &self.app.message.0
    }

    /// The name of the granule on the table.
    pub fn granule(&self) -> String {
        self.bench().review.granule().name()
    }

    /// The screen as text, drawn at this size.
    pub fn screen(&mut self, width: u16, height: u16) -> String {
        self.app.lay_out(Size::new(width, height));
        let mut terminal = Terminal::new(TestBackend::new(width, height)).unwrap();
        terminal.draw(|frame| draw(&self.app, frame)).unwrap();
        let buffer = terminal.backend().buffer();
        let row = |y: u16| (0..width).map(|x| buffer[(x, y)].symbol()).collect::<String>();
        (0..height).map(row).map(|row| row.trim_end().to_owned() + "\n").collect()
    }

    /// Leaves: keeps the place, as the loop does at its end.
    pub fn leave(mut self) {
        self.keys("q");
        assert_eq!(self.app.ended, Some(0));
        for job in turning::keep_place(&self.app) {
            work::perform(&job, &self.app.outside, &|_| {});
        }
        for record in self.app.take_records() {
            record.close(Duration::from_secs(60)).unwrap();
        }
    }
}

/// The key of a name as the help writes it.
fn key_named(name: &str) -> Key {
    Key::named(name).unwrap_or_else(|| panic!("{name} is no key"))
}
