//! Bytes from the terminal, understood as keys, pastes and clicks.
//!
//! The parser is our own because the usual event loop never returns once the terminal has gone
//! away, and because a sequence that a slow link cuts in two must not turn into letters: what
//! looks unfinished waits for a short while before it counts as it stands.

use super::event::{Button, Input, Mouse};
use super::key::{Code, Key};

/// The longest escape sequence that is waited for; anything longer is dropped.
const LONGEST_SEQUENCE: usize = 32;
/// A paste longer than this is cut: nothing on the screen takes so much text.
const LONGEST_PASTE: usize = 64 * 1024;

const PASTE_START: &[u8] = b"\x1b[200~";
const PASTE_END: &[u8] = b"\x1b[201~";

/// Turns bytes into input events; keeps unfinished sequences between calls.
#[derive(Debug, Default)]
pub struct InputParser {
    waiting: Vec<u8>,
    paste: Option<Vec<u8>>,
}

/// What stands at the front of the bytes.
enum Step {
    /// An event that took so many bytes.
    Event(Input, usize),
    /// So many bytes that mean nothing to us.
    Nothing(usize),
    /// The start of a paste.
    Paste,
    /// The sequence is not complete yet.
    Unfinished,
}

impl InputParser {
    /// Takes in bytes and returns the events that are complete.
    pub fn feed(&mut self, bytes: &[u8]) -> Vec<Input> {
        self.waiting.extend_from_slice(bytes);
        let mut events = Vec::new();
        while !self.waiting.is_empty() {
            if self.paste.is_some() {
                if !self.continue_paste(&mut events) {
                    break;
                }
                continue;
            }
            match step(&self.waiting) {
                Step::Event(event, used) => {
                    events.push(event);
                    self.waiting.drain(..used);
                }
                Step::Nothing(used) => {
                    self.waiting.drain(..used);
                }
                Step::Paste => {
                    self.waiting.drain(..PASTE_START.len());
                    self.paste = Some(Vec::new());
                }
                Step::Unfinished => break,
            }
        }
        events
    }

    /// True while a sequence is unfinished, so that the caller waits for its rest only briefly.
    pub fn is_waiting(&self) -> bool {
        !self.waiting.is_empty() && self.paste.is_none()
    }

    /// Nothing more came: what waits counts as it stands (a lone escape byte is the Esc key).
    pub fn settle(&mut self) -> Vec<Input> {
        let waiting = std::mem::take(&mut self.waiting);
        match waiting.as_slice() {
            [0x1b] => vec![Input::Key(Key::plain(Code::Esc))],
            [0x1b, letter @ (b'[' | b'O')] => {
                let keys = [Key::plain(Code::Esc), Key::char(char::from(*letter))];
                keys.map(Input::Key).into()
            }
            _ => Vec::new(),
        }
    }

    /// Moves bytes into the paste; false when its end has not come yet.
    fn continue_paste(&mut self, events: &mut Vec<Input>) -> bool {
        let Some(paste) = self.paste.as_mut() else { return false };
        let end = self.waiting.windows(PASTE_END.len()).position(|part| part == PASTE_END);
        // The last bytes may be the beginning of the end mark: they stay.
        let kept_back = PASTE_END.len() - 1;
        let take = end.unwrap_or_else(|| self.waiting.len().saturating_sub(kept_back));
        let room = LONGEST_PASTE.saturating_sub(paste.len());
        paste.extend(self.waiting.drain(..take).take(room));
        if end.is_none() {
            return false;
        }
        self.waiting.drain(..PASTE_END.len());
        let text = String::from_utf8_lossy(paste).into_owned();
        self.paste = None;
        events.push(Input::Paste(text));
        true
    }
}

fn step(bytes: &[u8]) -> Step {
    match bytes {
        [] => Step::Unfinished,
        [0x1b, rest @ ..] => after_escape(bytes, rest),
        [byte, ..] if *byte < 0x80 => Step::Event(Input::Key(single(*byte)), 1),
        _ => character(bytes),
    }
}

/// A single byte below 0x80.
fn single(byte: u8) -> Key {
    match byte {
        b'\r' | b'\n' => Key::plain(Code::Enter),
        b'\t' => Key::plain(Code::Tab),
        0x7f | 0x08 => Key::plain(Code::Backspace),
        0 => Key::control(' '),
        1..=26 => Key::control(char::from(b'a' + byte - 1)),
        28..=31 => Key::control(char::from(b'4' + byte - 28)),
        _ => Key::char(char::from(byte)),
    }
}

