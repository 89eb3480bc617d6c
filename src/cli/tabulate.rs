//! `radsieve tabulate`: layers per footprint as CSV or JSON lines.

use std::io::{self, BufWriter, Write};
use std::path::{Path, PathBuf};
use std::sync::Arc;

use anyhow::Context;

use super::Exit;
use super::exit::{self, UsageError};
use super::heights::Heights;
use super::inputs::{Inputs, Reading};
use super::rules::rulebook_or_builtin;
use super::table::{Form, Heading, write_rows};
use crate::granule::{Granule, Opening, ProblemKind};
use crate::layers::{Expression, GranuleNames, Judgements, Kept, Layer, LayerError, evaluate_all};
use crate::screening::{CloudHeight, Departures, RankedChannels, Rulebook, screen};
use crate::system::{Cancel, FileStamp, WriteError, clean_text, write_whole};

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    radsieve tabulate granule.nc --layer 'bt(900)' --layer 'bt(900) - bt(1231)'\n  \
    radsieve tabulate *.nc --layer 'sd3(bt(900))' --json -o spread.jsonl")]
pub struct Arguments {
    #[command(flatten)]
    inputs: Inputs,
    /// A layer expression, one column each, as in 'bt(900) - bt(831)'.
    #[arg(long = "layer", value_name = "EXPR", required = true, allow_hyphen_values = true)]
    layers: Vec<String>,
    /// JSON lines in place of CSV.
    #[arg(long)]
    json: bool,
    /// Write to a file, whole or not at all, in place of standard output.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
    /// Say nothing about what was noticed in the files.
    #[arg(short, long)]
    quiet: bool,
    #[command(flatten)]
    reading: Reading,
    #[command(flatten)]
    heights: Heights,
    /// The rulebook behind doubt, probability, flag and margin; the built-in one where none is named
    #[arg(long, value_name = "FILE")]
    rules: Option<PathBuf>,
}

/// What the arguments mean.
struct Plan {
    files: Vec<PathBuf>,
    layers: Vec<Expression>,
    form: Form,
    quiet: bool,
    opening: Opening,
    heights: Arc<CloudHeight>,
    /// Where a layer asks for what tests say.
    rulebook: Option<Rulebook>,
}

/// How the files fared.
#[derive(Debug, Default)]
struct Tally {
    done: usize,
    failed: usize,
    /// Failures because the expression uses a name that means nothing.
    unknown_names: usize,
}

/// Why a file gave no rows.
enum Failure {
    /// Its layers can't be had from it.
    File(anyhow::Error),
    /// The table can't be written any more.
    Output(io::Error),
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let plan = plan(&arguments)?;
    let tally = match &arguments.output {
        Some(target) if target.as_os_str() != "-" => into_target(&plan, target)?,
        _ => into_stream(&plan, io::stdout().lock())?,
    };
    Ok(tally.exit())
}

fn into_stream(plan: &Plan, stream: impl Write) -> io::Result<Tally> {
    let mut out = BufWriter::new(stream);
    let tally = tabulate(plan, &mut out)?;
    out.flush()?;
    Ok(tally)
}

/// Writes to what a name stands for: a link's own target stays a file behind that link, a pipe or device
/// is written into.
fn into_target(plan: &Plan, target: &Path) -> anyhow::Result<Tally> {
    let target = target.canonicalize().unwrap_or_else(|_| target.to_owned());
    let Ok(there) = std::fs::metadata(&target) else { return into_file(plan, &target) };
    let stamp = FileStamp::from(&there);
    if plan.files.iter().any(|file| FileStamp::of(file).is_ok_and(|input| input == stamp)) {
        let words = format!("--output: {} is one of the inputs", shown(&target));
        return Err(UsageError(words).into());
    }
    if there.is_file() {
        return into_file(plan, &target);
    }
    let stream = std::fs::OpenOptions::new().write(true).open(&target);
    let stream = stream.with_context(|| format!("cannot write to {}", shown(&target)))?;
    Ok(into_stream(plan, stream)?)
}

fn plan(arguments: &Arguments) -> anyhow::Result<Plan> {
    let read = |text: &String| {
        Expression::parse(text).map_err(|error| UsageError(format!("--layer: {error}")))
    };
    let layers: Vec<Expression> = arguments.layers.iter().map(read).collect::<Result<_, _>>()?;
    let rulebook = match layers.iter().any(Expression::asks_tests) {
        true => Some(rulebook_or_builtin(arguments.rules.as_deref())?),
        false => None,
    };
    Ok(Plan {
        layers,
        rulebook,
        heights: arguments.heights.method()?,
        files: arguments.inputs.files()?,
        form: if arguments.json { Form::JsonLines } else { Form::Csv },
        quiet: arguments.quiet,
        opening: arguments.reading.opening()?,
    })
}

