//! Residuals of many spectra at once, in f32: a search, whose finds are worked out again in f64.

use faer::linalg::matmul::matmul;
use faer::{Accum, Mat, MatMut, MatRef, Par};

use super::basis::Basis;

/// A basis ready for many spectra.
#[derive(Debug, Clone)]
pub struct ManyResiduals<'b> {
    basis: &'b Basis,
    /// Components x channels.
    vectors: Vec<f32>,
    /// One over the noise.
    weights: Vec<f64>,
    /// Stretches of channels that follow each other in the basis and in the band: place in the basis,
    /// place in the band, length.
    stretches: Vec<(usize, usize, usize)>,
}

impl<'b> ManyResiduals<'b> {
    /// For a basis.
    pub fn new(basis: &'b Basis) -> Self {
        Self {
            basis,
            vectors: basis.vectors.iter().map(|value| *value as f32).collect(),
            weights: basis.noise.iter().map(|noise| 1.0 / noise).collect(),
            stretches: stretches(&basis.channels),
        }
    }

    /// A spectrum (radiances of all channels of the band) in noise units; NaN where missing.
    pub fn normalise(&self, radiances: &[f64], out: &mut [f32]) {
        for (place, channel, length) in &self.stretches {
            let own = *place..place + length;
            let radiances = &radiances[*channel..channel + length];
            let weights = self.basis.mean[own.clone()].iter().zip(&self.weights[own.clone()]);
            for (out, (value, (mean, weight))) in
                out[own].iter_mut().zip(radiances.iter().zip(weights))
            {
                *out = ((value - mean) * weight) as f32;
            }
        }
    }

    /// Takes off what the components explain of normalised spectra, one behind the other. Each must
    /// be complete. Off by at most a thousandth of the noise for signals of some hundred times it.
    pub fn unexplained(&self, spectra: &mut [f32]) {
        let channels = self.basis.channels.len();
        let (count, components) = (spectra.len() / channels.max(1), self.basis.components());
        let vectors = MatRef::from_row_major_slice(&self.vectors, components, channels);
        let mut spectra = MatMut::from_row_major_slice_mut(spectra, count, channels);
        let mut along = Mat::<f32>::zeros(count, components);
        let transposed = vectors.transpose();
        matmul(along.as_mut(), Accum::Replace, spectra.as_ref(), transposed, 1.0, Par::Seq);
        matmul(spectra.as_mut(), Accum::Add, along.as_ref(), vectors, -1.0, Par::Seq);
    }
}

/// Stretches of channels that follow each other upwards: place, channel, length.
fn stretches(channels: &[usize]) -> Vec<(usize, usize, usize)> {
    let mut stretches: Vec<(usize, usize, usize)> = Vec::new();
    for (place, channel) in channels.iter().enumerate() {
        match stretches.last_mut() {
            Some((_, first, length)) if *first + *length == *channel => *length += 1,
            _ => stretches.push((place, *channel, 1)),
        }
    }
    stretches
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::screening::unusual::basis::tests::small;

    #[test]
    fn many_at_once_are_what_each_is_alone() {
        let basis = small();
        let many = ManyResiduals::new(&basis);
        let spectra = [[8.0, 16.0, 8.0, 17.0], [10.0, 8.5, 10.0, 12.0], [900.0, 20.0, -4.0, 0.5]];
        let mut block = vec![0.0; 12];
        for (spectrum, out) in spectra.iter().zip(block.chunks_mut(4)) {
            many.normalise(spectrum, out);
        }
        many.unexplained(&mut block);
        for (spectrum, found) in spectra.iter().zip(block.chunks(4)) {
            for (one, other) in basis.residual(spectrum).iter().zip(found) {
                // Roundings of f32 at 445 noise units: 445 * 6e-8 times a few.
                assert!((one - f64::from(*other)).abs() < 2e-4, "{one} {other}");
            }
        }
    }
}
