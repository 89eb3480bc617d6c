//! The histogram: footprints with a flag below, those without above them, the rest on top.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;

use super::draw::cell_of;
use super::{Heaps, Kind};
use crate::ui::colour::{ColourDepth, Theme, Tone};
use crate::ui::widgets::{put, put_right, short};

/// The kinds from below: their letters where there are no blocks or no colours, and the blocks of
/// whole cells, so that colours are not all that tells them apart.
const KINDS: [(Kind, char, char); 3] =
    [(Kind::Flagged, '#', '█'), (Kind::Clear, ':', '░'), (Kind::Open, '.', '▒')];
const EIGHTHS: [char; 8] = ['▁', '▂', '▃', '▄', '▅', '▆', '▇', '█'];

/// What one column holds.
#[derive(Clone, Copy, Default)]
struct Column {
    /// Footprints by kind, as in [`KINDS`].
    counts: [usize; 3],
    selected: bool,
}

/// Draws the histogram with its axis and two lines below: marks, then numbers.
pub(super) fn draw(heaps: &Heaps<'_>, theme: &Theme, plot: Rect, buffer: &mut Buffer) {
    let bars = Rect { height: plot.height - 2, ..plot };
    let columns = columns(heaps, plot.width);
    let most = columns.iter().map(|column| column.counts.iter().sum::<usize>()).max().unwrap_or(0);
    for (x, column) in (bars.x..).zip(&columns) {
        draw_column(column, x, most, bars, theme, buffer);
    }
    draw_threshold(heaps, bars, theme, buffer);
    draw_marks(heaps, &columns, Rect { y: bars.bottom(), height: 1, ..plot }, theme, buffer);
    draw_numbers(heaps, most, Rect { y: bars.bottom() + 1, height: 1, ..plot }, theme, buffer);
}

fn columns(heaps: &Heaps<'_>, width: u16) -> Vec<Column> {
    let mut columns = vec![Column::default(); usize::from(width)];
    for (footprint, value) in heaps.values.iter().enumerate() {
        let Some(cell) = cell_of(*value, heaps.range, width) else { continue };
        let kind = heaps.kinds.get(footprint).copied().unwrap_or(Kind::Open);
        let place = KINDS.iter().position(|(known, ..)| *known == kind).unwrap_or(2);
        let column = &mut columns[usize::from(cell)];
        column.counts[place] += 1;
        column.selected |= heaps.selected.get(footprint).copied().unwrap_or(false);
    }
    columns
}

fn style_of(kind: Kind, theme: &Theme) -> Style {
    match kind {
        Kind::Flagged => theme.style(Tone::Warning),
        Kind::Clear => theme.style(Tone::Good),
        Kind::Open => theme.style(Tone::Faint),
    }
}

/// A column of cells from below, as high as the square root of its count is, so that few are seen
/// beside many. Each cell takes the kind that lies in its middle; no count above nought vanishes.
fn draw_column(
    column: &Column,
    x: u16,
    most: usize,
    bars: Rect,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let all: usize = column.counts.iter().sum();
    let share = (all as f64 / most.max(1) as f64).sqrt();
    let eighths = (share * f64::from(bars.height) * 8.0).ceil() as usize;
    for row in 0..bars.height {
        let filled = eighths.saturating_sub(usize::from(row) * 8).min(8);
        if filled == 0 {
            return;
        }
        let middle = (usize::from(row) * 8 + filled / 2) * all / eighths;
        let kind = kind_at(column, middle);
        let letters = theme.ascii || theme.depth == ColourDepth::None;
        let sign = match KINDS.iter().find(|(known, ..)| *known == kind) {
            Some((_, letter, _)) if letters => *letter,
            Some((.., whole)) if filled == 8 => *whole,
            _ => EIGHTHS[filled - 1],
        };
        if let Some(cell) = buffer.cell_mut((x, bars.bottom() - 1 - row)) {
            cell.set_char(sign).set_style(style_of(kind, theme));
        }
    }
}

/// The kind of the footprint that lies so high in a column.
fn kind_at(column: &Column, height: usize) -> Kind {
    let mut top = 0;
    for (count, (kind, ..)) in column.counts.iter().zip(KINDS) {
        top += count;
        if height < top {
            return kind;
        }
    }
    let last = column.counts.iter().zip(KINDS).rev().find(|(count, _)| **count > 0);
    last.map_or(Kind::Open, |(_, (kind, ..))| kind)
}

