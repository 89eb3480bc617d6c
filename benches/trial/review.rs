//! The review, key by key, until no granule is left to sign off.

use std::path::{Path, PathBuf};
use std::time::{Duration, Instant};

use radsieve::flags::{Campaign, Vocabulary};

use crate::Mishap;
use crate::desk::Granule;
use crate::hands::Hands;
use crate::reviewer::{Deed, Reviewer};
use crate::terminal::Session;

/// What came of the review.
pub struct Came {
    /// The hands, with their counts.
    pub hands: Hands,
    /// Cases decided, of each granule, with the footprints in them.
    pub cases: Vec<Vec<usize>>,
    /// Cases that the reviewer judged wrongly.
    pub mistakes: usize,
    /// From the first key to the last answer.
    pub wall: Duration,
    /// Of that, waiting for granules to be read and tested.
    pub waiting: Duration,
}

/// More keys than this and something goes round in a circle.
const MOST_CASES: usize = 5_000;

/// Reviews all granules in a campaign where the tests have decided.
pub fn done(files: &[PathBuf], campaign: &Path, granules: &[Granule]) -> Result<Came, Mishap> {
    let folder = campaign.parent().ok_or("a campaign lies in a folder")?;
    let mut arguments = vec!["review"];
    arguments.extend(files.iter().filter_map(|file| file.to_str()));
    arguments.extend(["--campaign", campaign.to_str().ok_or("the campaign's path is no text")?]);
    let session = Session::start_with(folder, 120, 40, &arguments, &[]);
    let mut review = Reviewing {
        hands: Hands::on(session),
        reviewer: Reviewer::new(1),
        campaign: Campaign::open(campaign)?,
        granules,
        cases: vec![Vec::new(); granules.len()],
        waiting: Duration::ZERO,
    };
    review.ready();
    review.waiting = Duration::ZERO;
    let start = Instant::now();
    for _ in 0..MOST_CASES {
        if !review.step()? {
            let wall = start.elapsed();
            review.hands.leave();
            let Reviewing { hands, reviewer, cases, waiting, .. } = review;
            return Ok(Came { hands, cases, mistakes: reviewer.mistakes, wall, waiting });
        }
    }
    Err("the review does not come to an end".into())
}

struct Reviewing<'g> {
    hands: Hands,
    reviewer: Reviewer,
    campaign: Campaign,
    granules: &'g [Granule],
    cases: Vec<Vec<usize>>,
    waiting: Duration,
}

impl Reviewing<'_> {
    /// Waits until the tests have run on the granule on the table and a case is shown, or how many there
    /// are; or until it is said that there is no more.
    fn ready(&mut self) {
        let start = Instant::now();
        self.hands.wait("the cases that are left", |screen| {
            let status = screen.lines().rev().nth(1).unwrap_or_default();
            let told = ["cases left", "case left", "no other granule"];
            told.iter().any(|words| status.contains(words)) && !status.contains("tests")
        });
        self.waiting += start.elapsed();
    }

    /// Decides the next case, or signs the granule off and goes on to the next; false at the end.
    fn step(&mut self) -> Result<bool, Mishap> {
        let status = self.hands.status();
        if status.contains("in doubt to") {
            self.decide()?;
        } else if status.contains("nothing is left in doubt") {
            self.sign_off();
            self.hands.press(" ", "to the next granule");
            self.ready();
            return Ok(!self.hands.status().contains("no other granule"));
        } else {
            self.hands.press(" ", "to the first case");
        }
        Ok(true)
    }

    fn decide(&mut self) -> Result<(), Mishap> {
        let number = self.hands.granule().ok_or("no granule on the screen")?;
        let granule = &self.granules[number];
        let state = granule.state(&self.campaign);
        let cursor = self.hands.cursor().ok_or("no cursor on the screen")?;
        let status = self.hands.status();
        let case = granule
            .case_at(&state, &cursor)
            .ok_or_else(|| format!("{}: no case at {cursor:?}: {status}", granule.name))?;
        let count = case.footprints.len();
        assert!(status.contains(&format!("{count} in doubt to")), "{count}: {status}");
        self.cases[number].push(count);
        match granule.look(&case, |seen| self.reviewer.judge(seen)) {
            Deed::Accept => self.hands.press("y", "accept"),
            Deed::Overrule => self.hands.press("R", "overrule"),
            Deed::Flag(flag) => {
                let key = Vocabulary::released().by_name(flag).ok_or("no such flag")?.key;
                self.hands.press(&format!("f{key}"), "flag");
            }
        }
        Ok(())
    }

    fn sign_off(&mut self) {
        self.hands.press("S", "sign off");
        let screen = self.hands.lines().join("\n");
        let answer = if screen.contains("t: the tests answer") { "t" } else { "y" };
        self.hands.press(answer, "sign off");
    }
}
