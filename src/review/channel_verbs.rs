//! The verbs by which channels are flagged, in the whole granule.

use jiff::Timestamp;

use super::{Record, Refusal};
use crate::flags::{Act, ChannelName, Scope};

impl Record {
    /// Flags channels.
    ///
    /// # Errors
    /// A flag that is none for channels, or no channels.
    pub fn flag_channels(
        &mut self,
        flag: &str,
        channels: &[ChannelName],
        why: Option<String>,
        now: Timestamp,
    ) -> Result<(), Refusal> {
        self.channel_mask(flag)?;
        if channels.is_empty() {
            return Err(Refusal::NoChannels);
        }
        let act = Act::FlagChannels { flag: flag.to_owned(), channels: channels.to_vec() };
        self.decide(act, why, now);
        Ok(())
    }

    /// Withdraws a flag from those of the channels that carry it. Returns how many those were.
    ///
    /// # Errors
    /// A flag that is none for channels, or none of them carries it.
    pub fn withdraw_channels(
        &mut self,
        flag: &str,
        channels: &[ChannelName],
        why: Option<String>,
        now: Timestamp,
    ) -> Result<usize, Refusal> {
        let mask = self.channel_mask(flag)?;
        let carries = |channel: &&ChannelName| self.channel_flags(channel) & mask != 0;
        let channels: Vec<ChannelName> = channels.iter().filter(carries).cloned().collect();
        if channels.is_empty() {
            return Err(Refusal::NotFlagged(flag.to_owned()));
        }
        let count = channels.len();
        self.decide(Act::WithdrawChannels { flag: flag.to_owned(), channels }, why, now);
        Ok(count)
    }

    /// The flags of a channel.
    pub fn channel_flags(&self, channel: &ChannelName) -> u32 {
        let band = self.state().channel_flags.get(&channel.band);
        band.and_then(|band| band.get(&channel.index)).map_or(0, |found| found.flags)
    }

    fn channel_mask(&self, flag: &str) -> Result<u32, Refusal> {
        let kinds = self.vocabulary().of_scope(Scope::Channel);
        match kinds.iter().find(|kind| kind.name == flag) {
            Some(kind) => Ok(kind.mask()),
            None => {
                let known: Vec<&str> = kinds.iter().map(|kind| kind.name.as_str()).collect();
                Err(Refusal::UnknownFlag { name: flag.to_owned(), known: known.join(", ") })
            }
        }
    }
}
