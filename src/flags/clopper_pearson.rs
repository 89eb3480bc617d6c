//! The exact interval of a share that was counted in a sample.

/// The interval in which the true share lies with `confidence` (0 to 1), where `hits` of `trials`
/// were counted: the central interval of Clopper and Pearson. With *k* of *n* and
/// α = 1 - confidence, its limits are the quantiles α/2 of Beta(*k*, *n* - *k* + 1) and 1 - α/2 of
/// Beta(*k* + 1, *n* - *k*); 0 where *k* is 0, and 1 where *k* is *n*. Without trials, all is
/// possible: 0 to 1.
///
/// Source: [Clopper & Pearson 1934]; the beta form is that of \[DLMF\] 8.17.
pub fn clopper_pearson(hits: usize, trials: usize, confidence: f64) -> (f64, f64) {
    let tail = (1.0 - confidence) / 2.0;
    let (hits, trials) = (hits.min(trials) as f64, trials as f64);
    let low = if hits == 0.0 { 0.0 } else { quantile(tail, hits, trials - hits + 1.0) };
    let high = if hits == trials { 1.0 } else { quantile(1.0 - tail, hits + 1.0, trials - hits) };
    (low, high)
}

/// The point at which the regularised incomplete beta function reaches `share`, by halving: it
/// rises from 0 to 1, and sixty halvings are finer than a number of 64 bits.
fn quantile(share: f64, a: f64, b: f64) -> f64 {
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if incomplete_beta(middle, a, b) < share {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// The regularised incomplete beta function I_x(a, b), for positive a and b.
///
/// Source: continued fraction of \[DLMF\] 8.17.22, which converges fast below the mean
/// (a + 1) / (a + b + 2); beyond it by the symmetry I_x(a, b) = 1 - I_{1-x}(b, a).
fn incomplete_beta(x: f64, a: f64, b: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    if x >= 1.0 {
        return 1.0;
    }
    let front = (ln_gamma(a + b) - ln_gamma(a) - ln_gamma(b) + a * x.ln() + b * (-x).ln_1p()).exp();
    if x < (a + 1.0) / (a + b + 2.0) {
        front * fraction(x, a, b) / a
    } else {
        1.0 - front * fraction(1.0 - x, b, a) / b
    }
}

/// The continued fraction of \[DLMF\] 8.17.22, by the method of Lentz as modified by Thompson and
/// Barnett.
fn fraction(x: f64, a: f64, b: f64) -> f64 {
    const SMALLEST: f64 = 1e-300;
    let away_from_zero = |value: f64| if value.abs() < SMALLEST { SMALLEST } else { value };
    let mut c = 1.0;
    let mut d = 1.0 / away_from_zero(1.0 - (a + b) * x / (a + 1.0));
    let mut sum = d;
    // The number of steps grows as the square root of the larger parameter; samples are small.
    for step in 1..10_000 {
        let m = f64::from(step);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        d = 1.0 / away_from_zero(1.0 + even * d);
        c = away_from_zero(1.0 + even / c);
        sum *= d * c;
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        d = 1.0 / away_from_zero(1.0 + odd * d);
        c = away_from_zero(1.0 + odd / c);
        sum *= d * c;
        if (d * c - 1.0).abs() < f64::EPSILON {
            break;
        }
    }
    sum
}

/// The logarithm of the gamma function, for positive arguments: Stirling's series (\[DLMF\] 5.11.1)
/// above 15, where its next term is below 1e-16; below by the recurrence ln Γ(x) = ln Γ(x+1) - ln x.
fn ln_gamma(x: f64) -> f64 {
    if x < 15.0 {
        return ln_gamma(x + 1.0) - x.ln();
    }
    let inverse = 1.0 / (x * x);
    let series = 1.0 / 12.0
        - inverse
            * (1.0 / 360.0
                - inverse * (1.0 / 1260.0 - inverse * (1.0 / 1680.0 - inverse / 1188.0)));
    (x - 0.5) * x.ln() - x + 0.5 * (2.0 * std::f64::consts::PI).ln() + series / x
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Columns: hits, trials, confidence, low, high.
    fn reference() -> Vec<[f64; 5]> {
        let text = include_str!("../../tests/reference_tables/clopper_pearson.csv");
        let rows = text.lines().filter(|line| !line.starts_with('#')).skip(1);
        rows.map(|row| {
            let cells: Vec<f64> = row.split(',').map(|cell| cell.parse().unwrap()).collect();
            cells.try_into().unwrap()
        })
        .collect()
    }

    /// The table has twelve digits; the halving and the fraction are good to a few in 1e-13, and
    /// nobody needs more than four digits of a rate.
    #[test]
    fn limits_are_those_of_the_table() {
        let rows = reference();
        assert!(rows.len() > 40);
        for [hits, trials, confidence, low, high] in rows {
            let found = clopper_pearson(hits as usize, trials as usize, confidence);
            assert!((found.0 - low).abs() < 1e-11, "{hits} of {trials}: {found:?}, {low}");
            assert!((found.1 - high).abs() < 1e-11, "{hits} of {trials}: {found:?}, {high}");
        }
    }

    /// With no hit the upper limit solves (1 - p)^n = α/2.
    #[test]
    fn no_hit_has_a_closed_form() {
        for trials in [1, 7, 59, 1000] {
            let (low, high) = clopper_pearson(0, trials, 0.95);
            assert_eq!(low, 0.0);
            let closed = 1.0 - 0.025_f64.powf(1.0 / trials as f64);
            assert!((high - closed).abs() < 1e-13, "{trials}: {high} {closed}");
            let (mirrored, one) = clopper_pearson(trials, trials, 0.95);
            assert_eq!(one, 1.0);
            assert!((1.0 - mirrored - high).abs() < 1e-13);
        }
        assert_eq!(clopper_pearson(0, 0, 0.95), (0.0, 1.0));
    }
}
