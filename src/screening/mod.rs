//! Rulebook, tests, margins, evidence and doubt: published tests that say why.
//!
//! ```text
//!  rulebook.toml --read--> Rulebook --run over Names--> values, thresholds, margins --combine--> Screened
//! ```
//!
//! Uses: `system`, `units`, `spectral`, `granule`, `layers`, `forward`.
//!
//! **Never** records anything.

mod builtin;
mod catalogue_used;
mod change_threshold;
mod check_names;
mod cloud_height;
mod combine;
mod departures;
mod evidence;
pub mod health;
mod histogram;
mod judgements;
mod lent_names;
mod mistakes;
mod order;
mod read_rulebook;
mod read_threshold;
mod rulebook;
mod run_tests;
mod screened;
mod table_reader;
mod threshold;
pub mod unusual;
mod trying;
mod verdict;

#[cfg(test)]
mod combine_tests;
#[cfg(test)]
mod rulebook_tests;
#[cfg(test)]
mod surroundings_tests;
#[cfg(test)]
mod worked_tests;

pub use builtin::{BUILTIN_TEXT, builtin};
pub use change_threshold::{with_threshold, with_threshold_as};
pub use cloud_height::{CLOUD_HEIGHT_NAMES, CloudHeight, Profile, ProfileError};
pub use departures::{Departures, RANKED_NAMES, RankedChannels};
pub use evidence::{
    Evidence, FamilyVoice, FlagEvidence, HealthEvidence, Reconstruction, TestEvidence,
};
pub use histogram::{Histogram, bin_of, proposed_threshold, usual_range};
pub use mistakes::{RuleMistake, RulebookError};
pub use rulebook::{Definition, Family, Rulebook, Surface, Test, Way};
pub use run_tests::TestResult;
pub use screened::{FlagResult, Screened, Summary, screen};
pub use threshold::{Sense, Table, Threshold};
pub use trying::{Agreement, Tried, try_threshold};
pub use verdict::Verdict;
