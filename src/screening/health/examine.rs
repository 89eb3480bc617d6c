//! The whole examination of a granule's spectra as a set.

use rayon::prelude::*;

use super::band_work::{BandWork, FileNoise};
use super::examined::Examined;
use super::finding::{Check, Finding, Limit, Subject};
use super::grid::ScanGrid;
use super::limits::HealthLimits;
use super::readings::{BandReadings, Spectra};
use super::repeats::repeated_spectra;
use super::sample::Sample;
use crate::granule::{Granule, GranuleError};
use crate::screening::unusual::{Rows, SavedBases};
use crate::system::Cancel;

/// Examines all bands. What is not in memory is read, more than once. Components are those `saved` of
/// other granules, if they are given, or else the granule's own. Footprints that are `left_out` are not
/// looked at; none where it is empty. `cancel` is told of every spectrum of a band that is looked at.
///
/// # Errors
/// The file can't be read, or `cancel` was asked for.
pub fn examine(
    granule: &Granule,
    limits: &HealthLimits,
    saved: Option<&SavedBases>,
    left_out: &[bool],
    cancel: &Cancel,
) -> Result<Examined, GranuleError> {
    let spectra = Spectra::new(granule, left_out, cancel);
    let examined = granule.at_work(|| examine_all(granule, &spectra, limits, saved));
    spectra.fault()?;
    Ok(examined)
}

/// The first spectra of each band, about `most`, that components can be found in, with the first guess
/// of their noise, by the name of the band. Footprints that are `left_out` are not among them; none is
/// where it is empty.
///
/// # Errors
/// The file can't be read, or `cancel` was asked for.
pub fn training_rows(
    granule: &Granule,
    limits: &HealthLimits,
    left_out: &[bool],
    most: usize,
    cancel: &Cancel,
) -> Result<Vec<(String, Rows, Vec<f64>)>, GranuleError> {
    let spectra = Spectra::new(granule, left_out, cancel);
    let grid = ScanGrid::of(granule.footprints());
    let rows = granule.at_work(|| {
        let take = |readings: BandReadings<'_>| {
            let sample = Sample::take(&readings, &grid, limits, most);
            (readings.band.name.clone(), sample.rows, sample.spatial_noise)
        };
        BandReadings::of(&spectra).into_iter().map(take).collect()
    });
    spectra.fault()?;
    Ok(rows)
}

fn examine_all(
    granule: &Granule,
    spectra: &Spectra<'_>,
    limits: &HealthLimits,
    saved: Option<&SavedBases>,
) -> Examined {
    let grid = ScanGrid::of(granule.footprints());
    let readings = BandReadings::of(spectra);
    let bands: Vec<BandWork<'_>> = readings
        .par_iter()
        .map(|readings| {
            let told = FileNoise::of(granule, readings, &grid);
            BandWork::of(granule, *readings, told, saved, &grid, limits)
        })
        .collect();
    let mut findings: Vec<Finding> =
        bands.iter().flat_map(|band| band.findings.iter().cloned()).collect();
    findings.extend(missing(&bands, spectra, &grid, limits));
    findings.extend(repeats(&readings, &bands, &grid, limits));
    findings.extend(bands.iter().flat_map(|band| band.of_spectra(limits)));
    findings.sort_by_key(|finding| finding.check);
    let mut examined = Examined {
        unusual: bands.par_iter().flat_map_iter(BandWork::unusual).collect(),
        findings,
        bands: bands.into_iter().map(|band| band.health).collect(),
        band_names: granule.bands().iter().map(|band| band.name.clone()).collect(),
        bad: vec![false; grid.count()],
        is_unusual: vec![false; grid.count()],
        grid,
    };
    for finding in &examined.findings {
        let bad = finding.check.flag() == Some(Check::BAD_SPECTRUM);
        for footprint in examined.footprints_of(finding).into_iter().filter(|_| bad) {
            examined.bad[footprint] = true;
        }
    }
    for unusual in &examined.unusual {
        examined.is_unusual[unusual.footprint] = true;
    }
    examined
}

/// Bands and stretches that are missing. A footprint that lacks all bands lacks its spectrum.
fn missing(
    bands: &[BandWork<'_>],
    spectra: &Spectra<'_>,
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Vec<Finding> {
    let (share, stretch) =
        (Limit::of(limits, "missing_share"), Limit::of(limits, "missing_stretch"));
    let missing_share = |band: &BandWork<'_>, footprint: usize| {
        band.spectra[footprint].missing as f64 / band.expected.max(1) as f64
    };
    let mut findings = Vec::new();
    for footprint in (0..grid.count()).filter(|at| !spectra.leaves_out(*at)) {
        let subject = Subject::Footprint(footprint);
        let shares: Vec<f64> = bands.iter().map(|band| missing_share(band, footprint)).collect();
        if !shares.is_empty() && shares.iter().all(|one| *one > share.value) {
            let least = shares.iter().copied().fold(f64::INFINITY, f64::min);
            findings.push(share.finding(Check::MissingChannels, subject, None, least));
            continue;
        }
        for (band, missing) in bands.iter().zip(shares) {
            let (number, length) =
                (Some(band.readings.number), band.spectra[footprint].stretch as f64);
            if missing > share.value {
                findings.push(share.finding(Check::MissingChannels, subject, number, missing));
            } else if length >= stretch.value {
                findings.push(stretch.finding(Check::MissingStretch, subject, number, length));
            }
        }
    }
    findings
}

fn repeats(
    readings: &[BandReadings<'_>],
    bands: &[BandWork<'_>],
    grid: &ScanGrid,
    limits: &HealthLimits,
) -> Vec<Finding> {
    let dead = |number: usize, detector: usize| {
        bands
            .iter()
            .any(|band| band.readings.number == number && band.dead_detectors.contains(&detector))
    };
    let keys = |footprint: usize| {
        let detector = grid.detector(footprint);
        let own = bands.iter().filter(|band| !dead(band.readings.number, detector));
        own.fold(0, |keys: u64, band| keys.rotate_left(7) ^ band.spectra[footprint].key)
    };
    repeated_spectra(readings, keys, dead, grid, limits)
}
