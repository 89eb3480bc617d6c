//! What the spectra say as a set, as decisions: channel flags, flags limited to bands, unusual ones.

use std::collections::BTreeMap;

use crate::flags::{Act, ChannelName, FootprintSet};
use crate::screening::health::{Check, Examined, Finding, Subject};

/// The decisions, each with its reason: one for each channel flag, one for each check and band, one
/// for what is unusual.
pub fn spectra_acts(examined: &Examined) -> Vec<(Act, Option<String>)> {
    let mut acts = channel_acts(examined);
    acts.extend(footprint_acts(examined));
    acts.extend(unusual_act(examined));
    acts
}

fn channel_acts(examined: &Examined) -> Vec<(Act, Option<String>)> {
    let mut by_check: BTreeMap<Check, Vec<&Finding>> = BTreeMap::new();
    for finding in examined.of_channels() {
        by_check.entry(finding.check).or_default().push(finding);
    }
    let act = |(check, findings): (Check, Vec<&Finding>)| {
        let channel = |finding: &&Finding| match finding.subject {
            Subject::Channel(channel) => Some(ChannelName {
                band: examined.band_name(channel.band).to_owned(),
                index: channel.index,
                wavenumber: channel.wavenumber,
            }),
            _ => None,
        };
        let channels = findings.iter().filter_map(channel).collect();
        let flag = check.flag()?.to_owned();
        Some((Act::FlagChannels { flag, channels }, Some(why(&findings))))
    };
    by_check.into_iter().filter_map(act).collect()
}

fn footprint_acts(examined: &Examined) -> Vec<(Act, Option<String>)> {
    let mut by_place: BTreeMap<(Check, Option<usize>), Vec<&Finding>> = BTreeMap::new();
    for finding in &examined.findings {
        if !examined.footprints_of(finding).is_empty() {
            by_place.entry((finding.check, finding.band)).or_default().push(finding);
        }
    }
    let act = |((check, band), findings): ((Check, Option<usize>), Vec<&Finding>)| {
        let footprints: FootprintSet =
            findings.iter().flat_map(|finding| examined.footprints_of(finding)).collect();
        let bands = band.map(|band| vec![examined.band_name(band).to_owned()]);
        let flag = check.flag()?.to_owned();
        Some((Act::Flag { flag, footprints, bands }, Some(why(&findings))))
    };
    by_place.into_iter().filter_map(act).collect()
}

/// How often, how far at most, and by whose limit.
fn why(findings: &[&Finding]) -> String {
    let size = |finding: &&Finding| finding.value.abs();
    let largest = findings.iter().copied().max_by(|a, b| size(a).total_cmp(&size(b)));
    largest.map_or_else(String::new, |largest| {
        format!("{} times, at most {} ({})", findings.len(), largest.words(), largest.source)
    })
}

fn unusual_act(examined: &Examined) -> Option<(Act, Option<String>)> {
    let footprints: FootprintSet = examined.unusual.iter().map(|one| one.footprint).collect();
    if footprints.is_empty() {
        return None;
    }
    let bands = examined.bands.iter().filter_map(|band| {
        let count = examined.unusual.iter().filter(|one| one.band == band.band).count();
        let (name, origin) = (examined.band_name(band.band), band.origin.name());
        let limit = band.limit;
        (count > 0).then(|| format!("{name} ({count}): score above {limit:.2}, basis {origin}"))
    });
    let why = bands.collect::<Vec<_>>().join("; ");
    let flag = Check::UNUSUAL.to_owned();
    Some((Act::Flag { flag, footprints, bands: None }, Some(why)))
}
