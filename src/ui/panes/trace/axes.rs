//! The axes: wavenumbers below, wavelengths above, values at the left.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::plot::{Plot, UNIT};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{put, put_right, ticks};

/// Columns that numbers keep between them.
const APART: u16 = 3;

/// Draws all three.
pub(super) fn draw(plot: &Plot, unit: &str, theme: &Theme, buffer: &mut Buffer) {
    draw_values(plot, unit, theme, buffer);
    let (numbers, decimals) = ticks(plot.x.0, plot.x.1, usize::from(plot.area.width / 9).max(1));
    let wavenumbers = numbers.into_iter().map(|value| (value, format!("{value:.decimals$}")));
    draw_numbers(plot, plot.bottom, wavenumbers, "cm-1", theme, buffer);
    let micrometres = if theme.ascii { "um" } else { "µm" };
    let lengths = wavelengths(plot.x).into_iter().map(|(length, text)| (10_000.0 / length, text));
    draw_numbers(plot, plot.top, lengths, micrometres, theme, buffer);
}

fn draw_values(plot: &Plot, unit: &str, theme: &Theme, buffer: &mut Buffer) {
    let style = theme.style(Tone::Faint);
    let [bar, tick] = if theme.ascii { ["|", "+"] } else { ["│", "┤"] };
    let column = plot.left.right() - 1;
    for y in plot.area.y..plot.area.bottom() {
        if let Some(cell) = buffer.cell_mut((column, y)) {
            cell.set_symbol(bar).set_style(style);
        }
    }
    let labels = Rect { width: plot.left.width - 1, height: 1, ..plot.left };
    for (value, text) in &plot.values {
        let row = plot.row_of(*value, usize::from(plot.area.height));
        let row = (row.max(0.0) as u16).min(plot.area.height - 1);
        let y = plot.area.y + row;
        put_right(Rect { y, ..labels }, text, theme.style(Tone::Plain), theme.ascii, buffer);
        if let Some(cell) = buffer.cell_mut((column, y)) {
            cell.set_symbol(tick);
        }
    }
    // The unit stands above the values, where the line of wavelengths leaves its corner free.
    let corner = Rect { y: plot.top.y, ..labels };
    if unit.width() <= UNIT.min(usize::from(corner.width)) {
        put_right(corner, unit, style, theme.ascii, buffer);
    }
}

/// Writes numbers at their places, the first ones first, leaving out what would touch another; the
/// unit stands at the right end.
fn draw_numbers(
    plot: &Plot,
    line: Rect,
    numbers: impl Iterator<Item = (f64, String)>,
    unit: &str,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let end = line.right().saturating_sub(unit.width() as u16 + 1);
    let mut taken: Vec<(u16, u16)> = Vec::new();
    for (wavenumber, text) in numbers {
        let Some(column) = plot.column_of(wavenumber) else { continue };
        let width = text.width() as u16;
        let start = column.saturating_sub(width / 2).max(line.x);
        let space = start.saturating_sub(APART)..start + width + APART;
        if start + width > end
            || taken.iter().any(|(from, to)| space.start < *to && *from < space.end)
        {
            continue;
        }
        taken.push((start, start + width));
        put(Rect { x: start, width, ..line }, &text, theme.style(Tone::Plain), theme.ascii, buffer);
    }
    put_right(line, unit, theme.style(Tone::Faint), theme.ascii, buffer);
}

/// Round wavelengths (micrometres) in a range of wavenumbers (cm-1), the roundest first.
fn wavelengths((low, high): (f64, f64)) -> Vec<(f64, String)> {
    if !(low.is_finite() && high > 0.0) {
        return Vec::new();
    }
    let (shortest, longest) = (10_000.0 / high, 10_000.0 / low.max(1e-3));
    let mut found: Vec<(f64, String)> = Vec::new();
    for (step, decimals) in [
        (5.0, 0),
        (2.0, 0),
        (1.0, 0),
        (0.5, 1),
        (0.2, 1),
        (0.1, 1),
        (0.05, 2),
        (0.02, 2),
        (0.01, 2),
        (0.002, 3),
        (0.0005, 4),
    ] {
        let (first, last) = ((shortest / step).ceil(), (longest / step).floor());
        if last - first > 200.0 {
            break;
        }
        let mut number = first;
        while number <= last {
            let length = number * step;
            if !found.iter().any(|(known, _)| (known - length).abs() < 0.01 * step) {
                found.push((length, format!("{length:.decimals$}")));
            }
            number += 1.0;
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn wavelengths_come_with_the_roundest_first() {
        let lengths = wavelengths((645.0, 2760.0));
        let texts: Vec<&str> = lengths.iter().take(6).map(|(_, text)| text.as_str()).collect();
        assert_eq!(texts, ["5", "10", "15", "4", "6", "8"]);
    }

    #[test]
    fn a_narrow_range_has_wavelengths_too() {
        let lengths = wavelengths((899.0, 901.0));
        assert!(lengths.iter().any(|(_, text)| text == "11.11"), "{lengths:?}");
    }
}
