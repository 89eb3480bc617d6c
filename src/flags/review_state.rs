//! How far footprints and granules have come.

use serde::{Deserialize, Serialize};

/// Who has assessed a footprint.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ReviewState {
    /// Nobody and nothing: not usable.
    #[default]
    NotAssessed,
    /// A screening test.
    AssessedByTest,
    /// A person, whose word stands whatever a test says later.
    DecidedByPerson,
}

impl ReviewState {
    /// All states in the order of their codes.
    pub const ALL: [Self; 3] = [Self::NotAssessed, Self::AssessedByTest, Self::DecidedByPerson];

    /// The value in a mask's `review_state`.
    pub fn code(self) -> i8 {
        match self {
            Self::NotAssessed => 0,
            Self::AssessedByTest => 1,
            Self::DecidedByPerson => 2,
        }
    }

    /// The word in `flag_meanings`.
    pub fn name(self) -> &'static str {
        match self {
            Self::NotAssessed => "not_assessed",
            Self::AssessedByTest => "assessed_by_test",
            Self::DecidedByPerson => "decided_by_person",
        }
    }
}

/// How far a granule has come.
#[derive(
    Debug, Clone, Copy, Default, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize,
)]
#[serde(rename_all = "snake_case")]
pub enum GranuleState {
    /// No person has decided anything here.
    #[default]
    Untouched,
    /// A person has begun, or has changed something since it was signed off or set aside.
    InHand,
    /// A person answers for it as it stands.
    SignedOff,
    /// Left for later, or for good.
    SetAside,
}

impl GranuleState {
    /// As the Tray shows it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Untouched => "untouched",
            Self::InHand => "in hand",
            Self::SignedOff => "signed off",
            Self::SetAside => "set aside",
        }
    }
}
