//! The names of absorption bands, where they fit.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::BandName;
use super::plot::Plot;
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::put;

/// Writes the names, the more important first. In a line of their own they show how far each band
/// reaches; otherwise a name stands between the curves where it finds room within its band. A name
/// that finds none is left out.
pub(super) fn draw(plot: &Plot, bands: &[BandName<'_>], theme: &Theme, buffer: &mut Buffer) {
    let mut placed = Vec::new();
    for band in bands {
        let (low, high) = (band.low.max(plot.x.0), band.high.min(plot.x.1));
        let (Some(from), Some(to)) = (plot.column_of(low), plot.column_of(high)) else { continue };
        if from > to || band.label.is_empty() {
            continue;
        }
        let extent = Rect { x: from, width: to - from + 1, ..plot.bands };
        if !plot.bands_alone {
            draw_between(band.label, extent, plot, theme, buffer);
        } else if let Some(name) = draw_alone(band.label, extent, plot, theme, buffer) {
            placed.push((name, extent));
        }
    }
    for (name, extent) in placed {
        draw_extent(name, extent, theme, buffer);
    }
}

/// A name in the line for names, over the middle of its extent, wider than it if need be.
fn draw_alone(
    label: &str,
    extent: Rect,
    plot: &Plot,
    theme: &Theme,
    buffer: &mut Buffer,
) -> Option<Rect> {
    let width = label.width() as u16;
    let latest = plot.bands.right().checked_sub(width).filter(|latest| *latest >= plot.bands.x)?;
    let middle = extent.x + extent.width / 2;
    let start = middle.saturating_sub(width / 2).clamp(plot.bands.x, latest);
    let name = Rect { x: start, width, ..plot.bands };
    if !is_free(name, buffer) {
        return None;
    }
    put(name, label, theme.style(Tone::Faint), theme.ascii, buffer);
    Some(name)
}

/// A name on whichever row has room for it near the middle of its extent, from the top and the
/// bottom inwards.
fn draw_between(label: &str, extent: Rect, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    let width = label.width() as u16;
    let Some(spare) = extent.width.checked_sub(width) else { return };
    let inwards = (0..plot.area.height).map(|step| match step % 2 {
        0 => plot.area.y + step / 2,
        _ => plot.area.bottom() - 1 - step / 2,
    });
    for y in inwards {
        for x in [spare / 2, spare / 4, spare - spare / 4, 0, spare] {
            let name = Rect { x: extent.x + x, y, width, height: 1 };
            if is_free(name, buffer) {
                put(name, label, theme.style(Tone::Faint), theme.ascii, buffer);
                return;
            }
        }
    }
}

/// Whether nothing stands in a place nor touches it.
pub(super) fn is_free(place: Rect, buffer: &Buffer) -> bool {
    (place.x.saturating_sub(1)..=place.right()).all(|x| {
        let Some(cell) = buffer.cell((x, place.y)) else { return true };
        let beside = x < place.x || x >= place.right();
        cell.symbol() == " " || (beside && matches!(cell.symbol(), "│" | "┤" | "|" | "+"))
    })
}

/// Lines from a name to both ends of its extent, or up to the next name.
fn draw_extent(name: Rect, extent: Rect, theme: &Theme, buffer: &mut Buffer) {
    let [first, middle, last] = if theme.ascii { ["-", "-", "-"] } else { ["╶", "─", "╴"] };
    let mut draw = |x: u16, sign: &str| {
        let is_blank = |x: u16| buffer.cell((x, name.y)).is_none_or(|cell| cell.symbol() == " ");
        let beyond = if x < name.x { x.wrapping_sub(1) } else { x + 1 };
        let goes_on = is_blank(x) && is_blank(beyond);
        if let Some(cell) = buffer.cell_mut((x, name.y)).filter(|_| goes_on) {
            cell.set_symbol(sign).set_style(theme.style(Tone::Faint));
        }
        goes_on
    };
    for x in (extent.x..name.x).rev() {
        if !draw(x, if x == extent.x { first } else { middle }) {
            break;
        }
    }
    for x in name.right()..extent.right() {
        if !draw(x, if x == extent.right() - 1 { last } else { middle }) {
            break;
        }
    }
}
