//! The command line and its completions.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::widgets::{Clear, Widget};
use unicode_width::UnicodeWidthStr;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{clip, cut, draw_input, first_shown, put};

/// Everything the command line shows.
#[derive(Clone, Debug)]
pub struct CommandView<'a> {
    /// What stands before the text: ":" as a rule.
    pub lead: &'a str,
    /// What was typed.
    pub text: &'a str,
    /// Where the cursor stands, in bytes of `text`.
    pub cursor: usize,
    /// What the text could become.
    pub completions: &'a [Completion],
    /// The completion in hand.
    pub chosen: Option<usize>,
    /// What is wrong with the text, or empty.
    pub problem: &'a str,
}

/// One thing the text could become.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Completion {
    /// The text.
    pub text: String,
    /// What it means, in a few words.
    pub help: String,
}

/// At most so many completions are on show at a time.
const COMPLETIONS: u16 = 8;

/// Draws the command line on its line and the completions above it.
pub fn draw(view: &CommandView<'_>, theme: &Theme, line: Rect, buffer: &mut Buffer) {
    let Some(line) = clip(line, buffer) else { return };
    Clear.render(line, buffer);
    // However long the lead is, there is room for what is typed.
    let lead = cut(view.lead, usize::from(line.width / 2), theme.ascii);
    let cut_off = u16::from(lead != view.lead);
    let used = put(line, &lead, theme.style(Tone::Accent), theme.ascii, buffer) + cut_off;
    let text = Rect { x: line.x + used, width: line.width - used, ..line };
    draw_input(view.text, view.cursor, theme, text, buffer);
    let mut above = line.y - buffer.area.y;
    if !view.problem.is_empty() && above > 0 {
        above -= 1;
        let row = Rect { y: buffer.area.y + above, ..line };
        Clear.render(row, buffer);
        put(row, view.problem, theme.style(Tone::Bad), theme.ascii, buffer);
    }
    let height = (view.completions.len().min(usize::from(COMPLETIONS)) as u16).min(above);
    let list = Rect { y: buffer.area.y + above - height, height, ..line };
    draw_completions(view, theme, list, buffer);
}

fn draw_completions(view: &CommandView<'_>, theme: &Theme, list: Rect, buffer: &mut Buffer) {
    let widest = view.completions.iter().map(|completion| completion.text.width()).max();
    let columns = (widest.unwrap_or(0) as u16 + 2).min(list.width / 2);
    let height = usize::from(list.height);
    let first = first_shown(view.chosen.unwrap_or(0), view.completions.len(), height);
    let rows = view.completions.iter().enumerate().skip(first);
    for ((index, completion), row) in rows.zip(list.rows()) {
        Clear.render(row, buffer);
        let text = Rect { x: row.x + 1.min(row.width), width: columns.min(row.width), ..row };
        let help = Rect { x: text.right(), width: row.right() - text.right(), ..row };
        put(text, &completion.text, theme.style(Tone::Accent), theme.ascii, buffer);
        put(help, &completion.help, theme.style(Tone::Faint), theme.ascii, buffer);
        if view.chosen == Some(index) {
            buffer.set_style(row, theme.style(Tone::Chosen));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};
    use ratatui::style::Modifier;

    #[test]
    fn completions_stand_above_the_line() {
        let completion =
            |text: &str, help: &str| Completion { text: text.to_string(), help: help.to_string() };
        let completions = [completion("layer", "show a layer"), completion("leave", "leave")];
        let view = CommandView {
            lead: ":",
            text: "l",
            cursor: 1,
            completions: &completions,
            chosen: Some(1),
            problem: "which one?",
        };
        let mut screen = Screen::new(30, 6);
        let line = Rect::new(0, 5, 30, 1);
        draw(&view, &THEME, line, &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            ["", "", " layer  show a layer", " leave  leave", "which one?", ":l"]
        );
        assert!(screen.buffer[(0, 3)].modifier.contains(Modifier::REVERSED));
        assert!(screen.buffer[(2, 5)].modifier.contains(Modifier::REVERSED), "the cursor");
    }

    #[test]
    fn what_is_typed_is_seen_behind_a_long_lead() {
        let view = CommandView {
            lead: "bt(900) - bt(831) + bt(1231) ",
            text: "< 3",
            cursor: 3,
            completions: &[],
            chosen: None,
            problem: "",
        };
        let mut screen = Screen::new(20, 1);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines(), ["bt(900) -… < 3"]);
    }

    #[test]
    fn a_long_line_shows_the_part_around_its_cursor() {
        let text = "layer bt(900)-bt(831)";
        let view = CommandView {
            lead: ":",
            text,
            cursor: text.len(),
            completions: &[],
            chosen: None,
            problem: "",
        };
        let mut screen = Screen::new(10, 1);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines(), [":-bt(831)"]);
    }
}
