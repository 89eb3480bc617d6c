//! The status line (what happened, what is pending, the counts) and the line of hints below it.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{clip, put, put_right};

/// Everything the status line shows, from the left; what does not fit is left away from the end of
/// each side, the message last.
#[derive(Clone, Debug, Default)]
pub struct StatusView<'a> {
    /// What happened last.
    pub message: &'a str,
    /// How the message is to be taken.
    pub tone: Tone,
    /// Short facts at the right: counts, pending decisions, progress. The most important first.
    pub facts: &'a [(String, Tone)],
}

/// A key and what it does, for the line of hints.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Hint<'a> {
    /// The key as it is written on the screen.
    pub key: &'a str,
    /// What it does, in a word or two.
    pub does: &'a str,
}

/// Draws the status line.
pub fn draw(view: &StatusView<'_>, theme: &Theme, line: Rect, buffer: &mut Buffer) {
    let Some(line) = clip(line, buffer) else { return };
    let line = Rect { x: line.x + 1.min(line.width), width: line.width.saturating_sub(2), ..line };
    let gap = if theme.ascii { " | " } else { " · " };
    // A long message stands for a long time: it does not push out the counts. At 80 columns there is
    // room for the cases left, that all is kept, and how many are flagged.
    let width = usize::from(line.width);
    let message = view.message.width().min(width * 11 / 20);
    let mut room = width.saturating_sub(message + usize::from(message > 0));
    let mut shown = 0;
    for (text, _) in view.facts {
        let needed = text.width() + if shown > 0 { gap.width() } else { 0 };
        if needed > room {
            break;
        }
        room -= needed;
        shown += 1;
    }
    let mut right = line;
    for (index, (text, tone)) in view.facts[..shown].iter().enumerate().rev() {
        right.width -= put_right(right, text, theme.style(*tone), theme.ascii, buffer);
        if index > 0 {
            right.width -= put_right(right, gap, theme.style(Tone::Faint), theme.ascii, buffer);
        }
    }
    let left = Rect { width: right.width.saturating_sub(u16::from(shown > 0)), ..line };
    put(left, view.message, theme.style(view.tone), theme.ascii, buffer);
}

/// Draws as many hints as fit, in order.
pub fn draw_hints(hints: &[Hint<'_>], theme: &Theme, line: Rect, buffer: &mut Buffer) {
    let Some(line) = clip(line, buffer) else { return };
    let mut rest =
        Rect { x: line.x + 1.min(line.width), width: line.width.saturating_sub(2), ..line };
    for hint in hints {
        let needed = hint.key.width() + 1 + hint.does.width();
        if needed > usize::from(rest.width) {
            break;
        }
        for (text, tone) in [(hint.key, Tone::Accent), (" ", Tone::Plain), (hint.does, Tone::Faint)]
        {
            let used = put(rest, text, theme.style(tone), theme.ascii, buffer);
            rest = Rect { x: rest.x + used, width: rest.width - used, ..rest };
        }
        let gap = 2.min(rest.width);
        rest = Rect { x: rest.x + gap, width: rest.width - gap, ..rest };
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    #[test]
    fn the_least_important_facts_make_room_for_the_message() {
        let facts = [
            ("2 pending".to_string(), Tone::Warning),
            ("128 flagged".to_string(), Tone::Plain),
            ("900 not assessed".to_string(), Tone::Plain),
        ];
        let view = StatusView { message: "flagged 128 as cloudy", tone: Tone::Good, facts: &facts };
        for (width, line) in [
            (80, " flagged 128 as cloudy               2 pending · 128 flagged · 900 not assessed"),
            (50, " flagged 128 as cloudy    2 pending · 128 flagged"),
            (24, " flagged 128… 2 pending"),
            (12, " flagged 1…"),
        ] {
            let mut screen = Screen::new(width, 1);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            assert_eq!(screen.lines(), [line]);
        }
    }

    #[test]
    fn hints_that_do_not_fit_are_left_away_whole() {
        let hints = [Hint { key: "f", does: "flag" }, Hint { key: "?", does: "help" }];
        let mut screen = Screen::new(12, 1);
        draw_hints(&hints, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines(), [" f flag"]);
    }
}
