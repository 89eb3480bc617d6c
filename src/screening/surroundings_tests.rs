//! Tests of the built-in rulebook that look beside the footprint: at references, clusters, coasts,
//! the season.

use super::{Screened, Verdict, builtin, screen};
use crate::layers::FakeNames;
use crate::spectral::planck;

fn verdict(screened: &Screened, test: &str, footprint: usize) -> (Verdict, f64) {
    let at = screened.rulebook.tests.iter().position(|one| one.name == test);
    let result = &screened.tests[at.unwrap_or_else(|| panic!("no test {test}"))];
    (result.verdicts[footprint], result.margins[footprint])
}

/// Sea at night in the tropics.
fn sea(lengths: &[usize], radiance: fn(f64, usize) -> f64) -> FakeNames {
    let count = lengths.iter().product();
    let fields = [("lat", 10.0), ("land", 0.0), ("view_zenith", 0.0), ("solar_zenith", 120.0)];
    let names = FakeNames::new(lengths, radiance).with("night", &vec![1.0; count]);
    let names = names.with("season", &vec![0.0; count]).with("lon", &vec![0.0; count]);
    fields.into_iter().fold(names, |names, (name, value)| names.with(name, &vec![value; count]))
}

fn surface(screened: &Screened, footprint: usize) -> Option<String> {
    screened.evidence(footprint).unwrap().surface
}

/// Clear sky and stratus at 1 km over a tropical sea at 299.7 K, nadir: brightness temperatures at
/// 831, 909 and 1231 cm-1. Source: a plane-parallel model with the tropical atmosphere of
/// [Anderson et al. 1986], good to 3 K.
const SCENES: [[f64; 3]; 2] = [[294.1, 295.4, 295.3], [291.3, 292.0, 291.4]];

fn tropical(wavenumber: f64, scene: usize) -> f64 {
    let [at831, at909, at1231] = SCENES[scene];
    let temperature = if wavenumber < 950.0 {
        at831 + (at909 - at831) * (wavenumber - 831.0) / 78.0
    } else {
        at1231
    };
    planck(wavenumber, temperature)
}

#[test]
fn a_surface_reference_finds_low_cloud_that_is_warm() {
    let rulebook = builtin().unwrap();
    let names = sea(&[1, 2], tropical).with("surface_temperature", &[299.7; 2]);
    let screened = screen(&rulebook, &names);
    let test = "T02 window against a surface reference";
    // Stratus: 900 - 831 is 0.61 K of the 78 cm-1 between, so the estimate is 291.4 + 1.8 + 4.1 x 0.61
    // = 295.7 K, 4.0 K below the reference: 1.0 K beyond 3 K, of 1.5 K.
    let (said, margin) = verdict(&screened, test, 1);
    assert_eq!(said, Verdict::For);
    // One channel stands for the place within 0.3 cm-1: 0.01 K, four times.
    assert!((margin - 0.66).abs() < 0.04, "{margin}");
    assert_eq!(verdict(&screened, test, 0).0, Verdict::Against);
    // The gross window has nothing to say for such cloud.
    assert_eq!(verdict(&screened, "T01 gross window", 1).0, Verdict::Against);
    // Without the reference the test says what it lacks.
    let screened = screen(&rulebook, &sea(&[1, 2], tropical));
    assert_eq!(verdict(&screened, test, 1).0, Verdict::NotInFile);
    let evidence = screened.evidence(1).unwrap();
    let told = evidence.tests.iter().find(|one| one.name == test).unwrap();
    assert!(told.reason.contains("surface_temperature"), "{}", told.reason);
}

#[test]
fn no_sea_is_as_cold_as_middle_cloud() {
    // Black bodies from 270 K on, 5 K from one to the next; grey, so that the estimate is 1.8 K more.
    let bodies = |wavenumber, at: usize| planck(wavenumber, 270.0 + 5.0 * at as f64);
    let screened = screen(&builtin().unwrap(), &sea(&[1, 6], bodies));
    let margin = |at| verdict(&screened, "T02 colder than any sea", at).1;
    // At 10 degrees no sea is colder than 288 K: 276.8 K lies 11 K below, 286.8 K 1.2 K of 3 K.
    assert_eq!(margin(1), 1.5);
    assert!((margin(3) - 0.4).abs() < 1e-6, "{}", margin(3));
    assert_eq!(margin(5), -1.5);
}

