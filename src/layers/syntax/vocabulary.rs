//! The words of the language, one table each.

use super::tree::{Around, Function, Judgement, OfCalculated, Quantity, Statistic};
use crate::layers::unit::LayerUnit;

/// A field of the geolocation that every granule may have, under the same name in every file.
#[derive(Debug, Clone, Copy)]
pub struct FriendlyName {
    /// As written in an expression.
    pub name: &'static str,
    /// Unit of its values.
    pub unit: LayerUnit,
    /// What it is, in a few words.
    pub meaning: &'static str,
}

/// The geolocation fields.
pub const FRIENDLY_NAMES: &[FriendlyName] = &[
    FriendlyName { name: "lat", unit: LayerUnit::Degree, meaning: "latitude, degrees north" },
    FriendlyName { name: "lon", unit: LayerUnit::Degree, meaning: "longitude, degrees east" },
    FriendlyName {
        name: "view_zenith",
        unit: LayerUnit::Degree,
        meaning: "zenith angle of the view, degrees",
    },
    FriendlyName {
        name: "view_azimuth",
        unit: LayerUnit::Degree,
        meaning: "azimuth angle of the view, degrees",
    },
    FriendlyName {
        name: "solar_zenith",
        unit: LayerUnit::Degree,
        meaning: "zenith angle of the sun, degrees",
    },
    FriendlyName {
        name: "solar_azimuth",
        unit: LayerUnit::Degree,
        meaning: "azimuth angle of the sun, degrees",
    },
    FriendlyName { name: "land", unit: LayerUnit::One, meaning: "land fraction, 0 to 1" },
    FriendlyName {
        name: "time",
        unit: LayerUnit::Time,
        meaning: "time, seconds since 1970-01-01 UTC without leap seconds",
    },
    FriendlyName {
        name: "surface_temperature",
        unit: LayerUnit::Kelvin,
        meaning: "temperature of the surface by another source, K",
    },
    FriendlyName { name: "snow", unit: LayerUnit::One, meaning: "share under snow, 0 to 1" },
    FriendlyName { name: "sea_ice", unit: LayerUnit::One, meaning: "share under sea ice, 0 to 1" },
    FriendlyName {
        name: "cloud_amount",
        unit: LayerUnit::One,
        meaning: "share under cloud by another source, 0 to 1",
    },
];

/// What is worked out from the geolocation fields, under the same names in every file.
pub const DERIVED_NAMES: &[FriendlyName] = &[
    FriendlyName {
        name: "day",
        unit: LayerUnit::Truth,
        meaning: "1 where the sun's zenith angle is below 85 degrees",
    },
    FriendlyName {
        name: "twilight",
        unit: LayerUnit::Truth,
        meaning: "1 where the sun's zenith angle is 85 to 90 degrees",
    },
    FriendlyName {
        name: "night",
        unit: LayerUnit::Truth,
        meaning: "1 where the sun's zenith angle is above 90 degrees",
    },
    FriendlyName {
        name: "glint_angle",
        unit: LayerUnit::Degree,
        meaning: "angle between the view and the sun's mirror image, degrees",
    },
    FriendlyName {
        name: "day_of_year",
        unit: LayerUnit::One,
        meaning: "days since the year began, 0 to 366, UTC",
    },
    FriendlyName {
        name: "season",
        unit: LayerUnit::One,
        meaning: "-1 in the depth of winter, 1 in the height of summer of the footprint's hemisphere",
    },
];

/// What a name followed by a parenthesis stands for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Callable {
    /// `bt`, `rad`.
    Spectral(Quantity),
    /// `planck`.
    Planck,
    /// `bt_clear`, `departure` and their like.
    Calculated(OfCalculated),
    /// `var`.
    Variable,
    /// Functions of numbers, and how many they take.
    Function(Function, Arity),
    /// Statistics of the footprints around one.
    Neighbourhood(Statistic, Around),
    /// What screening tests say.
    Judged(Judgement),
}

/// How many operands a function takes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Arity {
    /// Exactly one.
    One,
    /// Two or more.
    TwoOrMore,
}

