//! The spectral dimensions of a mask and their wavenumbers.

use std::collections::BTreeSet;

use super::source::MaskBand;
use crate::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft, WriterError};

/// How one band's channels are named in the mask.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct ChannelAxisNames {
    pub(super) dimension: String,
    /// The variable of wavenumbers: the dimension's own (a coordinate), or another (auxiliary).
    pub(super) variable: String,
}

impl ChannelAxisNames {
    pub(super) fn is_coordinate(&self) -> bool {
        self.dimension == self.variable
    }
}

/// Names for all bands, in their order. Bands may share a dimension's name in the granule (in
/// groups of their own, say); in the mask each has its own. `taken` are names that are in use.
pub(super) fn axis_names(bands: &[MaskBand], taken: &BTreeSet<String>) -> Vec<ChannelAxisNames> {
    let mut taken = taken.clone();
    let mut names = Vec::new();
    for band in bands {
        let dimension = free_name(&band.dimension, &band.name, &mut taken);
        let wanted = band.axis_name.as_deref().unwrap_or(&band.dimension);
        // CF wants coordinate variables strictly monotonic, and none with the name of a dimension
        // that it does not describe.
        let coordinate =
            wanted == band.dimension && band.axis_name.is_some() && is_monotonic(&band.wavenumbers);
        let variable = if coordinate {
            dimension.clone()
        } else if band.axis_name.is_none() || wanted == band.dimension {
            free_name(&format!("{dimension}_wavenumber"), &band.name, &mut taken)
        } else {
            free_name(wanted, &band.name, &mut taken)
        };
        names.push(ChannelAxisNames { dimension, variable });
    }
    names
}

fn free_name(wanted: &str, band: &str, taken: &mut BTreeSet<String>) -> String {
    let mut name = wanted.to_owned();
    let mut number = 1;
    while !taken.insert(name.clone()) {
        name = match number {
            1 => format!("{wanted}_{band}"),
            more => format!("{wanted}_{band}_{more}"),
        };
        number += 1;
    }
    name
}

fn is_monotonic(values: &[f64]) -> bool {
    values.windows(2).all(|pair| pair[0] < pair[1])
        || values.windows(2).all(|pair| pair[0] > pair[1])
}

pub(super) fn define_axis(
    writer: &mut NetcdfWriter,
    band: &MaskBand,
    names: &ChannelAxisNames,
) -> Result<(), WriterError> {
    writer.dimension(&names.dimension, band.wavenumbers.len())?;
    let draft = VariableDraft::new(&names.variable, ValueKind::F64, &[&names.dimension])
        .attribute("long_name", format!("wavenumber of the channels of {}", band.name))
        .attribute("standard_name", "sensor_band_central_radiation_wavenumber")
        .attribute("units", "cm-1");
    let draft = match &band.apodisation {
        Some(words) => draft.attribute("apodization", words.as_str()),
        None => draft,
    };
    writer.variable(&draft)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn band(name: &str, dimension: &str, axis: Option<&str>, wavenumbers: &[f64]) -> MaskBand {
        MaskBand {
            name: name.to_owned(),
            dimension: dimension.to_owned(),
            axis_name: axis.map(str::to_owned),
            wavenumbers: wavenumbers.to_vec(),
            apodisation: None,
        }
    }

    fn names(bands: &[MaskBand]) -> Vec<(String, String)> {
        let taken = BTreeSet::from(["line".to_owned()]);
        let names = axis_names(bands, &taken);
        names.into_iter().map(|names| (names.dimension, names.variable)).collect()
    }

    fn pair(dimension: &str, variable: &str) -> (String, String) {
        (dimension.to_owned(), variable.to_owned())
    }

    #[test]
    fn names_of_the_granule_are_kept_where_they_can_be() {
        let rising = [600.0, 601.0, 602.0];
        let bands = [
            band("lw", "wnum_lw", Some("wnum_lw"), &rising),
            band("sw", "channel", Some("wavenumber"), &rising),
            band("mw", "lambda", None, &rising),
        ];
        assert_eq!(
            names(&bands),
            [
                pair("wnum_lw", "wnum_lw"),
                pair("channel", "wavenumber"),
                pair("lambda", "lambda_wavenumber")
            ]
        );
    }

    #[test]
    fn an_unsorted_axis_is_auxiliary_and_equal_names_part() {
        let unsorted = [600.0, 602.0, 601.0];
        let bands = [
            band("lw", "channel", Some("channel"), &unsorted),
            band("sw", "channel", Some("channel"), &[1.0, 2.0]),
            band("odd", "line", Some("line"), &[1.0, 2.0]),
        ];
        assert_eq!(
            names(&bands),
            [
                pair("channel", "channel_wavenumber"),
                pair("channel_sw", "channel_sw"),
                pair("line_odd", "line_odd")
            ]
        );
    }
}
