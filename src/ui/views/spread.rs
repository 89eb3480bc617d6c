//! What the Spread is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::flags::ReviewState;
use crate::screening::{proposed_threshold, usual_range};
use crate::ui::app::App;
use crate::ui::bench::Bench;
use crate::ui::panes::Pane;
use crate::ui::panes::spread::{self, Density, Heaps, Kind, Picture, SpreadView};
use crate::ui::selecting::Shape;
use crate::ui::spreading::Against;

/// Draws the Spread.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    with_view(app, |view| spread::draw(view, &app.theme, area, buffer));
}

/// The values under a cell of the screen: across, and upwards where there are two layers.
pub fn spread_place_under(app: &App, column: u16, row: u16) -> Option<(f64, f64)> {
    let area = app.area_of(Pane::Spread)?;
    with_view(app, |view| match view.empty {
        "" => spread::value_at(view, area, column, row),
        _ => None,
    })
}

/// What lies under a cell of the screen: how many values on either side, or the values of both layers.
pub fn words_under(app: &App, column: u16, row: u16) -> Option<String> {
    let bench = app.bench()?;
    let (x, y) = spread_place_under(app, column, row)?;
    let (name, at) = (bench.spread_name(), super::with_unit(x, bench.spread_unit()));
    if let Some(against) = &bench.spread.against {
        return Some(format!("{name} {at} · {} {}", against.text, super::number(y)));
    }
    let values = bench.spread_values();
    let count = |holds: &dyn Fn(f64) -> bool| values.iter().filter(|value| holds(**value)).count();
    let (below, above) = (count(&|value| value < x), count(&|value| value >= x));
    Some(format!("{name} {at} · {below} below, {above} above"))
}

fn with_view<R>(app: &App, use_view: impl FnOnce(&SpreadView<'_>) -> R) -> R {
    let focused = app.focus() == Pane::Spread;
    let Some(bench) = app.bench() else {
        return use_view(&nothing("", "no granule is on the table", focused));
    };
    let values = bench.spread_values();
    let name = bench.spread_name();
    let Some(range) = bench.spread_range(&values) else {
        return use_view(&nothing(&name, "no values that differ", focused));
    };
    let kinds = kinds(bench);
    let selected = selected(bench);
    let Some(against) = &bench.spread.against else {
        let words = bench.tried_words(&values, range);
        let picture = Picture::Heaps(heaps(bench, &values, range, &selected, &kinds));
        let view = SpreadView { title: &name, words: &words, picture, empty: "", focused };
        return use_view(&view);
    };
    let Some(upwards) = usual_range(&against.values) else {
        return use_view(&nothing(&against.text, "no values that differ", focused));
    };
    let title = format!("{name} against {}", against.text);
    let words = against_words(&values, against);
    let picture = Picture::Density(Density {
        names: [&name, &against.text],
        ..density(bench, &values, against, [range, upwards], &selected)
    });
    use_view(&SpreadView { title: &title, words: &words, picture, empty: "", focused })
}

fn nothing<'a>(title: &'a str, empty: &'a str, focused: bool) -> SpreadView<'a> {
    let picture = Picture::Heaps(Heaps {
        values: &[],
        unit: "",
        kinds: &[],
        selected: &[],
        range: (0.0, 1.0),
        threshold: None,
        valley: None,
        cursor: None,
        brush: None,
    });
    SpreadView { title, words: "", picture, empty, focused }
}

fn heaps<'a>(
    bench: &'a Bench,
    values: &'a [f64],
    range: (f64, f64),
    selected: &'a [bool],
    kinds: &'a [Kind],
) -> Heaps<'a> {
    let x = bench.spread.x;
    let brush = match bench.selecting.shape {
        Some(Shape::Range(from)) => x.map(|x| (from.min(x), from.max(x))),
        _ => None,
    };
    Heaps {
        values,
        unit: bench.spread_unit(),
        kinds,
        selected,
        range,
        threshold: x.map(|x| (x, bench.spread.above)),
        valley: proposed_threshold(values),
        cursor: values.get(bench.cursor).copied().filter(|value| value.is_finite()),
        brush,
    }
}

fn density<'a>(
    bench: &'a Bench,
    values: &'a [f64],
    against: &'a Against,
    ranges: [(f64, f64); 2],
    selected: &'a [bool],
) -> Density<'a> {
    let corners = match &bench.selecting.shape {
        Some(Shape::Rectangle(corner)) => std::slice::from_ref(corner),
        Some(Shape::Region(corners)) => corners,
        _ => &[],
    };
    let here = |values: &[f64]| values.get(bench.cursor).copied();
    Density {
        values: [values, &against.values],
        names: ["", ""],
        selected,
        ranges,
        cursor: here(values).zip(here(&against.values)),
        at: bench.spread.x.zip(bench.spread.y),
        corners,
    }
}

/// How many footprints have both values.
fn against_words(values: &[f64], against: &Against) -> String {
    let pairs = values.iter().zip(&against.values);
    let both = pairs.filter(|(x, y)| x.is_finite() && y.is_finite()).count();
    format!("{both} of {} with both values, {} without", values.len(), values.len() - both)
}

fn kinds(bench: &Bench) -> Vec<Kind> {
    if bench.is_blind() {
        return Vec::new();
    }
    let Some(record) = bench.record.open() else { return Vec::new() };
    let state = record.state();
    let review = state.review.iter().enumerate();
    review
        .map(|(footprint, review)| match (state.any_flags(footprint), review) {
            (0, ReviewState::NotAssessed) => Kind::Open,
            (0, _) => Kind::Clear,
            _ => Kind::Flagged,
        })
        .collect()
}

/// What is selected, but not by the threshold itself: its side is shown already.
fn selected(bench: &Bench) -> Vec<bool> {
    let footprints = match (&bench.selecting.shape, bench.selecting.kept()) {
        (Some(Shape::Threshold), Some(kept)) => kept.footprints.clone(),
        (Some(Shape::Threshold), None) => return Vec::new(),
        _ if bench.selecting.is_on() => bench.selection().footprints,
        _ => return Vec::new(),
    };
    let mut selected = vec![false; bench.footprints()];
    for footprint in footprints.iter() {
        if let Some(mark) = selected.get_mut(footprint) {
            *mark = true;
        }
    }
    selected
}
