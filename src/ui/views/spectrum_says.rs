//! What the spectrum itself says: the instrument's health, and whether it is unlike the others.

use crate::screening::health::{BandHealth, BasisOrigin, Examined};
use crate::screening::{Evidence, HealthEvidence, Reconstruction};
use crate::system::clean_text;
use crate::ui::bench::Bench;
use crate::ui::colour::Tone;
use crate::ui::panes::evidence::EvidenceRow;

/// Channels of an unusual spectrum that are named.
const MOST_CHANNELS: usize = 3;

/// The rows: what is wrong with the spectrum, its detector or a band, and band by band how well it is
/// rebuilt from the components of the others.
pub fn spectrum_says(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    let Some((evidence, examined)) = examined(bench) else { return };
    rows.push(EvidenceRow::Section("Spectrum".to_owned()));
    if evidence.health.is_empty() {
        let words = "nothing is wrong with it or its detector".to_owned();
        rows.push(EvidenceRow::Words(words, Tone::Plain));
    }
    rows.extend(evidence.health.iter().map(of_health));
    for rebuilt in &evidence.reconstruction {
        let band = examined.bands.iter().find(|band| examined.band_name(band.band) == rebuilt.band);
        rows.extend(of_band(rebuilt, band));
    }
}

fn examined(bench: &Bench) -> Option<(Evidence, &Examined)> {
    let screened = bench.tests.screened.as_deref()?;
    // Nothing looks at what the producer rejects.
    if bench.review.producer().rejects(bench.cursor) {
        return None;
    }
    Some((screened.evidence(bench.cursor)?, screened.examined.as_ref()?))
}

/// `bad_spectrum mw: spike: 38.2 noises, limit 6; 2391.2500 cm-1`.
fn of_health(found: &HealthEvidence) -> EvidenceRow {
    let flag = found.flag.unwrap_or("told only");
    let band = found.band.as_ref().map_or(String::new(), |band| format!(" {}", clean_text(band)));
    let words = format!("{flag}{band}: {} ({})", found.words, found.source);
    EvidenceRow::Words(words, if found.flag.is_some() { Tone::Warning } else { Tone::Plain })
}

/// The score of a band against the limit and what the training's spectra have.
fn of_band(rebuilt: &Reconstruction, band: Option<&BandHealth>) -> Option<EvidenceRow> {
    let score = rebuilt.score?;
    let training = band.and_then(|band| band.basis.as_ref()).map(|basis| basis.scores);
    let training = training.map_or(String::new(), |scores| {
        format!(
            "; {} training spectra have {:.2} ± {:.2}",
            scores.spectra, scores.mean, scores.deviation
        )
    });
    let origin = match rebuilt.basis.as_str() {
        "own" => "this granule's own",
        file => file,
    };
    let channels: Vec<String> = rebuilt
        .channels
        .iter()
        .take(MOST_CHANNELS)
        .map(|(wavenumber, residual)| format!("{wavenumber:.2} cm-1 by {residual:+.1}"))
        .collect();
    let channels = match channels.is_empty() {
        true => String::new(),
        false => format!("; most at {}", channels.join(", ")),
    };
    let note = format!(
        "unusual from {:.2} on{training}; {} components, {}{channels}",
        rebuilt.limit,
        rebuilt.components,
        clean_text(origin)
    );
    let word = if rebuilt.unusual { "unusual" } else { "as the others" };
    Some(EvidenceRow::Fact {
        label: format!("{} {word}", clean_text(&rebuilt.band)),
        value: format!("{score:.2}"),
        unit: "noises".to_owned(),
        note,
        tone: if rebuilt.unusual { Tone::Warning } else { Tone::Plain },
    })
}

/// What the spectra could not be asked, and why.
pub fn unasked(bench: &Bench) -> Vec<EvidenceRow> {
    let why = |words: String| EvidenceRow::Words(words, Tone::Faint);
    let Some((evidence, examined)) = examined(bench) else {
        return vec![why(
            "health and unusual spectra: the spectra could not be examined".to_owned()
        )];
    };
    let mut found = Vec::new();
    for band in &examined.bands {
        let name = clean_text(examined.band_name(band.band));
        if band.origin == BasisOrigin::None {
            found.push(format!("unusual in {name}: too few whole spectra to find components in"));
        } else if evidence.reconstruction.iter().any(|one| one.band == name && one.score.is_none())
        {
            found.push(format!("unusual in {name}: too many channels are missing here"));
        }
        if !band.has_nedn {
            found.push(format!("noise of {name} against the file's: the file gives none"));
        }
        if examined.grid.detectors > 1 && band.shifts.is_empty() {
            found.push(format!("spectral shift in {name}: no lines of CO2 that are known well"));
        }
    }
    if examined.grid.detectors <= 1 {
        found
            .push("striping and shifts of detectors: the file tells no detectors apart".to_owned());
    }
    found.into_iter().map(why).collect()
}
