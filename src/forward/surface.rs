//! Emissivity of surfaces.

use super::interpolate::linear;

/// A kind of ground.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Surface {
    /// Water: Fresnel emissivity, falling with the view angle.
    Sea,
    /// Quartz sand: reststrahlen between 1080 and 1250 cm-1, low again above 2300.
    Desert,
    /// Bare rock and soil with less quartz.
    Soil,
    /// Vegetation: nearly flat.
    Vegetation,
    /// Snow and ice.
    Snow,
}

/// Angles of the table below, degrees.
const SEA_ANGLES: [f64; 5] = [0.0, 30.0, 45.0, 55.0, 60.0];

/// Emissivity of pure water from its optical constants by Fresnel's equations (indices: Hale &
/// Querry 1973); sea water lies within about 0.003 (Friedman 1969; Masuda et al. 1988).
const SEA: [(f64, [f64; 5]); 10] = [
    (645.2, [0.9523, 0.9501, 0.9376, 0.9112, 0.8861]),
    (769.2, [0.9757, 0.9740, 0.9639, 0.9404, 0.9169]),
    (833.3, [0.9885, 0.9875, 0.9815, 0.9659, 0.9489]),
    (909.1, [0.9929, 0.9924, 0.9889, 0.9793, 0.9683]),
    (1000.0, [0.9898, 0.9891, 0.9848, 0.9737, 0.9612]),
    (1111.0, [0.9863, 0.9855, 0.9803, 0.9673, 0.9532]),
    (1162.8, [0.9851, 0.9843, 0.9788, 0.9653, 0.9508]),
    (1587.0, [0.9765, 0.9753, 0.9683, 0.9518, 0.9346]),
    (2174.0, [0.9799, 0.9788, 0.9724, 0.9570, 0.9408]),
    (2632.0, [0.9763, 0.9751, 0.9681, 0.9517, 0.9345]),
];

/// Quartz sand after Salisbury & D'Aria 1992 and 1994: .95-.97 at 800-950, .60-.80 at 1080-1250 with
/// a small peak near 1160, .75-.90 at 2500-2800.
const DESERT: &[(f64, f64)] = &[
    (600.0, 0.955),
    (780.0, 0.950),
    (800.0, 0.955),
    (850.0, 0.965),
    (950.0, 0.960),
    (1000.0, 0.930),
    (1040.0, 0.880),
    (1080.0, 0.770),
    (1110.0, 0.715),
    (1140.0, 0.700),
    (1160.0, 0.715),
    (1180.0, 0.690),
    (1210.0, 0.710),
    (1240.0, 0.800),
    (1270.0, 0.920),
    (1310.0, 0.968),
    (1400.0, 0.965),
    (2000.0, 0.950),
    (2200.0, 0.920),
    (2400.0, 0.860),
    (2500.0, 0.830),
    (2650.0, 0.840),
    (2800.0, 0.860),
];

const SOIL: &[(f64, f64)] = &[
    (600.0, 0.965),
    (850.0, 0.970),
    (950.0, 0.968),
    (1080.0, 0.930),
    (1150.0, 0.915),
    (1230.0, 0.930),
    (1320.0, 0.965),
    (2200.0, 0.950),
    (2600.0, 0.910),
    (2800.0, 0.910),
];

const VEGETATION: &[(f64, f64)] =
    &[(600.0, 0.980), (900.0, 0.982), (1200.0, 0.978), (2800.0, 0.975)];

/// Snow after Salisbury et al. 1994: .985-.995 near 11 um, .97-.98 at 12 um.
const SNOW: &[(f64, f64)] = &[
    (600.0, 0.960),
    (770.0, 0.965),
    (833.0, 0.975),
    (870.0, 0.984),
    (910.0, 0.992),
    (960.0, 0.994),
    (1100.0, 0.990),
    (1250.0, 0.986),
    (2000.0, 0.980),
    (2800.0, 0.970),
];

impl Surface {
    /// Emissivity at a wavenumber (cm-1) seen under a zenith angle (degrees).
    pub fn emissivity(self, wavenumber: f64, zenith_angle: f64) -> f64 {
        match self {
            Surface::Sea => sea(wavenumber, zenith_angle),
            Surface::Desert => linear(DESERT, wavenumber),
            Surface::Soil => linear(SOIL, wavenumber),
            Surface::Vegetation => linear(VEGETATION, wavenumber),
            Surface::Snow => linear(SNOW, wavenumber),
        }
    }
}

fn sea(wavenumber: f64, zenith_angle: f64) -> f64 {
    let at_angle = |row: &[f64; 5]| {
        let points: Vec<(f64, f64)> = SEA_ANGLES.iter().copied().zip(row.iter().copied()).collect();
        linear(&points, zenith_angle)
    };
    let spectrum: Vec<(f64, f64)> = SEA.iter().map(|(nu, row)| (*nu, at_angle(row))).collect();
    linear(&spectrum, wavenumber)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_sea_darkens_towards_grazing_view() {
        // Two cells of the published table, and the way between two angles.
        assert_eq!(Surface::Sea.emissivity(909.1, 0.0), 0.9929);
        assert_eq!(Surface::Sea.emissivity(1000.0, 60.0), 0.9612);
        let between = Surface::Sea.emissivity(909.1, 50.0);
        assert!((0.9793..0.9889).contains(&between));
    }

    #[test]
    fn the_desert_copies_the_quartz_signature() {
        let at = |nu: f64| Surface::Desert.emissivity(nu, 0.0);
        assert!((0.60..=0.80).contains(&at(1120.0)) && (0.60..=0.80).contains(&at(1231.0)));
        assert!(at(1160.0) > at(1140.0) && at(1160.0) > at(1180.0));
        assert!((0.95..=0.97).contains(&at(900.0)));
        assert!((0.75..=0.90).contains(&at(2616.0)));
    }
}
