//! Drawing the Tray: a table where it is wide, else a list with the shares of the granule in hand below.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Modifier;
use unicode_width::UnicodeWidthStr;

use super::names::{abbreviated, common_words};
use super::shares::{HEADINGS, columns, detail, lines, mark};
use super::{TrayRow, TrayView};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Frame, first_shown, put, put_right};

/// From this width on a granule's shares stand beside its name, in columns.
const WIDE: u16 = 76;
/// Below a list that leaves room for it: an empty line and the four shares.
const FOOT: u16 = 5;
/// Rows of a list that are worth more than the foot.
const LEAST_LIST: u16 = 5;

/// Where the parts of the Tray lie.
struct Plan {
    /// The rows of granules.
    list: Rect,
    /// Lines that a granule takes.
    each: u16,
    /// The first granule on show.
    first: usize,
    /// The shares in columns, with a line of headings above the list.
    table: bool,
    /// The lines of the foot; none where there is no room.
    foot: Rect,
}

fn plan(view: &TrayView<'_>, inner: Rect) -> Plan {
    let table = inner.width >= WIDE && inner.height > 1;
    let head = u16::from(table);
    let room = inner.height - head;
    let with_foot = !table && room >= LEAST_LIST + FOOT;
    let foot = if with_foot { FOOT } else { 0 };
    let list = Rect { y: inner.y + head, height: room - foot, ..inner };
    let each = if !table && 2 * view.rows.len() <= usize::from(list.height) { 2 } else { 1 };
    let first = first_shown(view.cursor, view.rows.len(), usize::from(list.height / each));
    Plan { list, each, first, table, foot: Rect { y: list.bottom(), height: foot, ..inner } }
}

/// Draws the Tray.
pub fn draw(view: &TrayView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let rest = match view.rows.len() {
        0 => String::new(),
        count => format!("{} of {count}", view.current.min(count - 1) + 1),
    };
    let frame = Frame { name: "Tray", rest: &rest, focused: view.focused };
    let Some(inner) = frame.draw(theme, area, buffer) else { return };
    let plan = plan(view, inner);
    if plan.table {
        let headings = HEADINGS.concat();
        let line = Rect { height: 1, width: inner.width.saturating_sub(1), ..inner };
        put_right(line, &headings, theme.style(Tone::Faint), theme.ascii, buffer);
    }
    let shown = usize::from(plan.list.height / plan.each);
    let common = common_words(view.rows);
    for (index, row) in view.rows.iter().enumerate().skip(plan.first).take(shown) {
        let y = plan.list.y + (index - plan.first) as u16 * plan.each;
        let line = Rect { y, height: 1, ..plan.list };
        let beside = match (plan.table, plan.each) {
            (true, _) => in_columns(row),
            (_, 1) => mark(row),
            _ => String::new(),
        };
        draw_row(view, common, (index, row), &beside, theme, line, buffer);
        if plan.each == 2 {
            let below =
                Rect { x: line.x + 3, y: y + 1, width: line.width.saturating_sub(4), ..line };
            put(below, &detail(row, below.width), theme.style(Tone::Faint), theme.ascii, buffer);
        }
    }
    draw_foot(view, theme, plan.foot, buffer);
}

/// The shares of the granule in hand, by name.
fn draw_foot(view: &TrayView<'_>, theme: &Theme, foot: Rect, buffer: &mut Buffer) {
    let row = view.rows.get(view.cursor);
    let Some(shares) = row.and_then(|row| row.shares) else { return };
    for ((name, value), line) in lines(&shares).iter().zip(foot.rows().skip(1)) {
        let line = Rect { x: line.x + 1, width: line.width.saturating_sub(1), ..line };
        // The longest name and 100% would touch each other.
        let fits = name.width() + 1 + value.width() <= usize::from(line.width);
        let value = if fits { value } else { value.trim_end_matches('%') };
        put(line, name, theme.style(Tone::Faint), theme.ascii, buffer);
        put_right(line, value, theme.style(Tone::Plain), theme.ascii, buffer);
    }
}

/// The shares below their headings; without any, how far the review has come.
fn in_columns(row: &TrayRow) -> String {
    if !row.note.is_empty() {
        return row.note.clone();
    }
    let Some(shares) = &row.shares else { return row.state.words().to_string() };
    let cells = columns(shares).into_iter().zip(HEADINGS);
    cells.map(|(value, heading)| format!("{value:>width$}", width = heading.len())).collect()
}

/// The granule at a place on the screen, for the mouse.
pub fn row_at(view: &TrayView<'_>, area: Rect, column: u16, row: u16) -> Option<usize> {
    if !area.contains((column, row).into()) || row == area.y {
        return None;
    }
    let inner = Rect { y: area.y + 1, height: area.height - 1, ..area };
    let plan = plan(view, inner);
    if !plan.list.contains((column, row).into()) {
        return None;
    }
    let index = plan.first + usize::from((row - plan.list.y) / plan.each);
    (index < view.rows.len()).then_some(index)
}

