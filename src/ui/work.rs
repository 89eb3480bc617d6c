//! What each job does, on whatever thread it runs.

use std::io::Read;
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::{Duration, Instant};

use crate::flags::read_ledgers;
use crate::granule::{GranuleError, VariableRole};
use crate::review::{
    ExportedBy, Measure, Measured, Record, ReferenceSpectrum, Review, adopt_threshold, read_bases,
    rulebook_name, rulebook_of,
};
use crate::screening::Screened;
use crate::system::{Cancel, clean_text};
use crate::tray::{Standing, reason};

use super::app::Outside;
use super::bench::Quality;
use super::jobs::{Answer, Job, TraceAsk, TraceFound};
use super::place;
use super::selecting::where_holds;
use super::spreading::{Against, Alike};
use super::strip;
use super::trace_look::{Beside, ReferenceFile};
use super::work_across::{PATIENCE, across};

/// Progress is told no more often than this: each time the map is evaluated and drawn anew.
const PROGRESS_PAUSE: Duration = Duration::from_millis(80);
/// The first picture, of what is there by then, comes sooner.
const FIRST_PAUSE: Duration = Duration::from_millis(10);
/// More variables on quality than this do not fit the Evidence.
const MOST_QUALITY: usize = 16;

/// Does a job and sends its answers.
pub fn perform(job: &Job, outside: &Outside, send: &(dyn Fn(Answer) + Sync)) {
    match job {
        Job::Against { request, review, text, cancel } => {
            let layer = review.layer(text, cancel).map(|layer| Against {
                text: text.clone(),
                unit: layer.unit.label().to_owned(),
                values: layer.values,
            });
            send(Answer::Against { request: *request, found: layer });
        }
        Job::Alike { request, review, footprint, measure, cancel } => {
            let found = measured(review, *measure, cancel);
            let found = found.and_then(|measured| Alike::of(measured, *footprint));
            send(Answer::Alike { request: *request, found });
        }
        Job::Measure { request, review, measure, cancel } => {
            let found = measured(review, *measure, cancel);
            send(Answer::Measured { request: *request, found });
        }
        Job::Across { request, errand, paths, cancel } => {
            across(*request, errand, paths, cancel, outside, send);
        }
        Job::Adopt { request, change } => {
            let found = adopt_threshold(&outside.campaign, &outside.author, change);
            send(changes(outside));
            let found = found.map_err(|error| error.to_string());
            send(Answer::Adopted { request: *request, found });
        }
        Job::Standing { entry, path } => {
            send(Answer::Standing { entry: *entry, found: standing(path, outside) });
        }
        Job::SignOff { request, entry, path } => {
            let found = sign_off(path, outside);
            send(Answer::SignedOff { request: *request, entry: *entry, found });
        }
        Job::Open { request, path } => {
            let found = Review::open(&outside.opening, path);
            let found = found.map(|review| {
                let review = review.heeding(&outside.campaign.settings().quality);
                let folder = outside.campaign.folder();
                match read_bases(folder, review.granule(), &outside.opening) {
                    Ok(bases) => review.knowing(bases),
                    Err(error) => review.lacking_bases(&error.to_string()),
                }
            });
            let found = found.map(Arc::new).map_err(in_words);
            send(Answer::Opened { request: *request, found });
        }
        Job::Fill { request, review, layer, cancel } => {
            fill(*request, review, layer, cancel, send);
        }
        Job::Record { request, review } => {
            let found = record(review, outside);
            send(changes(outside));
            send(Answer::Record { request: *request, found });
        }
        Job::Reread { request, identity } => {
            let found = read_ledgers(&outside.campaign, identity);
            send(changes(outside));
            send(Answer::Reread { request: *request, found });
        }
        Job::Layer { request, review, text, cancel } => {
            send(Answer::Layer { request: *request, found: review.layer(text, cancel) });
        }
        Job::Indices { request, review, texts, cancel } => {
            let texts: Vec<&str> = texts.iter().map(String::as_str).collect();
            send(Answer::Indices { request: *request, found: review.layers(&texts, cancel) });
        }
        Job::Quality { request, review } => {
            send(Answer::Quality { request: *request, found: quality(review) });
        }
        Job::Screen { request, review, cancel } => {
            let found = screen(review, cancel, outside).transpose();
            if let Some(found) = found {
                let found = found.map(Arc::new);
                if let Ok(screened) = &found {
                    review.lend(Arc::clone(screened));
                }
                send(Answer::Screened { request: *request, found });
            }
        }
        Job::Spectrum { request, review, footprint } => {
            let found = review.read_spectrum(*footprint).map_err(in_words);
            send(Answer::Spectrum { request: *request, found });
        }
        Job::Pinned { request, review, footprints } => {
            let read = |footprint: &usize| review.read_spectrum(*footprint).ok();
            let found = footprints.iter().filter_map(read).collect();
            send(Answer::Pinned { request: *request, found });
        }
        Job::Trace { request, review, ask, cancel } => {
            send(Answer::Trace { request: *request, found: trace(review, ask, cancel) });
        }
        Job::Along { request, text, paths, cancel } => {
            let open = |path: &PathBuf| {
                Review::open(&outside.opening, path).map(Arc::new).map_err(in_words)
            };
            let tell = |entry, found| send(Answer::Along { request: *request, entry, found });
            strip::sum_up(text, paths, cancel, open, tell);
        }
        Job::Beside { request, review, footprint } => {
            send(Answer::Beside { request: *request, found: beside(review, *footprint) });
        }
        Job::Select { request, review, join, text, cancel } => {
            let found = where_holds(review, text, cancel);
            send(Answer::Selected { request: *request, join: *join, found });
        }
        Job::Keep { identity, place } => {
            place::keep(&outside.campaign, identity, &outside.author.person, place);
        }
        Job::Export { request, review, folder, inputs } => {
            let found = export(review, folder, inputs, outside);
            send(Answer::Exported { request: *request, found });
        }
    }
}

