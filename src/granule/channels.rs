//! Channels by their wavenumber, over all bands.

use super::band::{Band, Channel};

/// A channel is taken for a wavenumber that lies within this much of the local spacing.
const REACH: f64 = 0.6;

/// No channel lies near enough to a wavenumber.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NoChannel {
    /// The wavenumber asked for, cm-1.
    pub wavenumber: f64,
    /// The nearest valid channel there is.
    pub nearest: Option<Channel>,
}

impl std::error::Error for NoChannel {}

impl std::fmt::Display for NoChannel {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self.nearest {
            Some(nearest) => write!(
                formatter,
                "no channel near {} cm-1; the nearest is at {:.4} cm-1",
                self.wavenumber, nearest.wavenumber
            ),
            None => write!(formatter, "no valid channel at all"),
        }
    }
}

/// The valid channel nearest to a wavenumber (cm-1); between equals the first band's.
///
/// # Errors
/// It lies further off than 0.6 of the channel spacing there.
pub fn channel_near(bands: &[Band], wavenumber: f64) -> Result<Channel, NoChannel> {
    let mut best: Option<(f64, bool, Channel)> = None;
    for (place, band) in bands.iter().enumerate() {
        let Some(nearest) = band.axis.nearest_among(wavenumber, |index| !band.bad[index]) else {
            continue;
        };
        if best.is_none_or(|(distance, ..)| nearest.distance < distance) {
            let channel =
                Channel { band: place, index: nearest.index, wavenumber: nearest.wavenumber };
            let within = nearest.distance <= REACH * nearest.local_spacing;
            best = Some((nearest.distance, within, channel));
        }
    }
    match best {
        Some((_, true, channel)) => Ok(channel),
        other => Err(NoChannel { wavenumber, nearest: other.map(|(.., channel)| channel) }),
    }
}

/// All valid channels from `low` to `high` (cm-1, both included), by rising wavenumber.
pub fn channels_between(bands: &[Band], low: f64, high: f64) -> Vec<Channel> {
    let mut channels: Vec<Channel> = bands
        .iter()
        .enumerate()
        .flat_map(|(place, band)| {
            let inside = band.axis.between(low, high).into_iter().filter(|&index| !band.bad[index]);
            inside.map(move |index| Channel {
                band: place,
                index,
                wavenumber: band.axis.wavenumbers()[index],
            })
        })
        .collect();
    // A stable sort: where bands overlap, equal wavenumbers stay in the order of the bands.
    channels.sort_by(|one, next| one.wavenumber.total_cmp(&next.wavenumber));
    channels
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::granule::band::Apodisation;

    fn band(wavenumbers: &[f64]) -> Band {
        Band::of_wavenumbers(wavenumbers, Apodisation::Unknown)
    }

    #[test]
    fn the_nearest_channel_of_any_band_is_taken() {
        let bands = [band(&[900.0, 901.0, 902.0]), band(&[901.6, 902.6, 903.6])];
        assert_eq!(channel_near(&bands, 901.5).unwrap().band, 1);
        assert_eq!(
            channel_near(&bands, 901.2).unwrap(),
            Channel { band: 0, index: 1, wavenumber: 901.0 }
        );
    }

    #[test]
    fn equal_distances_go_to_the_first_band() {
        let bands = [band(&[900.0, 901.0]), band(&[900.0, 901.0])];
        assert_eq!(channel_near(&bands, 900.9).unwrap().band, 0);
    }

    #[test]
    fn too_far_is_refused_and_names_the_nearest() {
        let bands = [band(&[900.0, 901.0])];
        assert!(channel_near(&bands, 901.59).is_ok());
        let error = channel_near(&bands, 901.7).unwrap_err();
        assert!(error.to_string().contains("901.0000 cm-1"), "{error}");
    }

    #[test]
    fn bad_channels_are_passed_over() {
        let mut only = band(&[900.0, 900.5, 901.0]);
        only.bad[1] = true;
        let bands = [only];
        assert_eq!(channel_near(&bands, 900.8).unwrap().index, 2);
        assert_eq!(channels_between(&bands, 899.0, 902.0).len(), 2);
    }

    #[test]
    fn an_interval_takes_both_ends_from_all_bands_by_rising_wavenumber() {
        let bands = [band(&[902.0, 901.0, 900.0]), band(&[901.5, 902.5])];
        let found: Vec<f64> = channels_between(&bands, 901.0, 902.0)
            .iter()
            .map(|channel| channel.wavenumber)
            .collect();
        assert_eq!(found, [901.0, 901.5, 902.0]);
    }
}
