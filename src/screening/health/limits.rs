//! The limits of instrument health and of unusual spectra, as a rulebook gives them.

use crate::screening::table_reader::TableReader;

/// One limit: its key in the `[health]` table, its default, and where that comes from.
#[derive(Debug, Clone, Copy)]
pub struct LimitKind {
    /// Key in the rulebook.
    pub key: &'static str,
    /// What is compared with it.
    pub meaning: &'static str,
    /// Unit of the limit.
    pub unit: &'static str,
    /// Value where the rulebook gives none.
    pub default: f64,
    /// Where it comes from.
    pub source: &'static str,
    get: fn(&mut HealthLimits) -> &mut f64,
}

/// The limits. [`LIMITS`] says what each means.
#[derive(Debug, Clone, PartialEq)]
#[allow(missing_docs)] // The table says it.
pub struct HealthLimits {
    pub noisy_channel: f64,
    pub popping_step: f64,
    pub dead_share: f64,
    pub dead_signal: f64,
    pub spike: f64,
    pub repeated_channels: f64,
    pub missing_share: f64,
    pub missing_stretch: f64,
    pub noisy_detector: f64,
    pub striping: f64,
    pub ringing: f64,
    pub sweep: f64,
    pub shift: f64,
    pub unusual: f64,
}

/// All limits, in the order of the documents.
#[rustfmt::skip]
pub const LIMITS: &[LimitKind] = &[
    LimitKind { key: "noisy_channel", meaning: "noise of a channel over that of the file and of its neighbours", unit: "times", default: 2.0, source: "twice the nominal noise over uniform scenes: common practice, from memory", get: |l| &mut l.noisy_channel },
    LimitKind { key: "popping_step", meaning: "step in the level of one channel from one scan line to the next", unit: "noises", default: 5.0, source: "5 to 6 sigma in one channel only: grating arrays, from memory", get: |l| &mut l.popping_step },
    LimitKind { key: "dead_share", meaning: "share of footprints in which a channel has no value", unit: "1", default: 0.95, source: "common practice", get: |l| &mut l.dead_share },
    LimitKind { key: "dead_signal", meaning: "spread over the footprints, over that of the other detectors or (where the level is senseless) of the neighbours, below which there is no signal", unit: "times", default: 0.1, source: "own choice", get: |l| &mut l.dead_signal },
    LimitKind { key: "spike", meaning: "what single channels stand out by in a footprint", unit: "noises", default: 6.0, source: "T25, 6 NEdN: common practice", get: |l| &mut l.spike },
    LimitKind { key: "repeated_channels", meaning: "channels that are the same to the last bit in two footprints, all of those compared", unit: "channels", default: 10.0, source: "exact equality of 10 channels or more: common practice", get: |l| &mut l.repeated_channels },
    LimitKind { key: "missing_share", meaning: "share of a band's channels without a value in a footprint", unit: "1", default: 0.05, source: "T24, 5 %: common practice", get: |l| &mut l.missing_share },
    LimitKind { key: "missing_stretch", meaning: "neighbouring channels without a value in a footprint", unit: "channels", default: 10.0, source: "own choice: a lost packet, not a bad channel", get: |l| &mut l.missing_stretch },
    LimitKind { key: "noisy_detector", meaning: "noise of a detector in a band over that of the others", unit: "times", default: 2.0, source: "twice the nominal noise: common practice, from memory", get: |l| &mut l.noisy_detector },
    LimitKind { key: "striping", meaning: "bias of a detector against the others at the same position, in a band's windows or in its channels that vary the least", unit: "K", default: 0.2, source: "0.1 to 0.2 K over uniform scenes: common practice", get: |l| &mut l.striping },
    LimitKind { key: "ringing", meaning: "power of the residual at Nyquist over what its noise has there", unit: "times", default: 3.0, source: "3 times what is expected: common practice", get: |l| &mut l.ringing },
    LimitKind { key: "sweep", meaning: "difference between even and odd positions in a band's windows", unit: "K", default: 0.2, source: "sweep directions have differed by up to 0.5 K; limit own choice", get: |l| &mut l.sweep },
    LimitKind { key: "shift", meaning: "spectral shift of a detector", unit: "ppm", default: 10.0, source: "T26: 10 ppm is adequate for weather use, Aumann et al. 2006", get: |l| &mut l.shift },
    LimitKind { key: "unusual", meaning: "standard deviations above the mean of the training scores", unit: "sigma", default: 4.0, source: "T20: mean + 4 sigma of the training scores, from memory", get: |l| &mut l.unusual },
];

impl Default for HealthLimits {
    fn default() -> Self {
        let mut limits = Self {
            noisy_channel: 0.0,
            popping_step: 0.0,
            dead_share: 0.0,
            dead_signal: 0.0,
            spike: 0.0,
            repeated_channels: 0.0,
            missing_share: 0.0,
            missing_stretch: 0.0,
            noisy_detector: 0.0,
            striping: 0.0,
            ringing: 0.0,
            sweep: 0.0,
            shift: 0.0,
            unusual: 0.0,
        };
        for kind in LIMITS {
            *(kind.get)(&mut limits) = kind.default;
        }
        limits
    }
}

impl HealthLimits {
    /// The value of a limit.
    pub fn value(&self, kind: &LimitKind) -> f64 {
        *(kind.get)(&mut self.clone())
    }

    /// Reads the `[health]` table of a rulebook; what it leaves out keeps its default.
    pub(in crate::screening) fn read(table: &mut TableReader<'_, '_>) -> Self {
        let mut limits = Self::default();
        for kind in LIMITS {
            if let Some(limit) = table.number(kind.key) {
                if limit <= 0.0 {
                    table.wrong_here(format!("{} must be more than zero", kind.key));
                }
                *(kind.get)(&mut limits) = limit;
            }
        }
        limits
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_document_names_every_limit() {
        let document = include_str!("../../../docs/rules.md");
        for kind in LIMITS {
            let unit = if kind.unit == "1" { String::new() } else { format!(" {}", kind.unit) };
            let row = format!("| `{}` | {} | {}{unit} |", kind.key, kind.meaning, kind.default);
            assert!(document.contains(&row), "docs/rules.md lacks\n{row}");
            assert!(document.contains(kind.source), "docs/rules.md lacks\n{}", kind.source);
        }
    }

    #[test]
    fn every_limit_has_a_place_of_its_own() {
        let mut limits = HealthLimits::default();
        for (number, kind) in LIMITS.iter().enumerate() {
            *(kind.get)(&mut limits) = number as f64;
        }
        for (number, kind) in LIMITS.iter().enumerate() {
            assert_eq!(limits.value(kind), number as f64, "{}", kind.key);
        }
    }
}
