//! Two layers against each other: how many footprints lie at each place.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::Density;
use super::draw::cell_of;
use crate::ui::colour::{ColourDepth, Palette, Scale, Theme, Tone};
use crate::ui::widgets::{put, short};

/// The room of the counts: a column for the names at the left, a line below.
pub(super) fn inside(plot: Rect) -> Rect {
    Rect { x: plot.x + 1, width: plot.width - 1, height: plot.height - 1, ..plot }
}

/// Draws the counts, one step of the palette for each doubling, so that few are seen beside many.
pub(super) fn draw(density: &Density<'_>, theme: &Theme, plot: Rect, buffer: &mut Buffer) {
    let area = inside(plot);
    let (counts, selected) = count(density, area);
    let most = counts.iter().copied().max().unwrap_or(0);
    for (place, count) in counts.iter().enumerate() {
        let (x, y) = (place as u16 % area.width, place as u16 / area.width);
        let Some(cell) = buffer.cell_mut((area.x + x, area.bottom() - 1 - y)) else { continue };
        if *count == 0 {
            continue;
        }
        let share = ((*count + 1) as f64).log2() / ((most + 1) as f64).log2();
        let level = Scale::level_at(share.clamp(0.0, 1.0));
        let palette = Palette::default();
        let sign = if theme.ascii || theme.depth == ColourDepth::None {
            Palette::ink(level)
        } else {
            '█'
        };
        cell.set_char(sign);
        if let Some(colour) = palette.colour(level, theme.depth) {
            cell.set_fg(colour);
        }
        if selected[place] {
            cell.set_char(if theme.ascii { '/' } else { '▲' }).set_style(theme.style(Tone::Accent));
        }
    }
    draw_places(density, theme, area, buffer);
    draw_axes(density, theme, plot, buffer);
}

fn cell(density: &Density<'_>, area: Rect, (x, y): (f64, f64)) -> Option<(u16, u16)> {
    Some((cell_of(x, density.ranges[0], area.width)?, cell_of(y, density.ranges[1], area.height)?))
}

fn count(density: &Density<'_>, area: Rect) -> (Vec<usize>, Vec<bool>) {
    let cells = usize::from(area.width) * usize::from(area.height);
    let (mut counts, mut selected) = (vec![0; cells], vec![false; cells]);
    let [across, upwards] = density.values;
    for (footprint, pair) in across.iter().copied().zip(upwards.iter().copied()).enumerate() {
        let Some((x, y)) = cell(density, area, pair) else { continue };
        let place = usize::from(y) * usize::from(area.width) + usize::from(x);
        counts[place] += 1;
        selected[place] |= density.selected.get(footprint).copied().unwrap_or(false);
    }
    (counts, selected)
}

/// The cursor of the map, the corners being drawn, and the place that the keys move.
fn draw_places(density: &Density<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let [corner, here, cursor] = if theme.ascii { ['o', '+', 'X'] } else { ['◇', '┼', '╋'] };
    let corners = density.corners.iter().map(|place| (*place, corner, theme.style(Tone::Accent)));
    let others = [
        density.cursor.map(|place| (place, cursor, theme.mark())),
        density.at.map(|place| (place, here, theme.style(Tone::Accent))),
    ];
    for (place, sign, style) in corners.chain(others.into_iter().flatten()) {
        let Some((x, y)) = cell(density, area, place) else { continue };
        if let Some(cell) = buffer.cell_mut((area.x + x, area.bottom() - 1 - y)) {
            cell.set_char(sign).set_style(style);
        }
    }
}

fn draw_axes(density: &Density<'_>, theme: &Theme, plot: Rect, buffer: &mut Buffer) {
    let (plain, faint) = (theme.style(Tone::Plain), theme.style(Tone::Faint));
    let area = inside(plot);
    for y in area.y..area.bottom() {
        if let Some(cell) = buffer.cell_mut((plot.x, y)) {
            cell.set_char(if theme.ascii { '|' } else { '│' }).set_style(faint);
        }
    }
    let below = Rect { y: plot.bottom() - 1, height: 1, ..plot };
    let [across, upwards] = density.ranges;
    let names = density.names;
    let text = format!(
        "{} {} to {}; up {} {} to {}",
        names[0],
        short(across.0),
        short(across.1),
        names[1],
        short(upwards.0),
        short(upwards.1)
    );
    put(below, &text, plain, theme.ascii, buffer);
}
