//! The frame of a pane: a rule above it that carries its title. Panes have no sides, so that the
//! width is the data's.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::text::{clip, put};
use crate::ui::colour::{Theme, Tone};

/// A pane's frame.
pub(in crate::ui) struct Frame<'a> {
    /// The pane's name, with which the title begins.
    pub name: &'a str,
    /// What follows it.
    pub rest: &'a str,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

impl Frame<'_> {
    /// Draws the rule and returns the lines below it; `None` where there is no room for any.
    pub fn draw(&self, theme: &Theme, area: Rect, buffer: &mut Buffer) -> Option<Rect> {
        let area = clip(area, buffer)?;
        let rule = match (theme.ascii, self.focused) {
            (false, false) => "─",
            (false, true) => "━",
            (true, false) => "-",
            (true, true) => "=",
        };
        let tone = if self.focused { Tone::Accent } else { Tone::Faint };
        for x in area.x..area.right() {
            buffer[(x, area.y)].set_symbol(rule).set_style(theme.style(tone));
        }
        let title = Rect { x: area.x + 1, width: area.width.saturating_sub(2), height: 1, ..area };
        let name = format!(" {} ", self.name);
        let strong = theme.style(if self.focused { Tone::Accent } else { Tone::Strong });
        let used = put(title, &name, strong, theme.ascii, buffer);
        if !self.rest.is_empty() {
            let rest = Rect { x: title.x + used, width: title.width - used, ..title };
            let space = usize::from(rest.width).saturating_sub(1);
            if self.rest.width() <= space || space > 3 {
                let text = super::text::cut(self.rest, space, theme.ascii);
                put(rest, &format!("{text} "), theme.style(Tone::Plain), theme.ascii, buffer);
            }
        }
        clip(Rect { y: area.y + 1, height: area.height - 1, ..area }, buffer)
    }
}

/// Marks at the right edge that lines are scrolled away above or below.
pub(in crate::ui) fn draw_more(
    area: Rect,
    first: usize,
    lines: usize,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let Some(area) = clip(area, buffer) else { return };
    let [up, down] = if theme.ascii { ["^", "v"] } else { ["▴", "▾"] };
    let mut mark = |y: u16, sign: &str| {
        buffer[(area.right() - 1, y)].set_symbol(sign).set_style(theme.style(Tone::Accent));
    };
    if first > 0 {
        mark(area.y, up);
    }
    if first + usize::from(area.height) < lines {
        mark(area.bottom() - 1, down);
    }
}
