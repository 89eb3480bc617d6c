//! A channel as the others explain it by what they do within scan lines.

use faer::linalg::solvers::SelfAdjointEigen;
use faer::{Mat, Side};

use super::grid::ScanGrid;
use super::popping::Step;
use super::sample::Sample;
use crate::screening::unusual::Along;
use crate::spectral::{deviation_from_zero, median};

/// Pairs that differ by more deviations than this do not count.
const MOST: f64 = 4.0;
/// Rounds of fitting and leaving out.
const ROUNDS: usize = 3;
/// Directions in which pairs differ by less than this share of the most are not fitted.
const LEAST: f64 = 1e-10;
/// The variance of a median over that of a mean, for normal numbers: pi / 2.
const MEDIAN: f64 = std::f64::consts::FRAC_PI_2;

/// What is left of a channel when its value is predicted from the components of the other channels, with
/// weights from the differences of neighbours in the same line: a level that changes from line to line
/// has no part in those, however it goes together with the scene.
pub struct WithinLines {
    /// Row by row, radiance less what is predicted, and the line.
    rest: Vec<(usize, f64)>,
    /// Noise of the channel, in the same unit.
    noise: f64,
    /// Covariance of the weights.
    covariance: Mat<f64>,
    /// Row by row, what lies along the components of the others.
    along: Vec<Vec<f64>>,
}

impl WithinLines {
    /// One of the rows' channels; `None` where lines have no pairs, or pairs say nothing.
    pub fn of(sample: &Sample, along: &Along<'_>, grid: &ScanGrid, channel: usize) -> Option<Self> {
        let rows = &sample.rows;
        if grid.positions < 2 || rows.pairs.is_empty() {
            return None;
        }
        let along = along.without(channel);
        let values: Vec<f64> = rows.column(channel).collect();
        let differences: Vec<(Vec<f64>, f64)> = rows
            .pairs
            .iter()
            .map(|(one, other)| {
                let along = along[*one].iter().zip(&along[*other]).map(|(a, b)| a - b).collect();
                (along, values[*one] - values[*other])
            })
            .collect();
        let (weights, covariance, deviation) = weights(&differences, along[0].len())?;
        let predicted = |along: &[f64]| along.iter().zip(&weights).map(|(a, w)| a * w).sum::<f64>();
        let rest = sample.footprints.iter().zip(values).zip(&along);
        Some(Self {
            rest: rest
                .map(|((footprint, value), along)| {
                    (grid.line(*footprint), value - predicted(along))
                })
                .collect(),
            noise: deviation / std::f64::consts::SQRT_2,
            covariance,
            along,
        })
    }

    /// The largest step from one of `lines` to the next.
    pub fn largest_step(&self, lines: &[usize]) -> Option<Step> {
        let levels: Vec<Level> = lines.iter().map(|line| self.level(*line)).collect();
        let steps = levels.windows(2).enumerate().map(|(line, pair)| {
            let change: Vec<f64> =
                pair[1].along.iter().zip(&pair[0].along).map(|(a, b)| a - b).collect();
            let of_weights: f64 = (0..change.len())
                .flat_map(|row| (0..change.len()).map(move |column| (row, column)))
                .map(|at| change[at.0] * self.covariance[at] * change[at.1])
                .sum();
            let of_noise = MEDIAN * (1.0 / pair[0].count + 1.0 / pair[1].count);
            Step {
                line,
                value: (pair[1].middle - pair[0].middle).abs() / self.noise,
                deviation: (of_noise + of_weights.max(0.0) / self.noise.powi(2)).sqrt(),
            }
        });
        // The surest: where the scene changes much the weights make large steps that are none.
        let sure = |step: &Step| step.value / step.deviation;
        steps
            .filter(|step| sure(step).is_finite())
            .max_by(|one, next| sure(one).total_cmp(&sure(next)))
    }

    fn level(&self, line: usize) -> Level {
        let rows: Vec<usize> = (0..self.rest.len()).filter(|at| self.rest[*at].0 == line).collect();
        let count = rows.len() as f64;
        let components = self.covariance.nrows();
        let mean = |k: usize| rows.iter().map(|row| self.along[*row][k]).sum::<f64>() / count;
        Level {
            middle: median(&mut rows.iter().map(|row| self.rest[*row].1).collect::<Vec<_>>()),
            along: (0..components).map(mean).collect(),
            count,
        }
    }
}

