//! What lies behind and beside the curves: filled areas, curves to compare with, noise bars, marks of
//! channels.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;
use unicode_width::UnicodeWidthStr;

use super::bands::is_free;
use super::envelope::{Span, envelope};
use super::plot::Plot;
use super::{Area, Guide, Segment, TraceView};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Braille, put};

/// Draws what the curves are drawn over.
pub(super) fn draw(view: &TraceView<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    for area in view.areas {
        draw_area(area, plot, theme, buffer);
    }
    draw_line(view.median, '-', theme.curve(Some(INNER)), plot, theme, buffer);
    for guide in view.guides {
        draw_line(&guide.segments, '.', theme.style(Tone::Faint), plot, theme, buffer);
    }
}

/// The tint of the inner area and of its middle.
const INNER: usize = 4;

/// Draws what is drawn over the curves.
pub(super) fn draw_over(view: &TraceView<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    draw_bars(view, plot, theme, buffer);
    draw_marks(view, plot, theme, buffer);
    for guide in view.guides {
        label(guide, plot, theme, buffer);
    }
}

/// Fills an area with a pattern of dots, so that curves in it stay readable.
fn draw_area(area: &Area<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    let mut canvas = Braille::new(plot.area, theme.ascii);
    let (columns, rows) = (canvas.columns(), canvas.rows());
    let (every, sign, style) = match area.inner {
        true => (2, ':', theme.curve(Some(INNER))),
        false => (4, '.', theme.style(Tone::Faint)),
    };
    let every = if theme.ascii { 1 } else { every };
    for (low, high) in area.low.iter().zip(&area.high) {
        let spans = envelope(low, plot.x, columns).into_iter().zip(envelope(high, plot.x, columns));
        for (column, (low, high)) in spans.enumerate() {
            if let Some((top, bottom)) = rows_of((low.0.min(high.0), high.1.max(low.1)), plot, rows)
            {
                canvas.shade(column, top, bottom, every);
            }
        }
    }
    canvas.draw(sign, style, buffer);
}

/// First and last row of dots of a span, cut off at the plot's edges; `None` where it lies outside.
fn rows_of(span: Span, plot: &Plot, rows: usize) -> Option<(usize, usize)> {
    if span.0 > span.1 || rows == 0 {
        return None;
    }
    let (top, bottom) = (plot.row_of(span.1, rows), plot.row_of(span.0, rows));
    if bottom < 0.0 || top > rows as f64 {
        return None;
    }
    let clamp = |row: f64| (row.max(0.0) as usize).min(rows - 1);
    Some((clamp(top), clamp(bottom)))
}

