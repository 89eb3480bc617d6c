//! Places on the globe: points of the unit sphere, and which of them lie near.

mod bearing;
mod kd_tree;
mod positions;
mod sun;

pub use bearing::bearing;
pub use kd_tree::KdTree;
pub use positions::{Vector, cross, dot, mean, minus, point, times};
pub use sun::sun_angles;

/// The Earth's mean radius, m. Source: Moritz 2000, Geodetic Reference System 1980, J. Geodesy 74,
/// 128 (R1). An ellipsoid's distances differ by up to 0.6 %.
pub const EARTH_RADIUS: f64 = 6_371_008.8;

/// The straight line under an arc on the ground, on the unit sphere. `metres` may be larger than half
/// around the globe.
pub fn chord(metres: f64) -> f64 {
    2.0 * (0.5 * (metres / EARTH_RADIUS).min(std::f64::consts::PI)).sin()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn chords_of_arcs() {
        // A quarter around the globe is 10007.6 km; its chord is the root of two.
        let quarter = EARTH_RADIUS * std::f64::consts::FRAC_PI_2;
        assert!((chord(quarter) - 2.0_f64.sqrt()).abs() < 1e-15);
        assert_eq!(chord(1e9), 2.0);
    }
}
