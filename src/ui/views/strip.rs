//! What the Strip is drawn from.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::ui::app::App;
use crate::ui::bench::Bench;
use crate::ui::panes::Pane;
use crate::ui::panes::strip::{self, Group, StripView};
use crate::ui::strip::Along;

/// Draws the Strip.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    with_view(app, |view| strip::draw(view, &app.theme, area, buffer));
}

/// The footprint to go to for a cell of the screen: in the group there, otherwise as near to the
/// cursor as the granule's dimensions allow.
pub fn strip_footprint_under(app: &App, column: u16, row: u16) -> Option<usize> {
    let area = app.area_of(Pane::Strip)?;
    let bench = app.bench()?;
    let Along::Dimension(dimension) = app.strip.along else { return None };
    let group = with_view(app, |view| strip::group_at(view, area, column, row))?;
    let footprints = bench.review.granule().footprints();
    let mut position = footprints.position(bench.cursor);
    *position.get_mut(dimension)? = group;
    footprints.number(&position)
}

/// The group under a cell of the screen, in words.
pub fn words_under(app: &App, column: u16, row: u16) -> Option<String> {
    let area = app.area_of(Pane::Strip)?;
    let bench = app.bench()?;
    let group = with_view(app, |view| strip::group_at(view, area, column, row))?;
    let series = match app.strip.along {
        Along::Dimension(dimension) => Series::within(bench, dimension, Some(group)),
        Along::Granules => Series::of_granules(app, Some(group)),
    };
    Some(series.words(&bench.layer.unit))
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
    let series = match app.strip.along {
        Along::Dimension(dimension) => {
            let footprints = bench.review.granule().footprints();
            let cursor = footprints.position(bench.cursor).get(dimension).copied();
            Series::within(bench, dimension, cursor)
        }
        Along::Granules => Series::of_granules(app, app.current_entry()),
    };
    let words = series.words(&bench.layer.unit);
    let title = format!("{} along {}", bench.layer.text, series.along);
    use_view(&StripView {
        title: &title,
        unit: &bench.layer.unit,
        along: &series.along,
        groups: &series.groups,
        cursor: series.cursor,
        words: &words,
        empty: series.empty(),
        focused,
    })
}

/// The entry of the Tray under a cell of the screen, where the Strip lies along granules.
pub fn strip_entry_under(app: &App, column: u16, row: u16) -> Option<usize> {
    let area = app.area_of(Pane::Strip)?;
    (app.strip.along == Along::Granules).then_some(())?;
    with_view(app, |view| strip::group_at(view, area, column, row))
}

/// What the Strip shows.
struct Series {
    along: String,
    groups: Vec<Option<Group>>,
    cursor: Option<usize>,
    /// The group under the cursor by its name, and why it has no values.
    name: String,
    why: String,
    /// Granules are still to be summed up.
    is_summing: bool,
}

impl Series {
    /// The layer on show along a dimension of the footprints, with one group marked.
    fn within(bench: &Bench, dimension: usize, cursor: Option<usize>) -> Series {
        let footprints = bench.review.granule().footprints();
        let along = footprints.names().get(dimension).cloned().unwrap_or_default();
        let name = cursor.map_or_else(String::new, |number| format!("{along} {number}"));
        let groups = gathered(&bench.layer.values, footprints.lengths(), dimension);
        Series { along, groups, cursor, name, why: "no values".to_owned(), is_summing: false }
    }

    /// The layer in the granules of the Tray, with one of them marked.
    fn of_granules(app: &App, cursor: Option<usize>) -> Series {
        let found = &app.strip.granules;
        let groups = found.iter().map(|one| one.clone()?.ok()).collect();
        let here = cursor.and_then(|entry| found.get(entry)).cloned().flatten();
        let why = match here {
            Some(Err(why)) => why,
            Some(Ok(_)) => String::new(),
            None => "not yet summed up".to_owned(),
        };
        let entry = cursor.and_then(|entry| app.tray.entry(entry));
        let name = entry.map(|entry| entry.name.clone()).unwrap_or_default();
        Series {
            along: "granules".to_owned(),
            groups,
            cursor,
            name,
            why,
            is_summing: app.strip.left() > 0,
        }
    }

    /// What is said while there is nothing to show, if that will change.
    fn empty(&self) -> &'static str {
        let nothing = self.groups.iter().all(Option::is_none);
        if nothing && self.is_summing { "summing up the granules…" } else { "" }
    }

    /// `line 12: median 287.43 K, mean 286.91 K`
    fn words(&self, unit: &str) -> String {
        let Some(number) = self.cursor else { return String::new() };
        match self.groups.get(number).copied().flatten() {
            Some(group) => format!(
                "{}: median {}, mean {}",
                self.name,
                super::with_unit(group.median, unit),
                super::with_unit(group.mean, unit)
            ),
            None => format!("{}: {}", self.name, self.why),
        }
    }
}

/// Values of footprints, gathered along one of their dimensions.
fn gathered(values: &[f64], lengths: &[usize], dimension: usize) -> Vec<Option<Group>> {
    let Some(length) = lengths.get(dimension).copied() else { return Vec::new() };
    // Footprints of one group lie in runs of `run`, a whole turn through all groups apart.
    let run: usize = lengths.iter().skip(dimension + 1).product();
    let mut gathered = vec![Vec::new(); length];
    for (number, values) in values.chunks(run.max(1)).enumerate() {
        gathered[number % length].extend_from_slice(values);
    }
    gathered.into_iter().map(|values| Group::of(values.into_iter())).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_are_gathered_along_each_dimension() {
        let values: Vec<f64> = (0..12).map(f64::from).collect();
        let lowest = |dimension| -> Vec<f64> {
            let groups = gathered(&values, &[2, 3, 2], dimension);
            groups.into_iter().map(|group| group.unwrap().lowest).collect()
        };
        assert_eq!(lowest(0), [0.0, 6.0]);
        assert_eq!(lowest(1), [0.0, 2.0, 4.0]);
        assert_eq!(lowest(2), [0.0, 1.0]);
        let groups = gathered(&values, &[2, 3, 2], 2);
        assert_eq!(groups[1].unwrap().count, 6);
        assert!(gathered(&values, &[2, 3, 2], 3).is_empty());
    }
}
