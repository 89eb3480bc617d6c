//! One test's margin as a bar: to the right of the middle it speaks for its flag, to the left
//! against it.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{put, put_right};

/// This margin (in units of the softness) fills the bar: tests count no larger one.
const FULL: f64 = 1.5;

/// What one line shows of a test.
#[derive(Clone, Debug, PartialEq)]
pub struct MarginBar {
    /// The test's name.
    pub label: String,
    /// Its margin, positive for its flag; NaN where it does not speak.
    pub margin: f64,
    /// Value and threshold in words, for wide panes.
    pub value: String,
    /// Source and what else there is to know, for a pane that has the room; or empty.
    pub note: String,
}

impl MarginBar {
    /// Draws the bar: name, bar, margin, and value and threshold where there is room.
    pub fn draw(&self, theme: &Theme, row: Rect, buffer: &mut Buffer) {
        let [label, bar, number, value] = columns(row);
        put(label, &self.label, theme.style(Tone::Plain), theme.ascii, buffer);
        let tone = if self.margin > 0.0 { Tone::Warning } else { Tone::Plain };
        let strip = strip(self.margin, bar.width, theme.ascii);
        put(bar, &strip, theme.style(tone), theme.ascii, buffer);
        let margin = format!("{:+.1}", self.margin);
        put_right(number, &margin, theme.style(tone), theme.ascii, buffer);
        put(value, &self.value, theme.style(Tone::Faint), theme.ascii, buffer);
    }
}

/// Name, bar, margin and value beside each other.
fn columns(row: Rect) -> [Rect; 4] {
    let (bar, number) = (if row.width < 40 { 7 } else { 13 }, 5);
    let left = row.width.saturating_sub(bar + number + 2);
    // What a narrow pane has left goes to the name alone.
    let label = if left < 40 { left } else { (left / 2).min(30) };
    let at = |x: u16, width: u16| Rect {
        x: row.x + x.min(row.width),
        width: width.min(row.width.saturating_sub(x)),
        ..row
    };
    let value = label + 1 + bar + 1 + number + 2;
    [
        at(0, label),
        at(label + 1, bar),
        at(label + 1 + bar, number + 1),
        at(value, row.width.saturating_sub(value)),
    ]
}

/// The bar in so many columns, its middle marked.
fn strip(margin: f64, width: u16, ascii: bool) -> String {
    let half = usize::from(width.saturating_sub(1)) / 2;
    let share = (margin.abs() / FULL).min(1.0);
    // However small, a margin shows on its side; one that is not a number rounds to nothing.
    let long = (share * half as f64).ceil() as usize;
    let (full, empty, middle) = if ascii { ('#', ' ', '|') } else { ('█', ' ', '│') };
    let side = |filled: bool, left: bool| -> String {
        let filled = if filled { long } else { 0 };
        (0..half)
            .map(|at| if left { half - 1 - at } else { at })
            .map(|from_middle| if from_middle < filled { full } else { empty })
            .collect()
    };
    format!("{}{middle}{}", side(margin < 0.0, true), side(margin > 0.0, false))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    #[test]
    fn bars_grow_from_the_middle() {
        for (margin, bar) in [
            (1.5, "   |###"),
            (-9.0, "###|   "),
            (0.05, "   |#  "),
            (0.0, "   |   "),
            (f64::NAN, "   |   "),
            (-0.75, " ##|   "),
        ] {
            assert_eq!(strip(margin, 7, true), bar, "{margin}");
        }
    }

    #[test]
    fn a_wide_pane_shows_value_and_threshold() {
        let bar = MarginBar {
            label: "T01 gross window".to_owned(),
            margin: 1.25,
            value: "bt(900) = 251.2 < 260.0".to_owned(),
            note: String::new(),
        };
        let mut screen = Screen::new(70, 1);
        bar.draw(&THEME, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            ["T01 gross window                │█████   +1.2  bt(900) = 251.2 < 260.0"]
        );
        let mut screen = Screen::new(27, 1);
        bar.draw(&THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines(), ["T01 gross wi…    │███  +1.2"]);
    }
}
