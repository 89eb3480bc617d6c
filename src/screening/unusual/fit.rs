//! A basis from spectra that hold a few unusual ones and a few faulty channels.

use faer::{Mat, MatMut, MatRef};
use rayon::prelude::*;

use super::basis::{Basis, TrainingScores, score};
use super::components::{Components, POWER_STEPS, leading_components, product, take_product};
use super::noise_of_rows::{noise_factors, shape};
use crate::spectral::{NoiseShape, RingingWindows, centre_and_deviation};

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
    // Where the basis has its channels in the rows.
    let in_rows: Vec<usize> = basis
        .channels
        .iter()
        .filter_map(|channel| rows.channels.iter().position(|one| one == channel))
        .collect();
    let channels = basis.channels.len();
    let mut normal = vec![0.0; count * channels];
    normal.par_chunks_exact_mut(channels).zip(rows.radiances.par_chunks_exact(width)).for_each(
        |(out, row)| {
            for (at, (out, place)) in out.iter_mut().zip(&in_rows).enumerate() {
                *out = (row[*place] - basis.mean[at]) / basis.noise[at];
            }
        },
    );
    let vectors = MatRef::from_row_major_slice(&basis.vectors, basis.components(), channels);
    take_off(&mut normal, channels, vectors.transpose());
    let mut residuals = vec![f64::NAN; count * width];
    spread_out(&normal, &in_rows, &mut residuals, width);
    let leverages = basis.leverages();
    let taken: Vec<f64> =
        places.iter().map(|place| place.map_or(0.0, |place| leverages[place])).collect();
    let factors = noise_factors(rows, &residuals, &taken);
    let shape = shape(rows, &residuals);
    let noise = places.iter().zip(&factors).map(|(place, factor)| match place {
        Some(place) => basis.noise[*place] * factor,
        None => f64::NAN,
    });
    divide(&mut residuals, &factors);
    Some(Fitted {
        noise: noise.collect(),
        set_aside: places.iter().map(Option::is_none).collect(),
        residuals,
        shape,
        basis,
    })
}

/// Takes off what components (channels x components) explain of normalised spectra, one behind the
/// other, and gives what lies along them.
fn take_off(spectra: &mut [f64], channels: usize, components: MatRef<'_, f64>) -> Mat<f64> {
    let count = spectra.len() / channels.max(1);
    let along = product(MatRef::from_row_major_slice(spectra, count, channels), components);
    let mut rest = MatMut::from_row_major_slice_mut(spectra, count, channels);
    take_product(rest.as_mut(), along.as_ref(), components.transpose());
    along
}

/// Puts the values of some channels into their places among all.
fn spread_out(some: &[f64], places: &[usize], all: &mut [f64], width: usize) {
    let rows = all.par_chunks_exact_mut(width).zip(some.par_chunks_exact(places.len()));
    rows.for_each(|(all, some)| {
        places.iter().zip(some).for_each(|(place, value)| all[*place] = *value);
    });
}

/// Divides each channel of rows by its factor.
fn divide(rows: &mut [f64], factors: &[f64]) {
    rows.par_chunks_exact_mut(factors.len())
        .for_each(|row| row.iter_mut().zip(factors).for_each(|(value, factor)| *value /= factor));
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
    residuals: Vec<f64>,
    leverages: Vec<f64>,
    scores: Vec<f64>,
}

