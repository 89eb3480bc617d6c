//! Many small pieces of work at once, in threads of their own.

use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::{Mutex, PoisonError};

use rayon::prelude::*;

/// Does the `work` on each of `things`, several at a time and roughly in their order; calls `tell`
/// with the number of those done after each one.
///
/// The error is the one of the first thing that fails, however many threads there are: things before
/// it are still done, those behind it are left out.
///
/// The threads are not those of the common pool, so that a picture drawn meanwhile does not wait for
/// all of the work; work that is itself called from a pool stays there.
pub fn side_by_side<Thing: Copy + Send + Sync, Fault: Send>(
    things: &[Thing],
    work: impl Fn(Thing) -> Result<(), Fault> + Sync + Send,
    tell: &mut (dyn FnMut(usize) + Send),
) -> Result<(), Fault> {
    let first_failed = AtomicUsize::new(usize::MAX);
    let told = Mutex::new((0, tell));
    let one = |(number, &thing): (usize, &Thing)| {
        if number > first_failed.load(Ordering::Relaxed) {
            return None;
        }
        match work(thing) {
            Ok(()) => {
                // A teller that panics ends the work anyway.
                let mut told = told.lock().unwrap_or_else(PoisonError::into_inner);
                told.0 += 1;
                let done = told.0;
                (told.1)(done);
                None
            }
            Err(fault) => {
                first_failed.fetch_min(number, Ordering::Relaxed);
                Some((number, fault))
            }
        }
    };
    // Taken one after another from the front, unlike halves of a slice.
    let all = || {
        let faults = things.iter().enumerate().par_bridge().filter_map(one);
        faults.min_by_key(|(number, _)| *number)
    };
    let first = match own_threads() {
        Some(threads) => threads.install(all),
        None => all(),
    };
    first.map_or(Ok(()), |(_, fault)| Err(fault))
}

/// As many threads as the common pool has; none inside of a pool, or where none can be started.
pub fn own_threads() -> Option<rayon::ThreadPool> {
    if rayon::current_thread_index().is_some() {
        return None;
    }
    let threads = rayon::current_num_threads();
    rayon::ThreadPoolBuilder::new().num_threads(threads).build().ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn all_is_done_and_told_in_rising_numbers() {
        let things: Vec<usize> = (0..100).collect();
        let sum = AtomicUsize::new(0);
        let mut seen = Vec::new();
        let work = |thing| {
            sum.fetch_add(thing, Ordering::Relaxed);
            Ok::<(), ()>(())
        };
        side_by_side(&things, work, &mut |done| seen.push(done)).unwrap();
        assert_eq!(sum.into_inner(), 4950);
        assert_eq!(seen, (1..=100).collect::<Vec<_>>());
    }

    #[test]
    fn the_first_fault_counts_whichever_thread_is_faster() {
        let things: Vec<usize> = (0..200).collect();
        for _ in 0..20 {
            let work = |thing| if thing % 50 == 49 { Err(thing) } else { Ok(()) };
            assert_eq!(side_by_side(&things, work, &mut |_| {}), Err(49));
        }
    }

    #[test]
    fn work_inside_of_a_pool_of_one_thread_ends() {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(1).build().unwrap();
        let done = pool.install(|| side_by_side(&[1, 2, 3], |_| Ok::<(), ()>(()), &mut |_| {}));
        assert_eq!(done, Ok(()));
    }
}
