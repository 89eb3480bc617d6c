//! `radsieve screen`: the screening tests over granules, their decisions into ledgers.

use std::io::Write;
use std::path::{Path, PathBuf};
use std::time::Duration;

use anyhow::Context;
use jiff::Timestamp;
use serde_json::{Value, json};

use super::exit::UsageError;
use super::footprint_at::{footprint, indices};
use super::heights::{CloudTop, Heights, cloud_top, cloud_top_words};
use super::inputs::{Inputs, Reading};
use super::instrument::{instrument, instrument_words, write_spectrum_evidence};
use super::output::{Output, tell_refused};
use super::rules::rulebook_or_builtin;
use super::{Exit, surroundings};
use crate::flags::{Author, Campaign, CampaignError, QualityMap};
use crate::review::{Producer, Record, Recorded, Review, read_bases, rulebook_of};
use crate::screening::{Evidence, Rulebook, Screened, TestEvidence, Verdict};
use crate::system::{Cancel, clean_text};

/// How long to wait for a slow disk before the decisions count as lost.
const PATIENCE: Duration = Duration::from_secs(60);

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    radsieve screen *.nc --campaign spring\n  \
    radsieve screen granule.nc --explain 12,34,5\n\n\
    A repeated run replaces what the same rulebook decided before; a person's word stands. Nothing \
    is clear by default: a footprint that no test could look at stays not assessed.\n\n\
    RADSIEVE_PERSON names who starts the tests; RADSIEVE_NOW stops the clock.")]
pub struct Arguments {
    #[command(flatten)]
    inputs: Inputs,
    #[command(flatten)]
    reading: Reading,
    #[command(flatten)]
    heights: Heights,
    /// The rulebook; where none is named, the campaign's own (rulebook.toml in its folder) or the
    /// built-in one.
    #[arg(long, value_name = "FILE")]
    rules: Option<PathBuf>,
    /// The campaign folder with the ledgers; made if it is not there.
    #[arg(long, value_name = "DIR", default_value = surroundings::DEFAULT_CAMPAIGN)]
    campaign: PathBuf,
    /// Screen, but write no decisions.
    #[arg(long)]
    dry_run: bool,
    /// Show one footprint's evidence, and write no decisions: its zero-based index along each
    /// footprint dimension, as in 12,34 or 12,34,5.
    #[arg(long, value_name = "INDICES", allow_hyphen_values = true)]
    explain: Option<String>,
    /// JSON in place of text.
    #[arg(long)]
    json: bool,
}

/// Where decisions go; `None` where none are written.
struct Desk {
    campaign: Campaign,
    author: Author,
    now: Timestamp,
}

/// What came of a file.
struct Outcome {
    screened: Screened,
    producer: Producer,
    recorded: Option<Recorded>,
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let files = arguments.inputs.files()?;
    let rulebook = rulebook(&arguments)?;
    let quality = quality(&arguments)?;
    let opening = arguments.reading.opening()?;
    let heights = arguments.heights.method()?;
    let open = |file: &Path| -> anyhow::Result<Review> {
        let review = Review::open(&opening, file)?.heeding(&quality).taking(heights.clone());
        tell_refused(review.granule());
        let bases = read_bases(&arguments.campaign, review.granule(), &opening)?;
        Ok(review.knowing(bases))
    };
    if let Some(position) = &arguments.explain {
        let position = indices("--explain", position)?;
        let [file] = &files[..] else {
            return Err(UsageError("--explain takes one file".into()).into());
        };
        return explain(&open(file)?, file, &rulebook, &position, arguments.json);
    }
    let desk = if arguments.dry_run { None } else { Some(desk(&arguments, &rulebook)?) };
    let mut failed = 0;
    let mut output = Output::default();
    let mut entries = Vec::new();
    for file in &files {
        let outcome = open(file).and_then(|review| one_file(&review, &rulebook, desk.as_ref()));
        failed += usize::from(outcome.is_err());
        tell(file, &outcome, (!arguments.json).then_some(&mut output));
        if arguments.json {
            entries.push(entry(file, &outcome));
        }
    }
    if arguments.json {
        let answer = json!({ "schema": 1, "rulebook": head(&rulebook), "files": entries });
        output.line(answer);
    }
    output.end(Exit::of_many(files.len() - failed, failed))
}

