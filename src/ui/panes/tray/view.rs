//! What the Tray shows.

use crate::ui::colour::Tone;

/// Everything the Tray shows.
#[derive(Clone, Debug)]
pub struct TrayView<'a> {
    /// The granules, in order.
    pub rows: &'a [TrayRow],
    /// The granule on the table.
    pub current: usize,
    /// The row under the Tray's own cursor.
    pub cursor: usize,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// One granule of the Tray.
#[derive(Clone, Debug, PartialEq)]
pub struct TrayRow {
    /// How far its review has come.
    pub state: TrayState,
    /// The file's name, cleaned.
    pub name: String,
    /// Its shares, once they are known.
    pub shares: Option<TrayShares>,
    /// What is said of it instead, while something is tried on all granules; or empty.
    pub note: String,
}

/// How far the review of a granule has come.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TrayState {
    /// Nobody has decided anything.
    Untouched,
    /// Decisions exist.
    InHand,
    /// Done.
    SignedOff,
    /// Put aside with a reason.
    SetAside,
    /// Being opened.
    Opening,
    /// The file can't be used.
    Unusable,
}

/// Shares of a granule's footprints; they need not add up to one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TrayShares {
    /// Share with any flag, 0 to 1.
    pub flagged: f64,
    /// Share looked at and without a flag, 0 to 1.
    pub no_flag: f64,
    /// Share that nobody and nothing has assessed, 0 to 1.
    pub not_assessed: f64,
    /// Share that tests leave in doubt, 0 to 1, once they have run.
    pub in_doubt: Option<f64>,
}

impl TrayState {
    /// The sign before a granule's name.
    pub fn sign(self, ascii: bool) -> char {
        match (self, ascii) {
            (Self::Untouched, false) => '○',
            (Self::InHand, false) => '◐',
            (Self::SignedOff, false) => '✓',
            (Self::SetAside, false) => '−',
            (Self::Opening, false) => '…',
            (Self::Untouched, true) => '.',
            (Self::InHand, true) => 'o',
            (Self::SignedOff, true) => '*',
            (Self::SetAside, true) => '-',
            (Self::Opening, true) => '~',
            (Self::Unusable, _) => '!',
        }
    }

    /// The state in words.
    pub fn words(self) -> &'static str {
        match self {
            Self::Untouched => "untouched",
            Self::InHand => "in hand",
            Self::SignedOff => "signed off",
            Self::SetAside => "set aside",
            Self::Opening => "opening",
            Self::Unusable => "can't be used",
        }
    }

    pub(super) fn tone(self) -> Tone {
        match self {
            Self::Untouched | Self::Opening => Tone::Faint,
            Self::InHand => Tone::Accent,
            Self::SignedOff => Tone::Good,
            Self::SetAside => Tone::Warning,
            Self::Unusable => Tone::Bad,
        }
    }
}
