//! What the Strip lies along: a dimension of the footprints, or the granules of the Tray.

use std::path::PathBuf;
use std::sync::Arc;

use crate::system::Cancel;

use super::app::App;
use super::jobs::Job;
use super::looking::no_granule;
use super::panes::Pane;
use super::panes::strip::Group;

/// What the Strip lies along.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Along {
    /// A dimension of the footprints, by its number.
    Dimension(usize),
    /// The granules of the Tray.
    Granules,
}

/// The Strip's state; it stays from granule to granule.
#[derive(Debug)]
pub struct Strip {
    /// What it lies along.
    pub along: Along,
    /// The layer that the granules below are summed up of.
    pub text: String,
    /// The layer in each entry of the Tray, or why there is none; nothing where it is not known yet.
    pub granules: Vec<Option<Result<Group, String>>>,
    /// How many granules are still to be summed up.
    left: usize,
    /// The request under way.
    request: u64,
    cancel: Cancel,
}

impl Default for Strip {
    fn default() -> Self {
        Self {
            along: Along::Dimension(0),
            text: String::new(),
            granules: Vec::new(),
            left: 0,
            request: 0,
            cancel: Cancel::new(),
        }
    }
}

impl Strip {
    /// How many granules are still to be summed up.
    pub fn left(&self) -> usize {
        self.left
    }

    /// For places that are kept: the dimension's number; granules stand behind the last.
    pub fn number(&self) -> usize {
        match self.along {
            Along::Dimension(number) => number,
            Along::Granules => usize::MAX,
        }
    }
}

/// Lies the Strip along what a place says.
pub fn restore(app: &mut App, number: usize) -> Vec<Job> {
    let dimensions = dimensions(app);
    app.strip.along = match number {
        usize::MAX => Along::Granules,
        number => Along::Dimension(number.min(dimensions.saturating_sub(1))),
    };
    refresh(app)
}

/// Turns the Strip to the next dimension of the footprints, after the last to the granules.
pub fn turn(app: &mut App) -> Vec<Job> {
    if app.bench().is_none() {
        return no_granule(app);
    }
    let (count, granules) = (dimensions(app), app.tray.len());
    app.strip.along = match app.strip.along {
        Along::Dimension(number) if number + 1 < count => Along::Dimension(number + 1),
        Along::Dimension(_) if granules > 1 => Along::Granules,
        _ => Along::Dimension(0),
    };
    app.panes.focus_on(Pane::Strip);
    let words = match app.strip.along {
        Along::Dimension(number) => {
            let names = app.bench().map(|bench| bench.review.granule().footprints().names());
            let name = names.and_then(|names| names.get(number)).cloned().unwrap_or_default();
            format!("Strip along {name}")
        }
        Along::Granules => format!("Strip along the {granules} granules of the Tray"),
    };
    app.say(words);
    refresh(app)
}

/// A granule comes on the table: of fewer dimensions, the Strip lies along its last.
pub fn fit(app: &mut App) {
    if let Along::Dimension(number) = app.strip.along {
        app.strip.along = Along::Dimension(number.min(dimensions(app).saturating_sub(1)));
    }
}

fn dimensions(app: &App) -> usize {
    app.bench().map_or(0, |bench| bench.review.granule().footprints().lengths().len())
}

/// Sums the layer on show up in every granule, where the Strip lies along them and has not yet.
pub fn refresh(app: &mut App) -> Vec<Job> {
    let Some(text) = app.bench().map(|bench| bench.layer.text.clone()) else { return Vec::new() };
    if app.strip.along != Along::Granules || app.strip.text == text {
        return Vec::new();
    }
    let request = app.request();
    let strip = &mut app.strip;
    strip.cancel.cancel();
    strip.cancel = Cancel::new();
    strip.request = request;
    strip.granules = vec![None; app.tray.len()];
    strip.text.clone_from(&text);
    let entries = app.tray.entries().iter().enumerate();
    let usable = entries.filter(|(_, entry)| entry.error.is_none());
    let paths: Vec<(usize, PathBuf)> =
        usable.map(|(number, entry)| (number, entry.path.clone())).collect();
    strip.left = paths.len();
    vec![Job::Along { request, text, paths, cancel: strip.cancel.clone() }]
}

/// Takes what one granule came to.
pub fn take(app: &mut App, request: u64, entry: usize, found: Result<Option<Group>, String>) {
    if app.strip.request != request {
        return;
    }
    app.strip.left = app.strip.left.saturating_sub(1);
    if let Some(slot) = app.strip.granules.get_mut(entry) {
        *slot = Some(found.and_then(|group| group.ok_or_else(|| "no values".to_owned())));
    }
}

/// Gives up summing granules; false where none is under way.
pub fn give_up(app: &mut App) -> bool {
    let under_way = app.strip.along == Along::Granules && app.strip.left > 0;
    if under_way {
        app.strip.cancel.cancel();
        // Asked for once more, it begins anew.
        app.strip.text.clear();
        app.strip.left = 0;
        app.strip.along = Along::Dimension(0);
        app.say("the granules are summed up no further");
    }
    under_way
}

/// Where the job puts what it finds: one answer for each granule.
pub fn sum_up(
    text: &str,
    paths: &[(usize, PathBuf)],
    cancel: &Cancel,
    open: impl Fn(&PathBuf) -> Result<Arc<crate::review::Review>, String>,
    tell: impl Fn(usize, Result<Option<Group>, String>),
) {
    for (entry, path) in paths {
        if cancel.is_cancelled() {
            return;
        }
        let found = open(path).and_then(|review| review.whole_layer(text, cancel));
        tell(*entry, found.map(|layer| Group::of(layer.values.into_iter())));
    }
}
