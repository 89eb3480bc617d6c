//! Names in a rulebook: each once, none taken by the language, none that means nothing.

use std::collections::BTreeMap;
use std::ops::Range;

use super::cloud_height::CLOUD_HEIGHT_NAMES;
use super::departures::RANKED_NAMES;
use super::order::{asked, stages};
use super::read_rulebook::{Plain, meant};
use super::rulebook::Test;
use super::table_reader::Notebook;
use super::threshold::Threshold;
use crate::layers::{DERIVED_NAMES, Expression, FRIENDLY_NAMES, INDICES, Judgement, functions};
use crate::system::clean_text;

/// Notes what is wrong with the names.
pub fn check_names(
    notebook: &mut Notebook,
    by_name: &BTreeMap<String, Expression>,
    plain: &Plain<'_>,
) {
    once(notebook, "definitions", plain.definitions, |thing| &thing.name);
    once(notebook, "families", plain.families, |thing| &thing.name);
    once(notebook, "surfaces", plain.surfaces, |thing| &thing.name);
    once(notebook, "tests", plain.tests, |thing| &thing.name);
    for (span, definition) in plain.definitions {
        new_word(notebook, span, &definition.name);
    }
    for (span, key, expression) in expressions(plain) {
        known_words(notebook, &span, &key, expression, by_name);
        known_judgements(notebook, &span, &key, expression, plain);
    }
    circles(notebook, by_name, plain);
    asking(notebook, by_name, plain);
    families(notebook, plain);
    weights(notebook, plain);
}

fn once<T>(
    notebook: &mut Notebook,
    key: &str,
    things: &[(Range<usize>, T)],
    name: impl Fn(&T) -> &String,
) {
    for (place, (span, thing)) in things.iter().enumerate() {
        if things[..place].iter().any(|(_, other)| name(other) == name(thing)) {
            let key = format!("{key} \"{}\"", clean_text(name(thing)));
            notebook.note(span, &key, "the name is used twice");
        }
    }
}

/// Names that a rulebook can't give away, for expressions mean something by them already.
fn taken() -> impl Iterator<Item = &'static str> {
    fields().chain(functions().map(|(name, _)| name)).chain(["and", "or", "not"])
}

fn new_word(notebook: &mut Notebook, span: &Range<usize>, name: &str) {
    let key = format!("definitions \"{}\"", clean_text(name));
    if taken().any(|word| word == name) {
        notebook.note(span, &key, "the language has this name already; choose another");
    } else if !Expression::parse(name).is_ok_and(|read| read.names() == [name]) {
        notebook.note(span, &key, "a name has letters, digits and _, and no digit first");
    }
}

/// Names of the granule: fields, what follows from them, what is retrieved.
fn fields() -> impl Iterator<Item = &'static str> {
    let fields = FRIENDLY_NAMES.iter().chain(DERIVED_NAMES).map(|field| field.name);
    let retrieved = CLOUD_HEIGHT_NAMES.iter().chain(&RANKED_NAMES);
    fields.chain(retrieved.map(|(name, _)| *name))
}

fn known_words(
    notebook: &mut Notebook,
    span: &Range<usize>,
    key: &str,
    expression: &Expression,
    by_name: &BTreeMap<String, Expression>,
) {
    for name in expression.names() {
        if by_name.contains_key(name) || fields().any(|field| field == name) {
            continue;
        }
        let indices = INDICES.iter().map(|index| index.name);
        let mut known: Vec<&str> = by_name.keys().map(String::as_str).collect();
        for name in fields().chain(indices) {
            known.push(name);
        }
        let what = format!("there is no {name}{}", meant(name, &known));
        notebook.note(span, key, format!("{what}\n    {}", clean_text(expression.text())));
    }
}

/// Flags and tests whose results are asked for: each must be there.
fn known_judgements(
    notebook: &mut Notebook,
    span: &Range<usize>,
    key: &str,
    expression: &Expression,
    plain: &Plain<'_>,
) {
    for (judgement, of) in expression.judgements() {
        let tests = plain.tests.iter().map(|(_, test)| test);
        let (kind, known): (&str, Vec<&str>) = match judgement {
            Judgement::Margin => ("test", tests.map(|test| test.name.as_str()).collect()),
            _ => ("flag that a test speaks about", tests.map(|test| test.flag.as_str()).collect()),
        };
        if let Some(of) = of.filter(|of| !known.contains(of)) {
            let what = format!("there is no {kind} called {}{}", clean_text(of), meant(of, &known));
            notebook.note(span, key, format!("{what}\n    {}", clean_text(expression.text())));
        }
    }
}

