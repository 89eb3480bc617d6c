//! Everything that can happen to the screen, in one list.

use super::jobs::Answer;
use super::key::Key;

/// One event for `update`.
#[expect(
    clippy::large_enum_variant,
    reason = "an event lives for one turn of the loop, and few wait at a time"
)]
pub enum Event {
    /// The person did something.
    Input(Input),
    /// The terminal changed its size; drawing asks for the new one.
    Resized,
    /// The screen was given back and taken again: everything is drawn anew.
    Resumed,
    /// A job answered.
    Answer(Answer),
    /// The ledger's writer may have reported.
    LedgerMoved,
    /// The cursor has not moved for a moment.
    Rested,
    /// A moment has passed in which work went on beside the keys.
    Working,
    /// A while has passed without anything else.
    Quiet,
    /// Stop to the shell, as Ctrl-Z asks for.
    Suspend,
    /// The program has to end now.
    End(Ending),
}

/// What a person does.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Input {
    /// A key.
    Key(Key),
    /// Text pasted in one piece.
    Paste(String),
    /// The mouse.
    Mouse(Mouse),
}

impl Input {
    /// The mouse moved over the screen with no button down: nothing is asked for.
    pub fn is_hover(&self) -> bool {
        matches!(self, Input::Mouse(Mouse { button: Button::Move, .. }))
    }
}

/// A mouse report.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Mouse {
    /// What the mouse did.
    pub button: Button,
    /// Column on the screen, from 0.
    pub column: u16,
    /// Row on the screen, from 0.
    pub row: u16,
}

/// What the mouse did.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Button {
    /// The left button went down.
    Press,
    /// Moved with the left button down.
    Drag,
    /// The left button came up.
    Release,
    /// Moved with no button down.
    Move,
    /// The wheel turned away from the hand.
    WheelUp,
    /// The wheel turned towards the hand.
    WheelDown,
}

/// Why the program has to end at once.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Ending {
    /// A signal of this number.
    Signal(i32),
    /// The terminal went away without a signal.
    TerminalGone,
}
