//! The leading principal components of many spectra.
//!
//! A randomised range finder [Halko et al. 2011]: a random sketch of the rows' space, sharpened by
//! power steps, then an exact decomposition inside of it. Far cheaper than a full decomposition where
//! tens of components of thousands of channels are wanted. The random numbers have a fixed seed, and
//! products run in one thread, so that the same rows give the same components.

use faer::linalg::matmul::matmul;
use faer::linalg::solvers::{Qr, SelfAdjointEigen};
use faer::{Accum, Mat, MatMut, MatRef, Par, Side};
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::SeedableRng;
use rand_distr::{Distribution, StandardNormal};
use rayon::prelude::*;

/// Vectors beyond those wanted, which take up what leaks out of them [Halko et al. 2011].
const SPARE: usize = 10;
/// Two steps bring the leading components of noisy spectra to their places [Halko et al. 2011].
pub const POWER_STEPS: usize = 2;
/// Products are cut into pieces of this size, whatever the number of threads.
const PIECE: usize = 128;

/// Directions in the space of channels, with the variance of the rows along each.
#[derive(Debug, Clone)]
pub struct Components {
    /// One column for each component, orthonormal: channels x components.
    pub vectors: Mat<f64>,
    /// In descending order.
    pub variances: Vec<f64>,
}

/// The leading components of `rows` (spectra x channels, centred), at most `wanted`; `None` where a
/// decomposition fails, as it does for values that are not finite.
pub fn leading_components(
    rows: MatRef<'_, f64>,
    wanted: usize,
    power_steps: usize,
) -> Option<Components> {
    // One thread: the sums of a decomposition must not depend on how many there are.
    faer::set_global_parallelism(Par::Seq);
    let (count, channels) = (rows.nrows(), rows.ncols());
    let width = (wanted + SPARE).min(count).min(channels);
    let mut random = ChaCha8Rng::seed_from_u64(0xBA5E);
    let mut range = Mat::from_fn(channels, width, |_, _| StandardNormal.sample(&mut random));
    for _ in 0..power_steps {
        let sketch = orthonormal(&product(rows, range.as_ref()));
        range = orthonormal(&product(rows.transpose(), sketch.as_ref()));
    }
    let inside = product(rows, range.as_ref());
    let gram = product(inside.transpose(), inside.as_ref());
    if !(0..width).all(|at| gram[(at, at)].is_finite()) {
        return None;
    }
    let turned = SelfAdjointEigen::new(gram.as_ref(), Side::Lower).ok()?;
    // Eigenvalues ascend.
    let kept = wanted.min(width);
    let turn = Mat::from_fn(width, kept, |row, column| turned.U()[(row, width - 1 - column)]);
    let variance = |at: usize| turned.S()[width - 1 - at].max(0.0) / (count as f64 - 1.0).max(1.0);
    let variances = (0..kept).map(variance).collect();
    Some(Components { vectors: product(range.as_ref(), turn.as_ref()), variances })
}

/// A product, its rows in pieces side by side.
pub fn product(one: MatRef<'_, f64>, other: MatRef<'_, f64>) -> Mat<f64> {
    let mut out = Mat::zeros(one.nrows(), other.ncols());
    let pieces = out.as_mut().par_row_chunks_mut(PIECE);
    let rows = one.par_row_chunks(PIECE);
    pieces.zip(rows).for_each(|(out, one)| {
        matmul(out, Accum::Replace, one, other, 1.0, Par::Seq);
    });
    out
}

/// Takes a product off, its rows in pieces side by side.
pub fn take_product(from: MatMut<'_, f64>, one: MatRef<'_, f64>, other: MatRef<'_, f64>) {
    let pieces = from.par_row_chunks_mut(PIECE);
    let rows = one.par_row_chunks(PIECE);
    pieces.zip(rows).for_each(|(from, one)| {
        matmul(from, Accum::Add, one, other, -1.0, Par::Seq);
    });
}

