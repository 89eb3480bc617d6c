//! Channels that a file itself gives up as bad.

use super::decoder::Decoder;
use super::error::Setback;
use super::footprint_variables::{FlagMeaning, held, meanings};
use super::problem::Problem;
use super::truth::is_truth;
use crate::netcdf_files::{FileIndex, FileReader, Variable};

/// Words of a flag's meaning that give a channel up.
const BAD: [&str; 7] = ["bad", "dead", "unusable", "invalid", "defective", "rejected", "excluded"];

/// Words behind a "not" that do the same.
const GOOD: [&str; 4] = ["use", "usable", "valid", "good"];

/// More rows of flags than detectors or scan lines make; flags of each footprint's channels are not
/// about the channels.
const MOST_ROWS: usize = 4096;

/// The channels of a band that a CF flag variable over its spectral dimension gives up as bad; where
/// it has a row for each detector or scan line, those that all rows give up.
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
    let index = reader.index();
    for variable in index.variables.iter().filter(|variable| !is_truth(variable)) {
        let along = along_channels(index, variable, band, spectral);
        let meanings = if along.is_some() { meanings(variable) } else { Vec::new() };
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
        let (inner, channels) = along.unwrap_or((1, values.len()));
        let rows = values.len() / channels.max(1);
        let (found, in_part) = given_up(&meanings, &values, inner, channels);
        if in_part > 0 {
            let what = format!(
                "`{}` gives up {in_part} channels in some of its {rows} rows only",
                variable.path
            );
            problems.push(Problem::note(&what, &band.path, "they stay in layers"));
        }
        if !found.is_empty() {
            let what = format!(
                "`{}` gives up {} of its {} channels as bad",
                variable.path,
                found.len(),
                channels
            );
            problems.push(Problem::note(&what, &band.path, "no layer takes them"));
        }
        bad.extend(found);
    }
    bad.sort_unstable();
    bad.dedup();
    Ok(bad)
}

/// How many values lie behind each step along the channels, and how many channels there are, for a
/// variable over the channels and perhaps other dimensions of the band.
fn along_channels(
    index: &FileIndex,
    variable: &Variable,
    band: &Variable,
    spectral: usize,
) -> Option<(usize, usize)> {
    let place = variable.dimensions.iter().position(|one| *one == spectral)?;
    let of_band = variable.dimensions.iter().all(|one| band.dimensions.contains(one));
    let lengths = index.lengths(variable);
    let rows = (0..lengths.len()).filter(|one| *one != place).map(|one| lengths[one]);
    let rows = rows.fold(1, usize::saturating_mul);
    let fits = variable.kind.is_number() && of_band && (1..=MOST_ROWS).contains(&rows);
    fits.then(|| (lengths[place + 1..].iter().product(), lengths[place]))
}

/// The channels that all rows give up, and how many only some do.
fn given_up(
    meanings: &[FlagMeaning],
    values: &[f64],
    inner: usize,
    channels: usize,
) -> (Vec<usize>, usize) {
    let is_bad = |value: f64| held(meanings, value).any(|meaning| gives_up(&meaning.meaning));
    let rows = values.len() / channels.max(1);
    let mut counts = vec![0; channels];
    for (number, &value) in values.iter().enumerate() {
        counts[number / inner.max(1) % channels.max(1)] += usize::from(is_bad(value));
    }
    let all = (0..channels).filter(|&channel| counts[channel] == rows && rows > 0).collect();
    (all, counts.iter().filter(|count| (1..rows).contains(*count)).count())
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
        assert_eq!(given_up(&codes, &[0.0, 2.0, 3.0, f64::NAN], 1, 4), (vec![1], 0));
        let bits = [meaning(1, None, "noisy"), meaning(4, None, "do_not_use")];
        assert_eq!(given_up(&bits, &[0.0, 1.0, 4.0, 5.0], 1, 4), (vec![2, 3], 0));
    }

    #[test]
    fn a_channel_is_bad_where_all_rows_give_it_up() {
        let bits = [FlagMeaning { mask: 1, value: None, meaning: "bad".into() }];
        // Two detectors of three channels: rows one after another, and channels first.
        assert_eq!(given_up(&bits, &[1.0, 1.0, 0.0, 0.0, 1.0, 0.0], 1, 3), (vec![1], 1));
        assert_eq!(given_up(&bits, &[1.0, 0.0, 1.0, 1.0, 0.0, 0.0], 2, 3), (vec![1], 1));
    }
}