fn draw_row(
    view: &TrayView<'_>,
    common: usize,
    (index, row): (usize, &TrayRow),
    beside: &str,
    theme: &Theme,
    line: Rect,
    buffer: &mut Buffer,
) {
    let is_current = index == view.current;
    let right = |columns: u16| Rect {
        x: line.x + columns.min(line.width),
        width: line.width.saturating_sub(columns + 1),
        ..line
    };
    if is_current {
        let mark = if theme.ascii { ">" } else { "▸" };
        put(line, mark, theme.style(Tone::Accent), theme.ascii, buffer);
    }
    let sign = row.state.sign(theme.ascii).to_string();
    put(right(1), &sign, theme.style(row.state.tone()), theme.ascii, buffer);
    let tone = if is_current { Tone::Strong } else { Tone::Plain };
    let mut room = right(3);
    if !beside.is_empty() && room.width > beside.width() as u16 + 4 {
        let tone = if row.note.is_empty() { Tone::Faint } else { Tone::Accent };
        let used = put_right(room, beside, theme.style(tone), theme.ascii, buffer);
        room.width -= used + 1;
    }
    let name = abbreviated(&row.name, common, usize::from(room.width), theme.ascii);
    put(room, &name, theme.style(tone), theme.ascii, buffer);
    if view.focused && index == view.cursor {
        buffer.set_style(right(1), Modifier::REVERSED);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::panes::tray::{TrayShares, TrayState};
    use crate::ui::widgets::{Screen, THEME};

    fn rows() -> Vec<TrayRow> {
        let row = |state, name: &str, shares| TrayRow {
            state,
            name: name.to_string(),
            shares,
            note: String::new(),
        };
        let shares = |flagged, not_assessed| {
            let no_flag = 1.0 - flagged - not_assessed;
            Some(TrayShares { flagged, no_flag, not_assessed, in_doubt: Some(0.05) })
        };
        vec![
            row(TrayState::SignedOff, "brindle_lowen_cloud.nc", shares(0.123, 0.0)),
            row(TrayState::InHand, "brindle_ketter_dust.nc", shares(0.004, 0.996)),
            row(TrayState::Unusable, "torn.nc", None),
        ]
    }

    fn drawn(view: &TrayView<'_>, width: u16, height: u16) -> (Screen, Vec<String>) {
        let mut screen = Screen::new(width, height);
        draw(view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        (screen, lines)
    }

    #[test]
    fn few_granules_get_two_lines_each() {
        let rows = rows();
        let view = TrayView { rows: &rows, current: 1, cursor: 1, focused: false };
        let (screen, lines) = drawn(&view, 20, 7);
        assert_eq!(
            lines,
            [
                "─ Tray 2 of 3 ──────",
                " ✓ …dle_lowen_cloud",
                "   5% in doubt",
                "▸◐ …dle_ketter_dust",
                "   5% in doubt",
                " ! torn.nc",
                "   can't be used",
            ]
        );
        assert_eq!(row_at(&view, screen.area(), 4, 4), Some(1));
        assert_eq!(row_at(&view, screen.area(), 4, 0), None);
    }

    #[test]
    fn many_granules_get_one_line_and_the_one_in_hand_its_shares_below() {
        let rows: Vec<TrayRow> = (0..4).flat_map(|_| rows()).collect();
        let view = TrayView { rows: &rows, current: 1, cursor: 1, focused: true };
        let (screen, lines) = drawn(&view, 17, 13);
        assert_eq!(
            lines,
            [
                "━ Tray 2 of 12 ━━",
                " ✓ …en_cloud ?5%",
                "▸◐ …ter_dust ?5%",
                " ! torn.nc",
                " ✓ …en_cloud ?5%",
                " ◐ …ter_dust ?5%",
                " ! torn.nc",
                " ✓ …en_cloud ?5%",
                "",
                " flagged      <1%",
                " no flag       0%",
                " not assessed 99%",
                " in doubt      5%",
            ]
        );
        assert!(screen.buffer[(5, 2)].modifier.contains(Modifier::REVERSED));
        assert_eq!(row_at(&view, screen.area(), 2, 3), Some(2));
        assert_eq!(row_at(&view, screen.area(), 2, 9), None, "the foot is no granule");
    }

    #[test]
    fn a_wide_tray_is_a_table() {
        let rows = rows();
        let view = TrayView { rows: &rows, current: 0, cursor: 0, focused: false };
        let (screen, lines) = drawn(&view, 80, 6);
        assert_eq!(
            lines[1..],
            [
                "                                       flagged  no flag  not assessed  in doubt",
                "▸✓ brindle_lowen_cloud.nc                  12%      88%            0%        5%",
                " ◐ brindle_ketter_dust.nc                  <1%       0%           99%        5%",
                " ! torn.nc                                                        can't be used",
                "",
            ]
        );
        assert_eq!(row_at(&view, screen.area(), 4, 2), Some(0));
        assert_eq!(row_at(&view, screen.area(), 4, 1), None);
    }

    #[test]
    fn what_is_tried_on_all_granules_stands_beside_their_names() {
        let mut rows = rows();
        rows[0].note = "37 alike".to_string();
        let view = TrayView { rows: &rows, current: 2, cursor: 2, focused: false };
        let mut screen = Screen::new(24, 4);
        draw(&view, &Theme { ascii: true, ..THEME }, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines()[1], " * ~ndle_lowen_cloud 37");
    }
}
