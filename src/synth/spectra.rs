//! The spectra of a granule, scan line by scan line, with their truth.

use rayon::prelude::*;

use super::defects::{Faults, Place, REPEATED_LINE};
use super::instrument::Instrument;
use super::noise::noise;
use super::perturbation::Perturbation;
use super::recipe::Recipe;
use super::scene::{Scene, Sighted, Spot};
use super::sun::sun_angles;
use super::swath::{Position, Sight, Swath};
use super::truth::Truth;
use crate::forward::{Atmosphere, Changes, Channel, Scenery, Standard, View};

/// Everything that a granule's spectra are made from.
pub struct Maker {
    recipe: Recipe,
    pub instrument: Instrument,
    pub swath: Swath,
    pub faults: Faults,
    scene: Box<dyn Scene>,
    perturbation: Option<Perturbation>,
    centre: Position,
    scenery: Scenery,
}

/// One footprint: its spectra by band (NaN where missing) and what is true about it.
#[derive(Debug, Clone)]
pub struct Made {
    pub bands: Vec<Vec<f32>>,
    pub truth: Truth,
}

/// Where a footprint lies and what shines on it.
#[derive(Debug, Clone, Copy)]
pub struct Geometry {
    pub sight: Sight,
    pub sun_zenith: f64,
    pub sun_azimuth: f64,
}

/// Heights at which clouds are computed, km; between them they are interpolated.
const CLOUD_HEIGHTS: [f64; 14] =
    [0.5, 1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0, 10.0, 12.0, 14.0, 16.0, 17.0];
/// View angles at which columns are computed, degrees.
const VIEW_ANGLES: [f64; 7] = [0.0, 20.0, 32.0, 42.0, 50.0, 56.0, 61.0];
/// Length of a degree of latitude, km.
const DEGREE: f64 = 111.195;

impl Maker {
    /// Draws the scene and computes the columns of air: the part that takes time before the first
    /// scan line.
    pub fn new(recipe: Recipe) -> Maker {
        Maker::with_air(recipe, |changes| changes)
    }

    /// The same with other air than the scene's.
    pub fn with_air(recipe: Recipe, other: impl Fn(Changes) -> Changes) -> Maker {
        let (instrument, swath, defects) = recipe.instrument();
        let scene = recipe.scene.scene(recipe.seed);
        let setting = recipe.setting();
        let perturbation = recipe.perturbation();
        // A perturbed scan may look far to one side: the scene lies where it looks.
        let middle = swath.sight(swath.lines / 2, swath.positions / 2, swath.detectors() / 2);
        let centre = perturbation.as_ref().map_or(setting.centre, |_| middle.position);
        let channels: Vec<Channel> = instrument
            .bands
            .iter()
            .flat_map(|band| {
                band.wavenumbers
                    .iter()
                    .map(|nu| Channel { wavenumber: *nu, response: band.response })
            })
            .collect();
        let steepest = VIEW_ANGLES.partition_point(|angle| *angle < swath.steepest());
        let sun = setting.by_day.then(|| sun_angles(setting.time, setting.centre).0);
        let view = View {
            zenith_angles: VIEW_ANGLES[..(steepest + 1).min(VIEW_ANGLES.len())].to_vec(),
            sun_zenith: sun,
            cloud_heights: CLOUD_HEIGHTS.to_vec(),
        };
        let air = |(standard, changes): (Standard, Changes)| match &perturbation {
            Some(perturbation) => Atmosphere::new(standard, &other(perturbation.of_air(&changes))),
            None => Atmosphere::new(standard, &other(changes)),
        };
        let airs = scene.airs().into_iter().map(air).collect();
        let scenery = Scenery::new(airs, &channels, view);
        let faults = Faults::new(&defects, &instrument, &swath, recipe.seed);
        Maker { recipe, instrument, swath, faults, scene, perturbation, centre, scenery }
    }

    /// Whether there may be ash or sulphur dioxide, so that the truth tells how much.
    pub fn has_plumes(&self) -> bool {
        self.recipe.scene.has_plumes()
    }

