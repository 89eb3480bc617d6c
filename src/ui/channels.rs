//! The channels of a granule in one order, so that keys can step through them across bands.

use std::ops::Range;

use crate::spectral::ChannelAxis;

/// One band's channels in ascending order of wavenumber.
#[derive(Debug, Clone)]
pub struct BandChannels {
    /// Wavenumbers, cm-1, ascending.
    pub wavenumbers: Vec<f64>,
    /// For each place in ascending order, the index in the file.
    pub indices: Vec<usize>,
    /// Stretches without a gap, as ranges of places.
    pub segments: Vec<Range<usize>>,
}

/// A channel: its band, and its place in that band's ascending order.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct ChannelPlace {
    /// The band's number.
    pub band: usize,
    /// The place in ascending order.
    pub place: usize,
}

/// All channels of a granule.
#[derive(Debug, Clone, Default)]
pub struct Channels {
    bands: Vec<BandChannels>,
    /// Every channel, in ascending order of wavenumber across all bands.
    order: Vec<ChannelPlace>,
}

impl Channels {
    /// The channels of these bands.
    pub fn of<'a>(axes: impl Iterator<Item = &'a ChannelAxis>) -> Channels {
        let bands: Vec<BandChannels> = axes.map(band).collect();
        let mut order: Vec<ChannelPlace> = bands
            .iter()
            .enumerate()
            .flat_map(|(band, channels)| {
                (0..channels.wavenumbers.len()).map(move |place| ChannelPlace { band, place })
            })
            .collect();
        let at = |channel: &ChannelPlace| bands[channel.band].wavenumbers[channel.place];
        order.sort_by(|one, next| at(one).total_cmp(&at(next)));
        Channels { bands, order }
    }

    /// The bands, in the granule's order.
    pub fn bands(&self) -> &[BandChannels] {
        &self.bands
    }

    /// How many channels there are in all bands together.
    pub fn len(&self) -> usize {
        self.order.len()
    }

    /// Whether there is no channel at all.
    pub fn is_empty(&self) -> bool {
        self.order.is_empty()
    }

    /// Lowest and highest wavenumber, cm-1.
    pub fn range(&self) -> Option<(f64, f64)> {
        Some((self.wavenumber(0)?, self.wavenumber(self.order.len() - 1)?))
    }

    /// The channel at a number of the common order.
    pub fn channel(&self, number: usize) -> Option<ChannelPlace> {
        self.order.get(number).copied()
    }

    /// The wavenumber at a number of the common order, cm-1.
    pub fn wavenumber(&self, number: usize) -> Option<f64> {
        let channel = self.channel(number)?;
        self.bands.get(channel.band)?.wavenumbers.get(channel.place).copied()
    }

    /// The number of the channel nearest to a wavenumber (cm-1); halfway between two, the lower.
    pub fn nearest(&self, wavenumber: f64) -> usize {
        let at = |number: usize| self.wavenumber(number).unwrap_or(f64::NAN);
        let above = self.order.partition_point(|channel| {
            self.bands[channel.band].wavenumbers[channel.place] < wavenumber
        });
        match above.checked_sub(1) {
            Some(below) if above == self.order.len() => below,
            Some(below) if wavenumber - at(below) <= at(above) - wavenumber => below,
            _ => above,
        }
    }
}

fn band(axis: &ChannelAxis) -> BandChannels {
    let indices = axis.sorted().to_vec();
    let wavenumbers = indices.iter().map(|index| axis.wavenumbers()[*index]).collect();
    BandChannels { wavenumbers, indices, segments: axis.segments().to_vec() }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn two_bands() -> Channels {
        let descending = ChannelAxis::new(vec![903.0, 902.0, 901.0, 900.0]).unwrap();
        let overlapping = ChannelAxis::new(vec![901.5, 902.5, 903.5, 960.0, 961.0]).unwrap();
        Channels::of([&descending, &overlapping].into_iter())
    }

    #[test]
    fn steps_go_up_across_overlapping_bands() {
        let channels = two_bands();
        let all: Vec<f64> =
            (0..channels.len()).map(|number| channels.wavenumber(number).unwrap()).collect();
        assert_eq!(all, [900.0, 901.0, 901.5, 902.0, 902.5, 903.0, 903.5, 960.0, 961.0]);
        assert_eq!(channels.range(), Some((900.0, 961.0)));
        let first = channels.channel(0).unwrap();
        assert_eq!(channels.bands()[first.band].indices[first.place], 3);
    }

    #[test]
    fn the_nearest_channel_is_found_beyond_the_ends_too() {
        let channels = two_bands();
        for (wavenumber, nearest) in
            [(1.0, 900.0), (901.25, 901.0), (901.3, 901.5), (930.0, 903.5), (1e6, 961.0)]
        {
            let number = channels.nearest(wavenumber);
            assert_eq!(channels.wavenumber(number), Some(nearest), "{wavenumber}");
        }
    }
}
