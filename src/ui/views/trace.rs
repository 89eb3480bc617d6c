//! What the Trace is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::review::{BandSpectrum, Spectrum};
use crate::spectral::ABSORPTION_BANDS;
use crate::ui::app::{App, Table};
use crate::ui::bench::Bench;
use crate::ui::channels::Channels;
use crate::ui::panes::Pane;
use crate::ui::panes::trace::{self, BandName, ChannelMark, Curve, Segment, TraceView};
use crate::units::RadianceUnit;

/// Draws the Trace.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let parts = TraceParts::of(app);
    parts.with_view(app, |view| trace::draw(view, &app.theme, area, buffer));
}

/// The parts of the view that are made for one drawing.
#[derive(Default)]
struct TraceParts {
    title: String,
    unit: String,
    empty: String,
    words: String,
    /// The cursor's spectrum first, then the pinned ones: per band, in ascending order.
    spectra: Vec<(Option<char>, Vec<Vec<f64>>)>,
}

impl TraceParts {
    /// The parts for the present state.
    fn of(app: &App) -> TraceParts {
        let Some(bench) = app.bench() else {
            let opening = matches!(app.table, Table::Opening { .. });
            let empty = if opening { "opening…" } else { "no granule is on the table" };
            return TraceParts { empty: empty.to_owned(), ..TraceParts::default() };
        };
        let unit = if bench.radiance { RadianceUnit::WORKING.label() } else { "K".to_owned() };
        let empty = match &bench.spectrum_problem {
            Some(problem) => format!("no spectrum: {problem}"),
            None if bench.spectrum.is_none() => "reading…".to_owned(),
            None => String::new(),
        };
        let cursor = bench.spectrum.iter().map(|spectrum| (None, sorted(bench, spectrum)));
        let pins = bench
            .pins
            .iter()
            .filter_map(|pin| Some((Some(pin.letter), sorted(bench, pin.spectrum.as_ref()?))));
        TraceParts {
            title: format!("footprint {}", bench.position_words(bench.cursor)),
            words: channel_words(bench, &unit, app.theme.ascii),
            unit,
            empty,
            spectra: cursor.chain(pins).collect(),
        }
    }

    /// Draws with the view, which borrows from lists that live as long as the drawing.
    fn with_view<R>(&self, app: &App, draw: impl FnOnce(&TraceView<'_>) -> R) -> R {
        let bands: Vec<BandName<'_>> = ABSORPTION_BANDS
            .iter()
            .map(|band| BandName { label: band.label, low: band.low, high: band.high })
            .collect();
        let bench = app.bench();
        let curves: Vec<Curve<'_>> = match bench {
            Some(bench) => self
                .spectra
                .iter()
                .map(|(letter, bands)| Curve {
                    letter: *letter,
                    segments: segments(&bench.channels, bands),
                })
                .collect(),
            None => Vec::new(),
        };
        let mark = bench.and_then(Bench::channel_wavenumber);
        draw(&TraceView {
            title: &self.title,
            quantity: match bench {
                Some(bench) if bench.radiance => "radiance",
                _ => "BT",
            },
            unit: &self.unit,
            curves: &curves,
            x: bench.map_or((600.0, 2800.0), |bench| bench.window.shown()),
            y: None,
            channel: mark.map(|wavenumber| ChannelMark { wavenumber, words: &self.words }),
            bands: &bands,
            empty: &self.empty,
            focused: app.focus() == Pane::Trace,
        })
    }
}

/// The wavenumber (cm-1) under a cell of the screen.
pub fn wavenumber_under(app: &App, column: u16, row: u16) -> Option<f64> {
    let area = app.area_of(Pane::Trace)?;
    let parts = TraceParts::of(app);
    parts.with_view(app, |view| trace::wavenumber_at(view, area, column, row))
}

/// The quantity on show, each band in ascending order of wavenumber.
fn sorted(bench: &Bench, spectrum: &Spectrum) -> Vec<Vec<f64>> {
    let bands = bench.channels.bands().iter().zip(&spectrum.bands);
    bands
        .map(|(channels, band)| {
            let values = quantity(bench, band);
            let at = |index: &usize| values.get(*index).copied().unwrap_or(f64::NAN);
            channels.indices.iter().map(at).collect()
        })
        .collect()
}

fn quantity<'a>(bench: &Bench, band: &'a BandSpectrum) -> &'a [f64] {
    if bench.radiance { &band.radiances } else { &band.temperatures }
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
fn channel_words(bench: &Bench, unit: &str, ascii: bool) -> String {
    let Some(wavenumber) = bench.channel_wavenumber() else { return String::new() };
    let (gap, micro) = if ascii { ("  ", "um") } else { (" · ", "µm") };
    let mut words = format!("{wavenumber:.2} cm-1{gap}{:.3} {micro}", 1e4 / wavenumber);
    if let Some(value) = value_in_hand(bench) {
        words += &format!("{gap}{} {unit}", super::number(value));
    }
    words
}

/// The value of the channel in hand at the cursor.
fn value_in_hand(bench: &Bench) -> Option<f64> {
    let channel = bench.channels.channel(bench.channel)?;
    let index = *bench.channels.bands().get(channel.band)?.indices.get(channel.place)?;
    let band = bench.spectrum.as_ref()?.bands.get(channel.band)?;
    quantity(bench, band).get(index).copied().filter(|value| !value.is_nan())
}
