//! Which granules of the Tray may be signed off together, by limits that the person has set.

use std::collections::BTreeMap;

use crate::flags::{ErrorRate, GranuleState, SignOffLimits, SpotCheck, pooled};

use super::{Standing, Tray};

/// What is offered for signing off together.
#[derive(Debug, Clone, PartialEq)]
pub struct Offer {
    /// Entries within the limits.
    pub within: Vec<usize>,
    /// Entries beyond them or not to be judged, by reason.
    pub beyond: BTreeMap<String, Vec<usize>>,
    /// Of those, entries that the rulebook has not screened.
    pub unscreened: Vec<usize>,
    /// What the spot checks of the rulebook have shown, without flag and with flag.
    pub spot: [ErrorRate; 2],
}

impl Tray {
    /// The granules that lie within the limits, by what their ledgers say. They have to be screened
    /// by `rulebook` (name and fingerprint), and its plain verdicts have to be checked.
    pub fn offer(&self, limits: &SignOffLimits, rulebook: &str) -> Offer {
        let standings = || self.entries().iter().filter_map(|entry| entry.standing.as_ref());
        let checks: Vec<&SpotCheck> = standings()
            .flat_map(|standing| &standing.spot_checks)
            .filter(|check| check.rulebook == rulebook)
            .collect();
        let spot = [false, true].map(|flagged| pooled(checks.iter().copied(), flagged));
        let occurs = [false, true].map(|flagged| {
            let mut strata = checks.iter().flat_map(|check| &check.strata);
            strata.any(|stratum| stratum.flagged == flagged && stratum.plain > 0)
        });
        let unchecked = spot_reason(&spot, occurs, limits);
        let mut offer =
            Offer { within: Vec::new(), beyond: BTreeMap::new(), unscreened: Vec::new(), spot };
        for (number, entry) in self.entries().iter().enumerate() {
            let standing = entry.standing.as_ref().filter(|_| entry.error.is_none());
            let reason = match standing {
                None => Some("cannot be used, or not read yet".to_owned()),
                // Done already: neither offered nor told.
                Some(one) if is_done(one) => continue,
                Some(one) => {
                    if one.tests.as_deref() != Some(rulebook) {
                        offer.unscreened.push(number);
                    }
                    reason(one, limits, rulebook).or_else(|| unchecked.clone())
                }
            };
            match reason {
                None => offer.within.push(number),
                Some(reason) => offer.beyond.entry(reason).or_default().push(number),
            }
        }
        offer
    }
}

fn is_done(standing: &Standing) -> bool {
    matches!(standing.state, GranuleState::SignedOff | GranuleState::SetAside)
}

fn spot_reason(spot: &[ErrorRate; 2], occurs: [bool; 2], limits: &SignOffLimits) -> Option<String> {
    let [free, flagged] = spot;
    if free.judged == 0 && flagged.judged == 0 {
        return Some("no spot check of this rulebook".to_owned());
    }
    // Of a kind that occurs and of which nobody could tell anything, all may be wrong.
    let mut rates = spot.iter().zip(occurs);
    let beyond =
        rates.any(|(rate, occurs)| (occurs || rate.judged > 0) && rate.high > limits.spot_error);
    beyond.then(|| "the spot checks leave too large an error possible".to_owned())
}

/// Why a granule is not within the limits, if it is not.
pub fn reason(standing: &Standing, limits: &SignOffLimits, rulebook: &str) -> Option<String> {
    let Some(counts) = standing.counts.as_ref().filter(|counts| counts.footprints > 0) else {
        return Some("not screened".to_owned());
    };
    match standing.tests.as_deref() {
        None => return Some("not screened".to_owned()),
        Some(tests) if tests != rulebook => {
            return Some("screened by another rulebook".to_owned());
        }
        Some(_) => {}
    }
    let share = |count: usize| count as f64 / counts.footprints as f64;
    let bad = counts.per_flag.get("bad_spectrum").copied().unwrap_or(0);
    let too_much = [
        ("too much in doubt", share(standing.in_doubt.unwrap_or(counts.in_doubt)), limits.doubt),
        ("too much not assessed", share(counts.not_assessed), limits.not_assessed),
        ("too many bad spectra", share(bad), limits.bad_spectra),
    ];
    if let Some((words, ..)) = too_much.iter().find(|(_, share, limit)| share > limit) {
        return Some((*words).to_owned());
    }
    (counts.flagged_channels > limits.flagged_channels).then(|| "too many bad channels".to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_kind_that_occurs_and_was_not_judged_may_be_all_wrong() {
        let limits = SignOffLimits { spot_error: 0.2, ..SignOffLimits::default() };
        // None wrong of 40: at most 8.8 % at 97.5 % confidence, 1 - 0.025^(1/40)
        // [Clopper & Pearson 1934].
        let judged = ErrorRate::of(0, 40);
        let nothing = ErrorRate::of(0, 0);
        let both = [true, true];
        assert_eq!(spot_reason(&[judged, judged], both, &limits), None);
        assert!(spot_reason(&[nothing, judged], both, &limits).is_some());
        assert_eq!(spot_reason(&[nothing, judged], [false, true], &limits), None);
        assert!(spot_reason(&[nothing, nothing], [false, false], &limits).is_some());
    }
}