/// The rulebook that was named, else the campaign's own, else the built-in one.
fn rulebook(arguments: &Arguments) -> anyhow::Result<Rulebook> {
    if arguments.rules.is_some() {
        return rulebook_or_builtin(arguments.rules.as_deref());
    }
    match Campaign::open(&arguments.campaign) {
        Ok(campaign) => Ok(rulebook_of(&campaign).map_err(|error| UsageError(error.to_string()))?),
        Err(CampaignError::Missing(_)) => rulebook_or_builtin(None),
        Err(error) => Err(error.into()),
    }
}

/// What the campaign makes of the producer's word on quality.
fn quality(arguments: &Arguments) -> anyhow::Result<QualityMap> {
    match Campaign::open(&arguments.campaign) {
        Ok(campaign) => Ok(campaign.settings().quality.clone()),
        Err(CampaignError::Missing(_)) => Ok(QualityMap::default()),
        Err(error) => Err(error.into()),
    }
}

fn desk(arguments: &Arguments, rulebook: &Rulebook) -> anyhow::Result<Desk> {
    let now = surroundings::now()?;
    let campaign = Campaign::open_or_create(&arguments.campaign)?;
    for problem in &campaign.settings().problems {
        say!("radsieve: {}", clean_text(problem));
    }
    let vocabulary = &campaign.settings().vocabulary;
    for flag in rulebook.flags() {
        if vocabulary.by_name(flag).is_none() {
            let known: Vec<&str> =
                vocabulary.kinds().iter().map(|kind| kind.name.as_str()).collect();
            let message = format!(
                "the rulebook sets the flag {}, which the campaign does not have; it has {}",
                clean_text(flag),
                known.join(", ")
            );
            return Err(UsageError(message).into());
        }
    }
    Ok(Desk { campaign, author: surroundings::author(), now })
}

fn one_file(review: &Review, rulebook: &Rulebook, desk: Option<&Desk>) -> anyhow::Result<Outcome> {
    let screened = review.screen(rulebook, &Cancel::new())?;
    let recorded = match desk {
        None => None,
        Some(desk) => Some(record(desk, review, &screened)?),
    };
    Ok(Outcome { screened, producer: review.producer().clone(), recorded })
}

fn record(desk: &Desk, review: &Review, screened: &Screened) -> anyhow::Result<Recorded> {
    let version = concat!("radsieve ", env!("CARGO_PKG_VERSION"));
    let identity = review.identify()?;
    let mut record = Record::open(&desk.campaign, identity, &desk.author, version, desk.now)?;
    for problem in record.problems() {
        say!("radsieve: {}", clean_text(problem));
    }
    let of_producer = record.producer_decides(review.producer(), desk.now)?;
    let mut recorded = record.tests_decide(screened, desk.now)?;
    recorded.written += of_producer.written;
    recorded.replaced += of_producer.replaced;
    recorded.unchanged &= of_producer.unchanged;
    record.close(PATIENCE).with_context(|| review.granule().name())?;
    Ok(recorded)
}

/// One line about each file on standard output; what went wrong on standard error.
fn tell(file: &Path, outcome: &anyhow::Result<Outcome>, lines: Option<&mut Output>) {
    let file = clean_text(&file.display().to_string());
    match outcome {
        Ok(outcome) => {
            for other in outcome.recorded.iter().flat_map(|recorded| &recorded.others) {
                let other = clean_text(other);
                say!("radsieve: {file}: decisions of the rulebook {other} stand as well");
            }
            for problem in &outcome.producer.problems {
                say!("radsieve: {file}: {problem}");
            }
            if let Some(output) = lines {
                for one in &outcome.producer.rejections {
                    let (count, flag) = (one.footprints.len(), &one.flag);
                    let words = format!("{}: {count} footprints {flag}, {}", one.variable, one.why);
                    say!("radsieve: {file}: rejected by the producer's {words}");
                }
                output.line(format_args!("{file}: {}", line(&outcome.screened)));
            }
        }
        Err(error) => {
            let words = format!("{error:#}");
            let named = words.contains(&file);
            let words = clean_text(&words);
            say!("radsieve: {}", if named { words } else { format!("{file}: {words}") });
        }
    }
}

