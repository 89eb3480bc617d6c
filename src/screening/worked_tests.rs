//! The built-in rulebook on spectra whose brightness temperatures are known.

use super::{Rulebook, Screened, Verdict, builtin, screen};
use crate::layers::{Expression, FakeNames};
use crate::spectral::planck;

/// Wavenumbers (cm-1) of the table below.
const PLACES: [f64; 15] = [
    667.5, 690., 715., 748., 826., 831., 909., 961., 1042., 1128., 1163., 1231., 1306., 1540.,
    2616.,
];

/// Brightness temperatures of scenes over a tropical sea at 299.7 K, nadir: clear; cirrus of optical
/// depth 0.3 at 13 km; deep convection, top 195 K; dust of optical depth 1 at 3 km.
/// Source: a plane-parallel model with the tropical atmosphere of [Anderson et al. 1986], good to
/// 3 K; here they only have to be what scenes of the kind look
/// like; 826 is that of 831. Between the places they are
/// joined by straight lines.
const SCENES: [[f64; 15]; 4] = [
    [
        245., 222., 240., 264., 294.1, 294.1, 295.4, 296.0, 292., 295.4, 296.2, 295.3, 261., 252.,
        299.3,
    ],
    [
        245., 222., 235., 254., 279.0, 279.0, 280.8, 283.0, 282., 285.9, 286.6, 285.8, 255., 247.,
        295.9,
    ],
    [
        245., 218., 203., 198., 194.8, 194.8, 194.8, 194.8, 199., 196.8, 194.8, 194.9, 198., 195.,
        194.8,
    ],
    [
        245., 222., 240., 263., 289.3, 289.3, 289.0, 288.2, 283., 286.7, 288.9, 290.6, 260., 252.,
        296.0,
    ],
];
const CLEAR: usize = 0;
const CIRRUS: usize = 1;
const CONVECTION: usize = 2;
const DUST: usize = 3;

fn temperature(scene: usize, wavenumber: f64) -> f64 {
    let after = PLACES.partition_point(|place| *place <= wavenumber).clamp(1, PLACES.len() - 1);
    let (low, high) = (PLACES[after - 1], PLACES[after]);
    let share = ((wavenumber - low) / (high - low)).clamp(0.0, 1.0);
    SCENES[scene][after - 1] * (1.0 - share) + SCENES[scene][after] * share
}

/// Footprints in one row, so that there are no neighbourhoods: over sea, at night, in the tropics.
fn at_sea(radiance: fn(f64, usize) -> f64, footprints: usize) -> FakeNames {
    FakeNames::new(&[1, footprints], radiance)
        .with("lat", &vec![10.0; footprints])
        .with("land", &vec![0.0; footprints])
        .with("view_zenith", &vec![0.0; footprints])
        .with("solar_zenith", &vec![120.0; footprints])
        .with("night", &vec![1.0; footprints])
        .with("glint_angle", &vec![90.0; footprints])
}

fn scenes() -> FakeNames {
    at_sea(|wavenumber, scene| planck(wavenumber, temperature(scene, wavenumber)), SCENES.len())
}

fn flags(screened: &Screened, footprint: usize) -> Vec<String> {
    let set = screened.flags.iter().filter(|flag| flag.is_set(footprint));
    set.map(|flag| flag.flag.clone()).collect()
}

fn verdict(screened: &Screened, test: &str, footprint: usize) -> (Verdict, f64) {
    let at = screened.rulebook.tests.iter().position(|one| one.name == test);
    let result = &screened.tests[at.unwrap_or_else(|| panic!("no test {test}"))];
    (result.verdicts[footprint], result.margins[footprint])
}

#[test]
fn scenes_get_the_flags_that_they_deserve() {
    let rulebook = builtin().unwrap();
    let screened = screen(&rulebook, &scenes());
    assert!(screened.assessed.iter().all(|assessed| *assessed));
    assert_eq!(flags(&screened, CLEAR), Vec::<String>::new());
    assert_eq!(flags(&screened, CIRRUS), ["thin_cloud"]);
    assert_eq!(flags(&screened, CONVECTION), ["cloudy"]);
    assert_eq!(flags(&screened, DUST), ["dust_or_ash"]);
}

