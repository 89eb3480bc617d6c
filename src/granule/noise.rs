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
    /// That unit: the same quantity as the band's.
    pub quantity: Quantity,
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
        match self.quantity_of(&unit_text) {
            Ok(quantity) => {
                if evidence == Evidence::Name {
                    let what = format!("`{}` is taken for its noise by name", variable.path);
                    problems.push(Problem::guess(&what, &band.path, "a layout file would say it"));
                }
                let variable = variable.path.clone();
                Some(Noise { variable, unit_text, quantity, along, place, layout })
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
    pub fn said(&self, name: &str, unit: Option<&str>) -> Result<Noise, String> {
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
        let quantity = self.quantity_of(&unit_text)?;
        Ok(Noise { variable: variable.path.clone(), unit_text, quantity, along, place, layout })
    }

    /// Noise is of use in the quantity that it is the noise of: a noise in K belongs to one scene
    /// temperature, which files do not give.
    fn quantity_of(&self, unit: &str) -> Result<Quantity, String> {
        let quantity = quantity_of_unit(unit)?;
        match std::mem::discriminant(&quantity) == std::mem::discriminant(self.quantity) {
            true => Ok(quantity),
            false => {
                Err(format!("{} where the band is {}", quantity.label(), self.quantity.label()))
            }
        }
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
