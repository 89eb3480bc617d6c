//! What the grammar reads, what it refuses, and how it points.

use proptest::prelude::*;

use super::place::Place;
use super::tree::{
    Around, Function, Infix, Judgement, Kind, Node, OfCalculated, Prefix, Quantity, Statistic,
    Where,
};
use super::{Expression, Mistake};
use crate::units::SpectralUnit;

fn plain(text: &str) -> String {
    Expression::parse(text).unwrap_or_else(|error| panic!("{error}")).to_string()
}

fn mistake(text: &str) -> Mistake {
    match Expression::parse(text) {
        Ok(expression) => panic!("{text} was read as {expression}"),
        Err(error) => error.mistake().clone(),
    }
}

/// The part of the text that the message points at.
fn pointed(text: &str) -> &str {
    &text[mistake(text).span]
}

/// Fully parenthesised, to see what binds to what.
fn grouped(text: &str) -> String {
    fn group(node: &Node) -> String {
        match &node.kind {
            Kind::Infix(infix, left, right) => {
                format!("({} {} {})", group(left), infix.symbol(), group(right))
            }
            Kind::Prefix(Prefix::Negate, operand) => format!("(-{})", group(operand)),
            Kind::Prefix(Prefix::Not, operand) => format!("(not {})", group(operand)),
            _ => node.to_string(),
        }
    }
    group(Expression::parse(text).unwrap().tree())
}

#[test]
fn operators_bind_as_in_mathematics() {
    for (text, expected) in [
        ("1 + 2 * 3", "(1 + (2 * 3))"),
        ("1 - 2 - 3", "((1 - 2) - 3)"),
        ("8 / 4 / 2", "((8 / 4) / 2)"),
        ("-2^2", "(-(2 ^ 2))"),
        ("2^3^2", "(2 ^ (3 ^ 2))"),
        ("2^-1", "(2 ^ (-1))"),
        ("2^-1^2", "(2 ^ (-(1 ^ 2)))"),
        ("-a * b", "((-a) * b)"),
        ("a - -b", "(a - (-b))"),
        ("+a", "a"),
        ("a < b + 1", "(a < (b + 1))"),
        ("not a < b", "(not (a < b))"),
        ("not a and b", "((not a) and b)"),
        ("a or b and c", "(a or (b and c))"),
        ("a or b or c", "((a or b) or c)"),
        ("(a or b) and c", "((a or b) and c)"),
        ("not not a", "(not (not a))"),
    ] {
        assert_eq!(grouped(text), expected, "{text}");
    }
}

#[test]
fn places_and_intervals_are_read_with_their_units() {
    for (text, expected) in [
        ("bt(900)", "bt(900)"),
        ("bt( 900 cm-1 )", "bt(900)"),
        ("bt(900cm^-1)", "bt(900)"),
        ("bt(27 THz)", "bt(27THz)"),
        ("bt(11.1um)", "bt(11.1um)"),
        ("bt(11.1 \u{b5}m)", "bt(11.1um)"),
        ("bt(11.1\u{3bc}m)", "bt(11.1um)"),
        ("bt(11100nm)", "bt(11100nm)"),
        ("rad(66750m-1)", "rad(66750m-1)"),
        ("bt(830..840)", "bt(830..840)"),
        ("bt(830.5 .. 840.)", "bt(830.5..840)"),
        ("bt(.5e3..8.4E+2)", "bt(500..840)"),
        ("bt(10um..12um)", "bt(10um..12um)"),
        ("bt(10..12um)", "bt(10um..12um)"),
        ("bt(10um..12)", "bt(10um..12um)"),
        ("bt(900cm-1..12um)", "bt(12um..900cm-1)"),
        ("planck(280, 11um)", "planck(280, 11um)"),
        ("sd3(bt(900))", "sd3(bt(900))"),
        ("range_cluster( bt(900) )", "range_cluster(bt(900))"),
        ("doubt>0.5", "doubt > 0.5"),
        ("doubt( \"cloudy\" )", "doubt(\"cloudy\")"),
        ("margin(\"T01 gross window\") < 0", "margin(\"T01 gross window\") < 0"),
        ("var(\"/q c/a\\\"b\\\\\")", "var(\"/q c/a\\\"b\\\\\")"),
        ("min(a,b , 3)", "min(a, b, 3)"),
    ] {
        assert_eq!(plain(text), expected, "{text}");
    }
}

