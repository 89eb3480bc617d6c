//! What expressions come to, worked out by hand or by closed forms.

use super::fake_names::FakeNames;
use super::{Layer, LayerError, channels_needed, evaluate, evaluate_all};
use crate::layers::Expression;
use crate::layers::unit::LayerUnit;
use crate::spectral::{brightness_temperature, planck};

const NAN: f64 = f64::NAN;

fn expression(text: &str) -> Expression {
    Expression::parse(text).unwrap_or_else(|error| panic!("{error}"))
}

fn layer(text: &str, names: &FakeNames) -> Layer {
    evaluate(&expression(text), names).unwrap_or_else(|error| panic!("{error}"))
}

fn error(text: &str, names: &FakeNames) -> LayerError {
    evaluate(&expression(text), names).err().unwrap_or_else(|| panic!("{text} was evaluated"))
}

/// The value of an expression over one footprint where `a` and `b` are given.
fn value(text: &str, a: f64, b: f64) -> f64 {
    let names = FakeNames::black_bodies(&[1]).with("a", &[a]).with("b", &[b]);
    layer(text, &names).values[0]
}

/// Equal, or both missing.
fn same(one: &[f64], other: &[f64]) -> bool {
    one.len() == other.len()
        && one.iter().zip(other).all(|(a, b)| a == b || (a.is_nan() && b.is_nan()))
}

#[test]
fn arithmetic_is_that_of_mathematics() {
    for (text, expected) in [
        ("-2^2", -4.0),
        ("2^3^2", 512.0),
        ("2^-1", 0.5),
        ("a - b - 1", 3.0),
        ("a / b / 2", 1.5),
        ("min(a, b, 1)", 1.0),
        ("max(a, b)", 6.0),
        ("abs(b - a)", 4.0),
        ("sqrt(a * 6)", 6.0),
        ("ln(exp(b))", 2.0),
        ("a > b", 1.0),
        ("a < b", 0.0),
        ("a >= 6 and b <= 2", 1.0),
        ("a == 6", 1.0),
        ("a != 6 or b == 3", 0.0),
        ("not (a > b)", 0.0),
        ("not 0", 1.0),
    ] {
        assert_eq!(value(text, 6.0, 2.0), expected, "{text}");
    }
}

#[test]
fn missing_stays_missing_in_every_operation() {
    for text in [
        "-a",
        "not a",
        "a + b",
        "b - a",
        "a * 0",
        "0 / a",
        "a ^ 0",
        "1 ^ a",
        "a < b",
        "a == a",
        "a != a",
        "a and b",
        "b and a",
        "0 and a",
        "a or 1",
        "1 or a",
        "min(a, b)",
        "min(b, a)",
        "max(1, 2, a)",
        "abs(a)",
        "sqrt(a)",
        "ln(a)",
        "exp(a)",
        "planck(a, 900)",
        "not (a > 0)",
    ] {
        assert!(value(text, NAN, 1.0).is_nan(), "{text}");
    }
}

#[test]
fn what_has_no_number_is_missing_rather_than_infinite() {
    for text in [
        "1 / 0",
        "0 / 0",
        "ln(0)",
        "ln(-1)",
        "sqrt(-1)",
        "exp(1000)",
        "(-8)^(1/3)",
        "0^-1",
        "1e308 * 10",
        "planck(0, 900)",
        "planck(-5, 900)",
        "a",
        "1 / a",
    ] {
        assert!(value(text, f64::INFINITY, 1.0).is_nan(), "{text}");
    }
}

#[test]
fn a_black_bodys_temperature_comes_back() {
    let names = FakeNames::black_bodies(&[20, 10]);
    for text in ["bt(650)", "bt(900.4)", "bt(11um)", "bt(2600)"] {
        for (footprint, value) in layer(text, &names).values.iter().enumerate() {
            let expected = 200.0 + 0.5 * footprint as f64;
            // The contract of the printed numbers; the f64 path itself is good to 1e-10.
            assert!((value - expected).abs() < 1e-6, "{text} at {footprint}: {value}");
        }
    }
}