fn orthonormal(columns: &Mat<f64>) -> Mat<f64> {
    Qr::new(columns.as_ref()).compute_thin_Q()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Rows of three known directions with falling strength, and a little noise.
    fn rows(count: usize, channels: usize) -> Mat<f64> {
        let mut random = ChaCha8Rng::seed_from_u64(7);
        let mut normal = move || -> f64 { StandardNormal.sample(&mut random) };
        let strengths: Vec<[f64; 3]> =
            (0..count).map(|_| [40.0 * normal(), 12.0 * normal(), 5.0 * normal()]).collect();
        let shape = |k: usize, c: usize| {
            let angle = (k + 1) as f64 * (c as f64 + 0.5) * std::f64::consts::PI;
            (angle / channels as f64).cos() * (2.0 / channels as f64).sqrt()
        };
        Mat::from_fn(count, channels, |row, channel| {
            let signal: f64 = (0..3).map(|k| strengths[row][k] * shape(k, channel)).sum();
            signal + 0.3 * normal()
        })
    }

    #[test]
    fn the_range_finder_agrees_with_the_full_decomposition() {
        let rows = rows(90, 60);
        let found = leading_components(rows.as_ref(), 3, POWER_STEPS).unwrap();
        let svd = rows.thin_svd().unwrap();
        for component in 0..3 {
            let variance = svd.S()[component].powi(2) / 89.0;
            // What the spare vectors miss falls with the fourth power of 0.3 over 5 in each step.
            let off = found.variances[component] / variance - 1.0;
            assert!(off.abs() < 1e-6, "{off}");
            let along: f64 =
                (0..60).map(|c| found.vectors[(c, component)] * svd.V()[(c, component)]).sum();
            assert!((along.abs() - 1.0).abs() < 1e-6, "{along}");
        }
    }

    /// The table's matrix, as its second line says.
    fn tabulated() -> Mat<f64> {
        let value = |row: usize, channel: usize| {
            let (i, j) = (row as f64, channel as f64);
            30.0 * (0.7 * i + 0.2).sin() * (0.3 * j).cos()
                + 11.0 * (1.9 * i).cos() * (0.5 * j + 0.4).sin()
                + 4.0 * (2.6 * i + 0.01 * i * i).sin() * (1.1 * j).cos()
                + 0.2 * (3.7 * i * j + i - 2.0 * j).sin()
        };
        let mean = |channel| (0..40).map(|row| value(row, channel)).sum::<f64>() / 40.0;
        let means: Vec<f64> = (0..24).map(mean).collect();
        Mat::from_fn(40, 24, |row, channel| value(row, channel) - means[channel])
    }

    #[test]
    fn the_components_are_those_of_lapack() {
        let table = include_str!("../../../tests/reference_tables/principal_components.csv");
        let found = leading_components(tabulated().as_ref(), 3, POWER_STEPS).unwrap();
        let rows = table.lines().skip(3);
        for (component, row) in rows.enumerate() {
            let numbers: Vec<f64> =
                row.split(',').skip(1).map(|text| text.parse().unwrap()).collect();
            let off = found.variances[component] / numbers[0] - 1.0;
            // As above: what the spare vectors miss.
            assert!(off.abs() < 1e-6, "{component}: {off}");
            let vector = found.vectors.col(component);
            let sign = numbers[1..].iter().zip(vector.iter()).map(|(a, b)| a * b).sum::<f64>();
            for (expected, found) in numbers[1..].iter().zip(vector.iter()) {
                assert!((expected - sign.signum() * found).abs() < 1e-5, "{component}");
            }
        }
    }

    #[test]
    fn threads_change_nothing_and_neither_does_a_second_time() {
        let rows = rows(300, 200);
        let with = |threads: usize| {
            let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
            pool.install(|| leading_components(rows.as_ref(), 5, POWER_STEPS).unwrap().variances)
        };
        assert_eq!(with(1), with(3));
    }

    #[test]
    fn what_is_no_number_has_no_components() {
        let mut rows = rows(20, 10);
        rows[(3, 4)] = f64::NAN;
        assert!(leading_components(rows.as_ref(), 3, POWER_STEPS).is_none());
    }
}