/// Name, what it stands for, how it is written.
const CALLABLE: &[(&str, Callable, &str)] = &[
    ("bt", Callable::Spectral(Quantity::BrightnessTemperature), "bt(900)"),
    ("rad", Callable::Spectral(Quantity::Radiance), "rad(667.5)"),
    ("share_missing", Callable::Spectral(Quantity::MissingShare), "share_missing(650..2760)"),
    ("bt_clear", Callable::Calculated(OfCalculated::Clear), "bt_clear(900)"),
    ("departure", Callable::Calculated(OfCalculated::Departure), "departure(900)"),
    ("departure_bias", Callable::Calculated(OfCalculated::Bias), "departure_bias(900)"),
    ("cloud_affected", Callable::Calculated(OfCalculated::Affected), "cloud_affected(720)"),
    ("planck", Callable::Planck, "planck(280, 900)"),
    ("var", Callable::Variable, "var(\"name in the file\")"),
    ("min", Callable::Function(Function::Min, Arity::TwoOrMore), "min(a, b)"),
    ("max", Callable::Function(Function::Max, Arity::TwoOrMore), "max(a, b)"),
    ("abs", Callable::Function(Function::Abs, Arity::One), "abs(a)"),
    ("sqrt", Callable::Function(Function::Sqrt, Arity::One), "sqrt(a)"),
    ("ln", Callable::Function(Function::Ln, Arity::One), "ln(a)"),
    ("exp", Callable::Function(Function::Exp, Arity::One), "exp(a)"),
    ("missing", Callable::Function(Function::Missing, Arity::One), "missing(lat)"),
    ("sd3", Callable::Neighbourhood(Statistic::StandardDeviation, Around::Nine), "sd3(bt(900))"),
    ("mean3", Callable::Neighbourhood(Statistic::Mean, Around::Nine), "mean3(bt(900))"),
    ("min3", Callable::Neighbourhood(Statistic::Minimum, Around::Nine), "min3(bt(900))"),
    ("max3", Callable::Neighbourhood(Statistic::Maximum, Around::Nine), "max3(bt(900))"),
    ("range3", Callable::Neighbourhood(Statistic::Range, Around::Nine), "range3(bt(900))"),
    (
        "sd_cluster",
        Callable::Neighbourhood(Statistic::StandardDeviation, Around::Cluster),
        "sd_cluster(bt(900))",
    ),
    (
        "range_cluster",
        Callable::Neighbourhood(Statistic::Range, Around::Cluster),
        "range_cluster(bt(900))",
    ),
    ("doubt", Callable::Judged(Judgement::Doubt), "doubt(\"cloudy\")"),
    ("probability", Callable::Judged(Judgement::Probability), "probability(\"cloudy\")"),
    ("flag", Callable::Judged(Judgement::Flag), "flag(\"cloudy\")"),
    ("margin", Callable::Judged(Judgement::Margin), "margin(\"T01 gross window\")"),
];

/// Words that join and can't be names.
pub const JOINING_WORDS: &[&str] = &["and", "or", "not"];

/// What a name with a parenthesis stands for.
pub fn callable(name: &str) -> Option<Callable> {
    CALLABLE.iter().find(|(word, ..)| *word == name).map(|(_, callable, _)| *callable)
}

/// The name of a callable.
pub fn name_of(wanted: Callable) -> &'static str {
    CALLABLE.iter().find(|(_, callable, _)| *callable == wanted).map_or("", |(word, ..)| word)
}

/// How a callable is written, as an example.
pub fn example_of(name: &str) -> &'static str {
    CALLABLE.iter().find(|(word, ..)| *word == name).map_or("", |(.., example)| example)
}

/// The functions' names with an example each, for completion and documents.
pub fn functions() -> impl Iterator<Item = (&'static str, &'static str)> {
    CALLABLE.iter().map(|(name, _, example)| (*name, *example))
}

/// The function's name.
pub fn function_name(function: Function) -> &'static str {
    let arity = match function {
        Function::Min | Function::Max => Arity::TwoOrMore,
        _ => Arity::One,
    };
    name_of(Callable::Function(function, arity))
}
