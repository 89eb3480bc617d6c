//! One line of text being typed, with history.

use super::key::{Code, Key};

/// Text with a cursor in it.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Line {
    text: String,
    /// Byte position of the cursor, always on a character boundary.
    cursor: usize,
}

/// What a key did to the line.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Edit {
    /// The text changed.
    Changed,
    /// Only the cursor moved, or nothing happened.
    Kept,
    /// The line does not know this key.
    Unknown,
}

impl Line {
    /// A line that holds text already, with the cursor behind it.
    pub fn new(text: &str) -> Line {
        Line { text: text.to_owned(), cursor: text.len() }
    }

    /// The text.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The text before the cursor.
    pub fn before_cursor(&self) -> &str {
        self.text.get(..self.cursor).unwrap_or_default()
    }

    /// Puts text in at the cursor; line breaks become spaces.
    pub fn insert(&mut self, text: &str) {
        let clean: String = text
            .chars()
            .map(|character| if character.is_whitespace() { ' ' } else { character })
            .filter(|character| !character.is_control())
            .collect();
        self.text.insert_str(self.cursor, &clean);
        self.cursor += clean.len();
    }

    /// Replaces what stands before the cursor.
    pub fn replace_before_cursor(&mut self, text: &str) {
        self.text.replace_range(..self.cursor, text);
        self.cursor = text.len();
    }

    /// Takes a key.
    pub fn press(&mut self, key: Key) -> Edit {
        let before = self.text.len();
        match (key.code, key.control) {
            (Code::Char(letter), false) if !key.alt => self.insert(letter.encode_utf8(&mut [0; 4])),
            (Code::Left, false) | (Code::Char('b'), true) => self.cursor = self.left(),
            (Code::Right, false) | (Code::Char('f'), true) => self.cursor = self.right(),
            (Code::Home, _) | (Code::Char('a'), true) => self.cursor = 0,
            (Code::End, _) | (Code::Char('e'), true) => self.cursor = self.text.len(),
            (Code::Backspace, _) => self.delete(self.left(), self.cursor),
            (Code::Delete, _) | (Code::Char('d'), true) => self.delete(self.cursor, self.right()),
            (Code::Char('u'), true) => self.delete(0, self.cursor),
            (Code::Char('k'), true) => self.delete(self.cursor, self.text.len()),
            (Code::Char('w'), true) => self.delete(self.word_start(), self.cursor),
            _ => return Edit::Unknown,
        }
        if self.text.len() == before { Edit::Kept } else { Edit::Changed }
    }

    fn delete(&mut self, from: usize, to: usize) {
        self.text.replace_range(from..to, "");
        self.cursor = from;
    }

    fn left(&self) -> usize {
        self.before_cursor().char_indices().next_back().map_or(0, |(start, _)| start)
    }

    fn right(&self) -> usize {
        let after = self.text.get(self.cursor..).unwrap_or_default();
        self.cursor + after.chars().next().map_or(0, char::len_utf8)
    }

    fn word_start(&self) -> usize {
        self.before_cursor().trim_end().rfind(' ').map_or(0, |space| space + 1)
    }
}

/// Lines typed before, newest last, and where one is while going back through them.
#[derive(Debug, Clone, Default)]
pub struct History {
    lines: Vec<String>,
    position: Option<usize>,
}

/// More than anyone scrolls back through.
const LONGEST_HISTORY: usize = 200;

impl History {
    /// Keeps a line; an empty one and a repetition are not kept.
    pub fn keep(&mut self, line: &str) {
        self.position = None;
        if line.trim().is_empty() || self.lines.last().is_some_and(|last| last == line) {
            return;
        }
        self.lines.push(line.to_owned());
        if self.lines.len() > LONGEST_HISTORY {
            self.lines.remove(0);
        }
    }

    /// The line before the present one.
    pub fn older(&mut self) -> Option<&str> {
        let position = self.position.unwrap_or(self.lines.len()).checked_sub(1)?;
        self.position = Some(position);
        self.lines.get(position).map(String::as_str)
    }

    /// The line after the present one; an empty one behind the newest.
    pub fn newer(&mut self) -> Option<&str> {
        let position = self.position? + 1;
        self.position = (position < self.lines.len()).then_some(position);
        Some(self.lines.get(position).map_or("", String::as_str))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn editing_keeps_to_whole_characters() {
        let mut line = Line::new("bt(11µm)");
        for key in [Code::Left, Code::Left, Code::Backspace] {
            line.press(Key::plain(key));
        }
        assert_eq!(line.text(), "bt(11m)");
        line.press(Key::control('u'));
        assert_eq!(line.text(), "m)");
        line.press(Key::plain(Code::End));
        line.press(Key::char(' '));
        line.insert("two\nwords");
        assert_eq!(line.text(), "m) two words");
        line.press(Key::control('w'));
        assert_eq!((line.text(), line.before_cursor()), ("m) two ", "m) two "));
    }

    #[test]
    fn history_goes_back_and_forth() {
        let mut history = History::default();
        for line in ["undo", "layer lat", "layer lat", ""] {
            history.keep(line);
        }
        assert_eq!(history.older(), Some("layer lat"));
        assert_eq!(history.older(), Some("undo"));
        assert_eq!(history.older(), None);
        assert_eq!(history.newer(), Some("layer lat"));
        assert_eq!(history.newer(), Some(""));
        assert_eq!(history.newer(), None);
    }
}
