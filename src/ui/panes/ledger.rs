//! The Ledger: who decided what, when and why.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Frame, put, wrap};

/// Lines at the foot that show the decision in hand whole, where there is room for so many.
const MOST_DETAIL: u16 = 5;

/// Everything the Ledger shows.
#[derive(Clone, Debug)]
pub struct LedgerView<'a> {
    /// What follows the pane's name in the title: what the decisions are about.
    pub title: &'a str,
    /// The decisions on show, the newest first.
    pub rows: &'a [LedgerRow],
    /// The row in hand among them; none where there is none.
    pub cursor: Option<usize>,
    /// Said where there are no rows.
    pub empty: &'a str,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// One decision.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LedgerRow {
    /// Whether it stands; one that was taken back counts for nothing.
    pub stands: bool,
    /// When.
    pub time: String,
    /// Who.
    pub who: String,
    /// What, and why.
    pub what: String,
}

/// How many rows an area has room for, so that no more are made than are shown.
pub fn room(area: Rect) -> usize {
    let inner = area.height.saturating_sub(1);
    usize::from(inner - detail_lines(inner))
}

/// The foot takes a third, and nothing where rows are few.
fn detail_lines(height: u16) -> u16 {
    if height < 6 { 0 } else { (height / 3).min(MOST_DETAIL) }
}

/// Draws the Ledger.
pub fn draw(view: &LedgerView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let frame = Frame { name: "Ledger", rest: view.title, focused: view.focused };
    let Some(inner) = frame.draw(theme, area, buffer) else { return };
    if view.rows.is_empty() {
        put(indented(inner, 1), view.empty, theme.style(Tone::Faint), theme.ascii, buffer);
        return;
    }
    let detail = detail_lines(inner.height);
    let list = Rect { height: inner.height - detail, ..inner };
    for ((number, row), line) in view.rows.iter().enumerate().zip(list.rows()) {
        draw_row(row, theme, line, buffer);
        if view.cursor == Some(number) && view.focused {
            buffer.set_style(line, theme.style(Tone::Chosen));
        }
    }
    let Some(row) = view.cursor.and_then(|cursor| view.rows.get(cursor)) else { return };
    let foot = Rect { y: list.bottom(), height: detail, ..inner };
    let state = if row.stands { "" } else { "taken back: " };
    let text = format!("{} {}: {state}{}", row.time, row.who, row.what);
    let width = usize::from(inner.width.saturating_sub(2));
    for (text, line) in wrap(&text, width).iter().zip(foot.rows()) {
        put(indented(line, 1), text, theme.style(Tone::Faint), theme.ascii, buffer);
    }
}

fn draw_row(row: &LedgerRow, theme: &Theme, line: Rect, buffer: &mut Buffer) {
    // Not by colour alone: what was taken back has a sign of its own.
    let (sign, tone) = match (row.stands, theme.ascii) {
        (true, _) => (" ", Tone::Plain),
        (false, false) => ("×", Tone::Faint),
        (false, true) => ("x", Tone::Faint),
    };
    put(line, sign, theme.style(Tone::Warning), theme.ascii, buffer);
    let text = format!("{} {}", row.who, row.what);
    put(indented(line, 2), &text, theme.style(tone), theme.ascii, buffer);
}

fn indented(line: Rect, columns: u16) -> Rect {
    let columns = columns.min(line.width);
    Rect { x: line.x + columns, width: line.width - columns, ..line }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    #[test]
    fn the_decision_in_hand_stands_whole_at_the_foot() {
        let row = |stands, what: &str| LedgerRow {
            stands,
            time: "2026-03-01 12:00".to_owned(),
            who: "ada".to_owned(),
            what: what.to_owned(),
        };
        let rows = [row(true, "cloudy at 12 (edge of the deck)"), row(false, "so2 at 1")];
        let view =
            LedgerView { title: "(3, 2)", rows: &rows, cursor: Some(1), empty: "", focused: true };
        let mut screen = Screen::new(26, 9);
        assert_eq!(room(screen.area()), 6);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "━ Ledger (3, 2) ━━━━━━━━━━",
                "  ada cloudy at 12 (edge …",
                "× ada so2 at 1",
                "",
                "",
                "",
                "",
                " 2026-03-01 12:00 ada:",
                " taken back: so2 at 1",
            ]
        );
    }

    #[test]
    fn without_decisions_it_says_so_at_any_size() {
        let view = LedgerView {
            title: "",
            rows: &[],
            cursor: None,
            empty: "nothing was decided",
            focused: false,
        };
        for (width, height) in [(0, 0), (1, 1), (30, 2), (200, 60)] {
            let mut screen = Screen::new(width, height);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            assert!(height < 2 || screen.lines()[1].contains("nothing was decided"));
        }
    }
}
