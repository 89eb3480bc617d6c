//! A granule screened: tests, flags, doubt.

use std::collections::BTreeMap;

use rayon::prelude::*;

use super::combine::{Conclusion, Voice, conclude, family_voice};
use super::health::{Check, Examined};
use super::rulebook::Rulebook;
use super::run_tests::{TestResult, run};
use crate::layers::Names;

/// What the tests say about a granule.
#[derive(Debug, Clone)]
pub struct Screened {
    /// The rulebook.
    pub rulebook: Rulebook,
    /// The surface of each footprint, by place in the rulebook; `None` where none holds.
    pub surfaces: Vec<Option<usize>>,
    /// What each test gave, in the order of the rulebook.
    pub tests: Vec<TestResult>,
    /// What is concluded about each flag.
    pub flags: Vec<FlagResult>,
    /// Footprints of which something can be said; the others are not assessed.
    pub assessed: Vec<bool>,
    /// Footprints that were left out: nothing is said about them. None at all where none were.
    pub left_out: Vec<bool>,
    /// 0 plain, 1 a coin toss or hardly assessed.
    pub doubt: Vec<f64>,
    /// What the spectra say as a set, where they have been looked at.
    pub examined: Option<Examined>,
}

/// What is concluded about a flag, footprint by footprint.
#[derive(Debug, Clone)]
pub struct FlagResult {
    /// The flag.
    pub flag: String,
    /// One for each footprint.
    pub conclusions: Vec<Conclusion>,
}

impl FlagResult {
    /// Whether the tests set the flag.
    pub fn is_set(&self, footprint: usize) -> bool {
        self.conclusions[footprint].is_set()
    }
}

/// How a granule came out.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Summary {
    /// All footprints.
    pub footprints: usize,
    /// Footprints by flag, in the order of the rulebook, `doubtful` last.
    pub flagged: Vec<(String, usize)>,
    /// Assessed footprints without any flag but `doubtful`.
    pub no_flag: usize,
    /// Footprints of which nothing can be said.
    pub not_assessed: usize,
    /// Mean doubt of the assessed footprints; NaN where there are none.
    pub mean_doubt: f64,
}

/// Runs all tests over all footprints. Each number is the same with any number of threads.
pub fn screen(rulebook: &Rulebook, names: &dyn Names) -> Screened {
    let (surfaces, tests) = run(rulebook, names);
    let councils = Councils::of(rulebook);
    let flags: Vec<FlagResult> = rulebook
        .flags()
        .par_iter()
        .map(|flag| FlagResult {
            flag: (*flag).to_owned(),
            conclusions: (0..surfaces.len())
                .map(|footprint| councils.conclude(flag, surfaces[footprint], footprint, &tests))
                .collect(),
        })
        .collect();
    let footprints = 0..surfaces.len();
    let assessed = footprints.clone().map(|at| is_assessed(rulebook, &flags, at)).collect();
    let doubt = footprints.map(|at| doubt(&flags, at)).collect();
    let left_out: Vec<bool> = (0..surfaces.len()).map(|at| names.is_left_out(at)).collect();
    let left_out = if left_out.contains(&true) { left_out } else { Vec::new() };
    let rulebook = rulebook.clone();
    Screened { rulebook, surfaces, tests, flags, assessed, left_out, doubt, examined: None }
}

/// A family that speaks about a flag on a surface.
pub struct Seat<'r> {
    /// Its name.
    pub family: &'r str,
    /// Its weight.
    pub weight: f64,
    /// Whether it counts only where it speaks.
    pub optional: bool,
    /// Its tests, by place in the rulebook.
    pub tests: Vec<usize>,
}

/// Who speaks about a flag on a surface.
pub struct Councils<'r> {
    rulebook: &'r Rulebook,
    seats: BTreeMap<(usize, &'r str), Vec<Seat<'r>>>,
}

