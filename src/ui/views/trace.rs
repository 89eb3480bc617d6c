//! What the Trace is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::trace_values::{self, Values};
use crate::flags::Scope;
use crate::spectral::{ABSORPTION_BANDS, planck};
use crate::ui::app::{App, Table};
use crate::ui::bench::Bench;
use crate::ui::channels::Channels;
use crate::ui::panes::Pane;
use crate::ui::panes::trace::{
    self, Area, BandName, Bar, ChannelMark, Curve, Guide, Mark, Segment, TraceView,
};
use crate::ui::trace_look::TraceQuantity;

/// Draws the Trace.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let parts = TraceParts::of(app);
    parts.with_view(app, |view| trace::draw(view, &app.theme, area, buffer));
}

/// The parts of the view that are made for one drawing.
#[derive(Default)]
struct TraceParts {
    title: String,
    quantity: String,
    unit: String,
    empty: String,
    words: String,
    short: String,
    /// The cursor's spectrum first, then the pinned ones.
    spectra: Vec<(Option<char>, Values)>,
    /// The five levels of the envelope.
    levels: Vec<Values>,
    /// Planck curves with their temperatures.
    planck: Vec<(String, Values)>,
    bars: Vec<Bar>,
    marks: Vec<Mark>,
}

impl TraceParts {
    /// The parts for the present state.
    fn of(app: &App) -> TraceParts {
        let Some(bench) = app.bench() else {
            let opening = matches!(app.table, Table::Opening { .. });
            let empty = if opening { "opening…" } else { "no granule is on the table" };
            return TraceParts { empty: empty.to_owned(), ..TraceParts::default() };
        };
        let sorted = |bands: &[_]| trace_values::of(bench, bands);
        let cursor = bench.spectrum.iter().map(|spectrum| (None, sorted(&spectrum.bands)));
        let pins = bench
            .pins
            .iter()
            .filter_map(|pin| Some((Some(pin.letter), sorted(&pin.spectrum.as_ref()?.bands))));
        let look = &bench.look;
        // The absorption of each footprint goes by its own window: levels of it would be no curves.
        let has_levels = look.quantity != TraceQuantity::Absorption;
        let levels = look.envelope.iter().filter(|_| has_levels).flat_map(|envelope| {
            envelope.spectra.levels.iter().map(|level| sorted(level)).collect::<Vec<_>>()
        });
        let unit = trace_values::unit(bench);
        TraceParts {
            title: title(bench),
            quantity: quantity(bench),
            words: channel_words(bench, &unit, true, app.theme.ascii),
            short: channel_words(bench, &unit, false, app.theme.ascii),
            unit,
            empty: empty(bench),
            spectra: cursor.chain(pins).collect(),
            levels: levels.collect(),
            planck: planck_curves(bench),
            bars: trace_values::bars(bench),
            marks: marks(bench),
        }
    }

