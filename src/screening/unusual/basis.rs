//! What spectra of one band are made of: mean, noise, principal components, and how well they fit.

/// A component that is shorter than this in the channels looked at lived in the others, and has nothing
/// to say.
pub(super) const LIVED_ELSEWHERE: f64 = 0.01;

/// The components of a band, and how well they rebuild the spectra that they were found in.
#[derive(Debug, Clone, PartialEq)]
pub struct Basis {
    /// The channels that it is about, by rising wavenumber, as places in the band.
    pub channels: Vec<usize>,
    /// Their wavenumbers, cm-1.
    pub wavenumbers: Vec<f64>,
    /// Whether a channel and the one behind it are neighbours without a gap.
    pub adjacent: Vec<bool>,
    /// Mean spectrum, mW m-2 sr-1 (cm-1)-1.
    pub mean: Vec<f64>,
    /// Noise that spectra are divided by, mW m-2 sr-1 (cm-1)-1.
    pub noise: Vec<f64>,
    /// Component by component, orthonormal in noise units: components x channels.
    pub vectors: Vec<f64>,
    /// Variance along each component, in noise units squared.
    pub variances: Vec<f64>,
    /// How well it rebuilds what it was found in.
    pub scores: TrainingScores,
}

/// Reconstruction scores of the spectra that a basis was found in.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TrainingScores {
    /// How many spectra were kept.
    pub spectra: usize,
    /// How many were left out as unlike the others.
    pub left_out: usize,
    /// Mean score, noise units.
    pub mean: f64,
    /// Standard deviation of the scores, noise units.
    pub deviation: f64,
}

/// A spectrum with up to this share of its channels missing is rebuilt from the others.
const MOST_MISSING: f64 = 0.05;
/// Rounds of filling in what is missing with what the components say; each shrinks the error by about
/// the share that is missing.
const FILLING_ROUNDS: usize = 8;
/// Variance along a component, in noise units squared, from which on it is signal for the better half:
/// the noise's own is 1.
const LEAST_SIGNAL: f64 = 2.0;

impl Basis {
    /// How many components it has.
    pub fn components(&self) -> usize {
        self.variances.len()
    }

    /// Score from which on a spectrum is unusual: so many standard deviations above the mean, and
    /// never less than 1, for what is rebuilt to within its noise is not.
    pub fn limit(&self, deviations: f64) -> f64 {
        (self.scores.mean + deviations * self.scores.deviation).max(1.0)
    }

    pub(super) fn component(&self, number: usize) -> &[f64] {
        let channels = self.channels.len();
        &self.vectors[number * channels..][..channels]
    }

    /// How much of each channel its own value decides in the rebuilt spectrum, 0 to 1: the diagonal
    /// of the projection.
    pub fn leverages(&self) -> Vec<f64> {
        let mut leverages = vec![0.0; self.channels.len()];
        for number in 0..self.components() {
            for (sum, value) in leverages.iter_mut().zip(self.component(number)) {
                *sum += value * value;
            }
        }
        leverages
    }

    /// What the components do not explain of a spectrum (radiances of all channels of the band), in
    /// noise units. Missing channels are NaN; all of them where too many are missing.
    pub fn residual(&self, radiances: &[f64]) -> Vec<f64> {
        let Some((filled, missing)) = self.filled(radiances) else {
            return vec![f64::NAN; self.channels.len()];
        };
        let mut rest = self.unexplained(&filled);
        missing.iter().for_each(|at| rest[*at] = f64::NAN);
        rest
    }

    /// Where a spectrum (radiances of all channels of the band) lies along each component that varies
    /// by twice its noise or more, in standard deviations of the training's spectra: differences of
    /// these are what distances of [Mahalanobis 1936] are made of. Along the other components the noise
    /// would decide. NaN where too much is missing.
    pub fn coordinates(&self, radiances: &[f64]) -> Vec<f64> {
        let signal = (0..self.components()).filter(|at| self.variances[*at] >= LEAST_SIGNAL);
        let Some((filled, _)) = self.filled(radiances) else {
            return signal.map(|_| f64::NAN).collect();
        };
        let along = |number: usize| -> f64 {
            self.component(number).iter().zip(&filled).map(|(a, b)| a * b).sum()
        };
        signal.map(|number| along(number) / self.variances[number].sqrt()).collect()
    }