#[test]
fn radiances_are_those_of_the_channel() {
    let names = FakeNames::black_bodies(&[3]);
    // tests/reference_tables/planck_checks.csv holds the function itself; here it is the plumbing.
    assert_eq!(layer("rad(667.5)", &names).values[1], planck(668.0, 200.5));
    assert_eq!(layer("planck(200.5, 668)", &names).values[0], planck(668.0, 200.5));
    let difference = layer("planck(bt(900), 900) - rad(900)", &names).values[2];
    // A round trip through the inverse; the radiance is of the order of 10.
    assert!(difference.abs() < 1e-11, "{difference}");
}

#[test]
fn an_interval_is_averaged_in_radiance_negative_ones_included() {
    // 2600, 2601, 2602 cm-1: one channel's noise is below zero.
    let names = FakeNames::new(&[1], |wavenumber, _| match wavenumber as u32 {
        2600 => 0.004,
        2601 => -0.001,
        _ => 0.003,
    });
    assert_eq!(layer("rad(2600..2602)", &names).values[0], 0.002);
    let expected = brightness_temperature(2601.0, 0.002).unwrap();
    assert_eq!(layer("bt(2600..2602)", &names).values[0], expected);
    // The second channel alone has a radiance, but no temperature.
    assert_eq!(layer("rad(2601)", &names).values[0], -0.001);
    let alone = layer("bt(2601)", &names);
    assert!(alone.values[0].is_nan());
    assert!(alone.notes[0].contains("zero or less"), "{:?}", alone.notes);
}

#[test]
fn an_interval_needs_half_of_its_channels() {
    // Footprint f lacks the channels from 900 to 900 + f - 1.
    let names = FakeNames::new(&[5], |wavenumber, footprint| {
        if wavenumber < 900.0 + footprint as f64 { NAN } else { planck(wavenumber, 250.0) }
    });
    let layer = layer("bt(900..903)", &names);
    for footprint in 0..=2 {
        let radiances = (900 + footprint..=903).map(|channel| planck(f64::from(channel), 250.0));
        let count = f64::from(4 - footprint);
        let mean = radiances.sum::<f64>() / count;
        let centre = 0.5 * f64::from(900 + footprint + 903);
        let expected = brightness_temperature(centre, mean).unwrap();
        // The mean wavenumber is summed in another order.
        assert!((layer.values[footprint as usize] - expected).abs() < 1e-10);
    }
    assert!(layer.values[3].is_nan() && layer.values[4].is_nan());
    assert!(layer.notes[0].contains("2 of 5 footprints lack"), "{:?}", layer.notes);
}

#[test]
fn wide_intervals_carry_a_note() {
    let names = FakeNames::black_bodies(&[2]);
    assert!(layer("bt(800..830)", &names).notes.is_empty());
    assert!(layer("bt(800..830.5)", &names).notes[0].contains("30.5 cm-1 wide"));
}

#[test]
fn stored_temperatures_are_taken_as_they_are() {
    let mut names = FakeNames::black_bodies(&[2]);
    names.temperatures = true;
    // The fake adds 1000 K to what it hands out as stored.
    assert!((layer("bt(900)", &names).values[1] - 1200.5).abs() < 1e-9);
    assert_eq!(layer("rad(900)", &names).values[1], planck(900.0, 200.5));
    // Of an interval the radiances are averaged, also here.
    assert!((layer("bt(899.5..900.5)", &names).values[1] - 200.5).abs() < 1e-9);
    assert!((layer("bt(900) - bt(899.5..900.5)", &names).values[0] - 1000.0).abs() < 1e-9);
}

#[test]
fn units_are_followed_into_the_legend() {
    let names = FakeNames::black_bodies(&[3, 3]).with("a", &[1.0; 9]);
    for (text, unit) in [
        ("bt(900)", LayerUnit::Kelvin),
        ("bt(900) - bt(831)", LayerUnit::KelvinDifference),
        ("sd3(bt(900))", LayerUnit::KelvinDifference),
        ("mean3(bt(900))", LayerUnit::Kelvin),
        ("(bt(900) + bt(831)) / 2", LayerUnit::Kelvin),
        ("rad(900)", LayerUnit::Radiance),
        ("rad(900) / rad(831)", LayerUnit::One),
        ("planck(bt(900), 831)", LayerUnit::Radiance),
        ("bt(900) > 270", LayerUnit::Truth),
        ("bt(900) * bt(900)", LayerUnit::Unknown),
        ("min(bt(900), bt(831))", LayerUnit::Kelvin),
        ("sqrt(a)", LayerUnit::One),
        ("2", LayerUnit::One),
    ] {
        assert_eq!(layer(text, &names).unit, unit, "{text}");
    }
}