    /// Draws with the view, which borrows from lists that live as long as the drawing.
    fn with_view<R>(&self, app: &App, draw: impl FnOnce(&TraceView<'_>) -> R) -> R {
        let bands: Vec<BandName<'_>> = ABSORPTION_BANDS
            .iter()
            .map(|band| BandName { label: band.label, low: band.low, high: band.high })
            .collect();
        let bench = app.bench();
        let pieces =
            |values| bench.map_or_else(Vec::new, |bench| segments(&bench.channels, values));
        let curves: Vec<Curve<'_>> = self
            .spectra
            .iter()
            .map(|(letter, values)| Curve { letter: *letter, segments: pieces(values) })
            .collect();
        let guides: Vec<Guide<'_>> = self
            .planck
            .iter()
            .map(|(label, values)| Guide { label, segments: pieces(values) })
            .collect();
        let (areas, median) = match self.levels.as_slice() {
            [lowest, lower, median, upper, highest] => {
                let area = |low, high, inner| Area { low: pieces(low), high: pieces(high), inner };
                (vec![area(lowest, highest, false), area(lower, upper, true)], pieces(median))
            }
            _ => (Vec::new(), Vec::new()),
        };
        let mark = bench.and_then(Bench::channel_wavenumber);
        draw(&TraceView {
            title: &self.title,
            quantity: &self.quantity,
            unit: &self.unit,
            curves: &curves,
            guides: &guides,
            areas: &areas,
            median: &median,
            bars: &self.bars,
            marks: &self.marks,
            x: bench.map_or((600.0, 2800.0), |bench| bench.window.shown()),
            y: None,
            least: bench.map_or(0.0, least),
            channel: mark.map(|wavenumber| ChannelMark {
                wavenumber,
                words: &self.words,
                short: &self.short,
            }),
            bands: &bands,
            empty: &self.empty,
            focused: app.focus() == Pane::Trace,
        })
    }
}

/// Channels of the layer or test in hand, those that are flagged, and above all those picked.
fn marks(bench: &Bench) -> Vec<Mark> {
    let used = bench.look.used.iter().map(|at| Mark { wavenumber: *at, sign: None });
    let mut marks: Vec<Mark> = used.collect();
    if let Some(record) = bench.record.open() {
        let kinds = record.vocabulary().of_scope(Scope::Channel);
        let channels = record.state().channel_flags.values().flat_map(|band| band.values());
        marks.extend(channels.filter_map(|channel| {
            let kind = kinds.iter().find(|kind| channel.flags & kind.mask() != 0)?;
            Some(Mark { wavenumber: channel.wavenumber, sign: Some(kind.glyph) })
        }));
    }
    if bench.has_channel_pick() {
        let (picked, _) = bench.picked_channels();
        let picked = picked.iter();
        marks.extend(picked.map(|one| Mark { wavenumber: one.wavenumber, sign: Some('=') }));
    }
    marks
}

/// The wavenumber (cm-1) under a cell of the screen.
pub fn wavenumber_under(app: &App, column: u16, row: u16) -> Option<f64> {
    let area = app.area_of(Pane::Trace)?;
    let parts = TraceParts::of(app);
    parts.with_view(app, |view| trace::wavenumber_at(view, area, column, row))
}

/// The channel nearest to a wavenumber and its value on show, in words.
pub fn words_at(app: &App, wavenumber: f64) -> Option<String> {
    let bench = app.bench()?;
    let number = bench.channels.nearest(wavenumber);
    let at = bench.channels.wavenumber(number)?;
    let value = trace_values::of_channel(bench, number);
    let value = value.map(|value| super::with_unit(value, &trace_values::unit(bench)));
    let value = value.unwrap_or_else(|| "missing".to_owned());
    Some(format!("{at:.2} cm-1 · {:.3} µm · {value}", 1e4 / at))
}

/// A hundredth of the black body's radiation shows no absorption worth a look.
fn least(bench: &Bench) -> f64 {
    if bench.look.quantity == TraceQuantity::Absorption { 0.01 } else { 0.0 }
}

fn title(bench: &Bench) -> String {
    let footprint = bench.position_words(bench.cursor);
    match bench.reference_words() {
        Some(reference) => format!("{footprint} less {reference}"),
        None => format!("footprint {footprint}"),
    }
}

fn quantity(bench: &Bench) -> String {
    let name = bench.look.quantity.name();
    match &bench.look.envelope {
        Some(envelope) => format!("{name}, {}", envelope.words),
        None => name.to_owned(),
    }
}

fn empty(bench: &Bench) -> String {
    match &bench.spectrum_problem {
        Some(problem) => format!("no spectrum: {problem}"),
        None if bench.spectrum.is_none() => "reading…".to_owned(),
        None => String::new(),
    }
}

/// Planck curves belong to radiances as they are; differences to something have none.
fn planck_curves(bench: &Bench) -> Vec<(String, Values)> {
    let look = &bench.look;
    if look.quantity != TraceQuantity::Radiance || look.reference.is_some() {
        return Vec::new();
    }
    let curve = |kelvin: &f64| {
        let bands = bench.channels.bands().iter();
        let values = bands.map(|band| {
            band.wavenumbers.iter().map(|wavenumber| planck(*wavenumber, *kelvin)).collect()
        });
        (format!("{kelvin} K"), values.collect())
    };
    look.planck.iter().map(curve).collect()
}

fn segments<'a>(channels: &'a Channels, bands: &'a [Vec<f64>]) -> Vec<Segment<'a>> {
    let bands = channels.bands().iter().zip(bands);
    bands
        .flat_map(|(channels, values)| {
            channels.segments.iter().filter_map(|range| {
                Some(Segment {
                    wavenumbers: channels.wavenumbers.get(range.clone())?,
                    values: values.get(range.clone())?,
                })
            })
        })
        .collect()
}

/// `900.31 cm-1 · 11.107 µm · 287.43 K`
fn channel_words(bench: &Bench, unit: &str, with_length: bool, ascii: bool) -> String {
    let Some(wavenumber) = bench.channel_wavenumber() else { return String::new() };
    let (gap, micro) = if ascii { ("  ", "um") } else { (" · ", "µm") };
    let mut words = format!("{wavenumber:.2} cm-1");
    if with_length {
        words += &format!("{gap}{:.3} {micro}", 1e4 / wavenumber);
    }
    if let Some(value) = trace_values::in_hand(bench) {
        let unit = if unit.is_empty() { String::new() } else { format!(" {unit}") };
        let value = match bench.look.quantity {
            TraceQuantity::Absorption => format!("{value:.4}"),
            _ => super::number(value),
        };
        words += &format!("{gap}{value}{unit}");
    }
    words
}
