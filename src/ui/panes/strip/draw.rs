//! Drawing the Strip.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;
use unicode_width::UnicodeWidthStr;

use super::{Group, StripView};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Braille, Frame, cut, put, put_right, ticks};

/// Where the parts lie.
struct Plot {
    area: Rect,
    left: Rect,
    bottom: Rect,
    low: f64,
    high: f64,
    values: Vec<(f64, String)>,
}

/// The widest bar, in columns of dots.
const WIDEST: usize = 12;

/// How a span is filled: a pattern, so that what lies in front of it stays readable.
struct Fill {
    sign: char,
    style: Style,
    /// Every so manieth dot of a column is set.
    every: usize,
}

/// Draws the Strip: in each group the range from lowest to highest, the quartiles within it, and the
/// median as a line.
pub fn draw(view: &StripView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let room = usize::from(area.width).saturating_sub(" Strip ".len() + 4);
    let gap = if view.words.is_empty() { 0 } else { 4 };
    let words = cut(view.words, room.saturating_sub(view.title.width() + gap), theme.ascii);
    let frame = Frame { name: "Strip", rest: view.title, focused: view.focused };
    let Some(inner) = frame.draw(theme, area, buffer) else { return };
    // Half of the words would say nothing.
    if !words.is_empty() && words.width() >= view.words.width() {
        let rule = Rect { height: 1, width: area.width.saturating_sub(1), ..area };
        put_right(rule, &format!(" {words} "), theme.style(Tone::Accent), theme.ascii, buffer);
    }
    let Some(plot) = Plot::new(view, inner).filter(|_| view.empty.is_empty()) else {
        let words = if view.empty.is_empty() { "no values" } else { view.empty };
        put(inner, words, theme.style(Tone::Faint), theme.ascii, buffer);
        return;
    };
    plot.draw_axes(view, theme, buffer);
    let all = Fill { sign: '.', style: theme.style(Tone::Faint), every: 4 };
    plot.draw_spans(view, &all, theme, buffer, |group| (group.lowest, group.highest));
    let half = Fill { sign: ':', style: theme.curve(Some(0)), every: 2 };
    plot.draw_spans(view, &half, theme, buffer, |group| (group.lower, group.upper));
    plot.draw_medians(view, theme, buffer);
    if let Some(column) = view.cursor.and_then(|group| plot.column_of(group, view.groups.len())) {
        plot.draw_cursor(column, theme, buffer);
    }
}

/// The group at a place on the screen, for the mouse.
pub fn group_at(view: &StripView<'_>, area: Rect, column: u16, row: u16) -> Option<usize> {
    let inner = Rect { y: area.y + 1, height: area.height.checked_sub(1)?, ..area };
    let plot = Plot::new(view, inner)?;
    if !plot.area.contains((column, row).into()) {
        return None;
    }
    let count = view.groups.len();
    (0..count).min_by_key(|group| plot.column_of(*group, count).map(|x| x.abs_diff(column)))
}

impl Plot {
    fn new(view: &StripView<'_>, room: Rect) -> Option<Self> {
        if room.height < 3 || room.width < 12 {
            return None;
        }
        let groups = || view.groups.iter().flatten();
        let low = groups().map(|group| group.lowest).fold(f64::INFINITY, f64::min);
        let high = groups().map(|group| group.highest).fold(f64::NEG_INFINITY, f64::max);
        if !(low.is_finite() && high.is_finite()) {
            return None;
        }
        let margin = match high - low {
            // One value only: room around it, so that it lies in the middle.
            none if none <= 1e-9 * low.abs().max(high.abs()).max(1e-300) => {
                (0.01 * low.abs()).max(0.5)
            }
            width => 0.04 * width,
        };
        let (low, high) = (low - margin, high + margin);
        let (values, decimals) = ticks(low, high, usize::from(room.height / 2).max(1));
        let values: Vec<(f64, String)> =
            values.into_iter().map(|value| (value, format!("{value:.decimals$}"))).collect();
        let widest = values.iter().map(|(_, text)| text.len()).max().unwrap_or(0);
        let labels = (widest as u16).min(room.width / 3);
        let height = room.height - 1;
        let area = Rect { x: room.x + labels + 1, width: room.width - labels - 2, height, ..room };
        let bottom = Rect { y: area.bottom(), height: 1, ..area };
        let left = Rect { width: labels + 1, height, ..room };
        Some(Self { area, left, bottom, low, high, values })
    }

