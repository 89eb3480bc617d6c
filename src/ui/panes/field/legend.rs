//! The legend below the map: the colours of the range with its ends, the unit and where the
//! cursor's value lies.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::FieldView;
use crate::ui::colour::{Palette, Scale, Theme, Tone};
use crate::ui::widgets::{put, short, ticks};

/// A bar narrower than this says nothing.
const NARROWEST: u16 = 6;

/// Draws the legend in one line: lowest value, bar with numbers on it, highest value, unit.
pub(super) fn draw(view: &FieldView<'_>, theme: &Theme, line: Rect, buffer: &mut Buffer) {
    if line.is_empty() {
        return;
    }
    if !view.values.iter().any(|value| !value.is_nan()) {
        put(line, "no values", theme.style(Tone::Faint), theme.ascii, buffer);
        return;
    }
    let low = short(view.scale.low);
    let high = match view.unit {
        "" => short(view.scale.high),
        unit => format!("{} {unit}", short(view.scale.high)),
    };
    let plain = theme.style(Tone::Plain);
    let width = line.width.saturating_sub((low.width() + high.width() + 2) as u16);
    if width < NARROWEST {
        put(line, &format!("{low} to {high}"), plain, theme.ascii, buffer);
        return;
    }
    let used = put(line, &low, plain, theme.ascii, buffer);
    let area = Rect { x: line.x + used + 1, width, ..line };
    let bar = Bar { area, scale: view.scale, coarse: view.coarse, theme };
    bar.draw(buffer);
    bar.draw_numbers(buffer);
    let value = view.cursor.and_then(|footprint| view.values.get(footprint)).copied();
    if let Some(column) = value.and_then(|value| bar.column_of(value)) {
        bar.draw_cursor(column, buffer);
    }
    let right = bar.area.right() + 1;
    put(Rect { x: right, width: line.right() - right, ..line }, &high, plain, theme.ascii, buffer);
}

/// The bar of colours.
struct Bar<'a> {
    area: Rect,
    scale: Scale,
    coarse: bool,
    theme: &'a Theme,
}

impl Bar<'_> {
    fn level(&self, column: u16) -> u8 {
        let level = Scale::level_at((f64::from(column) + 0.5) / f64::from(self.area.width));
        if self.coarse { level & !1 } else { level }
    }

    fn draw(&self, buffer: &mut Buffer) {
        for column in 0..self.area.width {
            let level = self.level(column);
            let Some(cell) = buffer.cell_mut((self.area.x + column, self.area.y)) else { continue };
            match self.scale.palette.colour(level, self.theme.depth) {
                Some(colour) => cell.set_char(' ').set_bg(colour),
                None => cell.set_char(Palette::ink(level)),
            };
        }
    }

    /// Round values where they lie, as far as they do not run into one another.
    fn draw_numbers(&self, buffer: &mut Buffer) {
        let most = usize::from(self.area.width / 12);
        let (values, decimals) = ticks(self.scale.low, self.scale.high, most);
        let mut free = 1;
        for value in values {
            let text = format!("{value:.decimals$}");
            let Some(column) = self.column_of(value) else { continue };
            let start = column.saturating_sub(text.len() as u16 / 2);
            if start < free || start + text.len() as u16 >= self.area.width {
                continue;
            }
            free = start + text.len() as u16 + 1;
            for (column, digit) in (start..).zip(text.chars()) {
                self.put_sign(column, digit, buffer);
            }
        }
    }

    fn put_sign(&self, column: u16, sign: char, buffer: &mut Buffer) {
        let (level, depth) = (self.level(column), self.theme.depth);
        let has_ground = self.scale.palette.colour(level, depth).is_some();
        let style = self.theme.sign_on(has_ground, self.scale.palette.is_light(level, depth));
        if let Some(cell) = buffer.cell_mut((self.area.x + column, self.area.y)) {
            cell.set_char(sign).set_style(style);
        }
    }

    fn draw_cursor(&self, column: u16, buffer: &mut Buffer) {
        if let Some(cell) = buffer.cell_mut((self.area.x + column, self.area.y)) {
            let sign = if self.theme.ascii { 'X' } else { '╋' };
            cell.set_char(sign).set_style(self.theme.mark());
        }
    }

    /// The column where a value lies; values outside the range lie at its ends.
    fn column_of(&self, value: f64) -> Option<u16> {
        let range = self.scale.high - self.scale.low;
        if !(range > 0.0 && range.is_finite()) || value.is_nan() {
            return None;
        }
        let share = ((value - self.scale.low) / range).clamp(0.0, 1.0);
        Some(((share * f64::from(self.area.width)) as u16).min(self.area.width - 1))
    }
}
