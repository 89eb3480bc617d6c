//! Evaluation over all footprints of a granule.

use std::collections::{BTreeMap, BTreeSet};

use super::error::LayerError;
use super::gather::{Column, gather};
use super::layer::Layer;
use super::leaves::Leaf;
use super::plan::{Output, Plan, Step};
use super::program::Source;
use crate::granule::Channel;
use crate::layers::names::Names;
use crate::layers::neighbours::{cluster, neighbourhood};
use crate::layers::retrieval::{Retrieval, Retrieved};
use crate::layers::syntax::{Around, Expression};

/// The numbers of one expression.
///
/// # Errors
/// A name that means nothing here, or a place in the spectrum without a channel.
pub fn evaluate(expression: &Expression, names: &dyn Names) -> Result<Layer, LayerError> {
    let (plan, output) = Plan::of_one(expression, names);
    let output = output?;
    Ok(Work::done(&plan, names).layer(expression, &output, &plan, names))
}

/// The numbers of several expressions, in their order. All channels are gathered in one pass; what
/// two expressions share is worked out once. Each number is the same as if its expression were
/// evaluated alone, with any number of threads.
pub fn evaluate_all(
    expressions: &[&Expression],
    names: &dyn Names,
) -> Vec<Result<Layer, LayerError>> {
    let (plan, outputs) = Plan::of(expressions, names);
    let work = Work::done(&plan, names);
    let layer = |(output, expression): (Result<Output, LayerError>, &&Expression)| {
        Ok(work.layer(expression, &output?, &plan, names))
    };
    outputs.into_iter().zip(expressions).map(layer).collect()
}

/// The channels that must have been read before `expressions` can be evaluated, each once and in
/// the file's order. Expressions that can't be evaluated ask for nothing.
pub fn channels_needed(expressions: &[&Expression], names: &dyn Names) -> Vec<Channel> {
    let (plan, _) = Plan::of(expressions, names);
    let mut channels: Vec<Channel> =
        plan.leaves.iter().flat_map(|leaf| leaf.channels().iter().copied()).collect();
    channels.sort_by_key(|channel| (channel.band, channel.index));
    channels.dedup_by_key(|channel| (channel.band, channel.index));
    channels
}

/// All columns.
struct Work {
    leaves: Vec<Column>,
    steps: Vec<Vec<f64>>,
    /// Each retrieval runs once for a channel, however many of its results are asked for.
    retrieved: BTreeMap<Run, Retrieved>,
}

/// Which retrieval, and for which channel by band and index.
type Run = (usize, Option<(usize, usize)>);

fn run_of(retrieval: usize, channel: Option<&Channel>) -> Run {
    (retrieval, channel.map(|channel| (channel.band, channel.index)))
}

impl Work {
    fn done(plan: &Plan, names: &dyn Names) -> Self {
        let mut work = Self {
            leaves: gather(&plan.leaves, names),
            steps: Vec::new(),
            retrieved: BTreeMap::new(),
        };
        for step in &plan.steps {
            let column = match step {
                Step::Pointwise(program) => {
                    program.run(names.footprints(), &|source| work.column(source))
                }
                Step::Neighbourhood(statistic, Around::Nine, source) => {
                    neighbourhood(*statistic, work.column(*source), names.neighbours())
                }
                Step::Neighbourhood(statistic, Around::Cluster, source) => {
                    cluster(*statistic, work.column(*source), names.cluster())
                }
                Step::Retrieval { retrieval, channel, inputs, output } => {
                    let run = run_of(*retrieval, channel.as_ref());
                    if !work.retrieved.contains_key(&run) {
                        let lent = names.retrievals()[*retrieval];
                        let found = work.retrieve(lent, channel.as_ref(), inputs, names);
                        work.retrieved.insert(run, found);
                    }
                    let found = work.retrieved.get(&run);
                    found.and_then(|found| found.columns.get(*output)).cloned().unwrap_or_default()
                }
            };
            work.steps.push(column);
        }
        work
    }

