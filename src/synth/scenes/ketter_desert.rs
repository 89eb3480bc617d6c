//! The Ketter Desert: quartz sand under the afternoon sun, with a plume of dust.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::defects::Defect;
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 24.2, longitude: 41.5 },
    heading: 347.0,
    middle_angle: -8.0,
    // Half past one in the afternoon by the sun.
    time: seconds_in_2026(152, 10.7),
    by_day: true,
    any_hour: false,
};

/// A real array has channels that are noisier than their neighbours; two of them here.
pub(super) const DEFECTS: &[Defect] = &[
    Defect::NoisyChannel { wavenumber: 744.0, factor: 6.0 },
    Defect::DeadChannel { wavenumber: 1322.0 },
];

pub(super) struct KetterDesert {
    sand: Field,
    warmth: Field,
    plume: Field,
    edge: Field,
    cirrus: Field,
    cumulus: Field,
}

impl KetterDesert {
    pub(super) fn new(seed: u64) -> KetterDesert {
        KetterDesert {
            sand: Field::new(seed, 11, 150.0, 4),
            warmth: Field::new(seed, 12, 90.0, 3),
            plume: Field::new(seed, 13, 160.0, 3).stretched(1.6),
            edge: Field::new(seed, 14, 220.0, 2),
            cirrus: Field::new(seed, 15, 120.0, 3).stretched(2.5),
            cumulus: Field::new(seed, 16, 22.0, 3),
        }
    }

    /// Dust optical depth at 961 cm-1: a plume that crosses the scene from south-west.
    fn dust(&self, x: f64, y: f64) -> f64 {
        let across = (y - 0.45 * x + 30.0) + 55.0 * self.edge.at(x, y);
        let plume = (-(across / 105.0).powi(2)).exp();
        plume * (0.75 + 0.35 * self.plume.at(x, y)).clamp(0.05, 1.8)
    }
}

impl Scene for KetterDesert {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        let air = |water, warming| {
            let changes = Changes { water, warming, ..Changes::default() };
            (Standard::MidlatitudeSummer, changes)
        };
        vec![air(0.35, 8.0), air(0.65, 6.0)]
    }

    fn look(&self, spot: &Spot) -> Sighted {
        let sand = ramp(self.sand.at(spot.x, spot.y), -1.2, 0.6);
        let dust = self.dust(spot.x, spot.y);
        // Dust shades the ground; rock warms more than pale sand.
        let surface = 321.5 + 2.5 * self.warmth.at(spot.x, spot.y) + 3.0 * (1.0 - sand)
            - 5.0 * dust.min(1.5)
            - 0.004 * spot.y;
        let ground = vec![(Surface::Desert, sand), (Surface::Soil, 1.0 - sand)];
        let air = (0.5 + 0.0012 * spot.y).clamp(0.0, 1.0);
        let mut footprint = clear(spot, air, surface, ground);
        footprint.reflectivity_factor = 1.0 + 0.12 * self.sand.at(spot.y, spot.x);
        cover(&mut footprint, Particles::Dust, 2.4 + 0.8 * ramp(dust, 0.2, 1.2), 1.0, dust);
        let north_east = ramp(spot.x + spot.y, 60.0, 420.0);
        let amount = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(self.cumulus.at(x, y) + 1.5 * north_east, 1.75, 2.15)
        });
        cover(&mut footprint, Particles::Droplets, 4.2, amount, 8.0);
        let streak = self.cirrus.at(spot.x, spot.y) - spot.x / 330.0 - 0.9;
        let thin = 0.6 * ramp(streak, 0.0, 1.8);
        cover(&mut footprint, Particles::SmallIce, 11.2, ramp(streak, 0.0, 0.4), thin);
        Sighted { footprint, land: 1.0, so2: 0.0 }
    }
}
