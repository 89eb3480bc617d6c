//! Signing off by rule: the granules within the person's limits, together, after a summary.

use std::path::PathBuf;

use crate::review::{name_of, rulebook_name};
use crate::tray::{Offer, Standing};

use super::across::{self, Errand};
use super::app::App;
use super::colour::Tone;
use super::deciding;
use super::jobs::Job;
use super::key::{Code, Key};
use super::overlay::Overlay;
use super::owed;
use super::screening;
use super::turning;
use super::update::is_yes;

/// Names that a summary lists before it counts the rest.
const MOST_NAMES: usize = 6;

/// Shows which granules lie within the limits and asks whether to sign them off.
pub fn ask(app: &mut App) -> Vec<Job> {
    if let Some(why) = &app.outside.look_only {
        let words = format!("looking only: {why}");
        app.warn(words);
        return Vec::new();
    }
    match rulebook_name(&app.outside.campaign) {
        Ok(rulebook) => {
            deciding::update_tray(app);
            let offer = app.tray.offer(&app.outside.campaign.settings().sign_off, &rulebook);
            app.overlay = Overlay::ByRule(offer);
        }
        Err(why) => app.warn(why.to_string()),
    }
    Vec::new()
}

/// Takes the answer.
pub fn answer(app: &mut App, key: Key, offer: Offer) -> Vec<Job> {
    match key.code {
        _ if is_yes(key) && !offer.within.is_empty() => sign(app, &offer),
        Code::Char('t' | 'T') if !offer.unscreened.is_empty() => screen(app, &offer),
        Code::Char('n' | 'N') | Code::Esc | Code::Enter => {
            app.say("nothing was signed off");
            Vec::new()
        }
        _ => {
            app.overlay = Overlay::ByRule(offer);
            Vec::new()
        }
    }
}

/// The tests run over those that are not screened by the rulebook in force. Where they run beside the
/// keys, the key that asks offers anew what is within the limits then.
/// What they say of the granule on the table is there already, or will be.
fn screen(app: &mut App, offer: &Offer) -> Vec<Job> {
    if across::is_writing(app) {
        return Vec::new();
    }
    let here = app.current_entry();
    if here.is_some_and(|here| offer.unscreened.contains(&here)) {
        let Some(screened) = app.bench().and_then(|bench| bench.tests.screened.clone()) else {
            app.say("the tests have not run over the granule on the table yet");
            return Vec::new();
        };
        let in_force = rulebook_name(&app.outside.campaign).ok();
        if in_force.is_none_or(|in_force| in_force != name_of(&screened.rulebook)) {
            app.say(
                "the rulebook has changed: the tests run anew over the granule on the table first",
            );
            return screening::start(app);
        }
        let done = deciding::decided(app, |record, now| {
            record.tests_decide(&screened, now).map(|_| "what the tests say is written".to_owned())
        });
        if !done {
            return Vec::new();
        }
        if let Some(bench) = app.bench_mut() {
            bench.compare_tests();
        }
    }
    let others: Vec<usize> =
        offer.unscreened.iter().copied().filter(|entry| Some(*entry) != here).collect();
    match others.len() {
        0 => ask(app),
        count => {
            app.say(format!("the tests run over {count} granules…"));
            across::begin(app, Errand::Screen, &others)
        }
    }
}

/// The granule on the table is signed off here, the others beside the keys.
fn sign(app: &mut App, offer: &Offer) -> Vec<Job> {
    let on_table = app.current_entry();
    let mut others: Vec<(usize, PathBuf)> = Vec::new();
    for number in &offer.within {
        if Some(*number) == on_table && app.bench().is_some() {
            deciding::change(app, |record, now| {
                record.sign_off(false, now).map(|()| "signed off".to_owned())
            });
        } else if let Some(entry) = app.tray.entry(*number) {
            others.push((*number, entry.path.clone()));
        }
    }
    if others.is_empty() {
        return Vec::new();
    }
    app.say(format!("signing {} granules off…", offer.within.len()));
    let job = |(entry, path): (usize, PathBuf)| {
        let request = app.request();
        app.owed.begin(request, format!("the sign-off of {}", name(app, entry)));
        Job::SignOff { request, entry, path }
    };
    others.into_iter().map(job).collect()
}

/// A granule was signed off beside the keys, or was not.
pub fn signed(
    app: &mut App,
    request: u64,
    entry: usize,
    found: Result<Standing, String>,
) -> Vec<Job> {
    let name = name(app, entry);
    app.owed.end(request);
    match found {
        Ok(standing) => {
            app.tray.set_standing(entry, standing);
            // One that was not signed off is told until the next key.
            if app.message.1 != Tone::Bad {
                app.say(format!("{name}: signed off by rule"));
            }
        }
        Err(why) => owed::failed(app, format!("{name}: not signed off: {why}")),
    }
    turning::leave_if_done(app);
    Vec::new()
}

fn name(app: &App, entry: usize) -> String {
    app.tray.entry(entry).map(|entry| entry.name.clone()).unwrap_or_default()
}

/// What is offered, a line each.
pub fn lines(app: &App, offer: &Offer) -> Vec<String> {
    let limits = &app.outside.campaign.settings().sign_off;
    let percent = |share: f64| format!("{:.1} %", 100.0 * share);
    let mut lines = vec![
        format!(
            "limits ([sign_off] in campaign.toml): in doubt {}, not assessed {}, bad spectra {}, \
             bad channels {}, error {}",
            percent(limits.doubt),
            percent(limits.not_assessed),
            percent(limits.bad_spectra),
            limits.flagged_channels,
            percent(limits.spot_error)
        ),
        format!("spot checks without flag: {}", offer.spot[0].words()),
        format!("spot checks with flag: {}", offer.spot[1].words()),
        String::new(),
        format!("within: {}", names(app, &offer.within)),
    ];
    for (reason, entries) in &offer.beyond {
        lines.push(format!("{reason}: {}", names(app, entries)));
    }
    lines.push(String::new());
    match offer.unscreened.len() {
        0 => {}
        count => lines.push(format!("t: run the tests over the {count} not screened by them")),
    }
    match offer.within.len() {
        0 => lines.push("Esc: there is nothing to be signed off by rule".to_owned()),
        count => lines.push(format!("y: sign the {count} off; the tests answer for them   n: not")),
    }
    lines
}

fn names(app: &App, entries: &[usize]) -> String {
    let name = |number: &usize| app.tray.entry(*number).map(|entry| entry.name.as_str());
    let shown: Vec<&str> = entries.iter().take(MOST_NAMES).filter_map(name).collect();
    match entries.len() {
        0 => "none".to_owned(),
        all if all > MOST_NAMES => {
            format!("{}: {} and {} more", all, shown.join(", "), all - MOST_NAMES)
        }
        all => format!("{all}: {}", shown.join(", ")),
    }
}
