//! Another climate for a scene: air, gases, ground, clouds and noise drawn from a seed.

use std::f64::consts::PI;

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

use super::defects::Defect;
use super::instrument::Instrument;
use super::scene::{Setting, Sighted};
use super::swath::Swath;
use crate::forward::{Changes, Particles};

/// What a perturbed granule has otherwise than the scene as it is drawn.
///
/// Spans are our own choice: wide enough that no threshold fits them by accident, narrow enough that
/// the places stay what they are.
#[derive(Debug, Clone, PartialEq)]
pub struct Perturbation {
    seed: u64,
    scene: u64,
    /// Added to or multiplied with what the scene gives for its air.
    air: Changes,
    /// Added to the height of sulphur dioxide, km.
    so2_lift: f64,
    /// Surface temperature beyond that of the air, K.
    skin: f64,
    /// Factor on what the ground lacks to a black body.
    dullness: f64,
    /// Factors on heights and optical depths of all layers of particles.
    height: f64,
    depth: f64,
    /// Particles one size smaller (-1), as they are, or one size larger (1).
    size: i8,
    /// Middle of the scan, as a share of the way to where the scan ends.
    tilt: f64,
    /// Factor on the noise of every channel.
    noise: f64,
    /// Whether the granule is taken half a day later, where the scene allows it.
    half_day_later: bool,
}

/// Scans end here, degrees from nadir.
const SCAN_EDGE: f64 = 48.3;
/// Clouds stay below this, km: the highest for which columns are computed.
const HIGHEST: f64 = 17.0;

impl Perturbation {
    /// Draws a perturbation; `scene` keeps scenes of one seed apart.
    pub fn drawn(seed: u64, scene: u64) -> Perturbation {
        let mut draw = Draw::new(seed ^ 0x00C1_1A7E, scene);
        let mut within = |low: f64, high: f64| draw.within(low, high);
        let air = Changes {
            warming: within(-4.0, 4.0),
            warming_depth: within(4.0, 12.0),
            wave: within(0.0, 2.5),
            wave_length: within(6.0, 16.0),
            wave_phase: within(0.0, 2.0 * PI),
            water: within(0.65, 1.3),
            water_aloft: within(0.5, 1.7),
            ozone: within(0.8, 1.25),
            co2_ppmv: within(395.0, 450.0),
            ch4_ppmv: within(1.75, 2.05),
            n2o_ppmv: within(0.32, 0.35),
            co: within(0.6, 2.0),
            ..Changes::default()
        };
        Perturbation {
            seed,
            scene,
            air,
            so2_lift: within(-2.0, 3.0),
            skin: within(-1.5, 1.5),
            dullness: within(0.5, 1.5),
            height: within(0.8, 1.2),
            depth: within(0.6, 1.6),
            size: within(-1.5, 1.5).round() as i8,
            tilt: within(-1.0, 1.0),
            noise: within(0.7, 1.5),
            half_day_later: within(0.0, 1.0) > 0.5,
        }
    }

    /// A scene's air under this perturbation.
    pub fn of_air(&self, scene: &Changes) -> Changes {
        Changes {
            warming: scene.warming + self.air.warming,
            water: scene.water * self.air.water,
            ozone: scene.ozone * self.air.ozone,
            inversion: scene.inversion,
            inversion_depth: scene.inversion_depth,
            so2_dobson: scene.so2_dobson,
            so2_height: scene.so2_height + self.so2_lift,
            ..self.air.clone()
        }
    }

    /// What a scene shows under this perturbation.
    pub fn of_sight(&self, mut sighted: Sighted) -> Sighted {
        let footprint = &mut sighted.footprint;
        // The ground follows the air above it.
        footprint.surface_temperature += self.air.warming + self.skin;
        footprint.reflectivity_factor *= self.dullness;
        for cover in &mut footprint.covers {
            cover.height = (cover.height * self.height).min(HIGHEST);
            cover.optical_depth *= self.depth;
            cover.particles = resized(cover.particles, self.size);
        }
        sighted
    }

    /// Makes the instrument noisier or less noisy, and turns its scan.
    pub fn of_instrument(&self, instrument: &mut Instrument, swath: &mut Swath) {
        for band in &mut instrument.bands {
            band.nedn.iter_mut().for_each(|nedn| *nedn *= self.noise as f32);
        }
        let width = swath.positions as f64 * swath.position_step;
        swath.middle_angle = self.tilt * (SCAN_EDGE - 0.5 * width).max(0.0);
    }

