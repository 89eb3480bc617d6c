//! From the open granule to a picture: the first one, and the next channel's.

use std::cell::Cell;
use std::hint::black_box;

use radsieve::granule::Opening;
use radsieve::netcdf_files::ReaderProgram;
use radsieve::review::Review;
use radsieve::spectral::fast::SpectrumInverse;
use radsieve::system::Cancel;

use crate::full_size::{FullSize, PROGRAM};
use crate::stopwatch;
use crate::table::Section;

/// The sections' tables.
pub fn sections(full: &FullSize) -> Result<Vec<Section>, Box<dyn std::error::Error>> {
    Ok(vec![first_map(full)?, next_map(full)?])
}

fn open(full: &FullSize) -> Result<Review, radsieve::granule::GranuleError> {
    Review::open(&Opening::new(ReaderProgram::new(PROGRAM)), &full.path)
}

/// What a first picture waits for, step by step.
fn first_map(full: &FullSize) -> Result<Section, Box<dyn std::error::Error>> {
    open(full)?;
    let cancel = Cancel::new();
    let fill = |review: &Review, bands: &[usize]| {
        review.granule().fill_bands(bands.iter().copied(), &cancel, &mut |_| {})
    };
    let map = |all: bool| {
        let review = open(full).ok()?;
        let bands: Vec<usize> = match all {
            true => (0..review.granule().bands().len()).collect(),
            false => review.bands_of("bt(900)"),
        };
        fill(&review, &bands).ok()?;
        review.layer("bt(900)", &cancel).ok()
    };
    let spectrum = || open(full).ok()?.read_spectrum(1234.min(full.footprints() - 1)).ok();
    let rows = stopwatch::shortest(
        full.rounds,
        vec![
            ("open, read all, evaluate bt(900)", Box::new(|| drop(black_box(map(true))))),
            ("open, read its band, evaluate bt(900)", Box::new(|| drop(black_box(map(false))))),
            ("open, read one spectrum of all bands", Box::new(|| drop(black_box(spectrum())))),
            ("open", Box::new(|| drop(black_box(open(full).ok())))),
        ],
    );
    let notes = vec!["the reader process included".to_owned()];
    Ok(Section { title: "What a first map waits for: shape (a)".to_owned(), rows, notes })
}

/// The next channel's map, with all values in memory.
fn next_map(full: &FullSize) -> Result<Section, Box<dyn std::error::Error>> {
    let review = open(full)?;
    review.granule().fill(&Cancel::new(), &mut |_| {})?;
    let wavenumbers = review.granule().bands()[0].axis.wavenumbers().to_vec();
    let inverses: Vec<SpectrumInverse> =
        wavenumbers.iter().map(|one| SpectrumInverse::new(&[*one])).collect();
    let channel = Cell::new(0);
    let next = || {
        channel.set((channel.get() + 1) % wavenumbers.len());
        channel.get()
    };
    let footprints = full.footprints();
    let (mut gathered, mut out) = (vec![0.0; footprints], vec![0.0_f32; footprints]);
    let mut radiances = vec![0.0_f32; footprints];
    let cancel = Cancel::new();
    let layer = || {
        let text = format!("bt({:.4})", wavenumbers[next()]);
        drop(black_box(review.layer(&text, &cancel)));
    };
    let mut by_vectors = || {
        let channel = next();
        review.cube().channel(0, channel, &mut gathered);
        for (to, from) in radiances.iter_mut().zip(&gathered) {
            *to = *from as f32;
        }
        inverses[channel].brightness_temperatures(&radiances, black_box(&mut out));
    };
    let mut again = vec![0.0; footprints];
    let mut gather = || {
        review.cube().channel(0, next(), black_box(&mut again));
    };
    let rows = stopwatch::shortest(
        20 * full.rounds,
        vec![
            ("the layer, f64, as the Field takes it", Box::new(layer)),
            ("gathered, then f32 by vectors", Box::new(&mut by_vectors)),
            ("gathered alone", Box::new(&mut gather)),
        ],
    );
    Ok(Section {
        title: format!("The next channel's map of {footprints} footprints, all values in memory"),
        rows,
        notes: Vec::new(),
    })
}
