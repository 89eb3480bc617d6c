//! What lies over the map: the cursor with its ticks at the edges, pins, the box or polygon being drawn.

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
    draw_sides(view, geometry, theme, buffer);
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

/// A piece of an outline, in a colour that stands out from the map below it.
fn put_line(
    view: &FieldView<'_>,
    geometry: &Geometry,
    place: (u16, u16),
    sign: char,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let mut dots = [Dot::Nothing; 2];
    for (slot, dot) in dots.iter_mut().zip(geometry.dots_of(place)) {
        *slot = Dot::of(view, geometry, dot);
    }
    let (ground, light) = ground(dots, view.scale.palette, theme);
    if let Some(cell) = buffer.cell_mut(place) {
        set_sign(sign, theme.sign_on(ground.is_some(), light), ground, cell);
    }
}

/// The sides of the polygon, from corner to corner, to the cursor and back to the first one.
fn draw_sides(view: &FieldView<'_>, geometry: &Geometry, theme: &Theme, buffer: &mut Buffer) {
    if view.polygon.is_empty() {
        return;
    }
    let corners = view.polygon.iter().copied().chain(view.cursor);
    let cells: Vec<(u16, u16)> =
        corners.filter_map(|corner| geometry.cell_of(view.placement, corner)).collect();
    let next = cells.iter().cycle().skip(1);
    for cell in cells.iter().zip(next).flat_map(|(one, other)| between(*one, *other)) {
        put_line(view, geometry, cell, if theme.ascii { '.' } else { '•' }, theme, buffer);
    }
}

/// The cells on the straight line between two, both included.
fn between(one: (u16, u16), other: (u16, u16)) -> impl Iterator<Item = (u16, u16)> {
    let steps = one.0.abs_diff(other.0).max(one.1.abs_diff(other.1)).max(1);
    let along = move |from: u16, to: u16, step: u16| {
        let share = f64::from(step) / f64::from(steps);
        (f64::from(from) + share * (f64::from(to) - f64::from(from))).round() as u16
    };
    (0..=steps).map(move |step| (along(one.0, other.0, step), along(one.1, other.1, step)))
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
    let mut outline =
        |x: u16, y: u16, sign: char| put_line(view, geometry, (x, y), sign, theme, buffer);
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