/// The answer of a job that ended in a fault of the program.
pub fn failed(job: &Job, why: &str) -> Option<Answer> {
    let why = || why.to_owned();
    Some(match job {
        Job::Against { request, .. } => Answer::Against { request: *request, found: Err(why()) },
        Job::Alike { request, .. } => Answer::Alike { request: *request, found: Err(why()) },
        Job::Measure { request, .. } => Answer::Measured { request: *request, found: Err(why()) },
        Job::Adopt { request, .. } => Answer::Adopted { request: *request, found: Err(why()) },
        Job::Standing { entry, .. } => Answer::Standing { entry: *entry, found: Err(why()) },
        Job::SignOff { request, entry, .. } => {
            Answer::SignedOff { request: *request, entry: *entry, found: Err(why()) }
        }
        Job::Open { request, .. } => Answer::Opened { request: *request, found: Err(why()) },
        Job::Fill { request, .. } => Answer::Filled { request: *request, found: Err(why()) },
        Job::Record { request, .. } => Answer::Record { request: *request, found: Err(why()) },
        Job::Layer { request, .. } => Answer::Layer { request: *request, found: Err(why()) },
        Job::Indices { request, texts, .. } => {
            Answer::Indices { request: *request, found: texts.iter().map(|_| Err(why())).collect() }
        }
        Job::Quality { request, .. } => Answer::Quality { request: *request, found: Vec::new() },
        Job::Screen { request, .. } => Answer::Screened { request: *request, found: Err(why()) },
        Job::Spectrum { request, .. } => Answer::Spectrum { request: *request, found: Err(why()) },
        Job::Pinned { request, .. } => Answer::Pinned { request: *request, found: Vec::new() },
        Job::Trace { request, .. } => Answer::Trace { request: *request, found: Err(why()) },
        Job::Select { request, join, .. } => {
            Answer::Selected { request: *request, join: *join, found: Err(why()) }
        }
        Job::Reread { .. } | Job::Keep { .. } | Job::Beside { .. } | Job::Along { .. } => {
            return None;
        }
        // The others of its granules are given up with it.
        Job::Across { request, .. } => Answer::AcrossFailed { request: *request, why: why() },
        Job::Export { request, .. } => Answer::Exported { request: *request, found: Err(why()) },
    })
}

