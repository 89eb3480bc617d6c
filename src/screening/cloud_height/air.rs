//! The air that cloud height is worked out with: levels, transmittances, clear radiances.

use std::sync::OnceLock;

use super::intervals::{INTERVALS, middle, width};
use crate::forward::{Atmosphere, Changes, Channel, Response, Standard, View, columns};
use crate::spectral::planck;

/// View zenith angles for which transmittances are computed, degrees; between them they are linear
/// in the secant.
const ANGLES: [f64; 5] = [0.0, 30.0, 45.0, 55.0, 62.0];

/// Clouds are looked for below this pressure only, hPa.
pub const LOWEST_PRESSURE: f64 = 60.0;

/// How far the temperatures of a standard atmosphere may be wrong, K.
pub const STANDARD_ERROR: f64 = 4.0;

/// Levels of air and what they let pass.
#[derive(Debug)]
pub struct Air {
    /// Pressures, hPa, from the ground upward.
    pub pressures: Vec<f64>,
    /// Temperatures, K.
    pub temperatures: Vec<f64>,
    /// The level of the tropopause: the coldest.
    pub tropopause: usize,
    /// By angle, then interval, then level: transmittance from the level to space.
    transmittances: Vec<Vec<Vec<f64>>>,
    /// By way of being wrong, then interval, then level: black-body radiance. The first way is none.
    black: Vec<Vec<Vec<f64>>>,
    /// By angle, then interval: radiance under clear sky over black ground as warm as the air there.
    clear: Vec<Vec<f64>>,
}

impl Air {
    /// Computes the transmittances of an atmosphere whose temperatures may be wrong by `error`, K.
    pub fn of(air: &Atmosphere, error: f64) -> Air {
        let levels: Vec<_> =
            air.levels().iter().take_while(|level| level.pressure >= LOWEST_PRESSURE).collect();
        let channels: Vec<Channel> = (0..INTERVALS.len())
            .map(|interval| Channel {
                wavenumber: middle(interval),
                response: Response::Box { width: width(interval) },
            })
            .collect();
        let view = View {
            zenith_angles: ANGLES.to_vec(),
            sun_zenith: None,
            cloud_heights: levels.iter().skip(1).map(|level| level.height).collect(),
        };
        let ground = levels.first().map_or(0.0, |level| level.temperature);
        let (mut transmittances, mut clear) = (Vec::new(), Vec::new());
        for column in columns(air, &channels, &view) {
            let of = |interval: usize| -> Vec<f64> {
                let above = column.above.iter().map(|above| above.transmittance[interval]);
                let all = std::iter::once(column.transmittance[interval]).chain(above);
                all.map(f64::from).collect()
            };
            transmittances.push((0..INTERVALS.len()).map(of).collect());
            let radiance = |interval: usize| {
                let passes = f64::from(column.transmittance[interval]);
                f64::from(column.emission[interval]) + passes * planck(middle(interval), ground)
            };
            clear.push((0..INTERVALS.len()).map(radiance).collect());
        }
        let temperatures: Vec<f64> = levels.iter().map(|level| level.temperature).collect();
        let coldest = (0..temperatures.len())
            .min_by(|one, other| temperatures[*one].total_cmp(&temperatures[*other]));
        let pressures: Vec<f64> = levels.iter().map(|level| level.pressure).collect();
        Air {
            black: black(&pressures, &temperatures, error),
            pressures,
            tropopause: coldest.unwrap_or(0),
            temperatures,
            transmittances,
            clear,
        }
    }

    /// The standard atmosphere nearest by latitude (degrees) and season (-1 winter, 1 summer): the
    /// tropical one up to 30 degrees, those of the middle latitudes up to 52, halfway between 45
    /// and 60, the subarctic ones beyond. Without latitude that of the United States; without season
    /// the same beyond the tropics. Computed at the first call.
    pub fn nearest(latitude: f64, season: f64) -> &'static Air {
        static COMPUTED: [OnceLock<Air>; 6] = [const { OnceLock::new() }; 6];
        let standard = match latitude.abs() {
            latitude if latitude < 30.0 => Standard::Tropical,
            latitude if latitude.is_nan() || season.is_nan() => Standard::UsStandard,
            latitude if latitude < 52.0 && season > 0.0 => Standard::MidlatitudeSummer,
            latitude if latitude < 52.0 => Standard::MidlatitudeWinter,
            _ if season > 0.0 => Standard::SubarcticSummer,
            _ => Standard::SubarcticWinter,
        };
        // Computed before the cell is locked: the work is shared among threads, and one that waits
        // for its share may take up another footprint, which asks for the same cell.
        let cell = &COMPUTED[standard as usize];
        if let Some(air) = cell.get() {
            return air;
        }
        let air = Air::of(&Atmosphere::new(standard, &Changes::default()), STANDARD_ERROR);
        cell.get_or_init(|| air)
    }

    /// Transmittances under a view zenith angle, degrees: by interval, then level.
    pub fn transmittances(&self, zenith: f64) -> Vec<Vec<f64>> {
        let (far, share) = between(zenith);
        let (one, other) = (&self.transmittances[far - 1], &self.transmittances[far]);
        one.iter().zip(other).map(|(one, other)| mix(one, other, share)).collect()
    }

    /// By interval, radiance under clear sky over black ground as warm as the air there under a view
    /// zenith angle, degrees; mW m-2 sr-1 (cm-1)-1.
    pub fn clear(&self, zenith: f64) -> Vec<f64> {
        let (far, share) = between(zenith);
        mix(&self.clear[far - 1], &self.clear[far], share)
    }

    /// By way in which the temperatures may be wrong, then interval, then level: black-body radiance,
    /// mW m-2 sr-1 (cm-1)-1. The first way is not to be wrong.
    pub fn black(&self) -> &[Vec<Vec<f64>>] {
        &self.black
    }
}

