//! Clear-sky spectra that a model calculated for a granule's channels.

use std::ops::Range;

use crate::granule::apodisation;
use crate::granule::band::{Apodisation, Band, Quantity};
use crate::granule::decoder::Decoder;
use crate::granule::error::GranuleError;
use crate::granule::find_bands::quantity_of_unit;
use crate::granule::footprint_dimensions::FootprintDimensions;
use crate::granule::layout::{Layout, Role};
use crate::granule::problem::Problem;
use crate::granule::spectral_axis;
use crate::granule::truth::is_truth;
use crate::netcdf_files::{FileReader, Variable};
use crate::spectral::{Hamming3, brightness_temperature_or_nan, planck};

/// Words that say that a spectrum was calculated.
const CALCULATED: [&str; 7] =
    ["calc", "clear_sky", "clearsky", "clear-sky", "simulated", "computed", "modelled"];

/// Words that say that it is something else, whatever else is said.
const OTHER_THINGS: [&str; 9] =
    ["nedn", "nedt", "noise", "uncertainty", "error", "residual", "departure", "bias", "std"];

/// Axes agree within this share of the distance between neighbours: single precision is far finer,
/// and lines are far coarser.
const SAME_AXIS: f64 = 0.05;

/// Values that are read together, about 16 MB.
const BLOCK_VALUES: usize = 1 << 21;

/// The calculated spectra of a band.
#[derive(Debug, Clone, PartialEq)]
pub struct Calculated {
    /// The variable's path in its file.
    pub variable: String,
    /// Its unit as in the file.
    pub unit_text: String,
    /// That unit.
    pub quantity: Quantity,
    /// The file that lends it, by its place among the granule's lenders; none where it is in the
    /// granule's own file.
    pub lender: Option<usize>,
    pub(in crate::granule) place: usize,
    pub(in crate::granule) layout: Layout,
    /// What the spectra still need to be comparable with the band's.
    pub(in crate::granule) apodise: Option<Hamming3>,
}

/// Where the calculated spectra of a band are looked for.
pub struct CalculatedSearch<'a> {
    pub reader: &'a FileReader,
    pub dimensions: &'a FootprintDimensions,
    pub band: &'a Band,
    /// The variables of the granule's bands, where they are in this file; none where it lends.
    pub measured: &'a [usize],
    pub lender: Option<usize>,
}

