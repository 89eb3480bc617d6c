//! A line of text being typed.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Modifier;
use unicode_segmentation::UnicodeSegmentation;
use unicode_width::UnicodeWidthStr;

use super::text::clip;
use crate::ui::colour::{Theme, Tone};

/// Draws the part of a text around its cursor (a byte index, moved to the letter it lies in) that
/// fits into the line, the letter under the cursor reversed.
pub(in crate::ui) fn draw_input(
    text: &str,
    cursor: usize,
    theme: &Theme,
    line: Rect,
    buffer: &mut Buffer,
) {
    let Some(line) = clip(line, buffer) else { return };
    let width = usize::from(line.width);
    let mut letters: Vec<(usize, &str)> = text.grapheme_indices(true).collect();
    letters.push((text.len(), " "));
    let at = letters.iter().rposition(|(start, _)| *start <= cursor).unwrap_or(0);
    let mut first = at;
    let mut used = letters[at].1.width();
    while first > 0 && used + letters[first - 1].1.width() <= width {
        first -= 1;
        used += letters[first].1.width();
    }
    let mut x = line.x;
    for (index, (_, letter)) in letters.iter().enumerate().skip(first) {
        let columns = letter.width() as u16;
        if x + columns > line.right() {
            break;
        }
        let mut style = theme.style(Tone::Plain);
        if index == at {
            style = style.add_modifier(Modifier::REVERSED);
        }
        buffer.set_stringn(x, line.y, letter, usize::from(columns), style);
        x += columns;
    }
}