#[test]
fn an_uneven_cluster_is_a_mixed_scene() {
    // Two clusters of nine at 290 K; one footprint of the second is 4 K colder.
    let scene = |wavenumber, at: usize| planck(wavenumber, if at == 13 { 286.0 } else { 290.0 });
    let screened = screen(&builtin().unwrap(), &sea(&[1, 2, 9], scene));
    // 4 K of the limit of 3 K, softness 1 K: all nine are warned of.
    for at in 9..18 {
        let (said, margin) = verdict(&screened, "T21 uneven cluster", at);
        assert_eq!(said, Verdict::For);
        assert!(
            (margin - 1.0).abs() < 1e-3,
            "{margin}: the interval's mean is good to a millikelvin"
        );
    }
    assert_eq!(verdict(&screened, "T21 uneven cluster", 0).0, Verdict::Against);
    let flat = screen(&builtin().unwrap(), &sea(&[3, 6], scene));
    assert_eq!(verdict(&flat, "T21 uneven cluster", 0).0, Verdict::NotInFile, "no clusters");
}

#[test]
fn a_warm_coast_is_no_cloud_over_the_sea_beside_it() {
    // Four columns: land at 305 K, then sea at 290 K.
    let warm_coast = |wavenumber, at: usize| {
        planck(wavenumber, if at.is_multiple_of(4) { 305.0 } else { 290.0 })
    };
    let land: Vec<f64> =
        (0..20_usize).map(|at| if at.is_multiple_of(4) { 1.0 } else { 0.0 }).collect();
    let screened = screen(&builtin().unwrap(), &sea(&[5, 4], warm_coast).with("land", &land));
    for test in ["T03 colder than a neighbour", "T04 spread 3x3"] {
        // Footprint 9 has land beside it, and six of the sea.
        let (said, margin) = verdict(&screened, test, 9);
        assert_eq!(said, Verdict::Against, "{test}");
        assert!(margin <= -1.0, "{test}: {margin}");
    }
    // A footprint that is part land is compared with neither.
    let part: Vec<f64> = land.iter().map(|share| 0.5 * share).collect();
    let screened = screen(&builtin().unwrap(), &sea(&[5, 4], warm_coast).with("land", &part));
    assert_eq!(surface(&screened, 8).as_deref(), Some("land"));
    assert_eq!(verdict(&screened, "T03 colder than a neighbour, land", 8).0, Verdict::Guarded);
}

#[test]
fn cloud_in_polar_night_hides_the_warm_air() {
    // Snow at 240 K; the middle of the troposphere at 242 K over clear ground, 231.4 K over ice
    // cloud.
    let snow = |wavenumber: f64, at: usize| {
        let middle = (1380.0..1400.0).contains(&wavenumber);
        planck(wavenumber, if middle { [242.0, 231.4][at] } else { 240.0 })
    };
    let names = sea(&[1, 2], snow).with("lat", &[75.0; 2]).with("land", &[1.0; 2]);
    let screened = screen(&builtin().unwrap(), &names);
    assert_eq!(surface(&screened, 0).as_deref(), Some("snow"));
    // The limit at 240 K lies two thirds of the way from -2.5 K (236 K) to -7.5 K (242 K): -5.8333 K.
    // 2 K is 7.8 K above it, -8.6 K is 2.7667 K below, of 2 K.
    let (clear, cloudy) = (0, 1);
    let test = "T17 middle air in polar night";
    assert_eq!(verdict(&screened, test, clear), (Verdict::Against, -1.5));
    let (said, margin) = verdict(&screened, test, cloudy);
    assert_eq!(said, Verdict::For);
    assert!((margin - 1.38333).abs() < 1e-3, "{margin}");
    let by_day = sea(&[1, 2], snow).with("lat", &[75.0; 2]).with("land", &[1.0; 2]);
    let screened = screen(&builtin().unwrap(), &by_day.with("solar_zenith", &[70.0; 2]));
    assert_eq!(verdict(&screened, test, cloudy).0, Verdict::Guarded);
}

#[test]
fn a_rulebook_that_asks_for_its_own_results_is_refused() {
    let text = crate::screening::BUILTIN_TEXT;
    let turned = text.replacen("when = \"abs(lat) < 30\"", "when = \"doubt < 0.5\"", 1);
    assert_ne!(text, turned);
    let error = crate::screening::Rulebook::parse(&turned, "turned").unwrap_err().to_string();
    assert!(error.contains("leads back to itself") && error.contains("T11"), "{error}");
}

/// One test that asks what two others said, and one of them what a flag came to.
const ASKING: &str = r#"format = "radsieve rulebook 1"
name = "asking"
title = "for tests"
[[families]]
name = "any"

[[tests]]
name = "both"
family = "any"
flag = "unusual"
expression = 'min(margin("cold"), margin("colder"))'
sense = "above"
threshold = 0
softness = 1
source = "this test"

[[tests]]
name = "colder"
family = "any"
flag = "thin_cloud"
expression = 'bt(900)'
sense = "below"
threshold = 280
softness = 10
when = 'flag("cloudy")'
source = "this test"

