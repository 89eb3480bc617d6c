//! A basis from spectra that hold a few unusual ones and a few faulty channels.

use faer::{Mat, MatRef};
use rayon::prelude::*;

use super::basis::{Basis, TrainingScores};
use super::components::{Components, POWER_STEPS, leading_components, product};
use crate::spectral::{NoiseShape, RingingWindows, centre_and_deviation, deviation_from_zero};

/// Spectra of one band: rows of complete spectra over channels by rising wavenumber.
#[derive(Debug, Clone)]
pub struct Rows {
    /// The channels as places in the band.
    pub channels: Vec<usize>,
    /// Their wavenumbers, cm-1.
    pub wavenumbers: Vec<f64>,
    /// Whether a channel and the one behind it are neighbours without a gap.
    pub adjacent: Vec<bool>,
    /// mW m-2 sr-1 (cm-1)-1: rows x channels, all there.
    pub radiances: Vec<f64>,
    /// Pairs of rows that lie side by side on the ground.
    pub pairs: Vec<(usize, usize)>,
}

impl Rows {
    /// How many spectra.
    pub fn count(&self) -> usize {
        self.radiances.len() / self.channels.len().max(1)
    }

    /// One channel over all rows.
    pub fn column(&self, channel: usize) -> impl Iterator<Item = f64> + '_ {
        self.radiances.iter().skip(channel).step_by(self.channels.len()).copied()
    }
}

/// A basis with what was found out on the way.
#[derive(Debug, Clone)]
pub struct Fitted {
    /// The basis. Its channels may be fewer than those of the rows.
    pub basis: Basis,
    /// For each channel of the rows whether it was set aside, for nothing but itself explained it.
    pub set_aside: Vec<bool>,
    /// What is not explained: rows x all channels of the rows, in units of [`Self::noise`].
    pub residuals: Vec<f64>,
    /// Noise of all channels of the rows, mW m-2 sr-1 (cm-1)-1.
    pub noise: Vec<f64>,
    /// How the noise of neighbours goes together.
    pub shape: NoiseShape,
}

/// The most components that are kept. Sounders of some thousand channels see about this many
/// directions above their noise [Antonelli et al. 2004].
const MOST: usize = 60;
/// While faults and unusual spectra are still among the rows, fewer will do.
const ROUGH: usize = 40;
/// A channel that decides more than this of its own rebuilt value is explained by itself alone.
const OWN_SHARE: f64 = 0.7;
/// Scores this many deviations above the middle are unlike the others and left out of the fit.
const UNLIKE: f64 = 4.0;
/// Noise of apodised spectra has at most about three times the power of white noise; before it has
/// been measured, no component below that counts.
const APODISED_POWER: f64 = 3.0;
/// A component that alternates from channel to channel by more than this share is no atmosphere.
const ALTERNATING: f64 = 0.4;
/// Fewer spectra than this say nothing about components.
const FEWEST: usize = 30;

/// Fits a basis to rows: twice roughly, leaving out the rows that are unlike the others and setting
/// aside the channels that explain themselves, then to what is left. `noise` (of each channel) is
/// where it begins; afterwards the noise is what the residuals of neighbouring footprints differ by.
/// `None` for too few rows.
pub fn fit(rows: &Rows, noise: &[f64]) -> Option<Fitted> {
    let (count, width) = (rows.count(), rows.channels.len());
    if count < FEWEST || width < FEWEST {
        return None;
    }
    let mut state = State {
        rows,
        noise: noise.to_vec(),
        power: APODISED_POWER,
        kept: (0..count).collect(),
        used: (0..width).collect(),
    };
    for _ in 0..2 {
        let stage = state.stage(ROUGH, 1)?;
        state.learn(&stage);
    }
    let stage = state.stage(MOST, POWER_STEPS)?;
    Some(state.finish(stage))
}

