//! Layers over real files, through the library: cut granules, granules that are still being read.

use std::collections::BTreeMap;
use std::path::Path;

use radsieve::granule::Granule;
use radsieve::layers::{Expression, GranuleNames, Kept, Layer, LayerUnit, Names, evaluate};
use radsieve::netcdf_files::{ReadLimits, ReaderProgram};
use radsieve::spectral::planck;
use radsieve::system::Cancel;

use crate::plain_granule::{PlainGranule, temperature};

fn opened(granule: &PlainGranule, test: impl FnOnce(&Granule)) {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("plain.nc");
    granule.write(&path);
    test(&open(&path));
}

fn open(path: &Path) -> Granule {
    let program = ReaderProgram::new(assert_cmd::cargo::cargo_bin("radsieve"));
    Granule::open(&program, path, &ReadLimits::default()).unwrap()
}

fn layer(text: &str, names: &GranuleNames<'_>) -> Layer {
    evaluate(&Expression::parse(text).unwrap(), names).unwrap_or_else(|error| panic!("{error}"))
}

fn same(one: &[f64], other: &[f64]) -> bool {
    one.len() == other.len()
        && one.iter().zip(other).all(|(a, b)| a == b || (a.is_nan() && b.is_nan()))
}

#[test]
fn what_is_not_read_yet_is_missing_and_said() {
    opened(&PlainGranule::new(), |granule| {
        let cube = granule.cube();
        let names = GranuleNames::new(granule, &cube);
        let before = layer("bt(900)", &names);
        assert!(before.values.iter().all(|value| value.is_nan()));
        assert_eq!(before.notes, ["the granule is still being read"]);
        granule.fill_bands([0], &Cancel::new(), &mut |_| {}).unwrap();
        let after = layer("bt(900)", &names);
        assert!(after.values.iter().all(|value| value.is_finite()) && after.notes.is_empty());
        // The other band has not been read.
        let other = layer("bt(1231)", &names);
        assert!(other.values[0].is_nan() && !other.notes.is_empty());
    });
}

#[test]
fn a_cut_granule_gives_the_same_numbers_footprint_by_footprint() {
    let whole = PlainGranule::new();
    let mut cut = PlainGranule::new();
    // The last two of four scan lines, 90 footprints further on.
    cut.lengths[0] = 2;
    cut.radiance = |wavenumber, footprint| planck(wavenumber, temperature(footprint + 90));
    let texts = ["bt(900)", "bt(850) - bt(830..840)", "not (rad(1231) > 20) or bt(900) < 215"];
    let values = |granule: &Granule| -> Vec<Vec<f64>> {
        granule.fill(&Cancel::new(), &mut |_| {}).unwrap();
        let cube = granule.cube();
        let names = GranuleNames::new(granule, &cube);
        texts.iter().map(|text| layer(text, &names).values).collect()
    };
    let mut all = Vec::new();
    opened(&whole, |granule| all = values(granule));
    opened(&cut, |granule| {
        for ((text, whole), cut) in texts.iter().zip(&all).zip(values(granule)) {
            assert!(same(&whole[90..], &cut), "{text}");
        }
    });
}

#[test]
fn definitions_and_neighbours_can_be_lent() {
    opened(&PlainGranule::new(), |granule| {
        granule.fill(&Cancel::new(), &mut |_| {}).unwrap();
        let cube = granule.cube();
        let mut definitions = BTreeMap::new();
        definitions.insert("window".to_owned(), Expression::parse("bt(900)").unwrap());
        let kept = Kept::default();
        let names = GranuleNames::new(granule, &cube).with_definitions(&definitions).keeping(&kept);
        let spread = layer("sd3(window)", &names);
        assert_eq!(spread.unit, LayerUnit::KelvinDifference);
        assert!(same(&spread.values, &layer("sd3(bt(900))", &names).values));
        let never = || unreachable!("the neighbours were kept");
        assert_eq!(kept.neighbours(never), names.neighbours());
    });
}

#[test]
fn bands_may_be_read_in_part() {
    opened(&PlainGranule::new(), |granule| {
        let cube = granule.cube();
        granule.fill_slab(0, 0).unwrap();
        let names = GranuleNames::new(granule, &cube);
        let here = cube.footprints_of(0, 0);
        let values = layer("bt(900)", &names).values;
        for (footprint, value) in values.iter().enumerate() {
            assert_eq!(value.is_finite(), here.contains(&footprint), "{footprint}");
        }
    });
}
