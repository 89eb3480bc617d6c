//! The Hesk Isles: winter sea by night downwind of a volcano.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 52.3, longitude: -27.0 },
    heading: 198.0,
    middle_angle: 5.0,
    time: seconds_in_2026(26, 3.3),
    by_day: false,
    any_hour: true,
};

/// Where the volcano stands, km.
const CRATER: (f64, f64) = (-130.0, -70.0);
/// Sulphur dioxide of the atmospheres from the third on, Dobson units; close enough together for the
/// mixture of two radiances to stand for the column between them.
const PLUMES: [f64; 5] = [2.0, 6.0, 15.0, 35.0, 80.0];

pub(super) struct HeskIsles {
    moisture: Field,
    warmth: Field,
    islands: Field,
    wind: Field,
    ash: Field,
    cells: Field,
    deck: Field,
    front: Field,
    cirrus: Field,
}

impl HeskIsles {
    pub(super) fn new(seed: u64) -> HeskIsles {
        HeskIsles {
            moisture: Field::new(seed, 51, 340.0, 2),
            warmth: Field::new(seed, 52, 240.0, 2),
            islands: Field::new(seed, 53, 55.0, 3),
            wind: Field::new(seed, 54, 260.0, 2),
            ash: Field::new(seed, 55, 80.0, 3).stretched(2.0),
            cells: Field::new(seed, 56, 24.0, 3),
            deck: Field::new(seed, 57, 230.0, 2),
            front: Field::new(seed, 58, 160.0, 3),
            cirrus: Field::new(seed, 59, 110.0, 3).stretched(2.0),
        }
    }

    /// How thick a plume is that drifts from the crater to the north-east, 0 to about 1; `turn`
    /// turns its axis (km per km).
    fn plume(&self, x: f64, y: f64, turn: f64) -> f64 {
        let (east, north) = (x - CRATER.0, y - CRATER.1);
        let width = 28.0 + 0.22 * east.max(0.0);
        let across = north - turn * east - 35.0 * self.wind.at(x, y) * ramp(east, 0.0, 250.0);
        ramp(east, -25.0, 15.0) * (-(across / width).powi(2)).exp() * (-east.max(0.0) / 520.0).exp()
    }

    /// Place among the atmospheres: moisture without sulphur dioxide, else the plume's column.
    fn air(&self, x: f64, y: f64, so2: f64) -> f64 {
        let moist = (0.5 + 0.4 * self.moisture.at(x, y)).clamp(0.0, 1.0);
        let above = PLUMES.partition_point(|plume| *plume < so2).min(PLUMES.len() - 1);
        let low = above.checked_sub(1).map_or(0.0, |below| PLUMES[below]);
        let ladder = (1 + above) as f64 + ((so2 - low) / (PLUMES[above] - low)).min(1.0);
        // The edge of the plume leads over from the moisture there.
        moist + (ladder - moist) * ramp(so2, 0.0, 1.0)
    }
}

impl Scene for HeskIsles {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        let air = |water, warming, so2_dobson| {
            let changes = Changes { water, warming, so2_dobson, ..Changes::default() };
            (Standard::MidlatitudeWinter, changes)
        };
        let mut airs = vec![air(0.9, 5.0, 0.0), air(1.5, 7.0, 0.0)];
        airs.extend(PLUMES.map(|so2| air(1.2, 6.0, so2)));
        airs
    }

    fn look(&self, spot: &Spot) -> Sighted {
        let ash = 1.5
            * self.plume(spot.x, spot.y, 0.35)
            * (0.9 + 0.35 * self.ash.at(spot.x, spot.y)).clamp(0.1, 1.7);
        // The gas rises higher and is blown further to the left.
        let so2 = 95.0 * self.plume(spot.x, spot.y, 0.6);
        let air = self.air(spot.x, spot.y, so2);
        // `air` leaves out what lies below the mixture of moist air and the thinnest plume.
        let so2 = if so2 < 1.0 { (air - 1.0).max(0.0) * PLUMES[0] } else { so2.min(PLUMES[4]) };
        let land = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(self.islands.at(x, y), 2.3, 2.4)
        });
        let sea = 281.2 - 0.003 * spot.y + 0.3 * self.warmth.at(spot.x, spot.y);
        let surface = sea - 4.0 * land;
        let ground = vec![(Surface::Sea, 1.0 - land), (Surface::Soil, land)];
        let mut footprint = clear(spot, air, surface, ground);
        let height = 6.0 + 2.0 * ramp(ash, 0.1, 1.2);
        cover(&mut footprint, Particles::Ash, height, ramp(ash, 0.0, 0.1), ash);
        let deck = self.deck.at(spot.x, spot.y) - spot.x / 260.0 - 0.9;
        let amount = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(0.8 * self.cells.at(x, y) + 1.3 * deck, 0.3, 1.0)
        });
        cover(&mut footprint, Particles::Droplets, 1.4 + 0.2 * deck, amount, 9.0);
        // A front in the south-east.
        let ahead = 0.6 * spot.x - spot.y - 250.0 + 45.0 * self.front.at(spot.x, spot.y);
        let layered = ramp(ahead, -50.0, 70.0);
        cover(&mut footprint, Particles::Droplets, 3.2 + 1.3 * layered, layered, 12.0 * layered);
        let high = ramp(ahead + 50.0 * self.cirrus.at(spot.x, spot.y), -170.0, 60.0);
        cover(&mut footprint, Particles::Ice, 8.6, ramp(high, 0.0, 0.3), 1.6 * high * high);
        Sighted { footprint, land, so2 }
    }
}
