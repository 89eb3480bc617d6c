//! The state of the screen. `update` changes it, `draw` reads it.

use std::path::PathBuf;
use std::sync::Arc;

use jiff::Timestamp;
use ratatui::layout::{Rect, Size};

use crate::flags::{Author, Campaign, KeySetting, RulebookChange};
use crate::granule::Opening;
use crate::review::Record;
use crate::tray::Tray;

use super::across::Across;
use super::bench::{Bench, RecordState};
use super::colour::{Theme, Tone};
use super::event::Ending;
use super::keymap::Keymap;
use super::keys::Action;
use super::ledger::LedgerLook;
use super::line::History;
use super::overlay::{Deed, Overlay};
use super::owed::Owed;
use super::panes::{Arrangement, Pane, ScreenLayout};
use super::precedents::Visit;
use super::spreading::Known;
use super::strip::Strip;

/// What the review is given from outside; the same for its whole life.
#[derive(Clone)]
pub struct Outside {
    /// How granules are opened.
    pub opening: Opening,
    /// Where decisions, places and exports go.
    pub campaign: Campaign,
    /// Who sits there.
    pub author: Author,
    /// The version of this program.
    pub program: String,
    /// The wall clock.
    pub clock: Arc<dyn Fn() -> Timestamp + Send + Sync>,
    /// Keys of the person's own.
    pub keys: Vec<KeySetting>,
    /// Why nothing can be decided, where the campaign cannot be written to.
    pub look_only: Option<String>,
    /// The layer to begin with instead of the suggested one.
    pub first_layer: Option<String>,
}

/// What lies on the table.
pub enum Table {
    /// Nothing: no granule could be opened, or none was there.
    Empty,
    /// The granule of this entry is being opened, as an answer to this request.
    Opening {
        /// The entry of the Tray.
        entry: usize,
        /// The request that is to be answered.
        request: u64,
        /// Where to look further if it can't be opened.
        direction: Direction,
    },
    /// A granule.
    Bench(Box<Bench>),
}

/// Which way to go through the Tray.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Direction {
    /// Towards its end.
    Forward,
    /// Towards its beginning.
    Backward,
    /// Towards its end, past what is signed off.
    ForwardUnsigned,
}

/// The whole state.
pub struct App {
    /// What was given from outside.
    pub outside: Arc<Outside>,
    /// How the screen looks.
    pub theme: Theme,
    /// Which key does what.
    pub keymap: Keymap,
    /// The granules in hand.
    pub tray: Tray,
    /// The row of the Tray under its own cursor.
    pub tray_cursor: usize,
    /// The granule on the table.
    pub table: Table,
    /// The first granule that is not signed off is still being looked for.
    pub searching: bool,
    /// The first case of doubt of the granule being opened is to be shown, as this request asked.
    pub seek_case: Option<u64>,
    /// The footprint to go to in the granule being opened, as soon as its ledgers are read, and what
    /// is said of it then.
    pub seek_footprint: Option<(usize, String)>,
    /// Going round the footprints that are like one and decided.
    pub visit: Option<Visit>,
    /// What is to be done as soon as the ledgers of the granule being opened are read.
    pub then: Option<Action>,
    /// Records of granules left while their last decisions were still on the way to the disk.
    pub left: Vec<Record>,
    /// How the panes stand.
    pub panes: Arrangement,
    /// What the Strip lies along.
    pub strip: Strip,
    /// What lies over the panes.
    pub overlay: Overlay,
    /// How one goes through the Ledger.
    pub ledger: LedgerLook,
    /// What was changed in the campaign's rulebook, the earliest first.
    pub rulebook_changes: Vec<RulebookChange>,
    /// Lines of the Evidence that are scrolled away.
    pub evidence_scroll: usize,
    /// What leaving waits for beside decisions.
    pub owed: Owed,
    /// What is being done in granules that are not on the table.
    pub across: Option<Across>,
    /// Footprints that persons have decided in granules whose spectra were compared.
    pub known: Known,
    /// What happened last.
    pub message: (String, Tone),
    /// What was typed on the command line.
    pub history: History,
    /// What was done last, to be done once more.
    pub last_deed: Option<Deed>,
    /// Where the panes lie; none on a screen that is too small. Kept by the drawing loop.
    pub layout: Option<ScreenLayout>,
    /// Whether mouse reports are on.
    pub mouse: bool,
    /// What the mouse hovers over, in words, until a key or a button is pressed.
    pub hovered: Option<String>,
    /// The person wants to leave as soon as everything is written.
    pub leaving: bool,
    /// The program is to end: with this exit code.
    pub ended: Option<u8>,
    /// Something changed since the last drawing.
    pub changed: bool,
    /// The screen has to be drawn from scratch.
    pub redraw: bool,
    /// The terminal has to be taken over anew.
    pub renew: bool,
    /// As little as possible is sent to the terminal.
    pub low_bandwidth: bool,
    /// The cursor rests: panes that tell of the footprint under it are drawn. Where little is to be
    /// sent they wait for it.
    pub rested: bool,
    /// What is said once the first granule is there.
    pub welcome: Option<String>,
    /// The program is to stop to the shell.
    pub suspend: bool,
    requests: u64,
    /// The number of the latest request when the latest key, click or paste came.
    heard: u64,
}

