//! What is true about a footprint and no instrument sees directly.

use super::scene::Sighted;
use crate::forward::Particles;

/// The truth of one footprint.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Truth {
    /// Share of the footprint under cloud of any kind, layers overlapping at random.
    pub cloud_amount: f32,
    /// Absorption optical depth of all clouds at 909 cm-1, weighted with their amounts.
    pub cloud_optical_depth: f32,
    /// Pressure at the top of the highest cloud, hPa; NaN without cloud.
    pub cloud_top_pressure: f32,
    /// 0 no cloud, 1 water, 2 ice: of the highest cloud.
    pub cloud_phase: i8,
    /// Optical depth of dust at 961 cm-1.
    pub dust_optical_depth: f32,
    /// Optical depth of ash at 909 cm-1.
    pub ash_optical_depth: f32,
    /// Sulphur dioxide, Dobson units.
    pub so2: f32,
    /// Surface temperature, K.
    pub surface_temperature: f32,
    /// Share of land.
    pub land: f32,
    /// Bits of what is wrong with the footprint's spectra.
    pub defects: i32,
    /// Whether a channel that is not dead throughout has no value.
    pub has_missing: bool,
}

impl Truth {
    /// The truth of what a scene shows; defects come later.
    pub fn of(sighted: &Sighted, pressure: impl Fn(f64) -> f64) -> Truth {
        let clouds = || {
            sighted
                .footprint
                .covers
                .iter()
                .filter(|cover| !matches!(cover.particles, Particles::Dust | Particles::Ash))
        };
        let clear: f64 = clouds().map(|cloud| 1.0 - cloud.amount).product();
        // Covers ascend in height.
        let highest = clouds().next_back();
        let depth_of = |kind: Particles| {
            let covers = sighted.footprint.covers.iter().filter(move |c| c.particles == kind);
            covers.map(|c| c.amount * c.optical_depth).sum::<f64>() as f32
        };
        Truth {
            cloud_amount: (1.0 - clear) as f32,
            cloud_optical_depth: clouds().map(|c| c.amount * c.optical_depth).sum::<f64>() as f32,
            cloud_top_pressure: highest.map_or(f32::NAN, |c| pressure(c.height) as f32),
            cloud_phase: highest.map_or(0, |c| match c.particles {
                Particles::SmallDroplets | Particles::Droplets => 1,
                _ => 2,
            }),
            dust_optical_depth: depth_of(Particles::Dust),
            ash_optical_depth: depth_of(Particles::Ash),
            so2: sighted.so2 as f32,
            surface_temperature: sighted.footprint.surface_temperature as f32,
            land: sighted.land as f32,
            defects: 0,
            has_missing: false,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synth::scene::{Spot, clear, cover};

    #[test]
    fn two_half_covers_leave_a_quarter_free() {
        let spot = Spot { x: 0.0, y: 0.0, radius: 7.0, view_zenith: 0.0, sun_zenith: 120.0 };
        let mut footprint = clear(&spot, 0.0, 290.0, Vec::new());
        cover(&mut footprint, Particles::Ice, 10.0, 0.5, 1.0);
        cover(&mut footprint, Particles::Droplets, 1.0, 0.5, 8.0);
        cover(&mut footprint, Particles::Dust, 3.0, 1.0, 0.4);
        let truth =
            Truth::of(&Sighted { footprint, land: 0.0, so2: 0.0 }, |height| 1000.0 - 70.0 * height);
        assert_eq!(truth.cloud_amount, 0.75);
        assert_eq!((truth.cloud_phase, truth.cloud_top_pressure), (2, 300.0));
        assert_eq!((truth.dust_optical_depth, truth.cloud_optical_depth), (0.4, 4.5));
    }
}