/// A character of several bytes.
fn character(bytes: &[u8]) -> Step {
    let length = match bytes.first() {
        Some(0xc2..=0xdf) => 2,
        Some(0xe0..=0xef) => 3,
        Some(0xf0..=0xf4) => 4,
        _ => return Step::Nothing(1),
    };
    let Some(sequence) = bytes.get(..length) else { return Step::Unfinished };
    match std::str::from_utf8(sequence).ok().and_then(|text| text.chars().next()) {
        Some(character) => Step::Event(Input::Key(Key::char(character)), length),
        None => Step::Nothing(1),
    }
}

fn after_escape(bytes: &[u8], rest: &[u8]) -> Step {
    match rest {
        [] => Step::Unfinished,
        [b'[', parameters @ ..] => control_sequence(bytes, parameters),
        [b'O'] => Step::Unfinished,
        [b'O', letter, ..] => match final_letter(*letter) {
            Some(code) => Step::Event(Input::Key(Key::plain(code)), 3),
            None => Step::Nothing(3),
        },
        // No key has Alt, and a slow link puts Esc and the next key into one packet: they are two
        // keys. Of two escapes, the second may start a sequence.
        _ => Step::Event(Input::Key(Key::plain(Code::Esc)), 1),
    }
}

/// `ESC [ parameters letter`.
fn control_sequence(bytes: &[u8], parameters: &[u8]) -> Step {
    let Some(end) = parameters.iter().position(|byte| (0x40..=0x7e).contains(byte)) else {
        return if bytes.len() > LONGEST_SEQUENCE {
            Step::Nothing(bytes.len())
        } else {
            Step::Unfinished
        };
    };
    let used = end + 3;
    // The old mouse report, which a terminal may send unasked: three bytes follow.
    if parameters.first() == Some(&b'M') {
        return if bytes.len() < used + 3 { Step::Unfinished } else { Step::Nothing(used + 3) };
    }
    if bytes.starts_with(PASTE_START) {
        return Step::Paste;
    }
    let text = std::str::from_utf8(parameters.get(..end).unwrap_or_default()).unwrap_or_default();
    let letter = parameters.get(end).copied().unwrap_or_default();
    if let Some(mouse) = text.strip_prefix('<') {
        return match click(mouse, letter) {
            Some(mouse) => Step::Event(Input::Mouse(mouse), used),
            None => Step::Nothing(used),
        };
    }
    let numbers: Vec<u16> = text.split(';').map(|part| part.parse().unwrap_or(0)).collect();
    let code = if letter == b'~' {
        numbered(numbers.first().copied().unwrap_or(0))
    } else {
        final_letter(letter)
    };
    match code {
        Some(code) => Step::Event(Input::Key(with_modifiers(code, numbers.get(1))), used),
        None => Step::Nothing(used),
    }
}

/// The keys of `ESC [ letter` and `ESC O letter`.
fn final_letter(letter: u8) -> Option<Code> {
    Some(match letter {
        b'A' => Code::Up,
        b'B' => Code::Down,
        b'C' => Code::Right,
        b'D' => Code::Left,
        b'H' => Code::Home,
        b'F' => Code::End,
        b'Z' => Code::BackTab,
        b'M' => Code::Enter,
        b'P' => Code::Function(1),
        b'Q' => Code::Function(2),
        b'R' => Code::Function(3),
        b'S' => Code::Function(4),
        _ => return None,
    })
}

/// The keys of `ESC [ number ~`.
fn numbered(number: u16) -> Option<Code> {
    Some(match number {
        1 | 7 => Code::Home,
        2 => Code::Insert,
        3 => Code::Delete,
        4 | 8 => Code::End,
        5 => Code::PageUp,
        6 => Code::PageDown,
        11..=15 => Code::Function(u8::try_from(number - 10).ok()?),
        17..=21 => Code::Function(u8::try_from(number - 11).ok()?),
        23 | 24 => Code::Function(u8::try_from(number - 12).ok()?),
        _ => return None,
    })
}

/// The second parameter of a key sequence is 1 plus a bit each for Shift, Alt and Control.
fn with_modifiers(code: Code, parameter: Option<&u16>) -> Key {
    let bits = parameter.map_or(0, |number| number.saturating_sub(1));
    Key { code, shift: bits & 1 != 0, alt: bits & 2 != 0, control: bits & 4 != 0 }
}

