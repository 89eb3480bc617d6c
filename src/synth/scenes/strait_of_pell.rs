//! The Strait of Pell: two coasts, islands, stratocumulus and a front, by day.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 44.8, longitude: -22.0 },
    heading: 345.0,
    middle_angle: 11.0,
    time: seconds_in_2026(118, 14.9),
    by_day: true,
    any_hour: false,
};

pub(super) struct StraitOfPell {
    coast: Field,
    islands: Field,
    warmth: Field,
    deck: Field,
    cells: Field,
    front: Field,
    cirrus: Field,
}

impl StraitOfPell {
    pub(super) fn new(seed: u64) -> StraitOfPell {
        StraitOfPell {
            coast: Field::new(seed, 31, 170.0, 4),
            islands: Field::new(seed, 32, 70.0, 4),
            warmth: Field::new(seed, 33, 110.0, 3),
            deck: Field::new(seed, 34, 240.0, 2),
            cells: Field::new(seed, 35, 24.0, 3),
            front: Field::new(seed, 36, 150.0, 3),
            cirrus: Field::new(seed, 37, 90.0, 3).stretched(2.0),
        }
    }

    fn is_land(&self, x: f64, y: f64) -> f64 {
        // Distance from the middle of the strait, which runs from south-west to north-east.
        let away = (x - 0.5 * y).abs() / 1.12 + 34.0 * self.coast.at(x, y);
        ramp(away, 108.0, 112.0).max(ramp(self.islands.at(x, y), 2.0, 2.1))
    }
}

impl Scene for StraitOfPell {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        let air = |water, warming| {
            let changes = Changes { water, warming, ..Changes::default() };
            (Standard::MidlatitudeSummer, changes)
        };
        vec![air(0.45, -6.0), air(0.75, -3.5)]
    }

    fn look(&self, spot: &Spot) -> Sighted {
        let land = over_footprint(spot.x, spot.y, spot.radius, |x, y| self.is_land(x, y));
        let warmth = self.warmth.at(spot.x, spot.y);
        let sea_temperature = 286.4 - 0.0035 * spot.y + 0.3 * warmth;
        let land_temperature = 297.0 - 0.006 * spot.y + 1.8 * warmth;
        let surface = sea_temperature + land * (land_temperature - sea_temperature);
        let green = ramp(self.islands.at(spot.y, spot.x), -0.8, 0.8);
        let ground = vec![
            (Surface::Sea, 1.0 - land),
            (Surface::Vegetation, land * green),
            (Surface::Soil, land * (1.0 - green)),
        ];
        // The front lies in the south-east: moister air, layered cloud, cirrus ahead of it.
        let ahead = 0.75 * spot.x - spot.y - 265.0 + 50.0 * self.front.at(spot.x, spot.y);
        let air = ramp(ahead, -380.0, 40.0);
        let mut footprint = clear(spot, air, surface, ground);
        let deck = self.deck.at(spot.x, spot.y) - 1.3 * land + 0.35;
        let amount = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(0.8 * self.cells.at(x, y) + 1.4 * deck, 0.2, 0.9)
        });
        cover(&mut footprint, Particles::Droplets, 0.95 + 0.15 * deck, amount, 10.0);
        let layered = ramp(ahead, -40.0, 90.0);
        cover(&mut footprint, Particles::Droplets, 4.6 + 1.2 * layered, layered, 14.0 * layered);
        let high = ramp(ahead + 55.0 * self.cirrus.at(spot.x, spot.y), -190.0, 60.0);
        cover(&mut footprint, Particles::Ice, 10.2, ramp(high, 0.0, 0.3), 1.5 * high * high);
        Sighted { footprint, land, so2: 0.0 }
    }
}
