//! Times several paths in turns, so that a disturbance hits them all alike.

use std::time::{Duration, Instant};

/// A path to be timed, with its name.
pub type Path<'a> = (&'static str, Box<dyn FnMut() + 'a>);

/// The shortest time of each path over `rounds` rounds. The shortest, because other work on the
/// machine can only ever make a run longer.
pub fn shortest(rounds: usize, mut paths: Vec<Path<'_>>) -> Vec<(&'static str, Duration)> {
    let mut times: Vec<(&'static str, Duration)> =
        paths.iter().map(|(name, _)| (*name, Duration::MAX)).collect();
    for _ in 0..rounds {
        for ((_, path), (_, best)) in paths.iter_mut().zip(&mut times) {
            let begin = Instant::now();
            path();
            *best = begin.elapsed().min(*best);
        }
    }
    times
}
