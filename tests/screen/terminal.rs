//! A person at a terminal: starts the program in a pseudo-terminal, types, reads the screen.

use std::io::{Read, Write};
use std::num::NonZero;
use std::path::Path;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};
use std::sync::{Arc, Mutex};
use std::thread;
use std::time::{Duration, Instant};

use portable_pty::{Child, CommandBuilder, ExitStatus, MasterPty, PtySize, native_pty_system};

/// How long a screen may take to appear before the test gives up. Generous: it decides when a
/// broken program is given up, never whether a working one is fast enough.
const PATIENCE: Duration = Duration::from_secs(60);

/// The program in a pseudo-terminal of a given size.
pub struct Session {
    parser: Arc<Mutex<vt100::Parser>>,
    bytes: Arc<AtomicUsize>,
    gone: Arc<AtomicBool>,
    keyboard: Option<Box<dyn Write + Send>>,
    master: Option<Box<dyn MasterPty + Send>>,
    child: Box<dyn Child + Send + Sync>,
}

impl Session {
    /// Starts `radsieve` with `arguments` in `folder`, in an environment of its own with
    /// `variables` added.
    pub fn start_with(
        folder: &Path,
        columns: u16,
        rows: u16,
        arguments: &[&str],
        variables: &[(&str, &str)],
    ) -> Session {
        let mut command = CommandBuilder::new(env!("CARGO_BIN_EXE_radsieve"));
        command.args(arguments);
        Session::run(folder, columns, rows, command, variables)
    }

    /// Starts a shell with job control, as a person has one.
    pub fn shell(folder: &Path, columns: u16, rows: u16) -> Session {
        let mut command = CommandBuilder::new("/bin/bash");
        command.args(["--norc", "--noprofile", "-i"]);
        Session::run(folder, columns, rows, command, &[("PS1", "shell> ")])
    }

    fn run(
        folder: &Path,
        columns: u16,
        rows: u16,
        mut command: CommandBuilder,
        variables: &[(&str, &str)],
    ) -> Session {
        let size = PtySize { rows, cols: columns, pixel_width: 0, pixel_height: 0 };
        let pair = native_pty_system().openpty(size).unwrap();
        command.cwd(folder);
        command.env_clear();
        command.env("TERM", "xterm-256color");
        command.env("USER", "tester");
        command.env("HOME", folder);
        command.env("PATH", "/usr/bin:/bin");
        for (name, value) in variables {
            command.env(name, value);
        }
        let child = pair.slave.spawn_command(command).unwrap();
        drop(pair.slave);
        let parser = Arc::new(Mutex::new(vt100::Parser::new(cells(rows), cells(columns), 0)));
        let bytes = Arc::new(AtomicUsize::new(0));
        let mut output = pair.master.try_clone_reader().unwrap();
        let gone = Arc::new(AtomicBool::new(false));
        let (screen, count, left) = (Arc::clone(&parser), Arc::clone(&bytes), Arc::clone(&gone));
        thread::spawn(move || {
            let mut buffer = [0; 8192];
            // A closed pseudo-terminal reads as an error on Linux: the program has ended.
            while let Ok(length) = output.read(&mut buffer) {
                if length == 0 || left.load(Ordering::SeqCst) {
                    break;
                }
                count.fetch_add(length, Ordering::SeqCst);
                screen.lock().unwrap().process(&buffer[..length]);
            }
        });
        let keyboard = Some(pair.master.take_writer().unwrap());
        Session { parser, bytes, gone, keyboard, master: Some(pair.master), child }
    }

    /// Types `keys` as they come from a keyboard.
    pub fn keys(&mut self, keys: &str) {
        let keyboard = self.keyboard.as_mut().expect("the terminal is still there");
        keyboard.write_all(keys.as_bytes()).unwrap();
        keyboard.flush().unwrap();
    }

    /// The whole screen as text.
    pub fn screen(&self) -> String {
        self.parser.lock().unwrap().screen().contents()
    }

    /// Waits until the screen shows `text`; fails with the last screen when it never does.
    pub fn expect(&self, text: &str) {
        self.wait(&format!("`{text}` on the screen"), |screen| screen.contains(text));
    }

    /// Waits until `text` is the last thing on the screen.
    pub fn expect_last(&self, text: &str) {
        self.wait(&format!("`{text}` at the end"), |screen| screen.trim_end().ends_with(text));
    }

    /// Waits until the screen no longer shows `text`.
    pub fn expect_gone(&self, text: &str) {
        self.wait(&format!("`{text}` to vanish"), |screen| !screen.contains(text));
    }

