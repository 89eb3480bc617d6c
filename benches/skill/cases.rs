//! Footprints with their truth and what the tests say.

use std::path::Path;

use radsieve::granule::Opening;
use radsieve::layers::{Expression, evaluate};
use radsieve::review::Review;
use radsieve::screening::{Evidence, Rulebook};
use radsieve::system::Cancel;

/// Defects that leave much of a spectrum without a value or a signal: dead detector, lost scan line,
/// lost band. Single missing stretches, spikes, striping and repeated lines are not looked for yet.
const LOST: i32 = 1 | 1 << 3 | 1 << 5;

/// A granule that was screened.
pub struct Granule {
    /// Its name.
    pub name: String,
    /// Its footprints.
    pub cases: Vec<Case>,
}

/// A footprint.
pub struct Case {
    /// What is true.
    pub truth: Truth,
    /// What the tests say.
    pub evidence: Evidence,
}

/// What is true about a footprint.
#[derive(Debug, Clone, Copy)]
pub struct Truth {
    /// Effective cloud amount: share times emissivity at 11 um.
    pub effective: f64,
    /// Pressure at the top of the highest cloud, hPa; 1100 without cloud.
    pub top: f64,
    /// Optical depth of dust at 961 cm-1.
    pub dust: f64,
    /// Whether no cloud is in the footprint nor beside it.
    pub far_from_cloud: bool,
    /// Defect bits.
    pub defects: i32,
}

impl Granule {
    /// Reads and screens a synthetic granule.
    pub fn screened(
        opening: &Opening,
        file: &Path,
        rulebook: &Rulebook,
    ) -> Result<Granule, Box<dyn std::error::Error>> {
        let review = Review::open(opening, file)?;
        let screened = review.screen(rulebook, &Cancel::new())?;
        let column = |text: &str| -> Result<Vec<f64>, Box<dyn std::error::Error>> {
            Ok(evaluate(&Expression::parse(text)?, &review.names())?.values)
        };
        let amount = column("var(\"truth/cloud_amount\")")?;
        let depth = column("var(\"truth/cloud_optical_depth\")")?;
        let top = column("var(\"truth/cloud_top_pressure\")")?;
        let dust = column("var(\"truth/dust_optical_depth\")")?;
        let beside = column("max3(var(\"truth/cloud_amount\"))")?;
        let defects = column("var(\"truth/defects\")")?;
        let case = |at: usize| {
            let truth = Truth {
                effective: amount[at] * (1.0 - (-depth[at] / amount[at].max(1e-3)).exp()),
                top: if top[at].is_nan() { 1100.0 } else { top[at] },
                dust: dust[at],
                far_from_cloud: beside[at] < 0.005,
                defects: defects[at] as i32,
            };
            Some(Case { truth, evidence: screened.evidence(at)? })
        };
        let cases = (0..screened.footprints()).filter_map(case).collect();
        Ok(Granule { name: review.granule().name(), cases })
    }
}

impl Truth {
    /// Whether a flag should be set; `None` where it is a matter of taste.
    pub fn deserves(&self, flag: &str) -> Option<bool> {
        let (effective, low) = (self.effective, self.top > 500.0);
        let sound = self.defects == 0;
        match flag {
            "bad_spectrum" if self.defects & LOST != 0 => Some(true),
            "bad_spectrum" => sound.then_some(false),
            _ if !sound => None,
            "cloudy" if effective > 0.5 || (low && effective > 0.15) => Some(true),
            "cloudy" => (effective < 0.02).then_some(false),
            "thin_cloud" if !low && (0.05..=0.6).contains(&effective) => Some(true),
            "thin_cloud" => (effective < 0.02 || low).then_some(false),
            "dust_or_ash" if self.dust >= 0.2 && effective < 0.1 => Some(true),
            "dust_or_ash" => (self.dust < 0.02).then_some(false),
            _ => Some(false),
        }
    }
}

impl Case {
    /// Whether the tests set a flag.
    pub fn is_set(&self, flag: &str) -> bool {
        self.evidence.flags.iter().any(|one| one.flag == flag && one.set)
    }

    /// Whether the tests see cloud of any kind.
    pub fn is_cloud(&self) -> bool {
        self.is_set("cloudy") || self.is_set("thin_cloud")
    }
}