#[test]
fn wavelengths_are_put_in_the_order_of_wavenumbers() {
    let expression = Expression::parse("bt(10um..12.5um)").unwrap();
    let Kind::Spectral(Quantity::BrightnessTemperature, Where::Between(low, high)) =
        expression.tree().kind
    else {
        panic!("no interval")
    };
    assert_eq!((low.wavenumber(), high.wavenumber()), (800.0, 1000.0));
}

#[test]
fn names_are_listed_once_each() {
    let expression = Expression::parse("lat + lon * lat - var(\"x\")").unwrap();
    assert_eq!(expression.names(), ["lat", "lon"]);
}

#[test]
fn messages_point_at_the_place() {
    for (text, place) in [
        ("bt(900", ""),
        ("", ""),
        ("   ", ""),
        ("bt(900) +", ""),
        ("bt(900) + * 3", "*"),
        ("2 ** 3", "*"),
        ("bt(900))", ")"),
        ("bt(900 kg)", "kg"),
        ("bt(lat)", "lat"),
        ("bt(0)", "0"),
        ("bt(840..830)", "840..830"),
        ("bt(12um..10um)", "12um..10um"),
        ("bt(830..)", ")"),
        ("lat = 3", "="),
        ("lat && lon", "&"),
        ("1 < lat < 3", "<"),
        ("sdd3(bt(900))", "sdd3"),
        ("bt + 1", "bt"),
        ("flag", "flag"),
        ("margin(T01)", "T01"),
        ("min(1)", "min"),
        ("abs(1, 2)", "abs"),
        ("lat lon", "lon"),
        ("and 3", "and"),
        ("lat + or", "or"),
        ("var(quality)", "quality"),
        ("var(\"\")", "\"\""),
        ("var(\"abc", "\"abc"),
        ("1e999 + 1", "1e999"),
        ("2 * not lat", "not"),
        ("lat \u{2212} 3", "\u{2212}"),
    ] {
        assert_eq!(pointed(text), place, "{text}: {:?}", mistake(text));
        assert!(!mistake(text).expected.is_empty(), "{text}: nothing said to be expected");
    }
}

#[test]
fn near_functions_are_offered() {
    assert_eq!(mistake("sdd3(bt(900))").near[0], "sd3");
    let told = Expression::parse("mean4(bt(900))").unwrap_err().to_string();
    assert!(told.contains("there is no function mean4") && told.contains("mean mean3?"), "{told}");
    assert_eq!(mistake("arctan(3)").near, Vec::<String>::new());
    assert!(mistake("11.1um").expected.ends_with("stands in bt or rad, as in bt(11.1um)"));
    assert_eq!(mistake("Bt(900)").near[0], "bt");
}

#[test]
fn hostile_texts_meet_limits_instead_of_the_end_of_the_stack() {
    let deep = [
        "(".repeat(2000),
        "-".repeat(4000),
        "not ".repeat(1000),
        "2^".repeat(2000),
        "abs(".repeat(1000),
    ];
    for text in &deep {
        assert!(mistake(text).what.contains("inside one another"), "{}", &text[..9]);
    }
    assert!(mistake(&"1+".repeat(2000)).what.contains("operators"));
    assert!(mistake(&format!("max(1{})", ",1".repeat(1900))).what.contains("operators"));
    assert!(mistake(&"1".repeat(5000)).what.contains("longer"));
}