fn draw_threshold(heaps: &Heaps<'_>, bars: Rect, theme: &Theme, buffer: &mut Buffer) {
    let Some((threshold, _)) = heaps.threshold else { return };
    let Some(cell) = cell_of(threshold, heaps.range, bars.width) else { return };
    for y in bars.y..bars.bottom() {
        if let Some(cell) = buffer.cell_mut((bars.x + cell, y)) {
            cell.set_char(if theme.ascii { '|' } else { '│' }).set_style(theme.style(Tone::Accent));
        }
    }
}

/// Below the bars: the side that is meant, the brush, the selection, the valley, the cursor.
fn draw_marks(
    heaps: &Heaps<'_>,
    columns: &[Column],
    line: Rect,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let [rule, side, chosen, valley, cursor] =
        if theme.ascii { ['-', '=', '^', 'V', 'X'] } else { ['─', '━', '▲', '▽', '╋'] };
    let cell = |value: f64| cell_of(value, heaps.range, line.width);
    let width = heaps.range.1 - heaps.range.0;
    let middle = |x: usize| heaps.range.0 + (x as f64 + 0.5) / f64::from(line.width) * width;
    for (x, column) in columns.iter().enumerate() {
        let value = middle(x);
        let meant = match (heaps.brush, heaps.threshold) {
            (Some((low, high)), _) => low <= value && value <= high,
            (None, Some((threshold, above))) => (value > threshold) == above,
            (None, None) => false,
        };
        let (sign, tone) = match (column.selected, meant) {
            (true, _) => (chosen, Tone::Accent),
            (false, true) => (side, Tone::Accent),
            (false, false) => (rule, Tone::Faint),
        };
        if let Some(cell) = buffer.cell_mut((line.x + x as u16, line.y)) {
            cell.set_char(sign).set_style(theme.style(tone));
        }
    }
    for (value, sign, style) in
        [(heaps.valley, valley, theme.style(Tone::Strong)), (heaps.cursor, cursor, theme.mark())]
    {
        let Some(x) = value.and_then(cell) else { continue };
        if let Some(cell) = buffer.cell_mut((line.x + x, line.y)) {
            cell.set_char(sign).set_style(style);
        }
    }
}

/// The ends of the axis and the threshold in figures, and how many the highest column holds.
fn draw_numbers(heaps: &Heaps<'_>, most: usize, line: Rect, theme: &Theme, buffer: &mut Buffer) {
    let plain = theme.style(Tone::Plain);
    let left = short(heaps.range.0);
    put(line, &left, plain, theme.ascii, buffer);
    let unit = if heaps.unit.is_empty() { String::new() } else { format!(" {}", heaps.unit) };
    let right = format!("{}{unit}", short(heaps.range.1));
    put_right(line, &right, plain, theme.ascii, buffer);
    let words = format!("tallest {most}, square root");
    let room = line.width.saturating_sub((left.len() + right.len() + 4) as u16);
    if usize::from(room) >= words.len() {
        let middle = line.x + (line.width - words.len() as u16) / 2;
        let place = Rect { x: middle, width: words.len() as u16, ..line };
        put(place, &words, theme.style(Tone::Faint), theme.ascii, buffer);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    #[test]
    fn kinds_are_told_apart_without_colours() {
        let kinds = [Kind::Flagged, Kind::Clear, Kind::Open];
        let heaps = Heaps {
            values: &[0.5, 3.5, 6.5],
            unit: "K",
            kinds: &kinds,
            selected: &[],
            range: (0.0, 7.0),
            threshold: None,
            valley: None,
            cursor: None,
            brush: None,
        };
        let colourless = Theme { depth: ColourDepth::None, ..THEME };
        for (theme, signs) in [(THEME, "█░▒"), (colourless, "#:.")] {
            let mut screen = Screen::new(7, 5);
            draw(&heaps, &theme, screen.area(), &mut screen.buffer);
            let seen: String = screen.lines()[1].chars().filter(|sign| *sign != ' ').collect();
            assert_eq!(seen, signs);
        }
    }
}
