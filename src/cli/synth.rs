//! `radsieve synth`: synthetic granules with their truth.

use std::io::IsTerminal;
use std::path::PathBuf;

use indicatif::{ProgressBar, ProgressStyle};

use super::Exit;
use super::exit::UsageError;
use super::output::Output;
use crate::synth::{
    Calculation, DEFAULT_SEED, Recipe, SceneName, Shape, ToldNoise, make_calculated, make_granule,
};
use crate::system::Cancel;

/// What was typed.
#[derive(Debug, clap::Args)]
#[command(after_help = scenes_and_shapes())]
pub struct Arguments {
    /// Folder for the granules; made if it is not there.
    #[arg(long, value_name = "DIR")]
    out: PathBuf,
    /// What they show: names of scenes, all, or samples (the four sample granules).
    #[arg(long, value_name = "NAME", value_delimiter = ',', default_value = "all")]
    scene: Vec<String>,
    /// How large they are: sample, interferometer, grating, or numbers such as 20x30x9.
    #[arg(long, value_name = "SHAPE", default_value = "sample")]
    shape: String,
    /// What their random numbers grow from; the same seed gives the same granule.
    #[arg(long, value_name = "NUMBER", default_value_t = DEFAULT_SEED)]
    seed: u64,
    /// Draw another climate from a seed: air, gases, ground, clouds, view, hour, noise, defects.
    #[arg(long, value_name = "NUMBER")]
    perturbed: Option<u64>,
    /// Plant a defect of every kind, labelled in the truth, in place of those of the scene.
    #[arg(long)]
    faulty: bool,
    /// Write the noise of the channels into the file: `channels`, one for each, or `detectors`, each
    /// detector's own, and then they differ.
    #[arg(long, value_name = "FOR")]
    nedn: Option<String>,
    /// Write beside each granule what a model calculates for its footprints under clear sky, with a known
    /// bias: exact knows air and ground, model is off as short forecasts are.
    #[arg(long, value_name = "KIND")]
    calculated: Option<String>,
    /// Replace files that are there already.
    #[arg(long)]
    force: bool,
}

fn scenes_and_shapes() -> String {
    let mut text = String::from("Scenes:\n");
    for scene in SceneName::ALL {
        text += &format!("  {:15} {}: {}\n", scene.label(), scene.place(), scene.summary());
    }
    text += "\nShapes:\n  \
        sample          small (under 4 MB), with a layout of the scene's own\n  \
        interferometer  45x30x9 footprints, 717 + 869 + 637 channels\n  \
        grating         135x90 footprints, 2378 channels\n  \
        20x30           scan lines x positions of the grating\n  \
        20x30x9         scan lines x positions x 1, 4 or 9 detectors of the interferometer\n\n\
        Instrument and places are imaginary. Every file says that it is synthetic: no data for science.";
    text
}

/// The scenes that were named, each once, in the order of the list in the help.
fn scenes(names: &[String]) -> anyhow::Result<Vec<SceneName>> {
    let known = |name: &str| {
        ["all", "samples"].contains(&name) || SceneName::ALL.iter().any(|one| one.label() == name)
    };
    if let Some(stranger) = names.iter().find(|name| !known(name)) {
        let labels = SceneName::ALL.map(SceneName::label).join(", ");
        let message = format!("--scene: {stranger:?} is no scene: write all, samples, {labels}");
        return Err(UsageError(message).into());
    }
    let is_named = |scene: &SceneName| {
        names.iter().any(|name| match name.as_str() {
            "all" => true,
            "samples" => SceneName::SAMPLES.contains(scene),
            name => name == scene.label(),
        })
    };
    Ok(SceneName::ALL.into_iter().filter(is_named).collect())
}

fn told_noise(text: &str) -> anyhow::Result<ToldNoise> {
    let wrong = || UsageError(format!("--nedn: {text:?} is neither channels nor detectors"));
    Ok(ToldNoise::parse(text).ok_or_else(wrong)?)
}

/// A granule, and what is calculated for it.
struct Planned {
    recipe: Recipe,
    path: PathBuf,
    calculated: Option<(Calculation, PathBuf)>,
}

impl Planned {
    fn paths(&self) -> impl Iterator<Item = &PathBuf> {
        std::iter::once(&self.path).chain(self.calculated.iter().map(|(_, path)| path))
    }
}

fn calculation(text: &str) -> anyhow::Result<Calculation> {
    let wrong = || UsageError(format!("--calculated: {text:?} is no kind: write exact or model"));
    Ok(Calculation::parse(text).ok_or_else(wrong)?)
}

/// What the arguments mean: recipes and where they go.
fn plan(arguments: &Arguments) -> anyhow::Result<Vec<Planned>> {
    let calculated = arguments.calculated.as_deref().map(calculation).transpose()?;
    let nedn = arguments.nedn.as_deref().map(told_noise).transpose()?;
    let shape =
        Shape::parse(&arguments.shape).map_err(|error| UsageError(format!("--shape: {error}")))?;
    let scenes = scenes(&arguments.scene)?;
    let planned: Vec<Planned> = scenes
        .into_iter()
        .map(|scene| Recipe {
            scene,
            shape,
            seed: arguments.seed,
            perturbed: arguments.perturbed,
            faulty: arguments.faulty,
            nedn,
        })
        .map(|recipe| Planned {
            recipe,
            path: arguments.out.join(recipe.file_name()),
            calculated: calculated
                .map(|kind| (kind, arguments.out.join(recipe.calculated_file_name()))),
        })
        .collect();
    if !arguments.force
        && let Some(there) = planned.iter().flat_map(Planned::paths).find(|path| path.exists())
    {
        let there = there.display();
        anyhow::bail!("{there} is there already; --force replaces it (nothing was written)");
    }
    Ok(planned)
}

/// Runs the command.
pub fn run(arguments: Arguments) -> anyhow::Result<Exit> {
    let planned = plan(&arguments)?;
    std::fs::create_dir_all(&arguments.out).map_err(|error| {
        anyhow::anyhow!("cannot make the folder {}: {error}", arguments.out.display())
    })?;
    let cancel = Cancel::new();
    let mut output = Output::default();
    for Planned { recipe, path, calculated } in planned {
        let name = recipe.file_name();
        let progress = Progress::new(&name);
        make_granule(recipe, &path, &cancel, &mut |done, all| progress.at(done, all))?;
        progress.end();
        output.path(&path);
        if let Some((kind, path)) = calculated {
            say!("calculating {}", recipe.calculated_file_name());
            make_calculated(recipe, kind, &path, &cancel)?;
            output.path(&path);
        }
    }
    output.end(Exit::Done)
}

/// A bar on a terminal; elsewhere a plain line at the start.
struct Progress(ProgressBar);

impl Progress {
    fn new(name: &str) -> Progress {
        if std::io::stderr().is_terminal() {
            let bar = ProgressBar::new(0);
            if let Ok(style) = ProgressStyle::with_template("{msg} {bar:30} {pos}/{len} scan lines")
            {
                bar.set_style(style);
            }
            bar.set_message(name.to_owned());
            return Progress(bar);
        }
        say!("making {name}");
        Progress(ProgressBar::hidden())
    }

    fn at(&self, done: usize, all: usize) {
        self.0.set_length(all as u64);
        self.0.set_position(done as u64);
    }

    fn end(&self) {
        self.0.finish_and_clear();
    }
}
