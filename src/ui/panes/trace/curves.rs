//! The curves, the letters of the pinned ones and the rule through the channel in hand.

use ratatui::buffer::Buffer;
use ratatui::style::Style;

use super::envelope::{Span, envelope};
use super::plot::Plot;
use super::{ChannelMark, Curve, TraceView};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::Braille;

/// Draws every curve, the cursor's last and thus uppermost. Returns whether there was any to draw.
pub(super) fn draw(view: &TraceView<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) -> bool {
    let mut letters = Vec::new();
    let mut drawn = false;
    let pinned = view.curves.iter().filter(|curve| curve.letter.is_some()).enumerate();
    for (number, curve) in pinned {
        let style = theme.curve(Some(number));
        let spans = draw_curve(curve, plot, style, theme, buffer);
        drawn |= !spans.is_empty();
        letters.extend(letter_place(curve, number, &spans).map(|place| (place, style)));
    }
    for curve in view.curves.iter().filter(|curve| curve.letter.is_none()) {
        drawn |= !draw_curve(curve, plot, theme.curve(None), theme, buffer).is_empty();
    }
    for ((column, row, letter), style) in letters {
        let at = (plot.area.x + column as u16, plot.area.y + row as u16);
        if let Some(cell) = buffer.cell_mut(at) {
            cell.set_char(letter).set_style(style);
        }
    }
    drawn
}

/// Cells that a curve covers: column, and first and last row.
type Covered = Vec<(usize, usize, usize)>;

fn draw_curve(
    curve: &Curve<'_>,
    plot: &Plot,
    style: Style,
    theme: &Theme,
    buffer: &mut Buffer,
) -> Covered {
    let mut canvas = Braille::new(plot.area, theme.ascii);
    let mut covered = Vec::new();
    for segment in &curve.segments {
        for (column, span) in envelope(segment, plot.x, canvas.columns()).into_iter().enumerate() {
            let Some((top, bottom)) = rows(span, plot, canvas.rows()) else { continue };
            canvas.column(column, top, bottom);
            let (across, down) = canvas.dots();
            covered.push((column / across, top / down, bottom / down));
        }
    }
    canvas.draw(curve.letter.unwrap_or('*'), style, buffer);
    covered
}

/// First and last row of dots that a span covers; `None` where it lies outside.
fn rows(span: Span, plot: &Plot, rows: usize) -> Option<(usize, usize)> {
    if span.0 > span.1 {
        return None;
    }
    let top = plot.row_of(span.1, rows);
    let bottom = plot.row_of(span.0, rows);
    if bottom < 0.0 || top > rows as f64 || rows == 0 {
        return None;
    }
    let clamp = |row: f64| (row.max(0.0) as usize).min(rows - 1);
    Some((clamp(top), clamp(bottom)))
}

/// The cell for a pinned curve's letter: on the curve, further right for each curve so that
/// letters of like curves stand apart.
fn letter_place(
    curve: &Curve<'_>,
    number: usize,
    covered: &Covered,
) -> Option<(usize, usize, char)> {
    let share = 0.15 + 0.2 * (number % 5) as f64;
    let place = covered.get((covered.len() as f64 * share) as usize)?;
    Some((place.0, (place.1 + place.2) / 2, curve.letter?))
}

/// Draws the rule through the channel in hand; the curves stay readable on it.
pub(super) fn draw_channel(
    channel: &ChannelMark<'_>,
    plot: &Plot,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let Some(x) = plot.column_of(channel.wavenumber) else { return };
    for y in plot.area.y..plot.area.bottom() {
        let Some(cell) = buffer.cell_mut((x, y)) else { continue };
        if cell.symbol() == " " {
            cell.set_char(if theme.ascii { '|' } else { '│' });
        }
        cell.set_style(theme.style(Tone::Accent));
    }
}