    fn retrieve(
        &self,
        retrieval: &dyn Retrieval,
        channel: Option<&Channel>,
        inputs: &[Option<Source>],
        names: &dyn Names,
    ) -> Retrieved {
        let inputs: Vec<Option<&[f64]>> =
            inputs.iter().map(|source| source.map(|source| self.column(source))).collect();
        retrieval.run(names, &inputs, channel)
    }

    fn layer(
        &self,
        expression: &Expression,
        output: &Output,
        plan: &Plan,
        names: &dyn Names,
    ) -> Layer {
        Layer {
            expression: expression.text().to_owned(),
            unit: output.unit,
            values: self.column(output.source).to_vec(),
            channels: single_channels(&plan.leaves, output),
            bands: bands(&plan.leaves, output),
            not_positive: not_positive(&self.leaves, output),
            notes: self.notes(output, plan, names),
        }
    }

    fn notes(&self, output: &Output, plan: &Plan, names: &dyn Names) -> Vec<String> {
        let mut all = notes(&plan.leaves, &self.leaves, output, names);
        for step in &output.retrieved {
            let Some(Step::Retrieval { retrieval, channel, .. }) = plan.steps.get(*step) else {
                continue;
            };
            let found = self.retrieved.get(&run_of(*retrieval, channel.as_ref()));
            for note in found.into_iter().flat_map(|found| &found.notes) {
                if !all.contains(note) {
                    all.push(note.clone());
                }
            }
        }
        all
    }

    fn column(&self, source: Source) -> &[f64] {
        match source {
            Source::Leaf(at) => &self.leaves[at].values,
            Source::Step(at) => &self.steps[at],
        }
    }
}

fn single_channels(leaves: &[Leaf], output: &Output) -> Vec<Channel> {
    let mut channels: Vec<Channel> = Vec::new();
    for at in &output.leaves {
        if let Leaf::Channel(_, channel) = &leaves[*at]
            && !channels.contains(channel)
        {
            channels.push(*channel);
        }
    }
    channels
}

fn bands(leaves: &[Leaf], output: &Output) -> Vec<usize> {
    let channels = output.leaves.iter().flat_map(|at| leaves[*at].channels());
    channels.map(|channel| channel.band).collect::<BTreeSet<usize>>().into_iter().collect()
}

/// Footprints at which one of the expression's radiances has no temperature.
fn not_positive(columns: &[Column], output: &Output) -> Vec<usize> {
    let mut footprints: Vec<usize> =
        output.leaves.iter().flat_map(|at| columns[*at].not_positive.iter().copied()).collect();
    footprints.sort_unstable();
    footprints.dedup();
    footprints
}

fn notes(leaves: &[Leaf], columns: &[Column], output: &Output, names: &dyn Names) -> Vec<String> {
    let mut notes: Vec<String> = output.remarks.clone();
    let used = || output.leaves.iter().map(|at| (&leaves[*at], &columns[*at]));
    notes.extend(used().filter_map(|(leaf, _)| leaf.note()));
    let footprints = names.footprints();
    for (leaf, column) in used() {
        if !column.unread.is_empty() {
            notes.push(column.unread.clone());
        }
        let place = place(leaf);
        if !column.not_positive.is_empty() {
            notes.push(format!(
                "at {place} {} of {footprints} footprints have a radiance of zero or less, which \
                 has no brightness temperature",
                column.not_positive.len()
            ));
        }
        if column.partial > 0 {
            notes.push(format!(
                "at {place} {} of {footprints} footprints lack some of the channels; the mean is \
                 over the others",
                column.partial
            ));
        }
    }
    let channels = || used().flat_map(|(leaf, _)| leaf.channels());
    if channels().any(|channel| !names.is_complete(channel)) {
        notes.push("the granule is still being read".to_owned());
    }
    if output.neighbours {
        notes.extend(names.neighbours().note().map(str::to_owned));
    }
    notes
}

/// Where in the spectrum a leaf lies, for a note.
fn place(leaf: &Leaf) -> String {
    match leaf.channels() {
        [] => String::new(),
        [one] => format!("{:.2} cm-1", one.wavenumber),
        [first, .., last] => format!("{:.2} to {:.2} cm-1", first.wavenumber, last.wavenumber),
    }
}
