//! The Tray: the granules in hand, each with its state and its shares.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Modifier;
use unicode_width::UnicodeWidthStr;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Frame, cut_front, first_shown, put};

/// Everything the Tray shows.
#[derive(Clone, Debug)]
pub struct TrayView<'a> {
    /// The granules, in order.
    pub rows: &'a [TrayRow],
    /// The granule on the table.
    pub current: usize,
    /// The row under the Tray's own cursor.
    pub cursor: usize,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// One granule of the Tray.
#[derive(Clone, Debug, PartialEq)]
pub struct TrayRow {
    /// How far its review has come.
    pub state: TrayState,
    /// The file's name, cleaned.
    pub name: String,
    /// Its shares, once they are known.
    pub shares: Option<TrayShares>,
}

/// How far the review of a granule has come.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TrayState {
    /// Nobody has decided anything.
    Untouched,
    /// Decisions exist.
    InHand,
    /// Done.
    SignedOff,
    /// Put aside with a reason.
    SetAside,
    /// Being opened.
    Opening,
    /// The file can't be used.
    Unusable,
}

/// Shares of a granule's footprints; they need not add up to one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TrayShares {
    /// Share with any flag, 0 to 1.
    pub flagged: f64,
    /// Share looked at and without a flag, 0 to 1.
    pub no_flag: f64,
    /// Share that nobody and nothing has assessed, 0 to 1.
    pub not_assessed: f64,
    /// Share that tests leave in doubt, 0 to 1, once they have run.
    pub in_doubt: Option<f64>,
}

impl TrayState {
    /// The sign before a granule's name.
    pub fn sign(self, ascii: bool) -> char {
        match (self, ascii) {
            (Self::Untouched, false) => '○',
            (Self::InHand, false) => '◐',
            (Self::SignedOff, false) => '✓',
            (Self::SetAside, false) => '−',
            (Self::Opening, false) => '…',
            (Self::Untouched, true) => '.',
            (Self::InHand, true) => 'o',
            (Self::SignedOff, true) => '*',
            (Self::SetAside, true) => '-',
            (Self::Opening, true) => '~',
            (Self::Unusable, _) => '!',
        }
    }

    /// The state in words.
    pub fn words(self) -> &'static str {
        match self {
            Self::Untouched => "untouched",
            Self::InHand => "in hand",
            Self::SignedOff => "signed off",
            Self::SetAside => "set aside",
            Self::Opening => "opening",
            Self::Unusable => "can't be used",
        }
    }

    fn tone(self) -> Tone {
        match self {
            Self::Untouched | Self::Opening => Tone::Faint,
            Self::InHand => Tone::Accent,
            Self::SignedOff => Tone::Good,
            Self::SetAside => Tone::Warning,
            Self::Unusable => Tone::Bad,
        }
    }
}

/// Draws the Tray: two lines a granule where all fit so, else one.
pub fn draw(view: &TrayView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let rest = match view.rows.len() {
        0 => String::new(),
        count => format!("{} of {count}", view.current.min(count - 1) + 1),
    };
    let frame = Frame { name: "Tray", rest: &rest, focused: view.focused };
    let Some(inner) = frame.draw(theme, area, buffer) else { return };
    let each = each_takes(view.rows.len(), inner.height);
    let shown = usize::from(inner.height / each);
    let first = first_shown(view.cursor, view.rows.len(), shown);
    let common = common_words(view.rows);
    for (index, row) in view.rows.iter().enumerate().skip(first).take(shown) {
        let y = inner.y + (index - first) as u16 * each;
        let line = Rect { y, height: 1, ..inner };
        draw_name(view, common, (index, row), theme, line, buffer);
        if each == 2 {
            let below =
                Rect { x: line.x + 3, y: y + 1, width: line.width.saturating_sub(4), ..line };
            put(below, &detail(row, below.width), theme.style(Tone::Faint), theme.ascii, buffer);
        }
    }
}

/// The granule at a place on the screen, for the mouse.
pub fn row_at(view: &TrayView<'_>, area: Rect, column: u16, row: u16) -> Option<usize> {
    if !area.contains((column, row).into()) || row == area.y {
        return None;
    }
    let height = area.height - 1;
    let each = each_takes(view.rows.len(), height);
    let first = first_shown(view.cursor, view.rows.len(), usize::from(height / each));
    let index = first + usize::from((row - area.y - 1) / each);
    (index < view.rows.len()).then_some(index)
}

fn each_takes(rows: usize, height: u16) -> u16 {
    if 2 * rows <= usize::from(height) { 2 } else { 1 }
}

fn draw_name(
    view: &TrayView<'_>,
    common: usize,
    (index, row): (usize, &TrayRow),
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
    let name = abbreviated(&row.name, common, usize::from(right(3).width), theme.ascii);
    put(right(3), &name, theme.style(tone), theme.ascii, buffer);
    if view.focused && index == view.cursor {
        buffer.set_style(right(1), Modifier::REVERSED);
    }
}

/// A name that is too long loses its extension, then the words that all names begin with, then its
/// beginning: the names of one day's granules begin alike.
fn abbreviated(name: &str, common: usize, width: usize, ascii: bool) -> String {
    if name.width() <= width {
        return name.to_string();
    }
    let stem = match name.rsplit_once('.') {
        Some((stem, _)) if !stem.is_empty() => stem,
        _ => name,
    };
    match stem.get(common..) {
        Some(rest) if common > 0 && stem.width() > width && rest.width() < width => {
            format!("{}{rest}", if ascii { '~' } else { '…' })
        }
        _ => cut_front(stem, width, ascii),
    }
}

