//! Asymmetric tops as seeded pseudo-lines: the right amount of absorption in the right place, with
//! lines that are as many and as uneven as real ones, but not one by one the real ones.
//!
//! Band strengths after HITRAN (Rothman et al. 2005). The placing is a recipe for demonstration
//! spectra; no one should look up a line position here.

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

use super::gas::Gas;
use super::line::Line;

/// Microwindows that are clean in the real atmosphere, cm-1; kept free of water lines.
const CLEAN: [f64; 6] = [831.0, 900.3, 961.1, 1127.7, 1201.0, 1231.3];
/// How far around a microwindow no water line may stand, cm-1.
const CLEAN_MARGIN: f64 = 1.5;

struct Draw(ChaCha8Rng);

impl Draw {
    fn new(seed: u64) -> Draw {
        Draw(ChaCha8Rng::seed_from_u64(seed))
    }

    /// Uniform in the open interval (0, 1).
    fn uniform(&mut self) -> f64 {
        ((self.0.next_u64() >> 11) as f64 + 0.5) / (1u64 << 53) as f64
    }

    /// Exponential with mean 1.
    fn exponential(&mut self) -> f64 {
        -self.uniform().ln()
    }
}

/// The nu3 and nu1 bands of ozone: 30 lines per cm-1 under two lobes each.
pub(super) fn ozone() -> Vec<Line> {
    let mut lines = ozone_band(&OzoneBand {
        seed: 9_600,
        centre: 1042.08,
        range: (975.0, 1075.0),
        strength: 1.4e-17,
        lobes: (15.0, 11.0),
        gap: 0.005,
    });
    lines.extend(ozone_band(&OzoneBand {
        seed: 9_060,
        centre: 1103.14,
        range: (1060.0, 1160.0),
        strength: 6e-19,
        lobes: (12.0, 8.5),
        gap: 0.08,
    }));
    lines
}

struct OzoneBand {
    seed: u64,
    centre: f64,
    range: (f64, f64),
    strength: f64,
    /// Distance of the strongest absorption on the low and the high side, cm-1.
    lobes: (f64, f64),
    /// Share of the strength spread evenly about the centre, else the gap is too transparent.
    gap: f64,
}

impl OzoneBand {
    fn envelope(&self, distance: f64) -> f64 {
        let (scale, share) =
            if distance < 0.0 { (self.lobes.0, 0.55) } else { (self.lobes.1, 0.45) };
        let d = distance.abs();
        let lobe = share * d / (scale * scale) * (-0.5 * d * d / (scale * scale)).exp();
        let filling = if d < 8.0 { 1.0 / 16.0 } else { 0.0 };
        (1.0 - self.gap) * lobe + self.gap * filling
    }
}

fn ozone_band(band: &OzoneBand) -> Vec<Line> {
    let mut draw = Draw::new(band.seed);
    let count = ((band.range.1 - band.range.0) * 30.0) as usize;
    let mut lines: Vec<Line> = (0..count)
        .map(|_| {
            let centre = band.range.0 + draw.uniform() * (band.range.1 - band.range.0);
            let distance = centre - band.centre;
            Line {
                gas: Gas::O3,
                centre,
                strength: draw.exponential() * band.envelope(distance),
                lower_energy: 50.0 + 20.0 * distance.abs(),
                width: 0.070,
                width_exponent: 0.76,
            }
        })
        .collect();
    let sum: f64 = lines.iter().map(|line| line.strength).sum();
    for line in &mut lines {
        line.strength *= band.strength / sum;
    }
    lines
}

/// The nu2 band of water, and the tail of its rotation band.
pub(super) fn water() -> Vec<Line> {
    let mut lines = water_nu2();
    lines.extend(water_rotation());
    lines.retain(|line| CLEAN.iter().all(|clean| (line.centre - clean).abs() > CLEAN_MARGIN));
    lines
}

/// 0.55 lines per cm-1 under `(d/60) exp(-d/60)`, d the distance from the band centre.
fn water_nu2() -> Vec<Line> {
    const CENTRE: f64 = 1594.75;
    const STRENGTH: f64 = 1.06e-17;
    const RANGE: (f64, f64) = (1150.0, 2300.0);
    let mut draw = Draw::new(107);
    let count = ((RANGE.1 - RANGE.0) * 0.55) as usize;
    let mut lines: Vec<Line> = (0..count)
        .map(|_| {
            let centre = RANGE.0 + draw.uniform() * (RANGE.1 - RANGE.0);
            let d = (centre - CENTRE).abs();
            Line {
                gas: Gas::H2o,
                centre,
                strength: draw.exponential() * (d / 60.0) * (-d / 60.0).exp() * taper(centre),
                lower_energy: (100.0 + 3.8 * d).min(1500.0),
                width: 0.075,
                width_exponent: 0.65,
            }
        })
        .collect();
    let sum: f64 = lines.iter().map(|line| line.strength).sum();
    for line in &mut lines {
        line.strength *= STRENGTH / sum;
    }
    lines
}

/// Beyond 1280 and 2050 cm-1 the real band falls faster than its exponential envelope.
fn taper(wavenumber: f64) -> f64 {
    let below = (1280.0 - wavenumber).max(0.0) / 14.0;
    let above = (wavenumber - 2050.0).max(0.0) / 40.0;
    (-below - above).exp()
}

/// 0.35 lines per cm-1 whose mean strength falls by ten in 160 cm-1.
fn water_rotation() -> Vec<Line> {
    const RANGE: (f64, f64) = (560.0, 1150.0);
    const DENSITY: f64 = 0.35;
    let mut draw = Draw::new(560);
    let count = ((RANGE.1 - RANGE.0) * DENSITY) as usize;
    (0..count)
        .map(|_| {
            let centre = RANGE.0 + draw.uniform() * (RANGE.1 - RANGE.0);
            let intensity = 10f64.powf(-21.1 - (centre - 560.0) / 160.0);
            Line {
                gas: Gas::H2o,
                centre,
                strength: draw.exponential() * intensity / DENSITY,
                lower_energy: 400.0 + 2.5 * (centre - 560.0),
                width: 0.075,
                width_exponent: 0.65,
            }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn microwindows_stay_clean() {
        for line in water() {
            for clean in CLEAN {
                assert!((line.centre - clean).abs() > CLEAN_MARGIN, "{}", line.centre);
            }
        }
    }

    #[test]
    fn ozone_is_strongest_beside_the_gap() {
        let lines = ozone();
        let sum = |low: f64, high: f64| -> f64 {
            lines.iter().filter(|l| (low..high).contains(&l.centre)).map(|l| l.strength).sum()
        };
        let (p_side, gap, r_side) =
            (sum(1024.0, 1032.0), sum(1040.0, 1044.0) * 2.0, sum(1050.0, 1058.0));
        assert!(p_side > 2.0 * gap && r_side > 2.0 * gap, "{p_side:e} {gap:e} {r_side:e}");
    }

    #[test]
    fn the_same_lines_every_time() {
        assert_eq!(water(), water());
        assert_eq!(ozone().len(), 6000);
    }
}