    /// The row where a value lies, of so many from above.
    fn row_of(&self, value: f64, rows: usize) -> usize {
        let share = (self.high - value) / (self.high - self.low);
        ((share.clamp(0.0, 1.0) * rows as f64) as usize).min(rows.saturating_sub(1))
    }

    /// The column of the screen in the middle of a group.
    fn column_of(&self, group: usize, count: usize) -> Option<u16> {
        if group >= count {
            return None;
        }
        let column = (2 * group + 1) * usize::from(self.area.width) / (2 * count);
        Some(self.area.x + (column as u16).min(self.area.width - 1))
    }

    /// The columns of dots of a group: all that it has, with one left free after it where there is
    /// room, but no more than can be taken in as one bar.
    fn dots_of(group: usize, count: usize, columns: usize) -> std::ops::Range<usize> {
        let edge = |group: usize| group * columns / count;
        let (from, to) = (edge(group), edge(group + 1).max(edge(group) + 1));
        let width = if to - from > 3 { to - from - 1 } else { to - from };
        let spare = width.saturating_sub(WIDEST);
        from + spare / 2..from + spare / 2 + width - spare
    }

    /// One span in each group. Where several groups share a column their spans lie over one another,
    /// so that no stray group vanishes.
    fn draw_spans(
        &self,
        view: &StripView<'_>,
        fill: &Fill,
        theme: &Theme,
        buffer: &mut Buffer,
        span: impl Fn(&Group) -> (f64, f64),
    ) {
        let mut canvas = Braille::new(self.area, theme.ascii);
        let (columns, rows) = (canvas.columns(), canvas.rows());
        for (number, group) in view.groups.iter().enumerate() {
            let Some(group) = group else { continue };
            let (low, high) = span(group);
            let (top, bottom) = (self.row_of(high, rows), self.row_of(low, rows));
            for column in Self::dots_of(number, view.groups.len(), columns) {
                canvas.shade(column, top, bottom, if theme.ascii { 1 } else { fill.every });
            }
        }
        canvas.draw(fill.sign, fill.style, buffer);
    }

    fn draw_medians(&self, view: &StripView<'_>, theme: &Theme, buffer: &mut Buffer) {
        let mut canvas = Braille::new(self.area, theme.ascii);
        let (columns, rows) = (canvas.columns(), canvas.rows());
        let mut previous = None;
        for (number, group) in view.groups.iter().enumerate() {
            let Some(group) = group else {
                previous = None;
                continue;
            };
            let row = self.row_of(group.median, rows);
            let dots = Self::dots_of(number, view.groups.len(), columns);
            // Many groups make a line; few stand for themselves.
            if let Some(before) = previous.filter(|_| dots.len() <= 3) {
                canvas.column(dots.start, before, row);
            }
            for column in dots {
                canvas.column(column, row, row);
            }
            previous = Some(row);
        }
        canvas.draw('*', theme.style(Tone::Strong), buffer);
    }

    fn draw_cursor(&self, column: u16, theme: &Theme, buffer: &mut Buffer) {
        for y in self.area.y..self.area.bottom() {
            let Some(cell) = buffer.cell_mut((column, y)) else { continue };
            if cell.symbol() == " " {
                cell.set_char(if theme.ascii { '|' } else { '│' });
            }
            cell.set_style(theme.style(Tone::Accent));
        }
    }

    fn draw_axes(&self, view: &StripView<'_>, theme: &Theme, buffer: &mut Buffer) {
        let faint = theme.style(Tone::Faint);
        let [bar, tick] = if theme.ascii { ["|", "+"] } else { ["│", "┤"] };
        let x = self.left.right() - 1;
        let mut put_bar = |y: u16, sign: &str| {
            if let Some(cell) = buffer.cell_mut((x, y)) {
                cell.set_symbol(sign).set_style(faint);
            }
        };
        (self.area.y..self.area.bottom()).for_each(|y| put_bar(y, bar));
        let rows = usize::from(self.area.height);
        let row = |value: f64| self.area.y + self.row_of(value, rows) as u16;
        self.values.iter().for_each(|(value, _)| put_bar(row(*value), tick));
        let labels = Rect { width: self.left.width - 1, height: 1, ..self.left };
        for (value, text) in &self.values {
            let label = Rect { y: row(*value), ..labels };
            put_right(label, text, theme.style(Tone::Plain), theme.ascii, buffer);
        }
        let unit = if view.unit.is_empty() { "" } else { ", " };
        let name = format!("{}{unit}{}", view.along, view.unit);
        put_right(self.bottom, &name, faint, theme.ascii, buffer);
        let free = self.bottom.width.saturating_sub(name.width() as u16 + 2);
        self.draw_numbers(view.groups.len(), free, theme, buffer);
    }

