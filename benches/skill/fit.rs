//! Starting points and weights by logistic regression, weights kept above zero.

use std::fmt::Write as _;

use radsieve::screening::Rulebook;

use crate::cases::Granule;

/// Pulls weights towards 1 and starting points towards 0, so that scenes that are told apart
/// without a slip do not drive them to infinity.
const PULL: f64 = 0.02;
const STEPS: usize = 1500;
/// Fewer cases of either kind calibrate nothing.
const FEWEST: usize = 60;

/// A footprint: what each family says, 0 where it is silent, and the truth.
type Row = (Vec<f64>, bool);

/// The `start` and `weights` keys of each surface.
pub fn weights(rulebook: &Rulebook, granules: &[Granule]) -> String {
    let mut text = String::new();
    for surface in &rulebook.surfaces {
        let _ = writeln!(text, "# surface {}", surface.name);
        for flag in rulebook.flags() {
            let (families, rows) = rows(&surface.name, flag, granules);
            let set = rows.iter().filter(|row| row.1).count();
            if set < FEWEST || rows.len() - set < FEWEST {
                let _ = writeln!(text, "# {flag}: {set} of {} cases, not fitted", rows.len());
                continue;
            }
            let fitted = fit(&rows, families.len());
            let weights: Vec<String> = families
                .iter()
                .zip(&fitted[1..])
                .map(|(family, weight)| format!("{family} = {weight:.2}"))
                .collect();
            let (start, weights) = (fitted[0], weights.join(", "));
            let _ =
                writeln!(text, "{flag}: start {start:.2}; {{ {weights} }}  # {set}/{}", rows.len());
        }
    }
    text
}

fn rows(surface: &str, flag: &str, granules: &[Granule]) -> (Vec<String>, Vec<Row>) {
    let (mut families, mut rows) = (Vec::new(), Vec::new());
    for case in granules.iter().flat_map(|granule| &granule.cases) {
        let Some(truth) = case.truth.deserves(flag) else { continue };
        let found = case.evidence.flags.iter().find(|one| one.flag == flag);
        let Some(found) = found.filter(|_| case.evidence.surface.as_deref() == Some(surface))
        else {
            continue;
        };
        if found.probability.is_some() {
            families = found.families.iter().map(|one| one.family.clone()).collect();
            let voices = found.families.iter().map(|one| one.log_odds.unwrap_or(0.0));
            rows.push((voices.collect(), truth));
        }
    }
    (families, rows)
}

/// Starting point, then weights. Both kinds of footprint count alike, however many there are.
fn fit(rows: &[Row], families: usize) -> Vec<f64> {
    let set = rows.iter().filter(|row| row.1).count() as f64;
    let unset = rows.len() as f64 - set;
    let mut found = vec![0.0; families + 1];
    found[1..].fill(0.5);
    for step in 0..STEPS {
        let rate = 0.15 / (1.0 + step as f64 / 300.0);
        let mut slope = vec![0.0; families + 1];
        for (voices, truth) in rows {
            let sum: f64 =
                voices.iter().zip(&found[1..]).map(|(voice, weight)| voice * weight).sum();
            let probability = 1.0 / (1.0 + (-found[0] - sum).exp());
            let share = 0.5 / if *truth { set } else { unset };
            let miss = share * (probability - f64::from(u8::from(*truth)));
            slope[0] += miss;
            slope[1..].iter_mut().zip(voices).for_each(|(slope, voice)| *slope += miss * voice);
        }
        found[0] -= rate * (slope[0] + PULL * 0.1 * found[0]);
        for (weight, slope) in found[1..].iter_mut().zip(&slope[1..]) {
            *weight = (*weight - rate * (slope + PULL * (*weight - 1.0) * 0.2)).clamp(0.05, 2.0);
        }
    }
    found
}
