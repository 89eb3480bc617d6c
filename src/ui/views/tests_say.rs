//! What the tests say of the footprint under the cursor, for the Evidence.

use crate::review::OnRecord;
use crate::screening::{Evidence, FlagEvidence, Screened, TestEvidence};
use crate::system::clean_text;
use crate::ui::bench::Bench;
use crate::ui::colour::Tone;
use crate::ui::panes::evidence::EvidenceRow;
use crate::ui::panes::margin_bar::MarginBar;

/// The rows: doubt and suggestion, then flag by flag every test that speaks, then those that do not
/// and why.
pub fn tests_say(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    let Some(screened) = &bench.tests.screened else {
        rows.push(not_yet(bench));
        return;
    };
    let Some(evidence) = screened.evidence(bench.cursor) else { return };
    if bench.review.producer().rejects(bench.cursor) {
        let words = "no test looks at what the producer rejects".to_owned();
        rows.push(EvidenceRow::Words(words, Tone::Warning));
        return;
    }
    rows.extend(in_short(&evidence, screened));
    if let Some(words) = on_record(&bench.tests.on_record) {
        rows.push(EvidenceRow::Words(words, Tone::Warning));
    }
    for flag in spoken_about(&evidence) {
        rows.push(of_flag(flag));
        rows.extend(margins(&evidence, &flag.flag));
    }
}

/// What does not apply here, and why: tests, and what the spectra as a set could not be asked.
pub fn not_applicable(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    let Some(screened) = &bench.tests.screened else { return };
    let rejected = bench.review.producer().rejects(bench.cursor);
    let Some(evidence) = screened.evidence(bench.cursor).filter(|_| !rejected) else { return };
    let mut found = Vec::new();
    silent(&evidence, &mut found);
    found.extend(super::spectrum_says::unasked(bench));
    if !found.is_empty() {
        rows.push(EvidenceRow::Section("Not applicable".to_owned()));
        rows.extend(found);
    }
}

fn not_yet(bench: &Bench) -> EvidenceRow {
    let (words, tone) = match &bench.tests.problem {
        Some(why) => (format!("the tests could not run: {why}"), Tone::Bad),
        None if bench.awaited.screen != 0 => {
            let percent = (100.0 * bench.tests.cancel.share()).floor();
            (format!("the tests are running: {percent:.0} %"), Tone::Faint)
        }
        None if bench.filling.done => ("no tests have run".to_owned(), Tone::Faint),
        None => ("the tests run once all is read".to_owned(), Tone::Faint),
    };
    EvidenceRow::Words(words, tone)
}

/// Doubt, suggestion and surface.
fn in_short(evidence: &Evidence, screened: &Screened) -> Vec<EvidenceRow> {
    if !evidence.assessed {
        let words = "not assessed: what would tell could not speak".to_owned();
        return vec![EvidenceRow::Words(words, Tone::Warning)];
    }
    let doubtful = screened.is_doubtful(evidence.footprint);
    let doubt = if doubtful { Tone::Warning } else { Tone::Plain };
    let set: Vec<&str> = evidence.flags.iter().filter(|one| one.set).map(of_name).collect();
    let suggested = if set.is_empty() { "no flag".to_owned() } else { set.join(", ") };
    let ground = evidence.surface.as_deref().map_or(String::new(), |name| format!(", {name}"));
    let word = if doubtful { "in doubt" } else { "plain" };
    vec![
        EvidenceRow::Words(format!("suggested: {suggested}"), Tone::Strong),
        EvidenceRow::Words(format!("doubt {:.2}, {word}{ground}", evidence.doubt), doubt),
    ]
}

fn of_name(flag: &FlagEvidence) -> &str {
    &flag.flag
}

/// How what stands in the ledger differs from what the tests say, if it does.
fn on_record(on_record: &OnRecord) -> Option<String> {
    match on_record {
        OnRecord::Nothing | OnRecord::Same => None,
        OnRecord::Differs(rulebook) => Some(format!(
            "the ledger holds another outcome of these tests, by {}: screen again",
            clean_text(rulebook)
        )),
        OnRecord::Others(names) => {
            Some(format!("the ledger holds tests of another rulebook: {}", clean_text(names)))
        }
    }
}

/// Flags about which a test speaks: those that are set first, then the most doubtful.
fn spoken_about(evidence: &Evidence) -> Vec<&FlagEvidence> {
    let spoken = evidence.flags.iter().filter(|flag| flag.probability.is_some());
    let mut flags: Vec<&FlagEvidence> = spoken.collect();
    flags.sort_by(|one, next| {
        next.set.cmp(&one.set).then(next.doubt.total_cmp(&one.doubt)).then(one.flag.cmp(&next.flag))
    });
    flags
}

fn of_flag(flag: &FlagEvidence) -> EvidenceRow {
    let probability = flag.probability.unwrap_or(f64::NAN);
    EvidenceRow::Fact {
        label: format!("{} {}", flag.flag, if flag.set { "set" } else { "not set" }),
        value: format!("p {probability:.2}"),
        unit: String::new(),
        note: match flag.coverage {
            all if all > 0.995 => String::new(),
            part => format!("{:.0} % of the weight could speak", 100.0 * part),
        },
        tone: if flag.set { Tone::Warning } else { Tone::Plain },
    }
}

/// The tests of a flag that speak, the strongest for it first and the strongest against it last.
fn margins(evidence: &Evidence, flag: &str) -> Vec<EvidenceRow> {
    let of_flag = evidence.tests.iter().filter(|test| test.flag == flag);
    let mut speaking: Vec<(f64, &TestEvidence)> =
        of_flag.filter_map(|test| Some((test.margin?, test))).collect();
    speaking.sort_by(|(one, _), (next, _)| next.total_cmp(one));
    speaking.into_iter().map(|(margin, test)| EvidenceRow::Margin(bar(margin, test))).collect()
}

fn bar(margin: f64, test: &TestEvidence) -> MarginBar {
    let number = |value: Option<f64>| value.map_or("missing".to_owned(), super::number);
    let symbol = if test.sense == "above" { ">" } else { "<" };
    let (value, threshold) = (number(test.value), number(test.threshold));
    let half = if test.halved { " (half a voice)" } else { "" };
    let parts = [&test.reason, &test.source, &test.note];
    let note: Vec<&str> =
        parts.into_iter().map(String::as_str).filter(|part| !part.is_empty()).collect();
    MarginBar {
        label: test.name.clone(),
        margin,
        value: format!("{value} {symbol} {threshold}?{half} {}", test.expression),
        note: clean_text(&note.join("; ")),
    }
}

/// The tests that do not speak, and why. Those of other surfaces are only counted.
fn silent(evidence: &Evidence, rows: &mut Vec<EvidenceRow>) {
    let quiet = || evidence.tests.iter().filter(|test| test.margin.is_none());
    let (elsewhere, here): (Vec<_>, Vec<_>) =
        quiet().partition(|test| test.verdict == crate::screening::Verdict::OtherSurface);
    for test in here {
        let words = format!("{}: {}", test.name, clean_text(&test.reason));
        rows.push(EvidenceRow::Words(words, Tone::Faint));
    }
    if !elsewhere.is_empty() {
        let words = format!("{} of other surfaces", elsewhere.len());
        rows.push(EvidenceRow::Words(words, Tone::Faint));
    }
}
