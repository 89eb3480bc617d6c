//! Text of a limited width. Widths are columns of the terminal, not bytes or letters.

use std::borrow::Cow;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;
use unicode_segmentation::UnicodeSegmentation;
use unicode_width::UnicodeWidthStr;

/// The part of an area that lies in the buffer, if any.
pub(in crate::ui) fn clip(area: Rect, buffer: &Buffer) -> Option<Rect> {
    let area = area.intersection(buffer.area);
    (!area.is_empty()).then_some(area)
}

/// The text if it fits, else its beginning with a sign that something was cut.
pub(in crate::ui) fn cut(text: &str, width: usize, ascii: bool) -> String {
    shortened(text, width, ascii, |text, sign, room| format!("{}{sign}", fitting(text, room)))
}

/// The text if it fits, else its end with a sign that something was cut.
pub(in crate::ui) fn cut_front(text: &str, width: usize, ascii: bool) -> String {
    shortened(text, width, ascii, |text, sign, room| {
        let mut ends = text.grapheme_indices(true).map(|(at, _)| &text[at..]);
        format!("{sign}{}", ends.find(|end| end.width() <= room).unwrap_or(""))
    })
}

/// The text if it fits, else what `shorten` makes of it, the sign and the room beside the sign.
fn shortened(
    text: &str,
    width: usize,
    ascii: bool,
    shorten: impl FnOnce(&str, char, usize) -> String,
) -> String {
    let text =
        if ascii && !text.is_ascii() { Cow::Owned(spelled_out(text)) } else { Cow::Borrowed(text) };
    if text.width() <= width {
        return text.into_owned();
    }
    match width.checked_sub(1) {
        Some(room) => shorten(&text, if ascii { '~' } else { '…' }, room),
        None => String::new(),
    }
}

/// A text in ASCII alone, for terminals without more.
fn spelled_out(text: &str) -> String {
    let mut plain = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            _ if letter.is_ascii() => plain.push(letter),
            'µ' | 'μ' => plain.push('u'),
            'ν' => plain.push('v'),
            '·' | '−' | '–' | '—' => plain.push('-'),
            '±' => plain.push_str("+-"),
            '…' => plain.push_str("..."),
            '°' => plain.push_str("deg"),
            '→' => plain.push_str("->"),
            '←' => plain.push_str("<-"),
            '↑' => plain.push('^'),
            '↓' => plain.push('v'),
            '≥' => plain.push_str(">="),
            '≤' => plain.push_str("<="),
            '×' => plain.push('x'),
            '²' => plain.push('2'),
            '³' => plain.push('3'),
            _ => plain.push('?'),
        }
    }
    plain
}

/// The longest beginning of a text that is not wider than this.
fn fitting(text: &str, width: usize) -> &str {
    let mut used = 0;
    for (at, cluster) in text.grapheme_indices(true) {
        used += cluster.width();
        if used > width {
            return &text[..at];
        }
    }
    text
}

/// Writes a text from the left edge of a line on, cut to the line. Returns the columns used.
pub(in crate::ui) fn put(
    line: Rect,
    text: &str,
    style: Style,
    ascii: bool,
    buffer: &mut Buffer,
) -> u16 {
    let Some(line) = clip(line, buffer) else { return 0 };
    let text = cut(text, usize::from(line.width), ascii);
    buffer.set_stringn(line.x, line.y, &text, usize::from(line.width), style).0 - line.x
}

/// Writes a text so that it ends at the right edge of a line, cut to the line. Returns the columns used.
pub(in crate::ui) fn put_right(
    line: Rect,
    text: &str,
    style: Style,
    ascii: bool,
    buffer: &mut Buffer,
) -> u16 {
    let text = cut(text, usize::from(line.width), ascii);
    let width = text.width() as u16;
    put(Rect { x: line.x + (line.width - width), width, ..line }, &text, style, ascii, buffer)
}

/// Breaks a text into lines at its spaces; a word that is wider than a line is broken anywhere.
pub(in crate::ui) fn wrap(text: &str, width: usize) -> Vec<String> {
    if width == 0 {
        return Vec::new();
    }
    let mut lines = vec![String::new()];
    let mut used = 0;
    for word in text.split_whitespace() {
        if used > 0 && used + 1 + word.width() > width {
            lines.push(String::new());
            used = 0;
        }
        if used > 0 {
            push(&mut lines, " ");
            used += 1;
        }
        for cluster in word.graphemes(true) {
            if used > 0 && used + cluster.width() > width {
                lines.push(String::new());
                used = 0;
            }
            push(&mut lines, cluster);
            used += cluster.width();
        }
    }
    lines
}

fn push(lines: &mut [String], text: &str) {
    if let Some(line) = lines.last_mut() {
        line.push_str(text);
    }
}

/// The first row on show of a list of which so many rows fit, so that the row under the cursor is
/// on show, in the middle where the list goes on at both sides.
pub(in crate::ui) fn first_shown(cursor: usize, rows: usize, height: usize) -> usize {
    cursor.saturating_sub(height / 2).min(rows.saturating_sub(height))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn text_is_cut_by_columns_and_says_so() {
        assert_eq!(cut("Sea of Lowen", 20, false), "Sea of Lowen");
        assert_eq!(cut("Sea of Lowen", 7, false), "Sea of…");
        assert_eq!(cut("Sea of Lowen", 7, true), "Sea of~");
        assert_eq!(cut("輝度温度", 5, false), "輝度…", "each sign is two columns wide");
        assert_eq!(cut("輝度温度", 0, false), "");
        assert_eq!(cut_front("Sea of Lowen", 7, false), "… Lowen");
        assert_eq!(cut("11.1 µm · 287 K", 20, true), "11.1 um - 287 K");
    }

    #[test]
    fn words_are_wrapped_and_long_ones_broken() {
        assert_eq!(wrap("no view angles in the file", 12), ["no view", "angles in", "the file"]);
        assert_eq!(wrap("abcdefgh ij", 3), ["abc", "def", "gh", "ij"]);
        assert_eq!(wrap("", 3), [""]);
    }

    #[test]
    fn the_row_in_hand_is_always_on_show() {
        assert_eq!(first_shown(0, 10, 4), 0);
        assert_eq!(first_shown(5, 10, 4), 3);
        assert_eq!(first_shown(9, 10, 4), 6);
        assert_eq!(first_shown(2, 3, 4), 0);
    }

    proptest! {
        #[test]
        fn nothing_is_ever_wider_than_asked_for(text in "\\PC{0,40}", width in 0usize..30) {
            prop_assert!(cut(&text, width, false).width() <= width);
            prop_assert!(cut_front(&text, width, false).width() <= width);
            for line in wrap(&text, width) {
                // A sign that is wider than the line can't be broken.
                let widest = line.graphemes(true).map(|sign| sign.width()).max();
                prop_assert!(line.width() <= width.max(widest.unwrap_or(0)));
            }
        }
    }
}