/// A channel in one line.
struct Level {
    middle: f64,
    along: Vec<f64>,
    count: f64,
}

/// Weights by least squares over the differences of pairs, without those that do not fit; with their
/// covariance, and the deviation of the differences.
fn weights(
    differences: &[(Vec<f64>, f64)],
    components: usize,
) -> Option<(Vec<f64>, Mat<f64>, f64)> {
    let mut kept: Vec<bool> = vec![true; differences.len()];
    let mut found = None;
    for _ in 0..ROUNDS {
        let fitted =
            || differences.iter().zip(&kept).filter(|(_, kept)| **kept).map(|(one, _)| one);
        let mut squares = Mat::<f64>::zeros(components, components);
        let mut products = vec![0.0; components];
        for (along, value) in fitted() {
            for row in 0..components {
                products[row] += along[row] * value;
                for column in 0..components {
                    squares[(row, column)] += along[row] * along[column];
                }
            }
        }
        let inverse = inverse(&squares)?;
        let weights: Vec<f64> = (0..components)
            .map(|row| (0..components).map(|k| inverse[(row, k)] * products[k]).sum())
            .collect();
        let rest: Vec<f64> = differences
            .iter()
            .map(|(along, value)| {
                value - along.iter().zip(&weights).map(|(a, w)| a * w).sum::<f64>()
            })
            .collect();
        let deviation = deviation_from_zero(&mut rest.clone());
        kept = rest.iter().map(|rest| rest.abs() <= MOST * deviation).collect();
        let covariance = Mat::from_fn(components, components, |row, column| {
            inverse[(row, column)] * deviation * deviation
        });
        found = Some((weights, covariance, deviation));
    }
    found.filter(|(_, _, deviation)| *deviation > 0.0)
}

/// The inverse of a symmetric matrix, without directions in which there is nothing.
fn inverse(squares: &Mat<f64>) -> Option<Mat<f64>> {
    let count = squares.nrows();
    if count == 0 {
        return Some(Mat::zeros(0, 0));
    }
    let turned = SelfAdjointEigen::new(squares.as_ref(), Side::Lower).ok()?;
    let largest = turned.S()[count - 1];
    let share = |k: usize| match turned.S()[k] {
        value if value > LEAST * largest => 1.0 / value,
        _ => 0.0,
    };
    Some(Mat::from_fn(count, count, |row, column| {
        (0..count).map(|k| turned.U()[(row, k)] * share(k) * turned.U()[(column, k)]).sum()
    }))
}

#[cfg(test)]
mod tests {
    use rand_chacha::ChaCha8Rng;
    use rand_chacha::rand_core::SeedableRng;
    use rand_distr::{Distribution, StandardNormal};

    use super::*;

    #[test]
    fn weights_are_those_of_the_pairs_whatever_a_few_outliers_say() {
        let mut random = ChaCha8Rng::seed_from_u64(3);
        let mut normal = move || -> f64 { StandardNormal.sample(&mut random) };
        let mut differences: Vec<(Vec<f64>, f64)> = (0..600)
            .map(|_| {
                let along = vec![10.0 * normal(), 3.0 * normal()];
                let value = 0.5 * along[0] - 2.0 * along[1] + 0.3 * normal();
                (along, value)
            })
            .collect();
        differences.iter_mut().step_by(40).for_each(|one| one.1 += 50.0);
        let (weights, covariance, deviation) = weights(&differences, 2).unwrap();
        for (at, expected) in [0.5, -2.0].into_iter().enumerate() {
            let own = covariance[(at, at)].sqrt();
            assert!((weights[at] - expected).abs() < 4.0 * own, "{weights:?}");
        }
        // 0.3 / (10 sqrt(600)) = 0.0012; known to a few per cent.
        assert!((covariance[(0, 0)].sqrt() / 0.001_225 - 1.0).abs() < 0.15);
        assert!((deviation - 0.3).abs() < 0.03, "{deviation}");
    }

    #[test]
    fn a_direction_without_differences_has_no_weight() {
        let differences: Vec<(Vec<f64>, f64)> =
            (0..40).map(|at| (vec![f64::from(at % 7) - 3.0, 0.0], f64::from(at % 5))).collect();
        let (weights, covariance, _) = weights(&differences, 2).unwrap();
        assert_eq!((weights[1], covariance[(1, 1)]), (0.0, 0.0));
    }
}