/// Margins worked by hand from the table of scenes and the thresholds of the rulebook. The table's
/// places are joined by lines and averaged in radiance, which is worth a few hundredths of a kelvin.
#[test]
fn margins_follow_from_the_published_thresholds() {
    let rulebook = builtin().unwrap();
    let screened = screen(&rulebook, &scenes());
    for (test, scene, said, margin) in [
        // 195 K is far below 270 K and 210 K.
        ("T01 gross window", CONVECTION, Verdict::For, 1.5),
        ("T01 gross window", CLEAR, Verdict::Against, -1.5),
        ("T11 deep convection", CONVECTION, Verdict::For, 1.5),
        ("T11 deep convection", CIRRUS, Verdict::Against, -1.5),
        // Water vapour at 195 to 195.5 K over a window of 194.8 K: 0.45 K of 3 K.
        ("T10 water vapour above window", CONVECTION, Verdict::For, 0.15),
        // Ozone 199 K over a window of 194.8 K: 4.2 K of 3 K.
        ("T18 ozone above window", CONVECTION, Verdict::For, 1.4),
        ("T18 ozone above window", CLEAR, Verdict::Against, -1.5),
        // 203 + (198 - 203) x 2.5/33 K at most: far below 226 K.
        ("T12 high cloud at 13.9 um", CONVECTION, Verdict::For, 1.5),
        // (286.6 - 280.8) - (280.8 - 279.0) = 4 K over 0.5 K.
        ("T06 tri-spectral ice", CIRRUS, Verdict::For, 1.5),
        // (296.2 - 295.4) - (295.4 - 294.1) = -0.5 K, but 1163 cm-1 is a peak of the table and 909
        // close to one: the means are 0.05 to 0.1 K lower. -0.4 K: 0.9 K below 0.5 K, of 0.7 K.
        ("T06 tri-spectral ice", CLEAR, Verdict::Against, -1.29),
        // 961 - 1231: -2.4 K, and 900 - 961: 0.83 K, both on the side of dust.
        ("T15 dust over sea", DUST, Verdict::For, 1.5),
        // 961 - 1231: -2.8 K, but 900 - 961: -2.4 K is ice.
        ("T15 dust over sea", CIRRUS, Verdict::Against, -1.5),
        // 289.0 - 289.3 = -0.3 K: 0.1 K beyond -0.2 K, of 0.3 K.
        ("T14 reverse absorption", DUST, Verdict::For, 0.33),
        ("T14 reverse absorption", CLEAR, Verdict::Against, -1.5),
        ("T24 channels without a value", CLEAR, Verdict::Against, -1.5),
        ("T27 slant view", CLEAR, Verdict::Against, -1.5),
    ] {
        let (found, of) = verdict(&screened, test, scene);
        assert_eq!(found, said, "{test} on scene {scene}: {of}");
        assert!((of - margin).abs() < 0.12, "{test} on scene {scene}: {of}, not {margin}");
    }
}

/// Uniform black bodies on both sides of T01's published limit of 270 K, softness 3 K.
#[test]
fn the_gross_window_turns_at_its_limit() {
    let bodies = at_sea(|wavenumber, at| planck(wavenumber, 267.0 + 1.5 * at as f64), 5);
    let rulebook = builtin().unwrap();
    let screened = screen(&rulebook, &bodies);
    for (at, expected) in [1.0, 0.5, 0.0, -0.5, -1.0].into_iter().enumerate() {
        let (said, margin) = verdict(&screened, "T01 gross window", at);
        // A mean of radiances inverted at its mean wavenumber; good to a millikelvin.
        assert!((margin - expected).abs() < 1e-3, "{at}: {margin}");
        let on_the_limit = expected == 0.0;
        assert!(on_the_limit || (said == Verdict::For) == (expected > 0.0), "{at}: {said:?}");
    }
}

#[test]
fn guards_keep_tests_away_and_say_so() {
    let rulebook = builtin().unwrap();
    let names = scenes()
        .with("lat", &[70.0, 10.0, 10.0, 10.0])
        .with("night", &[0.0, 1.0, f64::NAN, 1.0])
        .with("solar_zenith", &[40.0, 120.0, f64::NAN, 120.0]);
    let screened = screen(&rulebook, &names);
    let said = |test, at| verdict(&screened, test, at).0;
    assert_eq!(said("T01 gross window", 0), Verdict::Guarded, "poleward of 60 degrees");
    assert_eq!(said("T08 low cloud at night", 0), Verdict::Guarded, "by day");
    assert_eq!(said("T08 low cloud at night", 2), Verdict::GuardUnknown);
    assert_eq!(said("T04 spread 3x3, land", 1), Verdict::OtherSurface);
    assert_eq!(said("T04 spread 3x3", 1), Verdict::Missing, "one row has no neighbourhoods");
    let evidence = screened.evidence(0).unwrap();
    let reason = |test: &str| {
        let found = evidence.tests.iter().find(|one| one.name == test);
        found.map(|one| one.reason.clone()).unwrap_or_default()
    };
    assert!(reason("T08 low cloud at night").starts_with("applies only where night"));
    assert!(reason("T04 spread 3x3").contains("missing here"));
    // 2616.4 and 3.8 um are there, so nothing stands in for them.
    assert_eq!(reason("T06 tri-spectral ice"), "");
}