fn line(screened: &Screened) -> String {
    let summary = screened.summary();
    let percent = |count: usize| format!("{:.1} %", percent(count, summary.footprints));
    let mut parts: Vec<String> = summary
        .flagged
        .iter()
        .filter(|(_, count)| *count > 0)
        .map(|(flag, count)| format!("{flag} {}", percent(*count)))
        .collect();
    parts.push(format!("no flag {}", percent(summary.no_flag)));
    parts.push(format!("not assessed {}", percent(summary.not_assessed)));
    if summary.mean_doubt.is_finite() {
        parts.push(format!("mean doubt {:.2}", summary.mean_doubt));
    }
    let instrument = screened.examined.as_ref().map(instrument_words).unwrap_or_default();
    format!("{} footprints: {}{instrument}", summary.footprints, parts.join(", "))
}

fn percent(count: usize, all: usize) -> f64 {
    if all == 0 { 0.0 } else { 100.0 * count as f64 / all as f64 }
}

fn head(rulebook: &Rulebook) -> Value {
    json!({
        "name": rulebook.name,
        "fingerprint": rulebook.fingerprint,
        "calibration": rulebook.calibration,
    })
}

fn entry(file: &Path, outcome: &anyhow::Result<Outcome>) -> Value {
    let file = file.display().to_string();
    let outcome = match outcome {
        Ok(outcome) => outcome,
        Err(error) => return json!({ "file": file, "error": format!("{error:#}") }),
    };
    let summary = outcome.screened.summary();
    let flagged: serde_json::Map<String, Value> =
        summary.flagged.iter().map(|(flag, count)| (flag.clone(), json!(count))).collect();
    json!({
        "file": file,
        "footprints": summary.footprints,
        "flagged": flagged,
        "no_flag": summary.no_flag,
        "not_assessed": summary.not_assessed,
        "rejected_by_producer": outcome.producer.rejections.iter().map(|one| json!({
            "variable": one.variable,
            "flag": one.flag,
            "footprints": one.footprints.len(),
            "why": one.why,
        })).collect::<Vec<_>>(),
        "producer_problems": outcome.producer.problems,
        "mean_doubt": summary.mean_doubt.is_finite().then_some(summary.mean_doubt),
        "tests": tests(&outcome.screened),
        "instrument": outcome.screened.examined.as_ref().map(instrument),
        "decisions": outcome.recorded.as_ref().map(|recorded| json!({
            "written": recorded.written,
            "replaced": recorded.replaced,
            "unchanged": recorded.unchanged,
        })),
    })
}

/// How often each test spoke, and why it could not.
fn tests(screened: &Screened) -> Vec<Value> {
    let tests = screened.rulebook.tests.iter().zip(&screened.tests);
    tests
        .map(|(test, result)| {
            let count = |wanted: Verdict| {
                result.verdicts.iter().filter(|verdict| **verdict == wanted).count()
            };
            json!({
                "name": test.name,
                "for": count(Verdict::For),
                "against": count(Verdict::Against),
                "other_surface": count(Verdict::OtherSurface),
                "guarded": count(Verdict::Guarded) + count(Verdict::GuardUnknown),
                "missing": count(Verdict::Missing) + count(Verdict::NotPositive),
                "not_in_file": (!result.lacks.is_empty()).then_some(&result.lacks),
                "substitute": result.way.filter(|way| *way > 0),
            })
        })
        .collect()
}