#[test]
fn neighbourhoods_take_any_expression_and_name_their_guess() {
    let names = FakeNames::black_bodies(&[3, 3]);
    // 200 to 204 K in steps of 0.5: the deviation of 0..8 is sqrt(60/9), of half of it the half.
    let layer = layer("sd3(bt(900) + 10) * 2", &names);
    assert!((layer.values[4] - (60.0_f64 / 9.0).sqrt()).abs() < 1e-9, "{:?}", layer.values);
    assert!(layer.notes.iter().any(|note| note.contains("order of the array")));
    let nested = evaluate(&expression("max3(range3(bt(900)))"), &names).unwrap();
    // range3 of the middle is 4 K, of the four edges less; five of nine are there.
    assert!((nested.values[4] - 4.0).abs() < 1e-9);
}

#[test]
fn clusters_are_the_detectors_at_one_place() {
    // 0.5 K from footprint to footprint, so 1.5 K from the first of four to the last.
    let names = FakeNames::black_bodies(&[3, 2, 4]);
    let found = layer("range_cluster(bt(900))", &names);
    assert_eq!(found.unit, LayerUnit::KelvinDifference);
    assert!(found.values.iter().all(|range| (range - 1.5).abs() < 1e-9));
    assert!(found.notes.is_empty(), "nothing is guessed: {:?}", found.notes);
    let alone = error("sd_cluster(bt(900))", &FakeNames::black_bodies(&[6, 4]));
    assert!(alone.to_string().contains("no clusters"), "{alone}");
    assert!(!alone.is_unknown_name());
}

#[test]
fn whether_a_value_is_missing_can_be_asked() {
    assert_eq!((value("missing(a)", NAN, 0.0), value("missing(a)", 3.0, 0.0)), (1.0, 0.0));
    assert_eq!(value("missing(a / b)", 1.0, 0.0), 1.0);
    assert_eq!(value("not missing(a) and b", 2.0, 1.0), 1.0);
}

#[test]
fn what_hardly_goes_together_is_noted() {
    let names = FakeNames::black_bodies(&[2]).defining("odd", "bt(900) - rad(900)");
    for text in ["1 + odd", "bt(900) > rad(900)", "min(bt(900), rad(900), 1)"] {
        let notes = layer(text, &names).notes.join("; ");
        assert!(notes.contains("puts temperature and radiance together"), "{text}: {notes}");
    }
    for text in ["bt(900) - bt(831) + 1", "bt(900) * rad(900)", "sd3(bt(900)) < bt(900)"] {
        assert!(!layer(text, &names).notes.join("").contains("together"), "{text}");
    }
}

#[test]
fn definitions_stand_for_what_they_say() {
    let names = FakeNames::black_bodies(&[3, 3])
        .defining("window", "bt(900)")
        .defining("spread", "sd3(window)")
        .defining("twice", "spread + spread");
    let twice = layer("twice - 2 * sd3(bt(900))", &names);
    assert_eq!(twice.values[4], 0.0);
    assert_eq!(twice.unit, LayerUnit::KelvinDifference);
    assert_eq!(twice.channels.len(), 1);
    assert!(!twice.notes.is_empty(), "the note about neighbours comes through definitions");
}

#[test]
fn circles_and_long_chains_of_definitions_end() {
    let mut names = FakeNames::black_bodies(&[1])
        .defining("a", "1 + b")
        .defining("b", "a")
        .defining("c", "c")
        .defining("d0", "1");
    assert!(error("a", &names).to_string().contains("leads back to a"));
    assert!(error("2 * c", &names).to_string().contains("leads back to c"));
    // Each uses the one before it twice: 2^5000 if they were written out.
    for number in 1..5000 {
        names = names.defining(&format!("d{number}"), &format!("d{0} - d{0} + 1", number - 1));
    }
    assert_eq!(layer("d4999", &names).values[0], 1.0);
}