impl CalculatedSearch<'_> {
    /// The first variable over the same footprints and channels that says it was calculated. In a
    /// lending file, the only one over them, if none says so.
    ///
    /// # Errors
    /// The file cannot be read any more.
    pub fn find(&self, problems: &mut Vec<Problem>) -> Result<Option<Calculated>, GranuleError> {
        let mut silent = Vec::new();
        for place in 0..self.reader.index().variables.len() {
            let Some(says_so) = self.may_be(place) else { continue };
            let Some(found) = self.over_channels(place, says_so, problems)? else { continue };
            match says_so {
                true => return Ok(Some(found)),
                false => silent.push(found),
            }
        }
        match silent.as_slice() {
            [only] if self.lender.is_some() => {
                let what = "the only spectra in a lending file are taken for calculated ones";
                let advice = "a name with `calculated` in it would say so";
                problems.push(Problem::guess(what, &only.variable, advice));
                Ok(silent.pop())
            }
            _ => Ok(None),
        }
    }

    /// Whether a variable says that it was calculated; nothing where it is none of that kind.
    fn may_be(&self, place: usize) -> Option<bool> {
        let variable = &self.reader.index().variables[place];
        let is_spectrum = variable.kind.is_number()
            && variable.dimensions.len() == self.dimensions.0.len() + 1
            && !is_truth(variable)
            && !self.measured.contains(&place);
        let text = |name| variable.text(name).unwrap_or_default();
        let words = format!("{} {} {}", variable.name, text("standard_name"), text("long_name"));
        let words = words.to_lowercase().replace(' ', "_");
        let says = |list: &[&str]| list.iter().any(|word| words.contains(word));
        (is_spectrum && !says(&OTHER_THINGS)).then(|| says(&CALCULATED))
    }

    fn over_channels(
        &self,
        place: usize,
        says_so: bool,
        problems: &mut Vec<Problem>,
    ) -> Result<Option<Calculated>, GranuleError> {
        let index = self.reader.index();
        let variable = &index.variables[place];
        let Some((layout, spectral)) = self.layout(variable) else { return Ok(None) };
        if index.dimensions[spectral].length != self.band.channels() {
            return Ok(None);
        }
        let unit_text = variable.text("units").unwrap_or_default();
        let quantity = match quantity_of_unit(&unit_text) {
            Ok(quantity) => quantity,
            Err(reason) => {
                if says_so {
                    let what = format!("calculated spectra cannot be used: {reason}");
                    problems.push(Problem::missing(&what, &variable.path, ""));
                }
                return Ok(None);
            }
        };
        match self.same_channels(variable, spectral)? {
            Some(true) => {}
            Some(false) => return Ok(None),
            None if index.dimensions[spectral].name == self.band.dimension => {}
            None => return Ok(None),
        }
        Ok(Some(Calculated {
            variable: variable.path.clone(),
            unit_text,
            quantity,
            lender: self.lender,
            place,
            layout,
            apodise: self.apodise(variable, problems),
        }))
    }

    /// The roles of its dimensions, and the one that is over.
    fn layout(&self, variable: &Variable) -> Option<(Layout, usize)> {
        let index = self.reader.index();
        let role = |&dimension: &usize| match self.dimensions.place_of(index, dimension) {
            Some((place, _)) => Role::Footprint(place),
            None => Role::Spectral,
        };
        let roles: Vec<Role> = variable.dimensions.iter().map(role).collect();
        let spectral = roles.iter().position(|role| *role == Role::Spectral)?;
        let wanted = (0..self.dimensions.0.len()).map(Role::Footprint).chain([Role::Spectral]);
        let fits = wanted.into_iter().all(|role| roles.contains(&role));
        let layout = Layout::new(roles, index.lengths(variable));
        fits.then(|| (layout, variable.dimensions[spectral]))
    }

    /// Whether its axis is the band's; nothing where it has none.
    fn same_channels(
        &self,
        variable: &Variable,
        spectral: usize,
    ) -> Result<Option<bool>, GranuleError> {
        let index = self.reader.index();
        let possible = spectral_axis::PossibleAxes::of(index);
        let candidates = spectral_axis::candidates(index, &possible, variable);
        let own = self.band.axis.wavenumbers();
        let spacing = self.band.spacing().map_or(1.0, |(low, _)| low);
        for candidate in candidates.iter().filter(|candidate| candidate.dimension == spectral) {
            let axis = match spectral_axis::read(self.reader, candidate, &mut Vec::new()) {
                Ok(axis) => axis,
                Err(crate::granule::error::Setback::File(error)) => return Err(error.into()),
                Err(crate::granule::error::Setback::Variable(_)) => None,
            };
            if let Some((axis, _)) = axis {
                let near = |(one, other): (&f64, &f64)| (one - other).abs() <= SAME_AXIS * spacing;
                return Ok(Some(axis.wavenumbers().iter().zip(own).all(near)));
            }
        }
        Ok(None)
    }

    /// The running mean, where the band's spectra are apodised on request and these are not yet.
    fn apodise(&self, variable: &Variable, problems: &mut Vec<Problem>) -> Option<Hamming3> {
        if self.band.apodisation != Apodisation::HammingApplied {
            return None;
        }
        match apodisation::find(self.reader.index(), variable, variable, &mut Vec::new()) {
            Apodisation::Hamming => None,
            Apodisation::None => Some(Hamming3::new(&self.band.axis, |_| true)),
            _ => {
                let what =
                    "how the calculated spectra are apodised is unknown; taken as not at all";
                problems.push(Problem::guess(what, &variable.path, ""));
                Some(Hamming3::new(&self.band.axis, |_| true))
            }
        }
    }
}

