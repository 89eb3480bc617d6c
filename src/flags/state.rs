//! The current flags of a granule, folded from its decisions.

use std::collections::BTreeMap;

use super::{FootprintSet, GranuleState, ReviewState, Vocabulary};

/// The flag that tests set where they leave a footprint in doubt.
pub const DOUBTFUL: &str = "doubtful";

/// The flags of one channel.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct ChannelFlags {
    /// The bits of the channel vocabulary.
    pub flags: u32,
    /// cm-1, as the latest decision named it.
    pub wavenumber: f64,
}

/// The current flags.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct FlagState {
    /// Per footprint, the flags of the whole footprint.
    pub footprint_flags: Vec<u32>,
    /// Per band with such flags, per footprint: the flags limited to that band.
    pub band_flags: BTreeMap<String, Vec<u32>>,
    /// Per footprint, who has assessed it.
    pub review: Vec<ReviewState>,
    /// Per band, per channel index: its flags. Channels without a flag may be absent.
    pub channel_flags: BTreeMap<String, BTreeMap<usize, ChannelFlags>>,
    /// How far the granule has come.
    pub granule: GranuleState,
    /// What could not be folded, in words: unknown flags and acts, footprints outside the granule.
    pub problems: Vec<String>,
}

/// How many footprints, by their state.
#[derive(Debug, Clone, Default, PartialEq, Eq, serde::Serialize)]
pub struct Counts {
    /// All of them.
    pub footprints: usize,
    /// With a flag, limited to bands or not.
    pub flagged: usize,
    /// Assessed, without a flag.
    pub no_flag: usize,
    /// Neither flagged nor assessed.
    pub not_assessed: usize,
    /// That a retrieval may use by the default rule.
    pub usable: usize,
    /// Decided by a person.
    pub by_person: usize,
    /// Assessed by a test only.
    pub by_test: usize,
    /// That tests left in doubt and no person has settled.
    pub in_doubt: usize,
    /// Footprints per flag name, limited to bands or not; flags without any left out.
    pub per_flag: BTreeMap<String, usize>,
    /// Channels with a flag.
    pub flagged_channels: usize,
}

impl FlagState {
    /// The state before any decision.
    pub fn untouched(footprints: usize) -> Self {
        Self {
            footprint_flags: vec![0; footprints],
            review: vec![ReviewState::NotAssessed; footprints],
            ..Self::default()
        }
    }

    /// All flags of a footprint, those limited to bands included. Zero beyond the granule.
    pub fn any_flags(&self, footprint: usize) -> u32 {
        let whole = self.footprint_flags.get(footprint).copied().unwrap_or(0);
        let in_bands = self.band_flags.values().filter_map(|flags| flags.get(footprint));
        in_bands.fold(whole, |all, flags| all | flags)
    }

    /// The footprints that nothing has assessed and no flag of the whole footprint excludes: what a
    /// sign-off may add as looked at and usable.
    pub fn rest(&self, vocabulary: &Vocabulary) -> FootprintSet {
        let excluding = vocabulary.excluding_mask();
        let open = |&at: &usize| {
            self.review[at] == ReviewState::NotAssessed && self.footprint_flags[at] & excluding == 0
        };
        (0..self.review.len()).filter(open).collect()
    }

    /// Whether a retrieval may use a footprint by the default rule.
    pub fn usable(&self, footprint: usize, vocabulary: &Vocabulary) -> bool {
        match (self.footprint_flags.get(footprint), self.review.get(footprint)) {
            (Some(&flags), Some(&review)) => vocabulary.usable(flags, review),
            _ => false,
        }
    }

    /// The numbers for the status line and the Tray.
    pub fn counts(&self, vocabulary: &Vocabulary) -> Counts {
        let mut counts = Counts { footprints: self.review.len(), ..Counts::default() };
        let mut per_bit = [0usize; 32];
        let doubtful = vocabulary.by_name(DOUBTFUL).map_or(0, super::FlagKind::mask);
        for (footprint, &review) in self.review.iter().enumerate() {
            let flags = self.any_flags(footprint);
            match (flags, review) {
                (0, ReviewState::NotAssessed) => counts.not_assessed += 1,
                (0, _) => counts.no_flag += 1,
                _ => counts.flagged += 1,
            }
            counts.usable += usize::from(self.usable(footprint, vocabulary));
            let settled = review == ReviewState::DecidedByPerson;
            counts.in_doubt += usize::from(flags & doubtful != 0 && !settled);
            counts.by_person += usize::from(settled);
            counts.by_test += usize::from(review == ReviewState::AssessedByTest);
            let mut left = flags;
            while left != 0 {
                per_bit[left.trailing_zeros() as usize] += 1;
                left &= left - 1;
            }
        }
        for kind in vocabulary.of_scope(super::Scope::Footprint) {
            if per_bit[usize::from(kind.bit)] > 0 {
                counts.per_flag.insert(kind.name.clone(), per_bit[usize::from(kind.bit)]);
            }
        }
        let channels = self.channel_flags.values().flat_map(BTreeMap::values);
        counts.flagged_channels = channels.filter(|channel| channel.flags != 0).count();
        counts
    }
}
