//! Within which limits granules are offered for signing off together.

use serde::Deserialize;

/// Limits that a person sets for signing off by rule, as in `[sign_off]` of `campaign.toml`. Each is
/// the largest that is let pass.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize)]
#[serde(deny_unknown_fields, default)]
pub struct SignOffLimits {
    /// Share of footprints in doubt, 0 to 1.
    pub doubt: f64,
    /// Share of footprints that nothing assessed, 0 to 1.
    pub not_assessed: f64,
    /// Share of footprints with `bad_spectrum`, 0 to 1: the instrument's health.
    pub bad_spectra: f64,
    /// Channels with a flag: the instrument's health.
    pub flagged_channels: usize,
    /// Upper limit of the interval of 95 % confidence of the spot checks' error rate, 0 to 1, without
    /// flag and with flag each.
    pub spot_error: f64,
}

impl Default for SignOffLimits {
    /// Cautious: what a person would pass without a second look. Our own choice.
    fn default() -> Self {
        Self {
            doubt: 0.02,
            not_assessed: 0.02,
            bad_spectra: 0.01,
            flagged_channels: 20,
            spot_error: 0.2,
        }
    }
}

impl SignOffLimits {
    /// Refuses what can be no share.
    ///
    /// # Errors
    /// In words.
    pub(super) fn checked(self) -> Result<Self, String> {
        let shares = [
            ("doubt", self.doubt),
            ("not_assessed", self.not_assessed),
            ("bad_spectra", self.bad_spectra),
            ("spot_error", self.spot_error),
        ];
        match shares.iter().find(|(_, share)| !(0.0..=1.0).contains(share)) {
            Some((name, share)) => Err(format!("[sign_off] {name} = {share}: a share is 0 to 1")),
            None => Ok(self),
        }
    }
}