/// Which block of places to read, and what goes where.
struct Run {
    rows: Range<usize>,
    /// Place among those asked for, and place in the file.
    wanted: Vec<(usize, usize)>,
}

impl Calculated {
    /// The spectra at some places of the file, one after another, in the unit that the band's values
    /// are handed on in; missing where there is no place.
    pub(in crate::granule) fn at(
        &self,
        reader: &FileReader,
        band: &Band,
        row_length: usize,
        places: &[Option<usize>],
    ) -> Result<Vec<f64>, GranuleError> {
        let channels = band.channels();
        let mut out = vec![f64::NAN; places.len() * channels];
        let variable = &reader.index().variables[self.place];
        let decoder = Decoder::of(variable).with_undeclared_fill();
        for run in runs(places, row_length, channels) {
            let (start, count) = self.layout.rows(run.rows.clone());
            let samples = reader.read(variable, &start, &count)?;
            let values = decoder.decode_all(&self.layout.footprint_major(&count, samples));
            for (number, place) in run.wanted {
                let begin = (place - run.rows.start * row_length) * channels;
                let Some(stored) = values.get(begin..begin + channels) else { continue };
                self.convert(band, stored, &mut out[number * channels..(number + 1) * channels]);
            }
        }
        Ok(out)
    }

    /// From stored values to those that compare with the band's.
    fn convert(&self, band: &Band, stored: &[f64], out: &mut [f64]) {
        let wavenumbers = band.axis.wavenumbers();
        let radiance = |channel: usize| match &self.quantity {
            Quantity::Radiance(unit) => stored[channel] * unit.factor_at(wavenumbers[channel]),
            Quantity::BrightnessTemperature(unit) => {
                planck_or_nan(wavenumbers[channel], unit.to_kelvin(stored[channel]))
            }
        };
        for (channel, out) in out.iter_mut().enumerate() {
            *out = match (&band.quantity, &self.quantity, &self.apodise) {
                (_, _, Some(mean)) => mean.at(channel, radiance),
                (Quantity::Radiance(_), _, None) => radiance(channel),
                (_, Quantity::BrightnessTemperature(unit), None) => unit.to_kelvin(stored[channel]),
                (_, Quantity::Radiance(_), None) => {
                    brightness_temperature_or_nan(wavenumbers[channel], radiance(channel))
                }
            };
        }
    }
}

fn planck_or_nan(wavenumber: f64, kelvin: f64) -> f64 {
    if kelvin > 0.0 { planck(wavenumber, kelvin) } else { f64::NAN }
}

/// Places gathered into blocks of whole rows, so that a chunk is not decoded once for each of them.
fn runs(places: &[Option<usize>], row_length: usize, channels: usize) -> Vec<Run> {
    let row_length = row_length.max(1);
    let mut wanted: Vec<(usize, usize)> =
        places.iter().enumerate().filter_map(|(number, place)| Some((number, (*place)?))).collect();
    wanted.sort_by_key(|(_, place)| *place);
    let most = (BLOCK_VALUES / (row_length * channels).max(1)).max(1);
    let mut runs: Vec<Run> = Vec::new();
    for (number, place) in wanted {
        let row = place / row_length;
        match runs.last_mut().filter(|run| row <= run.rows.end && row < run.rows.start + most) {
            Some(run) => {
                run.rows.end = run.rows.end.max(row + 1);
                run.wanted.push((number, place));
            }
            None => runs.push(Run { rows: row..row + 1, wanted: vec![(number, place)] }),
        }
    }
    runs
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn neighbouring_rows_are_read_together_and_distant_ones_are_not() {
        let runs = runs(&[Some(5), None, Some(0), Some(9), Some(40)], 4, 10);
        let rows: Vec<_> = runs.iter().map(|run| run.rows.clone()).collect();
        assert_eq!(rows, [0..3, 10..11]);
        assert_eq!(runs[0].wanted, [(2, 0), (0, 5), (3, 9)]);
    }
}
