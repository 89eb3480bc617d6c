//! A screen for tests of what is drawn.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::ui::colour::{Background, ColourDepth, Theme};

/// Indexed colours on a dark terminal with all characters.
pub(in crate::ui) const THEME: Theme =
    Theme { depth: ColourDepth::Indexed, ascii: false, background: Background::Dark };

/// A screen that can be read as lines of text.
pub(in crate::ui) struct Screen {
    /// What was drawn.
    pub buffer: Buffer,
}

impl Screen {
    /// An empty screen.
    pub fn new(width: u16, height: u16) -> Self {
        Self { buffer: Buffer::empty(Rect::new(0, 0, width, height)) }
    }

    /// All of it.
    pub fn area(&self) -> Rect {
        self.buffer.area
    }

    /// The lines, without spaces at their ends.
    pub fn lines(&self) -> Vec<String> {
        self.area()
            .rows()
            .map(|row| {
                let line: String =
                    row.columns().map(|cell| self.buffer[(cell.x, cell.y)].symbol()).collect();
                line.trim_end().to_string()
            })
            .collect()
    }
}
