//! The Gulf of Tamber: warm sea by day under dust that the wind has carried out.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 16.5, longitude: -43.0 },
    heading: 192.0,
    middle_angle: -12.0,
    // Half past ten in the morning by the sun.
    time: seconds_in_2026(171, 13.4),
    by_day: true,
    any_hour: true,
};

pub(super) struct GulfOfTamber {
    moisture: Field,
    warmth: Field,
    edge: Field,
    dust: Field,
    cumulus: Field,
    clusters: Field,
    cirrus: Field,
}

impl GulfOfTamber {
    pub(super) fn new(seed: u64) -> GulfOfTamber {
        GulfOfTamber {
            moisture: Field::new(seed, 41, 380.0, 2),
            warmth: Field::new(seed, 42, 260.0, 2),
            edge: Field::new(seed, 43, 240.0, 2),
            dust: Field::new(seed, 44, 150.0, 3).stretched(1.8),
            cumulus: Field::new(seed, 45, 28.0, 3),
            clusters: Field::new(seed, 46, 230.0, 2),
            cirrus: Field::new(seed, 47, 140.0, 3).stretched(2.4),
        }
    }

    /// Dust optical depth at 961 cm-1: a broad tongue from the east, none in the north.
    fn dust_depth(&self, x: f64, y: f64) -> f64 {
        let across = y + 60.0 + 60.0 * self.edge.at(x, y);
        let tongue = (-(across / 115.0).powi(2)).exp();
        let fading = (0.9 + 0.0009 * x).clamp(0.5, 1.3);
        tongue * fading * (0.85 + 0.4 * self.dust.at(x, y)).clamp(0.05, 1.9)
    }
}

impl Scene for GulfOfTamber {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        let air =
            |water, warming| (Standard::Tropical, Changes { water, warming, ..Changes::default() });
        vec![air(0.55, -1.5), air(0.85, -0.8)]
    }

    fn look(&self, spot: &Spot) -> Sighted {
        let dust = self.dust_depth(spot.x, spot.y);
        // Dusty air comes dry from the land.
        let air = 0.6 + 0.35 * self.moisture.at(spot.x, spot.y) - 0.4 * dust.min(1.0);
        let surface =
            299.4 - 0.0012 * spot.y + 0.3 * self.warmth.at(spot.x, spot.y) - 0.6 * dust.min(1.5);
        let mut footprint = clear(spot, air.clamp(0.0, 1.0), surface, vec![(Surface::Sea, 1.0)]);
        cover(&mut footprint, Particles::Dust, 2.2 + 1.5 * ramp(dust, 0.1, 1.2), 1.0, dust);
        let cluster = self.clusters.at(spot.x, spot.y) - 0.3;
        let amount = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(self.cumulus.at(x, y) + 1.1 * cluster, 1.0, 1.5)
        });
        let top = 1.5 + 3.5 * ramp(cluster, 0.2, 1.8);
        cover(&mut footprint, Particles::Droplets, top, amount, 9.0);
        let streak = self.cirrus.at(spot.x, spot.y) + spot.x / 420.0 - 1.0;
        let thin = 1.3 * ramp(streak, 0.0, 2.0);
        cover(&mut footprint, Particles::Ice, 12.5, ramp(streak, 0.0, 0.5), thin);
        Sighted { footprint, land: 0.0, so2: 0.0 }
    }
}
