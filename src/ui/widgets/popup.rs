//! A box over the panes.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::widgets::{Clear, Widget};

use super::text::{clip, put, put_right};
use crate::ui::colour::{Theme, Tone};

/// A box in the middle of the screen.
pub(in crate::ui) struct Popup<'a> {
    /// Its title.
    pub title: &'a str,
    /// What stands at the right of its lower edge: how to leave it, as a rule.
    pub foot: &'a str,
    /// Columns and lines that its contents would like to have.
    pub wanted: (u16, u16),
}

impl Popup<'_> {
    /// Clears and draws the box; returns the room inside it, if there is any.
    pub fn draw(&self, theme: &Theme, area: Rect, buffer: &mut Buffer) -> Option<Rect> {
        let area = self.place(clip(area, buffer)?);
        Clear.render(area, buffer);
        let [top_left, top_right, bottom_left, bottom_right, across, down] = match theme.ascii {
            false => ["╭", "╮", "╰", "╯", "─", "│"],
            true => ["+", "+", "+", "+", "-", "|"],
        };
        let style = theme.style(Tone::Accent);
        let (right, bottom) = (area.right() - 1, area.bottom() - 1);
        let mut set = |x: u16, y: u16, symbol: &str| {
            buffer[(x, y)].set_symbol(symbol).set_style(style);
        };
        for x in area.x..=right {
            set(x, area.y, across);
            set(x, bottom, across);
        }
        for y in area.y..=bottom {
            set(area.x, y, down);
            set(right, y, down);
        }
        set(area.x, area.y, top_left);
        set(right, area.y, top_right);
        set(area.x, bottom, bottom_left);
        set(right, bottom, bottom_right);
        let edge =
            |y: u16| Rect { x: area.x + 2, y, width: area.width.saturating_sub(4), height: 1 };
        if !self.title.is_empty() {
            put(edge(area.y), &format!(" {} ", self.title), style, theme.ascii, buffer);
        }
        if !self.foot.is_empty() {
            let foot = format!(" {} ", self.foot);
            put_right(edge(bottom), &foot, theme.style(Tone::Faint), theme.ascii, buffer);
        }
        clip(
            Rect {
                x: area.x + 2,
                y: area.y + 1,
                width: area.width.saturating_sub(4),
                height: area.height.saturating_sub(2),
            },
            buffer,
        )
    }

    fn place(&self, area: Rect) -> Rect {
        let width = self.wanted.0.saturating_add(4).min(area.width);
        let height = self.wanted.1.saturating_add(2).min(area.height);
        Rect {
            x: area.x + (area.width - width) / 2,
            y: area.y + (area.height - height) / 2,
            width,
            height,
        }
    }
}
