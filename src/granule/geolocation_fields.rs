//! The fields of the geolocation, and how files call them.

use crate::netcdf_files::Variable;
use crate::units::TemperatureUnit;

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
/// What sort of number a field is.
pub enum Kind {
    Latitude,
    Longitude,
    Angle,
    Share,
    Time,
    /// In K.
    Temperature,
}

/// What is known about a field: how files call it, and what its absence costs.
pub struct Field {
    pub name: &'static str,
    pub kind: Kind,
    /// The surest first.
    pub standard_names: &'static [&'static str],
    /// Names that producers use, compared in lower case without underscores.
    pub usual_names: &'static [&'static str],
    /// What its absence costs; empty where hardly any file has it and nobody misses it.
    pub cost: &'static str,
}

pub const FIELDS: [Field; 12] = [
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
    Field {
        name: "surface_temperature",
        kind: Kind::Temperature,
        standard_names: &[
            "surface_temperature",
            "sea_surface_skin_temperature",
            "sea_surface_subskin_temperature",
            "sea_surface_temperature",
            "sea_surface_foundation_temperature",
        ],
        usual_names: &[
            "surfacetemperature",
            "skintemperature",
            "tskin",
            "skt",
            "tsurf",
            "seasurfacetemperature",
            "sst",
            "landsurfacetemperature",
        ],
        cost: "",
    },
    Field {
        name: "snow",
        kind: Kind::Share,
        standard_names: &["surface_snow_area_fraction", "surface_snow_binary_mask"],
        usual_names: &["snow", "snowfraction", "snowfrac", "snowcover"],
        cost: "",
    },
    Field {
        name: "sea_ice",
        kind: Kind::Share,
        standard_names: &["sea_ice_area_fraction", "sea_ice_binary_mask"],
        usual_names: &["seaice", "seaicefraction", "seaicecover", "icefraction"],
        cost: "",
    },
    Field {
        name: "cloud_amount",
        kind: Kind::Share,
        standard_names: &["cloud_area_fraction", "cloud_binary_mask"],
        usual_names: &["cloudamount", "cloudfraction", "cloudfrac", "cloudcover"],
        cost: "",
    },
];

/// What speaks for a variable being a field; the earlier the surer.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Evidence {
    /// With its place among those that the field may have.
    StandardName(usize),
    Units,
    Name,
}

/// What speaks for a variable being a field; nothing where it is something else.
pub fn evidence(field: &Field, variable: &Variable) -> Option<Evidence> {
    let standard_name = variable.text("standard_name").unwrap_or_default();
    if let Some(place) = field.standard_names.iter().position(|name| *name == standard_name) {
        return Some(Evidence::StandardName(place));
    }
    if !standard_name.is_empty() {
        return None;
    }
    let as_written = variable.text("units").unwrap_or_default();
    let units = as_written.to_lowercase().replace('_', "");
    let units_say = match field.kind {
        Kind::Latitude => {
            ["degreesnorth", "degreenorth", "degreesn", "degreen"].contains(&units.as_str())
        }
        Kind::Longitude => {
            ["degreeseast", "degreeeast", "degreese", "degreee"].contains(&units.as_str())
        }
        Kind::Time => units.contains(" since "),
        // A unit of temperature alone says too little, but without one it is none.
        Kind::Temperature if TemperatureUnit::parse(&as_written).is_err() => return None,
        Kind::Angle | Kind::Share | Kind::Temperature => false,
    };
    let plain: String = variable.name.to_lowercase().replace('_', "");
    if field.usual_names.contains(&plain.as_str()) {
        return Some(if units_say { Evidence::Units } else { Evidence::Name });
    }
    units_say.then_some(Evidence::Units)
}