/// Writes the table to a file that appears whole or not at all; not at all where no input gave
/// anything.
fn into_file(plan: &Plan, target: &Path) -> anyhow::Result<Tally> {
    let mut tally = Tally::default();
    let written = write_whole(target, |path| {
        let mut out = BufWriter::new(std::fs::File::create(path)?);
        tally = tabulate(plan, &mut out)?;
        out.flush()?;
        if tally.done == 0 { Err(io::Error::other("no file gave anything")) } else { Ok(()) }
    });
    match written {
        // Each file's failure has been told already.
        Err(WriteError::Content { .. }) if tally.done == 0 && tally.failed > 0 => Ok(tally),
        written => {
            written?;
            Ok(tally)
        }
    }
}

/// Writes the rows of all files, one after another; a file that fails is named and passed over.
fn tabulate(plan: &Plan, out: &mut dyn Write) -> io::Result<Tally> {
    let mut tally = Tally::default();
    let mut heading = None;
    for file in &plan.files {
        match one_file(plan, file, &mut heading, out) {
            Ok(()) => tally.done += 1,
            Err(Failure::Output(error)) => return Err(error),
            Err(Failure::File(error)) => {
                say!("radsieve: {}", exit::words(&error));
                tally.failed += 1;
                let unknown = error.downcast_ref().is_some_and(LayerError::is_unknown_name);
                tally.unknown_names += usize::from(unknown);
            }
        }
    }
    Ok(tally)
}

fn one_file(
    plan: &Plan,
    file: &Path,
    heading: &mut Option<Heading>,
    out: &mut dyn Write,
) -> Result<(), Failure> {
    let granule = plan.opening.open(file).map_err(|error| Failure::File(error.into()))?;
    let refused = heading.as_ref().and_then(|heading| heading.refuses(&granule));
    // Each JSON line names its own dimensions.
    if let (Some(reason), Form::Csv) = (refused, plan.form) {
        return Err(Failure::File(anyhow::anyhow!("{}: {reason}", shown(file))));
    }
    let layers =
        layers(plan, &granule).map_err(|error| Failure::File(error.context(shown(file))))?;
    if !plan.quiet {
        tell(&shown(file), &granule, &layers);
    }
    let name = file.to_string_lossy();
    let heading = match heading {
        Some(heading) => heading,
        None => {
            let new = Heading::of(&granule, plan.files.len() > 1);
            if plan.form == Form::Csv {
                let texts: Vec<String> =
                    plan.layers.iter().map(|layer| layer.text().to_owned()).collect();
                new.write(&texts, out).map_err(Failure::Output)?;
            }
            heading.insert(new)
        }
    };
    let lacking = if plan.form == Form::Csv { heading.lacks(&granule) } else { Vec::new() };
    if !lacking.is_empty() && !plan.quiet {
        let columns = lacking.join(" and ");
        say!("radsieve: {}: its {columns} are left out, for the first file has none", shown(file));
    }
    write_rows(plan.form, heading, &name, &granule, &layers, out).map_err(Failure::Output)
}

/// The path as it was named: files of several folders may have one name.
fn shown(file: &Path) -> String {
    clean_text(&file.to_string_lossy())
}

/// Evaluates the layers, while the bands that they need are read, and no others.
fn layers(plan: &Plan, granule: &Granule) -> anyhow::Result<Vec<Layer>> {
    let cube = granule.cube();
    let expressions: Vec<&Expression> = plan.layers.iter().collect();
    let kept = Kept::default();
    let cancel = Cancel::new();
    let names = || {
        GranuleNames::new(granule, &cube)
            .keeping(&kept)
            .with_retrieval(&*plan.heights)
            .with_retrieval(Departures::shared())
            .with_retrieval(RankedChannels::shared())
    };
    let screened = match &plan.rulebook {
        Some(rulebook) => Some(names().lend_all(&cancel, |names| screen(rulebook, names))?),
        None => None,
    };
    let judgements = screened.as_ref().map(|screened| screened as &dyn Judgements);
    let layers = names()
        .with_judgements(judgements)
        .lend_all(&cancel, |names| evaluate_all(&expressions, names))?;
    layers.into_iter().map(|layer| layer.map_err(anyhow::Error::new)).collect()
}

/// Says on standard error what was noticed: guesses about the file, notes on the layers.
fn tell(file: &str, granule: &Granule, layers: &[Layer]) {
    let noticed = granule.cube().notes();
    for problem in granule.problems().iter().chain(&noticed) {
        // What a file merely lacks matters here only where a layer asks for it.
        if problem.kind != ProblemKind::Missing {
            say!("radsieve: {file}: {problem}");
        }
    }
    for layer in layers {
        for note in &layer.notes {
            say!("radsieve: {file}: {}: {note}", clean_text(&layer.expression));
        }
    }
}

impl Tally {
    fn exit(&self) -> Exit {
        match Exit::of_many(self.done, self.failed) {
            Exit::Failed if self.failed == self.unknown_names => Exit::Usage,
            exit => exit,
        }
    }
}
