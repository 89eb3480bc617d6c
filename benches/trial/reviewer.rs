//! The reviewer: a script that looks at the case on the screen and presses keys.
//!
//! It reads what the screen says: which footprint the cursor is on, how many the case has, what the tests
//! suggest. In place of a person's eye on spectra and maps it is told the word that the truth gives to
//! most footprints of the case, and takes it wrongly once in so many cases.

use rand::{RngExt, SeedableRng};
use rand_chacha::ChaCha8Rng;

/// How often the eye is wrong about a case.
pub const WRONG: f64 = 0.08;

/// What is seen of one footprint of a case.
#[derive(Debug, Clone, Copy)]
pub struct Seen<'a> {
    /// The flag that it deserves, if any.
    pub word: Option<&'static str>,
    /// Flags that the tests suggest and that keep a retrieval away.
    pub suggested: &'a [&'a str],
}

/// What the reviewer does with a case.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Deed {
    /// Accepts what the tests suggest.
    Accept,
    /// Overrules it.
    Overrule,
    /// Gives this flag.
    Flag(&'static str),
}

/// The eye, with its mistakes.
pub struct Reviewer {
    random: ChaCha8Rng,
    /// Cases judged wrongly.
    pub mistakes: usize,
}

impl Reviewer {
    /// An eye whose mistakes grow from a seed.
    pub fn new(seed: u64) -> Reviewer {
        Reviewer { random: ChaCha8Rng::seed_from_u64(seed), mistakes: 0 }
    }

    /// What to do with a case.
    pub fn judge(&mut self, case: &[Seen<'_>]) -> Deed {
        let mut word = most(case.iter().map(|seen| seen.word));
        if self.random.random::<f64>() < WRONG {
            self.mistakes += 1;
            let suggested = most(case.iter().map(|seen| seen.suggested.first().copied()));
            word = match word {
                // What is clear is taken for what the tests say, or for cloud.
                None => flag_of(suggested).or(Some("cloudy")),
                Some(_) => None,
            };
        }
        let agreeing = case.iter().filter(|seen| agrees(word, seen.suggested)).count();
        match word {
            _ if 2 * agreeing >= case.len() => Deed::Accept,
            None => Deed::Overrule,
            Some(flag) => Deed::Flag(flag),
        }
    }
}

/// Whether what the tests suggest comes to the same: a person who sees cloud does not argue about how
/// thick it is.
fn agrees(word: Option<&str>, suggested: &[&str]) -> bool {
    let is_cloud = |flag: &str| matches!(flag, "cloudy" | "thin_cloud");
    match word {
        None => suggested.is_empty(),
        Some(flag) if is_cloud(flag) => suggested.iter().any(|one| is_cloud(one)),
        Some(flag) => suggested.contains(&flag),
    }
}

/// What most say; of equals, the first.
fn most<T: PartialEq + Copy>(words: impl Iterator<Item = T> + Clone) -> T {
    let count = |word: T| words.clone().filter(|other| *other == word).count();
    let first = words.clone().next().expect("a case has a footprint");
    words.clone().fold(first, |best, word| if count(word) > count(best) { word } else { best })
}

fn flag_of(word: Option<&str>) -> Option<&'static str> {
    crate::truth::FLAGS.into_iter().find(|flag| Some(*flag) == word)
}
