//! Granules with files that lend to them.

use std::path::PathBuf;

use super::*;
use crate::granule::tests::{File, UNIT, axis, file, has_problem, plain, put, radiance};
use crate::granule::{Granule, GranuleError, Opening};
use crate::netcdf_files::{NetcdfWriter, ReaderProgram, Samples, ValueKind, VariableDraft};
use crate::spectral::planck;

fn field(path: &str, dimensions: &[&str], name: &str, units: &str) -> VariableDraft {
    VariableDraft::new(path, ValueKind::F64, dimensions)
        .attribute("standard_name", name)
        .attribute("units", units)
}

const SINCE: &str = "seconds since 2020-01-01";

/// The plain granule of 2 lines and 3 positions, a degree of latitude apart on the equator's meridian
/// 180, a minute after another.
fn located(writer: &mut NetcdfWriter) {
    plain(writer);
    let grid = ["line", "position"];
    let numbers = || (0..6).map(f64::from);
    put(writer, field("lat", &grid, "latitude", "degrees_north"), numbers().collect::<Vec<_>>());
    put(writer, field("lon", &grid, "longitude", "degrees_east"), vec![180.0; 6]);
    let times: Vec<f64> = numbers().map(|number| 60.0 * number).collect();
    put(writer, field("time", &grid, "time", SINCE), times);
}

/// A list of `count` places that lend a surface temperature of 290 K and more.
fn listed(writer: &mut NetcdfWriter, places: &[(f64, f64)], times: Option<&[f64]>) {
    writer.dimension("obs", places.len()).unwrap();
    let (latitudes, longitudes): (Vec<f64>, Vec<f64>) = places.iter().copied().unzip();
    put(writer, field("y", &["obs"], "latitude", "degrees_north"), latitudes);
    put(writer, field("x", &["obs"], "longitude", "degrees_east"), longitudes);
    if let Some(times) = times {
        put(writer, field("t", &["obs"], "time", SINCE), times.to_vec());
    }
    let warmth: Vec<f64> = (0..places.len()).map(|place| 290.0 + place as f64).collect();
    put(writer, field("sst", &["obs"], "sea_surface_temperature", "K"), warmth);
}

/// A granule and the files that live as long as it.
struct Joined {
    granule: Granule,
    _files: Vec<File>,
}

fn open(granule: File, lenders: Vec<File>, within: &str) -> Result<Joined, GranuleError> {
    let with: Vec<PathBuf> = lenders.iter().map(|file| file.path.clone()).collect();
    let opening = Opening {
        with: with.into_iter().map(LenderPattern::new).collect(),
        within: within.parse().unwrap(),
        ..Opening::new(ReaderProgram::in_process())
    };
    let opened = opening.open(&granule.path)?;
    let mut files = lenders;
    files.push(granule);
    Ok(Joined { granule: opened, _files: files })
}

fn joined(lend: impl FnOnce(&mut NetcdfWriter), within: &str) -> Granule {
    let joined = open(file(located), vec![file(lend)], within).unwrap();
    // What is asked for below has been read.
    joined.granule
}

fn temperatures(granule: &Granule) -> Vec<f64> {
    granule.geolocation().surface_temperature.clone().unwrap()
}

/// Equal, missing values included.
fn same(one: &[f64], other: &[f64]) -> bool {
    one.len() == other.len()
        && one.iter().zip(other).all(|(a, b)| a == b || (a.is_nan() && b.is_nan()))
}

const NONE: f64 = f64::NAN;

#[test]
fn a_file_of_the_same_dimensions_lends_what_the_granule_lacks() {
    let lend = |writer: &mut NetcdfWriter| {
        writer.dimension("position", 3).unwrap();
        writer.dimension("line", 2).unwrap();
        let turned = ["position", "line"];
        let celsius = vec![0.0, 3.0, 1.0, 4.0, 2.0, 5.0];
        put(writer, field("skt", &turned, "surface_temperature", "degC"), celsius);
        put(writer, field("odd", &["line"], "", "1"), vec![7.0, 8.0]);
        put(writer, field("lat", &turned, "latitude", "degrees_north"), vec![NONE; 6]);
    };
    let lender = file(lend);
    let joined = open(file(located), vec![lender], "10km").unwrap();
    let granule = &joined.granule;
    let kelvin: Vec<f64> = (0..6).map(|number| 273.15 + f64::from(number)).collect();
    assert_eq!(temperatures(granule), kelvin);
    assert_eq!(granule.geolocation().latitude.as_ref().unwrap()[5], 5.0, "its own comes first");
    assert_eq!(granule.read_variable("odd").unwrap(), [7.0, 7.0, 7.0, 8.0, 8.0, 8.0]);
    let lender = &granule.lenders()[0];
    assert_eq!((lender.how(), lender.matched()), (&Join::Dimensions, 6));
    assert_eq!(granule.lent_by(0), ["surface_temperature"]);
    let words = granule.read_with().unwrap().remove(0);
    assert!(words.contains("joined by dimensions, 6 of 6 footprints"), "{words}");
    assert!(words.contains(&lender.hash().unwrap().hash), "{words}");
}

