//! Clear-sky spectra as a model would calculate them for a granule, with a bias that is known.

use std::path::Path;

use rayon::prelude::*;

use super::field::Field;
use super::file_variables::{RADIANCE_UNIT, define_axis, named};
use super::granule_file::{ContentError, Layout, SynthError};
use super::instrument::Band;
use super::recipe::Recipe;
use super::spectra::{Geometry, Maker};
use crate::forward::Changes;
use crate::netcdf_files::{NetcdfWriter, ValueKind, VariableDraft, WriterError};
use crate::spectral::{brightness_temperature_or_nan, planck};
use crate::system::{Cancel, write_whole};

/// How well the model knows the scene.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Calculation {
    /// Air and ground are those of the scene.
    Exact,
    /// Air and ground are off by what short forecasts are off by.
    Model,
}

/// What observed spectra are warmer by than calculated ones, K: from detector to detector, and per
/// unit of the slant path beyond straight down. Sizes as met in practice, our own choice.
const FROM_DETECTOR: f64 = 0.1;
const FROM_SLANT: f64 = 0.5;
/// A model's surface temperature is off by this, K (standard deviation), over such distances, km.
const SURFACE_ERROR: f64 = 0.5;
const SURFACE_SCALE: f64 = 500.0;
/// Length of a degree of latitude, km.
const DEGREE: f64 = 111.195;

impl Calculation {
    /// Reads one as typed.
    pub fn parse(text: &str) -> Option<Calculation> {
        [Self::Exact, Self::Model].into_iter().find(|one| one.label() == text)
    }

    /// As it is typed.
    pub fn label(self) -> &'static str {
        match self {
            Self::Exact => "exact",
            Self::Model => "model",
        }
    }

    /// The air that the model takes for a scene's.
    fn of_air(self, scene: Changes) -> Changes {
        match self {
            Self::Exact => scene,
            Self::Model => Changes {
                warming: scene.warming + 0.4,
                wave: scene.wave + 0.4,
                wave_phase: scene.wave_phase + 0.2,
                water: scene.water * 0.92,
                water_aloft: scene.water_aloft * 1.1,
                ozone: scene.ozone * 0.97,
                ..scene
            },
        }
    }

    fn words(self) -> &'static str {
        match self {
            Self::Exact => "air and ground of the scene itself",
            Self::Model => {
                "air and ground that are off as short forecasts are: 0.4 K near the ground and in a wave \
                 with height, 8 % of water vapour, 0.5 K of surface temperature"
            }
        }
    }
}

/// What observed spectra are warmer by than calculated ones, K.
fn bias(detector: usize, detectors: usize, zenith: f64) -> f64 {
    let middle = 0.5 * (detectors as f64 - 1.0);
    let slant = 1.0 / zenith.to_radians().cos() - 1.0;
    FROM_DETECTOR * (detector as f64 - middle) + FROM_SLANT * slant
}

/// Writes what a model calculated for the granule of a recipe: the same footprints without cloud, dust
/// and ash, without noise and defects, colder than observed by a bias that the group `truth` tells.
pub fn make_calculated(
    recipe: Recipe,
    calculation: Calculation,
    target: &Path,
    cancel: &Cancel,
) -> Result<(), SynthError> {
    let maker = Maker::with_air(recipe, |scene| calculation.of_air(scene));
    let layout = Layout::new(&maker);
    write_whole(target, |path| write(calculation, recipe, &maker, &layout, path, cancel))?;
    Ok(())
}

fn write(
    calculation: Calculation,
    recipe: Recipe,
    maker: &Maker,
    layout: &Layout,
    path: &Path,
    cancel: &Cancel,
) -> Result<(), ContentError> {
    let geometry = maker.geometry();
    let mut file = NetcdfWriter::create(path)?;
    describe(&mut file, calculation, recipe)?;
    for (name, length) in layout.names.iter().zip(&layout.lengths) {
        file.dimension(name, *length)?;
    }
    place(&mut file, layout, &geometry)?;
    for band in &maker.instrument.bands {
        define_axis(&mut file, maker, band)?;
        define_spectra(&mut file, layout, band)?;
    }
    let biases = put_bias(&mut file, maker, layout, &geometry)?;
    let model = Model::of(calculation, recipe);
    let row: usize = layout.lengths[1..].iter().product();
    for line in 0..maker.swath.lines {
        if cancel.is_cancelled() {
            return Err(ContentError::Cancelled);
        }
        let spectra: Vec<Vec<f32>> = (line * row..(line + 1) * row)
            .into_par_iter()
            .map(|at| {
                let warmer = model.surface_error(&geometry[at]);
                colder(maker, maker.clear_spectrum(at, warmer), biases[at])
            })
            .collect();
        put_line(&mut file, maker, layout, line, &spectra)?;
    }
    file.close()?;
    Ok(())
}

/// What a model does not know of the ground.
struct Model(Option<Field>);

impl Model {
    fn of(calculation: Calculation, recipe: Recipe) -> Model {
        let field = || Field::new(recipe.seed ^ 0x0CA1_C0DE, 1, SURFACE_SCALE, 2);
        Model((calculation == Calculation::Model).then(field))
    }

    fn surface_error(&self, geometry: &Geometry) -> f64 {
        let place = geometry.sight.position;
        let east = place.longitude * DEGREE * place.latitude.to_radians().cos();
        self.0.as_ref().map_or(0.0, |field| SURFACE_ERROR * field.at(east, place.latitude * DEGREE))
    }
}

