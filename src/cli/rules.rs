//! `radsieve rules`: print a rulebook with its sources, find its mistakes.

use std::io::Write;
use std::path::{Path, PathBuf};

use anyhow::Context;
use serde_json::{Value, json};

use super::Exit;
use super::exit::UsageError;
use crate::layers::{INDICES, Index};
use crate::screening::health::LIMITS;
use crate::screening::{BUILTIN_TEXT, Rulebook, Surface, Test, Threshold, Way, builtin};
use crate::system::clean_text;

/// What was typed.
#[derive(Debug, clap::Args)]
pub struct Arguments {
    #[command(subcommand)]
    verb: Verb,
}

#[derive(Debug, clap::Subcommand)]
enum Verb {
    /// Print a rulebook: every test with threshold, source and note.
    Show {
        /// The rulebook; the built-in one where none is named.
        #[arg(value_name = "FILE", conflicts_with = "builtin")]
        file: Option<PathBuf>,
        /// The rulebook that comes with the program.
        #[arg(long)]
        builtin: bool,
        /// JSON in place of text.
        #[arg(long, conflicts_with = "toml")]
        json: bool,
        /// The text of the rulebook as it is, to begin one of your own from.
        #[arg(long)]
        toml: bool,
    },
    /// List the named indices, which every expression can use.
    Indices {
        /// JSON in place of text.
        #[arg(long)]
        json: bool,
    },
    /// Find all mistakes of a rulebook at once.
    Check {
        /// The rulebook.
        #[arg(value_name = "FILE")]
        file: PathBuf,
        /// JSON in place of text.
        #[arg(long)]
        json: bool,
    },
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let mut out = std::io::stdout().lock();
    match arguments.verb {
        Verb::Show { file, toml: true, .. } => {
            let text = match &file {
                Some(file) => text_of(file)?,
                None => BUILTIN_TEXT.to_owned(),
            };
            out.write_all(text.as_bytes())?;
            Ok(Exit::Done)
        }
        Verb::Show { file, json, .. } => {
            let rulebook = rulebook_or_builtin(file.as_deref())?;
            if json {
                writeln!(out, "{}", as_json(&rulebook))?;
            } else {
                write_text(&rulebook, &mut out)?;
            }
            Ok(Exit::Done)
        }
        Verb::Indices { json: true } => {
            let all: Vec<Value> = INDICES.iter().map(index_json).collect();
            writeln!(out, "{}", json!({ "schema": 1, "indices": all }))?;
            Ok(Exit::Done)
        }
        Verb::Indices { json: false } => {
            INDICES.iter().try_for_each(|index| write_index(index, &mut out))?;
            Ok(Exit::Done)
        }
        Verb::Check { file, json } => check(&file, json, &mut out),
    }
}

/// The rulebook of a file, or the built-in one.
///
/// # Errors
/// The file can't be read; or wrong usage, with all mistakes of the rulebook.
pub fn rulebook_or_builtin(file: Option<&Path>) -> anyhow::Result<Rulebook> {
    let parsed = match file {
        None => builtin(),
        Some(file) => Rulebook::parse(&text_of(file)?, &file.display().to_string()),
    };
    parsed.map_err(|error| UsageError(format!("the rulebook has mistakes\n{error}")).into())
}

fn text_of(file: &Path) -> anyhow::Result<String> {
    let context =
        || format!("cannot read the rulebook {}", clean_text(&file.display().to_string()));
    std::fs::read_to_string(file).with_context(context)
}

/// Mistakes are what the command was asked for, so they go to standard output.
fn check(file: &Path, json: bool, out: &mut dyn Write) -> anyhow::Result<Exit> {
    let name = file.display().to_string();
    let checked = Rulebook::parse(&text_of(file)?, &name);
    if json {
        let mistakes = checked.as_ref().err().map_or(&[][..], |error| &error.mistakes);
        let mistakes: Vec<Value> = mistakes
            .iter()
            .map(|one| json!({ "line": one.line, "key": one.key, "what": one.what }))
            .collect();
        writeln!(out, "{}", json!({ "schema": 1, "file": name, "mistakes": mistakes }))?;
    } else {
        match &checked {
            Ok(rulebook) => {
                let (tests, flags) = (rulebook.tests.len(), rulebook.flags().join(", "));
                writeln!(out, "{}: {tests} tests of {flags}; no mistakes", clean_text(&name))?;
            }
            Err(error) => writeln!(out, "{error}")?,
        }
    }
    Ok(if checked.is_ok() { Exit::Done } else { Exit::Usage })
}

