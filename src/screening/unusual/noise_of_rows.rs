//! The noise of channels from rows of residuals: its size, and how neighbours go together.

use rayon::prelude::*;

use super::fit::Rows;
use crate::spectral::{NoiseShape, deviation_from_zero};

/// Channels whose values are gathered together: they fill lines of the processor's cache.
const SIDE_BY_SIDE: usize = 16;

/// The noise of each channel in units of what was taken for it: what the residuals of pairs differ
/// by, corrected for what the components took along.
pub fn noise_factors(rows: &Rows, residuals: &[f64], taken: &[f64]) -> Vec<f64> {
    let factor = |(deviation, taken): (f64, &f64)| {
        // A channel whose neighbours agree to the last bit is coarsely packed.
        (deviation / f64::sqrt((1.0 - taken).max(0.05))).max(0.05)
    };
    pair_deviations(residuals, rows.channels.len(), &rows.pairs)
        .into_iter()
        .zip(taken)
        .map(factor)
        .collect()
}

/// For each channel of rows what one of them deviates by, from the differences of pairs. What is not
/// a number makes its channel's deviation none.
pub fn pair_deviations(rows: &[f64], width: usize, pairs: &[(usize, usize)]) -> Vec<f64> {
    let blocks: Vec<usize> = (0..width).step_by(SIDE_BY_SIDE).collect();
    let of_block = |first: usize| {
        let channels = first..(first + SIDE_BY_SIDE).min(width);
        let mut differences = vec![0.0; channels.len() * pairs.len()];
        for (number, (one, other)) in pairs.iter().enumerate() {
            let one = &rows[one * width..][channels.clone()];
            let other = &rows[other * width..][channels.clone()];
            for (at, (one, other)) in one.iter().zip(other).enumerate() {
                differences[at * pairs.len() + number] = one - other;
            }
        }
        differences
            .chunks_exact_mut(pairs.len().max(1))
            .map(|own| match own.iter().any(|one| one.is_nan()) {
                true => f64::NAN,
                false => deviation_from_zero(own) / std::f64::consts::SQRT_2,
            })
            .collect::<Vec<f64>>()
    };
    let found: Vec<Vec<f64>> = blocks.into_par_iter().map(of_block).collect();
    let mut found = found.concat();
    found.resize(width, f64::NAN);
    found
}

/// Correlations between neighbours, of differences between pairs, so that what is left of the scene
/// counts little; clipped, so that outliers do.
pub fn shape(rows: &Rows, residuals: &[f64]) -> NoiseShape {
    let width = rows.channels.len();
    let clipped = |(one, other): &(usize, usize)| -> Vec<f64> {
        let (one, other) =
            (&residuals[one * width..][..width], &residuals[other * width..][..width]);
        let size = |(one, other): (&f64, &f64)| f64::clamp(one - other, -5.0, 5.0);
        one.iter().zip(other).map(size).map(|one| if one.is_nan() { 0.0 } else { one }).collect()
    };
    let differences: Vec<Vec<f64>> = rows.pairs.par_iter().map(clipped).collect();
    NoiseShape::measured(|lag| {
        let together: Vec<bool> = (0..width.saturating_sub(lag))
            .map(|first| rows.adjacent[first..first + lag].iter().all(|adjacent| *adjacent))
            .collect();
        let of_row = |row: &Vec<f64>| {
            let both = row.iter().zip(row.iter().skip(lag)).zip(&together);
            let both = both.filter(|(_, together)| **together).map(|(both, _)| both);
            both.fold((0.0, 0.0), |(products, squares), (one, other)| {
                (products + one * other, squares + 0.5 * (one * one + other * other))
            })
        };
        // Row by row and then together, so that threads do not change the sum.
        let sums: Vec<(f64, f64)> = differences.par_iter().map(of_row).collect();
        let (products, squares) =
            sums.iter().fold((0.0, 0.0), |sum, row| (sum.0 + row.0, sum.1 + row.1));
        (squares > 0.0).then(|| products / squares)
    })
}
