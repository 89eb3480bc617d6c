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

/// Draws the help over the screen.
pub fn draw(view: &HelpView<'_>, theme: &Theme, screen: Rect, buffer: &mut Buffer) {
    let keys = view
        .groups
        .iter()
        .flat_map(|group| &group.rows)
        .map(|(key, _)| key.width())
        .max()
        .unwrap_or(0)
        .min(KEYS);
    let width = 72.min(screen.width.saturating_sub(6));
    let lines = lines(view.groups, usize::from(width).saturating_sub(keys + 4));
    let popup = Popup {
        title: view.title,
        foot: if theme.ascii { "up/down scroll, Esc closes" } else { "↑↓ scroll, Esc closes" },
        wanted: (width, lines.len() as u16),
    };
    let Some(inner) = popup.draw(theme, screen, buffer) else { return };
    let first = view.scroll.min(lines.len().saturating_sub(usize::from(inner.height)));
    let keys = keys as u16 + 2;
    for (line, row) in lines.iter().skip(first).zip(inner.rows()) {
        let text = Rect {
            x: row.x + (keys + 2).min(row.width),
            width: row.width.saturating_sub(keys + 2),
            ..row
        };
        let key = Rect { x: row.x + 2.min(row.width), width: keys.min(row.width) - 1, ..row };
        match line {
            Line::Title(title) => {
                put(row, title, theme.style(Tone::Strong), theme.ascii, buffer);
            }
            Line::Key(name, does) => {
                put(key, name, theme.style(Tone::Accent), theme.ascii, buffer);
                put(text, does, theme.style(Tone::Plain), theme.ascii, buffer);
            }
        }
    }
    let edge = Rect { width: inner.width + 1, ..inner };
    draw_more(edge, first, lines.len(), theme, buffer);
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
}
