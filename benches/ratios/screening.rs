//! Screening a granule, as a whole and part by part, against reading it.

use std::hint::black_box;
use std::path::PathBuf;

use radsieve::granule::Granule;
use radsieve::netcdf_files::{ReadLimits, ReaderProgram};
use radsieve::review::Review;
use radsieve::screening::builtin;
use radsieve::screening::health::{HealthLimits, examine, training_rows};
use radsieve::screening::unusual::{SavedBases, fit_together, instrument_shape};
use radsieve::system::Cancel;

use crate::full_size::{FullSize, PROGRAM};
use crate::reading::{library, processor_milliseconds};
use crate::stopwatch;
use crate::table::Section;

/// The parts of `radsieve screen` on a full-size granule.
pub fn section(full: &FullSize) -> Result<Section, Box<dyn std::error::Error>> {
    let program = ReaderProgram::new(PathBuf::from(PROGRAM));
    let (rulebook, limits) = (builtin()?, HealthLimits::default());
    let open = || Granule::open(&program, &full.path, &ReadLimits::default());
    let read = || open().map(|granule| granule.fill(&Cancel::new(), &mut |_| {}));
    let granule = open()?;
    granule.fill(&Cancel::new(), &mut |_| {})?;
    let bases = saved(&granule, &limits)?;
    let review = Review::of(granule);
    let examined =
        |saved: Option<&SavedBases>| examine(review.granule(), &limits, saved, &[], &Cancel::new());
    let whole = |bases: Option<SavedBases>| {
        let screened = open()
            .map(|granule| Review::of(granule).knowing(bases).screen(&rulebook, &Cancel::new()));
        drop(black_box(screened));
    };
    let processor = [
        processor_milliseconds(full.rounds, || drop(black_box(library(&full.path)))),
        processor_milliseconds(full.rounds, || drop(black_box(read()))),
        processor_milliseconds(full.rounds, || whole(Some(bases.clone()))),
        processor_milliseconds(full.rounds, || whole(None)),
    ];
    let rows = stopwatch::shortest(
        full.rounds,
        vec![
            (
                "netCDF library in process, all values",
                Box::new(|| drop(black_box(library(&full.path)))),
            ),
            ("open and read all values", Box::new(|| drop(black_box(read())))),
            ("open, read, screen: components known", Box::new(|| whole(Some(bases.clone())))),
            ("open, read, screen: components own", Box::new(|| whole(None))),
            (
                "tests of the built-in rulebook",
                Box::new(|| drop(black_box(review.screen_so_far(&rulebook)))),
            ),
            (
                "cloud tops by CO2 slicing",
                Box::new(|| drop(black_box(review.layer("co2_cloud_pressure", &Cancel::new())))),
            ),
            (
                "instrument, unusual: components known",
                Box::new(|| drop(black_box(examined(Some(&bases))))),
            ),
            ("instrument, unusual: components own", Box::new(|| drop(black_box(examined(None))))),
        ],
    );
    Ok(Section {
        title: format!("Screen a granule of {} footprints, part by part", full.footprints()),
        rows,
        notes: vec![
            "the rows behind the fourth work on values in memory".to_owned(),
            format!(
                "processor time of the first four rows: {:.0}, {:.0}, {:.0}, {:.0} ms",
                processor[0], processor[1], processor[2], processor[3]
            ),
        ],
    })
}

/// Components found in the granule itself, as if they came from others.
fn saved(
    granule: &Granule,
    limits: &HealthLimits,
) -> Result<SavedBases, Box<dyn std::error::Error>> {
    let rows = training_rows(granule, limits, &[], 1200, &Cancel::new())?;
    let bands = rows
        .into_iter()
        .filter_map(|(name, rows, noise)| Some((name, fit_together(&[(rows, noise)])?)));
    Ok(SavedBases {
        instrument: instrument_shape(granule),
        granules: Vec::new(),
        bands: bands.collect(),
        file: "measured".to_owned(),
    })
}