/// What a basis that was found elsewhere leaves of rows. Its channels must be among theirs; those that
/// it does not know have no residual and no noise.
pub fn judged_by(basis: Basis, rows: &Rows) -> Option<Fitted> {
    let (count, width) = (rows.count(), rows.channels.len());
    if count < FEWEST || basis.channels.len() < FEWEST {
        return None;
    }
    let place = |channel: &usize| basis.channels.iter().position(|one| one == channel);
    let places: Vec<Option<usize>> = rows.channels.iter().map(place).collect();
    let band = rows.channels.iter().max().map_or(0, |last| last + 1);
    let all: Vec<Vec<f64>> = rows
        .radiances
        .par_chunks_exact(width)
        .map(|row| {
            let mut radiances = vec![f64::NAN; band];
            rows.channels.iter().zip(row).for_each(|(channel, value)| radiances[*channel] = *value);
            let residual = basis.residual(&radiances);
            places.iter().map(|place| place.map_or(f64::NAN, |place| residual[place])).collect()
        })
        .collect();
    let leverages = basis.leverages();
    let taken: Vec<f64> =
        places.iter().map(|place| place.map_or(0.0, |place| leverages[place])).collect();
    let residuals = Mat::from_fn(count, width, |row, channel| all[row][channel]);
    let factors = noise_factors(rows, &residuals, &taken);
    let shape = shape(rows, &residuals);
    let noise = places.iter().zip(&factors).map(|(place, factor)| match place {
        Some(place) => basis.noise[*place] * factor,
        None => f64::NAN,
    });
    let in_noise = all.iter().flat_map(|row| row.iter().zip(&factors).map(|(one, f)| one / f));
    Some(Fitted {
        noise: noise.collect(),
        set_aside: places.iter().map(Option::is_none).collect(),
        residuals: in_noise.collect(),
        shape,
        basis,
    })
}

struct State<'r> {
    rows: &'r Rows,
    noise: Vec<f64>,
    /// Largest power of the noise at any frequency.
    power: f64,
    /// Rows that the next fit is made from.
    kept: Vec<usize>,
    /// Channels that it is made of.
    used: Vec<usize>,
}

/// A fit to some rows and channels.
struct Stage {
    mean: Vec<f64>,
    vectors: Mat<f64>,
    variances: Vec<f64>,
    /// All rows x all channels, noise units.
    residuals: Mat<f64>,
    leverages: Vec<f64>,
    scores: Vec<f64>,
}

