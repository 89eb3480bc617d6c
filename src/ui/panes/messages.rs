//! Lists of messages over the panes: problems found in a file, what happened so far.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Popup, draw_more, put, wrap};

/// Everything a list of messages shows.
#[derive(Clone, Debug)]
pub struct MessagesView<'a> {
    /// The title, such as "Problems found in lowen.nc".
    pub title: &'a str,
    /// The messages, in order.
    pub rows: &'a [MessageRow],
    /// How many lines are scrolled away at the top; more than there are is the end.
    pub scroll: usize,
    /// What stands where there is no message.
    pub empty: &'a str,
}

/// One message.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct MessageRow {
    /// How it is to be taken.
    pub tone: Tone,
    /// What it says.
    pub text: String,
    /// What to do about it, or empty.
    pub advice: String,
}

/// Draws the list over the screen.
pub fn draw(view: &MessagesView<'_>, theme: &Theme, screen: Rect, buffer: &mut Buffer) {
    let width = width(view, screen);
    let lines = lines(view, width.min(usize::from(screen.width.saturating_sub(4))));
    let popup = Popup {
        title: view.title,
        foot: if theme.ascii { "up/down scroll, Esc closes" } else { "↑↓ scroll, Esc closes" },
        wanted: (width as u16, lines.len() as u16),
    };
    let Some(inner) = popup.draw(theme, screen, buffer) else { return };
    let first = view.scroll.min(lines.len().saturating_sub(usize::from(inner.height)));
    for ((text, tone), row) in lines.iter().skip(first).zip(inner.rows()) {
        put(row, text, theme.style(*tone), theme.ascii, buffer);
    }
    let edge = Rect { width: inner.width + 1, ..inner };
    draw_more(edge, first, lines.len(), theme, buffer);
}

/// How many lines can be scrolled away on this screen before the last one is on show.
pub fn last_scroll(view: &MessagesView<'_>, screen: Rect) -> usize {
    let room = usize::from(screen.width.saturating_sub(4));
    let lines = lines(view, width(view, screen).min(room)).len();
    lines.saturating_sub(usize::from(screen.height.saturating_sub(2)))
}

fn width(view: &MessagesView<'_>, screen: Rect) -> usize {
    let widest = |row: &MessageRow| row.text.width().max(row.advice.width()) + 2;
    let wanted = view.rows.iter().map(widest).max().unwrap_or(0).max(view.empty.width());
    wanted.clamp(40, usize::from(screen.width.saturating_sub(8)).max(40)).min(100)
}

fn lines(view: &MessagesView<'_>, width: usize) -> Vec<(String, Tone)> {
    if view.rows.is_empty() {
        return wrap(view.empty, width).into_iter().map(|text| (text, Tone::Faint)).collect();
    }
    let mut lines = Vec::new();
    for row in view.rows {
        lines.extend(wrap(&row.text, width).into_iter().map(|text| (text, row.tone)));
        if !row.advice.is_empty() {
            let advice = wrap(&row.advice, width.saturating_sub(2));
            lines.extend(advice.into_iter().map(|text| (format!("  {text}"), Tone::Faint)));
        }
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    #[test]
    fn each_message_is_followed_by_what_to_do() {
        let rows = [MessageRow {
            tone: Tone::Warning,
            text: "no view angles in the file".to_string(),
            advice: "tests that need them are left out".to_string(),
        }];
        let view = MessagesView { title: "Problems", rows: &rows, scroll: 0, empty: "none" };
        let mut screen = Screen::new(48, 5);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "  ╭─ Problems ───────────────────────────────╮",
                "  │ no view angles in the file               │",
                "  │   tests that need them are left out      │",
                "  ╰────────────────── ↑↓ scroll, Esc closes ─╯",
                "",
            ]
        );
    }

    #[test]
    fn the_last_scroll_shows_the_last_line_and_no_more() {
        let row = |text: String| MessageRow { text, ..MessageRow::default() };
        let mut rows = vec![row("word ".repeat(80)); 3];
        rows.push(row("the end".to_owned()));
        let screen = Screen::new(48, 8);
        let end = last_scroll(
            &MessagesView { title: "", rows: &rows, scroll: 0, empty: "" },
            screen.area(),
        );
        for (scroll, last) in [(end, true), (end - 1, false)] {
            let view = MessagesView { title: "", rows: &rows, scroll, empty: "" };
            let mut screen = Screen::new(48, 8);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            assert_eq!(screen.lines()[6].contains("the end"), last, "{:?}", screen.lines());
        }
    }

    #[test]
    fn an_empty_list_says_so() {
        let view = MessagesView { title: "Problems", rows: &[], scroll: 9, empty: "none found" };
        let mut screen = Screen::new(48, 3);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert!(screen.lines()[1].contains("none found"));
    }
}
