//! A blind, stratified random sample of the footprints that the tests call plain.

use rand::SeedableRng;
use rand::seq::SliceRandom;
use rand_chacha::ChaCha8Rng;

use super::rulebook_of::name_of;
use super::tests_decide::flagged_by_tests;
use crate::flags::{FootprintSet, SpotCheck, Stratum, Vocabulary};
use crate::screening::Screened;

/// Footprints drawn to be judged, in an order that tells nothing about them.
#[derive(Debug, Clone, PartialEq)]
pub struct SpotSample {
    /// What the sample was drawn with.
    seed: u64,
    /// The rulebook that is checked: its name and fingerprint.
    rulebook: String,
    /// How many plain footprints there are without and with a flag that keeps them from the
    /// retrieval.
    plain: [usize; 2],
    /// What was drawn: the footprint, and whether the tests keep it from the retrieval.
    drawn: Vec<(usize, bool)>,
}

/// What a person says of a footprint.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Judgement {
    /// A retrieval may use it.
    Fit,
    /// It may not.
    Unfit,
    /// It can't be told.
    Untold,
}

/// Draws up to `each` footprints without replacement from either part of the plain ones: those that
/// the tests would let a retrieval use, and those that they would keep from it. Plain is what is
/// assessed and not in doubt; what a person has decided (`settled`) is not asked again. The same
/// seed draws the same footprints.
pub fn draw_sample(
    screened: &Screened,
    vocabulary: &Vocabulary,
    settled: impl Fn(usize) -> bool,
    each: usize,
    seed: u64,
) -> SpotSample {
    let plain = |at: &usize| screened.assessed[*at] && !screened.is_doubtful(*at) && !settled(*at);
    let excludes = |flag: &str| vocabulary.by_name(flag).is_some_and(|kind| kind.excludes);
    let kept_away = flagged_by_tests(screened, excludes);
    let (flagged, free): (Vec<usize>, Vec<usize>) =
        (0..screened.footprints()).filter(plain).partition(|at| kept_away.contains(*at));
    let mut random = ChaCha8Rng::seed_from_u64(seed);
    let plain = [free.len(), flagged.len()];
    let mut drawn = Vec::new();
    for (mut part, is_flagged) in [(free, false), (flagged, true)] {
        let (chosen, _) = part.partial_shuffle(&mut random, each);
        drawn.extend(chosen.iter().map(|at| (*at, is_flagged)));
    }
    drawn.shuffle(&mut random);
    let rulebook = name_of(&screened.rulebook);
    SpotSample { seed, rulebook, plain, drawn }
}

impl SpotSample {
    /// How many footprints were drawn.
    pub fn len(&self) -> usize {
        self.drawn.len()
    }

    /// Whether none was.
    pub fn is_empty(&self) -> bool {
        self.drawn.is_empty()
    }

    /// The footprint at a place of the order.
    pub fn footprint(&self, place: usize) -> Option<usize> {
        self.drawn.get(place).map(|(footprint, _)| *footprint)
    }

    /// What the person's judgements, in the order of the sample, say about the tests. Footprints
    /// without a judgement count as untold.
    pub fn judged(&self, judgements: &[Judgement]) -> SpotCheck {
        let stratum = |flagged: bool| {
            let of = |holds: &dyn Fn(Option<Judgement>) -> bool| -> FootprintSet {
                let places = self.drawn.iter().enumerate().filter(|(_, (_, one))| *one == flagged);
                places
                    .filter(|(place, _)| holds(judgements.get(*place).copied()))
                    .map(|(_, (footprint, _))| *footprint)
                    .collect()
            };
            let same = if flagged { Judgement::Unfit } else { Judgement::Fit };
            let other = if flagged { Judgement::Fit } else { Judgement::Unfit };
            Stratum {
                flagged,
                plain: self.plain[usize::from(flagged)],
                right: of(&|said| said == Some(same)),
                wrong: of(&|said| said == Some(other)),
                untold: of(&|said| !matches!(said, Some(Judgement::Fit | Judgement::Unfit))),
            }
        };
        SpotCheck {
            rulebook: self.rulebook.clone(),
            seed: self.seed,
            strata: [false, true].map(stratum).into(),
        }
    }
}
