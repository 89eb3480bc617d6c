//! The hands: keys into the pseudo-terminal, counted, and how long the screen took to follow.

use std::collections::BTreeMap;
use std::time::Duration;

use crate::terminal::Session;

/// A session with its keystrokes counted.
pub struct Hands {
    session: Session,
    /// Keystrokes, by what they were for.
    pub strokes: BTreeMap<&'static str, usize>,
    /// How long the screen took to come to rest after each, by what it was for.
    pub answers: BTreeMap<&'static str, Vec<Duration>>,
}

impl Hands {
    /// Hands on a session.
    pub fn on(session: Session) -> Hands {
        Hands { session, strokes: BTreeMap::new(), answers: BTreeMap::new() }
    }

    /// Presses one key after the other, each once the screen has followed the one before.
    pub fn press(&mut self, keys: &str, purpose: &'static str) {
        for key in keys.chars() {
            let took = self.session.followed(&key.to_string());
            *self.strokes.entry(purpose).or_default() += 1;
            self.answers.entry(purpose).or_default().push(took);
        }
    }

    /// Waits until the screen shows something.
    pub fn wait(&self, what: &str, holds: impl Fn(&str) -> bool) {
        self.session.wait(what, holds);
        self.session.settle();
    }

    /// The screen's lines.
    pub fn lines(&self) -> Vec<String> {
        self.session.screen().lines().map(str::to_owned).collect()
    }

    /// What the status line says.
    pub fn status(&self) -> String {
        let lines = self.lines();
        lines.get(lines.len().saturating_sub(2)).cloned().unwrap_or_default()
    }

    /// The footprint under the cursor, from the title of the Trace.
    pub fn cursor(&self) -> Option<Vec<usize>> {
        let screen = self.session.screen();
        let (_, behind) = screen.split_once("Trace footprint (")?;
        let (inside, _) = behind.split_once(')')?;
        inside.split(", ").map(|index| index.parse().ok()).collect()
    }

    /// The granule on the table, counted from 0, from the title of the Tray.
    pub fn granule(&self) -> Option<usize> {
        let screen = self.session.screen();
        let (_, behind) = screen.split_once("Tray ")?;
        let number: usize = behind.split(' ').next()?.parse().ok()?;
        number.checked_sub(1)
    }

    /// Leaves.
    pub fn leave(&mut self) {
        self.session.keys("q");
        assert!(self.session.end().success(), "the review did not end well");
    }
}
