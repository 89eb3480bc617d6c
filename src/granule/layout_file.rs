//! A layout file: what the user says of files that do not say it themselves (TOML).

use serde::Deserialize;
use toml::Table;

use super::geolocation_fields::FIELDS;
use crate::system::{clean_text, near_names};

/// What a layout file says. What it leaves out is found as without one; what it says is believed.
#[derive(Debug, Clone, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct LayoutFile {
    /// The footprints' dimensions by name, the slowest first.
    pub footprint_dimensions: Option<Vec<String>>,
    /// Variables with the producer's word on quality; no others are taken for such.
    pub quality: Option<Vec<String>>,
    /// What to apodise by where spectra are not apodised.
    pub apodise: Option<ApodiseBy>,
    /// The bands; no others are taken where there are any.
    pub bands: Vec<BandEntry>,
    /// Fields of the geolocation, and under `<field>_unit` their units. An empty name means that
    /// the file has no such field.
    pub geolocation: std::collections::BTreeMap<String, String>,
    /// Which file it was, if it was one.
    #[serde(skip)]
    pub origin: Option<LayoutOrigin>,
}

/// Which file a layout was read from.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LayoutOrigin {
    /// The file's name, safe to show.
    pub name: String,
    /// BLAKE3 hash of its text, 64 hexadecimal digits.
    pub hash: String,
}

/// What a layout file says of a band.
#[derive(Debug, Clone, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct BandEntry {
    /// The variable: its path, or its last part where only one has it.
    pub variable: String,
    /// What to call the band.
    pub name: Option<String>,
    /// The unit of its values: of a spectral radiance, or of a temperature.
    pub unit: Option<String>,
    /// The variable of its spectral axis.
    pub axis: Option<String>,
    /// In place of a variable: where the first channel lies,
    pub axis_first: Option<f64>,
    /// and how far each is from the one before.
    pub axis_step: Option<f64>,
    /// The unit of that variable, or of these numbers.
    pub axis_unit: Option<String>,
    /// The dimension that counts channels, where the axis does not tell.
    pub axis_dimension: Option<String>,
    /// How its spectra are apodised.
    pub apodisation: Option<String>,
    /// The variable with its noise; an empty name means that the file has none.
    pub noise: Option<String>,
    /// The unit of that variable.
    pub noise_unit: Option<String>,
    /// The temperature of the scene that a noise in K is given for, K.
    pub noise_temperature: Option<f64>,
    /// Channels, counted from 0 in the file's order, that no layer may use.
    pub bad_channels: Option<Vec<usize>>,
}

/// A way of apodising spectra.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum ApodiseBy {
    /// The running mean over three channels.
    Hamming,
}

const KEYS: [&str; 5] = ["footprint_dimensions", "quality", "apodise", "bands", "geolocation"];

const BAND_KEYS: [&str; 13] = [
    "variable",
    "name",
    "unit",
    "axis",
    "axis_first",
    "axis_step",
    "axis_unit",
    "axis_dimension",
    "apodisation",
    "noise",
    "noise_unit",
    "noise_temperature",
    "bad_channels",
];

impl LayoutFile {
    /// Reads the text of a layout file.
    ///
    /// # Errors
    /// In words that are safe to show: it is no TOML, a key is unknown (the nearest are named), a
    /// value is of the wrong type, a band names no variable.
    pub fn parse(text: &str) -> Result<Self, String> {
        let table: Table = text.parse().map_err(in_words)?;
        check_keys("", &table, &KEYS)?;
        if let Some(geolocation) = table.get("geolocation").and_then(toml::Value::as_table) {
            let units = FIELDS.map(|field| format!("{}_unit", field.name));
            let names = FIELDS.iter().map(|field| field.name);
            let known: Vec<&str> = names.chain(units.iter().map(String::as_str)).collect();
            check_keys("geolocation", geolocation, &known)?;
        }
        let bands = table.get("bands").and_then(toml::Value::as_array);
        for band in bands.into_iter().flatten().filter_map(toml::Value::as_table) {
            check_keys("bands", band, &BAND_KEYS)?;
        }
        // From the text once more, for errors in it are told with their line.
        let layout: Self = toml::from_str(text).map_err(in_words)?;
        match layout.bands.iter().position(|band| band.variable.is_empty()) {
            Some(place) => Err(format!("band {} says no `variable`", place + 1)),
            None => Ok(layout),
        }
    }

