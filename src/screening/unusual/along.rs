//! What lies along components in rows, also where one channel is not looked at.

use rayon::prelude::*;

use super::basis::{Basis, LIVED_ELSEWHERE};
use super::fit::Rows;

/// Rows in the coordinates of a basis.
pub struct Along<'r> {
    rows: &'r Rows,
    basis: &'r Basis,
    /// Row by row, what lies along each component, in noise units.
    of_rows: Vec<Vec<f64>>,
}

impl<'r> Along<'r> {
    /// Of rows that have all channels of the basis.
    pub fn of(rows: &'r Rows, basis: &'r Basis) -> Self {
        let place = |channel: &usize| rows.channels.iter().position(|one| one == channel);
        let places: Vec<usize> = basis.channels.iter().filter_map(place).collect();
        let of_row = |row: &[f64]| {
            let values = places.iter().zip(basis.mean.iter().zip(&basis.noise));
            let normal: Vec<f64> =
                values.map(|(place, (mean, noise))| (row[*place] - mean) / noise).collect();
            let along = |number| -> f64 {
                basis.component(number).iter().zip(&normal).map(|(a, b)| a * b).sum()
            };
            (0..basis.components()).map(along).collect()
        };
        let width = rows.channels.len().max(1);
        let of_rows = rows.radiances.par_chunks_exact(width).map(of_row).collect();
        Self { rows, basis, of_rows }
    }

    /// What lies along the components as the other channels see them, made orthonormal again: as
    /// [`Basis::restricted`] to all channels but the rows' `channel` would have it, at the price of one
    /// channel. For each row one number for each component that is left.
    pub fn without(&self, channel: usize) -> Vec<Vec<f64>> {
        let own = self.rows.channels[channel];
        let Some(place) = self.basis.channels.iter().position(|one| *one == own) else {
            return self.of_rows.clone();
        };
        let shares: Vec<f64> =
            (0..self.basis.components()).map(|k| self.basis.component(k)[place]).collect();
        let combinations = orthonormal_without(&shares);
        let (mean, noise) = (self.basis.mean[place], self.basis.noise[place]);
        let values = self.rows.column(channel).map(|value| (value - mean) / noise);
        let of_row = |(along, value): (&Vec<f64>, f64)| -> Vec<f64> {
            let others: Vec<f64> =
                along.iter().zip(&shares).map(|(all, share)| all - share * value).collect();
            let combined = |combination: &Vec<f64>| dot(combination, &others);
            combinations.iter().map(combined).collect()
        };
        self.of_rows.iter().zip(values).map(of_row).collect()
    }
}

/// Combinations of orthonormal components that are orthonormal where a channel is not looked at of
/// which the components hold `shares`: the products of two components there are those of the unit
/// matrix less the products of their shares.
fn orthonormal_without(shares: &[f64]) -> Vec<Vec<f64>> {
    let product =
        |one: &[f64], other: &[f64]| dot(one, other) - dot(one, shares) * dot(other, shares);
    let mut found: Vec<Vec<f64>> = Vec::new();
    for number in 0..shares.len() {
        let mut combination = vec![0.0; shares.len()];
        combination[number] = 1.0;
        // Twice, as in `restricted`.
        for _ in 0..2 {
            for other in &found {
                let along = product(&combination, other);
                combination.iter_mut().zip(other).for_each(|(value, b)| *value -= along * b);
            }
        }
        let length = product(&combination, &combination).max(0.0).sqrt();
        if length > LIVED_ELSEWHERE {
            combination.iter_mut().for_each(|value| *value /= length);
            found.push(combination);
        }
    }
    found
}

fn dot(one: &[f64], other: &[f64]) -> f64 {
    one.iter().zip(other).map(|(a, b)| a * b).sum()
}

#[cfg(test)]
mod tests {
    use rand_chacha::ChaCha8Rng;
    use rand_chacha::rand_core::SeedableRng;
    use rand_distr::{Distribution, StandardNormal};

    use super::*;
    use crate::screening::unusual::fit;

    /// Eighty channels, two things that vary, the second of them nearly in one channel alone.
    fn rows() -> Rows {
        let mut random = ChaCha8Rng::seed_from_u64(11);
        let mut normal = move || -> f64 { StandardNormal.sample(&mut random) };
        let mut radiances = Vec::new();
        for _ in 0..400 {
            let (one, other) = (20.0 * normal(), 20.0 * normal());
            radiances.extend((0..80).map(|channel| {
                let alone = if channel == 7 { other } else { 0.05 * other };
                60.0 + one * (1.0 + 0.01 * f64::from(channel)) + alone + normal()
            }));
        }
        Rows {
            channels: (0..80).collect(),
            wavenumbers: (0..80).map(|channel| 800.0 + f64::from(channel)).collect(),
            adjacent: vec![true; 80],
            radiances,
            pairs: (0..200).map(|pair| (2 * pair, 2 * pair + 1)).collect(),
        }
    }

    #[test]
    fn one_channel_less_is_as_a_basis_without_it() {
        let rows = rows();
        let fitted = fit(&rows, &[1.0; 80]).unwrap();
        assert!(fitted.basis.components() > 0);
        let along = Along::of(&rows, &fitted.basis);
        for channel in [0, 7, 79] {
            let others: Vec<usize> = (0..80).filter(|one| *one != channel).collect();
            let plain = fitted.basis.restricted(&others);
            let expected = Along::of(&rows, &plain).of_rows;
            let found = along.without(channel);
            assert_eq!(found[0].len(), plain.components());
            for (found, expected) in found.iter().flatten().zip(expected.iter().flatten()) {
                // Sums in another order over eighty channels of some hundred noises.
                assert!((found - expected).abs() < 1e-8, "{channel}: {found} {expected}");
            }
        }
    }
}
