//! A granule: an open file whose parts are understood.

use std::path::Path;
use std::sync::{Arc, OnceLock};

use super::band::{Band, Channel};
use super::channels::{NoChannel, channel_near, channels_between};
use super::cube::Cube;
use super::decoder::Decoder;
use super::error::GranuleError;
use super::footprint_dimensions::FootprintDimensions;
use super::footprint_variables::FootprintVariable;
use super::footprints::FootprintGrid;
use super::geolocation::Geolocation;
use super::identity::Identity;
use super::layout::Layout;
use super::layout_file::{BandEntry, LayoutOrigin};
use super::lent::{Calculated, Lender};
use super::opening::Opening;
use super::passing::PassingSlabs;
use super::problem::Problem;
use crate::netcdf_files::{FileIndex, FileReader, ReadError, ReadLimits, ReaderProgram, Variable};
use crate::system::clean_text;

/// A file of spectra over footprints. Many threads may use it at once.
#[derive(Debug)]
pub struct Granule {
    pub(super) reader: FileReader,
    pub(super) footprints: FootprintGrid,
    pub(super) dimensions: FootprintDimensions,
    pub(super) bands: Vec<Band>,
    pub(super) sources: Vec<BandSource>,
    pub(super) geolocation: Geolocation,
    pub(super) variables: Vec<FootprintVariable>,
    pub(super) layout: Option<LayoutOrigin>,
    pub(super) lenders: Vec<Lender>,
    /// For each band.
    pub(super) calculated: Vec<Option<Calculated>>,
    pub(super) problems: Vec<Problem>,
    pub(super) cube: Arc<Cube>,
    pub(super) passing: PassingSlabs,
    pub(super) identity: OnceLock<Identity>,
}

/// Where a band's values come from.
#[derive(Debug)]
pub(super) struct BandSource {
    pub variable: usize,
    pub layout: Layout,
    /// The channels given up as bad, before apodising took those beside them as well.
    pub bad: Vec<bool>,
    /// The spectral dimension, as a place in the file's list.
    pub spectral: usize,
    /// What the layout file says of the band.
    pub said: BandEntry,
}

impl Granule {
    /// Opens a file and understands it. No spectra are read.
    ///
    /// # Errors
    /// The file cannot be read, or holds no spectra that can be used; the message says what was
    /// looked for and what was found.
    pub fn open(
        program: &ReaderProgram,
        path: &Path,
        limits: &ReadLimits,
    ) -> Result<Self, GranuleError> {
        Opening { limits: *limits, ..Opening::new(program.clone()) }.open(path)
    }

    /// The file as it was named.
    pub fn path(&self) -> &Path {
        self.reader.path()
    }

    /// The file's name, safe to show.
    pub fn name(&self) -> String {
        let name = self.path().file_name().map(|name| name.to_string_lossy().into_owned());
        clean_text(&name.unwrap_or_default())
    }

    /// The file's name without its extension, safe to show.
    pub fn stem(&self) -> String {
        let stem = self.path().file_stem().map(|stem| stem.to_string_lossy().into_owned());
        clean_text(&stem.unwrap_or_default())
    }

    /// The footprints' dimensions.
    pub fn footprints(&self) -> &FootprintGrid {
        &self.footprints
    }

    /// The bands, in the file's order.
    pub fn bands(&self) -> &[Band] {
        &self.bands
    }

    /// Place, time and angles of the footprints.
    pub fn geolocation(&self) -> &Geolocation {
        &self.geolocation
    }

    /// The variables of the footprints, geolocation and quality among them.
    pub fn variables(&self) -> &[FootprintVariable] {
        &self.variables
    }

    /// What is missing, guessed or odd, as far as opening shows it; [`Cube::notes`] tells the rest.
    pub fn problems(&self) -> &[Problem] {
        &self.problems
    }

    /// Everything in the file but its values, for those who list it.
    pub fn index(&self) -> &FileIndex {
        self.reader.index()
    }

    /// A text attribute of the whole file, as it is there.
    pub fn global_text(&self, name: &str) -> Option<String> {
        self.index().global_attribute(name)?.text()
    }