#[test]
fn the_nearest_place_within_the_tolerance_is_taken() {
    // A degree of a meridian is 111.195 km on the sphere; the first place lies 0.05 degrees (5.6 km)
    // from footprint 0, the second 0.1 degrees (11.1 km) from footprint 1, the third beyond the date
    // line, the fourth and fifth as far from footprint 4.
    let places = [(-0.05, 180.0), (1.1, 180.0), (2.0, -179.95), (4.06, 180.0), (3.94, 180.0)];
    let granule = joined(|writer| listed(writer, &places, None), "10km");
    assert!(same(&temperatures(&granule), &[290.0, NONE, 292.0, NONE, 293.0, NONE]));
    assert!(has_problem(&granule, "has no times"));
    assert_eq!(granule.lenders()[0].matched(), 3);
    let granule = joined(|writer| listed(writer, &places, None), "12km");
    assert_eq!(temperatures(&granule)[1], 291.0);
}

#[test]
fn times_must_be_near_as_well() {
    // Footprint 1 is seen at 60 s: the place right there was seen too late, one farther off in time.
    let places = [(1.0, 180.0), (1.05, 180.0), (2.0, 180.0)];
    let times = [200.0, 50.0, NONE];
    let granule = joined(|writer| listed(writer, &places, Some(&times)), "10km,100s");
    assert!(same(&temperatures(&granule), &[NONE, 291.0, NONE, NONE, NONE, NONE]));
    let label = granule.lenders()[0].how().label();
    assert_eq!(label, "by the nearest place within 10 km, 100 s");
}

#[test]
fn a_regular_grid_with_steps_in_time_lends() {
    let lend = |writer: &mut NetcdfWriter| {
        for (name, length) in [("time", 2), ("latitude", 3), ("longitude", 2)] {
            writer.dimension(name, length).unwrap();
        }
        put(writer, field("time", &["time"], "time", SINCE), vec![0.0, 240.0]);
        let north = "degrees_north";
        put(writer, field("latitude", &["latitude"], "latitude", north), vec![0.0, 2.0, 4.0]);
        let east = "degrees_east";
        put(writer, field("longitude", &["longitude"], "longitude", east), vec![0.0, -180.0]);
        let grid = ["time", "latitude", "longitude"];
        let values: Vec<f64> = (0..12).map(|number| 280.0 + f64::from(number)).collect();
        put(writer, field("skt", &grid, "surface_temperature", "K"), values);
        let values: Vec<f64> = (0..6).map(|number| 0.1 * f64::from(number)).collect();
        put(writer, field("ice", &grid[1..], "sea_ice_area_fraction", "1"), values);
    };
    let joined = open(file(located), vec![file(lend)], "50km,3min").unwrap();
    let granule = &joined.granule;
    // Footprints 0, 2, 4 lie on the grid, seen at 0, 120 and 240 s; of two steps as near, the first.
    assert!(same(&temperatures(granule), &[281.0, NONE, 283.0, NONE, 291.0, NONE]));
    let ice = granule.geolocation().sea_ice.clone().unwrap();
    assert!(same(&ice, &[0.1, NONE, 0.1 * 3.0, NONE, 0.5, NONE]), "{ice:?}");
    assert!(same(&granule.read_variable("skt").unwrap(), &temperatures(granule)));
}

#[test]
fn a_file_of_the_same_shape_from_elsewhere_is_not_laid_over_it() {
    let lend = |writer: &mut NetcdfWriter| {
        writer.dimension("line", 2).unwrap();
        writer.dimension("position", 3).unwrap();
        let grid = ["line", "position"];
        let south: Vec<f64> = (0..6).map(|number| 5.0 - 3.0 * f64::from(number)).collect();
        put(writer, field("lat", &grid, "latitude", "degrees_north"), south);
        put(writer, field("lon", &grid, "longitude", "degrees_east"), vec![180.0; 6]);
        let values: Vec<f64> = (0..6).map(|number| 290.0 + f64::from(number)).collect();
        put(writer, field("skt", &grid, "surface_temperature", "K"), values);
    };
    let granule = joined(lend, "10km");
    assert!(has_problem(&granule, "its places are 778 km away"));
    assert!(same(&temperatures(&granule), &[NONE, NONE, 291.0, NONE, NONE, 290.0]));
}

