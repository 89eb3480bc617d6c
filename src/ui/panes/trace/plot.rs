//! Where the parts of the plot lie, and the ranges it shows.

use ratatui::layout::Rect;

use unicode_width::UnicodeWidthStr;

use super::TraceView;
use crate::ui::widgets::ticks;

/// A line of its own for the names of bands needs a plot of at least this height beside it.
const ROOM_FOR_BANDS: u16 = 7;

/// A unit up to this width stands above the values.
pub(super) const UNIT: usize = 6;

/// The parts of the plot.
pub(super) struct Plot {
    /// The curves.
    pub area: Rect,
    /// Wavelengths, above.
    pub top: Rect,
    /// Names of bands: a line below the wavelengths, or the uppermost line of the curves.
    pub bands: Rect,
    /// Whether the names of bands have that line for themselves.
    pub bands_alone: bool,
    /// Wavenumbers, below.
    pub bottom: Rect,
    /// Values, at the left.
    pub left: Rect,
    /// Lowest and highest wavenumber, cm-1.
    pub x: (f64, f64),
    /// Lowest and highest value.
    pub y: (f64, f64),
    /// Where the values are written, and how.
    pub values: Vec<(f64, String)>,
}

impl Plot {
    /// Shares out the room below the title. `None` where there is too little, or no range.
    pub(super) fn new(view: &TraceView<'_>, room: Rect) -> Option<Self> {
        if room.height < 3 || room.width < 8 || !is_range(view.x) {
            return None;
        }
        let y = view.y.filter(|range| is_range(*range)).unwrap_or_else(|| fitting(view));
        let bands_alone = room.height >= ROOM_FOR_BANDS + 3;
        let above = if bands_alone { 2 } else { 1 };
        let height = room.height - above - 1;
        let (values, decimals) = ticks(y.0, y.1, usize::from(height / 2).max(1));
        let values: Vec<(f64, String)> =
            values.into_iter().map(|value| (value, format!("{value:.decimals$}"))).collect();
        let widest = values.iter().map(|(_, text)| text.len()).max().unwrap_or(0);
        let unit = if view.unit.width() > UNIT { 0 } else { view.unit.width() };
        let labels = (widest.max(unit) as u16).min(room.width / 3);
        let area = Rect {
            x: room.x + labels + 1,
            y: room.y + above,
            width: room.width - labels - 2,
            height,
        };
        let line = |y: u16| Rect { y, height: 1, ..area };
        Some(Self {
            area,
            top: line(room.y),
            bands: line(if bands_alone { room.y + 1 } else { area.y }),
            bands_alone,
            bottom: line(area.bottom()),
            left: Rect { x: room.x, width: labels + 1, ..area },
            x: view.x,
            y,
            values,
        })
    }

    /// The column of the screen where a wavenumber lies, if it is on show.
    pub(super) fn column_of(&self, wavenumber: f64) -> Option<u16> {
        let share = (wavenumber - self.x.0) / (self.x.1 - self.x.0);
        if !(0.0..=1.0).contains(&share) {
            return None;
        }
        let column = (share * f64::from(self.area.width)) as u16;
        Some(self.area.x + column.min(self.area.width - 1))
    }

    /// The wavenumber in the middle of a column of the screen.
    pub(super) fn wavenumber_at(&self, column: u16) -> Option<f64> {
        let offset = column.checked_sub(self.area.x).filter(|x| *x < self.area.width)?;
        let share = (f64::from(offset) + 0.5) / f64::from(self.area.width);
        Some(self.x.0 + share * (self.x.1 - self.x.0))
    }

    /// The row where a value lies, of so many from above; values outside lie beyond the ends.
    pub(super) fn row_of(&self, value: f64, rows: usize) -> f64 {
        (self.y.1 - value) / (self.y.1 - self.y.0) * rows as f64
    }
}

fn is_range((low, high): (f64, f64)) -> bool {
    high > low && (high - low).is_finite()
}

/// A range that holds every value on show, with a little room.
fn fitting(view: &TraceView<'_>) -> (f64, f64) {
    let curves = view.curves.iter().flat_map(|curve| &curve.segments);
    let areas = view.areas.iter().flat_map(|area| area.low.iter().chain(&area.high));
    let on_show = curves.chain(areas).flat_map(|segment| {
        segment.wavenumbers.iter().zip(segment.values).filter_map(|(wavenumber, value)| {
            let inside = *wavenumber >= view.x.0 && *wavenumber <= view.x.1;
            (inside && value.is_finite()).then_some(*value)
        })
    });
    let (low, high) = on_show.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), value| {
        (low.min(value), high.max(value))
    });
    if high - low < view.least {
        let middle = 0.5 * (low + high);
        return (middle - 0.5 * view.least, middle + 0.5 * view.least);
    }
    let margin = 0.04 * (high - low);
    let range = (low - margin, high + margin);
    // Differences in the seventh digit are rounding and no shape: they would fill the plot.
    if is_range(range) && high - low > 1e-6 * low.abs().max(high.abs()) {
        return range;
    }
    // Nearly one value only, or none at all, or values too large to be spread out.
    let middle = if low.is_finite() && low.abs() < 1e12 { low } else { 0.0 };
    let reach = if middle == 0.0 { 1.0 } else { 0.01 * middle.abs() };
    (middle - reach, middle + reach)
}