/// The angle beyond a view zenith angle, and how near it is to that one.
fn between(zenith: f64) -> (usize, f64) {
    let secant = |angle: f64| 1.0 / angle.to_radians().cos();
    let last = ANGLES.len() - 1;
    let far = ANGLES.partition_point(|angle| *angle < zenith).clamp(1, last);
    let (near, beyond) = (secant(ANGLES[far - 1]), secant(ANGLES[far]));
    let share = ((secant(zenith.min(ANGLES[last])) - near) / (beyond - near)).clamp(0.0, 1.0);
    (far, share)
}

fn mix(one: &[f64], other: &[f64], share: f64) -> Vec<f64> {
    one.iter().zip(other).map(|(one, other)| one + share * (other - one)).collect()
}

/// Black-body radiances with right temperatures, with all of them off by `error`, and with those above
/// too warm and those below too cold, turning at about 600 hPa.
fn black(pressures: &[f64], temperatures: &[f64], error: f64) -> Vec<Vec<Vec<f64>>> {
    let tilt = |pressure: f64| error * ((1000.0 / pressure).ln() / 0.5 - 1.0).clamp(-1.0, 1.0);
    let ways: [&dyn Fn(f64) -> f64; 3] = [&|_| 0.0, &|_| error, &tilt];
    let of = |way: &&dyn Fn(f64) -> f64, interval: usize| -> Vec<f64> {
        let levels = temperatures.iter().zip(pressures);
        let black = |(temperature, pressure): (&f64, &f64)| {
            planck(middle(interval), temperature + way(*pressure))
        };
        levels.map(black).collect()
    };
    ways.iter()
        .map(|way| (0..INTERVALS.len()).map(|interval| of(way, interval)).collect())
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::screening::cloud_height::slicing::overcast;

    #[test]
    fn the_atmosphere_follows_latitude_and_season() {
        let ground = |latitude, season| Air::nearest(latitude, season).temperatures[0];
        // Temperatures at the ground of [Anderson et al. 1986].
        assert_eq!(ground(-8.0, f64::NAN), 299.7);
        assert_eq!((ground(45.0, 0.5), ground(-45.0, -0.5)), (294.2, 272.2));
        assert_eq!((ground(70.0, 0.5), ground(70.0, -0.5)), (287.2, 257.2));
        assert_eq!((ground(f64::NAN, 1.0), ground(50.0, f64::NAN)), (288.2, 288.2));
    }

    /// The discrete rule and the forward model's own cloud agree: what an opaque cloud takes from
    /// clear sky is the sum over levels. 4 % covers one Planck function for an interval, and the
    /// trapezoid over levels 1 to 2 km apart against layers with a source of their own.
    #[test]
    fn the_sum_over_levels_is_what_an_opaque_cloud_takes() {
        let air = Atmosphere::new(Standard::MidlatitudeSummer, &Changes::default());
        let own = Air::of(&air, STANDARD_ERROR);
        let (transmittances, clear) = (own.transmittances(0.0), own.clear(0.0));
        let at = own.pressures.iter().position(|pressure| *pressure < 350.0).unwrap();
        let height = air.levels()[at].height;
        let view = View { zenith_angles: vec![0.0], sun_zenith: None, cloud_heights: vec![height] };
        for interval in 0..INTERVALS.len() {
            let channel = Channel {
                wavenumber: middle(interval),
                response: Response::Box { width: width(interval) },
            };
            let above = &columns(&air, &[channel], &view)[0].above[0];
            let black = planck(middle(interval), own.temperatures[at]);
            let cloudy = f64::from(above.emission[0]) + f64::from(above.transmittance[0]) * black;
            let taken = cloudy - clear[interval];
            let sum =
                overcast(middle(interval), &own.temperatures, &transmittances[interval], 0.0)[at];
            assert!((sum / taken - 1.0).abs() < 0.04, "{interval}: {sum} {taken}");
        }
    }
}
