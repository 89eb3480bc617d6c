//! What `screen` says of the instrument and of unusual spectra, in words and for machines.

use std::collections::BTreeMap;
use std::io::{self, Write};

use serde_json::{Value, json};

use super::table::present;
use crate::screening::Evidence;
use crate::screening::health::{BandHealth, Check, DetectorShift, Examined, Finding, Subject};
use crate::spectral::median;
use crate::system::clean_text;

/// Each check that found something, with how often, behind a semicolon; empty where all is well.
pub fn instrument_words(examined: &Examined) -> String {
    let mut counts: BTreeMap<Check, usize> = BTreeMap::new();
    for finding in &examined.findings {
        *counts.entry(finding.check).or_default() += 1;
    }
    let words: Vec<String> =
        counts.iter().map(|(check, count)| format!("{} {count}", check.name())).collect();
    if words.is_empty() { String::new() } else { format!("; instrument: {}", words.join(", ")) }
}

/// All of it as one object: bands in numbers, findings one by one, unusual spectra.
pub fn instrument(examined: &Examined) -> Value {
    let unusual = examined.unusual.iter().map(|one| {
        json!({
            "footprint": one.footprint,
            "band": examined.band_name(one.band),
            "score": one.score,
            "limit": one.limit,
            "channels": channels(&one.channels),
        })
    });
    let not_examined: Vec<&String> = (examined.band_names.iter().enumerate())
        .filter(|(number, _)| !examined.bands.iter().any(|band| band.band == *number))
        .map(|(_, name)| name)
        .collect();
    json!({
        "bands": examined.bands.iter().map(|band| of_band(examined, band)).collect::<Vec<_>>(),
        "not_examined": not_examined,
        "findings": examined.findings.iter().map(|one| of_finding(examined, one)).collect::<Vec<_>>(),
        "unusual": unusual.collect::<Vec<_>>(),
    })
}

fn of_band(examined: &Examined, band: &BandHealth) -> Value {
    let mut ratios: Vec<f64> = band
        .noise
        .iter()
        .map(|one| one.noise / one.expected)
        .filter(|one| one.is_finite())
        .collect();
    let mut over_file: Vec<f64> =
        band.noise.iter().map(|one| one.noise / one.told).filter(|one| one.is_finite()).collect();
    let basis = band.basis.as_ref().map(|basis| {
        json!({
            "components": basis.components(),
            "from": band.origin.name(),
            "spectra": basis.scores.spectra,
            "left_out": basis.scores.left_out,
            "mean_score": basis.scores.mean,
            "score_deviation": basis.scores.deviation,
            "limit": band.limit,
        })
    });
    let detectors = band.detectors.iter().map(|one| {
        json!({
            "noise_ratio": present(one.noise),
            "noise_ratio_in_file": one.told_noise,
            "bias_K": present(one.bias),
            "bias_deviation_K": present(one.bias_deviation),
            "uniform_bias_K": present(one.uniform_bias),
            "uniform_bias_deviation_K": present(one.uniform_deviation),
        })
    });
    let of_shift = |one: &DetectorShift| json!({ "detector": one.detector, "ppm": one.ppm, "deviation_ppm": one.deviation });
    let shifts = |all: &[DetectorShift]| all.iter().map(of_shift).collect::<Vec<_>>();
    let absolute = band.absolute_shifts.as_ref().map(|all| shifts(all)).map_err(|why| *why);
    json!({
        "band": examined.band_name(band.band),
        "basis": basis,
        "noise_over_expected": present(median(&mut ratios)),
        "noise_in_file": band.has_nedn,
        "noise_over_file": present(median(&mut over_file)),
        "detectors": detectors.collect::<Vec<_>>(),
        "shifts": shifts(&band.shifts),
        "absolute_shifts": absolute.as_ref().ok(),
        "absolute_shift_not_applicable": absolute.as_ref().err(),
        "sweep_difference_K": band.sweep.map(|(difference, _)| difference),
    })
}

fn of_finding(examined: &Examined, finding: &Finding) -> Value {
    let (mut footprint, mut detector, mut wavenumber) = (None, None, None);
    match finding.subject {
        Subject::Footprint(one) => footprint = Some(one),
        Subject::Detector(one) => detector = Some(one),
        Subject::Channel(channel) => wavenumber = Some(channel.wavenumber),
        Subject::Granule => {}
    }
    json!({
        "check": finding.check.name(),
        "flag": finding.check.flag(),
        "band": finding.band.map(|band| examined.band_name(band)),
        "footprint": footprint,
        "detector": detector,
        "wavenumber_cm-1": wavenumber,
        "value": present(finding.value),
        "limit": present(finding.limit),
        "unit": finding.unit,
        "source": finding.source,
        "detail": finding.detail,
    })
}

fn channels(channels: &[(f64, f64)]) -> Vec<Value> {
    let one = |(wavenumber, residual): &(f64, f64)| json!({ "wavenumber_cm-1": wavenumber, "noises": residual });
    channels.iter().map(one).collect()
}

/// What is wrong with a spectrum, and how well it is rebuilt.
pub fn write_spectrum_evidence(evidence: &Evidence, out: &mut dyn Write) -> io::Result<()> {
    writeln!(out, "\ninstrument")?;
    if evidence.health.is_empty() {
        writeln!(out, "  nothing found")?;
    }
    for one in &evidence.health {
        let flag = one.flag.map_or("told only".to_owned(), str::to_owned);
        let band = one.band.as_ref().map(|band| format!(" in {}", clean_text(band)));
        writeln!(out, "  {flag}{}: {}", band.unwrap_or_default(), one.words)?;
        writeln!(out, "      source: {}", one.source)?;
    }
    writeln!(out, "\nunusual")?;
    for one in &evidence.reconstruction {
        let band = clean_text(&one.band);
        let basis = match one.basis.as_str() {
            "own" => "the granule itself".to_owned(),
            file => clean_text(file),
        };
        let (limit, components) = (one.limit, one.components);
        match one.score {
            None => writeln!(out, "  {band}: no score, too much is missing")?,
            Some(score) => {
                let said = if one.unusual { "unusual" } else { "like the others" };
                writeln!(out, "  {band}: {said}; score {score:.2} > {limit:.2} noises?")?;
                let (mean, deviation) = (one.training_mean, one.training_deviation);
                if let Some(deviations) = one.deviations {
                    let (count, of) = (one.training_spectra, "training spectra");
                    writeln!(
                        out,
                        "      {deviations:+.1} sigma: {count} {of} have {mean:.2} ± {deviation:.2}"
                    )?;
                }
                writeln!(out, "      T20, {components} components from {basis}")?;
            }
        }
        for (wavenumber, noises) in &one.channels {
            writeln!(out, "      {wavenumber:.4} cm-1: {noises:+.1} noises not explained")?;
        }
    }
    Ok(())
}
