//! Taking the terminal over and giving it back whole: on leaving, on errors, on panics and signals.

use std::io::{self, BufWriter, IsTerminal, Stdout, Write};
use std::os::fd::AsFd;
use std::sync::Once;
use std::sync::atomic::{AtomicBool, Ordering};

use crossterm::style::Print;
use crossterm::terminal::{
    BeginSynchronizedUpdate, Clear, ClearType, DisableLineWrap, EndSynchronizedUpdate,
};
use crossterm::{cursor, execute, queue, terminal};
use ratatui::backend::CrosstermBackend;
use ratatui::buffer::Buffer;
use ratatui::layout::{Rect, Size};
use ratatui::{Frame, Terminal, TerminalOptions, Viewport};

type Writer = BufWriter<Stdout>;

/// Buttons, dragging and the wheel with plain decimal positions.
const MOUSE_ON: &str = "\x1b[?1000h\x1b[?1002h\x1b[?1006h";
/// Every movement too; not over a slow link, where that would be traffic without end.
const MOUSE_MOVES_ON: &str = "\x1b[?1003h";
const MOUSE_OFF: &str = "\x1b[?1006l\x1b[?1003l\x1b[?1002l\x1b[?1000l";
const PASTE_ON: &str = "\x1b[?2004h";
/// Ends a synchronised update, mouse and paste reports and colours, wraps lines again, leaves the
/// alternate screen and shows the cursor.
const GIVE_BACK: &[u8] =
    b"\x1b[?2026l\x1b[?1006l\x1b[?1003l\x1b[?1002l\x1b[?1000l\x1b[?2004l\x1b[0m\
\x1b[?7h\x1b[?1049l\x1b[?25h";

/// True while the terminal is in our hands.
static TAKEN: AtomicBool = AtomicBool::new(false);
static PANIC_HOOK: Once = Once::new();

/// What the terminal tells of the mouse.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum MouseReports {
    /// Nothing: the mouse is the terminal's.
    Off,
    /// Buttons, dragging and the wheel.
    Buttons,
    /// Every movement too.
    Moves,
}

impl MouseReports {
    fn sequence(self) -> String {
        match self {
            MouseReports::Off => MOUSE_OFF.to_owned(),
            MouseReports::Buttons => MOUSE_ON.to_owned(),
            MouseReports::Moves => format!("{MOUSE_ON}{MOUSE_MOVES_ON}"),
        }
    }
}

/// The terminal in our hands; given back when this is dropped.
pub struct Screen {
    terminal: Terminal<CrosstermBackend<Writer>>,
    synchronised: bool,
    /// What was drawn last, where it is kept.
    last: Option<Buffer>,
}

/// Drawn on where the terminal does not know its size (batch systems start shells without one).
const UNKNOWN_SIZE: Size = Size { width: 80, height: 24 };

/// Whether a terminal is there that can show the review.
pub fn is_usable(term: Option<&str>) -> bool {
    io::stdout().is_terminal() && !matches!(term, None | Some("" | "dumb"))
}

impl Screen {
    /// Raw mode, alternate screen, pastes in one piece; a blank screen to draw on.
    ///
    /// # Errors
    /// Whatever the terminal refuses; it is then given back already.
    pub fn take(mouse: MouseReports, synchronised: bool) -> io::Result<Screen> {
        install_panic_hook();
        TAKEN.store(true, Ordering::SeqCst);
        match start(mouse) {
            Ok(terminal) => Ok(Screen { terminal, synchronised, last: None }),
            Err(error) => {
                give_back();
                Err(error)
            }
        }
    }

    /// Takes the terminal over once more, after the shell or something else had it in between.
    ///
    /// # Errors
    /// The terminal has gone away.
    pub fn take_again(&mut self, mouse: MouseReports) -> io::Result<()> {
        give_back();
        TAKEN.store(true, Ordering::SeqCst);
        self.terminal = start(mouse)?;
        self.last = None;
        Ok(())
    }

