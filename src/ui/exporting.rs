//! Exports of the flag mask. A mask is made from what the ledgers hold, so each waits until the last
//! decisions about its granule are on the disk, whatever is on the table by then.

use std::path::PathBuf;
use std::sync::Arc;

use crate::review::{Record, Review};
use crate::system::clean_text;

use super::app::App;
use super::colour::Tone;
use super::deciding;
use super::jobs::Job;
use super::looking::no_granule;
use super::owed;
use super::turning;
use super::typed_path::typed_path;

/// An export that waits for the disk.
pub struct Waiting {
    review: Arc<Review>,
    /// The granule by the hash of its content.
    hash: String,
    folder: PathBuf,
}

impl Waiting {
    /// What it is: "the mask of lowen_001.nc".
    pub fn what(&self) -> String {
        format!("the mask of {}", self.review.granule().name())
    }
}

/// Exports the mask of the granule on the table, into `folder` or the campaign's own.
pub fn export(app: &mut App, folder: Option<String>) -> Vec<Job> {
    let folder = folder.map_or_else(|| app.export_folder(), |folder| typed_path(&folder));
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(record) = bench.record.open() else { return deciding::not_ready(app) };
    let hash = record.identity().hash.clone();
    let waiting = Waiting { review: Arc::clone(&bench.review), hash, folder };
    app.owed.exports.push(waiting);
    app.say("exporting…");
    start_kept(app)
}

/// Starts the exports of granules that have no decision on its way to the disk any more.
pub fn start_kept(app: &mut App) -> Vec<Job> {
    let waiting = std::mem::take(&mut app.owed.exports);
    let pending = |one: &Waiting| {
        let own = |record: &&Record| record.identity().hash == one.hash;
        app.records().filter(own).any(|record| record.pending() > 0)
    };
    let (still, ready): (Vec<Waiting>, Vec<Waiting>) = waiting.into_iter().partition(pending);
    app.owed.exports = still;
    ready.into_iter().map(|one| start(app, one)).collect()
}

fn start(app: &mut App, waiting: Waiting) -> Job {
    let request = app.request();
    let inputs = app.tray.entries().iter().map(|entry| entry.path.clone()).collect();
    app.owed.begin(request, waiting.what());
    Job::Export { request, review: waiting.review, folder: waiting.folder, inputs }
}

/// Says what came of an export.
pub fn exported(
    app: &mut App,
    request: u64,
    found: Result<(PathBuf, Vec<String>), String>,
) -> Vec<Job> {
    let Some(what) = app.owed.end(request) else { return Vec::new() };
    match found {
        Ok((path, messages)) => {
            let path = clean_text(&path.to_string_lossy());
            let words = match messages.first() {
                Some(message) => format!("exported to {path}: {message}"),
                None => format!("exported to {path}"),
            };
            app.message = (words, Tone::Good);
        }
        Err(why) => owed::failed(app, format!("{what} is not exported: {why}")),
    }
    turning::leave_if_done(app);
    Vec::new()
}
