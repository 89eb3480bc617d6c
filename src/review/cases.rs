//! What is left to decide, as cases: neighbouring footprints in doubt are one case, not fifty.

use super::{Review, has_suggestion};
use crate::flags::FootprintSet;
use crate::layers::{Names, Neighbours};
use crate::screening::Screened;

/// Footprints in doubt that lie beside each other and look alike: the tests suggest the same of them,
/// some flag or none, and their window temperatures go over into each other. So one word answers for
/// all of a case.
#[derive(Debug, Clone, PartialEq)]
pub struct Case {
    /// Which.
    pub footprints: FootprintSet,
    /// The doubt of the most doubtful one.
    pub doubt: f64,
    /// The most doubtful one, the first of equals.
    pub worst: usize,
}

/// From one footprint to the next, a larger step in window temperature (K) parts two cases: what is on
/// its other side may well be another thing. Chosen in the written trial (`docs/trial.md`): without it
/// one case ran through clear sky and cloud alike, with smaller steps there are many more cases and
/// hardly a footprint more is judged rightly.
const STEP: f64 = 3.0;

/// The cases, the most doubtful first; of equals the larger, then the earlier in the file.
/// `settled` tells the footprints that a person has decided; `window` their temperatures (K), of which
/// none may be known.
fn cases(
    screened: &Screened,
    settled: impl Fn(usize) -> bool,
    window: &[f64],
    neighbours: &Neighbours,
) -> Vec<Case> {
    let count = screened.footprints();
    let open: Vec<bool> = (0..count).map(|at| screened.is_doubtful(at) && !settled(at)).collect();
    let suggested: Vec<bool> = (0..count).map(|at| has_suggestion(screened, at)).collect();
    let mut regions = Regions::new(count);
    for at in (0..count).filter(|at| open[*at]) {
        let beside = neighbours.of(at).iter().map(|one| *one as usize);
        let alike = |other: &usize| {
            open[*other] && suggested[*other] == suggested[at] && no_step(window, at, *other)
        };
        // Nearness need not be mutual on the ground; one of the two is enough.
        beside.filter(alike).for_each(|other| regions.join(at, other));
    }
    let mut members: Vec<Vec<usize>> = vec![Vec::new(); count];
    (0..count).filter(|at| open[*at]).for_each(|at| members[regions.root(at)].push(at));
    let mut cases: Vec<Case> =
        members.into_iter().filter_map(|members| case(members, &screened.doubt)).collect();
    cases.sort_by(|one, next| {
        let size = |case: &Case| case.footprints.len();
        next.doubt
            .total_cmp(&one.doubt)
            .then(size(next).cmp(&size(one)))
            .then(one.worst.cmp(&next.worst))
    });
    cases
}

fn no_step(window: &[f64], one: usize, other: usize) -> bool {
    match (window.get(one), window.get(other)) {
        (Some(one), Some(other)) if one.is_nan() || other.is_nan() => {
            one.is_nan() && other.is_nan()
        }
        (Some(one), Some(other)) => (one - other).abs() < STEP,
        _ => true,
    }
}

impl Review {
    /// What is left to decide, by what lies beside what on the ground. `window` are brightness
    /// temperatures (K) of a window channel, or nothing.
    pub fn cases(
        &self,
        screened: &Screened,
        settled: impl Fn(usize) -> bool,
        window: &[f64],
    ) -> Vec<Case> {
        cases(screened, settled, window, self.names().neighbours())
    }
}

fn case(members: Vec<usize>, doubt: &[f64]) -> Option<Case> {
    let worst = members
        .iter()
        .copied()
        .reduce(|worst, next| if doubt[next] > doubt[worst] { next } else { worst })?;
    Some(Case { footprints: members.into_iter().collect(), doubt: doubt[worst], worst })
}

/// Which footprints hang together.
struct Regions {
    parents: Vec<usize>,
}

impl Regions {
    fn new(count: usize) -> Regions {
        Regions { parents: (0..count).collect() }
    }

    fn root(&mut self, mut at: usize) -> usize {
        while self.parents[at] != at {
            // Each look shortens the way for the next one.
            self.parents[at] = self.parents[self.parents[at]];
            at = self.parents[at];
        }
        at
    }

    fn join(&mut self, one: usize, other: usize) {
        let (one, other) = (self.root(one), self.root(other));
        self.parents[one.max(other)] = one.min(other);
    }
}