fn changes(outside: &Outside) -> Answer {
    let (changes, problems) = outside.campaign.rulebook_changes();
    Answer::Changes(changes, problems)
}

fn measured(review: &Review, by: Measure, cancel: &Cancel) -> Result<Arc<Measured>, String> {
    let yardstick = Arc::new(review.yardstick(by)?);
    review.measured(&yardstick, cancel).map(Arc::new)
}

/// What cannot be read is none: the spectrum stands without it.
fn beside(review: &Review, footprint: usize) -> Beside {
    let bands = 0..review.granule().bands().len();
    let noise = |band| review.granule().noise(band, footprint).ok().flatten();
    let calculated = review.calculated_spectrum(footprint).ok().flatten();
    Beside { footprint, noise: bands.map(noise).collect(), calculated }
}

/// A spectrum in a file is a few thousand lines; a longer file is a mistake.
const LONGEST_REFERENCE: u64 = 16 << 20;

fn trace(review: &Review, ask: &TraceAsk, cancel: &Cancel) -> Result<TraceFound, String> {
    match ask {
        TraceAsk::Mean => {
            let all = (0..review.granule().footprints().count()).collect();
            review.many_spectra(&all, cancel).map(TraceFound::Mean).map_err(in_words)
        }
        TraceAsk::Envelope(footprints, words) => {
            let found = review.many_spectra(footprints, cancel).map_err(in_words)?;
            Ok(TraceFound::Envelope(found, words.clone()))
        }
        TraceAsk::File(path) => {
            let name = clean_text(&path.file_name().unwrap_or_default().to_string_lossy());
            let why = |why: String| format!("{name} is no reference: {why}");
            let text = reference_text(path).map_err(why)?;
            let reference = ReferenceSpectrum::from_csv(&text).map_err(why)?;
            Ok(TraceFound::File(ReferenceFile { name, bands: review.on_channels(&reference) }))
        }
    }
}

/// The text of a file that may hold a spectrum; one that has no end, or of which nobody writes the
/// other end, would never be read.
fn reference_text(path: &Path) -> Result<String, String> {
    let found = std::fs::metadata(path).map_err(|error| error.to_string())?;
    if !found.is_file() {
        return Err("it is not a file of text".to_owned());
    }
    let file = std::fs::File::open(path).map_err(|error| error.to_string())?;
    let mut text = String::new();
    let read = file.take(LONGEST_REFERENCE + 1).read_to_string(&mut text);
    read.map_err(|error| error.to_string())?;
    if text.len() as u64 > LONGEST_REFERENCE {
        return Err("it is too long for one spectrum".to_owned());
    }
    Ok(text)
}

pub fn in_words(error: GranuleError) -> String {
    error.to_string()
}

fn fill(
    request: u64,
    review: &Review,
    layer: &str,
    cancel: &Cancel,
    send: &(dyn Fn(Answer) + Sync),
) {
    let first = review.bands_of(layer);
    let others = (0..review.granule().bands().len()).filter(|band| !first.contains(band));
    let order: Vec<usize> = first.iter().copied().chain(others).collect();
    let (mut told, mut pause, mut of_layer) = (Instant::now(), FIRST_PAUSE, false);
    let found = review.granule().fill_bands(order, cancel, &mut |progress| {
        let complete = of_layer || first.iter().all(|band| review.cube().is_complete(*band));
        let is_news = complete != of_layer || told.elapsed() >= pause;
        if is_news && progress.done < progress.total {
            (told, pause, of_layer) = (Instant::now(), PROGRESS_PAUSE, complete);
            let share = progress.done as f64 / progress.total.max(1) as f64;
            send(Answer::Filling { request, share, of_layer });
        }
    });
    match found {
        // Whoever cancelled it does not wait for an answer.
        Err(GranuleError::Cancelled) => {}
        found => send(Answer::Filled { request, found: found.map_err(in_words) }),
    }
}

