//! What a file says of the noise of its bands.

use super::band::Quantity;
use super::find_bands::quantity_of_unit;
use super::footprint_dimensions::FootprintDimensions;
use super::layout::{Layout, Role};
use super::named_variable::named_variable;
use super::problem::Problem;
use super::truth::is_truth;
use crate::netcdf_files::{FileIndex, Variable};

/// The noise of a band: a standard deviation for each channel, for some files in each detector.
#[derive(Debug, Clone, PartialEq)]
pub struct Noise {
    /// The variable's path in the file.
    pub variable: String,
    /// Its unit as in the file or the layout file.
    pub unit_text: String,
    /// That unit; perhaps of the other quantity than the band's.
    pub quantity: Quantity,
    /// The temperature, K, of the scene that a noise in K is given for, where that is known.
    pub scene: Option<f64>,
    /// The footprint dimensions that it differs along, by their places; none where it is the same
    /// for all footprints.
    pub along: Vec<usize>,
    pub(super) place: usize,
    pub(super) layout: Layout,
}

/// Where the noise of a band is looked for.
pub struct NoiseSearch<'a> {
    pub index: &'a FileIndex,
    /// The band's variable, as a place in the file's list.
    pub band: usize,
    /// Its spectral dimension.
    pub spectral: usize,
    pub quantity: &'a Quantity,
    pub dimensions: &'a FootprintDimensions,
}

/// Parts of names that speak of noise.
const NAME_PARTS: [&str; 5] = ["nedn", "nedt", "nesr", "nedr", "noise"];

/// Attributes with the temperature of the scene, K.
const SCENE_ATTRIBUTES: [&str; 4] =
    ["reference_temperature", "scene_temperature", "reference_scene_temperature", "temperature"];

/// The temperature of the scene that noise is mostly given for, K. Common practice.
const USUAL_SCENE: f64 = 280.0;

/// Scenes that instruments are tested with, K.
const SCENES: std::ops::RangeInclusive<f64> = 150.0..=400.0;

/// A number before a K in a text, as in `NEdT at 280 K`.
fn kelvin_in(text: &str) -> Option<f64> {
    let spaced = text.replace([',', ';', '(', ')', '='], " ");
    let words: Vec<&str> = spaced.split_whitespace().collect();
    let joined = words.iter().filter_map(|word| word.strip_suffix('K'));
    let apart = words.windows(2).filter(|pair| pair[1] == "K").map(|pair| pair[0]);
    joined
        .chain(apart)
        .filter_map(|number| number.parse().ok())
        .find(|kelvin| SCENES.contains(kelvin))
}

/// What speaks for a variable being noise; the earlier the surer.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Evidence {
    StandardName,
    Name,
}

