//! What errands do in each granule, on whatever thread they run.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::Duration;

use crate::flags::{FlagState, ReviewState, read_ledgers};
use crate::review::{Measured, Record, Refusal, Review, Yardstick, read_bases, rulebook_of};
use crate::system::Cancel;
use crate::tray::Standing;

use super::across::{Brought, ComparedGranule, DecidedSpectrum, Errand};
use super::app::Outside;
use super::deciding;
use super::jobs::Answer;
use super::work::{in_words, record};

/// How long a slow disk may take before decisions count as not written.
pub const PATIENCE: Duration = Duration::from_secs(60);
/// Of a granule with more decided footprints so many are kept to compare with, evenly taken.
const MOST_DECIDED: usize = 1000;

/// Runs an errand through granules, one answer for each.
pub fn across(
    request: u64,
    errand: &Errand,
    paths: &[(usize, PathBuf)],
    cancel: &Cancel,
    outside: &Outside,
    send: &(dyn Fn(Answer) + Sync),
) {
    for (entry, path) in paths {
        if cancel.is_cancelled() {
            return;
        }
        let found = match errand {
            Errand::Compare { yardstick, spectrum } => {
                compare(path, yardstick, spectrum, cancel, outside).map(Brought::Compared)
            }
            Errand::Decide { deed, at, step, now } => decide(path, outside, |record| {
                let at = at.get(entry).cloned().unwrap_or_default();
                record.as_part_of(Some(step.clone()), |record| {
                    match deciding::apply(record, deed.clone(), &at, "", *now) {
                        // Of several granules that are meant, some carry the flag.
                        Err(Refusal::NotFlagged(_)) | Ok(_) => Ok(()),
                        Err(refusal) => Err(refusal),
                    }
                })
            }),
            Errand::Turn { step, back, now } => {
                decide(path, outside, |record| record.turn_step(step, *back, *now).map(|_| ()))
            }
            Errand::Screen => screen(path, cancel, outside),
        };
        send(Answer::Across { request, entry: *entry, found });
    }
}

fn open(path: &Path, outside: &Outside) -> Result<Review, String> {
    let review = Review::open(&outside.opening, path).map_err(in_words)?;
    let review = review.heeding(&outside.campaign.settings().quality);
    let bases = read_bases(outside.campaign.folder(), review.granule(), &outside.opening);
    Ok(review.knowing(bases.unwrap_or_default()))
}

fn compare(
    path: &Path,
    yardstick: &Arc<Yardstick>,
    spectrum: &[f64],
    cancel: &Cancel,
    outside: &Outside,
) -> Result<ComparedGranule, String> {
    let review = open(path, outside)?;
    let measured = review.measured(yardstick, cancel)?;
    let values = measured.far_from(spectrum);
    Ok(ComparedGranule { values, decided: decided(&review, &measured, outside)? })
}

/// The footprints that a person has decided, so many of them that they can be kept.
fn decided(
    review: &Review,
    measured: &Measured,
    outside: &Outside,
) -> Result<Vec<DecidedSpectrum>, String> {
    let identity = review.identify().map_err(in_words)?;
    let decisions = read_ledgers(&outside.campaign, &identity).decisions;
    let vocabulary = &outside.campaign.settings().vocabulary;
    let state = FlagState::replay(measured.footprints(), &identity.bands, &decisions, vocabulary);
    let by_person = |at: &usize| state.review.get(*at) == Some(&ReviewState::DecidedByPerson);
    let all: Vec<usize> = (0..measured.footprints()).filter(by_person).collect();
    let step = all.len().div_ceil(MOST_DECIDED).max(1);
    let one = |footprint: usize| DecidedSpectrum {
        footprint,
        position: review.granule().footprints().position_words(footprint),
        flags: state.any_flags(footprint),
        spectrum: measured.of(footprint).to_vec(),
    };
    Ok(all.into_iter().step_by(step).map(one).collect())
}

/// Lets a verb decide about a granule, waits until the disk has it, and says how it stands then.
fn decide(
    path: &Path,
    outside: &Outside,
    verb: impl FnOnce(&mut Record) -> Result<(), Refusal>,
) -> Result<Brought, String> {
    let review = open(path, outside)?;
    let (mut record, _) = record(&review, outside)?;
    verb(&mut record).map_err(|refusal| refusal.to_string())?;
    close(*record, outside)
}

fn close(record: Record, outside: &Outside) -> Result<Brought, String> {
    let vocabulary = &outside.campaign.settings().vocabulary;
    let person = &outside.author.person;
    let standing = Standing::of(record.identity(), record.decisions(), vocabulary, person);
    record.close(PATIENCE).map_err(|error| error.to_string())?;
    Ok(Brought::Decided(Box::new(standing)))
}

/// Runs the tests over a granule and writes down what they say.
fn screen(path: &Path, cancel: &Cancel, outside: &Outside) -> Result<Brought, String> {
    let rulebook = rulebook_of(&outside.campaign).map_err(|error| error.to_string())?;
    let review = open(path, outside)?;
    let screened = review.screen(&rulebook, cancel).map_err(in_words)?;
    let (mut record, _) = record(&review, outside)?;
    let decided = record.tests_decide(&screened, (outside.clock)());
    decided.map_err(|refusal| refusal.to_string())?;
    close(*record, outside)
}
