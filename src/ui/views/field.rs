//! What the Field is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::flags::Scope;
use crate::ui::app::{App, Table};
use crate::ui::bench::Bench;
use crate::ui::colour::Scale;
use crate::ui::panes::Pane;
use crate::ui::panes::field::{self, FieldView, FlagSign, Pin, Placement};

/// Draws the Field.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let parts = FieldParts::of(app);
    field::draw(&parts.view(app), &app.theme, area, buffer);
}

/// The parts of the view that are made for one drawing.
#[derive(Default)]
struct FieldParts {
    title: String,
    empty: Placement,
    pending: Vec<bool>,
    flags: Vec<u32>,
    signs: Vec<FlagSign>,
    selected: Vec<bool>,
    pins: Vec<Pin>,
}

impl FieldParts {
    /// The parts for the present state.
    fn of(app: &App) -> FieldParts {
        let Some(bench) = app.bench() else {
            return FieldParts { title: title_without_granule(app), ..FieldParts::default() };
        };
        FieldParts {
            title: title(bench),
            empty: Placement::default(),
            pending: pending(bench),
            flags: flags(bench),
            signs: signs(app),
            selected: selected(bench),
            pins: bench
                .pins
                .iter()
                .map(|pin| Pin { footprint: pin.footprint, letter: pin.letter })
                .collect(),
        }
    }

    /// The view.
    fn view<'a>(&'a self, app: &'a App) -> FieldView<'a> {
        let bench = app.bench();
        FieldView {
            title: &self.title,
            unit: bench.map_or("", |bench| &bench.layer.unit),
            placement: bench.map_or(&self.empty, |bench| &bench.placement),
            values: bench.map_or(&[], |bench| &bench.layer.values),
            pending: &self.pending,
            flags: &self.flags,
            signs: &self.signs,
            selected: &self.selected,
            scale: bench.map_or_else(Scale::default, |bench| bench.layer.scale),
            cursor: bench.map(|bench| bench.cursor),
            corners: bench.and_then(|bench| Some((bench.anchor?, bench.cursor))),
            pins: &self.pins,
            zoom: bench.map_or(0, |bench| bench.field_zoom),
            focused: app.focus() == Pane::Field,
        }
    }
}

/// The footprint under a cell of the screen.
pub fn footprint_under(app: &App, column: u16, row: u16) -> Option<usize> {
    let area = app.area_of(Pane::Field)?;
    let bench = app.bench()?;
    // Only what decides where cells lie is needed.
    let parts = FieldParts::default();
    let view = parts.view(app);
    field::geometry(&view, &app.theme, area)?.footprint_at(&bench.placement, (column, row))
}

fn title_without_granule(app: &App) -> String {
    match &app.table {
        Table::Opening { entry, .. } => {
            let name = app.tray.entry(*entry).map_or("", |entry| &entry.name);
            format!("opening {name}…")
        }
        _ => "no granule".to_owned(),
    }
}

/// The layer, its value under the cursor, and the granule's name where there is room.
fn title(bench: &Bench) -> String {
    let layer = &bench.layer;
    if let Some(problem) = &layer.problem {
        return format!("{}: {problem}", layer.text);
    }
    let mut title = layer.text.clone();
    if let Some(value) = layer.value(bench.cursor) {
        title += &format!(" = {}", super::with_unit(value, &layer.unit));
    }
    if bench.wanted != layer.text {
        title += &format!(" → {}", bench.wanted);
    }
    title
}

/// Footprints of which some spectra have not been read.
fn pending(bench: &Bench) -> Vec<bool> {
    if bench.filling.done {
        return Vec::new();
    }
    let cube = bench.review.cube();
    let bands = bench.review.granule().bands().len();
    let mut pending = vec![false; bench.footprints()];
    for band in 0..bands {
        for slab in (0..cube.slabs(band)).filter(|slab| !cube.has_slab(band, *slab)) {
            if let Some(rows) = pending.get_mut(cube.footprints_of(band, slab)) {
                rows.fill(true);
            }
        }
    }
    pending
}

fn flags(bench: &Bench) -> Vec<u32> {
    let Some(record) = bench.record.open() else { return Vec::new() };
    let state = record.state();
    if state.band_flags.is_empty() {
        return state.footprint_flags.clone();
    }
    (0..bench.footprints()).map(|footprint| state.any_flags(footprint)).collect()
}

/// Flags that keep a footprint from the retrieval come first.
fn signs(app: &App) -> Vec<FlagSign> {
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let mut kinds = vocabulary.of_scope(Scope::Footprint);
    kinds.sort_by_key(|kind| !kind.excludes);
    let sign = |kind: &&crate::flags::FlagKind| FlagSign {
        mask: kind.mask(),
        glyph: kind.glyph,
        tint: kind.bit,
    };
    kinds.iter().map(sign).collect()
}

fn selected(bench: &Bench) -> Vec<bool> {
    if bench.side.is_none() && bench.anchor.is_none() {
        return Vec::new();
    }
    let mut selected = vec![false; bench.footprints()];
    for footprint in bench.selection().footprints.iter() {
        if let Some(mark) = selected.get_mut(footprint) {
            *mark = true;
        }
    }
    selected
}
