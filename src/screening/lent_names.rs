//! A rulebook's definitions lent to whatever else lends names.

use std::collections::BTreeMap;
use std::ops::Range;

use crate::granule::Channel;
use crate::layers::{
    Expression, Judgement, Judgements, NameError, Names, Neighbours, Retrieval, Values,
};

/// Names with the definitions of a rulebook in place of their own.
pub struct LentNames<'n> {
    /// All but the definitions.
    pub names: &'n dyn Names,
    /// The definitions.
    pub definitions: &'n BTreeMap<String, Expression>,
    /// What tests have said so far, in place of what was said before the rulebook ran.
    pub judgements: Option<&'n dyn Judgements>,
}

impl Names for LentNames<'_> {
    fn footprints(&self) -> usize {
        self.names.footprints()
    }

    fn channel_near(&self, wavenumber: f64) -> Result<Channel, NameError> {
        self.names.channel_near(wavenumber)
    }

    fn channels_between(&self, low: f64, high: f64) -> Vec<Channel> {
        self.names.channels_between(low, high)
    }

    fn stores_temperature(&self, channel: &Channel) -> bool {
        self.names.stores_temperature(channel)
    }

    fn radiances(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]) {
        self.names.radiances(channels, footprints, out);
    }

    fn temperatures(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]) {
        self.names.temperatures(channels, footprints, out);
    }

    fn footprints_at_once(&self) -> Option<usize> {
        self.names.footprints_at_once()
    }

    fn calculates(&self, channel: &Channel) -> Result<(), NameError> {
        self.names.calculates(channel)
    }

    fn clear_temperatures(
        &self,
        channels: &[Channel],
        footprints: Range<usize>,
        out: &mut [f64],
    ) -> Result<(), NameError> {
        self.names.clear_temperatures(channels, footprints, out)
    }

    fn is_left_out(&self, footprint: usize) -> bool {
        self.names.is_left_out(footprint)
    }

    fn is_complete(&self, channel: &Channel) -> bool {
        self.names.is_complete(channel)
    }

    fn named(&self, name: &str) -> Result<Values, NameError> {
        self.names.named(name)
    }

    fn variable(&self, name: &str) -> Result<Values, NameError> {
        self.names.variable(name)
    }

    fn definition(&self, name: &str) -> Option<&Expression> {
        self.definitions.get(name)
    }

    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError> {
        match self.judgements {
            Some(judgements) => judgements.judged(judgement, of),
            None => Err(NameError::NotJudged(judgement.word())),
        }
    }

    fn lengths(&self) -> &[usize] {
        self.names.lengths()
    }

    fn retrievals(&self) -> &[&dyn Retrieval] {
        self.names.retrievals()
    }

    fn neighbours(&self) -> &Neighbours {
        self.names.neighbours()
    }
}