    /// The numbers of groups, counted from nought as everywhere, where there is room.
    fn draw_numbers(&self, count: usize, room: u16, theme: &Theme, buffer: &mut Buffer) {
        let most = usize::from(room / 6).clamp(1, count.max(1));
        let (numbers, _) = ticks(0.0, count.saturating_sub(1).max(1) as f64, most);
        let mut free = self.bottom.x;
        for number in numbers.into_iter().filter(|number| number.fract() == 0.0) {
            let text = format!("{number:.0}");
            let Some(column) = self.column_of(number as usize, count) else { continue };
            let start = column.saturating_sub(text.len() as u16 / 2).max(self.bottom.x);
            let end = start + text.len() as u16;
            if start < free || end > self.bottom.x + room {
                continue;
            }
            free = end + 1;
            let place = Rect { x: start, width: text.len() as u16, ..self.bottom };
            put(place, &text, theme.style(Tone::Plain), theme.ascii, buffer);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};
    use proptest::prelude::*;

    const ASCII: Theme = Theme { ascii: true, ..THEME };

    fn view<'a>(groups: &'a [Option<Group>]) -> StripView<'a> {
        StripView {
            title: "bt(900) along line",
            unit: "K",
            along: "line",
            groups,
            cursor: None,
            words: "",
            empty: "",
            focused: false,
        }
    }

    fn groups(medians: &[f64]) -> Vec<Option<Group>> {
        let group =
            |median: &f64| Group::of([-9.0, -3.0, 0.0, 3.0, 9.0].map(|x| x + median).into_iter());
        medians.iter().map(group).collect()
    }

    #[test]
    fn a_step_between_groups_is_seen() {
        let groups = groups(&[260.0, 260.0, 280.0, 280.0]);
        let mut screen = Screen::new(40, 9);
        draw(&view(&groups), &ASCII, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "- Strip bt(900) along line -------------",
                "   |                 ........ ........",
                "280+                 ******** ********",
                "   |                 :::::::: ::::::::",
                "   |....... ........ ........ ........",
                "   |::::::: ::::::::",
                "260+******* ********",
                "   |....... ........",
                "        0        1       2      line, K",
            ]
        );
    }

    #[test]
    fn a_missing_group_leaves_a_gap_and_the_cursor_finds_its_group() {
        let mut groups = groups(&[260.0; 6]);
        groups[3] = None;
        let mut view = view(&groups);
        view.cursor = Some(2);
        let mut screen = Screen::new(60, 9);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        let column = lines[1].chars().position(|sign| sign == '│').unwrap_or(0);
        let area = screen.area();
        let cursor = (0..60).filter(|x| group_at(&view, area, *x, 3) == Some(2)).count();
        assert!(cursor >= 8, "{lines:#?}");
        assert!(column < 4);
        let gap = (0..60u16).find(|x| group_at(&view, area, *x, 3) == Some(3)).unwrap() + 4;
        assert!((1..8).all(|y| screen.buffer[(gap, y)].symbol() == " "), "{lines:#?}");
    }

    #[test]
    fn nothing_to_show_says_so() {
        let mut screen = Screen::new(40, 9);
        draw(&view(&[None, None]), &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines()[1], "no values");
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(64))]
        #[test]
        fn any_size_and_any_input_is_survived(
            width in 0u16..250, height in 0u16..80, x in 0u16..40, y in 0u16..20,
            values in prop::collection::vec(any::<f64>(), 0..50), cursor in 0usize..60, ascii: bool,
        ) {
            let groups: Vec<Option<Group>> =
                values.iter().map(|value| Group::of([*value].into_iter())).collect();
            let mut view = view(&groups);
            view.cursor = Some(cursor);
            let mut screen = Screen::new(width, height);
            let area = Rect::new(x, y, width, height);
            draw(&view, &Theme { ascii, ..THEME }, area, &mut screen.buffer);
            group_at(&view, area, x + 9, y + 3);
        }
    }
}
