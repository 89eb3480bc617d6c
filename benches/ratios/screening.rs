//! Screening a granule, part by part, against reading it.

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
    let rows = stopwatch::shortest(
        full.rounds,
        vec![
            ("open and read all values", Box::new(|| drop(black_box(read())))),
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
        notes: vec!["all but the first row work on values in memory".to_owned()],
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
