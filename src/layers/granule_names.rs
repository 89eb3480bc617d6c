//! A granule lends its names and numbers to expressions.

use std::collections::BTreeMap;
use std::ops::Range;

use super::derived::derive;
use super::indices::INDICES;
use super::kept::Kept;
use super::names::{Judgements, NameError, Names, Values};
use super::neighbours::Neighbours;
use super::retrieval::Retrieval;
use super::syntax::{DERIVED_NAMES, Expression, FRIENDLY_NAMES, Judgement};
use super::unit::LayerUnit;
use super::whole_granule::WholeGranule;
use crate::granule::{Channel, Cube, Granule, GranuleError, Quantity};
use crate::spectral::{brightness_temperature_or_nan, planck};
use crate::system::Cancel;

/// The names of a granule: its channels, its geolocation, the indices of its footprint dimensions,
/// its variables, and definitions that are lent to it.
///
/// Works while the cube is still being read; what is not here yet is missing, and the layers say
/// so, unless [`Self::lend_all`] lends the names.
pub struct GranuleNames<'g> {
    granule: &'g Granule,
    cube: &'g Cube,
    whole: Option<WholeGranule<'g>>,
    definitions: Option<&'g BTreeMap<String, Expression>>,
    judgements: Option<&'g dyn Judgements>,
    retrievals: Vec<&'g dyn Retrieval>,
    /// One for each footprint, or none at all.
    left_out: &'g [bool],
    kept: Option<&'g Kept>,
    own: Kept,
}

impl<'g> GranuleNames<'g> {
    /// The names of a granule over its cube.
    pub fn new(granule: &'g Granule, cube: &'g Cube) -> Self {
        Self {
            granule,
            cube,
            whole: None,
            definitions: None,
            judgements: None,
            retrievals: Vec::new(),
            left_out: &[],
            kept: None,
            own: Kept::default(),
        }
    }

    /// With names that stand for expressions.
    pub fn with_definitions(mut self, definitions: &'g BTreeMap<String, Expression>) -> Self {
        self.definitions = Some(definitions);
        self
    }

    /// With what screening tests said.
    pub fn with_judgements(mut self, judgements: Option<&'g dyn Judgements>) -> Self {
        self.judgements = judgements;
        self
    }

    /// With names for what a retrieval works out.
    pub fn with_retrieval(mut self, retrieval: &'g dyn Retrieval) -> Self {
        self.retrievals.push(retrieval);
        self
    }

    /// Leaves out the spectra of some footprints: one truth for each footprint, or none at all.
    pub fn leaving_out(mut self, left_out: &'g [bool]) -> Self {
        self.left_out = left_out;
        self
    }

    /// Keeps what was found out where the caller can lend it again, for the same granule.
    pub fn keeping(mut self, kept: &'g Kept) -> Self {
        self.kept = Some(kept);
        self
    }

    fn kept(&self) -> &Kept {
        self.kept.unwrap_or(&self.own)
    }

    /// Lends the names to `work` while what is not in the cube is read as it is asked for, and given
    /// up again: takes little memory however large the granule is.
    ///
    /// # Errors
    /// Something could not be read, or `cancel` was asked for; what `work` made of it is dropped.
    pub fn lend_all<Done: Send>(
        mut self,
        cancel: &'g Cancel,
        work: impl FnOnce(&dyn Names) -> Done + Send,
    ) -> Result<Done, GranuleError> {
        self.whole = Some(WholeGranule::new(cancel));
        let granule = self.granule;
        let done = granule.at_work(|| work(&self));
        self.whole.map_or(Ok(()), WholeGranule::fault)?;
        Ok(done)
    }

    /// The index of each footprint along a dimension.
    fn index_along(&self, dimension: usize) -> Vec<f64> {
        let lengths = self.granule.footprints().lengths();
        let inner: usize = lengths[dimension + 1..].iter().product();
        (0..self.footprints())
            .map(|footprint| (footprint / inner.max(1) % lengths[dimension]) as f64)
            .collect()
    }

    fn known_names(&self) -> Vec<String> {
        let fields = FRIENDLY_NAMES.iter().chain(DERIVED_NAMES);
        let friendly = fields.map(|field| field.name.to_owned());
        let defined = self.definitions.into_iter().flat_map(|all| all.keys().cloned());
        let dimensions = self.granule.footprints().names().iter().cloned();
        let variables =
            self.granule.all_variables().map(|variable| format!("var(\"{}\")", variable.name));
        let indices = INDICES.iter().map(|index| index.name.to_owned());
        let retrieved = self.retrievals.iter().flat_map(|one| one.outputs());
        let indices = indices.chain(retrieved.map(|(name, _)| (*name).to_owned()));
        friendly.chain(defined).chain(indices).chain(dimensions).chain(variables).collect()
    }