    /// Reads the text of the layout file that is called `name`.
    ///
    /// # Errors
    /// As [`Self::parse`].
    pub fn parse_named(name: &str, text: &str) -> Result<Self, String> {
        let hash = blake3::hash(text.as_bytes()).to_hex().to_string();
        let origin = Some(LayoutOrigin { name: clean_text(name), hash });
        Ok(Self { origin, ..Self::parse(text)? })
    }

    /// The variable and the unit that are said of a field of the geolocation.
    pub(super) fn field(&self, name: &str) -> (Option<&str>, Option<&str>) {
        let said = |key: &str| self.geolocation.get(key).map(String::as_str);
        (said(name), said(&format!("{name}_unit")))
    }
}

fn in_words(error: toml::de::Error) -> String {
    error.to_string().trim_end().lines().map(clean_text).collect::<Vec<_>>().join("\n")
}

fn check_keys(within: &str, table: &Table, known: &[&str]) -> Result<(), String> {
    let Some(unknown) = table.keys().find(|key| !known.contains(&key.as_str())) else {
        return Ok(());
    };
    let whole = match within {
        "" => clean_text(unknown),
        within => format!("{within}.{}", clean_text(unknown)),
    };
    let near = near_names(unknown, known.iter().copied());
    Err(match near.is_empty() {
        true => format!("unknown key `{whole}`; there are {}", known.join(", ")),
        false => format!("unknown key `{whole}`; did you mean {}?", near.join(" or ")),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_empty_file_says_nothing() {
        assert_eq!(LayoutFile::parse("# nothing\n").unwrap(), LayoutFile::default());
    }

    #[test]
    fn every_key_is_understood() {
        let text = r#"
            footprint_dimensions = ["line", "position"]
            quality = ["scene_quality"]
            apodise = "hamming"
            [[bands]]
            variable = "counts"
            name = "longwave"
            unit = "mW m-2 sr-1 (cm-1)-1"
            axis = "place"
            axis_first = 650.0
            axis_step = 0.25
            axis_unit = "cm-1"
            axis_dimension = "channel"
            apodisation = "none"
            noise = "spread"
            noise_unit = "mW m-2 sr-1 (cm-1)-1"
            noise_temperature = 250.0
            bad_channels = [0, 5]
            [geolocation]
            lat = "y"
            lat_unit = "degrees_north"
            land = ""
        "#;
        let layout = LayoutFile::parse(text).unwrap();
        assert_eq!(layout.apodise, Some(ApodiseBy::Hamming));
        assert_eq!(layout.bands[0].bad_channels, Some(vec![0, 5]));
        assert_eq!(layout.bands[0].axis_dimension.as_deref(), Some("channel"));
        assert_eq!(layout.field("lat"), (Some("y"), Some("degrees_north")));
        assert_eq!(layout.field("land"), (Some(""), None));
        assert_eq!(layout.field("lon"), (None, None));
        for key in KEYS.iter().chain(&BAND_KEYS) {
            assert!(text.contains(key), "{key} is not tried here");
        }
    }

    #[test]
    fn unknown_keys_are_refused_with_near_names() {
        let refused = |text: &str| LayoutFile::parse(text).unwrap_err();
        assert_eq!(
            refused("apodize = \"hamming\""),
            "unknown key `apodize`; did you mean apodise?"
        );
        let band = refused("[[bands]]\nvariable = \"r\"\naxs_unit = \"cm-1\"\n");
        assert!(band.starts_with("unknown key `bands.axs_unit`; did you mean axis_unit"), "{band}");
        let field = refused("[geolocation]\nlatitude = \"y\"\n");
        assert!(
            field.starts_with("unknown key `geolocation.latitude`; did you mean lat"),
            "{field}"
        );
        assert!(refused("[x]").contains("there are footprint_dimensions"));
    }

    #[test]
    fn mistakes_are_told_with_their_line() {
        let error = LayoutFile::parse("quality = [\"a\"]\nbands = 3\n").unwrap_err();
        assert!(error.contains("line 2"), "{error}");
        let error = LayoutFile::parse("apodise = \"hanning\"\n").unwrap_err();
        assert!(error.contains("hamming"), "{error}");
        let error = LayoutFile::parse("[[bands]]\nunit = \"K\"\n").unwrap_err();
        assert_eq!(error, "band 1 says no `variable`");
    }
}