    /// A spectrum in noise units, with what is missing filled in by what the components say, and which
    /// channels those are; `None` where too many are missing.
    fn filled(&self, radiances: &[f64]) -> Option<(Vec<f64>, Vec<usize>)> {
        let channels = self.channels.iter().zip(self.mean.iter().zip(&self.noise));
        let mut filled: Vec<f64> =
            channels.map(|(&channel, (mean, noise))| (radiances[channel] - mean) / noise).collect();
        let missing: Vec<usize> = (0..filled.len()).filter(|at| !filled[*at].is_finite()).collect();
        if missing.len() as f64 > MOST_MISSING * filled.len() as f64 {
            return None;
        }
        missing.iter().for_each(|at| filled[*at] = 0.0);
        // The first round finds what is missing of zero, the others what is missing of that.
        let rounds = if missing.is_empty() { 0 } else { FILLING_ROUNDS };
        for _ in 0..rounds {
            let rest = self.unexplained(&filled);
            missing.iter().for_each(|at| filled[*at] -= rest[*at]);
        }
        Some((filled, missing))
    }

    /// The same components seen through fewer channels (places in the band): what is left of them is
    /// made orthonormal again, so that a projection fits them to these channels by least squares.
    pub fn restricted(&self, channels: &[usize]) -> Basis {
        let kept: Vec<usize> =
            (0..self.channels.len()).filter(|at| channels.contains(&self.channels[*at])).collect();
        let of = |values: &[f64]| -> Vec<f64> { kept.iter().map(|at| values[*at]).collect() };
        let mut vectors: Vec<Vec<f64>> = Vec::new();
        let mut variances = Vec::new();
        for number in 0..self.components() {
            let mut vector = of(self.component(number));
            // Twice, for one round leaves rounding errors along those before [Giraud et al. 2005].
            for _ in 0..2 {
                for other in &vectors {
                    let along: f64 = vector.iter().zip(other).map(|(a, b)| a * b).sum();
                    vector.iter_mut().zip(other).for_each(|(value, b)| *value -= along * b);
                }
            }
            let length = vector.iter().map(|value| value * value).sum::<f64>().sqrt();
            if length > LIVED_ELSEWHERE {
                vector.iter_mut().for_each(|value| *value /= length);
                vectors.push(vector);
                variances.push(self.variances[number]);
            }
        }
        let adjacent = kept.windows(2).map(|pair| pair[0] + 1 == pair[1] && self.adjacent[pair[0]]);
        Basis {
            adjacent: adjacent.chain(kept.last().map(|_| false)).collect(),
            channels: kept.iter().map(|at| self.channels[*at]).collect(),
            wavenumbers: of(&self.wavenumbers),
            mean: of(&self.mean),
            noise: of(&self.noise),
            vectors: vectors.concat(),
            variances,
            scores: self.scores,
        }
    }

    fn unexplained(&self, normalised: &[f64]) -> Vec<f64> {
        let mut rest = normalised.to_vec();
        for number in 0..self.components() {
            let component = self.component(number);
            let along: f64 = normalised.iter().zip(component).map(|(a, b)| a * b).sum();
            for (rest, value) in rest.iter_mut().zip(component) {
                *rest -= along * value;
            }
        }
        rest
    }
}

/// The reconstruction score of a residual in noise units: the root of the mean square over the
/// channels that are there. NaN where none is.
pub fn score(residual: &[f64]) -> f64 {
    let there = residual.iter().filter(|value| value.is_finite());
    let (count, sum) =
        there.fold((0.0, 0.0), |(count, sum), value| (count + 1.0, sum + value * value));
    f64::sqrt(sum / count)
}

#[cfg(test)]
pub mod tests {
    use super::*;