fn write_text(rulebook: &Rulebook, out: &mut dyn Write) -> std::io::Result<()> {
    writeln!(out, "{} ({}): {}", rulebook.name, rulebook.fingerprint, rulebook.title)?;
    paragraph("", &rulebook.note, out)?;
    writeln!(out, "weights: {}", rulebook.calibration)?;
    writeln!(out, "doubtful from doubt {} on", rulebook.doubt_cut)?;
    writeln!(out, "assessed where tested: {}", rulebook.assess.join(", "))?;
    writeln!(out, "\nSurfaces, the first that holds:")?;
    for surface in &rulebook.surfaces {
        let places: Vec<&str> = surface.places.iter().map(|place| place.text()).collect();
        let place = match places.is_empty() {
            true => "everywhere else".to_owned(),
            false => places.join("; where the file lacks something: "),
        };
        writeln!(out, "  {}: {place}", surface.name)?;
        paragraph("    ", &surface.note, out)?;
    }
    writeln!(out, "\nDefinitions:")?;
    for definition in &rulebook.definitions {
        writeln!(out, "  {} = {}", definition.name, definition.expression.text())?;
        let usual = definition.usual.map(|(low, high)| {
            format!("usually {low} to {high} {}", definition.unit).trim_end().to_owned()
        });
        let usual = usual.unwrap_or_default();
        for line in [&usual, &definition.shows, &definition.fails, &definition.source] {
            paragraph("    ", line, out)?;
        }
    }
    writeln!(out, "\nTests:")?;
    rulebook.tests.iter().try_for_each(|test| write_test(rulebook, test, out))?;
    writeln!(out, "\nInstrument health and unusual spectra:")?;
    for kind in LIMITS {
        let unit = if kind.unit == "1" { "" } else { kind.unit };
        writeln!(out, "  {} = {} {unit}", kind.key, rulebook.health.value(kind))?;
        writeln!(out, "    {}", kind.meaning)?;
        writeln!(out, "      source: {}", kind.source)?;
    }
    Ok(())
}

fn write_index(index: &Index, out: &mut dyn Write) -> std::io::Result<()> {
    writeln!(out, "{} = {}", index.name, index.expression)?;
    let usual =
        index.usual.map_or_else(String::new, |_| format!("usually {}", index.usual_words()));
    paragraph("    ", &usual, out)?;
    writeln!(out, "    shows: {}\n    misleads: {}", index.shows, index.fails)?;
    writeln!(out, "    source: {}", index.source)
}

fn index_json(index: &Index) -> Value {
    json!({
        "name": index.name,
        "expression": index.expression,
        "unit": index.unit,
        "usual": index.usual,
        "shows": index.shows,
        "fails": index.fails,
        "source": index.source,
    })
}

fn paragraph(indent: &str, text: &str, out: &mut dyn Write) -> std::io::Result<()> {
    text.lines().try_for_each(|line| writeln!(out, "{indent}{}", clean_text(line)))
}

