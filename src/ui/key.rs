//! A key as the terminal reports it, and how it is written in help and documents.

use std::fmt;

/// What was pressed, without the modifiers.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Code {
    /// A character; capitals arrive as capitals.
    Char(char),
    /// Return.
    Enter,
    /// Escape.
    Esc,
    /// Tab.
    Tab,
    /// Shift and Tab.
    BackTab,
    /// The key that deletes to the left.
    Backspace,
    /// The key that deletes to the right.
    Delete,
    /// Insert.
    Insert,
    /// Arrow up.
    Up,
    /// Arrow down.
    Down,
    /// Arrow left.
    Left,
    /// Arrow right.
    Right,
    /// Home.
    Home,
    /// End.
    End,
    /// Page up.
    PageUp,
    /// Page down.
    PageDown,
    /// A function key, from 1.
    Function(u8),
}

/// One key press.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct Key {
    /// What was pressed.
    pub code: Code,
    /// Control was held.
    pub control: bool,
    /// Alt (Meta) was held.
    pub alt: bool,
    /// Shift was held; for characters it is part of the character instead.
    pub shift: bool,
}

impl Key {
    /// A key without modifiers.
    pub const fn plain(code: Code) -> Key {
        Key { code, control: false, alt: false, shift: false }
    }

    /// A character without modifiers.
    pub const fn char(character: char) -> Key {
        Key::plain(Code::Char(character))
    }

    /// A character with Control.
    pub const fn control(character: char) -> Key {
        Key { code: Code::Char(character), control: true, alt: false, shift: false }
    }

    /// A key with Shift.
    pub const fn shifted(code: Code) -> Key {
        Key { code, control: false, alt: false, shift: true }
    }
}

impl fmt::Display for Key {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.control {
            f.write_str("Ctrl-")?;
        }
        if self.alt {
            f.write_str("Alt-")?;
        }
        if self.shift {
            f.write_str("Shift-")?;
        }
        match self.code {
            Code::Char(' ') => f.write_str("Space"),
            Code::Char(letter) if self.control => write!(f, "{}", letter.to_ascii_uppercase()),
            Code::Char(letter) => write!(f, "{letter}"),
            Code::Function(number) => write!(f, "F{number}"),
            Code::Enter => f.write_str("Enter"),
            Code::Esc => f.write_str("Esc"),
            Code::Tab => f.write_str("Tab"),
            Code::BackTab => f.write_str("Shift-Tab"),
            Code::Backspace => f.write_str("Backspace"),
            Code::Delete => f.write_str("Delete"),
            Code::Insert => f.write_str("Insert"),
            Code::Up => f.write_str("Up"),
            Code::Down => f.write_str("Down"),
            Code::Left => f.write_str("Left"),
            Code::Right => f.write_str("Right"),
            Code::Home => f.write_str("Home"),
            Code::End => f.write_str("End"),
            Code::PageUp => f.write_str("PageUp"),
            Code::PageDown => f.write_str("PageDown"),
        }
    }
}
