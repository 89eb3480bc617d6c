//! What other files lend to a granule, and how its users get it.

use std::ops::Range;
use std::path::Path;

use super::band::Band;
use super::error::GranuleError;
use super::footprints::FootprintGrid;
use super::geolocation::{Geolocation, Origin, Over};
use super::geolocation_fields::FIELDS;
use super::granule_file::{BandSource, Granule};
use super::layout_file::LayoutOrigin;
use super::lent::{Calculated, CalculatedSearch, Lender};
use super::opening::Opening;
use super::problem::Problem;
use crate::netcdf_files::FileReader;
use crate::system::clean_text;

/// Opens the files that lend to the granule at `path` and takes from them the fields that it lacks.
///
/// # Errors
/// A file that is there cannot be read, or cannot be joined.
pub fn lenders(
    how: &Opening,
    path: &Path,
    grid: &FootprintGrid,
    geolocation: &mut Geolocation,
    problems: &mut Vec<Problem>,
) -> Result<Vec<Lender>, GranuleError> {
    let mut lenders = Vec::new();
    for pattern in &how.with {
        let refused = |reason: String| GranuleError::not_usable(pattern.path(), reason);
        let Some(file) = pattern.file_for(path).map_err(refused)? else {
            let shown = pattern.path().to_string_lossy();
            let what = "there is no file that lends to this granule";
            problems.push(Problem::refused(what, &shown, "its fields are missing"));
            continue;
        };
        if file.canonicalize().ok() == path.canonicalize().ok() {
            let shown = file.to_string_lossy();
            problems.push(Problem::refused("is the granule itself", &shown, "it lends nothing"));
            continue;
        }
        let reader = FileReader::open(&how.program, &file, &how.limits)?;
        let mut own = Vec::new();
        let lender = Lender::join(reader, grid, geolocation, how.within, &mut own)?;
        lend(&lender, lenders.len(), geolocation, &mut own)?;
        problems.extend(own.into_iter().map(|problem| of_lender(problem, &lender)));
        lenders.push(lender);
    }
    Ok(lenders)
}

fn lend(
    lender: &Lender,
    number: usize,
    geolocation: &mut Geolocation,
    problems: &mut Vec<Problem>,
) -> Result<(), GranuleError> {
    // Fields that are missing everywhere would only keep others from being taken or computed.
    if lender.matched() == 0 {
        return Ok(());
    }
    for field in &FIELDS {
        if geolocation.field(field.name).is_some() {
            continue;
        }
        if let Some((values, mut source)) = lender.field(field, problems)? {
            source.origin = Origin::Lent(number);
            geolocation.set(values, source);
        }
    }
    Ok(())
}

fn of_lender(problem: Problem, lender: &Lender) -> Problem {
    let where_ = match problem.where_.is_empty() {
        true => lender.name(),
        false => format!("{} in {}", problem.where_, lender.name()),
    };
    Problem { where_, ..problem }
}

/// For each band the calculated clear-sky spectra: in the granule's own file, or in the first that
/// lends them.
///
/// # Errors
/// A file cannot be read any more.
pub fn calculated(
    over: Over<'_>,
    bands: &[Band],
    sources: &[BandSource],
    lenders: &[Lender],
    problems: &mut Vec<Problem>,
) -> Result<Vec<Option<Calculated>>, GranuleError> {
    let measured: Vec<usize> = sources.iter().map(|source| source.variable).collect();
    let for_band = |band: &Band| {
        let own = CalculatedSearch {
            reader: over.reader,
            dimensions: over.dimensions,
            band,
            measured: &measured,
            lender: None,
        };
        if let Some(found) = own.find(problems)? {
            return Ok(Some(found));
        }
        let usable = lenders.iter().enumerate().filter(|(_, lender)| lender.matched() > 0);
        for (number, lender) in usable {
            let search = CalculatedSearch {
                reader: &lender.reader,
                dimensions: &lender.dimensions,
                measured: &[],
                lender: Some(number),
                ..own
            };
            let mut noticed = Vec::new();
            let found = search.find(&mut noticed)?;
            problems.extend(noticed.into_iter().map(|problem| of_lender(problem, lender)));
            if found.is_some() {
                return Ok(found);
            }
        }
        Ok(None)
    };
    bands.iter().map(for_band).collect()
}

