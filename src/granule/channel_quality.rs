//! Channels that a file itself gives up as bad.

use super::decoder::Decoder;
use super::error::Setback;
use super::footprint_variables::{FlagMeaning, held, meanings};
use super::problem::Problem;
use super::truth::is_truth;
use crate::netcdf_files::{FileReader, Variable};

/// Words of a flag's meaning that give a channel up.
const BAD: [&str; 7] = ["bad", "dead", "unusable", "invalid", "defective", "rejected", "excluded"];

/// Words behind a "not" that do the same.
const GOOD: [&str; 4] = ["use", "usable", "valid", "good"];

/// The channels of a band that a CF flag variable over its spectral dimension gives up as bad.
///
/// # Errors
/// The whole file cannot be read any more.
pub fn find(
    reader: &FileReader,
    band: &Variable,
    spectral: usize,
    problems: &mut Vec<Problem>,
) -> Result<Vec<usize>, Setback> {
    let mut bad = Vec::new();
    for variable in reader.index().variables.iter().filter(|variable| !is_truth(variable)) {
        let is_list = variable.dimensions == [spectral] && variable.kind.is_number();
        let meanings = if is_list { meanings(variable) } else { Vec::new() };
        if !meanings.iter().any(|meaning| gives_up(&meaning.meaning)) {
            continue;
        }
        let samples = match reader.read_all(variable) {
            Ok(samples) => samples,
            Err(error) if error.fault.ends_the_file() => return Err(error.into()),
            Err(error) => {
                let what = format!("`{}` cannot be read: {}", variable.path, error.fault);
                problems.push(Problem::missing(&what, &band.path, "bad channels are unknown"));
                continue;
            }
        };
        let values = Decoder::of(variable).decode_all(&samples);
        let found = channels(&meanings, &values);
        if !found.is_empty() {
            let what = format!(
                "`{}` gives up {} of its {} channels as bad",
                variable.path,
                found.len(),
                values.len()
            );
            problems.push(Problem::note(&what, &band.path, "no layer takes them"));
        }
        bad.extend(found);
    }
    bad.sort_unstable();
    bad.dedup();
    Ok(bad)
}

fn channels(meanings: &[FlagMeaning], values: &[f64]) -> Vec<usize> {
    let is_bad = |value: f64| held(meanings, value).any(|meaning| gives_up(&meaning.meaning));
    (0..values.len()).filter(|&channel| is_bad(values[channel])).collect()
}

/// Whether a meaning says that a channel is not to be used.
pub fn gives_up(meaning: &str) -> bool {
    let lower = meaning.to_lowercase();
    let words: Vec<&str> = lower.split(|one: char| !one.is_ascii_alphanumeric()).collect();
    words.iter().enumerate().any(|(place, word)| {
        let before = place.checked_sub(1).map_or("", |before| words[before]);
        let negated = ["not", "no", "non"].contains(&before);
        if negated { GOOD.contains(word) } else { BAD.contains(word) }
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn meanings_that_give_a_channel_up() {
        for meaning in ["bad", "dead_channel", "do_not_use", "Not_Usable", "calibration-invalid"] {
            assert!(gives_up(meaning), "{meaning}");
        }
        for meaning in ["good", "not_bad", "no_dead_detector", "noisy", "usable", "badge"] {
            assert!(!gives_up(meaning), "{meaning}");
        }
    }

    #[test]
    fn codes_and_bits_are_told_apart() {
        let meaning = |mask, value, word: &str| FlagMeaning { mask, value, meaning: word.into() };
        let codes = [meaning(-1, Some(0), "good"), meaning(-1, Some(2), "dead")];
        assert_eq!(channels(&codes, &[0.0, 2.0, 3.0, f64::NAN]), [1]);
        let bits = [meaning(1, None, "noisy"), meaning(4, None, "do_not_use")];
        assert_eq!(channels(&bits, &[0.0, 1.0, 4.0, 5.0]), [2, 3]);
    }
}