#[test]
fn unknown_names_are_pointed_at_with_near_ones() {
    let names = FakeNames::black_bodies(&[1]);
    let unknown = error("bt(900) + latt", &names);
    assert!(unknown.is_unknown_name());
    assert_eq!(
        unknown.to_string(),
        "there is no latt; did you mean lat or land?\n    bt(900) + latt\n              ^^^^"
    );
    let absent = error("land > 0.5", &names);
    assert!(!absent.is_unknown_name());
    assert!(absent.to_string().starts_with("the file gives no land fraction\n    land"));
}

#[test]
fn a_place_without_a_channel_names_the_nearest() {
    let names = FakeNames::black_bodies(&[1]);
    let error_text = |text| error(text, &names).to_string();
    assert!(error_text("bt(500)").contains("the nearest is at 600 cm-1"));
    let between = "no channel between 700.2 and 700.4 cm-1; the nearest is at 700 cm-1";
    assert!(error_text("1 + bt(700.2..700.4)").contains(between));
    assert!(error_text("bt(300..400)").contains("the nearest is at 600 cm-1"));
    assert_eq!(&"1 + bt(500)"[error("1 + bt(500)", &names).mistake().span.clone()], "bt(500)");
}

#[test]
fn many_at_once_are_the_same_as_one_by_one() {
    let names = FakeNames::black_bodies(&[30, 30]).defining("window", "bt(900)");
    let texts =
        ["bt(900)", "window - bt(831)", "bt(500)", "sd3(window)", "rad(700..720)", "nonsense"];
    let expressions: Vec<Expression> = texts.iter().map(|text| expression(text)).collect();
    let all = evaluate_all(&expressions.iter().collect::<Vec<_>>(), &names);
    for (expression, together) in expressions.iter().zip(all) {
        match (evaluate(expression, &names), together) {
            (Ok(alone), Ok(together)) => {
                assert!(same(&alone.values, &together.values), "{}", expression.text());
                assert_eq!(alone.notes, together.notes);
                assert_eq!(together.expression, expression.text());
            }
            (Err(alone), Err(together)) => assert_eq!(alone, together),
            _ => panic!("{} fails alone or together only", expression.text()),
        }
    }
}

#[test]
fn only_the_channels_that_are_used_are_asked_for() {
    let names = FakeNames::black_bodies(&[1]);
    let expressions = [expression("bt(900) - bt(831)"), expression("rad(830..832) + bt(500)")];
    let needed = channels_needed(&expressions.iter().collect::<Vec<_>>(), &names);
    let wavenumbers: Vec<f64> = needed.iter().map(|channel| channel.wavenumber).collect();
    assert_eq!(wavenumbers, [831.0, 900.0], "the second expression fails and asks for nothing");
}

#[test]
fn what_is_still_being_read_is_said() {
    let names = FakeNames::black_bodies(&[1]);
    assert!(layer("bt(900)", &names).notes.is_empty());
    assert_eq!(layer("bt(2750)", &names).notes, ["the granule is still being read"]);
}

#[test]
fn the_number_of_threads_changes_nothing() {
    // Enough footprints that several threads share them; temperatures beyond any scene's do no harm.
    let names = FakeNames::black_bodies(&[100, 80, 9]);
    let texts = ["sd3(bt(900)) + bt(700..730)", "mean3(rad(900) / rad(1231)) ^ 0.3"];
    for text in texts {
        let with = |threads: usize| {
            let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
            pool.install(|| layer(text, &names))
        };
        assert!(same(&with(1).values, &with(5).values), "{text}");
    }
}

#[test]
fn cutting_before_or_after_gives_the_same_for_what_looks_at_one_footprint() {
    let whole = FakeNames::black_bodies(&[50, 20]);
    // The same footprints from the 300th on.
    let cut = FakeNames::new(&[700], |wavenumber, footprint| {
        planck(wavenumber, 200.0 + 0.5 * (footprint + 300) as f64)
    });
    for text in ["bt(900) - bt(830..840)", "ln(rad(1231)) > 2 and bt(900) < 300"] {
        let (whole, cut) = (layer(text, &whole).values, layer(text, &cut).values);
        assert!(same(&whole[300..], &cut), "{text}");
    }
}
