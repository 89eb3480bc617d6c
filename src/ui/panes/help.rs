//! The help: every key and what it does, over the panes.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Popup, draw_more, put, wrap};

/// Everything the help shows.
#[derive(Clone, Debug)]
pub struct HelpView<'a> {
    /// The title, such as "Keys of the Field".
    pub title: &'a str,
    /// The groups, in order.
    pub groups: &'a [HelpGroup],
    /// How many lines are scrolled away at the top; more than there are is the end.
    pub scroll: usize,
}

/// Keys that belong together.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct HelpGroup {
    /// What they have in common.
    pub title: String,
    /// Keys and what they do.
    pub rows: Vec<(String, String)>,
}

/// The widest column of keys.
const KEYS: usize = 16;

/// The widest column of lines.
const WIDEST: u16 = 72;

/// Draws the help over the screen, in two columns where one is too long and there is room.
pub fn draw(view: &HelpView<'_>, theme: &Theme, screen: Rect, buffer: &mut Buffer) {
    let keys = keys_width(view.groups);
    let width = WIDEST.min(screen.width.saturating_sub(6));
    let lines = lines(view.groups, usize::from(width).saturating_sub(keys + 4));
    let is_long = lines.len() + 2 > usize::from(screen.height);
    let columns: Vec<&[Line<'_>]> = match is_long && screen.width >= 2 * WIDEST + 6 {
        true => halves(&lines).to_vec(),
        false => vec![&lines],
    };
    let longest = columns.iter().map(|column| column.len()).max().unwrap_or(0);
    let popup = Popup {
        title: view.title,
        foot: if theme.ascii { "up/down scroll, Esc closes" } else { "↑↓ scroll, Esc closes" },
        wanted: (width * columns.len() as u16, longest as u16),
    };
    let Some(inner) = popup.draw(theme, screen, buffer) else { return };
    let first = view.scroll.min(longest.saturating_sub(usize::from(inner.height)));
    let each = inner.width / columns.len() as u16;
    for (number, lines) in columns.iter().enumerate() {
        let area = Rect { x: inner.x + each * number as u16, width: each, ..inner };
        for (line, row) in lines.iter().skip(first).zip(area.rows()) {
            draw_line(line, keys as u16 + 2, theme, row, buffer);
        }
    }
    let edge = Rect { width: inner.width + 1, ..inner };
    draw_more(edge, first, longest, theme, buffer);
}

fn keys_width(groups: &[HelpGroup]) -> usize {
    let rows = groups.iter().flat_map(|group| &group.rows);
    rows.map(|(key, _)| key.width()).max().unwrap_or(0).min(KEYS)
}

/// The lines in two parts of about the same length, cut between two groups.
fn halves<'a, 'b>(lines: &'a [Line<'b>]) -> [&'a [Line<'b>]; 2] {
    let gaps = lines.iter().enumerate().filter(|(_, line)| matches!(line, Line::Title("")));
    let middle = lines.len() / 2;
    match gaps.map(|(index, _)| index).min_by_key(|index| index.abs_diff(middle)) {
        Some(gap) => [&lines[..gap], &lines[gap + 1..]],
        None => [lines, &[]],
    }
}

fn draw_line(line: &Line<'_>, keys: u16, theme: &Theme, row: Rect, buffer: &mut Buffer) {
    let from = |columns: u16| {
        let columns = columns.min(row.width);
        Rect { x: row.x + columns, width: row.width - columns, ..row }
    };
    match line {
        Line::Title(title) => {
            put(row, title, theme.style(Tone::Strong), theme.ascii, buffer);
        }
        Line::Key(name, does) => {
            let key = Rect { width: from(2).width.min(keys - 1), ..from(2) };
            put(key, name, theme.style(Tone::Accent), theme.ascii, buffer);
            put(from(keys + 2), does, theme.style(Tone::Plain), theme.ascii, buffer);
        }
    }
}

enum Line<'a> {
    Title(&'a str),
    Key(&'a str, String),
}

fn lines(groups: &[HelpGroup], width: usize) -> Vec<Line<'_>> {
    let mut lines = Vec::new();
    for group in groups {
        if !lines.is_empty() {
            lines.push(Line::Title(""));
        }
        if !group.title.is_empty() {
            lines.push(Line::Title(&group.title));
        }
        for (key, does) in &group.rows {
            for (index, part) in wrap(does, width).into_iter().enumerate() {
                lines.push(Line::Key(if index == 0 { key } else { "" }, part));
            }
        }
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};
    use proptest::prelude::*;

    fn groups() -> Vec<HelpGroup> {
        let row = |key: &str, does: &str| (key.to_string(), does.to_string());
        vec![
            HelpGroup {
                title: "Moving".to_string(),
                rows: vec![row("arrows", "move the cursor"), row("Tab", "next pane")],
            },
            HelpGroup {
                title: "Deciding".to_string(),
                rows: vec![row("f", "flag the footprint under the cursor, or the box")],
            },
        ]
    }

    #[test]
    fn keys_stand_in_groups() {
        let mut screen = Screen::new(48, 10);
        let view = HelpView { title: "Keys", groups: &groups(), scroll: 0 };
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                " ╭─ Keys ─────────────────────────────────────╮",
                " │ Moving                                     │",
                " │   arrows  move the cursor                  │",
                " │   Tab     next pane                        │",
                " │                                            │",
                " │ Deciding                                   │",
                " │   f       flag the footprint under the     │",
                " │           cursor, or the box               │",
                " ╰──────────────────── ↑↓ scroll, Esc closes ─╯",
                "",
            ]
        );
    }

    #[test]
    fn it_scrolls_to_the_end_and_no_further() {
        let mut screen = Screen::new(48, 6);
        let view = HelpView { title: "Keys", groups: &groups(), scroll: 1000 };
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        assert!(lines[4].contains("cursor, or the box"), "{lines:?}");
        assert!(lines[1].contains('▴'), "{lines:?}");
    }

    #[test]
    fn a_long_list_stands_in_two_columns_where_there_is_room() {
        let mut screen = Screen::new(160, 6);
        let view = HelpView { title: "Keys", groups: &groups(), scroll: 0 };
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        assert!(lines[1].contains("Moving") && lines[1].contains("Deciding"), "{lines:#?}");
        assert!(!lines.iter().any(|line| line.contains('▾')), "all of it is on show: {lines:#?}");
    }

    proptest! {
        #[test]
        fn any_size_is_survived(width in 0u16..250, height in 0u16..80, scroll in 0usize..99) {
            let mut screen = Screen::new(width, height);
            let view = HelpView { title: "Keys", groups: &groups(), scroll };
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
        }
    }
}