/// `button;column;row` of an SGR mouse report; `M` is a press, `m` a release.
fn click(text: &str, letter: u8) -> Option<Mouse> {
    let numbers: Vec<u16> = text.split(';').map_while(|part| part.parse().ok()).collect();
    let [buttons, column, row] = numbers.as_slice() else { return None };
    let button = match (buttons & 0b100_0011, buttons & 0b10_0000 != 0, letter) {
        (0, false, b'M') => Button::Press,
        (0, true, b'M') => Button::Drag,
        (0, _, b'm') => Button::Release,
        (3, true, b'M') => Button::Move,
        (64, _, b'M') => Button::WheelUp,
        (65, _, b'M') => Button::WheelDown,
        _ => return None,
    };
    Some(Mouse { button, column: column.saturating_sub(1), row: row.saturating_sub(1) })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn keys(bytes: &[u8]) -> Vec<String> {
        let mut parser = InputParser::default();
        let mut events = parser.feed(bytes);
        if parser.is_waiting() {
            events.extend(parser.settle());
        }
        events
            .into_iter()
            .map(|event| match event {
                Input::Key(key) => key.to_string(),
                other => format!("{other:?}"),
            })
            .collect()
    }

    #[test]
    fn common_sequences_become_keys() {
        for (bytes, expected) in [
            (&b"q"[..], "q"),
            (b"\x1b", "Esc"),
            (b"\x1b[A", "Up"),
            (b"\x1bOB", "Down"),
            (b"\x1b[1;2C", "Shift-Right"),
            (b"\x1b[1;5D", "Ctrl-Left"),
            (b"\x1b[5~", "PageUp"),
            (b"\x1b[4~", "End"),
            (b"\x1b[Z", "Shift-Tab"),
            (b"\x12", "Ctrl-R"),
            (b"\x1a", "Ctrl-Z"),
            (b"\r", "Enter"),
            (b"\x7f", "Backspace"),
            (b"\x1b[15~", "F5"),
            (b"\x1b[24~", "F12"),
            ("µ".as_bytes(), "µ"),
        ] {
            assert_eq!(keys(bytes), [expected], "{bytes:?}");
        }
    }

    #[test]
    fn a_key_that_comes_together_with_an_escape_is_a_key_of_its_own() {
        assert_eq!(keys(b"\x1b:"), ["Esc", ":"]);
        assert_eq!(keys(b"\x1b\x1b[A"), ["Esc", "Up"]);
        assert_eq!(keys(b"\x1b\r"), ["Esc", "Enter"]);
        assert_eq!(keys(b"\x1b["), ["Esc", "["]);
    }

    #[test]
    fn a_sequence_cut_anywhere_is_the_same_key() {
        for sequence in [&b"\x1b[1;5D"[..], b"\x1b[5~", "µ".as_bytes(), b"\x1b[<0;12;5M"] {
            let mut whole = InputParser::default();
            let expected = whole.feed(sequence);
            assert_eq!(expected.len(), 1);
            for cut in 1..sequence.len() {
                let mut parser = InputParser::default();
                let mut events = parser.feed(&sequence[..cut]);
                events.extend(parser.feed(&sequence[cut..]));
                assert_eq!(events, expected, "cut at {cut}");
            }
        }
    }

    #[test]
    fn a_paste_is_one_event_and_its_escapes_are_text() {
        let mut parser = InputParser::default();
        let mut events = parser.feed(b"a\x1b[200~bt(9");
        events.extend(parser.feed(b"00)\x1b[A q\x1b[2"));
        events.extend(parser.feed(b"01~z"));
        assert_eq!(
            events,
            [
                Input::Key(Key::char('a')),
                Input::Paste("bt(900)\u{1b}[A q".to_owned()),
                Input::Key(Key::char('z')),
            ]
        );
    }

    #[test]
    fn an_old_mouse_report_is_no_key() {
        assert_eq!(keys(b"\x1b[M !!q"), ["q"]);
        let mut parser = InputParser::default();
        assert!(parser.feed(b"\x1b[M ").is_empty() && parser.is_waiting());
        assert_eq!(parser.feed(b"!!q"), [Input::Key(Key::char('q'))]);
    }

    #[test]
    fn mouse_reports_count_from_nought() {
        let mut parser = InputParser::default();
        assert_eq!(
            parser.feed(b"\x1b[<0;12;5M\x1b[<64;1;1M\x1b[<35;2;3M"),
            [
                Input::Mouse(Mouse { button: Button::Press, column: 11, row: 4 }),
                Input::Mouse(Mouse { button: Button::WheelUp, column: 0, row: 0 }),
                Input::Mouse(Mouse { button: Button::Move, column: 1, row: 2 }),
            ]
        );
    }

    #[test]
    fn noise_neither_panics_nor_blocks_what_follows() {
        let mut noise: Vec<u8> = (0..=255).rev().collect();
        noise.extend(b"\x1b[999999999999999999999999999999999999999999\x1b[?1;2c\xff\xc3\x28");
        let mut parser = InputParser::default();
        parser.feed(&noise);
        parser.settle();
        assert_eq!(parser.feed(b"q").last(), Some(&Input::Key(Key::char('q'))));
    }
}
