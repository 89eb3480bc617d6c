//! Iskel Sound: polar winter over open water and the ice beside it.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 70.5, longitude: -34.0 },
    heading: 205.0,
    middle_angle: 7.0,
    time: seconds_in_2026(8, 2.2),
    by_day: false,
    any_hour: false,
};

pub(super) struct IskelSound {
    edge: Field,
    warmth: Field,
    floes: Field,
    cells: Field,
    deck: Field,
    middle: Field,
    cirrus: Field,
}

impl IskelSound {
    pub(super) fn new(seed: u64) -> IskelSound {
        IskelSound {
            edge: Field::new(seed, 61, 150.0, 3),
            warmth: Field::new(seed, 62, 220.0, 2),
            floes: Field::new(seed, 63, 120.0, 3),
            cells: Field::new(seed, 64, 26.0, 3),
            deck: Field::new(seed, 65, 220.0, 2),
            middle: Field::new(seed, 66, 190.0, 3).stretched(1.6),
            cirrus: Field::new(seed, 67, 170.0, 3).stretched(2.0),
        }
    }
}

impl Scene for IskelSound {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        let ice = Changes { inversion: 7.0, ..Changes::default() };
        let water = Changes { warming: 11.0, warming_depth: 3.5, water: 1.6, ..Changes::default() };
        vec![(Standard::SubarcticWinter, ice), (Standard::SubarcticWinter, water)]
    }

    fn look(&self, spot: &Spot) -> Sighted {
        // Ice in the north, open water in the south.
        let ice = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(y + 45.0 * self.edge.at(x, y), 36.0, 44.0)
        });
        let away = spot.y + 45.0 * self.edge.at(spot.x, spot.y) - 40.0;
        let air = 1.0 - ramp(away, -120.0, 120.0);
        let water = 275.6 - 0.004 * (spot.y - 40.0) + 0.25 * self.warmth.at(spot.x, spot.y);
        let floes = 249.0 + 1.5 * self.floes.at(spot.x, spot.y) + 5.0 * air;
        let surface = water + ice * (floes - water);
        let ground = vec![(Surface::Sea, 1.0 - ice), (Surface::Snow, ice)];
        let mut footprint = clear(spot, air, surface, ground);
        let deck = self.deck.at(spot.x, spot.y) - 0.9 - 0.3 * ice;
        let amount = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(0.8 * self.cells.at(x, y) + 1.4 * deck, 0.3, 1.0)
        });
        cover(&mut footprint, Particles::Droplets, 1.3 + 0.25 * deck, amount, 8.0);
        let layered = ramp(self.middle.at(spot.x, spot.y) - spot.x / 400.0, 0.9, 1.5);
        cover(&mut footprint, Particles::Droplets, 3.4 + layered, layered, 9.0 * layered);
        let high = ramp(self.cirrus.at(spot.x, spot.y) + spot.x / 400.0, 0.9, 2.2);
        cover(&mut footprint, Particles::SmallIce, 7.2, ramp(high, 0.0, 0.3), 1.6 * high);
        Sighted { footprint, land: 0.0, so2: 0.0 }
    }
}
