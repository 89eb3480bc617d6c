//! Work that does not end with the granule that it came from, and that leaving waits for: exports,
//! sign-offs by rule, thresholds taken over into the rulebook.

use std::collections::BTreeMap;

use super::app::App;
use super::colour::Tone;
use super::exporting::Waiting;

/// What is still to be done, and what is under way.
#[derive(Default)]
pub struct Owed {
    /// Exports that have not begun.
    pub exports: Vec<Waiting>,
    /// What is under way by its request: "the mask of lowen_001.nc".
    under_way: BTreeMap<u64, String>,
}

impl Owed {
    /// Whether nothing is.
    pub fn is_empty(&self) -> bool {
        self.exports.is_empty() && self.under_way.is_empty()
    }

    /// Something was begun by this request.
    pub fn begin(&mut self, request: u64, what: String) {
        self.under_way.insert(request, what);
    }

    /// The answer of a request is there: what it was about, if it was owed.
    pub fn end(&mut self, request: u64) -> Option<String> {
        self.under_way.remove(&request)
    }

    /// What is waited for, in words.
    pub fn words(&self) -> String {
        let exports = self.exports.iter().map(Waiting::what);
        let all: Vec<String> = self.under_way.values().cloned().chain(exports).collect();
        match &all[..] {
            [] => String::new(),
            [only] => format!("writing {only}"),
            [first, others @ ..] => format!("writing {first} and {} more", others.len()),
        }
    }
}

/// Something owed could not be done. Whoever is about to leave hears of it and stays.
pub fn failed(app: &mut App, words: String) {
    let stays = if std::mem::take(&mut app.leaving) { "; not left" } else { "" };
    app.message = (words + stays, Tone::Bad);
}
