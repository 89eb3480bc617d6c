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

    /// The key of a name as the help writes it: `x`, `Ctrl-R`, `F5`, `PageUp`.
    pub fn named(name: &str) -> Option<Key> {
        let mut key = Key::plain(Code::Esc);
        let mut rest = name;
        if rest == "Shift-Tab" {
            return Some(Key::plain(Code::BackTab));
        }
        for (modifier, held) in
            [("Ctrl-", &mut key.control), ("Alt-", &mut key.alt), ("Shift-", &mut key.shift)]
        {
            if let Some(short) = rest.strip_prefix(modifier).filter(|short| !short.is_empty()) {
                (rest, *held) = (short, true);
            }
        }
        let mut letters = rest.chars();
        key.code = match (letters.next(), letters.next()) {
            // Terminals send Control with capitals and small letters alike; Shift makes a capital.
            (Some(letter), None) if key.control => Code::Char(letter.to_ascii_lowercase()),
            (Some(letter), None) if !key.shift && letter != ' ' => Code::Char(letter),
            (Some(_), None) => return None,
            _ => named_code(rest)?,
        };
        Some(key)
    }

    /// Whether a terminal tells of this key at all: some of them send the byte of another key.
    pub fn arrives(&self) -> bool {
        match self.code {
            Code::Char(_) if self.alt => false,
            Code::Char(letter) if self.control => {
                // These are Backspace, Tab and Enter twice.
                let bytes = letter.is_ascii_lowercase() && !"hijm".contains(letter);
                bytes || matches!(letter, ' ' | '4'..='7')
            }
            Code::Enter | Code::Esc | Code::Tab | Code::Backspace => {
                !self.alt && !self.control && !self.shift
            }
            _ => true,
        }
    }

    /// A key with Shift.
    pub const fn shifted(code: Code) -> Key {
        Key { code, control: false, alt: false, shift: true }
    }
}

fn named_code(name: &str) -> Option<Code> {
    if let Some(number) = name.strip_prefix('F').and_then(|number| number.parse().ok()) {
        return (1..=12).contains(&number).then_some(Code::Function(number));
    }
    const NAMED: [Code; 15] = [
        Code::Char(' '),
        Code::Enter,
        Code::Esc,
        Code::Tab,
        Code::Backspace,
        Code::Delete,
        Code::Insert,
        Code::Up,
        Code::Down,
        Code::Left,
        Code::Right,
        Code::Home,
        Code::End,
        Code::PageUp,
        Code::PageDown,
    ];
    NAMED.into_iter().find(|code| Key::plain(*code).to_string() == name)
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_read_as_they_are_written() {
        for name in
            ["x", "X", ":", "-", "Ctrl-R", "Alt-x", "F5", "Shift-Tab", "Shift-Left", "Space"]
        {
            assert_eq!(Key::named(name).unwrap().to_string(), name);
        }
        for name in ["", "Ctrl-", "F13", "Hyper-X", "Shift-x", "xy"] {
            assert_eq!(Key::named(name), None, "{name}");
        }
        assert_eq!(Key::named("Ctrl-r"), Some(Key::control('r')));
    }

    #[test]
    fn keys_that_terminals_do_not_tell_of_are_known() {
        for name in ["Alt-x", "Ctrl-I", "Ctrl-M", "Ctrl-J", "Ctrl-H", "Ctrl-1", "Shift-Enter"] {
            assert!(!Key::named(name).unwrap().arrives(), "{name}");
        }
        for name in ["x", "Ctrl-R", "Alt-Left", "Ctrl-Left", "F5", "Shift-Tab", "Space", "Enter"] {
            assert!(Key::named(name).unwrap().arrives(), "{name}");
        }
    }
}
