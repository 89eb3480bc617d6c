//! What an expression takes from the granule: the ends of its tree.

use crate::granule::Channel;
use crate::layers::names::Values;
use crate::layers::syntax::Quantity;

/// Intervals wider than this (cm-1) are averaged with a note: the Planck function bends too much
/// over them for one temperature to stand for all.
const WIDE: f64 = 30.0;

/// One column of numbers that comes from outside.
#[derive(Debug, Clone, PartialEq)]
pub enum Leaf {
    /// One channel.
    Channel(Quantity, Channel),
    /// The mean radiance of some channels, or its brightness temperature.
    Interval {
        /// What is asked.
        quantity: Quantity,
        /// The channels; at least one.
        channels: Vec<Channel>,
        /// Width as typed, cm-1.
        width: f64,
    },
    /// What a model calculated for one channel under clear sky.
    Calculated(Channel),
    /// Values by name; the name as written.
    Named(String, Values),
}

impl Leaf {
    /// The measured channels that it takes.
    pub fn channels(&self) -> &[Channel] {
        match self {
            Self::Channel(_, channel) => std::slice::from_ref(channel),
            Self::Interval { channels, .. } => channels,
            Self::Calculated(_) | Self::Named(..) => &[],
        }
    }

    /// Whether both stand for the same column, without comparing numbers.
    pub fn is_same(&self, other: &Self) -> bool {
        match (self, other) {
            (Self::Named(one, _), Self::Named(other, _)) => one == other,
            (Self::Named(..), _) | (_, Self::Named(..)) => false,
            _ => self == other,
        }
    }

    /// A note that needs no numbers.
    pub fn note(&self) -> Option<String> {
        match self {
            Self::Interval { quantity, width, .. }
                if *width > WIDE && *quantity != Quantity::MissingShare =>
            {
                Some(format!(
                    "an interval {width} cm-1 wide is averaged; beyond {WIDE} cm-1 one temperature \
                 hardly stands for all of its channels"
                ))
            }
            _ => None,
        }
    }
}