impl<'r> Councils<'r> {
    /// The councils of a rulebook.
    pub fn of(rulebook: &'r Rulebook) -> Self {
        let mut seats: BTreeMap<(usize, &str), Vec<Seat<'_>>> = BTreeMap::new();
        for (place, test) in rulebook.tests.iter().enumerate() {
            for surface in &test.surfaces {
                let council = seats.entry((*surface, &test.flag)).or_default();
                match council.iter_mut().find(|seat| seat.family == test.family) {
                    Some(seat) => seat.tests.push(place),
                    None => {
                        let surface = &rulebook.surfaces[*surface];
                        let weight = surface.weight_of(&test.flag, &test.family);
                        let mut families = rulebook.families.iter();
                        let optional = families.any(|one| one.name == test.family && one.optional);
                        let (family, tests) = (test.family.as_str(), vec![place]);
                        council.push(Seat { family, weight, optional, tests });
                    }
                }
            }
        }
        let mut councils = Self { rulebook, seats };
        let unknown = (0..rulebook.surfaces.len()).filter(|at| rulebook.surfaces[*at].unknown);
        unknown.for_each(|surface| councils.seat_the_lost(surface));
        councils
    }

    /// On ground of which nothing is known the families that speak on the ground with most of them, and not
    /// here, sit silent: coverage and doubt show what is lost.
    fn seat_the_lost(&mut self, surface: usize) {
        let rulebook = self.rulebook;
        for flag in rulebook.flags() {
            let of = |at: usize| self.seats.get(&(at, flag)).map_or(&[][..], Vec::as_slice);
            let is_here = |family: &str| of(surface).iter().any(|seat| seat.family == family);
            let known = (0..rulebook.surfaces.len()).filter(|at| !rulebook.surfaces[*at].unknown);
            let best = known.map(of).max_by_key(|seats| seats.len()).unwrap_or_default();
            let lost = best.iter().filter(|seat| !seat.optional && !is_here(seat.family));
            let silent = |seat: &Seat<'r>| Seat {
                family: seat.family,
                weight: rulebook.surfaces[surface].weight_of(flag, seat.family),
                optional: false,
                tests: Vec::new(),
            };
            let lost: Vec<Seat<'r>> = lost.map(silent).collect();
            // A flag that nothing here speaks about stays one that is not tested.
            if let Some(council) = self.seats.get_mut(&(surface, flag)) {
                council.extend(lost);
            }
        }
    }

    /// Who speaks about a flag on a surface.
    pub fn seats<'s>(&'s self, flag: &'s str, surface: usize) -> &'s [Seat<'s>] {
        self.seats.get(&(surface, flag)).map_or(&[], Vec::as_slice)
    }

    /// Log-odds of a family at a footprint, if it speaks.
    pub fn voice(&self, of: &[usize], footprint: usize, tests: &[TestResult]) -> Option<f64> {
        family_voice(of.iter().map(|place| self.single(*place, footprint, tests)))
    }

    /// One test's contribution.
    pub fn single(&self, place: usize, footprint: usize, tests: &[TestResult]) -> Voice {
        Voice {
            margin: tests[place].margins[footprint],
            halved: tests[place].halved[footprint],
            against: self.rulebook.tests[place].against,
        }
    }

    /// What is concluded about a flag at a footprint.
    pub fn conclude(
        &self,
        flag: &str,
        surface: Option<usize>,
        footprint: usize,
        tests: &[TestResult],
    ) -> Conclusion {
        let Some(surface) = surface else { return conclude(0.0, []) };
        let heard = self.seats(flag, surface).iter().filter_map(|seat| {
            let voice = self.voice(&seat.tests, footprint, tests);
            (voice.is_some() || !seat.optional).then_some((seat.weight, voice))
        });
        conclude(self.rulebook.surfaces[surface].start_of(flag), heard)
    }
}

