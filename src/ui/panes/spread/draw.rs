//! Drawing the Spread.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::{Picture, SpreadView, density, heaps};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Frame, put};

/// Draws the Spread.
pub fn draw(view: &SpreadView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let frame = Frame { name: "Spread", rest: view.title, focused: view.focused };
    let Some(inner) = frame.draw(theme, area, buffer) else { return };
    if !view.empty.is_empty() {
        put(inner, view.empty, theme.style(Tone::Faint), theme.ascii, buffer);
        return;
    }
    put(Rect { height: 1, ..inner }, view.words, theme.style(Tone::Plain), theme.ascii, buffer);
    let Some(plot) = plot_of(area) else { return };
    match &view.picture {
        Picture::Heaps(heaps) => heaps::draw(heaps, theme, plot, buffer),
        Picture::Density(density) => density::draw(density, theme, plot, buffer),
    }
}

/// The values at a place on the screen, for the mouse: across, and upwards where there are two layers.
pub fn value_at(view: &SpreadView<'_>, area: Rect, column: u16, row: u16) -> Option<(f64, f64)> {
    let plot = plot_of(area)?;
    if !plot.contains((column, row).into()) {
        return None;
    }
    match &view.picture {
        Picture::Heaps(heaps) => Some((value_of(heaps.range, column - plot.x, plot.width), 0.0)),
        Picture::Density(density) => {
            let inside = density::inside(plot);
            let x = value_of(density.ranges[0], column.checked_sub(inside.x)?, inside.width);
            let from_below = inside.bottom().checked_sub(row + 1)?;
            Some((x, value_of(density.ranges[1], from_below, inside.height)))
        }
    }
}

/// The room of the picture with its axes: the title and the line of words lie above it.
fn plot_of(area: Rect) -> Option<Rect> {
    let height = area.height.checked_sub(2).filter(|height| *height >= 3)?;
    let width = area.width.checked_sub(2).filter(|width| *width >= 10)?;
    Some(Rect { x: area.x + 1, y: area.y + 2, width, height })
}

/// The value in the middle of a cell.
fn value_of((low, high): (f64, f64), cell: u16, cells: u16) -> f64 {
    low + (f64::from(cell) + 0.5) / f64::from(cells.max(1)) * (high - low)
}

/// The cell of a value, if it lies within.
pub(super) fn cell_of(value: f64, (low, high): (f64, f64), cells: u16) -> Option<u16> {
    let share = (value - low) / (high - low);
    let inside = (0.0..=1.0).contains(&share);
    inside.then(|| ((share * f64::from(cells)) as u16).min(cells.saturating_sub(1)))
}
