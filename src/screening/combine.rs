//! What the tests of a flag add up to.
//!
//! Our own choice, calibrated and documented: margin m, log-odds l = 3 m; a family speaks with its
//! strongest voice for the flag, or with the mean of those against; coverage c = applicable weight /
//! total weight; L = c L0 + Σ w l, p = 1 / (1 + e^-L); doubt = 1 - c |2 p - 1|. The start L0 is the
//! counterweight to what all families say where there is nothing; where some are silent only their
//! share of it counts, or silence would speak.

/// Log-odds per unit of margin.
const LOG_ODDS_PER_MARGIN: f64 = 3.0;

/// One test's contribution at one footprint.
#[derive(Debug, Clone, Copy)]
pub struct Voice {
    /// The margin; NaN where the test does not speak.
    pub margin: f64,
    /// Whether it speaks with half its voice.
    pub halved: bool,
    /// Factor where it speaks against the flag.
    pub against: f64,
}

impl Voice {
    /// Log-odds, if it speaks.
    pub fn log_odds(self) -> Option<f64> {
        if self.margin.is_nan() {
            return None;
        }
        let factor = if self.margin > 0.0 { 1.0 } else { self.against };
        let half = if self.halved { 0.5 } else { 1.0 };
        Some(LOG_ODDS_PER_MARGIN * self.margin * factor * half)
    }
}

/// Log-odds of a family: the strongest voice for the flag, else the mean of those against.
/// `None` where none speaks.
pub fn family_voice(voices: impl IntoIterator<Item = Voice>) -> Option<f64> {
    let (mut strongest, mut against, mut count) = (0.0_f64, 0.0, 0_usize);
    for log_odds in voices.into_iter().filter_map(Voice::log_odds) {
        strongest = strongest.max(log_odds);
        if log_odds <= 0.0 {
            against += log_odds;
        }
        count += 1;
    }
    match count {
        0 => None,
        _ if strongest > 0.0 => Some(strongest),
        count => Some(against / count as f64),
    }
}

/// What is concluded about a flag.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Conclusion {
    /// Log-odds that the flag holds; NaN where no test speaks.
    pub log_odds: f64,
    /// Probability that the flag holds; NaN where no test speaks.
    pub probability: f64,
    /// Share of the tests' weight that could speak, 0 to 1.
    pub coverage: f64,
    /// 0 plain, 1 a coin toss or not tested.
    pub doubt: f64,
}

impl Conclusion {
    /// Whether the flag is set: not where no test speaks, nor by a coin toss.
    pub fn is_set(&self) -> bool {
        self.probability > 0.5
    }
}

/// From families to a conclusion: weight and voice of each.
pub fn conclude(start: f64, families: impl IntoIterator<Item = (f64, Option<f64>)>) -> Conclusion {
    let (mut voices, mut speaking, mut total, mut heard) = (0.0, 0.0, 0.0, false);
    for (weight, voice) in families {
        total += weight;
        if let Some(voice) = voice {
            voices += weight * voice;
            speaking += weight;
            heard = true;
        }
    }
    if !heard {
        return Conclusion { log_odds: f64::NAN, probability: f64::NAN, coverage: 0.0, doubt: 1.0 };
    }
    let coverage = if total > 0.0 { speaking / total } else { 0.0 };
    let log_odds = coverage * start + voices;
    let probability = 1.0 / (1.0 + (-log_odds).exp());
    let doubt = 1.0 - coverage * (2.0 * probability - 1.0).abs();
    Conclusion { log_odds, probability, coverage, doubt }
}