/// Trees that a text can stand for.
fn trees() -> impl Strategy<Value = Node> {
    let node = |kind| Node { span: 0..0, kind };
    let place =
        (0.001f64..100_000.0, unit()).prop_map(|(value, unit)| Place::new(value, unit).unwrap());
    let interval = (1.0f64..5000.0, 1.0f64..5000.0, unit(), unit()).prop_filter_map(
        "an interval has a length",
        |(one, other, unit, other_unit)| {
            let (one, other) = (Place::new(one, unit)?, Place::new(other, other_unit)?);
            let ordered = one.wavenumber() < other.wavenumber();
            let between =
                if ordered { Where::Between(one, other) } else { Where::Between(other, one) };
            (one.value() != other.value()).then_some(between)
        },
    );
    let quantity = prop_oneof![Just(Quantity::BrightnessTemperature), Just(Quantity::Radiance)];
    let leaf = prop_oneof![
        prop_oneof![0.0f64..1e6, 0.0f64..1e-300, 1e20f64..1e300].prop_map(Kind::Number),
        "[a-z_][a-z0-9_]{3,8}"
            .prop_filter("a name", |name| super::vocabulary::callable(name).is_none())
            .prop_map(Kind::Name),
        "[ -~]{1,12}".prop_map(Kind::Variable),
        "[ -~]{1,12}".prop_map(|name| Kind::Judged(Judgement::Margin, Some(name))),
        Just(Kind::Judged(Judgement::Doubt, None)),
        (1.0f64..3000.0).prop_map(|value| Kind::Calculated(
            OfCalculated::Departure,
            Place::new(value, SpectralUnit::PerCentimetre).unwrap()
        )),
        (quantity, prop_oneof![place.prop_map(Where::At), interval])
            .prop_map(|(quantity, place)| Kind::Spectral(quantity, place)),
    ]
    .prop_map(node);
    leaf.prop_recursive(5, 40, 3, move |inner| {
        let boxed = inner.clone().prop_map(Box::new);
        prop_oneof![
            (infix(), boxed.clone(), boxed.clone())
                .prop_map(|(infix, left, right)| Kind::Infix(infix, left, right)),
            boxed.clone().prop_map(|operand| Kind::Prefix(Prefix::Negate, operand)),
            boxed.clone().prop_map(|operand| Kind::Prefix(Prefix::Not, operand)),
            (prop_oneof![Just(Around::Nine), Just(Around::Cluster)], boxed.clone()).prop_map(
                |(around, operand)| Kind::Neighbourhood(Statistic::Range, around, operand)
            ),
            inner.clone().prop_map(|operand| Kind::Call(Function::Sqrt, vec![operand])),
            prop::collection::vec(inner, 2..4).prop_map(|all| Kind::Call(Function::Max, all)),
            (boxed, 1.0f64..3000.0).prop_map(|(operand, value)| Kind::Planck(
                operand,
                Place::new(value, SpectralUnit::PerCentimetre).unwrap()
            )),
        ]
        .prop_map(node)
    })
}

fn unit() -> impl Strategy<Value = SpectralUnit> {
    prop_oneof![
        Just(SpectralUnit::PerCentimetre),
        Just(SpectralUnit::PerMetre),
        Just(SpectralUnit::Micrometre),
        Just(SpectralUnit::Nanometre),
        Just(SpectralUnit::Terahertz),
    ]
}

fn infix() -> impl Strategy<Value = Infix> {
    prop::sample::select(vec![
        Infix::Or,
        Infix::And,
        Infix::Less,
        Infix::LessOrEqual,
        Infix::Greater,
        Infix::GreaterOrEqual,
        Infix::Equal,
        Infix::NotEqual,
        Infix::Add,
        Infix::Subtract,
        Infix::Multiply,
        Infix::Divide,
        Infix::Power,
    ])
}

proptest! {
    #[test]
    fn what_is_printed_reads_back_as_the_same_tree(tree in trees()) {
        let text = tree.to_string();
        prop_assume!(text.len() < 4000);
        match Expression::parse(&text) {
            Ok(read) => prop_assert_eq!(read.tree(), &tree, "{}", text),
            Err(error) => prop_assert!(false, "{}", error),
        }
    }

    #[test]
    fn any_text_is_read_or_refused_with_a_place_inside_it(text in any::<String>()) {
        if let Err(error) = Expression::parse(&text) {
            prop_assert!(error.mistake().span.end <= text.len());
            prop_assert!(error.to_string().contains('^'));
        }
    }

    #[test]
    fn texts_of_the_right_letters_are_read_or_refused_too(
        text in "(bt|rad|sd3|var|min|not|and|or|lat|cm-1|um|\\.\\.|[-+*/^(),\"<>=!.0-9eE ]){0,24}"
    ) {
        if let Err(error) = Expression::parse(&text) {
            prop_assert!(error.mistake().span.end <= text.len());
            prop_assert!(error.to_string().contains('^'));
        }
    }
}

#[test]
fn the_document_names_every_word_and_limit() {
    let document = include_str!("../../../docs/layers.md");
    for field in super::FRIENDLY_NAMES {
        assert!(document.contains(&format!("`{}`", field.name)), "{}", field.name);
    }
    for (name, _) in super::functions() {
        assert!(document.contains(&format!("`{name}(")), "{name}");
    }
    for limit in [
        format!("at most {} characters", super::reading::LONGEST),
        format!("{} operators", super::reading::MOST_OPERATORS),
        format!("{} things inside one another", super::reading::DEEPEST),
    ] {
        assert!(document.contains(&limit), "{limit}");
    }
}