#[test]
fn polar_night_halves_a_voice() {
    let snow = |wavenumber, _| planck(wavenumber, if wavenumber < 2000.0 { 250.0 } else { 245.0 });
    let names = at_sea(snow, 2)
        .with("lat", &[75.0, 75.0])
        .with("land", &[1.0, 1.0])
        .with("solar_zenith", &[100.0, 84.0]);
    let rulebook = builtin().unwrap();
    let screened = screen(&rulebook, &names);
    let voice = |at: usize| {
        let evidence = screened.evidence(at).unwrap();
        assert_eq!(evidence.surface.as_deref(), Some("snow"));
        let cloudy = evidence.flags.iter().find(|flag| flag.flag == "cloudy").unwrap();
        let family = cloudy.families.iter().find(|one| one.family == "short_wave").unwrap();
        family.log_odds.unwrap()
    };
    // Short wave 5 K below the window, 3 K beyond the limit: the full voice, then the half.
    assert_eq!((voice(1), voice(0)), (4.5, 2.25));
}

#[test]
fn zero_and_negative_radiance_is_no_temperature_and_said() {
    let noisy = |wavenumber: f64, scene: usize| {
        let clear = planck(wavenumber, temperature(CLEAR, wavenumber));
        if wavenumber > 2590.0 && scene == 1 { -0.001 } else { clear }
    };
    let rulebook = builtin().unwrap();
    let screened = screen(&rulebook, &at_sea(noisy, 2));
    assert_eq!(verdict(&screened, "T08 low cloud at night", 1).0, Verdict::NotPositive);
    assert_eq!(verdict(&screened, "T22 night window consistency", 1).0, Verdict::NotPositive);
    assert!(verdict(&screened, "T08 low cloud at night", 0).0.is_result());
    // The test is lost, not the footprint; the loss shows in coverage and doubt.
    let cloudy = &screened.flags[0].conclusions;
    assert!(cloudy[1].coverage < cloudy[0].coverage);
}

#[test]
fn what_the_file_lacks_is_said_and_the_rest_is_done() {
    // Neither angles nor land.
    let names = FakeNames::new(&[1, 4], |wavenumber, scene| {
        planck(wavenumber, temperature(scene, wavenumber))
    })
    .with("lat", &[10.0; 4]);
    let rulebook = builtin().unwrap();
    let screened = screen(&rulebook, &names);
    let evidence = screened.evidence(CIRRUS).unwrap();
    assert_eq!(evidence.surface.as_deref(), Some("unknown"));
    let test = |name: &str| evidence.tests.iter().find(|one| one.name == name).unwrap();
    let slant = test("T27 slant view");
    assert_eq!(slant.verdict, Verdict::NotInFile);
    assert!(slant.reason.contains("view_zenith"), "{}", slant.reason);
    // A substitute without the angle.
    assert!(test("T05 split-window cirrus").verdict.is_result());
    assert!(test("T05 split-window cirrus").reason.starts_with("in place of another"));
    assert_eq!(test("T07 thin cirrus at night").verdict, Verdict::GuardUnknown);
    assert_eq!(flags(&screened, CONVECTION), ["cloudy"]);
}

/// What is lost shows in coverage where a family falls silent, and in doubt wherever a limit is less sure.
/// The clear scene as it is has no doubt to speak of.
#[test]
fn every_loss_shows_in_coverage_or_doubt() {
    let rulebook = builtin().unwrap();
    let said = |lost: &[&str]| {
        let mut names = scenes();
        lost.iter().for_each(|name| drop(names.named.remove(*name)));
        let evidence = screen(&rulebook, &names).evidence(CLEAR).unwrap();
        assert!(evidence.assessed, "what can be done is done without {lost:?}");
        let of = |flag: &str| {
            let found = evidence.flags.iter().find(|one| one.flag == flag).unwrap();
            (found.coverage, found.doubt)
        };
        [of("cloudy"), of("thin_cloud")]
    };
    let whole = said(&[]);
    for lost in [&["land"][..], &["night", "solar_zenith"], &["land", "night", "view_zenith"]] {
        for (flag, whole) in said(lost).iter().zip(&whole) {
            assert!(flag.0 < whole.0 && flag.1 > whole.1, "{lost:?}: {flag:?} {whole:?}");
        }
    }
}

