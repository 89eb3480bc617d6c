//! What lies over the map: the cursor with its ticks at the edges, pins, and the box being drawn.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Modifier;

use super::pixels::{Dot, ground, set_sign};
use super::{FieldView, Geometry};
use crate::ui::colour::{Theme, Tone};

/// Draws the marks; `pane` is the whole pane, whose title rule carries a tick.
pub(super) fn draw(
    view: &FieldView<'_>,
    geometry: &Geometry,
    theme: &Theme,
    pane: Rect,
    buffer: &mut Buffer,
) {
    if let Some((one, other)) = view.corners {
        draw_box(view, geometry, (one, other), theme, buffer);
    }
    for corner in view.polygon {
        if let Some(cell) = geometry.cell_of(view.placement, *corner) {
            put_mark(cell, if theme.ascii { 'o' } else { '◇' }, theme, buffer);
        }
    }
    for pin in view.pins {
        if let Some(cell) = geometry.cell_of(view.placement, pin.footprint) {
            put_mark(cell, pin.letter, theme, buffer);
        }
    }
    let cursor = view.cursor.filter(|_| view.marked);
    let cursor = cursor.and_then(|footprint| geometry.cell_of(view.placement, footprint));
    if let Some(cell) = cursor {
        draw_cursor(cell, cursor_sign(view, theme), geometry, theme, pane, buffer);
    }
}

fn put_mark(cell: (u16, u16), glyph: char, theme: &Theme, buffer: &mut Buffer) {
    if let Some(cell) = buffer.cell_mut(cell) {
        set_sign(glyph, theme.mark(), None, cell);
    }
}

/// The cursor's sign: that of the footprint's weightiest flag, so that what was just set is seen.
fn cursor_sign(view: &FieldView<'_>, theme: &Theme) -> char {
    let flags = view.cursor.and_then(|footprint| view.flags.get(footprint)).copied().unwrap_or(0);
    let sign = view.signs.iter().find(|sign| sign.mask & flags != 0);
    sign.map_or(if theme.ascii { 'X' } else { '╋' }, |sign| sign.glyph)
}

/// The cursor's cell, and ticks beside and above the map that find it even where it hides.
fn draw_cursor(
    (x, y): (u16, u16),
    sign: char,
    geometry: &Geometry,
    theme: &Theme,
    pane: Rect,
    buffer: &mut Buffer,
) {
    put_mark((x, y), sign, theme, buffer);
    let [right, down] = if theme.ascii { [">", "v"] } else { ["▸", "▾"] };
    let rules = if theme.ascii { [" ", "-", "="] } else { [" ", "─", "━"] };
    let ticks = [(geometry.area.x.saturating_sub(1), y, right), (x, pane.y, down)];
    for (x, y, sign) in ticks {
        if !pane.contains((x, y).into()) || geometry.area.contains((x, y).into()) {
            continue;
        }
        let Some(cell) = buffer.cell_mut((x, y)) else { continue };
        if y != pane.y || rules.contains(&cell.symbol()) {
            cell.set_symbol(sign).set_style(theme.style(Tone::Accent));
        } else {
            // A letter of the title stays readable.
            cell.modifier.toggle(Modifier::REVERSED);
        }
    }
}

/// The outline of the box between two footprints.
fn draw_box(
    view: &FieldView<'_>,
    geometry: &Geometry,
    corners: (usize, usize),
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let place = |footprint| geometry.cell_of(view.placement, footprint);
    let (Some(a), Some(b)) = (place(corners.0), place(corners.1)) else { return };
    let (left, right) = (a.0.min(b.0), a.0.max(b.0));
    let (top, bottom) = (a.1.min(b.1), a.1.max(b.1));
    let [across, down, corner] = if theme.ascii { ['-', '|', '+'] } else { ['─', '│', '┼'] };
    let mut outline = |x: u16, y: u16, sign: char| {
        let mut dots = [Dot::Nothing; 2];
        for (slot, dot) in dots.iter_mut().zip(geometry.dots_of((x, y))) {
            *slot = Dot::of(view, geometry, dot);
        }
        let (ground, light) = ground(dots, view.scale.palette, theme);
        if let Some(cell) = buffer.cell_mut((x, y)) {
            set_sign(sign, theme.sign_on(ground.is_some(), light), ground, cell);
        }
    };
    for x in left..=right {
        outline(x, top, across);
        outline(x, bottom, across);
    }
    for y in top..=bottom {
        outline(left, y, down);
        outline(right, y, down);
    }
    for (x, y) in [(left, top), (right, top), (left, bottom), (right, bottom)] {
        outline(x, y, corner);
    }
}