    /// Waits until what the screen shows holds; fails with the last screen when it never does.
    pub fn wait(&self, what: &str, holds: impl Fn(&str) -> bool) {
        let start = Instant::now();
        loop {
            let screen = self.screen();
            if holds(&screen) {
                return;
            }
            assert!(start.elapsed() < PATIENCE, "waited in vain for {what}; the screen:\n{screen}");
            thread::sleep(Duration::from_millis(10));
        }
    }

    /// Waits until nothing has been written for a quarter of a second.
    pub fn settle(&self) -> usize {
        let start = Instant::now();
        let mut last = self.bytes.load(Ordering::SeqCst);
        loop {
            thread::sleep(Duration::from_millis(250));
            let now = self.bytes.load(Ordering::SeqCst);
            if now == last {
                return now;
            }
            assert!(
                start.elapsed() < PATIENCE,
                "the screen never comes to rest:\n{}",
                self.screen()
            );
            last = now;
        }
    }

    /// Types `keys` and waits until the screen has followed and come to rest. Returns how long after
    /// the keys the last byte came; nothing where no byte came at all.
    #[allow(dead_code, reason = "the written trial measures with it, tests never do")]
    pub fn followed(&mut self, keys: &str) -> Duration {
        const REST: Duration = Duration::from_millis(120);
        let start = Instant::now();
        let mut last = (self.bytes.load(Ordering::SeqCst), start);
        self.keys(keys);
        loop {
            thread::sleep(Duration::from_millis(1));
            let (bytes, now) = (self.bytes.load(Ordering::SeqCst), Instant::now());
            if bytes != last.0 {
                last = (bytes, now);
            }
            let patience = if last.1 == start { 10 * REST } else { REST };
            if now - last.1 > patience {
                return last.1 - start;
            }
        }
    }

    /// Changes the size of the terminal.
    pub fn resize(&self, columns: u16, rows: u16) {
        self.parser.lock().unwrap().screen_mut().set_size(cells(rows), cells(columns));
        let size = PtySize { rows, cols: columns, pixel_width: 0, pixel_height: 0 };
        self.master.as_ref().expect("the terminal is still there").resize(size).unwrap();
    }

    /// Takes the terminal away, as a dropped connection does.
    pub fn hang_up(&mut self) {
        self.gone.store(true, Ordering::SeqCst);
        // Closing the keyboard sends an end of transmission, to which the program draws an answer;
        // that wakes the thread that reads the screen, which closes the last handle.
        self.keyboard = None;
        self.master = None;
    }

    /// Whether the terminal was asked for every movement of the mouse.
    pub fn tells_of_every_movement(&self) -> bool {
        let parser = self.parser.lock().unwrap();
        parser.screen().mouse_protocol_mode() == vt100::MouseProtocolMode::AnyMotion
    }

    /// The program's process number.
    pub fn process(&self) -> u32 {
        self.child.process_id().unwrap()
    }

    /// Kills the program at once, as the system does when memory runs out.
    pub fn kill(&mut self) {
        self.child.kill().unwrap();
        self.child.wait().unwrap();
    }

    /// Waits for the end of the program.
    pub fn end(&mut self) -> ExitStatus {
        let start = Instant::now();
        loop {
            if let Some(status) = self.child.try_wait().unwrap() {
                // What was written last may still be on its way through the pseudo-terminal.
                thread::sleep(Duration::from_millis(100));
                return status;
            }
            if start.elapsed() > PATIENCE {
                let screen = self.screen();
                self.child.kill().unwrap();
                panic!("the program does not end; the screen:\n{screen}");
            }
            thread::sleep(Duration::from_millis(10));
        }
    }

    /// Asserts that the terminal is as it was before the program started.
    pub fn assert_given_back(&self) {
        self.assert_given_back_to_shell();
        let parser = self.parser.lock().unwrap();
        assert!(!parser.screen().bracketed_paste(), "bracketed paste is still on");
    }

    /// The same where a shell has the terminal now, which may switch bracketed paste on itself.
    pub fn assert_given_back_to_shell(&self) {
        let parser = self.parser.lock().unwrap();
        let screen = parser.screen();
        assert!(!screen.alternate_screen(), "still on the alternate screen");
        assert!(!screen.hide_cursor(), "the cursor is hidden");
        assert_eq!(screen.mouse_protocol_mode(), vt100::MouseProtocolMode::None, "mouse is on");
    }
}

fn cells(count: u16) -> NonZero<u16> {
    NonZero::new(count).expect("a terminal has at least one cell")
}

impl Drop for Session {
    fn drop(&mut self) {
        // A failed test leaves no program behind; one that has ended cannot be killed, which is fine.
        let _ = self.child.kill();
    }
}