fn draw_line(
    segments: &[Segment<'_>],
    sign: char,
    style: Style,
    plot: &Plot,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    let mut canvas = Braille::new(plot.area, theme.ascii);
    let (columns, rows) = (canvas.columns(), canvas.rows());
    for segment in segments {
        for (column, span) in envelope(segment, plot.x, columns).into_iter().enumerate() {
            if let Some((top, bottom)) = rows_of(span, plot, rows) {
                canvas.column(column, top, bottom);
            }
        }
    }
    canvas.draw(sign, style, buffer);
}

/// Writes what a guide is above its highest part that has room for it.
fn label(guide: &Guide<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    let width = guide.label.width() as u16;
    let (columns, rows) = (usize::from(plot.area.width), usize::from(plot.area.height));
    let mut places: Vec<(u16, u16)> = Vec::new();
    for segment in &guide.segments {
        for (column, span) in envelope(segment, plot.x, columns).into_iter().enumerate() {
            let row = rows_of(span, plot, rows).filter(|_| span.1 <= plot.y.1);
            places.extend(
                row.and_then(|(top, _)| Some(((top as u16).checked_sub(1)?, column as u16))),
            );
        }
    }
    places.sort_unstable();
    let free = places.into_iter().find_map(|(row, column)| {
        let x = plot.area.x + column.min(plot.area.width.checked_sub(width)?);
        let place = Rect { x, y: plot.area.y + row, width, height: 1 };
        is_free(place, buffer).then_some(place)
    });
    if let Some(place) = free {
        put(place, guide.label, theme.style(Tone::Plain), theme.ascii, buffer);
    }
}

fn draw_bars(view: &TraceView<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    let mut canvas = Braille::new(plot.area, theme.ascii);
    let (columns, rows) = (canvas.columns(), canvas.rows());
    for bar in view.bars {
        let share = (bar.wavenumber - plot.x.0) / (plot.x.1 - plot.x.0);
        if !(0.0..=1.0).contains(&share) {
            continue;
        }
        let column = ((share * columns as f64) as usize).min(columns.saturating_sub(1));
        if let Some((top, bottom)) = rows_of((bar.low, bar.high), plot, rows) {
            canvas.column(column, top, bottom);
        }
    }
    canvas.draw('|', theme.curve(Some(1)), buffer);
}

/// A sign at the foot of the plot under each channel that is marked.
fn draw_marks(view: &TraceView<'_>, plot: &Plot, theme: &Theme, buffer: &mut Buffer) {
    let y = plot.area.bottom().saturating_sub(1);
    for mark in view.marks {
        let Some(x) = plot.column_of(mark.wavenumber) else { continue };
        if let Some(cell) = buffer.cell_mut((x, y)) {
            let plain = if theme.ascii { '^' } else { '▴' };
            cell.set_char(mark.sign.unwrap_or(plain)).set_style(theme.style(Tone::Warning));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::{Bar, Curve, Mark, draw};
    use super::*;
    use crate::ui::widgets::{Screen, THEME};

    const ASCII: Theme = Theme { ascii: true, ..THEME };

    fn level(values: &[f64; 2]) -> Vec<Segment<'_>> {
        vec![Segment { wavenumbers: &[600.0, 1000.0], values }]
    }

    fn drawn(view: &TraceView<'_>) -> Vec<String> {
        let mut screen = Screen::new(30, 9);
        draw(view, &ASCII, screen.area(), &mut screen.buffer);
        screen.lines()[2..8].iter().map(|line| line.chars().skip(4).collect()).collect()
    }

    #[test]
    fn areas_lie_behind_the_curve() {
        let area = |low, high, inner| Area { low: level(low), high: level(high), inner };
        let areas = [area(&[205.0; 2], &[295.0; 2], false), area(&[240.0; 2], &[260.0; 2], true)];
        let median = level(&[250.0; 2]);
        let curves = [Curve { letter: None, segments: level(&[225.0; 2]) }];
        let mut view = TraceView::plain();
        (view.areas, view.median, view.curves) = (&areas, &median, &curves);
        let rows: Vec<char> = drawn(&view).iter().map(|row| row.chars().nth(9).unwrap()).collect();
        assert_eq!(rows, ['.', '.', ':', '-', '*', '.']);
    }

    #[test]
    fn labels_of_guides_stand_free_or_not_at_all() {
        let guides = [
            Guide { label: "270 K", segments: level(&[270.0; 2]) },
            Guide { label: "271 K", segments: level(&[271.0; 2]) },
            Guide { label: "230 K", segments: level(&[230.0; 2]) },
        ];
        let curves = [Curve { letter: None, segments: level(&[245.0; 2]) }];
        let mut view = TraceView::plain();
        (view.guides, view.curves) = (&guides, &curves);
        let rows = drawn(&view);
        assert_eq!((rows[0].as_str(), rows[1].as_str()), ("270 K 271 K", &".".repeat(25)[..]));
        assert!(!rows.concat().contains("230 K"), "the curve lies there: {rows:#?}");
    }

    #[test]
    fn bars_and_marks_stand_at_their_channels() {
        let bars = [Bar { wavenumber: 800.0, low: 240.0, high: 280.0 }];
        let marks = [Mark { wavenumber: 700.0, sign: None }];
        let curves = [Curve { letter: None, segments: level(&[210.0; 2]) }];
        let mut view = TraceView::plain();
        (view.bars, view.marks, view.curves) = (&bars, &marks, &curves);
        let rows = drawn(&view);
        assert!(rows[1..4].iter().all(|row| row.contains('|')), "{rows:#?}");
        assert!(rows[5].contains('^'), "{rows:#?}");
    }
}
