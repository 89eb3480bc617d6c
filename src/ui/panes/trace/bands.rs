//! The names of absorption bands, where they fit.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::BandName;
use super::plot::Plot;
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::put;

/// Writes the names, the more important first, over the middle of what is on show of each band.
/// A name that would touch another, or a curve, is left out.
pub(super) fn draw(plot: &Plot, bands: &[BandName<'_>], theme: &Theme, buffer: &mut Buffer) {
    let line = plot.bands;
    let mut taken: Vec<(u16, u16)> = Vec::new();
    for band in bands {
        let (low, high) = (band.low.max(plot.x.0), band.high.min(plot.x.1));
        let (Some(from), Some(to)) = (plot.column_of(low), plot.column_of(high)) else { continue };
        let width = band.label.width() as u16;
        if from > to || width == 0 || width > line.width {
            continue;
        }
        let middle = from + (to - from) / 2;
        let start = middle.saturating_sub(width / 2).clamp(line.x, line.right() - width);
        let end = start + width;
        let touches = |(first, last): &(u16, u16)| start < *last + 1 && *first < end + 1;
        if taken.iter().any(touches) || !is_free(Rect { x: start, width, ..line }, buffer) {
            continue;
        }
        // In a line of their own the bands show how far they reach.
        if plot.bands_alone && !taken.iter().any(|(first, last)| from < last + 1 && *first < to + 2)
        {
            draw_extent(Rect { x: from, width: to - from + 1, ..line }, theme, buffer);
            taken.push((from.min(start), (to + 1).max(end)));
        } else {
            taken.push((start, end));
        }
        let place = Rect { x: start, width, ..line };
        put(place, band.label, theme.style(Tone::Faint), theme.ascii, buffer);
    }
}

fn is_free(place: Rect, buffer: &Buffer) -> bool {
    place.columns().all(|cell| {
        buffer
            .cell((cell.x, cell.y))
            .is_some_and(|cell| matches!(cell.symbol(), " " | "─" | "-" | "╶" | "╴"))
    })
}

fn draw_extent(extent: Rect, theme: &Theme, buffer: &mut Buffer) {
    let [first, middle, last] = if theme.ascii { ["-", "-", "-"] } else { ["╶", "─", "╴"] };
    for x in extent.x..extent.right() {
        let sign = match x {
            _ if extent.width < 3 => middle,
            x if x == extent.x => first,
            x if x == extent.right() - 1 => last,
            _ => middle,
        };
        if let Some(cell) = buffer.cell_mut((x, extent.y)) {
            cell.set_symbol(sign).set_style(theme.style(Tone::Faint));
        }
    }
}