    /// Two components of four channels, worked by hand.
    pub fn small() -> Basis {
        let half = 0.5_f64;
        Basis {
            channels: vec![3, 2, 1, 0],
            wavenumbers: vec![700.0, 701.0, 702.0, 703.0],
            adjacent: vec![true, true, true, false],
            mean: vec![10.0; 4],
            noise: vec![2.0; 4],
            vectors: vec![half, half, half, half, half, -half, half, -half],
            variances: vec![9.0, 4.0],
            scores: TrainingScores { spectra: 10, left_out: 0, mean: 0.7, deviation: 0.1 },
        }
    }

    #[test]
    fn what_the_components_span_is_explained() {
        let basis = small();
        // 10 + 2 (3, -1, 3, -1): 2 along the first component, 4 along the second.
        let residual = basis.residual(&[8.0, 16.0, 8.0, 16.0]);
        assert!(residual.iter().all(|value| value.abs() < 1e-14), "{residual:?}");
        // (1, 0, -1, 0) is at right angles to both; the file's order is the other way round.
        let residual = basis.residual(&[10.0, 8.0, 10.0, 12.0]);
        assert_eq!(residual, [1.0, 0.0, -1.0, 0.0]);
        assert_eq!(score(&residual), 0.5_f64.sqrt());
        assert_eq!(basis.leverages(), [0.5; 4]);
        assert!((basis.limit(4.0) - 1.1).abs() < 1e-15);
    }

    #[test]
    fn coordinates_are_in_deviations_and_leave_out_what_is_noise() {
        let basis = small();
        // 2 along the first component and 4 along the second, whose deviations are 3 and 2.
        assert_eq!(basis.coordinates(&[8.0, 16.0, 8.0, 16.0]), [2.0 / 3.0, 2.0]);
        let basis = Basis { variances: vec![9.0, 1.5], ..small() };
        assert_eq!(basis.coordinates(&[8.0, 16.0, 8.0, 16.0]), [2.0 / 3.0]);
        assert!(basis.coordinates(&[8.0, f64::NAN, 8.0, 16.0])[0].is_nan(), "a quarter is missing");
    }

    #[test]
    fn fewer_channels_are_fitted_by_least_squares() {
        let basis = small().restricted(&[3, 2, 1]);
        assert_eq!((basis.channels.clone(), basis.components()), (vec![3, 2, 1], 2));
        // 10 + 2 (3, -1, 3): what both components make in the channels that are left.
        let residual = basis.residual(&[f64::NAN, 16.0, 8.0, 16.0]);
        assert!(residual.iter().all(|value| value.abs() < 1e-14), "{residual:?}");
        // Three channels and two directions, (1, 1, 1) and (1, -1, 1): what is left is (1, 0, -1).
        let residual = basis.residual(&[f64::NAN, 10.0, 10.0, 12.0]);
        assert!((residual[0] - 0.5).abs() < 1e-14 && (residual[2] + 0.5).abs() < 1e-14);
    }

    #[test]
    fn what_is_missing_is_filled_in_or_the_spectrum_has_no_score() {
        let basis = small();
        let residual = basis.residual(&[8.0, f64::NAN, 8.0, 16.0]);
        assert!(residual.iter().all(|value| value.is_nan()), "a quarter is missing");
        assert!(score(&residual).is_nan());
        // Forty channels, of which one is missing: the others are explained without it.
        let channels = 40;
        let flat = 1.0 / (channels as f64).sqrt();
        let basis = Basis {
            channels: (0..channels).collect(),
            wavenumbers: (0..channels).map(|at| 700.0 + at as f64).collect(),
            adjacent: vec![true; channels],
            mean: vec![0.0; channels],
            noise: vec![1.0; channels],
            vectors: vec![flat; channels],
            variances: vec![1.0],
            ..small()
        };
        let mut radiances = vec![50.0; channels];
        radiances[7] = f64::NAN;
        let residual = basis.residual(&radiances);
        assert!(residual[7].is_nan());
        // Each round shrinks the error of 50 by a fortieth: 50 / 40^8.
        assert!(residual.iter().filter(|one| !one.is_nan()).all(|one| one.abs() < 1e-9));
    }
}
