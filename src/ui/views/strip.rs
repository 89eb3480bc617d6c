//! What the Strip is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::ui::app::App;
use crate::ui::bench::Bench;
use crate::ui::panes::Pane;
use crate::ui::panes::strip::{self, Group, StripView};

/// Draws the Strip.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    with_view(app, |view| strip::draw(view, &app.theme, area, buffer));
}

/// The footprint to go to for a cell of the screen: in the group there, otherwise as near to the
/// cursor as the granule's dimensions allow.
pub fn strip_footprint_under(app: &App, column: u16, row: u16) -> Option<usize> {
    let area = app.area_of(Pane::Strip)?;
    let bench = app.bench()?;
    let group = with_view(app, |view| strip::group_at(view, area, column, row))?;
    let footprints = bench.review.granule().footprints();
    let mut position = footprints.position(bench.cursor);
    *position.get_mut(bench.strip_along)? = group;
    footprints.number(&position)
}

fn with_view<R>(app: &App, use_view: impl FnOnce(&StripView<'_>) -> R) -> R {
    let focused = app.focus() == Pane::Strip;
    let Some(bench) = app.bench() else {
        return use_view(&StripView {
            title: "",
            unit: "",
            along: "",
            groups: &[],
            cursor: None,
            words: "",
            empty: "no granule is on the table",
            focused,
        });
    };
    let along = along_name(bench);
    let groups = groups(bench);
    let title = format!("{} along {along}", bench.layer.text);
    let cursor = group_of(bench, bench.cursor);
    let words = cursor.map(|number| words(bench, &along, number, &groups)).unwrap_or_default();
    use_view(&StripView {
        title: &title,
        unit: &bench.layer.unit,
        along: &along,
        groups: &groups,
        cursor,
        words: &words,
        empty: "",
        focused,
    })
}

/// The dimension that the Strip lies along, by its name in the file.
fn along_name(bench: &Bench) -> String {
    let names = bench.review.granule().footprints().names();
    names.get(bench.strip_along).cloned().unwrap_or_default()
}

fn group_of(bench: &Bench, footprint: usize) -> Option<usize> {
    bench.review.granule().footprints().position(footprint).get(bench.strip_along).copied()
}

/// The layer's values, gathered along the dimension.
fn groups(bench: &Bench) -> Vec<Option<Group>> {
    let lengths = bench.review.granule().footprints().lengths();
    let Some(length) = lengths.get(bench.strip_along).copied() else { return Vec::new() };
    // Footprints of one group lie in runs of `run`, a whole turn through all groups apart.
    let run: usize = lengths.iter().skip(bench.strip_along + 1).product();
    let mut gathered = vec![Vec::new(); length];
    for (number, values) in bench.layer.values.chunks(run.max(1)).enumerate() {
        gathered[number % length].extend_from_slice(values);
    }
    gathered.into_iter().map(|values| Group::of(values.into_iter())).collect()
}

/// `line 12: median 287.43, mean 286.91 K of 30`
fn words(bench: &Bench, along: &str, number: usize, groups: &[Option<Group>]) -> String {
    let unit = &bench.layer.unit;
    match groups.get(number).copied().flatten() {
        Some(group) => format!(
            "{along} {number}: median {}, mean {}",
            super::with_unit(group.median, unit),
            super::with_unit(group.mean, unit)
        ),
        None => format!("{along} {number}: no values"),
    }
}