    /// The file's title, safe to show.
    pub fn title(&self) -> Option<String> {
        self.global_text("title").map(|text| clean_text(&text))
    }

    /// What the file says it was made from, safe to show.
    pub fn source(&self) -> Option<String> {
        self.global_text("source").map(|text| clean_text(&text))
    }

    /// The file's size in bytes when it was opened.
    pub fn file_size(&self) -> u64 {
        self.reader.stamp().size()
    }

    /// The variable of a band.
    pub fn band_variable(&self, band: usize) -> &Variable {
        &self.index().variables[self.sources[band].variable]
    }

    /// An error if the file is not the one that was opened.
    pub fn check_unchanged(&self) -> Result<(), GranuleError> {
        Ok(self.reader.check_unchanged()?)
    }

    /// Size and content hash. The first call reads the whole file, later ones cost nothing.
    pub fn hash(&self) -> Result<&Identity, GranuleError> {
        if let Some(identity) = self.identity.get() {
            return Ok(identity);
        }
        self.check_unchanged()?;
        let limit = self.reader.limit();
        let identity = Identity::of(self.path(), limit)
            .map_err(|error| ReadError::of_slow_system(self.path(), &error, limit))?;
        self.check_unchanged()?;
        Ok(self.identity.get_or_init(|| identity))
    }

    /// The same, once [`Self::hash`] has been asked for.
    pub fn identity(&self) -> Option<&Identity> {
        self.identity.get()
    }

    /// Reads a variable of the footprints: one number for each, missing as NaN. `name` is its path,
    /// or its last part where that is the only one of its kind; the granule's own variables go before
    /// those that are lent to it.
    pub fn read_variable(&self, name: &str) -> Result<Vec<f64>, GranuleError> {
        let (lender, found) = self.named(name).ok_or_else(|| GranuleError::NoVariable {
            path: self.path().to_owned(),
            name: name.to_owned(),
            nearest: self.all_variables().map(|variable| variable.name.clone()).collect(),
        })?;
        if let Some(lender) = lender {
            return Ok(lender.read(found)?);
        }
        let variable = &self.index().variables[found.place];
        let values = Decoder::of(variable).decode_all(&self.reader.read_all(variable)?);
        let spread = self.dimensions.spread(self.index(), variable);
        Ok(spread.map_or(Vec::new(), |spread| spread.over(&self.footprints, values)))
    }

    /// A variable of the footprints by its path, or by its last part where only one has it; the
    /// granule's own before those that are lent.
    pub fn variable(&self, name: &str) -> Option<&FootprintVariable> {
        self.named(name).map(|(_, variable)| variable)
    }

    /// All variables of the footprints, the granule's own and those that are lent to it.
    pub fn all_variables(&self) -> impl Iterator<Item = &FootprintVariable> {
        self.variables.iter().chain(self.lenders.iter().flat_map(Lender::variables))
    }

    fn named(&self, name: &str) -> Option<(Option<&Lender>, &FootprintVariable)> {
        let path = name.trim_start_matches('/');
        let own = named_among(&self.variables, path).map(|variable| (None, variable));
        own.or_else(|| {
            self.lenders
                .iter()
                .find_map(|lender| Some((Some(lender), named_among(lender.variables(), path)?)))
        })
    }

    /// The valid channel nearest to a wavenumber (cm-1), within 0.6 of the spacing there.
    pub fn channel_near(&self, wavenumber: f64) -> Result<Channel, NoChannel> {
        channel_near(&self.bands, wavenumber)
    }

    /// All valid channels from `low` to `high` (cm-1), by rising wavenumber.
    pub fn channels_between(&self, low: f64, high: f64) -> Vec<Channel> {
        channels_between(&self.bands, low, high)
    }
}

/// A variable by its path, or by its last part where only one has it.
fn named_among<'v>(
    variables: &'v [FootprintVariable],
    path: &str,
) -> Option<&'v FootprintVariable> {
    if let Some(found) = variables.iter().find(|variable| variable.name == path) {
        return Some(found);
    }
    let last = |variable: &&FootprintVariable| variable.name.rsplit('/').next() == Some(path);
    let mut found = variables.iter().filter(last);
    found.next().filter(|_| found.next().is_none())
}