pub fn record(
    review: &Review,
    outside: &Outside,
) -> Result<(Box<Record>, Option<place::Place>), String> {
    let identity = review.identify().map_err(in_words)?;
    let place = place::read(&outside.campaign, &identity, &outside.author.person);
    let now = (outside.clock)();
    let record = Record::open(&outside.campaign, identity, &outside.author, &outside.program, now);
    let mut record = record.map_err(|error| error.to_string())?;
    record.producer_decides(review.producer(), now).map_err(|error| error.to_string())?;
    Ok((Box::new(record), place))
}

/// Whoever cancelled it gets no answer.
fn screen(review: &Review, cancel: &Cancel, outside: &Outside) -> Result<Option<Screened>, String> {
    let rulebook = rulebook_of(&outside.campaign).map_err(|error| error.to_string())?;
    let screened = match review.screen(&rulebook, cancel) {
        Ok(screened) => screened,
        Err(GranuleError::Cancelled) => return Ok(None),
        // What can't be read is missing, and the tests say so.
        Err(_) => review.screen_so_far(&rulebook),
    };
    Ok((!cancel.is_cancelled()).then_some(screened))
}

fn quality(review: &Review) -> Vec<Quality> {
    let granule = review.granule();
    let all = granule.variables().iter().enumerate();
    all.filter(|(_, variable)| variable.role == VariableRole::Quality)
        .take(MOST_QUALITY)
        .map(|(number, variable)| Quality {
            variable: number,
            values: granule.read_variable(&variable.name).map_err(in_words),
        })
        .collect()
}

/// What the ledgers say about a file.
fn standing(path: &Path, outside: &Outside) -> Result<Standing, String> {
    let review = Review::open(&outside.opening, path).map_err(in_words)?;
    let identity = review.identify().map_err(in_words)?;
    let decisions = read_ledgers(&outside.campaign, &identity).decisions;
    let vocabulary = &outside.campaign.settings().vocabulary;
    Ok(Standing::of(&identity, &decisions, vocabulary, &outside.author.person))
}

/// Signs a granule off, unless somebody has changed it meanwhile so that it is not within the limits
/// any more.
fn sign_off(path: &Path, outside: &Outside) -> Result<Standing, String> {
    let rulebook = rulebook_name(&outside.campaign).map_err(|error| error.to_string())?;
    let limits = &outside.campaign.settings().sign_off;
    let review = Review::open(&outside.opening, path).map_err(in_words)?;
    let (mut record, _) = record(&review, outside)?;
    let standing = |record: &Record| {
        let vocabulary = &outside.campaign.settings().vocabulary;
        Standing::of(record.identity(), record.decisions(), vocabulary, &outside.author.person)
    };
    if let Some(reason) = reason(&standing(&record), limits, &rulebook) {
        return Err(reason);
    }
    record.sign_off(false, (outside.clock)()).map_err(|refusal| refusal.to_string())?;
    let signed = standing(&record);
    record.close(PATIENCE).map_err(|error| error.to_string())?;
    Ok(signed)
}

fn export(
    review: &Review,
    folder: &Path,
    inputs: &[PathBuf],
    outside: &Outside,
) -> Result<(PathBuf, Vec<String>), String> {
    let by = ExportedBy {
        program: outside.program.clone(),
        person: outside.author.person.clone(),
        now: (outside.clock)(),
    };
    let exported = review.export(&outside.campaign, &outside.opening.program, &by, folder, inputs);
    exported.map(|done| (done.path, done.messages)).map_err(|error| error.to_string())
}
