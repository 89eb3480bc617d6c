//! What a mask takes over from its granule, as plain data.

/// One band's channels.
#[derive(Debug, Clone, PartialEq)]
pub struct MaskBand {
    /// The band's name; part of variable names where there are several bands.
    pub name: String,
    /// The spectral dimension's name in the granule.
    pub dimension: String,
    /// The name that the granule gives the variable of wavenumbers, if it is one of wavenumbers.
    pub axis_name: Option<String>,
    /// cm-1, in the granule's order.
    pub wavenumbers: Vec<f64>,
    /// How the spectra that were judged are apodised, in words; none where nobody knows.
    pub apodisation: Option<String>,
}

/// What a mask takes over from its granule.
#[derive(Debug, Clone, PartialEq)]
pub struct MaskSource {
    /// The granule's file name.
    pub name: String,
    /// Bytes.
    pub size: u64,
    /// The BLAKE3 hash of the file's bytes, in hexadecimal.
    pub hash: String,
    /// The granule's own title, if it has one.
    pub title: Option<String>,
    /// What the granule says of its origin.
    pub source: Option<String>,
    /// The granule's own history, to be kept.
    pub history: Option<String>,
    /// The footprint dimensions in the granule's order: name and length.
    pub footprints: Vec<(String, usize)>,
    /// Its bands.
    pub bands: Vec<MaskBand>,
    /// Degrees north, one per footprint; NaN is missing.
    pub latitude: Option<Vec<f64>>,
    /// Degrees east, one per footprint; NaN is missing.
    pub longitude: Option<Vec<f64>>,
    /// Seconds since 1970-01-01T00:00:00Z, leap seconds not counted; NaN is missing.
    pub time: Option<Vec<f64>>,
    /// The layout file and the lending files that the granule was read with, in words.
    pub read_with: Vec<String>,
    /// What was missing or guessed when the granule was read, in words.
    pub problems: Vec<String>,
}

impl MaskSource {
    /// How many footprints there are.
    pub fn footprint_count(&self) -> usize {
        self.footprints.iter().map(|(_, length)| length).product()
    }
}