impl NoiseSearch<'_> {
    /// The noise that the file gives, if any.
    pub fn find(&self, problems: &mut Vec<Problem>) -> Option<Noise> {
        let band = &self.index.variables[self.band];
        let candidates = self.index.variables.iter().enumerate().filter_map(|(place, variable)| {
            let (layout, along) =
                self.layout(variable).filter(|_| place != self.band && !is_truth(variable))?;
            let evidence = self.evidence(variable)?;
            let elsewhere = variable.group != band.group;
            Some(((evidence, elsewhere, place), (place, layout, along)))
        });
        let ((evidence, ..), (place, layout, along)) =
            candidates.min_by_key(|(order, _)| *order)?;
        let variable = &self.index.variables[place];
        let unit_text = variable.text("units").unwrap_or_default();
        match quantity_of_unit(&unit_text) {
            Ok(quantity) => {
                let scene = self.scene(variable, &quantity, None, problems);
                if evidence == Evidence::Name {
                    let what = format!("`{}` is taken for its noise by name", variable.path);
                    problems.push(Problem::guess(&what, &band.path, "a layout file would say it"));
                }
                let variable = variable.path.clone();
                Some(Noise { variable, unit_text, quantity, scene, along, place, layout })
            }
            Err(reason) => {
                let what = format!("its noise `{}` cannot be used: {reason}", variable.path);
                problems.push(Problem::missing(&what, &band.path, "noise is taken as unknown"));
                None
            }
        }
    }

    /// The noise by the name that the layout file gives.
    ///
    /// # Errors
    /// There is no such variable, or it is no noise of this band; in words.
    pub fn said(
        &self,
        name: &str,
        unit: Option<&str>,
        scene: Option<f64>,
        problems: &mut Vec<Problem>,
    ) -> Result<Noise, String> {
        let place = named_variable(self.index, name)?;
        let variable = &self.index.variables[place];
        let (layout, along) = self.layout(variable).ok_or_else(|| {
            format!(
                "`{}` does not lie over the channels, or over footprints as well",
                variable.path
            )
        })?;
        let unit_text = match unit {
            Some(unit) => unit.to_owned(),
            None => variable.text("units").unwrap_or_default(),
        };
        let quantity = quantity_of_unit(&unit_text)?;
        let scene = self.scene(variable, &quantity, scene, problems);
        let variable = variable.path.clone();
        Ok(Noise { variable, unit_text, quantity, scene, along, place, layout })
    }

    /// The temperature of the scene that a noise in K belongs to: said, given by an attribute, or
    /// mentioned in the description. A band of radiances needs one, and takes the usual one as a guess.
    fn scene(
        &self,
        variable: &Variable,
        quantity: &Quantity,
        said: Option<f64>,
        problems: &mut Vec<Problem>,
    ) -> Option<f64> {
        if matches!(quantity, Quantity::Radiance(_)) {
            return None;
        }
        let number = |name: &&str| variable.attribute(name).and_then(|value| value.number());
        let attribute = SCENE_ATTRIBUTES.iter().find_map(number);
        let words = ["long_name", "comment", "description"].iter();
        let mentioned =
            || words.filter_map(|name| variable.text(name)).find_map(|text| kelvin_in(&text));
        let found = said.or(attribute).or_else(mentioned);
        let found = found.filter(|kelvin| SCENES.contains(kelvin));
        if found.is_some() || matches!(self.quantity, Quantity::BrightnessTemperature(_)) {
            return found;
        }
        let what = format!(
            "its noise `{}` is in K without the temperature of a scene; taken as {USUAL_SCENE} K",
            variable.path
        );
        let path = &self.index.variables[self.band].path;
        problems.push(Problem::guess(&what, path, "a layout file can say noise_temperature"));
        Some(USUAL_SCENE)
    }

    /// How a variable lies over the channels and some of the footprints' dimensions.
    fn layout(&self, variable: &Variable) -> Option<(Layout, Vec<usize>)> {
        let spectral = &self.index.dimensions[self.spectral];
        let role = |&dimension: &usize| {
            let own = &self.index.dimensions[dimension];
            let alike = own.name == spectral.name && own.length == spectral.length;
            if dimension == self.spectral || alike {
                return Some(Role::Spectral);
            }
            let place = self.dimensions.place_of(self.index, dimension);
            place.map(|(place, _)| Role::Footprint(place))
        };
        let roles: Vec<Role> = variable.dimensions.iter().map(role).collect::<Option<_>>()?;
        let along = roles.iter().filter_map(|role| match role {
            Role::Footprint(place) => Some(*place),
            Role::Spectral => None,
        });
        let along: Vec<usize> = along.collect();
        let twice = roles.iter().enumerate().any(|(place, role)| roles[..place].contains(role));
        let fits = variable.kind.is_number() && along.len() + 1 == roles.len() && !twice;
        fits.then(|| (Layout::new(roles, self.index.lengths(variable)), along))
    }

    fn evidence(&self, variable: &Variable) -> Option<Evidence> {
        let standard_name = variable.text("standard_name").unwrap_or_default();
        if !standard_name.is_empty() {
            // A modifier behind the name of the quantity (CF conventions, appendix C).
            let says_so = standard_name.split_whitespace().nth(1) == Some("standard_error");
            return says_so.then_some(Evidence::StandardName);
        }
        let name = variable.name.to_lowercase();
        let long_name = variable.text("long_name").unwrap_or_default().to_lowercase();
        let says_so = NAME_PARTS.iter().any(|part| name.contains(part))
            || long_name.replace('-', " ").contains("noise equivalent");
        says_so.then_some(Evidence::Name)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn temperatures_of_scenes_are_found_in_descriptions() {
        for text in ["NEdT at 250 K", "noise (250K scene)", "scene=250 K, 1 sigma"] {
            assert_eq!(kelvin_in(text), Some(250.0), "{text}");
        }
        for text in ["noise in K", "0.1 K", "NEdT", "K 250"] {
            assert_eq!(kelvin_in(text), None, "{text}");
        }
    }
}