[[tests]]
name = "cold"
family = "any"
flag = "cloudy"
expression = 'bt(900)'
sense = "below"
threshold = 290
softness = 10
source = "this test"
"#;

/// Worked by hand at 285, 275 and 295 K: "cold" gives 0.5, 1.5 and -0.5; "colder" -0.5, 0.5, and nothing
/// where no cloud was found; "both" the smaller of the two.
#[test]
fn tests_may_ask_what_others_said_in_whatever_order_they_stand() {
    let bodies = |wavenumber: f64, at: usize| planck(wavenumber, [285.0, 275.0, 295.0][at]);
    let parse = |text: &str| crate::screening::Rulebook::parse(text, "asking");
    let margins = |text: &str, test: &str| {
        let screened = screen(&parse(text).unwrap(), &sea(&[1, 3], bodies));
        let place = screened.rulebook.tests.iter().position(|one| one.name == test).unwrap();
        screened.tests[place].margins.clone()
    };
    let (head, tests) = ASKING.split_once("[[tests]]").unwrap();
    let parts: Vec<&str> = tests.split("[[tests]]").collect();
    for order in [[0, 1, 2], [2, 1, 0], [1, 0, 2]] {
        let tests: String = order.iter().map(|at| format!("[[tests]]{}\n", parts[*at])).collect();
        let text = format!("{head}{tests}");
        let near = |found: Vec<f64>, expected: [f64; 3]| {
            let fits = |(one, other): (&f64, &f64)| {
                (one - other).abs() < 1e-9 || one.is_nan() && other.is_nan()
            };
            assert!(found.iter().zip(&expected).all(fits), "{order:?}: {found:?}");
        };
        near(margins(&text, "cold"), [0.5, 1.5, -0.5]);
        near(margins(&text, "colder"), [-0.5, 0.5, f64::NAN]);
        near(margins(&text, "both"), [-0.5, 0.5, f64::NAN]);
    }
    let circle = ASKING.replacen("bt(900)", "bt(900) + margin(\"both\")", 1);
    let error = parse(&circle).unwrap_err().to_string();
    assert!(error.contains("tests \"both\"") && error.contains("tests \"colder\""), "{error}");
    assert!(!error.contains("tests \"cold\":"), "{error}");
}

/// Cloud height is a name that a rulebook may use.
#[test]
fn a_rulebook_may_ask_for_cloud_height() {
    let text = crate::screening::BUILTIN_TEXT;
    let high = text.replacen("when = \"abs(lat) < 30\"", "when = \"co2_cloud_pressure < 300\"", 1);
    assert!(crate::screening::Rulebook::parse(&high, "high").is_ok());
}

#[test]
fn a_footprint_without_position_is_flagged() {
    let bodies = |wavenumber, _| planck(wavenumber, 290.0);
    let names = sea(&[1, 2], bodies).with("lon", &[20.0, f64::NAN]);
    let screened = screen(&builtin().unwrap(), &names);
    assert_eq!(verdict(&screened, "T27 no position", 0), (Verdict::Against, -1.5));
    assert_eq!(verdict(&screened, "T27 no position", 1), (Verdict::For, 1.5));
    let flag = screened.flags.iter().find(|one| one.flag == "bad_geolocation").unwrap();
    assert!(flag.is_set(1) && !flag.is_set(0));
}

#[test]
fn snow_follows_the_season_and_what_is_known_of_it() {
    let cold = |wavenumber, _| planck(wavenumber, 260.0);
    let at = |latitude: f64, land: f64| {
        sea(&[1, 1], cold).with("lat", &[latitude]).with("land", &[land])
    };
    let of = |names: FakeNames| surface(&screen(&builtin().unwrap(), &names), 0).unwrap();
    for (latitude, land, season, expected) in [
        (57.0, 1.0, -1.0, "snow"),
        (57.0, 1.0, 0.0, "land"),
        (-57.0, 1.0, -1.0, "snow"),
        (62.0, 1.0, 1.0, "land"),
        (62.0, 0.0, -1.0, "snow"),
        (66.0, 0.0, 1.0, "sea"),
    ] {
        let names = at(latitude, land).with("season", &[season]);
        assert_eq!(of(names), expected, "{latitude}, land {land}, season {season}");
    }
    // Without times the same lines all the year round; with collocated snow, that.
    let mut timeless = at(62.0, 1.0);
    timeless.named.remove("season");
    assert_eq!(of(timeless), "snow");
    let known = at(45.0, 1.0).with("snow", &[0.9]).with("sea_ice", &[0.0]);
    assert_eq!(of(known), "snow");
}