impl State<'_> {
    fn stage(&self, wanted: usize, power_steps: usize) -> Option<Stage> {
        let width = self.rows.channels.len();
        let mean = self.mean();
        let normal = self.normalised(&mean);
        let mut used = vec![0.0; self.rows.count() * self.used.len()];
        used.par_chunks_exact_mut(self.used.len()).zip(normal.par_chunks_exact(width)).for_each(
            |(out, row)| {
                out.iter_mut().zip(&self.used).for_each(|(out, channel)| *out = row[*channel]);
            },
        );
        let fitted: Vec<f64> = self
            .kept
            .iter()
            .flat_map(|row| &used[row * self.used.len()..][..self.used.len()])
            .copied()
            .collect();
        let fitted = MatRef::from_row_major_slice(&fitted, self.kept.len(), self.used.len());
        let wanted = wanted.min(self.kept.len() / 4).min(self.used.len() / 4);
        let found = leading_components(fitted, wanted, power_steps)?;
        // Above the edge that noise alone does not pass [Marchenko & Pastur 1967], for apodised noise
        // at most so many times higher as its largest power.
        let ratio = self.used.len() as f64 / self.kept.len() as f64;
        let edge = self.power * (1.0 + ratio.sqrt()).powi(2);
        let components = found.variances.iter().take_while(|variance| **variance > edge).count();
        let kept = self.without_ringing(&found, components.max(1));
        let components = kept.len();
        let vectors =
            Mat::from_fn(self.used.len(), components, |row, k| found.vectors[(row, kept[k])]);
        let along = take_off(&mut used, self.used.len(), vectors.as_ref());
        let scores = used.chunks_exact(self.used.len()).map(score).collect();
        let mut residuals = vec![0.0; normal.len()];
        spread_out(&used, &self.used, &mut residuals, width);
        self.regress_the_others(&along, &normal, &mut residuals);
        let leverages = (0..self.used.len())
            .map(|place| (0..components).map(|k| vectors[(place, k)].powi(2)).sum())
            .collect();
        let variances = kept.iter().map(|k| found.variances[*k]).collect();
        Some(Stage { mean, vectors, variances, residuals, leverages, scores })
    }

    /// Mean spectrum of the kept rows.
    fn mean(&self) -> Vec<f64> {
        let width = self.rows.channels.len();
        let mut mean = vec![0.0; width];
        for row in &self.kept {
            let row = &self.rows.radiances[row * width..][..width];
            mean.iter_mut().zip(row).for_each(|(sum, value)| *sum += value);
        }
        mean.iter_mut().for_each(|sum| *sum /= self.kept.len() as f64);
        mean
    }

    /// All rows in noise units.
    fn normalised(&self, mean: &[f64]) -> Vec<f64> {
        let width = self.rows.channels.len();
        let weights: Vec<f64> = self.noise.iter().map(|noise| 1.0 / noise).collect();
        let mut normal = vec![0.0; self.rows.radiances.len()];
        let rows = normal.par_chunks_exact_mut(width);
        rows.zip(self.rows.radiances.par_chunks_exact(width)).for_each(|(out, row)| {
            let values = row.iter().zip(mean.iter().zip(&weights));
            out.iter_mut().zip(values).for_each(|(out, (value, (mean, weight)))| {
                *out = (value - mean) * weight;
            });
        });
        normal
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
    fn regress_the_others(&self, along: &Mat<f64>, normal: &[f64], residuals: &mut [f64]) {
        let width = self.rows.channels.len();
        for channel in (0..self.rows.channels.len()).filter(|one| !self.used.contains(one)) {
            let weights: Vec<f64> = (0..along.ncols())
                .map(|k| {
                    let products = self
                        .kept
                        .iter()
                        .map(|row| along[(*row, k)] * normal[row * width + channel]);
                    let squares = self.kept.iter().map(|row| along[(*row, k)].powi(2));
                    products.sum::<f64>() / squares.sum::<f64>()
                })
                .collect();
            for row in 0..self.rows.count() {
                let explained: f64 =
                    weights.iter().enumerate().map(|(k, weight)| weight * along[(row, k)]).sum();
                residuals[row * width + channel] = normal[row * width + channel] - explained;
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
        let mut residuals = stage.residuals;
        divide(&mut residuals, &factors);
        let noise = self.noise.iter().zip(&factors).map(|(noise, factor)| noise * factor).collect();
        Fitted { basis, set_aside, residuals, noise, shape }
    }
}
