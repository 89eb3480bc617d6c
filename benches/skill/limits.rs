//! What users ask first, and how often it holds.

use crate::cases::{Case, Granule, LOST};

/// A share of footprints.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Share {
    /// For how many it holds.
    pub held: usize,
    /// Of how many.
    pub all: usize,
}

impl Share {
    /// Between 0 and 1; not a number where there is no footprint.
    #[allow(dead_code, reason = "the bench prints")]
    pub fn rate(self) -> f64 {
        self.held as f64 / self.all as f64
    }
}

impl std::fmt::Display for Share {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self.all {
            0 => write!(f, "-"),
            all => write!(f, "{:.1} % of {all}", 100.0 * self.held as f64 / all as f64),
        }
    }
}

/// A question: which footprints are meant, and what the tests should or should not say.
pub struct Question {
    /// Head of its column.
    pub head: &'static str,
    of: fn(&Case) -> bool,
    holds: fn(&Case) -> bool,
}

impl Question {
    /// The answer for some granules.
    pub fn answer<'g>(&self, granules: impl IntoIterator<Item = &'g Granule>) -> Share {
        let mut share = Share::default();
        for case in granules.into_iter().flat_map(|granule| &granule.cases) {
            if (self.of)(case) {
                share.all += 1;
                share.held += usize::from((self.holds)(case));
            }
        }
        share
    }
}

/// Cloud with an effective amount above 0.3 and its top above 2 km: flagged.
pub const CLOUD: Question = Question {
    head: "cloud above 0.3, top above 2 km: flagged",
    of: |case| case.truth.is_cloud_aloft(),
    holds: Case::is_cloud,
};
/// Clear open sea away from cloud: flagged.
pub const CLEAR_SEA: Question = Question {
    head: "clear open sea: flagged",
    of: |case| case.truth.is_clear() && case.truth.is_sea(),
    holds: Case::is_alarm,
};
/// Dust or ash of optical depth 0.5 or more over sea, no cloud in the footprint: flagged.
pub const DUST: Question = Question {
    head: "dust or ash of 0.5 or more over sea: flagged",
    of: |case| case.truth.is_thick_dust() && case.truth.is_sea() && case.truth.effective < 0.1,
    holds: |case| case.is_set("dust_or_ash"),
};
/// Clear sea: flagged as dust.
pub const NO_DUST: Question = Question {
    head: "clear open sea: flagged as dust or ash",
    of: |case| case.truth.is_clear() && case.truth.is_sea(),
    holds: |case| case.is_set("dust_or_ash"),
};
/// Lost lines, lost bands, dead detectors: flagged bad.
pub const LOSSES: Question = Question {
    head: "lost lines, lost bands, dead detectors: flagged bad",
    of: |case| case.truth.defects & LOST != 0,
    holds: Case::is_bad,
};
/// Striping, spikes, repeated lines, missing stretches: flagged bad.
pub const SLIGHT: Question = Question {
    head: "striping, spikes, repeated lines, missing stretches: flagged bad",
    of: |case| !case.truth.is_sound() && case.truth.defects & LOST == 0,
    holds: Case::is_bad,
};
/// Sound spectra: flagged bad.
pub const SOUND: Question =
    Question { head: "sound: flagged bad", of: |case| case.truth.is_sound(), holds: Case::is_bad };
/// The questions with a limit.
#[allow(dead_code, reason = "the test asks one by one")]
pub const ASKED: [&Question; 7] = [&CLOUD, &CLEAR_SEA, &DUST, &NO_DUST, &LOSSES, &SLIGHT, &SOUND];

/// What else one wants to know.
#[allow(dead_code, reason = "the test asks for what has a limit")]
pub const MORE: [Question; 8] = [
    Question {
        head: "thin high cloud, 0.05 to 0.3: flagged",
        of: |case| {
            let truth = &case.truth;
            truth.is_sound() && truth.top < 500.0 && (0.05..0.3).contains(&truth.effective)
        },
        holds: Case::is_cloud,
    },
    Question {
        head: "low cloud above 0.3: flagged",
        of: |case| case.truth.is_sound() && case.truth.effective > 0.3 && case.truth.top >= 800.0,
        holds: Case::is_cloud,
    },
    Question {
        head: "other clear ground: flagged",
        of: |case| case.truth.is_clear() && !case.truth.is_sea(),
        holds: Case::is_alarm,
    },
    Question {
        head: "dust of 0.5 or more over land: flagged",
        of: |case| case.truth.is_thick_dust() && !case.truth.is_sea(),
        holds: |case| case.is_set("dust_or_ash"),
    },
    Question {
        head: "the same with cloud of 0.1 or more: flagged",
        of: |case| case.truth.is_thick_dust() && case.truth.effective >= 0.1,
        holds: |case| case.is_set("dust_or_ash"),
    },
    Question {
        head: "dust or ash of 0.5 or more, no cloud: flagged as cloud",
        of: |case| case.truth.is_thick_dust() && case.truth.effective < 0.02,
        holds: Case::is_cloud,
    },
    Question {
        head: "sulphur dioxide of 20 DU or more: flagged",
        of: |case| case.truth.is_sound() && case.truth.so2 >= 20.0,
        holds: |case| case.is_set("so2"),
    },
    Question { head: "not assessed", of: |_| true, holds: |case| !case.assessed },
];

/// Single defects of spectra, by bit.
#[allow(dead_code, reason = "the bench tells them apart")]
pub const DEFECTS: [(&str, i32); 7] = [
    ("dead detector", 1),
    ("lost scan line", 1 << 3),
    ("lost band", 1 << 5),
    ("striping", 1 << 1),
    ("spike", 1 << 2),
    ("repeated scan line", 1 << 4),
    ("missing stretch", 1 << 6),
];

/// Where scenes lie.
pub const CLIMATES: [(&str, &[&str]); 3] = [
    ("tropics", &["sea_of_lowen", "gulf_of_tamber"]),
    ("mid-latitudes", &["strait_of_pell", "hesk_isles", "ketter_desert"]),
    ("polar winter", &["norrik_plateau", "iskel_sound"]),
];

/// The granules of some scenes.
pub fn of_scenes<'g>(
    granules: &'g [Granule],
    scenes: &'g [&str],
) -> impl Iterator<Item = &'g Granule> {
    granules.iter().filter(|granule| scenes.iter().any(|scene| granule.name.contains(scene)))
}