    /// The size of the screen.
    ///
    /// # Errors
    /// The terminal has gone away.
    pub fn size(&self) -> io::Result<Size> {
        let size = self.terminal.size()?;
        Ok(if size.width == 0 || size.height == 0 { UNKNOWN_SIZE } else { size })
    }

    /// Draws what changed since the last time.
    ///
    /// # Errors
    /// The terminal has gone away.
    pub fn draw(&mut self, draw: impl FnOnce(&mut Frame<'_>)) -> io::Result<()> {
        if self.synchronised {
            queue!(self.terminal.backend_mut(), BeginSynchronizedUpdate)?;
        }
        self.terminal.draw(draw)?;
        if self.synchronised {
            queue!(self.terminal.backend_mut(), EndSynchronizedUpdate)?;
        }
        io::Write::flush(self.terminal.backend_mut())
    }

    /// The same with what was drawn the last time, of which parts may be kept.
    ///
    /// # Errors
    /// The terminal has gone away.
    pub fn draw_kept(
        &mut self,
        draw: impl FnOnce(&mut Frame<'_>, Option<&Buffer>),
    ) -> io::Result<()> {
        let last = self.last.take();
        let drawn = self.terminal.draw(|frame| draw(frame, last.as_ref()))?;
        self.last = Some(drawn.buffer.clone());
        io::Write::flush(self.terminal.backend_mut())
    }

    /// Makes the next drawing a complete one, for a screen that something else wrote on.
    ///
    /// # Errors
    /// The terminal has gone away.
    pub fn forget(&mut self) -> io::Result<()> {
        // Resizing to the present size blanks the screen without asking the terminal anything.
        let size = self.size()?;
        self.terminal.resize(Rect::new(0, 0, size.width, size.height))
    }

    /// Switches mouse reports on or off.
    ///
    /// # Errors
    /// The terminal has gone away.
    pub fn set_mouse(&mut self, mouse: MouseReports) -> io::Result<()> {
        execute!(self.terminal.backend_mut(), Print(mouse.sequence()))
    }
}

impl Drop for Screen {
    fn drop(&mut self) {
        give_back();
    }
}

fn start(mouse: MouseReports) -> io::Result<Terminal<CrosstermBackend<Writer>>> {
    terminal::enable_raw_mode()?;
    let mut writer = BufWriter::with_capacity(64 * 1024, io::stdout());
    queue!(writer, terminal::EnterAlternateScreen, DisableLineWrap, Clear(ClearType::All))?;
    queue!(writer, Print(PASTE_ON), cursor::Hide)?;
    if mouse != MouseReports::Off {
        queue!(writer, Print(mouse.sequence()))?;
    }
    writer.flush()?;
    let backend = CrosstermBackend::new(writer);
    if terminal::size().is_ok_and(|(width, height)| width == 0 || height == 0) {
        let area = Rect::new(0, 0, UNKNOWN_SIZE.width, UNKNOWN_SIZE.height);
        return Terminal::with_options(
            backend,
            TerminalOptions { viewport: Viewport::Fixed(area) },
        );
    }
    Terminal::new(backend)
}

/// Gives the terminal back, from any thread. Errors are of no use here: the terminal may be gone.
pub fn give_back() {
    if !TAKEN.swap(false, Ordering::SeqCst) {
        return;
    }
    // Written past the locked standard output: its owner may be stuck in the middle of a frame.
    let _ = rustix::io::write(io::stdout().as_fd(), GIVE_BACK);
    let _ = terminal::disable_raw_mode();
}

/// A panic on the thread that owns the screen gives the terminal back before it is reported. A
/// panic elsewhere is a job's: its runner turns it into a message, and the screen stays.
fn install_panic_hook() {
    PANIC_HOOK.call_once(|| {
        let owner = std::thread::current().id();
        let report = std::panic::take_hook();
        std::panic::set_hook(Box::new(move |panic| {
            if std::thread::current().id() == owner {
                give_back();
                report(panic);
            } else if !TAKEN.load(Ordering::SeqCst) {
                report(panic);
            }
        }));
    });
}