    fn find_neighbours(&self) -> Neighbours {
        let lengths = self.granule.footprints().lengths();
        let fields = self.granule.geolocation();
        // A station's spectra lie beside each other in time only.
        let stands_still = |values: &[f64]| values.windows(2).all(|pair| pair[0] == pair[1]);
        match (&fields.latitude, &fields.longitude) {
            (Some(latitudes), Some(longitudes))
                if !(stands_still(latitudes) && stands_still(longitudes)) =>
            {
                Neighbours::by_ground(lengths, latitudes, longitudes)
            }
            _ => Neighbours::by_array(lengths),
        }
    }

    /// What the file stores, band by band: each spectrum is gone through once.
    fn values(&self, channels: &[Channel], footprints: &Range<usize>, out: &mut [f64]) {
        let mut out = out;
        for of_band in channels.chunk_by(|one, next| one.band == next.band) {
            let indices: Vec<usize> = of_band.iter().map(|channel| channel.index).collect();
            let (part, rest) = out.split_at_mut(of_band.len() * footprints.len());
            let band = of_band[0].band;
            match &self.whole {
                None => {
                    self.cube.channels_over(band, &indices, footprints.clone(), part);
                }
                Some(whole) => {
                    whole.channels_over(self.granule, band, &indices, footprints.clone(), part);
                }
            }
            self.leave_out(footprints, part);
            out = rest;
        }
    }

    /// Channel by channel what calculated spectra, one after another, have of some channels of a band.
    fn pick(&self, channels: &[Channel], spectra: &[f64], out: &mut [f64]) {
        let Some(band) = channels.first().and_then(|one| self.granule.bands().get(one.band)) else {
            return;
        };
        let whole = band.channels().max(1);
        let footprints = (spectra.len() / whole).max(1);
        for (channel, out) in channels.iter().zip(out.chunks_mut(footprints)) {
            let stored = self.stores_temperature(channel);
            for (spectrum, out) in spectra.chunks(whole).zip(out) {
                *out = match stored {
                    true => spectrum[channel.index],
                    false => {
                        brightness_temperature_or_nan(channel.wavenumber, spectrum[channel.index])
                    }
                };
            }
        }
    }

    fn leave_out(&self, footprints: &Range<usize>, out: &mut [f64]) {
        let Some(left_out) = self.left_out.get(footprints.clone()) else { return };
        for column in out.chunks_mut(footprints.len().max(1)) {
            let left_out = column.iter_mut().zip(left_out).filter(|(_, left_out)| **left_out);
            left_out.for_each(|(value, _)| *value = f64::NAN);
        }
    }
}

