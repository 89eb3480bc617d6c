//! The review in a terminal: from the start of the process to the first picture, from key to frame.

use std::io::{Read, Write};
use std::num::NonZero;
use std::path::Path;
use std::sync::mpsc::{Receiver, channel};
use std::time::{Duration, Instant};

use portable_pty::{Child, CommandBuilder, MasterPty, PtySize, native_pty_system};

use crate::full_size::{FullSize, PROGRAM};
use crate::table::Section;

/// A screen that stays as it is for so long is finished.
const QUIET: Duration = Duration::from_millis(700);

/// Longer than anything takes that goes well.
const PATIENCE: Duration = Duration::from_secs(60);

/// The program in a pseudo-terminal.
struct Session {
    screen: vt100::Parser,
    output: Receiver<(Instant, Vec<u8>)>,
    keyboard: Box<dyn Write + Send>,
    child: Box<dyn Child + Send + Sync>,
    _master: Box<dyn MasterPty + Send>,
    begun: Instant,
}

/// The tables for a small and a large terminal.
pub fn sections(full: &FullSize) -> Result<Vec<Section>, Box<dyn std::error::Error>> {
    [(80, 24), (160, 48)].into_iter().map(|size| section(full, size)).collect()
}

fn section(full: &FullSize, size: (u16, u16)) -> Result<Section, Box<dyn std::error::Error>> {
    // The first run makes the campaign folder, and tells how the finished map looks.
    let mut first = Session::start(full, size)?;
    first.settle()?;
    let whole = first.map_cells();
    first.leave()?;
    let mut times = [Duration::MAX; 4];
    for _ in 0..full.rounds {
        let mut session = Session::start(full, size)?;
        let enough = [1, whole / 20, whole];
        for (time, cells) in times.iter_mut().zip(enough) {
            *time = session.wait_for_map(cells.max(1))?.min(*time);
        }
        session.settle()?;
        times[3] = session.key_to_frame()?.min(times[3]);
        session.leave()?;
    }
    let names = [
        "start of the process to the first of the map",
        "start to a twentieth of the map",
        "start to the whole map",
        "key to the end of the frame",
    ];
    let (columns, rows) = size;
    Ok(Section {
        title: format!("Review of shape (a) in a terminal of {columns} x {rows}"),
        rows: names.into_iter().zip(times).collect(),
        notes: vec![format!("{whole} cells of map; the campaign folder is there already")],
    })
}

impl Session {
    fn start(full: &FullSize, size: (u16, u16)) -> Result<Self, Box<dyn std::error::Error>> {
        let (columns, rows) = size;
        let pair = native_pty_system().openpty(PtySize {
            rows,
            cols: columns,
            pixel_width: 0,
            pixel_height: 0,
        })?;
        let begun = Instant::now();
        let child = pair.slave.spawn_command(command(full.folder(), &full.path))?;
        drop(pair.slave);
        let mut reader = pair.master.try_clone_reader()?;
        let (send, output) = channel();
        std::thread::spawn(move || {
            let mut buffer = [0; 1 << 16];
            // A closed pseudo-terminal reads as an error on Linux: the program has ended.
            while let Ok(length @ 1..) = reader.read(&mut buffer) {
                if send.send((Instant::now(), buffer[..length].to_vec())).is_err() {
                    return;
                }
            }
        });
        Ok(Self {
            screen: vt100::Parser::new(cells(rows), cells(columns), 0),
            output,
            keyboard: pair.master.take_writer()?,
            child,
            _master: pair.master,
            begun,
        })
    }

    /// Takes what comes next; tells when it came. Nothing if nothing comes for `patience`.
    fn take(&mut self, patience: Duration) -> Option<Instant> {
        let (when, bytes) = self.output.recv_timeout(patience).ok()?;
        self.screen.process(&bytes);
        Some(when)
    }

    /// Cells that show two footprints, one above the other.
    fn map_cells(&self) -> usize {
        self.screen.screen().contents().matches('▀').count()
    }

    /// How long after the start the screen showed so many cells of the map.
    fn wait_for_map(&mut self, cells: usize) -> Result<Duration, &'static str> {
        let mut when = self.begun.elapsed();
        while self.map_cells() < cells {
            when = self.take(PATIENCE).ok_or("the map never came")? - self.begun;
        }
        Ok(when)
    }

    fn settle(&mut self) -> Result<(), &'static str> {
        self.wait_for_map(1)?;
        while self.take(QUIET).is_some() {}
        Ok(())
    }

    /// Moves the cursor about; the shortest time until the last byte of a frame has come.
    fn key_to_frame(&mut self) -> std::io::Result<Duration> {
        let mut best = Duration::MAX;
        for key in [b"l", b"j", b"l", b"j", b"h", b"k", b"h", b"k"] {
            let begun = Instant::now();
            self.keyboard.write_all(key)?;
            self.keyboard.flush()?;
            let mut last = None;
            let mut patience = PATIENCE;
            while let Some(when) = self.take(patience) {
                (last, patience) = (Some(when), Duration::from_millis(100));
            }
            best = last.map_or(best, |last| best.min(last - begun));
        }
        Ok(best)
    }

    fn leave(mut self) -> std::io::Result<()> {
        self.keyboard.write_all(b"q")?;
        self.keyboard.flush()?;
        while self.take(PATIENCE).is_some() {}
        self.child.wait().map(|_| ())
    }
}

fn cells(count: u16) -> NonZero<u16> {
    NonZero::new(count).unwrap_or(NonZero::<u16>::MIN)
}

fn command(folder: &Path, file: &Path) -> CommandBuilder {
    let mut command = CommandBuilder::new(PROGRAM);
    command.args(["review", "--campaign", "campaign"]);
    command.arg(file);
    command.cwd(folder);
    command.env_clear();
    for (name, value) in [("TERM", "xterm-256color"), ("PATH", "/usr/bin:/bin"), ("USER", "bench")]
    {
        command.env(name, value);
    }
    command.env("HOME", folder);
    command
}
