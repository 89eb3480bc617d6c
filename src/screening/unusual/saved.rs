//! Components that were found in other granules of an instrument.

use super::basis::Basis;
use super::fit::{Rows, fit};
use crate::granule::{Apodisation, Granule};
use crate::spectral::median;

/// The components of all bands of an instrument.
#[derive(Debug, Clone, PartialEq)]
pub struct SavedBases {
    /// What the spectra must look like for them: see [`instrument_shape`].
    pub instrument: String,
    /// The granules that they were found in, by file name.
    pub granules: Vec<String>,
    /// By the name of the band.
    pub bands: Vec<(String, Basis)>,
    /// The file that they are kept in; empty before they are.
    pub file: String,
}

impl SavedBases {
    /// Those of a band.
    pub fn of_band(&self, name: &str) -> Option<&Basis> {
        self.bands.iter().find(|(band, _)| band == name).map(|(_, basis)| basis)
    }
}

/// Names the bands of an instrument: how many channels each has, and the beginning of a hash of their
/// names, wavenumbers (to 1e-4 cm-1) and whether values are apodised by Hamming's function, as in `717+869+637_1a2b3c4d`.
pub fn instrument_shape(granule: &Granule) -> String {
    let bands = granule.bands();
    let counts: Vec<String> = bands.iter().map(|band| band.channels().to_string()).collect();
    let mut hash = blake3::Hasher::new();
    for band in bands {
        hash.update(band.name.as_bytes());
        // Apodised in the file or on request, the spectra are the same.
        let hamming =
            matches!(band.apodisation, Apodisation::Hamming | Apodisation::HammingApplied);
        hash.update(&[u8::from(hamming)]);
        for wavenumber in band.axis.wavenumbers() {
            hash.update(&((wavenumber * 1e4).round() as i64).to_le_bytes());
        }
    }
    format!("{}_{}", counts.join("+"), &hash.finalize().to_hex()[..8])
}

/// A basis from the rows of several granules, with the first guess of each one's noise; `None` where
/// they are too few.
pub fn fit_together(granules: &[(Rows, Vec<f64>)]) -> Option<Basis> {
    let (first, _) = granules.first()?;
    let shared = |channel: &usize| granules.iter().all(|(rows, _)| rows.channels.contains(channel));
    let kept: Vec<usize> =
        (0..first.channels.len()).filter(|at| shared(&first.channels[*at])).collect();
    let channels: Vec<usize> = kept.iter().map(|at| first.channels[*at]).collect();
    let next = |pair: &[usize]| pair[0] + 1 == pair[1] && first.adjacent[pair[0]];
    let mut together = Rows {
        wavenumbers: kept.iter().map(|at| first.wavenumbers[*at]).collect(),
        adjacent: kept.windows(2).map(next).chain(kept.last().map(|_| false)).collect(),
        radiances: Vec::new(),
        pairs: Vec::new(),
        channels,
    };
    let mut noises: Vec<Vec<f64>> = vec![Vec::new(); kept.len()];
    for (rows, noise) in granules {
        let places: Vec<usize> = together
            .channels
            .iter()
            .filter_map(|channel| rows.channels.iter().position(|one| one == channel))
            .collect();
        let begin = together.count();
        together.pairs.extend(rows.pairs.iter().map(|(one, other)| (begin + one, begin + other)));
        for row in rows.radiances.chunks_exact(rows.channels.len().max(1)) {
            together.radiances.extend(places.iter().map(|place| row[*place]));
        }
        noises.iter_mut().zip(&places).for_each(|(all, place)| all.push(noise[*place]));
    }
    let noise: Vec<f64> = noises.iter_mut().map(|all| median(all)).collect();
    Some(fit(&together, &noise)?.basis)
}
