//! Flag vocabulary, decisions, the ledger files and their replay into the current flags.
//!
//! Facts are appended, state is replayed: nothing here sets a flag. A decision is appended to the
//! ledger of its writer, and the flags are folded from all decisions of a granule.
//!
//! Uses: `system`.
//!
//! **Never** changes a written line.

mod author;
mod campaign;
mod campaign_settings;
mod clopper_pearson;
mod decision;
#[cfg(test)]
mod disk_trouble_tests;
mod footprint_set;
mod granule_state;
mod history;
mod key_settings;
mod ledger_file;
mod ledger_keeper;
mod ledger_line;
mod ledger_lines;
mod ledger_reader;
#[cfg(test)]
mod ledger_tests;
mod ledger_writer;
mod persons_words;
mod places;
mod plane;
mod protected_parts;
mod quality_map;
mod replay;
#[cfg(test)]
mod replay_properties;
#[cfg(test)]
mod replay_tests;
mod review_state;
mod rulebook_changes;
mod sign_off_limits;
mod spot_check;
mod state;
mod vocabulary;

pub use author::{Author, file_name_part};
pub use campaign::{Campaign, CampaignError, GranuleIdentity};
pub use campaign_settings::{CampaignSettings, SETTINGS_FILE};
pub use clopper_pearson::clopper_pearson;
pub use decision::{Act, ChannelName, Decision, DecisionId, FlagAt, Origin, PRODUCER, Ruling};
pub use footprint_set::FootprintSet;
pub use history::{
    OwnTimes, SCREENED_BY, of_step, own_steps, own_times, redo_target, screened_by, spot_checks,
    standing, undo_target,
};
pub use key_settings::KeySetting;
pub use ledger_line::{LEDGER_FORMAT, LEDGER_VERSION};
pub use ledger_reader::{LedgerProblem, LedgerReading, Loss, read_ledgers};
pub use ledger_writer::{LedgerEvent, LedgerWriter, NotKept};
pub use persons_words::{PersonsWord, persons_words};
pub use quality_map::{QualityMap, Treatment};
pub use replay::Replay;
pub use review_state::{GranuleState, ReviewState};
pub use rulebook_changes::RulebookChange;
pub use sign_off_limits::SignOffLimits;
pub use spot_check::{ErrorRate, SpotCheck, Stratum, pooled};
pub use state::{ChannelFlags, Counts, DOUBTFUL, FlagState};
pub use vocabulary::{FlagExtension, FlagKind, Scope, Vocabulary, VocabularyError};