impl App {
    /// The state before anything was opened.
    pub fn new(outside: Outside, theme: Theme, tray: Tray) -> App {
        let keymap =
            Keymap::with(outside.campaign.settings().keys.iter().chain(outside.keys.iter()));
        App {
            outside: Arc::new(outside),
            keymap,
            theme,
            tray,
            tray_cursor: 0,
            table: Table::Empty,
            searching: false,
            seek_case: None,
            seek_footprint: None,
            visit: None,
            then: None,
            left: Vec::new(),
            panes: Arrangement::default(),
            strip: Strip::default(),
            overlay: Overlay::None,
            ledger: LedgerLook::default(),
            rulebook_changes: Vec::new(),
            evidence_scroll: 0,
            owed: Owed::default(),
            across: None,
            known: Known::default(),
            message: (String::new(), Tone::Plain),
            history: History::default(),
            last_deed: None,
            layout: None,
            mouse: false,
            hovered: None,
            leaving: false,
            ended: None,
            changed: true,
            redraw: false,
            renew: false,
            low_bandwidth: false,
            rested: true,
            welcome: None,
            suspend: false,
            requests: 0,
            heard: 0,
        }
    }

    /// The number of the next request.
    pub fn request(&mut self) -> u64 {
        self.requests += 1;
        self.requests
    }

    /// A key, a click or a paste comes.
    pub fn hear(&mut self) {
        self.heard = self.requests;
    }

    /// Whether a request is of the latest key: nothing was pressed since. An answer that comes later
    /// must not turn what the next key is about.
    pub fn is_latest(&self, request: u64) -> bool {
        request > self.heard
    }

    /// The granule on the table.
    pub fn bench(&self) -> Option<&Bench> {
        match &self.table {
            Table::Bench(bench) => Some(bench),
            _ => None,
        }
    }

    /// The granule on the table, to change what is shown of it.
    pub fn bench_mut(&mut self) -> Option<&mut Bench> {
        match &mut self.table {
            Table::Bench(bench) => Some(bench),
            _ => None,
        }
    }

    /// The Tray's entry that is on the table or on its way there.
    pub fn current_entry(&self) -> Option<usize> {
        match &self.table {
            Table::Empty => None,
            Table::Opening { entry, .. } => Some(*entry),
            Table::Bench(bench) => Some(bench.entry),
        }
    }

    /// Says something in the status line.
    pub fn say(&mut self, words: impl Into<String>) {
        self.message = (words.into(), Tone::Plain);
    }

    /// Warns in the status line.
    pub fn warn(&mut self, words: impl Into<String>) {
        self.message = (words.into(), Tone::Warning);
    }

    /// The time by the clock that was passed in.
    pub fn now(&self) -> Timestamp {
        (self.outside.clock)()
    }

    /// All records that may still be writing: the table's and those left behind.
    pub fn records(&self) -> impl Iterator<Item = &Record> {
        let table = self.bench().and_then(|bench| bench.record.open());
        table.into_iter().chain(&self.left)
    }

    /// The same, to hear what they have to say.
    pub fn records_mut(&mut self) -> impl Iterator<Item = &mut Record> {
        let table = match &mut self.table {
            Table::Bench(bench) => bench.record.open_mut(),
            _ => None,
        };
        self.left.iter_mut().chain(table)
    }

    /// Takes all records out, to wait for their last decisions.
    pub fn take_records(&mut self) -> Vec<Record> {
        let mut records = std::mem::take(&mut self.left);
        if let Table::Bench(bench) = std::mem::replace(&mut self.table, Table::Empty)
            && let RecordState::Open(record) = bench.record
        {
            records.push(*record);
        }
        records
    }

    /// The pane that takes the keys.
    pub fn focus(&self) -> Pane {
        self.panes.focus()
    }

    /// Where a pane lies, if it is on show.
    pub fn area_of(&self, pane: Pane) -> Option<Rect> {
        self.layout.as_ref()?.area(pane)
    }

    /// Lays the panes out on a screen of this size.
    pub fn lay_out(&mut self, size: Size) {
        self.layout = ScreenLayout::of(Rect::new(0, 0, size.width, size.height), &self.panes);
    }

    /// Decisions that are not known to be on the disk, in all granules.
    pub fn pending(&self) -> usize {
        self.records().map(Record::pending).sum()
    }

    /// Whether something runs beside the keys that tells how far it is.
    pub fn is_working(&self) -> bool {
        self.across.is_some() || self.bench().is_some_and(|bench| bench.awaited.screen != 0)
    }

    /// Why decisions could not be written, if they could not.
    pub fn write_failure(&self) -> Option<&str> {
        self.records().find_map(Record::failure)
    }

    /// Ends at once with the exit code that belongs to the reason.
    pub fn end(&mut self, ending: Ending) {
        let number = match ending {
            Ending::Signal(number) => number,
            // As if the hang-up had been signalled.
            Ending::TerminalGone => 1,
        };
        self.ended = Some(u8::try_from(128 + number).unwrap_or(u8::MAX));
    }

    /// Where exports go unless another folder is named.
    pub fn export_folder(&self) -> PathBuf {
        self.outside.campaign.folder().join("exports")
    }
}