#[test]
fn calculated_spectra_are_handed_on_like_the_measured_ones() {
    let lend = |writer: &mut NetcdfWriter| {
        listed(writer, &[(1.0, 180.0), (4.0, 180.0)], None);
        writer.dimension("channel", 3).unwrap();
        put(writer, axis("wn", "channel", "m-1"), vec![90_000.0, 90_100.0, 90_200.0]);
        let clear = VariableDraft::new("bt_calculated", ValueKind::F64, &["channel", "obs"]);
        let kelvin = vec![280.0, 290.0, 281.0, 291.0, 282.0, 292.0];
        put(writer, clear.attribute("units", "K"), kelvin);
    };
    let joined = open(file(located), vec![file(lend)], "10km").unwrap();
    let granule = &joined.granule;
    let found = granule.calculated_clear(0, 1..5).unwrap().unwrap();
    let body = |kelvin: f64| {
        [(900.0, 0.0), (901.0, 1.0), (902.0, 2.0)].map(|(nu, more)| planck(nu, kelvin + more))
    };
    let expected = [&body(280.0)[..], &[NONE; 6], &body(290.0)[..]].concat();
    assert!(same(&found, &expected), "{found:?}");
    let whole = granule.calculated_clear(0, 0..6).unwrap().unwrap();
    let column: Vec<f64> = whole.iter().skip(1).step_by(3).copied().collect();
    let warm = planck(901.0, 281.0);
    assert!(same(&column, &[NONE, warm, NONE, NONE, planck(901.0, 291.0), NONE]));
    assert_eq!(granule.lent_by(0), ["surface_temperature", "calculated spectra of radiance"]);
}

#[test]
fn calculated_spectra_in_the_granule_itself_are_found_and_truth_is_not() {
    let write = |truth: bool| {
        move |writer: &mut NetcdfWriter| {
            located(writer);
            let path = if truth { "truth/rad_clear_sky" } else { "rad_clear_sky" };
            let values: Vec<f32> = (0..18_u8).map(f32::from).collect();
            put(writer, radiance(path, &["line", "position", "nu"], UNIT), values);
        }
    };
    let known = open(file(write(false)), Vec::new(), "10km").unwrap();
    assert_eq!(known.granule.calculated(0).unwrap().variable, "rad_clear_sky");
    assert_eq!(known.granule.calculated_clear(0, 5..6).unwrap().unwrap(), [15.0, 16.0, 17.0]);
    let hidden = open(file(write(true)), Vec::new(), "10km").unwrap();
    assert_eq!(hidden.granule.calculated(0), None);
    assert_eq!(hidden.granule.calculated_clear(0, 0..1).unwrap(), None);
}

#[test]
fn spectra_on_other_channels_are_not_taken() {
    let lend = |writer: &mut NetcdfWriter| {
        writer.dimension("line", 2).unwrap();
        writer.dimension("position", 3).unwrap();
        writer.dimension("nu", 3).unwrap();
        put(writer, axis("nu", "nu", "cm-1"), vec![900.0, 901.0, 902.1]);
        let values: Vec<f32> = (0..18_u8).map(f32::from).collect();
        put(writer, radiance("calculated", &["line", "position", "nu"], UNIT), values);
    };
    let joined = open(file(located), vec![file(lend)], "10km").unwrap();
    assert_eq!(joined.granule.calculated(0), None);
}

#[test]
fn a_file_that_cannot_be_joined_says_what_it_lacks() {
    let lend = |writer: &mut NetcdfWriter| {
        writer.dimension("obs", 4).unwrap();
        put(writer, field("sst", &["obs"], "sea_surface_temperature", "K"), vec![290.0; 4]);
    };
    let error = open(file(located), vec![file(lend)], "10km").map(|_| ()).unwrap_err().to_string();
    assert!(error.contains("neither the granule's dimensions (line 2, position 3)"), "{error}");
    let error = open(file(plain), vec![file(lend)], "10km").map(|_| ()).unwrap_err().to_string();
    assert!(error.contains("no latitude and longitude"), "{error}");
}

#[test]
fn a_file_without_a_place_for_any_footprint_lends_nothing() {
    let granule = joined(|writer| listed(writer, &[(60.0, 0.0)], None), "10km");
    assert_eq!(granule.geolocation().surface_temperature, None);
    assert_eq!(granule.lent_by(0), Vec::<String>::new());
    assert!(has_problem(&granule, "no footprint has a place in it"));
}

#[test]
fn a_granule_lends_nothing_to_itself() {
    let granule = file(located);
    let opening = Opening {
        with: vec![LenderPattern::new(&granule.path)],
        ..Opening::new(ReaderProgram::in_process())
    };
    let opened = opening.open(&granule.path).unwrap();
    assert!(opened.lenders().is_empty() && opened.calculated(0).is_none());
    assert!(has_problem(&opened, "the granule itself"));
}

#[test]
fn a_missing_file_for_a_granule_is_a_problem_and_no_failure() {
    let granule = file(located);
    let opening = Opening {
        with: vec![LenderPattern::new(granule.path.with_file_name("{stem}.aux.nc"))],
        ..Opening::new(ReaderProgram::in_process())
    };
    let opened = opening.open(&granule.path).unwrap();
    assert!(has_problem(&opened, "there is no file that lends"));
    assert!(opened.lenders().is_empty());
}

#[test]
fn shares_and_temperatures_that_nothing_can_have_are_missing() {
    let lend = |writer: &mut NetcdfWriter| {
        listed(writer, &[(0.0, 180.0), (1.0, 180.0)], None);
        let values: Samples = vec![-9999.0, 290.0].into();
        put(writer, field("skt", &["obs"], "surface_temperature", "K"), values);
    };
    let granule = joined(lend, "10km");
    assert!(same(&temperatures(&granule)[..2], &[NONE, 290.0]), "skin before bulk");
}
