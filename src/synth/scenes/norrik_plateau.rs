//! The Norrik Plateau: snow in the polar night, with an instrument that has seen better days.

use crate::forward::{Changes, Particles, Standard, Surface};
use crate::synth::defects::Defect;
use crate::synth::field::{Field, over_footprint, ramp};
use crate::synth::scene::{Scene, Setting, Sighted, Spot, clear, cover, seconds_in_2026};
use crate::synth::swath::Position;

pub(super) const SETTING: Setting = Setting {
    centre: Position { latitude: 76.5, longitude: 52.0 },
    heading: 215.0,
    middle_angle: -4.0,
    time: seconds_in_2026(11, 20.4),
    by_day: false,
    any_hour: false,
};

/// Everything that can be wrong, one of each.
pub(super) const DEFECTS: &[Defect] = &[
    Defect::DeadDetector { band: 2, detector: 1 },
    Defect::Striping { band: 1, detector: 2, kelvin: 0.7 },
    Defect::PoppingChannel { wavenumber: 724.5, noises: 14.0, first: 6, last: 11 },
    Defect::NoisyChannel { wavenumber: 699.0, factor: 7.0 },
    Defect::DeadChannel { wavenumber: 1302.5 },
    Defect::Spikes { count: 14, noises: 40.0 },
    Defect::LostLine { line: 15 },
    Defect::RepeatedLine { line: 4 },
    Defect::BandLost { band: 0, first: (17, 8), last: (18, 12) },
    Defect::Fill { count: 9 },
];

/// Strongest inversion of the atmospheres, K.
const INVERSIONS: [f64; 3] = [2.0, 11.0, 21.0];

pub(super) struct NorrikPlateau {
    inversion: Field,
    snow: Field,
    stratus: Field,
    tops: Field,
    ice: Field,
}

impl NorrikPlateau {
    pub(super) fn new(seed: u64) -> NorrikPlateau {
        NorrikPlateau {
            inversion: Field::new(seed, 21, 300.0, 3),
            snow: Field::new(seed, 22, 80.0, 3),
            stratus: Field::new(seed, 23, 210.0, 4),
            tops: Field::new(seed, 24, 160.0, 2),
            ice: Field::new(seed, 25, 240.0, 3).stretched(1.7),
        }
    }
}

impl Scene for NorrikPlateau {
    fn airs(&self) -> Vec<(Standard, Changes)> {
        INVERSIONS
            .iter()
            .map(|inversion| {
                let changes = Changes {
                    inversion: *inversion,
                    inversion_depth: 0.7,
                    ozone: 0.95,
                    ..Changes::default()
                };
                (Standard::SubarcticWinter, changes)
            })
            .collect()
    }

    fn look(&self, spot: &Spot) -> Sighted {
        let strength = (1.0 + 0.7 * self.inversion.at(spot.x, spot.y)).clamp(0.0, 2.0);
        let low = strength.floor().min(1.0);
        let (a, b) = (INVERSIONS[low as usize], INVERSIONS[low as usize + 1]);
        let inversion = a + (strength - low) * (b - a);
        // 257.2 K is the ground of the subarctic winter; snow radiates itself colder than the air.
        let surface = 257.2 - inversion - 1.5 + 0.5 * self.snow.at(spot.x, spot.y);
        let mut footprint = clear(spot, strength, surface, vec![(Surface::Snow, 1.0)]);
        footprint.reflectivity_factor = 1.0 + 0.25 * self.snow.at(spot.y, spot.x);
        let deck = over_footprint(spot.x, spot.y, spot.radius, |x, y| {
            ramp(self.stratus.at(x, y), 0.4, 0.75)
        });
        let top = 1.0 + 0.35 * self.tops.at(spot.x, spot.y).clamp(-1.5, 1.5);
        cover(&mut footprint, Particles::SmallDroplets, top, deck, 6.0);
        let veil = self.ice.at(spot.x, spot.y) - 0.85;
        cover(
            &mut footprint,
            Particles::SmallIce,
            6.8,
            ramp(veil, 0.0, 0.4),
            0.9 * ramp(veil, 0.0, 1.8),
        );
        Sighted { footprint, land: 1.0, so2: 0.0 }
    }
}