impl Names for GranuleNames<'_> {
    fn footprints(&self) -> usize {
        self.cube.footprints()
    }

    fn channel_near(&self, wavenumber: f64) -> Result<Channel, NameError> {
        self.granule.channel_near(wavenumber).map_err(|error| NameError::NoChannel {
            wanted: error.wavenumber,
            nearest: error.nearest.map(|channel| channel.wavenumber),
        })
    }

    fn channels_between(&self, low: f64, high: f64) -> Vec<Channel> {
        self.granule.channels_between(low, high)
    }

    fn stores_temperature(&self, channel: &Channel) -> bool {
        let band = self.granule.bands().get(channel.band);
        band.is_some_and(|band| matches!(band.quantity, Quantity::BrightnessTemperature(_)))
    }

    fn radiances(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]) {
        let length = footprints.len();
        self.values(channels, &footprints, out);
        for (channel, out) in channels.iter().zip(out.chunks_mut(length.max(1))) {
            if self.stores_temperature(channel) {
                out.iter_mut().for_each(|value| *value = planck(channel.wavenumber, *value));
            }
        }
    }

    fn temperatures(&self, channels: &[Channel], footprints: Range<usize>, out: &mut [f64]) {
        self.values(channels, &footprints, out);
    }

    fn footprints_at_once(&self) -> Option<usize> {
        self.whole.as_ref().map(|_| self.granule.footprints_at_once())
    }

    fn calculates(&self, channel: &Channel) -> Result<(), NameError> {
        match self.granule.calculated(channel.band) {
            Some(_) => Ok(()),
            None => Err(NameError::NotInFile(
                "calculated clear-sky spectra of this band (--with FILE lends them)".to_owned(),
            )),
        }
    }

    fn clear_temperatures(
        &self,
        channels: &[Channel],
        footprints: Range<usize>,
        out: &mut [f64],
    ) -> Result<(), NameError> {
        let mut out = out;
        for of_band in channels.chunk_by(|one, next| one.band == next.band) {
            let (part, rest) = out.split_at_mut(of_band.len() * footprints.len());
            let band = of_band[0].band;
            let spectra = match &self.whole {
                None => self.granule.calculated_clear(band, footprints.clone()),
                Some(whole) => Ok(whole.calculated_over(self.granule, band, footprints.clone())),
            };
            match spectra {
                Ok(Some(spectra)) => self.pick(of_band, &spectra, part),
                Ok(None) => {}
                Err(error) => return Err(NameError::Unreadable(error.to_string())),
            }
            self.leave_out(&footprints, part);
            out = rest;
        }
        Ok(())
    }

    fn is_left_out(&self, footprint: usize) -> bool {
        self.left_out.get(footprint).copied().unwrap_or(false)
    }

    fn is_complete(&self, channel: &Channel) -> bool {
        self.whole.is_some() || self.cube.is_complete(channel.band)
    }

    fn named(&self, name: &str) -> Result<Values, NameError> {
        if let Some(friendly) = FRIENDLY_NAMES.iter().find(|friendly| friendly.name == name) {
            return match self.granule.geolocation().field(name) {
                Some(values) => Ok(Values { values: values.to_vec(), unit: friendly.unit }),
                None => Err(NameError::NotInFile(format!(
                    "{name} ({}); --with FILE may lend it",
                    friendly.meaning
                ))),
            };
        }
        if let Some(derived) = DERIVED_NAMES.iter().find(|derived| derived.name == name) {
            let values = derive(name, &|field| self.granule.geolocation().field(field))
                .map_err(|needed| NameError::NotInFile(format!("{needed}, which {name} needs")))?;
            return Ok(Values { values, unit: derived.unit });
        }
        let dimensions = self.granule.footprints().names();
        match dimensions.iter().position(|dimension| dimension == name) {
            Some(dimension) => {
                Ok(Values { values: self.index_along(dimension), unit: LayerUnit::Index })
            }
            None => Err(NameError::Unknown { name: name.to_owned(), known: self.known_names() }),
        }
    }

    fn variable(&self, name: &str) -> Result<Values, NameError> {
        let Some(variable) = self.granule.variable(name) else {
            let all = self.granule.all_variables();
            let known = all.map(|variable| variable.name.clone()).collect();
            return Err(NameError::NoVariable { name: name.to_owned(), known });
        };
        self.kept().variable(name, || match self.granule.read_variable(name) {
            Ok(values) => Ok(Values { values, unit: unit_of(&variable.units) }),
            Err(error) => Err(NameError::Unreadable(error.to_string())),
        })
    }

    fn definition(&self, name: &str) -> Option<&Expression> {
        self.definitions?.get(name)
    }

    fn judged(&self, judgement: Judgement, of: Option<&str>) -> Result<Values, NameError> {
        match self.judgements {
            Some(judgements) => judgements.judged(judgement, of),
            None => Err(NameError::NotJudged(judgement.word())),
        }
    }

    fn lengths(&self) -> &[usize] {
        self.granule.footprints().lengths()
    }

    fn retrievals(&self) -> &[&dyn Retrieval] {
        &self.retrievals
    }

    fn neighbours(&self) -> &Neighbours {
        self.kept().neighbours(|| self.find_neighbours())
    }
}

/// The unit of a variable, as far as layers follow units.
fn unit_of(text: &str) -> LayerUnit {
    let text = text.trim().to_ascii_lowercase();
    let degrees = ["degrees", "degree"].iter().find_map(|word| text.strip_prefix(word));
    let of_what = degrees.map(|rest| rest.trim_start_matches(['_', ' ']));
    match (text.as_str(), of_what) {
        ("k" | "kelvin", _) | (_, Some("k" | "kelvin")) => LayerUnit::Kelvin,
        ("1", _) => LayerUnit::One,
        // Layers do not convert degrees Celsius and Fahrenheit.
        (_, Some(rest)) if !rest.starts_with(['c', 'f']) => LayerUnit::Degree,
        _ => LayerUnit::Unknown,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_known_by_the_names_that_files_give_them() {
        for (text, unit) in [
            ("K", LayerUnit::Kelvin),
            ("degree_Kelvin", LayerUnit::Kelvin),
            ("degrees kelvin", LayerUnit::Kelvin),
            ("degrees_north", LayerUnit::Degree),
            ("degree", LayerUnit::Degree),
            ("degree_Celsius", LayerUnit::Unknown),
            ("degrees celsius", LayerUnit::Unknown),
            ("1", LayerUnit::One),
        ] {
            assert_eq!(unit_of(text), unit, "{text}");
        }
    }
}
