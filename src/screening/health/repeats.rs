//! Spectra that repeat others to the last bit: a scan line that was sent twice.

use std::collections::HashMap;

use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::BandReadings;

/// Footprints whose values are those of an earlier one in all channels that have a value; `keys` has,
/// for each footprint, one key per band. What only one in `dead_detectors` of the band sees does
/// not count, for it is always the same.
pub fn repeated_spectra(
    bands: &[BandReadings<'_>],
    keys: impl Fn(usize) -> u64,
    dead: impl Fn(usize, usize) -> bool,
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Vec<Finding> {
    let limit = Limit::of(limits, "repeated_channels");
    let mut seen: HashMap<u64, usize> = HashMap::new();
    let mut findings = Vec::new();
    for footprint in 0..grid.count() {
        let key = keys(footprint);
        if key == 0 {
            continue;
        }
        let Some(&earlier) = seen.get(&key) else {
            seen.insert(key, footprint);
            continue;
        };
        let own = bands.iter().filter(|band| !dead(band.number, grid.detector(footprint)));
        let same: Option<usize> = own.map(|band| same_channels(band, earlier, footprint)).sum();
        if let Some(same) = same.filter(|same| *same as f64 >= limit.value) {
            let subject = Subject::Footprint(footprint);
            let finding = limit.finding(Check::Repeated, subject, None, same as f64);
            findings
                .push(finding.saying(format!("the same as in scan line {}", grid.line(earlier))));
        }
    }
    findings
}

/// In how many channels two spectra have the same value; `None` where they differ in one.
fn same_channels(band: &BandReadings<'_>, one: usize, other: usize) -> Option<usize> {
    let (mut first, mut second) = (Vec::new(), Vec::new());
    band.radiances(one, &mut first);
    band.radiances(other, &mut second);
    let mut same = 0;
    for (first, second) in first.iter().zip(&second) {
        match (first.is_finite(), second.is_finite()) {
            (true, true) if first == second => same += 1,
            (true, true) => return None,
            _ => {}
        }
    }
    Some(same)
}
