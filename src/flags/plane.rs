//! The flags of all footprints in one plane: the whole footprint, or one band.

use std::ops::Range;

use super::ReviewState;

/// Flags of one plane (the whole footprint, or one band), and about which of them persons spoke.
#[derive(Clone)]
pub(super) struct Plane {
    pub(super) flags: Vec<u32>,
    spoken: Vec<u32>,
}

impl Plane {
    pub(super) fn new(footprints: usize) -> Self {
        Self { flags: vec![0; footprints], spoken: vec![0; footprints] }
    }

    /// A plane without flags, about which persons have spoken as about this one.
    pub(super) fn without_flags(&self) -> Self {
        Self { flags: vec![0; self.flags.len()], spoken: self.spoken.clone() }
    }

    /// Sets a flag: a person anywhere, a test (which hands in `settled`) where no person spoke.
    pub(super) fn flag(&mut self, run: Range<usize>, bit: u32, settled: Option<&Vec<bool>>) {
        let flags = self.flags[run.clone()].iter_mut();
        let spoken = &mut self.spoken[run.clone()];
        let Some(settled) = settled else {
            flags.for_each(|flags| *flags |= bit);
            spoken.iter_mut().for_each(|spoken| *spoken |= bit);
            return;
        };
        for ((flags, spoken), settled) in flags.zip(spoken).zip(&settled[run]) {
            *flags |= if *settled { 0 } else { bit & !*spoken };
        }
    }

    pub(super) fn withdraw_for_person(
        &mut self,
        run: Range<usize>,
        bit: u32,
        review: &mut [ReviewState],
    ) {
        let flags = self.flags[run.clone()].iter_mut();
        let spoken = self.spoken[run.clone()].iter_mut();
        for ((flags, spoken), review) in flags.zip(spoken).zip(&mut review[run]) {
            // Where nothing stood, nothing was judged: a box drawn over footprints that nobody
            // assessed must not make them usable.
            if *flags & bit != 0 {
                *review = ReviewState::DecidedByPerson;
            }
            *flags &= !bit;
            *spoken |= bit;
        }
    }

    pub(super) fn withdraw_for_test(&mut self, run: Range<usize>, bit: u32, settled: &[bool]) {
        let flags = self.flags[run.clone()].iter_mut();
        let spoken = &self.spoken[run.clone()];
        for ((flags, spoken), settled) in flags.zip(spoken).zip(&settled[run]) {
            *flags &= !(if *settled { 0 } else { bit & !*spoken });
        }
    }
}