    /// Geometry of every footprint, row-major.
    pub fn geometry(&self) -> Vec<Geometry> {
        let swath = &self.swath;
        (0..swath.lines * swath.positions * swath.detectors())
            .into_par_iter()
            .map(|number| self.geometry_of(number))
            .collect()
    }

    fn geometry_of(&self, footprint: usize) -> Geometry {
        let place = self.place(footprint, 0);
        let sight = self.swath.sight(place.line, place.position, place.detector);
        let (sun_zenith, sun_azimuth) = sun_angles(sight.time, sight.position);
        Geometry { sight, sun_zenith, sun_azimuth }
    }

    fn place(&self, footprint: usize, band: usize) -> Place {
        let detectors = self.swath.detectors();
        Place {
            line: footprint / (self.swath.positions * detectors),
            position: footprint / detectors % self.swath.positions,
            detector: footprint % detectors,
            footprint,
            band,
        }
    }

    /// The footprints of one scan line.
    pub fn line(&self, line: usize) -> Vec<Made> {
        let width = self.swath.positions * self.swath.detectors();
        // A repeated line holds what the line before it holds, noise and all.
        let source = if line > 0 && self.faults.repeats(line) { line - 1 } else { line };
        (0..width)
            .into_par_iter()
            .map(|offset| {
                let mut made = self.footprint(source * width + offset);
                if source != line {
                    let bits = made.truth.defects | REPEATED_LINE;
                    made.truth = Truth {
                        defects: bits,
                        has_missing: made.truth.has_missing,
                        ..self.look(line * width + offset).1
                    };
                }
                made
            })
            .collect()
    }

    /// A footprint's spectrum without cloud, dust, ash, noise and defects, all bands one after another,
    /// over ground that is warmer by some K.
    pub fn clear_spectrum(&self, footprint: usize, warmer: f64) -> Vec<f32> {
        let mut clear = self.look(footprint).0.footprint;
        clear.covers.clear();
        clear.surface_temperature += warmer;
        self.scenery.radiances(&clear)
    }

    fn footprint(&self, footprint: usize) -> Made {
        let (sighted, mut truth) = self.look(footprint);
        let radiances = self.scenery.radiances(&sighted.footprint);
        let mut first = 0;
        let mut bands = Vec::with_capacity(self.instrument.bands.len());
        for (number, band) in self.instrument.bands.iter().enumerate() {
            let clean = &radiances[first..first + band.wavenumbers.len()];
            first += band.wavenumbers.len();
            let mut noise = noise(self.recipe.seed, footprint, number, band, clean);
            if let Some(told) = self.recipe.nedn {
                let factor = told.factor(self.place(footprint, number).detector);
                noise.iter_mut().for_each(|value| *value *= factor);
            }
            let mut spectrum: Vec<f32> = clean.iter().zip(&noise).map(|(r, n)| r + n).collect();
            let place = self.place(footprint, number);
            truth.defects |= self.faults.spoil(&place, band, &noise, &mut spectrum);
            truth.has_missing |= self.faults.lacks_values(number, &spectrum);
            bands.push(spectrum);
        }
        Made { bands, truth }
    }

    fn look(&self, footprint: usize) -> (Sighted, Truth) {
        let geometry = self.geometry_of(footprint);
        let centre = self.centre;
        let sight = geometry.sight;
        let east = (sight.position.longitude - centre.longitude + 540.0).rem_euclid(360.0) - 180.0;
        let secant = 1.0 / sight.view_zenith.to_radians().cos();
        let spot = Spot {
            x: east * DEGREE * sight.position.latitude.to_radians().cos(),
            y: (sight.position.latitude - centre.latitude) * DEGREE,
            radius: self.instrument.footprint_radius * secant.powf(1.3),
            view_zenith: sight.view_zenith,
            sun_zenith: geometry.sun_zenith,
        };
        let sighted = self.scene.look(&spot);
        let sighted = match &self.perturbation {
            Some(perturbation) => perturbation.of_sight(sighted),
            None => sighted,
        };
        let truth =
            Truth::of(&sighted, |height| self.scenery.pressure(sighted.footprint.air, height));
        (sighted, truth)
    }
}