/// A footprint is assessed where the flags that matter have been tested, or where one is set.
fn is_assessed(rulebook: &Rulebook, flags: &[FlagResult], at: usize) -> bool {
    let tested = |name: &String| {
        flags.iter().any(|flag| flag.flag == *name && flag.conclusions[at].coverage > 0.0)
    };
    flags.iter().any(|flag| flag.is_set(at)) || rulebook.assess.iter().all(tested)
}

/// Where a flag is set, the doubt about the plainest of them: one is enough to know what the
/// footprint is worth. Else the largest doubt about any flag that was tested.
fn doubt(flags: &[FlagResult], at: usize) -> f64 {
    let of = |flag: &FlagResult| flag.conclusions[at].doubt;
    let set = flags.iter().filter(|flag| flag.is_set(at)).map(of).reduce(f64::min);
    let tested = flags.iter().filter(|flag| flag.conclusions[at].coverage > 0.0).map(of);
    set.or_else(|| tested.reduce(f64::max)).unwrap_or(1.0)
}

impl Screened {
    /// Number of footprints.
    pub fn footprints(&self) -> usize {
        self.surfaces.len()
    }

    /// Whether the tests leave a footprint in doubt.
    pub fn is_doubtful(&self, footprint: usize) -> bool {
        self.assessed[footprint] && self.doubt[footprint] >= self.rulebook.doubt_cut
    }

    /// Tests of a flag that speak for it somewhere where it is set, with the number of footprints.
    pub fn speakers(&self, flag: &FlagResult) -> Vec<(&str, usize)> {
        let tests = self.rulebook.tests.iter().zip(&self.tests);
        tests
            .filter(|(test, _)| test.flag == flag.flag)
            .filter_map(|(test, result)| {
                let speaks = |at: &usize| flag.is_set(*at) && result.margins[*at] > 0.0;
                let count = (0..self.footprints()).filter(speaks).count();
                (count > 0).then_some((test.name.as_str(), count))
            })
            .collect()
    }

    /// Whether a flag is set on a footprint, by the tests or by what the spectra say as a set.
    pub fn is_flagged(&self, flag: &str, footprint: usize) -> bool {
        let by_test = self.flags.iter().any(|one| one.flag == flag && one.is_set(footprint));
        by_test || self.examined.as_ref().is_some_and(|one| one.suggests(flag, footprint))
    }

    /// The flags that may be set, in the order of the rulebook.
    pub fn flag_names(&self) -> Vec<&str> {
        let mut names: Vec<&str> = self.flags.iter().map(|flag| flag.flag.as_str()).collect();
        if self.examined.is_some() {
            let more = [Check::BAD_SPECTRUM, Check::UNUSUAL];
            let new: Vec<&str> = more.into_iter().filter(|name| !names.contains(name)).collect();
            names.extend(new);
        }
        names
    }

    /// How the granule came out.
    pub fn summary(&self) -> Summary {
        let all = || 0..self.footprints();
        let names = self.flag_names();
        let assessed: Vec<usize> = all().filter(|at| self.assessed[*at]).collect();
        let count = |name: &str| all().filter(|at| self.is_flagged(name, *at)).count();
        let mut flagged: Vec<(String, usize)> =
            names.iter().map(|name| ((*name).to_owned(), count(name))).collect();
        let doubtful = all().filter(|at| self.is_doubtful(*at)).count();
        flagged.push(("doubtful".to_owned(), doubtful));
        // `doubtful` is a flag as the others are, also in masks and in the Tray.
        let plain = |at: &&usize| {
            !self.is_doubtful(**at) && !names.iter().any(|name| self.is_flagged(name, **at))
        };
        let doubt: f64 = assessed.iter().map(|at| self.doubt[*at]).sum();
        Summary {
            footprints: self.footprints(),
            flagged,
            no_flag: assessed.iter().filter(plain).count(),
            not_assessed: self.footprints() - assessed.len(),
            mean_doubt: doubt / assessed.len() as f64,
        }
    }
}