/// The length in bytes of the whole words that all names begin with; 0 for a single name.
fn common_words(rows: &[TrayRow]) -> usize {
    let [first, others @ ..] = rows else { return 0 };
    let same = |name: &str| {
        let pairs = first.name.char_indices().zip(name.chars());
        let differs = pairs.clone().find(|((_, one), other)| one != other);
        differs.map_or(first.name.len().min(name.len()), |((at, _), _)| at)
    };
    let shortest = others.iter().map(|row| same(&row.name)).min().unwrap_or(0);
    let alike = first.name.get(..shortest).unwrap_or_default();
    alike.rfind(['_', '-', '.', '/']).map_or(0, |at| at + 1)
}

/// What is left to decide matters most, then what is flagged.
fn detail(row: &TrayRow, width: u16) -> String {
    let Some(shares) = row.shares else { return row.state.words().to_string() };
    let doubt = shares.in_doubt.filter(|doubt| *doubt > 0.0);
    let mut parts = Vec::from_iter(doubt.map(|doubt| format!("{} in doubt", percent(doubt))));
    parts.push(format!("{} flagged", percent(shares.flagged)));
    parts.push(format!("{} not assessed", percent(shares.not_assessed)));
    parts.push(format!("{} no flag", percent(shares.no_flag)));
    let fits = |count: &usize| parts[..*count].join(", ").len() <= usize::from(width);
    let count = (1..=parts.len()).rev().find(fits).unwrap_or(1);
    parts[..count].join(", ")
}

/// A share in whole percent, of which 0% and 100% are exact.
fn percent(share: f64) -> String {
    let share = if share.is_nan() { 0.0 } else { 100.0 * share.clamp(0.0, 1.0) };
    if share > 0.0 && share < 1.0 {
        "<1%".to_string()
    } else if share > 99.0 && share < 100.0 {
        "99%".to_string()
    } else {
        format!("{share:.0}%")
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    fn rows() -> Vec<TrayRow> {
        let row = |state, name: &str, shares| TrayRow { state, name: name.to_string(), shares };
        let shares = |flagged, not_assessed| {
            Some(TrayShares {
                flagged,
                no_flag: 1.0 - flagged - not_assessed,
                not_assessed,
                in_doubt: None,
            })
        };
        vec![
            row(TrayState::SignedOff, "brindle_lowen_cloud.nc", shares(0.123, 0.0)),
            row(TrayState::InHand, "brindle_ketter_dust.nc", shares(0.004, 0.996)),
            row(TrayState::Unusable, "torn.nc", None),
        ]
    }

    #[test]
    fn few_granules_get_two_lines_each() {
        let mut screen = Screen::new(20, 7);
        let rows = rows();
        let view = TrayView { rows: &rows, current: 1, cursor: 1, focused: false };
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "─ Tray 2 of 3 ──────",
                " ✓ …dle_lowen_cloud",
                "   12% flagged",
                "▸◐ …dle_ketter_dust",
                "   <1% flagged",
                " ! torn.nc",
                "   can't be used",
            ]
        );
        assert_eq!(row_at(&view, screen.area(), 4, 4), Some(1));
        assert_eq!(row_at(&view, screen.area(), 4, 0), None);
    }

    #[test]
    fn many_granules_get_one_line_and_scroll() {
        let mut screen = Screen::new(34, 3);
        let rows = rows();
        let view = TrayView { rows: &rows, current: 2, cursor: 2, focused: true };
        draw(&view, &Theme { ascii: true, ..THEME }, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            ["= Tray 3 of 3 ====================", " o brindle_ketter_dust.nc", ">! torn.nc"]
        );
        assert!(screen.buffer[(5, 2)].modifier.contains(Modifier::REVERSED));
        assert_eq!(row_at(&view, screen.area(), 0, 1), Some(1));
    }

    #[test]
    fn long_names_lose_the_words_that_all_begin_with() {
        let row = |name: &str| TrayRow {
            state: TrayState::Untouched,
            name: name.to_string(),
            shares: Some(TrayShares {
                flagged: 0.25,
                no_flag: 0.5,
                not_assessed: 0.25,
                in_doubt: Some(0.03),
            }),
        };
        let rows = ["brindle_lowen_001.nc", "brindle_lowen_evening.nc"].map(row);
        let view = TrayView { rows: &rows, current: 0, cursor: 0, focused: false };
        let mut screen = Screen::new(17, 5);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines()[1..],
            ["▸○ …001", "   3% in doubt", " ○ …evening", "   3% in doubt"]
        );
        assert_eq!(detail(&rows[0], 30), "3% in doubt, 25% flagged");
        assert_eq!(common_words(&rows[..1]), 0);
    }

    #[test]
    fn only_whole_shares_are_shown_as_whole() {
        assert_eq!(percent(0.0), "0%");
        assert_eq!(percent(0.0001), "<1%");
        assert_eq!(percent(0.9999), "99%");
        assert_eq!(percent(1.0), "100%");
    }
}
