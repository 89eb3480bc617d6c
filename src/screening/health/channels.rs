//! Channels that are noisier than they should be.

use super::finding::{Check, Finding, Limit, Subject};
use super::limits::HealthLimits;
use super::readings::BandReadings;
use super::sample::Sample;
use crate::granule::Channel;
use crate::screening::unusual::Fitted;
use crate::spectral::running_median;

/// Neighbours to either side whose noise a channel's noise is compared with.
const REACH: usize = 12;
/// A channel that only itself explains must stand out among its neighbours by this much in the
/// differences of alike footprints as well: it may see what no other channel sees.
const ALSO_RAW: f64 = 1.3;

/// How noisy a channel is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChannelNoise {
    /// The channel, as a place in the band.
    pub channel: usize,
    /// From what the components leave, mW m-2 sr-1 (cm-1)-1.
    pub noise: f64,
    /// From the pairs of footprints that are the most alike, mW m-2 sr-1 (cm-1)-1.
    pub spatial: f64,
    /// What it should be: the file's NEdN, times what the neighbours' noise is above theirs; where the
    /// file gives none, the noise of the neighbours.
    pub expected: f64,
    /// What the file says; NaN where it says nothing.
    pub told: f64,
}

/// The noise of the sample's channels. `nedn` is the file's, for all channels of the band.
pub fn channel_noise(sample: &Sample, fitted: &Fitted, nedn: Option<&[f64]>) -> Vec<ChannelNoise> {
    let channels = &sample.rows.channels;
    let file = |channel: usize| {
        let value = nedn.map_or(f64::NAN, |nedn| nedn[channel]);
        if value > 0.0 { value } else { f64::NAN }
    };
    let over_file: Vec<f64> =
        channels.iter().zip(&fitted.noise).map(|(channel, noise)| noise / file(*channel)).collect();
    let (usual_ratio, usual) =
        (running_median(&over_file, REACH), running_median(&fitted.noise, REACH));
    let noise = |at: usize| {
        // Photon noise grows with the scene in all channels of a region alike: that is no fault of one.
        let expected = file(channels[at]) * usual_ratio[at].max(1.0);
        ChannelNoise {
            channel: channels[at],
            noise: fitted.noise[at],
            spatial: sample.spatial_noise[at],
            expected: if expected.is_finite() { expected } else { usual[at] },
            told: file(channels[at]),
        }
    };
    (0..channels.len()).map(noise).collect()
}

/// Channels that are too noisy.
pub fn noisy_channels(
    readings: &BandReadings<'_>,
    noise: &[ChannelNoise],
    set_aside: &[bool],
    limits: &HealthLimits,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "noisy_channel");
    let raw: Vec<f64> = noise.iter().map(|one| one.spatial).collect();
    let usual = running_median(&raw, REACH);
    let found = noise.iter().enumerate().filter(|(at, one)| {
        let also_raw = !set_aside[*at] || one.spatial > ALSO_RAW * usual[*at];
        one.noise > limit.value * one.expected && also_raw
    });
    found
        .map(|(_, one)| {
            let subject = subject(readings, one.channel);
            let (band, value) = (Some(readings.number), one.noise / one.expected);
            let detail = format!(
                "noise {:.3e}, expected {:.3e} mW m-2 sr-1 (cm-1)-1",
                one.noise, one.expected
            );
            limit.finding(Check::NoisyChannel, subject, band, value).saying(detail)
        })
        .collect()
}

/// A channel of a band.
pub fn subject(readings: &BandReadings<'_>, channel: usize) -> Subject {
    let wavenumber = readings.band.axis.wavenumbers()[channel];
    Subject::Channel(Channel { band: readings.number, index: channel, wavenumber })
}