/// Limits that follow the slant path have substitutes for files without the view angle: they ask for none,
/// and are softer, for they are less sure.
#[test]
fn without_the_view_angle_tests_say_less() {
    let rulebook = builtin().unwrap();
    let sees_view = |way: &super::Way| {
        let mut left: Vec<&Expression> = way.threshold.expressions().iter().collect();
        left.push(&way.expression);
        let mut sees = false;
        while let Some(expression) = left.pop() {
            sees |= expression.names().contains(&"view_zenith");
            left.extend(expression.names().iter().filter_map(|name| rulebook.by_name.get(*name)));
        }
        sees
    };
    let mut softer = 0;
    for test in &rulebook.tests {
        for way in test.ways.iter().filter(|way| way.note.contains("no view zenith angle")) {
            assert!(sees_view(&test.ways[0]) && !sees_view(way), "{}", test.name);
            assert!(way.softness > test.ways[0].softness, "{}", test.name);
            softer += 1;
        }
    }
    assert!(softer >= 2, "{softer}");
}

/// One test that needs a channel, and nothing else.
const LONELY: &str = r#"
format = "radsieve rulebook 1"
name = "lonely"
title = "one test"
[[families]]
name = "cold"
[[tests]]
name = "cold"
family = "cold"
flag = "cloudy"
expression = "bt(900)"
sense = "below"
threshold = 270
softness = 3
source = "this test"
"#;

#[test]
fn nothing_is_clear_by_default() {
    let rulebook = Rulebook::parse(LONELY, "lonely").unwrap();
    let half_missing = |wavenumber, at| if at == 0 { f64::NAN } else { planck(wavenumber, 280.0) };
    let screened = screen(&rulebook, &FakeNames::new(&[2], half_missing));
    assert_eq!(screened.assessed, [false, true]);
    assert_eq!(screened.doubt[0], 1.0);
    assert!(!screened.is_doubtful(0), "what is not assessed is not doubtful but not assessed");
    let summary = screened.summary();
    assert_eq!((summary.no_flag, summary.not_assessed), (1, 1));
    // The file has no such channel at all.
    let elsewhere = Rulebook::parse(&LONELY.replace("bt(900)", "bt(500)"), "lonely").unwrap();
    let screened = screen(&elsewhere, &FakeNames::new(&[2], half_missing));
    assert_eq!(screened.summary().not_assessed, 2);
    assert!(screened.evidence(0).unwrap().tests[0].reason.contains("no channel near 500"));
}

#[test]
fn the_order_of_tests_changes_nothing() {
    let rulebook = builtin().unwrap();
    let mut turned = rulebook.clone();
    turned.tests.reverse();
    let (one, other) = (screen(&rulebook, &scenes()), screen(&turned, &scenes()));
    assert_eq!(one.assessed, other.assessed);
    for flag in &one.flags {
        let turned = other.flags.iter().find(|other| other.flag == flag.flag).unwrap();
        for (a, b) in flag.conclusions.iter().zip(&turned.conclusions) {
            // Sums of at most ten numbers below 5 in another order.
            let same = (a.probability - b.probability).abs() < 1e-12;
            assert!(same || (a.probability.is_nan() && b.probability.is_nan()));
            assert!((a.doubt - b.doubt).abs() < 1e-12);
        }
    }
}

#[test]
fn cut_then_screened_is_screened_then_cut() {
    let rulebook = builtin().unwrap();
    let whole = screen(&rulebook, &scenes()).doubt;
    let cut = at_sea(
        |wavenumber, scene| planck(wavenumber, temperature(scene + 1, wavenumber)),
        SCENES.len() - 1,
    );
    // One row has no neighbourhoods, so all tests that speak look at one footprint each.
    assert_eq!(screen(&rulebook, &cut).doubt, whole[1..]);
}

#[test]
fn the_number_of_threads_changes_nothing() {
    let rulebook = builtin().unwrap();
    let bodies = |wavenumber, at: usize| planck(wavenumber, 220.0 + 0.05 * at as f64);
    let names = at_sea(bodies, 1600);
    let with = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        pool.install(|| screen(&rulebook, &names).doubt)
    };
    assert_eq!(with(1), with(5));
}
