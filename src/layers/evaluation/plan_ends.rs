//! The ends of an expression's tree: names, variables, places in the spectrum, results of retrievals.

use super::error::LayerError;
use super::leaves::Leaf;
use super::plan::{Draft, Planner, Step};
use super::program::{Operation, Source};
use crate::granule::Channel;
use crate::layers::names::{NameError, Names, Values};
use crate::layers::retrieval::Retrieval;
use crate::layers::syntax::{Callable, OfCalculated, Place, Quantity, Span, Where, name_of};
use crate::layers::unit::LayerUnit;

impl Planner<'_> {
    pub fn name(
        &mut self,
        name: &str,
        span: &Span,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        match self.definitions.get(name) {
            Some(Ok(output)) => {
                draft.uses(&output.leaves);
                draft.neighbours |= output.neighbours;
                draft.retrieved.extend(&output.retrieved);
                draft.remarks.extend(output.remarks.iter().cloned());
                draft.add(Operation::Load(output.source));
                Ok(output.unit)
            }
            Some(Err(error)) => Err(error.clone()),
            None => match self.retrieved(|one| one.outputs(), name) {
                Some(found) => self.retrieval(found, None, draft),
                None => self.values(name.to_owned(), |names| names.named(name), span, draft),
            },
        }
    }

    /// What a model calculated for a channel, and what follows from it.
    pub fn calculated(
        &mut self,
        what: OfCalculated,
        place: &Place,
        span: &Span,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        let channel = self.names.channel_near(place.wavenumber());
        let channel = channel.and_then(|channel| self.names.calculates(&channel).map(|()| channel));
        let channel = channel.map_err(|error| LayerError::of_name(draft.text, span, &error))?;
        if what == OfCalculated::Clear {
            self.leaf(Leaf::Calculated(channel), draft);
            return Ok(LayerUnit::Kelvin);
        }
        let name = name_of(Callable::Calculated(what));
        match self.retrieved(|one| one.functions(), name) {
            Some(found) => self.retrieval(found, Some(channel), draft),
            None => {
                let error = NameError::NotWorkedOut(name);
                Err(LayerError::of_name(draft.text, span, &error))
            }
        }
    }

    /// The retrieval that a name comes out of, and its place among the results.
    fn retrieved(
        &self,
        results: fn(&dyn Retrieval) -> &[(&'static str, LayerUnit)],
        name: &str,
    ) -> Option<(usize, usize)> {
        self.names.retrievals().iter().enumerate().find_map(|(retrieval, one)| {
            let output = results(*one).iter().position(|(known, _)| *known == name)?;
            Some((retrieval, output))
        })
    }

    fn retrieval(
        &mut self,
        (retrieval, output): (usize, usize),
        channel: Option<Channel>,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        let lent = self.names.retrievals()[retrieval];
        let mut inputs = Vec::new();
        for input in lent.inputs(self.names, channel.as_ref()) {
            match self.output(&input.layer) {
                Ok(found) => {
                    draft.uses(&found.leaves);
                    draft.neighbours |= found.neighbours;
                    inputs.push(Some(found.source));
                }
                Err(error) if input.needed => return Err(error),
                Err(_) => inputs.push(None),
            }
        }
        let known = self.steps.iter().position(|step| {
            matches!(step, Step::Retrieval { retrieval: other, channel: at, output: of, .. }
                if (*other, *at, *of) == (retrieval, channel, output))
        });
        let step = known.unwrap_or_else(|| {
            self.steps.push(Step::Retrieval { retrieval, channel, inputs, output });
            self.steps.len() - 1
        });
        draft.retrieved.push(step);
        draft.add(Operation::Load(Source::Step(step)));
        let results = if channel.is_some() { lent.functions() } else { lent.outputs() };
        Ok(results[output].1)
    }

    pub fn values(
        &mut self,
        key: String,
        ask: impl FnOnce(&dyn Names) -> Result<Values, NameError>,
        span: &Span,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        let known = self.leaves.iter().position(|leaf| match leaf {
            Leaf::Named(name, _) => *name == key,
            _ => false,
        });
        let at = match known {
            Some(at) => at,
            None => {
                let values = ask(self.names)
                    .map_err(|error| LayerError::of_name(draft.text, span, &error))?;
                self.leaves.push(Leaf::Named(key, values));
                self.leaves.len() - 1
            }
        };
        draft.load(at);
        Ok(match &self.leaves[at] {
            Leaf::Named(_, values) => values.unit,
            _ => LayerUnit::Unknown,
        })
    }

    pub fn spectral(
        &mut self,
        quantity: Quantity,
        place: &Where,
        span: &Span,
        draft: &mut Draft<'_>,
    ) -> Result<LayerUnit, LayerError> {
        let leaf = self
            .channels(quantity, place)
            .map_err(|error| LayerError::of_name(draft.text, span, &error))?;
        self.leaf(leaf, draft);
        Ok(match quantity {
            Quantity::BrightnessTemperature => LayerUnit::Kelvin,
            Quantity::Radiance => LayerUnit::Radiance,
            Quantity::MissingShare => LayerUnit::One,
        })
    }

    /// Loads a column that comes from the granule.
    fn leaf(&mut self, leaf: Leaf, draft: &mut Draft<'_>) {
        let known = self.leaves.iter().position(|other| other.is_same(&leaf));
        let at = known.unwrap_or_else(|| {
            self.leaves.push(leaf);
            self.leaves.len() - 1
        });
        draft.load(at);
    }

    fn channels(&self, quantity: Quantity, place: &Where) -> Result<Leaf, NameError> {
        match place {
            Where::At(place) => {
                Ok(Leaf::Channel(quantity, self.names.channel_near(place.wavenumber())?))
            }
            Where::Between(low, high) => {
                let (low, high) = (low.wavenumber(), high.wavenumber());
                let channels = self.names.channels_between(low, high);
                if channels.is_empty() {
                    return Err(self.no_channel_between(low, high));
                }
                Ok(Leaf::Interval { quantity, channels, width: high - low })
            }
        }
    }

    /// An interval without channels; the nearest one is found by asking for its middle.
    fn no_channel_between(&self, low: f64, high: f64) -> NameError {
        let nearest = match self.names.channel_near(0.5 * (low + high)) {
            Ok(channel) => Some(channel.wavenumber),
            Err(NameError::NoChannel { nearest, .. }) => nearest,
            Err(_) => None,
        };
        NameError::NoChannelBetween { low, high, nearest }
    }
}
