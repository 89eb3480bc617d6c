//! Reading rulebooks: the built-in one, the document's example, and mistakes.

use super::{Rulebook, Sense, Threshold, builtin};

/// A rulebook without mistakes, to be spoiled.
const SMALL: &str = r#"format = "radsieve rulebook 1"
name = "small"
title = "for tests"

[[definitions]]
name = "window"
expression = "bt(900)"

[[families]]
name = "cold"

[[tests]]
name = "cold window"
family = "cold"
flag = "cloudy"
expression = "window"
sense = "below"
threshold = 270
softness = 3
source = "this test"
"#;

fn mistakes(text: &str) -> Vec<String> {
    match Rulebook::parse(text, "small.toml") {
        Ok(_) => Vec::new(),
        Err(error) => error.to_string().lines().map(str::to_owned).collect(),
    }
}

fn spoiled(from: &str, to: &str) -> String {
    assert!(SMALL.contains(from), "{from}");
    mistakes(&SMALL.replacen(from, to, 1)).join("\n")
}

#[test]
fn the_built_in_rulebook_has_no_mistakes() {
    let rulebook = builtin().unwrap_or_else(|error| panic!("{error}"));
    let surfaces: Vec<&str> = rulebook.surfaces.iter().map(|one| one.name.as_str()).collect();
    assert_eq!(surfaces, ["snow", "sea", "land", "unknown"]);
    assert!(rulebook.surfaces[3].places.is_empty(), "the last surface takes what is left");
    for test in &rulebook.tests {
        assert!(test.ways.iter().all(|way| !way.source.is_empty()), "{}", test.name);
    }
}

#[test]
fn what_a_rulebook_says_is_read() {
    let rulebook = Rulebook::parse(SMALL, "small.toml").unwrap();
    let test = &rulebook.tests[0];
    assert_eq!((test.name.as_str(), test.flag.as_str()), ("cold window", "cloudy"));
    assert_eq!((test.ways[0].sense, test.ways[0].softness), (Sense::Below, 3.0));
    assert!(matches!(test.ways[0].threshold, Threshold::Number(270.0)));
    assert_eq!((rulebook.doubt_cut, &rulebook.assess[..]), (0.5, &["cloudy".to_owned()][..]));
    // One surface that is everywhere, where the rulebook names none.
    assert_eq!((rulebook.surfaces.len(), &test.surfaces[..]), (1, &[0][..]));
}