impl Granule {
    /// The files that lend fields to it, in the order in which they were named.
    pub fn lenders(&self) -> &[Lender] {
        &self.lenders
    }

    /// Where the calculated clear-sky spectra of a band are, if there are any.
    pub fn calculated(&self, band: usize) -> Option<&Calculated> {
        self.calculated.get(band)?.as_ref()
    }

    /// The clear-sky spectra that a model calculated for some footprints in a band, one after another
    /// with all channels of each in the band's order: `footprints.len() * channels` values in the unit
    /// and quantity of [`Granule::read_spectrum`] (mW m-2 sr-1 (cm-1)-1 or K), apodised alike, missing
    /// as NaN. Nothing where neither the granule nor a file that lends has any. They are not kept in
    /// memory: ask for a few scan lines at a time.
    ///
    /// The temperature of the surface is [`Geolocation::surface_temperature`].
    ///
    /// # Errors
    /// The file cannot be read.
    pub fn calculated_clear(
        &self,
        band: usize,
        footprints: Range<usize>,
    ) -> Result<Option<Vec<f64>>, GranuleError> {
        let Some(calculated) = self.calculated(band) else { return Ok(None) };
        let lender = calculated.lender.and_then(|number| self.lenders.get(number));
        let (reader, grid) = match lender {
            Some(lender) => (&lender.reader, &lender.grid),
            None => (&self.reader, &self.footprints),
        };
        let place = |footprint| match lender {
            Some(lender) => lender.how().place(footprint),
            None => Some(footprint),
        };
        let places: Vec<Option<usize>> = footprints.map(place).collect();
        calculated.at(reader, &self.bands[band], grid.row_length(), &places).map(Some)
    }

    /// The layout file that it was read with, if there was one.
    pub fn layout_origin(&self) -> Option<&LayoutOrigin> {
        self.layout.as_ref()
    }

    /// What was read beside the file, for ledgers and masks: the layout file with its content hash,
    /// and each lending file with its size, its content hash, how it was joined, and what it lent.
    /// The first call reads the lending files whole.
    ///
    /// # Errors
    /// One of them cannot be read, or is not the one that was opened.
    pub fn read_with(&self) -> Result<Vec<String>, GranuleError> {
        let words = |(number, lender): (usize, &Lender)| {
            let identity = lender.hash()?;
            let fields = self.lent_by(number).join(", ");
            let lent = if fields.is_empty() { "variables by name".to_owned() } else { fields };
            Ok(format!(
                "{} (blake3 {}, {} bytes), joined {}, {} of {} footprints; lends {lent}",
                lender.name(),
                identity.hash,
                identity.size,
                lender.how().label(),
                lender.matched(),
                self.footprints.count(),
            ))
        };
        let layout = self
            .layout
            .iter()
            .map(|layout| Ok(format!("layout file {} (blake3 {})", layout.name, layout.hash)));
        layout.chain(self.lenders.iter().enumerate().map(words)).collect()
    }

    /// What a lending file gives by itself: fields of the geolocation, and calculated spectra of
    /// bands.
    pub fn lent_by(&self, lender: usize) -> Vec<String> {
        let fields = self.geolocation.sources.iter();
        let fields = fields.filter(|source| source.origin == Origin::Lent(lender));
        let fields = fields.map(|source| source.field.to_owned());
        let bands = self.bands.iter().zip(&self.calculated);
        let bands = bands.filter_map(|(band, calculated)| {
            let here = calculated.as_ref()?.lender == Some(lender);
            here.then(|| format!("calculated spectra of {}", clean_text(&band.name)))
        });
        fields.chain(bands).collect()
    }
}
