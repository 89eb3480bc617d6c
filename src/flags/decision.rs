//! Decisions: what was decided, by whom, when, and why.

use std::fmt;

use jiff::Timestamp;
use serde::{Deserialize, Serialize};

use super::{FootprintSet, SpotCheck};
use crate::system::clean_text;

/// Names one decision for ever.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub struct DecisionId {
    /// The writer's name: who, on which host, in which process, since when.
    pub writer: String,
    /// Counts a writer's decisions from 1.
    pub sequence: u64,
}

impl fmt::Display for DecisionId {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}#{}", self.writer, self.sequence)
    }
}

/// What a test is called that hands on the producer's word on quality: this, and the name of the
/// producer's variable.
pub const PRODUCER: &str = "producer: ";

/// Whether a person or a screening test speaks.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Origin {
    /// The person that the ledger names as its author.
    Person,
    /// A screening test, by its name.
    Test(String),
}

/// One channel of one band. The wavenumber is a check on the index.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct ChannelName {
    /// The band's name in the granule.
    pub band: String,
    /// Zero-based index along the band's spectral dimension.
    pub index: usize,
    /// cm-1.
    pub wavenumber: f64,
}

/// What a person says of a suggestion.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Ruling {
    /// It is as suggested.
    Accepted,
    /// It is not.
    Overruled,
}

/// A flag and where it is spoken of.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct FlagAt {
    /// The flag's name.
    pub flag: String,
    /// Where.
    pub footprints: FootprintSet,
}

/// What is decided.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "act", rename_all = "snake_case")]
pub enum Act {
    /// These footprints carry the flag, in all bands or in the named ones.
    Flag {
        /// The flag's name.
        flag: String,
        /// Where.
        footprints: FootprintSet,
        /// `None`: the whole footprint.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        bands: Option<Vec<String>>,
    },
    /// These footprints do not carry the flag. Without bands, the flag goes altogether, also where
    /// it was limited to bands; with bands, only where it was limited to those.
    Withdraw {
        /// The flag's name.
        flag: String,
        /// Where.
        footprints: FootprintSet,
        /// `None`: altogether.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        bands: Option<Vec<String>>,
    },
    /// These channels carry the flag, in the whole granule.
    FlagChannels {
        /// The flag's name.
        flag: String,
        /// Which.
        channels: Vec<ChannelName>,
    },
    /// These channels do not carry the flag.
    WithdrawChannels {
        /// The flag's name.
        flag: String,
        /// Which.
        channels: Vec<ChannelName>,
    },
    /// These footprints were looked at, and what stands there is right: the flags, or that there
    /// is none. It withdraws nothing.
    Assess {
        /// Which.
        footprints: FootprintSet,
    },
    /// A person's word on what a rulebook suggests, in one step: these flags hold, those do not,
    /// and the footprints count as looked at.
    Judge {
        /// Whether the suggestion was accepted.
        ruling: Ruling,
        /// The rulebook that suggested: its name and fingerprint.
        rulebook: String,
        /// Flags that hold, and where.
        given: Vec<FlagAt>,
        /// Flags that do not hold, and where.
        withdrawn: Vec<FlagAt>,
        /// All footprints judged.
        footprints: FootprintSet,
    },
    /// What a blind sample of the plain footprints showed. It changes no flag.
    SpotCheck(SpotCheck),
    /// Undo: the named decision counts for nothing. Undoing a revocation is redo.
    Revoke {
        /// The decision.
        decision: DecisionId,
    },
    /// The person answers for the granule as it stands.
    SignOff {
        /// The footprints without a flag that were not assessed one by one, of which the person
        /// now says that they were looked at and are usable. Empty if the person says no such thing.
        rest_assessed: FootprintSet,
        /// A line for the record, such as the counts that were on the screen.
        summary: String,
    },
    /// The granule is left for later, or for good.
    SetAside,
    /// The granule is taken in hand again.
    Reopen,
    /// Words about footprints, kept in the decision's `why`.
    Comment {
        /// Which; may be empty for words about the whole granule.
        footprints: FootprintSet,
    },
    /// An act that a newer version of the program wrote: kept, reported, not folded.
    #[serde(skip)]
    Unknown {
        /// Its name.
        kind: String,
    },
}

impl Act {
    /// Whether it says something about footprints or channels (rather than about the granule, or
    /// in words only).
    pub fn changes_flags(&self) -> bool {
        matches!(
            self,
            Self::Flag { .. }
                | Self::Withdraw { .. }
                | Self::FlagChannels { .. }
                | Self::WithdrawChannels { .. }
                | Self::Assess { .. }
                | Self::Judge { .. }
        )
    }

    /// The flag it names, if it does.
    pub fn flag(&self) -> Option<&str> {
        match self {
            Self::Flag { flag, .. }
            | Self::Withdraw { flag, .. }
            | Self::FlagChannels { flag, .. }
            | Self::WithdrawChannels { flag, .. } => Some(flag),
            _ => None,
        }
    }

    /// The footprints it names, if it does.
    pub fn footprints(&self) -> Option<&FootprintSet> {
        match self {
            Self::Flag { footprints, .. }
            | Self::Withdraw { footprints, .. }
            | Self::Assess { footprints }
            | Self::Judge { footprints, .. }
            | Self::Comment { footprints } => Some(footprints),
            Self::SignOff { rest_assessed, .. } => Some(rest_assessed),
            _ => None,
        }
    }
}

/// One line of a ledger.
#[derive(Debug, Clone, PartialEq)]
pub struct Decision {
    /// Its name.
    pub id: DecisionId,
    /// When: later than every decision its writer had seen, so that clocks of several hosts that
    /// disagree cannot turn the order round.
    pub at: Timestamp,
    /// What the writer's clock said, where that lagged behind a decision it had seen.
    pub clock: Option<Timestamp>,
    /// Who sat there, or started the tests.
    pub person: String,
    /// Whether the person or a test speaks.
    pub origin: Origin,
    /// What.
    pub act: Act,
    /// Why, in the person's words or the test's.
    pub why: Option<String>,
    /// The step that it is a part of, where one step of a person decides about several granules.
    pub step: Option<String>,
}

impl Decision {
    /// Whether a person speaks.
    pub fn by_person(&self) -> bool {
        self.origin == Origin::Person
    }

    /// Whose word it is, fit for the screen: the person's name, or that of the tests.
    pub fn speaker(&self) -> String {
        match &self.origin {
            Origin::Person => clean_text(&self.person),
            Origin::Test(name) => format!("tests {}", clean_text(name)),
        }
    }

    /// The place in the one order in which all readers fold decisions.
    pub fn order(&self) -> (Timestamp, &str, u64) {
        (self.at, &self.id.writer, self.id.sequence)
    }
}
