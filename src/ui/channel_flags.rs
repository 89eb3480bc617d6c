//! Channels picked in the Trace, and their flags.

use crate::flags::{ChannelName, Scope};

use super::app::App;
use super::bench::Bench;
use super::deciding;
use super::jobs::Job;
use super::keys::Action;
use super::looking::no_granule;
use super::overlay::{FlagPrompt, Overlay, Selection};

/// Which channels a flag is about; without either, the one in hand.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct ChannelPick {
    /// From this channel to the one in hand, by their numbers in the common order.
    pub from: Option<usize>,
    /// These, by name, and how they were found.
    pub named: Option<(Vec<ChannelName>, String)>,
}

impl Bench {
    /// The channels that a flag would be about, and what they are in words.
    pub fn picked_channels(&self) -> (Vec<ChannelName>, String) {
        if let Some(named) = &self.channel_pick.named {
            return named.clone();
        }
        let from = self.channel_pick.from.unwrap_or(self.channel);
        let numbers = from.min(self.channel)..=from.max(self.channel);
        let channels: Vec<ChannelName> =
            numbers.filter_map(|number| self.channel_name(number)).collect();
        let words = match (&channels[..], channels.last()) {
            ([only], _) => format!("channel {:.2}", only.wavenumber),
            ([first, ..], Some(last)) => format!(
                "{} channels {:.2} to {:.2}",
                channels.len(),
                first.wavenumber,
                last.wavenumber
            ),
            _ => "no channel".to_owned(),
        };
        (channels, words)
    }

    fn channel_name(&self, number: usize) -> Option<ChannelName> {
        let place = self.channels.channel(number)?;
        Some(ChannelName {
            band: self.review.granule().bands().get(place.band)?.name.clone(),
            index: *self.channels.bands().get(place.band)?.indices.get(place.place)?,
            wavenumber: self.channels.wavenumber(number)?,
        })
    }

    /// Whether channels beside the one in hand are picked.
    pub fn has_channel_pick(&self) -> bool {
        self.channel_pick != ChannelPick::default()
    }

    /// Lets go of picked channels; false where there are none.
    pub fn drop_channel_pick(&mut self) -> bool {
        std::mem::take(&mut self.channel_pick) != ChannelPick::default()
    }
}

/// Does what a key of channel flags says.
pub fn act(app: &mut App, action: Action) -> Vec<Job> {
    match action {
        Action::FlagChannels => choose(app, true),
        Action::WithdrawChannels => choose(app, false),
        _ => begin_interval(app),
    }
}

/// Begins an interval at the channel in hand, or lets go of what is picked.
fn begin_interval(app: &mut App) -> Vec<Job> {
    let flag = app.keymap.hint(Action::FlagChannels);
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if bench.drop_channel_pick() {
        app.say("channels let go");
        return Vec::new();
    }
    bench.channel_pick.from = Some(bench.channel);
    app.say(format!("interval: go on to its other end; {flag} flags it"));
    Vec::new()
}

/// Picks all channels whose measured noise is more than `factor` times what it should be.
pub fn over_noise(app: &mut App, factor: f64) -> Vec<Job> {
    let flag = app.keymap.hint(Action::FlagChannels);
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    let Some(examined) = bench.tests.screened.as_deref().and_then(|one| one.examined.as_ref())
    else {
        app.warn("the noise has not been measured yet: it comes with the tests");
        return Vec::new();
    };
    let mut channels = Vec::new();
    for health in &examined.bands {
        let Some(band) = bench.review.granule().bands().get(health.band) else { continue };
        let over = health.noise.iter().filter(|one| one.noise > factor * one.expected);
        channels.extend(over.filter_map(|one| {
            let wavenumber = *band.axis.wavenumbers().get(one.channel)?;
            Some(ChannelName { band: band.name.clone(), index: one.channel, wavenumber })
        }));
    }
    let words = match channels.len() {
        0 => format!("no channel is over {factor} times its noise"),
        1 => format!("1 channel over {factor} times its noise"),
        count => format!("{count} channels over {factor} times their noise"),
    };
    if channels.is_empty() {
        bench.drop_channel_pick();
        app.say(words);
    } else {
        let said = format!("{words}; {flag} flags");
        bench.channel_pick = ChannelPick { from: None, named: Some((channels, words)) };
        app.say(said);
    }
    Vec::new()
}

/// Opens the list of channel flags: all to give, those that are there to withdraw.
fn choose(app: &mut App, give: bool) -> Vec<Job> {
    let Some(bench) = app.bench() else { return no_granule(app) };
    let Some(record) = bench.record.open() else { return deciding::not_ready(app) };
    let (channels, words) = bench.picked_channels();
    let there = channels.iter().fold(0, |flags, channel| flags | record.channel_flags(channel));
    let kinds = record.vocabulary().of_scope(Scope::Channel);
    let flags: Vec<String> = kinds
        .iter()
        .filter(|kind| give || there & kind.mask() != 0)
        .map(|kind| kind.name.clone())
        .collect();
    if flags.is_empty() {
        app.warn(format!("{words}: no flag to withdraw"));
        return Vec::new();
    }
    let selection = Selection::of(Default::default(), words);
    app.overlay = Overlay::Flags(FlagPrompt {
        give,
        selection,
        channels: Some(channels),
        flags,
        cursor: 0,
        with_reason: false,
    });
    Vec::new()
}
