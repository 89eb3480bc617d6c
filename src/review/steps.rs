//! Steps in which a person decides about several granules at once, taken back and put back as one.

use std::sync::atomic::{AtomicU64, Ordering};

use jiff::Timestamp;

use super::{Record, Refusal};
use crate::flags::{Author, of_step, own_steps};

/// How many steps this program has named.
static STEPS: AtomicU64 = AtomicU64::new(0);

/// A name for a step that nobody else gives.
pub fn step_name(author: &Author, now: Timestamp) -> String {
    // The clock may stand still.
    let number = STEPS.fetch_add(1, Ordering::Relaxed);
    format!("{}-{}-{}-{number}-{now}", author.person, author.host, author.process)
}

impl Record {
    /// What `verb` decides is a part of this step; of none where it is `None`.
    ///
    /// # Errors
    /// Those of the verb.
    pub fn as_part_of<Done>(
        &mut self,
        step: Option<String>,
        verb: impl FnOnce(&mut Record) -> Result<Done, Refusal>,
    ) -> Result<Done, Refusal> {
        self.set_step(step);
        let done = verb(self);
        self.set_step(None);
        done
    }

    /// Takes back what the person decided here in a step, or puts it back. Returns how many decisions
    /// that was.
    ///
    /// # Errors
    /// Nothing of the step is there to be taken back, or put back.
    pub fn turn_step(&mut self, step: &str, back: bool, now: Timestamp) -> Result<usize, Refusal> {
        let parts = of_step(self.decisions(), self.person(), step).into_iter();
        let parts: Vec<_> = parts.filter(|(_, stands)| *stands == back).collect();
        if parts.is_empty() {
            return Err(if back { Refusal::NothingToUndo } else { Refusal::NothingToRedo });
        }
        self.as_part_of(Some(step.to_owned()), |record| {
            for (id, _) in &parts {
                record.turn(id, now)?;
            }
            Ok(parts.len())
        })
    }

    /// The steps over several granules that the person's decisions here are parts of.
    pub fn own_steps(&self) -> std::collections::BTreeSet<String> {
        own_steps(self.decisions(), self.person())
    }
}
