//! Questions over the panes: which flag, why, yes or no.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Popup, draw_input, first_shown, put, wrap};

/// A question.
#[derive(Clone, Debug)]
pub enum PromptView<'a> {
    /// Which flag to give or withdraw.
    Flags {
        /// What is going to be flagged: "Flag 128 footprints as".
        title: &'a str,
        /// The flags to choose from.
        choices: &'a [FlagChoice],
        /// The choice under the cursor.
        cursor: usize,
    },
    /// A line of text.
    Text {
        /// What is asked.
        title: &'a str,
        /// What was typed.
        text: &'a str,
        /// Where the cursor stands, in bytes of `text`.
        cursor: usize,
        /// What may be said or left out: "Enter without words gives no reason".
        hint: &'a str,
    },
    /// Answers by letter, which the lines name.
    Answers {
        /// The question.
        title: &'a str,
        /// What has to be known to answer it, and the answers, a line each.
        lines: &'a [String],
    },
    /// Yes or no.
    YesNo {
        /// The question.
        title: &'a str,
        /// What has to be known to answer it, a line each.
        lines: &'a [String],
    },
}

/// One flag to choose.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FlagChoice {
    /// The key that chooses it at once.
    pub key: char,
    /// Its sign on the map.
    pub glyph: char,
    /// Its colour, as a number into [`crate::ui::colour::Theme::flag_tint`].
    pub tint: u8,
    /// Its name in the vocabulary.
    pub name: String,
    /// What it means.
    pub meaning: String,
}

/// Draws the question over the screen.
pub fn draw(view: &PromptView<'_>, theme: &Theme, screen: Rect, buffer: &mut Buffer) {
    match view {
        PromptView::Flags { title, choices, cursor } => {
            draw_flags(title, choices, *cursor, theme, screen, buffer);
        }
        PromptView::Text { title, text, cursor, hint } => {
            let popup = Popup {
                title,
                foot: "Enter confirms, Esc cancels",
                wanted: (60.max(title.width() as u16 + 4), 2),
            };
            let Some(inner) = popup.draw(theme, screen, buffer) else { return };
            let mut rows = inner.rows();
            if let Some(row) = rows.next() {
                draw_input(text, *cursor, theme, row, buffer);
            }
            if let Some(row) = rows.next() {
                put(row, hint, theme.style(Tone::Faint), theme.ascii, buffer);
            }
        }
        PromptView::Answers { title, lines } => {
            draw_lines(title, "", lines, theme, screen, buffer);
        }
        PromptView::YesNo { title, lines } => {
            draw_lines(title, "y yes, n no", lines, theme, screen, buffer);
        }
    }
}

fn draw_lines(
    title: &str,
    foot: &str,
    lines: &[String],
    theme: &Theme,
    screen: Rect,
    buffer: &mut Buffer,
) {
    let room = usize::from(screen.width.saturating_sub(6)).max(1);
    let lines: Vec<String> = lines.iter().flat_map(|line| wrap(line, room)).collect();
    let widest = lines.iter().map(|line| line.width()).max().unwrap_or(0);
    let wanted = (widest.max(title.width() + 4).max(30) as u16, lines.len() as u16);
    let popup = Popup { title, foot, wanted };
    let Some(inner) = popup.draw(theme, screen, buffer) else { return };
    for (line, row) in lines.iter().zip(inner.rows()) {
        put(row, line, theme.style(Tone::Plain), theme.ascii, buffer);
    }
}

fn draw_flags(
    title: &str,
    choices: &[FlagChoice],
    cursor: usize,
    theme: &Theme,
    screen: Rect,
    buffer: &mut Buffer,
) {
    let widest = |text: fn(&FlagChoice) -> &str| {
        choices.iter().map(|choice| text(choice).width()).max().unwrap_or(0)
    };
    let names = widest(|choice| &choice.name);
    let meanings = widest(|choice| &choice.meaning);
    let popup = Popup {
        title,
        foot: "key or Enter chooses, Esc cancels",
        wanted: (
            (names + meanings + 8).max(title.width() + 4).max(40) as u16,
            choices.len() as u16,
        ),
    };
    let Some(inner) = popup.draw(theme, screen, buffer) else { return };
    let first = first_shown(cursor, choices.len(), usize::from(inner.height));
    let rows = choices.iter().enumerate().skip(first);
    for ((index, choice), row) in rows.zip(inner.rows()) {
        let from = |columns: usize| {
            let columns = (columns as u16).min(row.width);
            Rect { x: row.x + columns, width: row.width - columns, ..row }
        };
        let mut write =
            |at: usize, text: &str, style| put(from(at), text, style, theme.ascii, buffer);
        write(0, &choice.key.to_string(), theme.style(Tone::Accent));
        write(3, &choice.glyph.to_string(), theme.flag_tint(choice.tint));
        write(6, &choice.name, theme.style(Tone::Plain));
        write(names + 8, &choice.meaning, theme.style(Tone::Faint));
        if index == cursor {
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
    fn flags_are_chosen_by_key_with_their_sign_and_meaning() {
        let choice = |key, glyph, name: &str, meaning: &str| FlagChoice {
            key,
            glyph,
            tint: 0,
            name: name.to_string(),
            meaning: meaning.to_string(),
        };
        let choices = [
            choice('c', 'c', "cloudy", "cloud that hides the surface"),
            choice('d', 'd', "dust_or_ash", "mineral dust"),
        ];
        let view = PromptView::Flags { title: "Flag 128 footprints", choices: &choices, cursor: 1 };
        let mut screen = Screen::new(60, 4);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "    ╭─ Flag 128 footprints ───────────────────────────╮",
                "    │ c  c  cloudy       cloud that hides the surface │",
                "    │ d  d  dust_or_ash  mineral dust                 │",
                "    ╰───────────── key or Enter chooses, Esc cancels ─╯",
            ]
        );
        assert!(screen.buffer[(12, 2)].modifier.contains(Modifier::REVERSED));
    }

    #[test]
    fn a_reason_is_typed_on_its_own_line() {
        let view = PromptView::Text {
            title: "Why",
            text: "cold top",
            cursor: 8,
            hint: "Enter without words gives no reason",
        };
        let mut screen = Screen::new(70, 4);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        assert!(lines[1].contains("│ cold top"), "{lines:?}");
        assert!(lines[2].contains("Enter without words"), "{lines:?}");
    }

    #[test]
    fn a_question_shows_what_has_to_be_known() {
        let lines = ["128 flagged".to_string(), "900 not assessed".to_string()];
        let view = PromptView::YesNo { title: "Sign off?", lines: &lines };
        let mut screen = Screen::new(40, 4);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert!(screen.lines()[2].contains("900 not assessed"));
        assert!(screen.lines()[3].contains("y yes, n no"));
    }
}