fn explain(
    review: &Review,
    file: &Path,
    rulebook: &Rulebook,
    position: &[usize],
    json: bool,
) -> anyhow::Result<Exit> {
    let number = footprint("--explain", review.granule().footprints(), position)?;
    let screened = review.screen(rulebook, &Cancel::new())?;
    let evidence = screened.evidence(number).context("the footprint is gone")?;
    let height = cloud_top(review, number)?;
    let mut out = std::io::stdout().lock();
    if json {
        let names = review.granule().footprints().names().iter().cloned();
        let position: serde_json::Map<String, Value> =
            names.zip(position.iter().map(|index| Value::from(*index))).collect();
        let answer = json!({
            "file": file.display().to_string(),
            "position": position,
            "rulebook": head(rulebook),
            "rejected_by_producer": review.producer().why(number),
            "cloud_height": height.as_ref().map(CloudTop::as_json),
            "evidence": evidence,
        });
        writeln!(out, "{answer}")?;
    } else {
        if let Some(why) = review.producer().why(number) {
            writeln!(out, "rejected, no test looks at it: {}", clean_text(&why))?;
        }
        write_evidence(&evidence, rulebook, &mut out)?;
        writeln!(out, "\n{}", cloud_top_words(height.as_ref()))?;
    }
    Ok(Exit::Done)
}

fn write_evidence(
    evidence: &Evidence,
    rulebook: &Rulebook,
    out: &mut dyn Write,
) -> std::io::Result<()> {
    let surface = evidence.surface.as_deref().unwrap_or("none that the rulebook knows");
    writeln!(out, "surface {surface}; rulebook {} ({})", rulebook.name, rulebook.fingerprint)?;
    let assessed = if evidence.assessed { "assessed" } else { "not assessed" };
    writeln!(out, "{assessed}, doubt {:.2}", evidence.doubt)?;
    writeln!(out, "weights: {}", rulebook.calibration)?;
    for flag in &evidence.flags {
        let set = if flag.set { "set" } else { "not set" };
        match flag.probability {
            None => writeln!(out, "\n{}: no test could speak", flag.flag)?,
            Some(probability) => writeln!(
                out,
                "\n{}: {set}; probability {probability:.3}, coverage {:.2}, doubt {:.2}",
                flag.flag, flag.coverage, flag.doubt
            )?,
        }
        for family in &flag.families {
            let tests = evidence.tests.iter().filter(|test| {
                (test.flag.as_str(), test.family.as_str()) == (&flag.flag, &family.family)
                    && test.verdict != Verdict::OtherSurface
            });
            let voice = family
                .log_odds
                .map_or("silent".to_owned(), |voice| format!("{voice:+.2} x {:.2}", family.weight));
            writeln!(out, "  {} {voice}", family.family)?;
            for test in tests {
                write_test(test, out)?;
            }
        }
    }
    write_spectrum_evidence(evidence, out)
}

fn write_test(test: &TestEvidence, out: &mut dyn Write) -> std::io::Result<()> {
    let number = |value: Option<f64>| value.map_or("missing".to_owned(), |v| format!("{v:.3}"));
    let symbol = if test.sense == "above" { ">" } else { "<" };
    let said = match (test.verdict, test.margin) {
        (Verdict::For, Some(margin)) => format!("for, margin {margin:+.2}"),
        (Verdict::Against, Some(margin)) => format!("against, margin {margin:+.2}"),
        _ => "not applicable".to_owned(),
    };
    let half = if test.halved { ", halved" } else { "" };
    let (value, threshold) = (number(test.value), number(test.threshold));
    writeln!(out, "    {}: {said}{half}", test.name)?;
    writeln!(out, "      {} = {value} {symbol} {threshold}?", test.expression)?;
    if !test.reason.is_empty() {
        writeln!(out, "      {}", test.reason)?;
    }
    if test.verdict.is_result() {
        writeln!(out, "      source: {}", test.source)?;
    }
    Ok(())
}
