//! Components of spectra in a campaign's folder, one netCDF file for each instrument.

use std::path::{Path, PathBuf};

use crate::granule::{Granule, Opening};
use crate::netcdf_files::{
    FileReader, NetcdfWriter, ReadError, Samples, VariableDraft, WriterError,
};
use crate::screening::unusual::{Basis, SavedBases, TrainingScores, instrument_shape};
use crate::system::{WriteError, clean_text, write_whole};

/// What the first attribute of the file says.
const FORMAT: &str = "radsieve basis 1";

/// Why saved components can't be used.
#[derive(Debug, thiserror::Error)]
pub enum BasisFileError {
    /// The file can't be read.
    #[error(transparent)]
    Read(#[from] ReadError),
    /// It is not what `train` writes.
    #[error("{file}: {what}; make it anew with `radsieve train`")]
    Senseless {
        /// The file.
        file: String,
        /// What is wrong with it.
        what: String,
    },
}

/// Where the components for a granule's instrument lie in a campaign's folder.
pub fn basis_path(folder: &Path, granule: &Granule) -> PathBuf {
    folder.join(format!("{}.basis.nc", instrument_shape(granule)))
}

/// The components for a granule's instrument, if the folder has some.
///
/// # Errors
/// The file is there and can't be read, or makes no sense.
pub fn read_bases(
    folder: &Path,
    granule: &Granule,
    opening: &Opening,
) -> Result<Option<SavedBases>, BasisFileError> {
    let path = basis_path(folder, granule);
    if !path.exists() {
        return Ok(None);
    }
    let file = FileReader::open(&opening.program, &path, &opening.limits)?;
    let name = clean_text(&path.file_name().unwrap_or_default().to_string_lossy());
    let senseless =
        |what: &str| BasisFileError::Senseless { file: name.clone(), what: what.to_owned() };
    let text = |name: &str| {
        let found = file.index().global_attribute(name).and_then(|value| value.text());
        found.ok_or_else(|| senseless(&format!("it has no attribute {name}")))
    };
    if text("format")? != FORMAT || text("instrument")? != instrument_shape(granule) {
        return Err(senseless("it is not what its name says"));
    }
    let mut bands = Vec::new();
    while let Some(mean) = file.index().variable(&format!("mean_{}", bands.len())) {
        let band = mean.text("band").ok_or_else(|| senseless("a band has no name"))?;
        let basis = read_basis(&file, bands.len())?;
        let known = granule.bands().iter().find(|one| one.name == band);
        let inside = |basis: &Basis| {
            let most = known.map_or(0, |one| one.channels());
            basis.channels.iter().all(|channel| *channel < most)
        };
        let basis = basis.filter(inside).ok_or_else(|| senseless("its numbers do not fit"))?;
        bands.push((band, basis));
    }
    let granules = text("granules")?.lines().map(str::to_owned).collect();
    Ok(Some(SavedBases { instrument: instrument_shape(granule), granules, bands, file: name }))
}

/// One band; `None` where its numbers do not fit each other.
fn read_basis(file: &FileReader, number: usize) -> Result<Option<Basis>, BasisFileError> {
    let values = |stem: &str| -> Result<Vec<f64>, BasisFileError> {
        let Some(variable) = file.index().variable(&format!("{stem}_{number}")) else {
            return Ok(Vec::new());
        };
        let samples = file.read_all(variable)?;
        Ok((0..samples.len()).map(|at| samples.get(at)).collect())
    };
    let (channels, adjacent) = (values("channel")?, values("adjacent")?);
    let (wavenumbers, mean, noise) = (values("wavenumber")?, values("mean")?, values("noise")?);
    let (vectors, variances, scores) = (values("vectors")?, values("variance")?, values("scores")?);
    let width = channels.len();
    let all = [&channels, &adjacent, &wavenumbers, &mean, &noise];
    let fits = width > 0
        && all.iter().all(|values| values.len() == width)
        && vectors.len() == width * variances.len()
        && scores.len() == 4
        && all
            .iter()
            .chain([&&vectors, &&variances, &&scores])
            .all(|values| values.iter().all(|one| one.is_finite()))
        && channels.iter().all(|channel| *channel >= 0.0)
        && noise.iter().all(|noise| *noise > 0.0);
    Ok(fits.then(|| Basis {
        channels: channels.iter().map(|channel| *channel as usize).collect(),
        adjacent: adjacent.iter().map(|one| *one != 0.0).collect(),
        wavenumbers,
        mean,
        noise,
        vectors,
        variances,
        scores: TrainingScores {
            spectra: scores[0] as usize,
            left_out: scores[1] as usize,
            mean: scores[2],
            deviation: scores[3],
        },
    }))
}

/// Writes components as a whole file, or not at all.
///
/// # Errors
/// The file can't be written.
pub fn write_bases(path: &Path, bases: &SavedBases) -> Result<(), WriteError<WriterError>> {
    write_whole(path, |temporary| {
        let mut file = NetcdfWriter::create(temporary)?;
        file.global_attribute("format", FORMAT)?;
        file.global_attribute(
            "title",
            "Principal components of spectra, for the test of unusual ones",
        )?;
        file.global_attribute("instrument", bases.instrument.as_str())?;
        file.global_attribute("granules", bases.granules.join("\n"))?;
        for (number, (band, basis)) in bases.bands.iter().enumerate() {
            write_basis(&mut file, number, band, basis)?;
        }
        file.close()
    })
}

fn write_basis(
    file: &mut NetcdfWriter,
    number: usize,
    band: &str,
    basis: &Basis,
) -> Result<(), WriterError> {
    let named = |stem: &str| format!("{stem}_{number}");
    let (channel, component, score) = (named("channel"), named("component"), named("score"));
    file.dimension(&channel, basis.channels.len())?;
    file.dimension(&component, basis.components())?;
    file.dimension(&score, 4)?;
    let mut put = |stem: &str, dimensions: &[&str], unit: &str, meaning: &str, values: Samples| {
        let draft = VariableDraft::new(named(stem), values.kind(), dimensions)
            .attribute("long_name", meaning)
            .attribute("units", unit)
            .attribute("band", band);
        file.variable(&draft)?;
        file.put_all(&named(stem), &values)
    };
    let radiance = "mW m-2 sr-1 (cm-1)-1";
    let integers =
        |values: &[usize]| Samples::from(values.iter().map(|one| *one as i32).collect::<Vec<_>>());
    let flags: Vec<i8> = basis.adjacent.iter().map(|one| i8::from(*one)).collect();
    put(
        "channel",
        &[&channel],
        "1",
        "place of the channel in the band",
        integers(&basis.channels),
    )?;
    put("wavenumber", &[&channel], "cm-1", "wavenumber", basis.wavenumbers.clone().into())?;
    put("adjacent", &[&channel], "1", "whether the next channel is its neighbour", flags.into())?;
    put("mean", &[&channel], radiance, "mean spectrum", basis.mean.clone().into())?;
    put(
        "noise",
        &[&channel],
        radiance,
        "noise that spectra are divided by",
        basis.noise.clone().into(),
    )?;
    let vectors = basis.vectors.clone();
    put(
        "vectors",
        &[&component, &channel],
        "1",
        "components, orthonormal in noise units",
        vectors.into(),
    )?;
    put(
        "variance",
        &[&component],
        "1",
        "variance along each component",
        basis.variances.clone().into(),
    )?;
    let scores = &basis.scores;
    let scores = vec![scores.spectra as f64, scores.left_out as f64, scores.mean, scores.deviation];
    put(
        "scores",
        &[&score],
        "1",
        "training spectra, left out, mean score, deviation",
        scores.into(),
    )
}
