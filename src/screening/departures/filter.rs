//! The low-pass filter over ranked departures, and where cloud sets in.

/// Ranks on either side of one that count in its mean.
pub const HALF: usize = 4;
/// Smoothed departures beyond this, K, are no longer clear [McNally & Watts 2003], from memory.
pub const DEPARTURE: f64 = 0.5;
/// … where they grow by more than this from rank to rank, K.
pub const GRADIENT: f64 = 0.02;

/// What the filter finds in a footprint, the highest channel first.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Found {
    /// The first rank that cloud affects; all below it are affected, too.
    pub first: Option<usize>,
    /// The largest smoothed departure that still grows, K.
    pub largest: f64,
}

/// The moving average over `2 HALF + 1` ranks, fewer at the ends; missing where half of them or more
/// are.
pub fn smoothed(departures: &[f64]) -> Vec<f64> {
    let mean = |rank: usize| {
        let around = &departures[window(rank, departures.len())];
        let present = || around.iter().filter(|one| !one.is_nan());
        let count = present().count();
        if 2 * count <= around.len() { f64::NAN } else { present().sum::<f64>() / count as f64 }
    };
    (0..departures.len()).map(mean).collect()
}

fn window(rank: usize, ranks: usize) -> std::ops::Range<usize> {
    rank.saturating_sub(HALF)..(rank + HALF + 1).min(ranks)
}

/// Goes down the ranks to where cloud sets in; nothing where too much is missing.
pub fn find(departures: &[f64]) -> Option<Found> {
    let smooth = smoothed(departures);
    let present = smooth.iter().filter(|one| !one.is_nan()).count();
    if 2 * present <= smooth.len() {
        return None;
    }
    let grows = |rank: usize| {
        let around = window(rank, smooth.len());
        let (high, low) = (around.start, around.end - 1);
        let growth = smooth[low].abs() - smooth[high].abs();
        growth > GRADIENT * (low - high) as f64
    };
    let growing = || (0..smooth.len()).filter(|rank| grows(*rank));
    let first = growing().find(|rank| smooth[*rank].abs() > DEPARTURE);
    // Cloud that only missing ranks would show is not ruled out.
    let is_told = |rank: usize| {
        let around = window(rank, smooth.len());
        !smooth[around.start].is_nan() && !smooth[around.end - 1].is_nan()
    };
    let lowest = smooth.len() / 2..smooth.len();
    if first.is_none() && !lowest.clone().all(is_told) {
        return None;
    }
    Some(Found { first, largest: growing().map(|rank| smooth[rank].abs()).fold(0.0, f64::max) })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A ramp that begins at a rank: the mean over nine ranks of a straight line is the line itself
    /// once the window lies on it, and before that a parabola, `g k (k + 1) / 18` with k ranks of the
    /// window on the ramp.
    #[test]
    fn a_ramp_is_found_where_the_closed_form_says() {
        let (begin, growth) = (40, -0.3);
        let ramp: Vec<f64> =
            (0..100).map(|rank: i32| growth * f64::from((rank - begin).max(0))).collect();
        let smooth = smoothed(&ramp);
        for (rank, smooth) in smooth.iter().enumerate().take(96) {
            let rank = rank as i32;
            // Ranks of the window that lie beyond the beginning.
            let on = (rank + HALF as i32 - begin).clamp(0, 9);
            let expected = match rank - begin {
                behind if behind >= HALF as i32 => growth * f64::from(behind),
                _ => growth * f64::from(on * (on + 1)) / 18.0,
            };
            assert!((smooth - expected).abs() < 1e-12, "{rank}: {smooth} {expected}");
        }
        // Beyond 0.5 K first at 42: 6 * 7 * 0.3 / 18 = 0.7 K; at 41 5 * 6 * 0.3 / 18 = 0.5 K, which
        // is not beyond.
        assert_eq!(find(&ramp).unwrap().first, Some(42));
        // The window's end rank is the mean of the last five: 0.3 * (55 + … + 59) / 5 = 17.1 K.
        assert!((find(&ramp).unwrap().largest - 17.1).abs() < 1e-12);
    }

    #[test]
    fn what_does_not_grow_is_no_cloud() {
        assert_eq!(find(&[0.4; 60]), Some(Found { first: None, largest: 0.0 }));
        // A bias left over in all channels alike is no cloud, either.
        assert_eq!(find(&[-3.0; 60]).unwrap().first, None);
        // Growth of 0.01 K per rank is below the limit of 0.02 K, however far it leads.
        let slow: Vec<f64> = (0..100).map(|rank| 0.01 * f64::from(rank)).collect();
        assert_eq!(find(&slow).unwrap().first, None);
    }

    /// What grows with the ranks whichever its sign, as over an inversion, is found alike.
    #[test]
    fn warm_cloud_counts_as_cold_cloud_does() {
        let cold: Vec<f64> = (0..60).map(|rank| -0.1 * f64::from((rank - 30).max(0))).collect();
        let warm: Vec<f64> = cold.iter().map(|one| -one).collect();
        assert_eq!(find(&cold), find(&warm));
    }

    #[test]
    fn gaps_are_bridged_and_what_is_mostly_missing_says_nothing() {
        let whole: Vec<f64> = (0..60).map(|rank| -0.2 * f64::from((rank - 30).max(0))).collect();
        let mut gaps = whole.clone();
        gaps[10] = f64::NAN;
        gaps[50] = f64::NAN;
        assert_eq!(find(&gaps).unwrap().first, find(&whole).unwrap().first);
        let lost: Vec<f64> = whole
            .iter()
            .enumerate()
            .map(|(at, one)| if at < 32 { f64::NAN } else { *one })
            .collect();
        assert_eq!(find(&lost), None);
    }

    #[test]
    fn what_only_missing_ranks_would_show_is_not_ruled_out() {
        let clear = vec![0.05; 60];
        assert_eq!(find(&clear).map(|found| found.first), Some(None));
        let no_window: Vec<f64> = (0..60).map(|at| if at < 42 { 0.05 } else { f64::NAN }).collect();
        assert_eq!(find(&no_window), None);
        // Cloud that is seen higher up stays seen.
        let high: Vec<f64> = (0..60)
            .map(|at| if at < 42 { -0.2 * f64::from((at - 20).max(0)) } else { f64::NAN })
            .collect();
        assert!(find(&high).is_some_and(|found| found.first.is_some()));
    }
}
