//! The fields of the geolocation, and how files call them.

use crate::netcdf_files::Variable;

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
/// What sort of number a field is.
pub enum Kind {
    Latitude,
    Longitude,
    Angle,
    Share,
    Time,
}

/// What is known about a field: how files call it, and what its absence costs.
pub struct Field {
    pub name: &'static str,
    pub kind: Kind,
    pub standard_names: &'static [&'static str],
    /// Names that producers use, compared in lower case without underscores.
    pub usual_names: &'static [&'static str],
    pub cost: &'static str,
}

pub const FIELDS: [Field; 8] = [
    Field {
        name: "lat",
        kind: Kind::Latitude,
        standard_names: &["latitude"],
        usual_names: &["lat", "latitude"],
        cost: "the map is drawn by array place, and neighbours are those in the array",
    },
    Field {
        name: "lon",
        kind: Kind::Longitude,
        standard_names: &["longitude"],
        usual_names: &["lon", "longitude", "long"],
        cost: "the map is drawn by array place, and neighbours are those in the array",
    },
    Field {
        name: "view_zenith",
        kind: Kind::Angle,
        standard_names: &["sensor_zenith_angle", "platform_zenith_angle"],
        usual_names: &[
            "satzen",
            "viewzenith",
            "satellitezenith",
            "sensorzenith",
            "satellitezenithangle",
        ],
        cost: "tests that allow for the slant of the view cannot run",
    },
    Field {
        name: "view_azimuth",
        kind: Kind::Angle,
        standard_names: &["sensor_azimuth_angle", "platform_azimuth_angle"],
        usual_names: &[
            "satazi",
            "viewazimuth",
            "satelliteazimuth",
            "sensorazimuth",
            "satelliteazimuthangle",
        ],
        cost: "sun glint cannot be told",
    },
    Field {
        name: "solar_zenith",
        kind: Kind::Angle,
        standard_names: &["solar_zenith_angle"],
        usual_names: &["solzen", "solarzenith", "sunzenith", "solarzenithangle"],
        cost: "day and night cannot be told apart",
    },
    Field {
        name: "solar_azimuth",
        kind: Kind::Angle,
        standard_names: &["solar_azimuth_angle"],
        usual_names: &["solazi", "solarazimuth", "sunazimuth", "solarazimuthangle"],
        cost: "sun glint cannot be told",
    },
    Field {
        name: "land",
        kind: Kind::Share,
        standard_names: &["land_area_fraction", "land_binary_mask"],
        usual_names: &["landfrac", "landfraction", "landmask", "land"],
        cost: "land and sea cannot be told apart",
    },
    Field {
        name: "time",
        kind: Kind::Time,
        standard_names: &["time"],
        usual_names: &["time", "obstime", "observationtime"],
        cost: "the time of a footprint is not shown",
    },
];

/// What speaks for a variable being a field; the earlier the surer.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Evidence {
    StandardName,
    Units,
    Name,
}

/// What speaks for a variable being a field; nothing where it is something else.
pub fn evidence(field: &Field, variable: &Variable) -> Option<Evidence> {
    let standard_name = variable.text("standard_name").unwrap_or_default();
    if field.standard_names.contains(&standard_name.as_str()) {
        return Some(Evidence::StandardName);
    }
    if !standard_name.is_empty() {
        return None;
    }
    let units = variable.text("units").unwrap_or_default().to_lowercase().replace('_', "");
    let units_say = match field.kind {
        Kind::Latitude => {
            ["degreesnorth", "degreenorth", "degreesn", "degreen"].contains(&units.as_str())
        }
        Kind::Longitude => {
            ["degreeseast", "degreeeast", "degreese", "degreee"].contains(&units.as_str())
        }
        Kind::Time => units.contains(" since "),
        Kind::Angle | Kind::Share => false,
    };
    let plain: String = variable.name.to_lowercase().replace('_', "");
    if field.usual_names.contains(&plain.as_str()) {
        return Some(if units_say { Evidence::Units } else { Evidence::Name });
    }
    units_say.then_some(Evidence::Units)
}