    /// When the granule is taken.
    pub fn of_setting(&self, mut setting: Setting) -> Setting {
        if setting.any_hour && self.half_day_later {
            setting.time += 43_200.0;
            setting.by_day = !setting.by_day;
        }
        setting
    }

    /// Everything that can be wrong, at places drawn for a swath; every second granule is sound.
    pub fn defects(&self, instrument: &Instrument, swath: &Swath) -> Vec<Defect> {
        let mut draw = Draw::new(self.seed ^ 0x0BAD, self.scene);
        if draw.below(2) == 0 || swath.lines < 8 || swath.positions < 8 {
            return Vec::new();
        }
        let (bands, detectors) = (instrument.bands.len(), swath.detectors());
        let first = (draw.below(swath.lines - 2), draw.below(swath.positions - 4));
        let last = (first.0 + 1, first.1 + 3);
        let mut defects = vec![
            Defect::NoisyChannel { wavenumber: draw.within(700.0, 720.0), factor: 7.0 },
            Defect::DeadChannel { wavenumber: draw.within(1312.0, 1330.0) },
            Defect::PoppingChannel {
                wavenumber: draw.within(730.0, 750.0),
                noises: 14.0,
                first: 2,
                last: 5,
            },
            Defect::Spikes { count: 8, noises: 40.0 },
            Defect::Fill { count: 6 },
            Defect::LostLine { line: 1 + draw.below(swath.lines - 1) },
            Defect::RepeatedLine { line: 1 + draw.below(swath.lines - 1) },
            Defect::BandLost { band: draw.below(bands), first, last },
        ];
        if detectors > 1 {
            let detector = draw.below(detectors);
            defects.push(Defect::DeadDetector { band: draw.below(bands), detector });
            let detector = (detector + 1) % detectors;
            defects.push(Defect::Striping { band: draw.below(bands), detector, kelvin: 0.8 });
        }
        defects
    }
}

/// Numbers that are the same on every machine.
struct Draw(ChaCha8Rng);

impl Draw {
    fn new(seed: u64, stream: u64) -> Draw {
        let mut random = ChaCha8Rng::seed_from_u64(seed);
        random.set_stream(stream);
        Draw(random)
    }

    fn within(&mut self, low: f64, high: f64) -> f64 {
        // 53 bits: exactly what an f64 holds.
        let share = (self.0.next_u64() >> 11) as f64 / (1_u64 << 53) as f64;
        low + (high - low) * share
    }

    fn below(&mut self, limit: usize) -> usize {
        (self.0.next_u64() % limit.max(1) as u64) as usize
    }
}

fn resized(particles: Particles, size: i8) -> Particles {
    use Particles::{Droplets, Ice, LargeIce, SmallDroplets, SmallIce};
    match (particles, size) {
        (Ice, -1) => SmallIce,
        (Ice, 1) => LargeIce,
        (SmallIce, 1) | (LargeIce, -1) => Ice,
        (Droplets, -1) => SmallDroplets,
        (SmallDroplets, 1) => Droplets,
        (same, _) => same,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_seeds_draw_equal_climates_and_others_differ() {
        assert_eq!(Perturbation::drawn(5, 2), Perturbation::drawn(5, 2));
        assert_ne!(Perturbation::drawn(5, 2), Perturbation::drawn(6, 2));
        assert_ne!(Perturbation::drawn(5, 2).air, Perturbation::drawn(5, 3).air);
    }

    #[test]
    fn the_ground_follows_its_air_and_plumes_keep_their_column() {
        let perturbation = Perturbation::drawn(5, 2);
        let scene = Changes { warming: 3.0, so2_dobson: 20.0, ..Changes::default() };
        let air = perturbation.of_air(&scene);
        assert_eq!(air.warming, 3.0 + perturbation.air.warming);
        assert_eq!(air.so2_dobson, 20.0);
    }

    #[test]
    fn particles_change_by_one_size() {
        assert_eq!(resized(Particles::Ice, 1), Particles::LargeIce);
        assert_eq!(resized(Particles::LargeIce, 1), Particles::LargeIce);
        assert_eq!(resized(Particles::Ash, -1), Particles::Ash);
    }
}
