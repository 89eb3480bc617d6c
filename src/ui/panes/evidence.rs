//! The Evidence: what is known of the footprint under the cursor.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::margin_bar::MarginBar;
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Frame, draw_more, put, put_right, wrap};

/// Everything the Evidence shows.
#[derive(Clone, Debug)]
pub struct EvidenceView<'a> {
    /// What follows the pane's name in the title.
    pub title: &'a str,
    /// The rows, in order.
    pub rows: &'a [EvidenceRow],
    /// How many lines are scrolled away at the top; more than there are is the end.
    pub scroll: usize,
    /// Whether the keys go to this pane.
    pub focused: bool,
    /// Whether tests show their sources and thresholds too.
    pub detailed: bool,
}

/// One line of the Evidence.
#[derive(Clone, Debug, PartialEq)]
pub enum EvidenceRow {
    /// Begins a section.
    Section(String),
    /// A value with its name.
    Fact {
        /// What it is, such as `bt(900)-bt(831)` or "latitude".
        label: String,
        /// The value in words; empty where there is none (the note then says why).
        value: String,
        /// Its unit, or empty.
        unit: String,
        /// What is to be said about it, or empty.
        note: String,
        /// How it is to be taken.
        tone: Tone,
    },
    /// What a test says.
    Margin(MarginBar),
    /// Running text, wrapped.
    Words(String, Tone),
}

/// Draws the Evidence: labels at the left, values with their units lined up at the right, notes
/// below them.
pub fn draw(view: &EvidenceView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let frame = Frame { name: "Evidence", rest: view.title, focused: view.focused };
    let Some(room) = frame.draw(theme, area, buffer) else { return };
    let inner = Rect { x: room.x + 1, width: room.width.saturating_sub(2), ..room };
    let lines = lines(view, inner.width);
    let height = usize::from(inner.height);
    let first = view.scroll.min(lines.len().saturating_sub(height));
    let unit_width = unit_width(view.rows);
    for (line, row) in lines.iter().skip(first).zip(inner.rows()) {
        draw_line(line, unit_width, theme, row, buffer);
    }
    draw_more(room, first, lines.len(), theme, buffer);
}

/// How many lines can be scrolled away before the last one is on show.
pub fn last_scroll(view: &EvidenceView<'_>, area: Rect) -> usize {
    let lines = lines(view, area.width.saturating_sub(2)).len();
    lines.saturating_sub(usize::from(area.height.saturating_sub(1)))
}

/// One line on the screen; a row may take several.
enum Line<'a> {
    Section(&'a str),
    Fact(&'a EvidenceRow),
    Margin(&'a MarginBar),
    Words(String, Tone),
    Blank,
}

fn lines<'a>(view: &EvidenceView<'a>, width: u16) -> Vec<Line<'a>> {
    let width = usize::from(width);
    let mut lines = Vec::new();
    for (index, row) in view.rows.iter().enumerate() {
        match row {
            EvidenceRow::Section(title) => {
                if index > 0 {
                    lines.push(Line::Blank);
                }
                lines.push(Line::Section(title));
            }
            EvidenceRow::Fact { note, .. } => {
                lines.push(Line::Fact(row));
                lines.extend(below(note, width));
            }
            EvidenceRow::Margin(bar) => {
                lines.push(Line::Margin(bar));
                if view.detailed {
                    lines.extend(below(&bar.note, width));
                }
            }
            EvidenceRow::Words(text, tone) => {
                lines.extend(wrap(text, width).into_iter().map(|text| Line::Words(text, *tone)));
            }
        }
    }
    lines
}

/// A note below its row.
fn below<'a>(note: &str, width: usize) -> Vec<Line<'a>> {
    if note.is_empty() {
        return Vec::new();
    }
    let texts = wrap(note, width.saturating_sub(2)).into_iter();
    texts.map(|text| Line::Words(format!("  {text}"), Tone::Faint)).collect()
}

/// The width that the units need at the right, so that the values line up before them.
fn unit_width(rows: &[EvidenceRow]) -> u16 {
    let width = |row: &EvidenceRow| match row {
        EvidenceRow::Fact { unit, .. } => unit.width(),
        _ => 0,
    };
    rows.iter().map(width).max().unwrap_or(0).min(4) as u16
}

fn draw_line(line: &Line<'_>, unit_width: u16, theme: &Theme, row: Rect, buffer: &mut Buffer) {
    match line {
        Line::Blank => {}
        Line::Section(title) => {
            put(row, title, theme.style(Tone::Strong), theme.ascii, buffer);
        }
        Line::Words(text, tone) => {
            put(row, text, theme.style(*tone), theme.ascii, buffer);
        }
        Line::Margin(bar) => bar.draw(theme, row, buffer),
        Line::Fact(EvidenceRow::Fact { label, value, unit, tone, .. }) => {
            let units = row.width.min(if unit_width > 0 { unit_width + 1 } else { 0 });
            let values = Rect { width: row.width - units, ..row };
            // A unit wider than its column pushes the value of its own row only.
            let spare = (unit.width() as u16).saturating_sub(unit_width).min(values.width);
            let values = Rect { width: values.width - spare, ..values };
            let used = put_right(values, value, theme.style(*tone), theme.ascii, buffer);
            let place = Rect {
                x: values.right() + u16::from(units > 0),
                width: (row.right() - values.right()).saturating_sub(1),
                ..row
            };
            put(place, unit, theme.style(Tone::Faint), theme.ascii, buffer);
            let labels = Rect { width: values.width.saturating_sub(used + 1), ..row };
            put(labels, label, theme.style(Tone::Plain), theme.ascii, buffer);
        }
        Line::Fact(_) => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    fn fact(label: &str, value: &str, unit: &str, note: &str) -> EvidenceRow {
        EvidenceRow::Fact {
            label: label.to_string(),
            value: value.to_string(),
            unit: unit.to_string(),
            note: note.to_string(),
            tone: Tone::Plain,
        }
    }

    #[test]
    fn values_line_up_and_notes_stand_below() {
        let rows = [
            EvidenceRow::Section("Where".to_string()),
            fact("latitude", "12.50", "°", ""),
            EvidenceRow::Section("Indices".to_string()),
            fact("bt(900)", "287.43", "K", ""),
            fact("bt(900)-bt(831)", "-1.02", "K", ""),
            fact("bt(1231)", "", "", "no channel there"),
        ];
        let mut screen = Screen::new(28, 10);
        let view = EvidenceView {
            title: "12, 3",
            rows: &rows,
            scroll: 0,
            focused: false,
            detailed: false,
        };
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "─ Evidence 12, 3 ───────────",
                " Where",
                " latitude           12.50 °",
                "",
                " Indices",
                " bt(900)           287.43 K",
                " bt(900)-bt(831)    -1.02 K",
                " bt(1231)",
                "   no channel there",
                "",
            ]
        );
    }

    #[test]
    fn it_scrolls_and_says_that_there_is_more() {
        let rows: Vec<_> = (0..9).map(|i| fact(&format!("value {i}"), "1", "", "")).collect();
        let mut screen = Screen::new(20, 4);
        let view =
            EvidenceView { title: "", rows: &rows, scroll: 3, focused: false, detailed: false };
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines()[1..],
            [" value 3          1▴", " value 4          1", " value 5          1▾"]
        );
    }
}
