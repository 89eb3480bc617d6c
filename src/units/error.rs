//! Why a unit string was refused.

/// A unit string that cannot be used, with what would be accepted instead.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum UnitError {
    /// Nothing is written.
    #[error("no unit is given; {accepted}")]
    Empty {
        /// What is accepted.
        accepted: &'static str,
    },
    /// The text is not a product of powers of units.
    #[error("unit {text:?} can't be read at character {position}: {reason}; {accepted}")]
    Malformed {
        /// The unit as written, cut short where it is long.
        text: String,
        /// Count of the character from 1.
        position: usize,
        /// What is wrong there.
        reason: String,
        /// What is accepted.
        accepted: &'static str,
    },
    /// The text is a unit of something else.
    #[error("unit {text:?} measures {found}; {accepted}")]
    OtherQuantity {
        /// The unit as written, cut short where it is long.
        text: String,
        /// What it measures.
        found: &'static str,
        /// What is accepted.
        accepted: &'static str,
    },
    /// The right quantity in a size that nobody uses for it.
    #[error("unit {text:?} has an unusual size; {accepted}")]
    OtherSize {
        /// The unit as written, cut short where it is long.
        text: String,
        /// What is accepted.
        accepted: &'static str,
    },
    /// A spelling that may mean two different quantities.
    #[error("unit {text:?} is ambiguous: {reason}; {accepted}")]
    Ambiguous {
        /// The unit as written, cut short where it is long.
        text: String,
        /// The two readings.
        reason: &'static str,
        /// What is accepted.
        accepted: &'static str,
    },
    /// A spectral position that is no number, or not positive.
    #[error("{text:?} is no wavenumber or wavelength: {reason}; {accepted}")]
    NoPosition {
        /// The text as written, cut short where it is long.
        text: String,
        /// What is wrong.
        reason: &'static str,
        /// What is accepted.
        accepted: &'static str,
    },
}

/// The beginning of a text, long enough to recognise it in a message. It is shown through `{:?}`,
/// which escapes control characters and direction marks.
pub fn excerpt(text: &str) -> String {
    const SHOWN: usize = 60;
    let mut short: String = text.chars().take(SHOWN).collect();
    if text.chars().nth(SHOWN).is_some() {
        short.push('…');
    }
    short
}
