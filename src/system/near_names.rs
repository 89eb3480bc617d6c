//! Names that someone may have meant.

/// At most this many are offered.
const OFFERED: usize = 4;

/// The names among `known` that are spelt most like `typed`, the likeliest first.
pub fn near_names<'a>(typed: &str, known: impl IntoIterator<Item = &'a str>) -> Vec<String> {
    let wanted = typed.to_lowercase();
    let mut scored: Vec<(usize, &str)> = known
        .into_iter()
        .filter_map(|name| likeness(&wanted, &name.to_lowercase()).map(|score| (score, name)))
        .collect();
    scored.sort();
    scored.dedup();
    scored.into_iter().take(OFFERED).map(|(_, name)| name.to_owned()).collect()
}

/// A small number for a likely slip; `None` where nothing is alike. One that begins or ends like
/// the other (`latitude` for `lat`) counts as one slip.
fn likeness(typed: &str, known: &str) -> Option<usize> {
    let length = typed.chars().count().max(known.chars().count());
    let slips = edits(typed, known);
    if slips <= length.div_ceil(3) {
        return Some(slips);
    }
    let shorter = typed.chars().count().min(known.chars().count());
    let contained = known.contains(typed) || typed.contains(known);
    (shorter >= 3 && contained).then_some(length.div_ceil(3))
}

/// Edits between two words: insertions, deletions, substitutions, swaps of neighbours
/// (optimal string alignment). Long words are cut, for the cost is the product of the lengths.
fn edits(one: &str, other: &str) -> usize {
    let one: Vec<char> = one.chars().take(64).collect();
    let other: Vec<char> = other.chars().take(64).collect();
    let mut before: Vec<usize> = Vec::new();
    let mut last: Vec<usize> = (0..=other.len()).collect();
    for i in 1..=one.len() {
        let mut row = vec![i; other.len() + 1];
        for j in 1..=other.len() {
            let changed = usize::from(one[i - 1] != other[j - 1]);
            row[j] = (last[j] + 1).min(row[j - 1] + 1).min(last[j - 1] + changed);
            let swapped =
                i > 1 && j > 1 && one[i - 1] == other[j - 2] && one[i - 2] == other[j - 1];
            if swapped {
                row[j] = row[j].min(before[j - 2] + 1);
            }
        }
        before = std::mem::replace(&mut last, row);
    }
    last[other.len()]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn edits_are_counted() {
        assert_eq!(edits("", "abc"), 3);
        assert_eq!(edits("kitten", "sitting"), 3);
        assert_eq!(edits("lta", "lat"), 1);
    }

    #[test]
    fn slips_and_longer_forms_are_recognised() {
        let known = ["lat", "lon", "land", "view_zenith", "solar_zenith"];
        assert_eq!(near_names("lta", known), ["lat"]);
        assert_eq!(near_names("latitude", known), ["lat"]);
        assert_eq!(near_names("veiw_zenith", known)[0], "view_zenith");
        assert_eq!(near_names("zenith", known), ["solar_zenith", "view_zenith"]);
        assert!(near_names("qqqqqq", known).is_empty());
    }
}