impl State<'_> {
    fn stage(&self, wanted: usize, power_steps: usize) -> Option<Stage> {
        let width = self.rows.channels.len();
        let all = MatRef::from_row_major_slice(&self.rows.radiances, self.rows.count(), width);
        let mean: Vec<f64> = (0..width)
            .into_par_iter()
            .map(|channel| {
                let sum: f64 = self.kept.iter().map(|row| all[(*row, channel)]).sum();
                sum / self.kept.len() as f64
            })
            .collect();
        let normal = |row: usize, channel: usize| {
            (all[(row, channel)] - mean[channel]) / self.noise[channel]
        };
        let fitted = Mat::from_fn(self.kept.len(), self.used.len(), |row, channel| {
            normal(self.kept[row], self.used[channel])
        });
        let wanted = wanted.min(self.kept.len() / 4).min(self.used.len() / 4);
        let found = leading_components(fitted.as_ref(), wanted, power_steps)?;
        // Above the edge that noise alone does not pass [Marchenko & Pastur 1967], for apodised noise
        // at most so many times higher as its largest power.
        let ratio = self.used.len() as f64 / self.kept.len() as f64;
        let edge = self.power * (1.0 + ratio.sqrt()).powi(2);
        let components = found.variances.iter().take_while(|variance| **variance > edge).count();
        let kept = self.without_ringing(&found, components.max(1));
        let components = kept.len();
        let vectors =
            Mat::from_fn(self.used.len(), components, |row, k| found.vectors[(row, kept[k])]);
        let used = Mat::from_fn(self.rows.count(), self.used.len(), |row, channel| {
            normal(row, self.used[channel])
        });
        let along = product(used.as_ref(), vectors.as_ref());
        let rebuilt = product(along.as_ref(), vectors.transpose());
        let mut residuals = Mat::zeros(self.rows.count(), width);
        for (place, &channel) in self.used.iter().enumerate() {
            for row in 0..self.rows.count() {
                residuals[(row, channel)] = used[(row, place)] - rebuilt[(row, place)];
            }
        }
        let scores = (0..self.rows.count())
            .map(|row| {
                let squares = self.used.iter().map(|channel| residuals[(row, *channel)].powi(2));
                (squares.sum::<f64>() / self.used.len() as f64).sqrt()
            })
            .collect();
        self.regress_the_others(&along, &normal, &mut residuals);
        let leverages = (0..self.used.len())
            .map(|place| (0..components).map(|k| vectors[(place, k)].powi(2)).sum())
            .collect();
        let variances = kept.iter().map(|k| found.variances[*k]).collect();
        Some(Stage { mean, vectors, variances, residuals, leverages, scores })
    }

    /// The first components but those that alternate: ringing in some spectra must stay unexplained.
    fn without_ringing(&self, found: &Components, components: usize) -> Vec<usize> {
        let windows = RingingWindows::over(&self.adjacent());
        let rings = |k: &usize| {
            let share = |windows: &RingingWindows| windows.share(|at| found.vectors[(at, *k)]);
            windows.as_ref().is_some_and(|windows| share(windows) > ALTERNATING)
        };
        (0..components).filter(|k| !rings(k)).collect()
    }

    /// For each used channel whether the next one is used, too, and its neighbour without a gap.
    fn adjacent(&self) -> Vec<bool> {
        let behind = |channel: &usize| {
            self.rows.adjacent[*channel] && self.used.binary_search(&(channel + 1)).is_ok()
        };
        self.used.iter().map(behind).collect()
    }

    /// Channels that were set aside, as far as the components of the others explain them: by least
    /// squares over the kept rows, in which the components do not go together.
    fn regress_the_others(
        &self,
        along: &Mat<f64>,
        normal: &impl Fn(usize, usize) -> f64,
        residuals: &mut Mat<f64>,
    ) {
        for channel in (0..self.rows.channels.len()).filter(|one| !self.used.contains(one)) {
            let weights: Vec<f64> = (0..along.ncols())
                .map(|k| {
                    let products =
                        self.kept.iter().map(|row| along[(*row, k)] * normal(*row, channel));
                    let squares = self.kept.iter().map(|row| along[(*row, k)].powi(2));
                    products.sum::<f64>() / squares.sum::<f64>()
                })
                .collect();
            for row in 0..self.rows.count() {
                let explained: f64 =
                    weights.iter().enumerate().map(|(k, weight)| weight * along[(row, k)]).sum();
                residuals[(row, channel)] = normal(row, channel) - explained;
            }
        }
    }

    /// What the next fit should do better.
    fn learn(&mut self, stage: &Stage) {
        let (middle, deviation) = centre_and_deviation(&mut stage.scores.clone());
        let limit = middle + UNLIKE * deviation;
        let like: Vec<usize> =
            (0..stage.scores.len()).filter(|row| stage.scores[*row] <= limit).collect();
        if like.len() >= FEWEST {
            self.kept = like;
        }
        let factors = noise_factors(self.rows, &stage.residuals, &self.taken(stage));
        let mut leverages = stage.leverages.iter();
        self.used.retain(|_| leverages.next().is_none_or(|own| *own <= OWN_SHARE));
        self.noise.iter_mut().zip(factors).for_each(|(noise, factor)| *noise *= factor);
        self.power = shape(self.rows, &stage.residuals).largest_power();
    }

    /// What the components take along of the noise of each channel of the rows.
    fn taken(&self, stage: &Stage) -> Vec<f64> {
        let mut taken = vec![0.0; self.rows.channels.len()];
        for (channel, own) in self.used.iter().zip(&stage.leverages) {
            taken[*channel] = *own;
        }
        taken
    }

    fn finish(self, stage: Stage) -> Fitted {
        let rows = self.rows;
        let (count, width) = (rows.count(), rows.channels.len());
        let factors = noise_factors(rows, &stage.residuals, &self.taken(&stage));
        let shape = shape(rows, &stage.residuals);
        let kept: Vec<f64> = self.kept.iter().map(|row| stage.scores[*row]).collect();
        let mean = kept.iter().sum::<f64>() / kept.len() as f64;
        let squares: f64 = kept.iter().map(|score| (score - mean).powi(2)).sum();
        let of = |values: &[f64]| self.used.iter().map(|channel| values[*channel]).collect();
        let basis = Basis {
            channels: self.used.iter().map(|channel| rows.channels[*channel]).collect(),
            wavenumbers: of(&rows.wavenumbers),
            adjacent: self.adjacent(),
            mean: of(&stage.mean),
            noise: of(&self.noise),
            vectors: (0..stage.vectors.ncols())
                .flat_map(|k| (0..self.used.len()).map(move |place| (place, k)))
                .map(|at| stage.vectors[at])
                .collect(),
            variances: stage.variances,
            scores: TrainingScores {
                spectra: kept.len(),
                left_out: count - kept.len(),
                mean,
                deviation: (squares / (kept.len() as f64 - 1.0).max(1.0)).sqrt(),
            },
        };
        let set_aside = (0..width).map(|one| self.used.binary_search(&one).is_err()).collect();
        let residuals = (0..count)
            .flat_map(|row| (0..width).map(move |channel| (row, channel)))
            .map(|at| stage.residuals[at] / factors[at.1])
            .collect();
        let noise = self.noise.iter().zip(&factors).map(|(noise, factor)| noise * factor).collect();
        Fitted { basis, set_aside, residuals, noise, shape }
    }
}