#[test]
fn mistakes_are_pointed_at() {
    for (from, to, message) in [
        (
            "softness = 3",
            "softnes = 3",
            "small.toml:12: tests \"cold window\": softness is missing",
        ),
        (
            "softness = 3",
            "softness = 3\nwhan = \"lat > 0\"",
            "small.toml:20: tests \"cold window\", whan: unknown key; did you mean when?",
        ),
        ("\"below\"", "\"under\"", "sense is \"under\", expected above or below"),
        ("softness = 3", "softness = 0", "softness must be more than zero"),
        (
            "softness = 3",
            "softness = \"3\"",
            "small.toml:19: tests \"cold window\", softness: expected a number, found a text",
        ),
        ("source = \"this test\"", "", "source is missing"),
        ("\"window\"\nsense", "\"windo\"\nsense", "there is no windo; did you mean window?"),
        ("\"window\"\nsense", "\"window +\"\nsense", "expected a number, a name"),
        ("name = \"window\"", "name = \"lat\"", "the language has this name already"),
        ("name = \"window\"", "name = \"night\"", "the language has this name already"),
        ("name = \"window\"", "name = \"sd3\"", "the language has this name already"),
        ("name = \"window\"", "name = \"two words\"", "a name has letters, digits and _"),
        ("\"bt(900)\"", "\"window + 1\"", "leads back to itself"),
        (
            "family = \"cold\"\nflag",
            "family = \"clod\"\nflag",
            "there is no family clod; did you mean cold?",
        ),
        ("radsieve rulebook 1", "radsieve rulebook 2", "expected \"radsieve rulebook 1\""),
        (
            "title = \"for tests\"",
            "title = \"for tests\"\nassess = [\"clody\"]",
            "no test speaks about clody",
        ),
        (
            "threshold = 270",
            "threshold = { over = \"window\", at = [2, 1], values = [1, 2] }",
            "ascending",
        ),
        (
            "threshold = 270",
            "threshold = { over = \"window\", at = [1, 2], values = [1] }",
            "1 values do not fit 2 points",
        ),
        (
            "threshold = 270",
            "threshold = { over = [\"window\", \"lat\"], at = [[1, 2], [3, 4]], values = [[1, 2, 3], [4]] }",
            "a row of 3 values for 2 points",
        ),
        ("threshold = 270", "threshold = 270\non = [\"see\"]", "there is no surface see"),
        ("[[families]]", "[families", "small.toml:9: "),
        (
            "softness = 3",
            "softness = 3\nwhen = 'margin(\"cold windw\") > 0'",
            "there is no test called cold windw; did you mean cold window?",
        ),
        ("softness = 3", "softness = 3\nwhen = 'flag(\"dust\")'", "called dust; there are cloudy"),
        (
            "softness = 3",
            "softness = 3\nwhen = 'margin(\"cold window\") > 0'",
            "small.toml:12: tests \"cold window\": the test leads back to itself",
        ),
        ("softness = 3", "softness = 3\nwhen = 'doubt < 0.5'", "leads back to itself"),
        ("\"bt(900)\"", "'probability(\"cloudy\")'", "leads back to itself"),
        (
            "[[families]]",
            "[[surfaces]]\nname = \"odd\"\nwhere = 'flag(\"cloudy\")'\n\n[[families]]",
            "it can't ask what they say",
        ),
    ] {
        let found = spoiled(from, to);
        assert!(found.contains(message), "{to}: {found}");
    }
}

#[test]
fn all_mistakes_come_at_once_in_the_order_of_the_lines() {
    let text = SMALL
        .replace("\"bt(900)\"", "\"bt(900\"")
        .replace("\"below\"", "\"under\"")
        .replace("title", "tilte");
    let lines: Vec<usize> = Rulebook::parse(&text, "small.toml")
        .unwrap_err()
        .mistakes
        .iter()
        .map(|mistake| mistake.line)
        .collect();
    assert!(lines.len() >= 4, "{lines:?}");
    assert!(lines.is_sorted(), "{lines:?}");
}

#[test]
fn control_characters_do_not_reach_the_terminal() {
    let found = spoiled("family = \"cold\"\nflag", "family = \"\\u001b[31m\"\nflag");
    assert!(!found.contains('\u{1b}'), "{found:?}");
}

/// The example in the document is a rulebook.
#[test]
fn the_documents_example_has_no_mistakes() {
    let document = include_str!("../../docs/rules.md");
    let start = document.find("```toml\n").unwrap() + "```toml\n".len();
    let length = document[start..].find("```").unwrap();
    let example = &document[start..start + length];
    let rulebook = Rulebook::parse(example, "docs/rules.md");
    rulebook.unwrap_or_else(|error| panic!("{error}"));
}

/// Every published source of the built-in rulebook stands in the list of references.
#[test]
fn sources_stand_among_the_references() {
    let references = include_str!("../../docs/references.md");
    let rulebook = builtin().unwrap();
    let of_tests = rulebook.tests.iter().flat_map(|test| &test.ways).map(|way| &way.source);
    let of_names = rulebook.definitions.iter().map(|definition| &definition.source);
    let mut found = 0;
    for source in of_tests.chain(of_names) {
        let parts = source.split([';', ',']).map(str::trim);
        for part in parts.filter(|part| part.ends_with(|c: char| c.is_ascii_digit())) {
            let year = part.rsplit(' ').next().unwrap_or_default();
            if year.len() == 4 && (year.starts_with("19") || year.starts_with("20")) {
                assert!(references.contains(&format!("**{part}**")), "{part} of {source}");
                found += 1;
            }
        }
    }
    assert!(found > 20, "only {found} sources were recognised");
}
