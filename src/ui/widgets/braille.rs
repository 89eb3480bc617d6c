//! Fine drawing with braille characters, two by four dots to a cell, one colour to a cell; where
//! those are not to be had one dot to a cell.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;

/// The bit of each dot in a braille cell, by column and row (Unicode's block U+2800).
const DOTS: [[u8; 4]; 2] = [[0x01, 0x02, 0x04, 0x40], [0x08, 0x10, 0x20, 0x80]];

/// A canvas of dots over an area of the screen.
pub(in crate::ui) struct Braille {
    area: Rect,
    ascii: bool,
    cells: Vec<u8>,
}

impl Braille {
    /// An empty canvas.
    pub fn new(area: Rect, ascii: bool) -> Self {
        Self { area, ascii, cells: vec![0; usize::from(area.width) * usize::from(area.height)] }
    }

    /// Dots across and down a cell.
    pub fn dots(&self) -> (usize, usize) {
        if self.ascii { (1, 1) } else { (2, 4) }
    }

    /// Dots across.
    pub fn columns(&self) -> usize {
        usize::from(self.area.width) * self.dots().0
    }

    /// Dots down.
    pub fn rows(&self) -> usize {
        usize::from(self.area.height) * self.dots().1
    }

    /// Sets the dots of a column from one row to another, both included; what lies outside is left out.
    pub fn column(&mut self, column: usize, from: usize, to: usize) {
        if column >= self.columns() {
            return;
        }
        for row in from.min(to)..=from.max(to).min(self.rows().saturating_sub(1)) {
            self.dot(column, row);
        }
    }

    /// Sets every so manieth dot of a column, so that columns side by side make a pattern.
    pub fn shade(&mut self, column: usize, from: usize, to: usize, every: usize) {
        if column >= self.columns() {
            return;
        }
        let last = from.max(to).min(self.rows().saturating_sub(1));
        // Two columns on, the pattern is shifted by half.
        let shift = column * (every / 2).max(1);
        for row in (from.min(to)..=last).filter(|row| (row + shift).is_multiple_of(every.max(1))) {
            self.dot(column, row);
        }
    }

    fn dot(&mut self, column: usize, row: usize) {
        let width = usize::from(self.area.width);
        let (cell, bit) = match self.ascii {
            true => (row * width + column, 1),
            false => (row / 4 * width + column / 2, DOTS[column % 2][row % 4]),
        };
        if let Some(bits) = self.cells.get_mut(cell) {
            *bits |= bit;
        }
    }

    /// Puts the dots on the screen, together with dots that are there already.
    pub fn draw(&self, sign: char, style: Style, buffer: &mut Buffer) {
        let width = usize::from(self.area.width).max(1);
        for (index, bits) in self.cells.iter().enumerate().filter(|(_, bits)| **bits != 0) {
            let x = self.area.x + (index % width) as u16;
            let y = self.area.y + (index / width) as u16;
            let Some(cell) = buffer.cell_mut((x, y)) else { continue };
            let sign = match self.ascii {
                true => sign,
                false => {
                    let there = cell.symbol().chars().next().map_or(0, |sign| sign as u32);
                    let there = if (0x2800..0x2900).contains(&there) { there & 0xff } else { 0 };
                    char::from_u32(0x2800 | there | u32::from(*bits)).unwrap_or(sign)
                }
            };
            // The colour of what is drawn last holds, also where that is the text's own.
            cell.set_char(sign).set_style(Style::reset()).set_style(style);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::Screen;
    use ratatui::style::Color;

    #[test]
    fn dots_share_cells() {
        let mut screen = Screen::new(2, 1);
        let mut canvas = Braille::new(screen.area(), false);
        assert_eq!((canvas.columns(), canvas.rows()), (4, 4));
        canvas.column(0, 0, 3);
        canvas.column(3, 3, 3);
        canvas.draw('*', Style::new(), &mut screen.buffer);
        assert_eq!(screen.lines(), ["⡇⢀"]);
        let mut second = Braille::new(screen.area(), false);
        second.column(1, 0, 0);
        second.column(99, 0, 99);
        second.draw('*', Style::new(), &mut screen.buffer);
        assert_eq!(screen.lines(), ["⡏⢀"]);
        let mut third = Braille::new(screen.area(), false);
        third.column(0, 3, 3);
        third.draw('*', Style::new().fg(Color::Red), &mut screen.buffer);
        second.draw('*', Style::new(), &mut screen.buffer);
        assert_eq!(screen.buffer[(0, 0)].fg, Color::Reset, "the last one's colour holds");
    }

    #[test]
    fn without_braille_a_cell_is_a_dot() {
        let mut screen = Screen::new(3, 2);
        let mut canvas = Braille::new(screen.area(), true);
        canvas.column(1, 0, 1);
        canvas.draw('*', Style::new(), &mut screen.buffer);
        assert_eq!(screen.lines(), [" *", " *"]);
    }
}
