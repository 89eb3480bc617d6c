//! Clouds, dust and ash: absorption of particles relative to one reference wavenumber.

use super::interpolate::linear;

/// What a layer of particles is made of.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Particles {
    /// Water droplets of 6 um.
    SmallDroplets,
    /// Water droplets of 10 um.
    Droplets,
    /// Ice particles of 10 um.
    SmallIce,
    /// Ice particles of 20 um.
    Ice,
    /// Ice particles of 40 um.
    LargeIce,
    /// Mineral dust.
    Dust,
    /// Volcanic ash.
    Ash,
}

/// Absorption ratio to 909 cm-1 of spheres by anomalous diffraction (van de Hulst 1957) with the
/// indices of Hale & Querry 1973 (water) and Warren & Brandt 2008 (ice): wavenumber, then water
/// of 6 and 10 um, ice of 10, 20 and 40 um.
const CLOUD: [(f64, [f64; 5]); 21] = [
    (650.0, [1.571, 1.301, 0.819, 0.937, 0.984]),
    (700.0, [1.569, 1.300, 0.959, 0.989, 0.997]),
    (750.0, [1.544, 1.291, 1.017, 1.004, 1.001]),
    (800.0, [1.472, 1.264, 1.035, 1.009, 1.002]),
    (833.3, [1.366, 1.217, 1.036, 1.009, 1.002]),
    (870.0, [1.200, 1.129, 1.031, 1.008, 1.002]),
    (909.1, [1.0, 1.0, 1.0, 1.0, 1.0]),
    (930.0, [0.913, 0.936, 0.941, 0.983, 0.996]),
    (961.1, [0.785, 0.834, 0.762, 0.908, 0.975]),
    (1000.0, [0.689, 0.751, 0.583, 0.786, 0.928]),
    (1042.0, [0.653, 0.719, 0.530, 0.740, 0.904]),
    (1127.7, [0.617, 0.686, 0.515, 0.726, 0.897]),
    (1163.0, [0.610, 0.678, 0.526, 0.736, 0.902]),
    (1231.3, [0.605, 0.674, 0.554, 0.762, 0.916]),
    (1306.0, [0.608, 0.677, 0.607, 0.806, 0.937]),
    (1540.0, [0.787, 0.835, 0.793, 0.924, 0.980]),
    (2000.0, [0.385, 0.453, 0.354, 0.553, 0.774]),
    (2143.0, [0.490, 0.561, 0.577, 0.781, 0.925]),
    (2390.0, [0.260, 0.315, 0.512, 0.723, 0.895]),
    (2500.0, [0.192, 0.236, 0.409, 0.618, 0.826]),
    (2616.0, [0.154, 0.191, 0.303, 0.488, 0.715]),
];

/// Extinction ratio of mineral dust to 961 cm-1; shape after DeSouza-Machado et al. 2006.
const DUST: &[(f64, f64)] = &[
    (600.0, 0.40),
    (700.0, 0.45),
    (760.0, 0.55),
    (833.0, 0.60),
    (870.0, 0.66),
    (909.0, 0.78),
    (961.0, 1.0),
    (1000.0, 1.25),
    (1040.0, 1.5),
    (1080.0, 1.5),
    (1110.0, 1.3),
    (1163.0, 0.85),
    (1200.0, 0.62),
    (1231.0, 0.50),
    (1300.0, 0.40),
    (2100.0, 0.30),
    (2800.0, 0.30),
];

/// Extinction ratio of ash to 909 cm-1, a silicate V shape.
const ASH: &[(f64, f64)] = &[
    (770.0, 0.50),
    (833.0, 0.62),
    (870.0, 0.78),
    (909.0, 1.0),
    (961.0, 1.3),
    (1000.0, 1.6),
    (1060.0, 1.8),
    (1100.0, 1.7),
    (1163.0, 1.1),
    (1231.0, 0.6),
    (1300.0, 0.4),
];

impl Particles {
    /// Absorption relative to that at 909 cm-1 (961 cm-1 for dust), at a wavenumber in cm-1.
    pub fn ratio(self, wavenumber: f64) -> f64 {
        let column = match self {
            Particles::SmallDroplets => 0,
            Particles::Droplets => 1,
            Particles::SmallIce => 2,
            Particles::Ice => 3,
            Particles::LargeIce => 4,
            Particles::Dust => return linear(DUST, wavenumber),
            Particles::Ash => return linear(ASH, wavenumber),
        };
        let points: Vec<(f64, f64)> = CLOUD.iter().map(|(nu, row)| (*nu, row[column])).collect();
        linear(&points, wavenumber)
    }

    /// Emissivity of an opaque layer: droplets scatter above 2000 cm-1 and reach only about 0.85,
    /// which is why fog looks colder at 4 um than at 11 um by night (Eyre et al. 1984).
    pub fn thick_emissivity(self, wavenumber: f64) -> f64 {
        let short_wave = ((wavenumber - 1900.0) / 300.0).clamp(0.0, 1.0);
        match self {
            Particles::SmallDroplets | Particles::Droplets => 1.0 - 0.15 * short_wave,
            Particles::SmallIce | Particles::Ice => 1.0 - 0.04 * short_wave,
            Particles::LargeIce => 1.0 - 0.02 * short_wave,
            Particles::Dust | Particles::Ash => 1.0 - 0.08 * short_wave,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ice_absorbs_more_at_twelve_than_at_eleven_micrometres_and_less_at_ten() {
        let ratio = |nu: f64| Particles::SmallIce.ratio(nu);
        assert!(ratio(833.0) > ratio(909.0) && ratio(909.0) > ratio(961.0));
    }

    #[test]
    fn dust_is_the_other_way_round() {
        let ratio = |nu: f64| Particles::Dust.ratio(nu);
        assert!(ratio(833.0) < ratio(909.0) && ratio(909.0) < ratio(961.0));
        assert_eq!(ratio(961.0), 1.0);
    }

    #[test]
    fn small_spheres_follow_anomalous_diffraction() {
        // Qabs = 1 + 2 e^-w/w + 2 (e^-w - 1)/w^2, w = 8 pi r nu k (van de Hulst 1957), with
        // k = 0.1991 at 833.3 and 0.0968 at 909.1 cm-1 (Hale & Querry 1973), r = 6 um.
        let q = |nu: f64, k: f64| {
            let w = 8.0 * std::f64::consts::PI * 6e-4 * nu * k;
            1.0 + 2.0 * (-w).exp() / w + 2.0 * ((-w).exp() - 1.0) / (w * w)
        };
        let expected = q(833.3, 0.1991) / q(909.1, 0.0968);
        assert!((Particles::SmallDroplets.ratio(833.3) - expected).abs() < 0.001, "{expected}");
    }
}
