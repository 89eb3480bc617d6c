//! What a scene is: the air over it, and what each footprint looks at.

use super::swath::Position;
use crate::forward::{Changes, Cover, Footprint, Particles, Standard, Surface};

/// A footprint for which a scene is asked.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spot {
    /// Distance east of the scene's middle, km.
    pub x: f64,
    /// Distance north of the scene's middle, km.
    pub y: f64,
    /// Radius of the footprint, km.
    pub radius: f64,
    /// View zenith angle, degrees.
    pub view_zenith: f64,
    /// Sun's zenith angle, degrees.
    pub sun_zenith: f64,
}

/// What a scene shows in one footprint.
#[derive(Debug, Clone, PartialEq)]
pub struct Sighted {
    /// What the forward model is asked for.
    pub footprint: Footprint,
    /// Share of land.
    pub land: f64,
    /// Sulphur dioxide above the footprint, Dobson units.
    pub so2: f64,
}

/// When and where a scene lies.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Setting {
    /// Its middle.
    pub centre: Position,
    /// Direction of flight, degrees clockwise from north.
    pub heading: f64,
    /// Scan angle of the middle of small granules, degrees.
    pub middle_angle: f64,
    /// Seconds since 2000-01-01 00:00 UTC.
    pub time: f64,
    /// Whether sunlight matters.
    pub by_day: bool,
    /// Whether the scene may as well be seen half a day later: open sea, whose warmth stays.
    pub any_hour: bool,
}

/// A scene: fields that were drawn from a seed.
pub trait Scene: Sync {
    /// The atmospheres that footprints mix: standard ones with changes.
    fn airs(&self) -> Vec<(Standard, Changes)>;
    /// What stands in one footprint.
    fn look(&self, spot: &Spot) -> Sighted;
}

/// Seconds from 2000-01-01 to an hour of a day of 2026.
pub const fn seconds_in_2026(day_of_year: u32, hour: f64) -> f64 {
    // 26 years with 7 leap days.
    ((26 * 365 + 7 + day_of_year - 1) as f64 * 24.0 + hour) * 3600.0
}

/// A clear footprint to start from.
pub fn clear(
    spot: &Spot,
    air: f64,
    surface_temperature: f64,
    ground: Vec<(Surface, f64)>,
) -> Footprint {
    Footprint {
        air,
        view_zenith: spot.view_zenith,
        sun_zenith: spot.sun_zenith,
        surface_temperature,
        ground,
        reflectivity_factor: 1.0,
        covers: Vec::new(),
    }
}

/// Adds a cover unless it is too thin to leave a trace.
pub fn cover(
    footprint: &mut Footprint,
    particles: Particles,
    height: f64,
    amount: f64,
    depth: f64,
) {
    if amount > 0.002 && depth > 0.002 {
        footprint.covers.push(Cover {
            particles,
            height: height.max(0.05),
            amount: amount.min(1.0),
            optical_depth: depth,
            scattering: 1.0,
        });
        footprint.covers.sort_by(|a, b| a.height.total_cmp(&b.height));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn seconds_agree_with_the_calendar() {
        let start: jiff::Timestamp = "2000-01-01T00:00:00Z".parse().unwrap();
        let end: jiff::Timestamp = "2026-09-14T03:30:00Z".parse().unwrap();
        let expected = (end.as_second() - start.as_second()) as f64;
        // 14 September is day 257 of a year without a leap day.
        assert_eq!(seconds_in_2026(257, 3.5), expected);
    }
}
