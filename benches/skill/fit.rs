//! Starting points and weights by logistic regression, weights kept above zero.

use std::fmt::Write as _;

use radsieve::screening::Rulebook;

use crate::cases::Granule;

/// Pulls weights towards 1 and starting points towards 0 as so many footprints would, so that scenes that
/// are told apart without a slip do not drive them to infinity.
const PULL: f64 = 20.0;
const SWEEPS: usize = 60;
/// A family that is asked has a say, and none decides alone.
const WEIGHTS: (f64, f64) = (0.1, 2.0);
const START: (f64, f64) = (-6.0, 6.0);
/// Fewer cases of either kind calibrate nothing.
const FEWEST: usize = 60;

/// A footprint: what each family says, if it speaks, and the truth.
type Row = (Vec<Option<f64>>, bool);

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
        let Some(found) = case.found(flag).filter(|_| case.surface == surface) else { continue };
        if found.probability.is_some() {
            families = found.voices.iter().map(|one| one.0.clone()).collect();
            rows.push((found.voices.iter().map(|one| one.1).collect(), truth));
        }
    }
    (families, rows)
}

/// Starting point, then weights. Each footprint counts once: probabilities are those of the set that is
/// fitted to, in which cloud is about as frequent as clear sky.
///
/// One number after the other is moved to its best value by Newton's step, until nothing moves. The
/// coverage that the start counts with follows the weights from sweep to sweep.
fn fit(rows: &[Row], families: usize) -> Vec<f64> {
    let mut found = vec![0.0; families + 1];
    found[1..].fill(0.5);
    for _ in 0..SWEEPS {
        let coverages: Vec<f64> = rows.iter().map(|row| coverage(&row.0, &found[1..])).collect();
        let mut sums: Vec<f64> = rows
            .iter()
            .zip(&coverages)
            .map(|((voices, _), coverage)| coverage * found[0] + sum(voices, &found[1..]))
            .collect();
        for (place, weight) in found.iter_mut().enumerate() {
            let lever = |row: usize| match place {
                0 => coverages[row],
                place => rows[row].0[place - 1].unwrap_or(0.0),
            };
            let (home, pull) = if place == 0 { (0.0, PULL * 0.1) } else { (1.0, PULL) };
            let (mut slope, mut bend) = (pull * (*weight - home), pull);
            for (row, sum) in sums.iter().enumerate() {
                let probability = 1.0 / (1.0 + (-sum).exp());
                slope += (probability - f64::from(u8::from(rows[row].1))) * lever(row);
                bend += probability * (1.0 - probability) * lever(row) * lever(row);
            }
            let step = (-slope / bend).clamp(-0.5, 0.5);
            let (least, most) = if place == 0 { START } else { WEIGHTS };
            let new = (*weight + step).clamp(least, most);
            let moved = new - *weight;
            *weight = new;
            for (row, sum) in sums.iter_mut().enumerate() {
                *sum += moved * lever(row);
            }
        }
    }
    found
}

fn sum(voices: &[Option<f64>], weights: &[f64]) -> f64 {
    voices.iter().zip(weights).map(|(voice, weight)| weight * voice.unwrap_or(0.0)).sum()
}

/// Weight of the families that speak over that of all.
fn coverage(voices: &[Option<f64>], weights: &[f64]) -> f64 {
    let speaking = voices.iter().zip(weights).filter(|(voice, _)| voice.is_some());
    speaking.map(|(_, weight)| weight).sum::<f64>() / weights.iter().sum::<f64>()
}