/// The same spectrum colder by a bias in every channel.
fn colder(maker: &Maker, spectrum: Vec<f32>, bias: f64) -> Vec<f32> {
    let wavenumbers = maker.instrument.bands.iter().flat_map(|band| &band.wavenumbers);
    let shifted = |(radiance, at): (f32, &f64)| {
        planck(*at, brightness_temperature_or_nan(*at, f64::from(radiance)) - bias) as f32
    };
    spectrum.into_iter().zip(wavenumbers).map(shifted).collect()
}

fn describe(
    file: &mut NetcdfWriter,
    calculation: Calculation,
    recipe: Recipe,
) -> Result<(), WriterError> {
    let attributes = [
        ("Conventions", "CF-1.8".to_owned()),
        (
            "title",
            format!(
                "Synthetic calculated clear-sky spectra for the imaginary Brindle sounder: {}",
                recipe.scene.place()
            ),
        ),
        ("institution", "none: instrument, orbit and places are imaginary".to_owned()),
        (
            "source",
            format!(
                "synthetic: forward model with approximate spectroscopy, {}; for the granule of `{}`",
                calculation.words(),
                recipe.command()
            ),
        ),
        (
            "comment",
            "Synthetic demonstration data. Not for science. Colder than the scene's own clear sky by \
             the bias that stands in the group `truth`."
                .to_owned(),
        ),
        ("references", "docs/forward.md of radsieve".to_owned()),
    ];
    for (name, value) in attributes {
        file.global_attribute(name, value)?;
    }
    Ok(())
}

fn place(
    file: &mut NetcdfWriter,
    layout: &Layout,
    geometry: &[Geometry],
) -> Result<(), WriterError> {
    for (name, units) in [("latitude", "degrees_north"), ("longitude", "degrees_east")] {
        file.variable(
            &VariableDraft::new(name, ValueKind::F32, &layout.names)
                .attribute("standard_name", name)
                .attribute("units", units)
                .deflate(5),
        )?;
    }
    let latitudes: Vec<f32> = geometry.iter().map(|g| g.sight.position.latitude as f32).collect();
    let longitudes: Vec<f32> = geometry.iter().map(|g| g.sight.position.longitude as f32).collect();
    file.put_all("latitude", &latitudes.into())?;
    file.put_all("longitude", &longitudes.into())
}

fn spectra_name(band: &Band) -> String {
    named("calculated_radiance", band)
}

fn define_spectra(
    file: &mut NetcdfWriter,
    layout: &Layout,
    band: &Band,
) -> Result<(), WriterError> {
    let channel = named("channel", band);
    let mut dimensions = layout.names.clone();
    dimensions.push(&channel);
    let mut chunks = layout.lengths.clone();
    chunks[0] = 1;
    chunks.push(band.wavenumbers.len());
    file.variable(
        &VariableDraft::new(spectra_name(band), ValueKind::F32, &dimensions)
            .chunks(&chunks)
            .deflate(5)
            .attribute("long_name", "radiance calculated for clear sky")
            .attribute("units", RADIANCE_UNIT)
            .attribute("apodization", band.apodisation)
            .attribute("coordinates", format!("latitude longitude {}", named("wavenumber", band))),
    )
}

/// The bias of each footprint, K, which goes into the file as truth.
fn put_bias(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    geometry: &[Geometry],
) -> Result<Vec<f64>, WriterError> {
    let axes = maker.instrument.bands.iter();
    for band in axes {
        let factor = if maker.instrument.axis_per_metre { 100.0 } else { 1.0 };
        let axis: Vec<f64> = band.wavenumbers.iter().map(|nu| nu * factor).collect();
        file.put_all(&named("wavenumber", band), &axis.into())?;
    }
    file.variable(
        &VariableDraft::new("/truth/departure_bias", ValueKind::F32, &layout.names)
            .attribute("long_name", "what observed spectra are warmer by than calculated ones")
            .attribute("units", "K")
            .deflate(5),
    )?;
    let detectors = maker.swath.detectors();
    let of = |(at, geometry): (usize, &Geometry)| {
        bias(at % detectors, detectors, geometry.sight.view_zenith)
    };
    let biases: Vec<f64> = geometry.iter().enumerate().map(of).collect();
    let stored: Vec<f32> = biases.iter().map(|bias| *bias as f32).collect();
    file.put_all("/truth/departure_bias", &stored.into())?;
    Ok(biases)
}

fn put_line(
    file: &mut NetcdfWriter,
    maker: &Maker,
    layout: &Layout,
    line: usize,
    spectra: &[Vec<f32>],
) -> Result<(), WriterError> {
    let mut first = 0;
    for band in &maker.instrument.bands {
        let own = first..first + band.wavenumbers.len();
        first = own.end;
        let values: Vec<f32> =
            spectra.iter().flat_map(|spectrum| spectrum[own.clone()].iter().copied()).collect();
        let mut start = vec![0; layout.lengths.len() + 1];
        start[0] = line;
        let mut count = layout.lengths.clone();
        count[0] = 1;
        count.push(band.wavenumbers.len());
        file.put(&spectra_name(band), &start, &count, &values.into())?;
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_bias_is_the_sum_of_detector_and_slant() {
        // Worked by hand: detector 8 of nine lies four beyond the middle; at 60 degrees the path is
        // twice as long as straight down.
        assert!((bias(8, 9, 60.0) - (0.4 + 0.5)).abs() < 1e-12);
        assert!(bias(4, 9, 0.0).abs() < 1e-12);
        assert!(bias(0, 1, 0.0).abs() < 1e-12);
    }

    #[test]
    fn kinds_read_as_they_are_written() {
        for kind in [Calculation::Exact, Calculation::Model] {
            assert_eq!(Calculation::parse(kind.label()), Some(kind));
        }
        assert_eq!(Calculation::parse("perfect"), None);
    }
}
