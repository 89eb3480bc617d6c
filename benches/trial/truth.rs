//! What is true of each footprint of a granule, and whether a retrieval may use it.

use radsieve::review::Review;

use crate::Mishap;
use crate::cases::{LOST, Truth, truths};

/// The flags on which a footprint's use depends and that a scene can deserve.
pub const FLAGS: [&str; 5] = ["bad_spectrum", "cloudy", "dust_or_ash", "so2", "thin_cloud"];

/// A footprint of a synthetic granule.
#[derive(Debug, Clone, Copy)]
pub struct Sight(Truth);

impl Sight {
    /// All footprints of a granule.
    pub fn of(review: &Review) -> Result<Vec<Sight>, Mishap> {
        Ok(truths(review, review.granule().footprints().count())?.into_iter().map(Sight).collect())
    }

    /// Whether a flag should be set, as `docs/skill.md` counts it; `None` where it is a matter of taste.
    pub fn deserves(&self, flag: &str) -> Option<bool> {
        self.0.deserves(flag)
    }

    /// Whether a retrieval may use it; `None` where that is a matter of taste.
    pub fn is_usable(&self) -> Option<bool> {
        let words = FLAGS.map(|flag| self.deserves(flag));
        match () {
            () if words.contains(&Some(true)) => Some(false),
            () => words.iter().all(|word| *word == Some(false)).then_some(true),
        }
    }

    /// The same with the line drawn through the middle of what is a matter of taste.
    pub fn is_rather_usable(&self) -> bool {
        self.is_usable().unwrap_or_else(|| self.word().is_none())
    }

    /// The one flag that a person would give who saw all this, or none.
    pub fn word(&self) -> Option<&'static str> {
        let Truth { effective, top, particles, so2, defects, .. } = self.0;
        match () {
            () if defects & LOST != 0 => Some("bad_spectrum"),
            () if effective >= 0.5 || (top > 500.0 && effective >= 0.1) => Some("cloudy"),
            () if particles >= 0.1 => Some("dust_or_ash"),
            () if so2 >= 10.0 => Some("so2"),
            () if effective >= 0.05 => Some("thin_cloud"),
            () => None,
        }
    }
}
