//! The Sea of Lowen: warm, moist, by night.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 8.5, longitude: -31.0 },
    heading: 193.0,
    middle_angle: 6.0,
    // Half past one at night by the sun.
    time: seconds_in_2026(257, 3.6),
    by_day: false,
    any_hour: true,
};

/// Middle of the convective core, km.
const CORE: (f64, f64) = (-95.0, 105.0);

pub(super) struct SeaOfLowen {
    moisture: Field,
    warmth: Field,
    cumulus: Field,
    clusters: Field,
    cirrus: Field,
    anvil: Field,
}

impl SeaOfLowen {
    pub(super) fn new(seed: u64) -> SeaOfLowen {
        SeaOfLowen {
            moisture: Field::new(seed, 1, 420.0, 2),
            warmth: Field::new(seed, 2, 300.0, 2),
            cumulus: Field::new(seed, 3, 26.0, 3),
            clusters: Field::new(seed, 4, 260.0, 2),
            cirrus: Field::new(seed, 5, 190.0, 3).stretched(2.2),
            anvil: Field::new(seed, 6, 70.0, 3),
        }
    }

    /// Optical depth of the storm's ice: a core, an anvil that frays with distance.
    fn storm_depth(&self, x: f64, y: f64) -> f64 {
        // The anvil is blown out to the west.
        let (east, north) = (x - CORE.0, y - CORE.1);
        let reach = if east < 0.0 { 2.1 } else { 1.0 };
        let distance = (east / reach).hypot(north) + 24.0 * self.anvil.at(x, y);
        30.0 * (-(distance.max(0.0) / 40.0).powi(2)).exp() + 2.2 * ramp(-distance, -150.0, -50.0)
    }

    /// Height of the storm's top, km: highest over the core.
    fn storm_top(&self, depth: f64) -> f64 {
        11.5 + 5.2 * ramp(depth.max(1e-3).ln(), -2.0, 3.2)
    }
}

impl Scene for SeaOfLowen {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        let air =
            |water, warming| (Standard::Tropical, Changes { water, warming, ..Changes::default() });
        vec![air(0.72, -1.6), air(0.9, -0.4), air(1.08, 0.4)]
    }

    fn look(&self, spot: &Spot) -> Sighted {
        let air = 1.0 + 0.8 * self.moisture.at(spot.x, spot.y);
        let surface = 300.2 - 0.0016 * spot.y + 0.35 * self.warmth.at(spot.x, spot.y);
        let mut footprint = clear(spot, air, surface, vec![(Surface::Sea, 1.0)]);
        let cluster = self.clusters.at(spot.x, spot.y);
        let amount = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(self.cumulus.at(x, y) + 0.9 * cluster, 0.55, 1.0)
        });
        let top = 1.4 + 1.4 * ramp(cluster, -0.5, 1.6) + 0.8 * ramp(amount, 0.2, 1.0);
        cover(&mut footprint, Particles::Droplets, top, amount, 9.0);
        let streak = self.cirrus.at(spot.x, spot.y) - 0.5 - spot.y / 320.0;
        let thin = 0.55 * ramp(streak, 0.0, 2.0);
        cover(&mut footprint, Particles::Ice, 12.2, ramp(streak, 0.0, 0.5), thin);
        let storm = over_footprint(spot.x, spot.y, spot.radius, |x, y| self.storm_depth(x, y));
        let kind = if storm > 5.0 { Particles::LargeIce } else { Particles::Ice };
        cover(&mut footprint, kind, self.storm_top(storm), ramp(storm, 0.01, 0.4), storm);
        Sighted { footprint, land: 0.0, so2: 0.0 }
    }
}
