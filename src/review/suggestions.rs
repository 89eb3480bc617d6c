//! Which layers and indices a granule offers, as far as it has the channels and fields.

use super::Review;
use crate::granule::{Channel, VariableRole};
use crate::layers::{Expression, FIRST_LOOK, channels_needed};

/// Windows in which the surface is seen when the sky is clear, cm-1.
const WINDOWS: [f64; 6] = [831.0, 900.0, 961.0, 1231.0, 2500.0, 2616.0];

impl Review {
    /// The indices of a first look that the granule has the channels for: expression and label.
    pub fn first_look(&self) -> Vec<(&'static str, &'static str)> {
        let names = self.names();
        let met = FIRST_LOOK.iter().filter(|(text, _)| {
            Expression::parse(text)
                .is_ok_and(|expression| !channels_needed(&[&expression], &names).is_empty())
        });
        met.copied().collect()
    }

    /// The window channels that the granule has.
    pub fn window_channels(&self) -> Vec<Channel> {
        let near = |wavenumber: &f64| self.granule().channel_near(*wavenumber).ok();
        WINDOWS.iter().filter_map(near).collect()
    }

    /// Layers to step through, as expressions: the first look, then geolocation, then what the
    /// producer says about quality. Never empty for a granule with a valid channel.
    pub fn suggested_layers(&self) -> Vec<String> {
        let mut layers: Vec<String> =
            self.first_look().iter().map(|(text, _)| (*text).to_owned()).collect();
        if layers.is_empty() {
            layers.extend(self.middle_channel());
        }
        let place = self.granule().geolocation();
        let fields = [
            ("view_zenith", &place.view_zenith),
            ("solar_zenith", &place.solar_zenith),
            ("land", &place.land_fraction),
            ("lat", &place.latitude),
            ("lon", &place.longitude),
        ];
        let there = fields.iter().filter(|(_, values)| values.is_some());
        layers.extend(there.map(|(name, _)| (*name).to_owned()));
        let quality =
            self.granule().variables().iter().filter(|one| one.role == VariableRole::Quality);
        layers.extend(quality.map(|variable| format!("var(\"{}\")", variable.name)));
        layers
    }

    /// The brightness temperature of a valid channel in the middle of the first band.
    fn middle_channel(&self) -> Option<String> {
        let (low, high) = self.granule().bands().first()?.range();
        let channels = self.granule().channels_between(low, high);
        let channel = channels.get(channels.len() / 2)?;
        Some(format!("bt({:.4})", channel.wavenumber))
    }
}