/// The noise of each channel in units of what was taken for it: what the residuals of pairs differ
/// by, corrected for what the components took along.
fn noise_factors(rows: &Rows, residuals: &Mat<f64>, taken: &[f64]) -> Vec<f64> {
    let factor = |channel: usize| {
        let pairs = rows.pairs.iter();
        let difference = |(one, other): &(usize, usize)| {
            residuals[(*one, channel)] - residuals[(*other, channel)]
        };
        let mut differences: Vec<f64> = pairs.map(difference).collect();
        let deviation = deviation_from_zero(&mut differences) / std::f64::consts::SQRT_2;
        // A channel whose neighbours agree to the last bit is coarsely packed.
        (deviation / f64::sqrt((1.0 - taken[channel]).max(0.05))).max(0.05)
    };
    (0..rows.channels.len()).into_par_iter().map(factor).collect()
}

/// Correlations between neighbours, of differences between pairs, so that what is left of the scene
/// counts little; clipped, so that outliers do.
fn shape(rows: &Rows, residuals: &Mat<f64>) -> NoiseShape {
    let width = rows.channels.len();
    let clipped = |(one, other): &(usize, usize)| -> Vec<f64> {
        let difference = |c| residuals[(*one, c)] - residuals[(*other, c)];
        let size = |c| f64::clamp(difference(c), -5.0, 5.0);
        (0..width).map(size).map(|one| if one.is_nan() { 0.0 } else { one }).collect()
    };
    let differences: Vec<Vec<f64>> = rows.pairs.iter().map(clipped).collect();
    NoiseShape::measured(|lag| {
        let (mut products, mut squares) = (0.0, 0.0);
        for first in 0..width.saturating_sub(lag) {
            if rows.adjacent[first..first + lag].iter().all(|adjacent| *adjacent) {
                for row in &differences {
                    products += row[first] * row[first + lag];
                    squares += 0.5 * (row[first].powi(2) + row[first + lag].powi(2));
                }
            }
        }
        (squares > 0.0).then(|| products / squares)
    })
}