/// Surfaces are chosen before any test runs, and tests must not lead back to themselves.
fn asking(notebook: &mut Notebook, by_name: &BTreeMap<String, Expression>, plain: &Plain<'_>) {
    for (span, surface) in plain.surfaces {
        let asks = |place: &Expression| !asked(place, by_name).is_empty();
        if surface.places.iter().any(asks) {
            let key = format!("surfaces \"{}\", where", clean_text(&surface.name));
            let what = "which surface holds is known before the tests: it can't ask what they say";
            notebook.note(span, &key, what);
        }
    }
    let tests: Vec<&Test> = plain.tests.iter().map(|(_, test)| test).collect();
    for place in stages(&tests, by_name).err().into_iter().flatten() {
        let (span, test) = &plain.tests[place];
        let what = "the test leads back to itself, or asks another one that does: the doubt about a \
                    footprint follows from all tests, that about a flag and whether it is set from all of \
                    its tests";
        notebook.note(span, &format!("tests \"{}\"", clean_text(&test.name)), what);
    }
}

/// Every expression of the rulebook with its place.
fn expressions<'p>(plain: &'p Plain<'p>) -> Vec<(Range<usize>, String, &'p Expression)> {
    let mut all = Vec::new();
    for (span, definition) in plain.definitions {
        let key = format!("definitions \"{}\"", definition.name);
        all.push((span.clone(), key, &definition.expression));
    }
    for (span, surface) in plain.surfaces {
        let key = format!("surfaces \"{}\", where", surface.name);
        all.extend(surface.places.iter().map(|place| (span.clone(), key.clone(), place)));
    }
    for (span, test) in plain.tests {
        let mut add = |key: &str, expression: &'p Expression| {
            all.push((span.clone(), format!("tests \"{}\", {key}", test.name), expression));
        };
        test.when.iter().for_each(|when| add("when", when));
        test.halved_when.iter().for_each(|when| add("halved_when", when));
        for way in &test.ways {
            add("expression", &way.expression);
            match &way.threshold {
                Threshold::Number(_) => {}
                Threshold::Expression(threshold) => add("threshold", threshold),
                Threshold::Table(table) => table.over.iter().for_each(|over| add("over", over)),
            }
        }
    }
    all
}

/// Definitions that lead back to themselves: what is left after all others were worked out.
fn circles(notebook: &mut Notebook, by_name: &BTreeMap<String, Expression>, plain: &Plain<'_>) {
    let mut left: Vec<&(Range<usize>, _)> = plain.definitions.iter().collect();
    loop {
        let before = left.len();
        let open: Vec<&str> = left.iter().map(|(_, d)| d.name.as_str()).collect();
        left.retain(|(_, definition)| {
            let uses = definition.expression.names();
            uses.iter().any(|name| by_name.contains_key(*name) && open.contains(name))
        });
        if left.len() == before {
            break;
        }
    }
    for (span, definition) in left {
        let key = format!("definitions \"{}\"", definition.name);
        notebook.note(span, &key, "the definition leads back to itself, or needs one that does");
    }
}

fn families(notebook: &mut Notebook, plain: &Plain<'_>) {
    let known: Vec<&str> = plain.families.iter().map(|(_, family)| family.name.as_str()).collect();
    for (span, test) in plain.tests {
        if !known.contains(&test.family.as_str()) {
            let family = clean_text(&test.family);
            let what = match known.is_empty() {
                true => format!("there is no family {family}: write it down under [[families]]"),
                false => format!("there is no family {family}{}", meant(&test.family, &known)),
            };
            notebook.note(span, &format!("tests \"{}\", family", clean_text(&test.name)), what);
        }
    }
}

/// Starting points and weights of flags and families that no test is about.
fn weights(notebook: &mut Notebook, plain: &Plain<'_>) {
    let tests = || plain.tests.iter().map(|(_, test)| test);
    let flags: Vec<&str> = tests().map(|test| test.flag.as_str()).collect();
    for (span, surface) in plain.surfaces {
        let mut wrong = |key: &str, name: &str, what: String| {
            let key = format!("surfaces \"{}\", {key}", clean_text(&surface.name));
            notebook.note(span, &key, format!("{} {what}", clean_text(name)));
        };
        for flag in surface.start.keys().chain(surface.weights.keys()) {
            if !flags.contains(&flag.as_str()) {
                wrong("start or weights", flag, "is no flag that a test speaks about".to_owned());
            }
        }
        for (flag, weights) in &surface.weights {
            for family in weights.keys() {
                if !tests().any(|test| test.flag == *flag && test.family == *family) {
                    wrong("weights", family, format!("has no test that speaks about {flag}"));
                }
            }
        }
    }
}
