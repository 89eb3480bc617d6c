//! What the Field is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::field_signs;
use crate::ui::app::{App, Table};
use crate::ui::bench::{Bench, Signs};
use crate::ui::colour::Scale;
use crate::ui::panes::Pane;
use crate::ui::panes::field::{self, FieldView, FlagSign, Pin, Placement};
use crate::ui::selecting::Shape;

/// Draws the Field.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    let parts = FieldParts::of(app);
    field::draw(&parts.view(app), &app.theme, area, buffer);
}

/// The parts of the view that are made for one drawing.
#[derive(Default)]
struct FieldParts {
    title: String,
    value: String,
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
            value: value(bench),
            empty: Placement::default(),
            pending: pending(bench),
            flags: field_signs::masks(app, bench),
            signs: field_signs::signs(app, bench),
            selected: selected(bench),
            pins: pins(bench),
        }
    }

    /// The view.
    fn view<'a>(&'a self, app: &'a App) -> FieldView<'a> {
        let bench = app.bench();
        FieldView {
            title: &self.title,
            value: &self.value,
            unit: bench.map_or("", |bench| &bench.layer.unit),
            placement: bench.map_or(&self.empty, |bench| &bench.placement),
            values: bench.map_or(&[], |bench| &bench.layer.values),
            pending: &self.pending,
            flags: &self.flags,
            signs: &self.signs,
            selected: &self.selected,
            scale: bench.map_or_else(Scale::default, |bench| bench.layer.scale),
            coarse: app.low_bandwidth,
            cursor: bench.map(|bench| bench.cursor),
            marked: bench.is_some_and(|bench| bench.marks),
            corners: bench.and_then(corners),
            polygon: bench.map_or(&[], polygon),
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

/// The layer, or why there is none.
fn title(bench: &Bench) -> String {
    let layer = &bench.layer;
    match &layer.problem {
        Some(problem) => format!("{}: {problem}", layer.text),
        None if bench.wanted != layer.text => format!("{} → {}", layer.text, bench.wanted),
        None => layer.text.clone() + signs(bench),
    }
}

/// What the signs tell where it is not the usual: one letter may stand for what the tests say or for
/// what was decided.
fn signs(bench: &Bench) -> &'static str {
    match bench.signs {
        Signs::Flags => "",
        Signs::Tests => ", signs: tests",
        Signs::Doubt => ", signs: doubt",
        Signs::None => ", no signs",
    }
}

/// The layer's value under the cursor.
fn value(bench: &Bench) -> String {
    let layer = &bench.layer;
    match layer.value(bench.cursor) {
        Some(value) => format!(" = {}", super::with_unit(value, &layer.unit)),
        None => String::new(),
    }
}

fn pins(bench: &Bench) -> Vec<Pin> {
    let shown = bench.pins.iter().filter(|_| bench.marks);
    shown.map(|pin| Pin { footprint: pin.footprint, letter: pin.letter }).collect()
}

/// Footprints whose value waits for spectra that have not been read. As long as any are being read, one
/// without a value may be one whose spectrum has come since the layer was evaluated.
fn pending(bench: &Bench) -> Vec<bool> {
    if bench.filling.done {
        return Vec::new();
    }
    let (cube, layer) = (bench.review.cube(), &bench.layer);
    let mut pending: Vec<bool> = layer.values.iter().map(|value| value.is_nan()).collect();
    pending.resize(bench.footprints(), true);
    for &band in &layer.bands {
        for slab in (0..cube.slabs(band)).filter(|slab| !cube.has_slab(band, *slab)) {
            if let Some(rows) = pending.get_mut(cube.footprints_of(band, slab)) {
                rows.fill(true);
            }
        }
    }
    pending
}

fn corners(bench: &Bench) -> Option<(usize, usize)> {
    match bench.selecting.shape {
        Some(Shape::Box(anchor)) => Some((anchor, bench.cursor)),
        _ => None,
    }
}

fn polygon(bench: &Bench) -> &[usize] {
    match &bench.selecting.shape {
        Some(Shape::Polygon(corners)) => corners,
        _ => &[],
    }
}

fn selected(bench: &Bench) -> Vec<bool> {
    if !bench.marks || !bench.selecting.is_on() {
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