fn write_test(rulebook: &Rulebook, test: &Test, out: &mut dyn Write) -> std::io::Result<()> {
    let on: Vec<&str> = surfaces(rulebook, test).map(|surface| surface.name.as_str()).collect();
    writeln!(out, "  {}: {} ({}), on {}", test.name, test.flag, test.family, on.join(", "))?;
    if let Some(when) = &test.when {
        writeln!(out, "    applies where {}", when.text())?;
    }
    if let Some(when) = &test.halved_when {
        writeln!(out, "    half its voice where {}", when.text())?;
    }
    if test.against < 1.0 {
        writeln!(out, "    speaks against the flag with {} of its voice", test.against)?;
    }
    for (place, way) in test.ways.iter().enumerate() {
        let instead = if place > 0 { "else " } else { "" };
        let (text, symbol) = (way.expression.text(), way.sense.symbol());
        let limit = threshold(way);
        writeln!(out, "    {instead}{text} {symbol} {limit}, softness {}", way.softness)?;
        paragraph("      source: ", &way.source, out)?;
        paragraph("      ", &way.note, out)?;
    }
    Ok(())
}

fn surfaces<'r>(rulebook: &'r Rulebook, test: &'r Test) -> impl Iterator<Item = &'r Surface> {
    test.surfaces.iter().filter_map(|place| rulebook.surfaces.get(*place))
}

fn threshold(way: &Way) -> String {
    match &way.threshold {
        Threshold::Number(number) => number.to_string(),
        Threshold::Expression(expression) => expression.text().to_owned(),
        Threshold::Table(table) => {
            let over: Vec<&str> = table.over.iter().map(|over| over.text()).collect();
            format!("a table over {}", over.join(" and "))
        }
    }
}

fn as_json(rulebook: &Rulebook) -> Value {
    let surface = |surface: &Surface| {
        json!({
            "name": surface.name,
            "where": surface.places.iter().map(|place| place.text()).collect::<Vec<_>>(),
            "note": surface.note,
            "start": surface.start,
            "weights": surface.weights,
        })
    };
    let definitions = rulebook.definitions.iter().map(|definition| {
        json!({
            "name": definition.name,
            "expression": definition.expression.text(),
            "unit": definition.unit,
            "usual": definition.usual,
            "shows": definition.shows,
            "fails": definition.fails,
            "source": definition.source,
        })
    });
    let families = rulebook.families.iter();
    json!({
        "schema": 1,
        "name": rulebook.name,
        "title": rulebook.title,
        "note": rulebook.note,
        "calibration": rulebook.calibration,
        "doubt_cut": rulebook.doubt_cut,
        "assess": rulebook.assess,
        "fingerprint": rulebook.fingerprint,
        "surfaces": rulebook.surfaces.iter().map(surface).collect::<Vec<_>>(),
        "families": families
            .map(|family| json!({
                "name": family.name, "sees": family.sees, "optional": family.optional
            }))
            .collect::<Vec<_>>(),
        "definitions": definitions.collect::<Vec<_>>(),
        "health": LIMITS
            .iter()
            .map(|kind| json!({
                "limit": kind.key,
                "value": rulebook.health.value(kind),
                "unit": kind.unit,
                "meaning": kind.meaning,
                "source": kind.source,
            }))
            .collect::<Vec<_>>(),
        "tests": rulebook.tests.iter().map(|test| test_json(rulebook, test)).collect::<Vec<_>>(),
    })
}

fn test_json(rulebook: &Rulebook, test: &Test) -> Value {
    json!({
        "name": test.name,
        "family": test.family,
        "flag": test.flag,
        "on": surfaces(rulebook, test).map(|surface| &surface.name).collect::<Vec<_>>(),
        "when": test.when.as_ref().map(|when| when.text()),
        "halved_when": test.halved_when.as_ref().map(|when| when.text()),
        "against": test.against,
        "ways": test.ways.iter().map(way_json).collect::<Vec<_>>(),
    })
}

fn way_json(way: &Way) -> Value {
    let threshold = match &way.threshold {
        Threshold::Number(number) => json!(number),
        Threshold::Expression(expression) => json!(expression.text()),
        Threshold::Table(table) => json!({
            "over": table.over.iter().map(|over| over.text()).collect::<Vec<_>>(),
            "at": table.at,
            "values": table.values,
        }),
    };
    json!({
        "expression": way.expression.text(),
        "sense": way.sense.word(),
        "threshold": threshold,
        "softness": way.softness,
        "source": way.source,
        "note": way.note,
    })
}
