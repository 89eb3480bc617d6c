//! What is wrong with the instrument, each thing with its value, limit and source.

use super::limits::{HealthLimits, LIMITS, LimitKind};
use crate::granule::Channel;

/// What was looked for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Check {
    /// A channel without values, or without a signal.
    DeadChannel,
    /// A channel that is noisier than it should be.
    NoisyChannel,
    /// A channel that jumps between levels.
    PoppingChannel,
    /// A band of a footprint of which much is missing.
    MissingChannels,
    /// A stretch of channels that is missing in a footprint.
    MissingStretch,
    /// A footprint that repeats another to the last bit.
    Repeated,
    /// A channel that stands out in one footprint.
    Spike,
    /// Channels of alternating sign in a footprint.
    Ringing,
    /// A detector that sees nothing.
    DeadDetector,
    /// A detector noisier than the others.
    NoisyDetector,
    /// A detector that is biased against the others.
    Striping,
    /// A difference between the two directions of the interferometer's sweep.
    Sweep,
    /// A detector whose wavenumbers are off from those of the others.
    Shift,
    /// A detector whose wavenumbers are off from those of calculated spectra.
    AbsoluteShift,
}

impl Check {
    /// The flag of spectra that are not to be trusted.
    pub const BAD_SPECTRUM: &'static str = "bad_spectrum";
    /// The flag of spectra unlike the others.
    pub const UNUSUAL: &'static str = "unusual";

    /// For people and machines.
    pub fn name(self) -> &'static str {
        match self {
            Self::DeadChannel => "dead channel",
            Self::NoisyChannel => "noisy channel",
            Self::PoppingChannel => "popping channel",
            Self::MissingChannels => "missing channels",
            Self::MissingStretch => "missing stretch",
            Self::Repeated => "repeated spectrum",
            Self::Spike => "spike",
            Self::Ringing => "ringing",
            Self::DeadDetector => "dead detector",
            Self::NoisyDetector => "noisy detector",
            Self::Striping => "striping",
            Self::Sweep => "sweep direction",
            Self::Shift => "spectral shift",
            Self::AbsoluteShift => "absolute spectral shift",
        }
    }

    /// The flag that it suggests; none where it is only told.
    pub fn flag(self) -> Option<&'static str> {
        match self {
            Self::DeadChannel => Some("dead"),
            Self::NoisyChannel => Some("noisy"),
            Self::PoppingChannel => Some("popping"),
            Self::Sweep | Self::AbsoluteShift => None,
            _ => Some(Self::BAD_SPECTRUM),
        }
    }
}

/// Where something is wrong.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Subject {
    /// In one channel of all footprints.
    Channel(Channel),
    /// In one footprint.
    Footprint(usize),
    /// In all footprints of one detector.
    Detector(usize),
    /// In all footprints.
    Granule,
}

/// One thing that is wrong.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// What was looked for.
    pub check: Check,
    /// Where.
    pub subject: Subject,
    /// The band that it is limited to; `None` for whole spectra.
    pub band: Option<usize>,
    /// What was found.
    pub value: f64,
    /// The limit that it passes.
    pub limit: f64,
    /// Unit of both.
    pub unit: &'static str,
    /// Where the limit comes from.
    pub source: &'static str,
    /// What else is to be said; may be empty.
    pub detail: String,
}

/// A limit with what it is compared with.
#[derive(Debug, Clone, Copy)]
pub struct Limit {
    /// The limit.
    pub value: f64,
    kind: &'static LimitKind,
}

impl Limit {
    /// The limit under a key of [`LIMITS`].
    pub fn of(limits: &HealthLimits, key: &str) -> Self {
        // Every key that is asked for stands in the table; a test asks for all of them.
        let kind = LIMITS.iter().find(|kind| kind.key == key).unwrap_or(&LIMITS[0]);
        Self { value: limits.value(kind), kind }
    }

    /// The same kind with a higher limit.
    pub fn raised_to(self, value: f64) -> Self {
        Self { value: value.max(self.value), ..self }
    }

    /// What was found against it.
    pub fn finding(
        &self,
        check: Check,
        subject: Subject,
        band: Option<usize>,
        value: f64,
    ) -> Finding {
        Finding {
            check,
            subject,
            band,
            value,
            limit: self.value,
            unit: self.kind.unit,
            source: self.kind.source,
            detail: String::new(),
        }
    }
}

impl Finding {
    /// With something else to say.
    pub fn saying(self, detail: String) -> Self {
        Self { detail, ..self }
    }

    /// In one line: `spike: 38.2 noises, limit 6; 2391.2500 cm-1`.
    pub fn words(&self) -> String {
        let (value, limit) = (short(self.value), short(self.limit));
        let unit = if self.unit == "1" { "" } else { self.unit };
        let gap = if unit.is_empty() { "" } else { " " };
        let detail = match self.detail.is_empty() {
            true => String::new(),
            false => format!("; {}", self.detail),
        };
        format!("{}: {value}{gap}{unit}, limit {limit}{detail}", self.check.name())
    }
}

/// Three digits are enough to compare a value with a limit.
fn short(value: f64) -> String {
    let decimals = match value.abs() {
        size if size >= 99.5 => 0,
        size if size >= 9.95 => 1,
        _ => 2,
    };
    let text = format!("{value:.decimals$}");
    match text.contains('.') {
        true => text.trim_end_matches('0').trim_end_matches('.').to_owned(),
        false => text,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_finding_says_value_limit_and_place() {
        let limit = Limit::of(&HealthLimits::default(), "spike");
        let finding = limit.finding(Check::Spike, Subject::Footprint(3), Some(1), 38.2);
        let finding = finding.saying("2391.2500 cm-1".to_owned());
        assert_eq!(finding.words(), "spike: 38.2 noises, limit 6; 2391.2500 cm-1");
        let limit = Limit::of(&HealthLimits::default(), "missing_share");
        let finding = limit.finding(Check::MissingChannels, Subject::Footprint(3), Some(1), 1.0);
        assert_eq!(finding.words(), "missing channels: 1, limit 0.05");
        assert_eq!(short(1234.6), "1235");
    }
}
