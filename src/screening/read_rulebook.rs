//! From the text of a rulebook to the rulebook, or to all of its mistakes.

use std::collections::BTreeMap;
use std::ops::Range;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::catalogue_used::catalogue_used;
use super::check_names::check_names;
use super::health::HealthLimits;
use super::mistakes::RulebookError;
use super::read_threshold::threshold;
use super::rulebook::{Definition, Family, Rulebook, Surface, Test, Way};
use super::table_reader::{Notebook, TableReader};
use super::threshold::Sense;
use crate::system::{clean_text, near_names};

/// What the first key of a rulebook must say.
const FORMAT: &str = "radsieve rulebook 1";
/// Doubt from which on a footprint is doubtful, where the rulebook names none.
const DOUBT_CUT: f64 = 0.5;
/// Longer texts are no rulebooks; the limit keeps a wrong path from filling the memory.
const LONGEST: usize = 4 << 20;

impl Rulebook {
    /// Reads a rulebook. `file` names the text in messages.
    ///
    /// # Errors
    /// All mistakes at once.
    pub fn parse(text: &str, file: &str) -> Result<Rulebook, RulebookError> {
        let mut notebook = Notebook::new(text);
        let rulebook = read(text, &mut notebook);
        let mut mistakes = notebook.mistakes;
        mistakes.sort_by_key(|mistake| mistake.line);
        match rulebook {
            Some(rulebook) if mistakes.is_empty() => Ok(rulebook),
            _ => Err(RulebookError { file: clean_text(file), mistakes }),
        }
    }
}

fn read(text: &str, notebook: &mut Notebook) -> Option<Rulebook> {
    if text.len() > LONGEST {
        notebook.note(&(0..0), "", format!("longer than {LONGEST} bytes"));
        return None;
    }
    let (document, errors) = DeTable::parse_recoverable(text);
    for error in &errors {
        let span = error.span().unwrap_or(0..0);
        notebook.note(&span, "", clean_text(error.message()));
    }
    // What the parser mended may mislead; one thing at a time.
    if !errors.is_empty() {
        return None;
    }
    let mut top = TableReader::new(notebook, "", 0..0, document.get_ref());
    check_format(&mut top);
    let name = top.needed_text("name").unwrap_or_default();
    let title = top.needed_text("title").unwrap_or_default();
    let note = top.text("note").unwrap_or_default();
    let calibration = top.text("calibration").unwrap_or_else(|| "none".to_owned());
    let doubt_cut = doubt_cut(&mut top);
    let assess = top.texts("assess");
    let definitions = top.tables("definitions");
    let families = top.tables("families");
    let surfaces = top.tables("surfaces");
    let tests = top.tables("tests");
    if tests.is_empty() {
        top.wrong_here("there are no tests: write at least one, headed [[tests]]");
    }
    let health = top.value("health");
    top.finish();
    let health = health.map(|value| health_limits(notebook, value)).unwrap_or_default();
    let mut definitions = each(notebook, "definitions", &definitions, definition);
    let families = each(notebook, "families", &families, family);
    let mut surfaces = each(notebook, "surfaces", &surfaces, surface);
    if surfaces.is_empty() {
        surfaces.push((0..0, anywhere()));
    }
    let tests = each(notebook, "tests", &tests, |table| test(table, &surfaces));
    let taken = catalogue_used(&definitions, &surfaces, &tests);
    let fingerprint = fingerprint(text, &taken);
    definitions.extend(taken.into_iter().map(|definition| (0..0, definition)));
    let by_name = definitions.iter().map(|(_, d)| (d.name.clone(), d.expression.clone())).collect();
    let plain = Plain {
        definitions: &definitions,
        families: &families,
        surfaces: &surfaces,
        tests: &tests,
    };
    check_names(notebook, &by_name, &plain);
    let mut rulebook = Rulebook {
        name,
        title,
        note,
        calibration,
        doubt_cut,
        assess: Vec::new(),
        definitions: without_spans(definitions),
        families: without_spans(families),
        surfaces: without_spans(surfaces),
        tests: without_spans(tests),
        health,
        fingerprint,
        by_name,
    };
    rulebook.assess = assessed(notebook, &rulebook, assess);
    Some(rulebook)
}

/// The text's hash, and that of what it takes from the catalogue: another meaning of a name makes
/// another rulebook.
fn fingerprint(text: &str, taken: &[Definition]) -> String {
    let mut hash = blake3::Hasher::new();
    hash.update(text.as_bytes());
    for definition in taken {
        hash.update(format!("\n{} = {}", definition.name, definition.expression).as_bytes());
    }
    hash.finalize().to_hex()[..12].to_owned()
}

fn health_limits(notebook: &mut Notebook, value: &Spanned<DeValue<'_>>) -> HealthLimits {
    let Some(table) = value.get_ref().as_table() else {
        notebook.note(&value.span(), "health", "expected a table headed [health]");
        return HealthLimits::default();
    };
    let mut reader = TableReader::new(notebook, "health", value.span(), table);
    let limits = HealthLimits::read(&mut reader);
    reader.finish();
    limits
}

/// What was read, with its places, before it is known to be right.
pub struct Plain<'p> {
    /// Definitions.
    pub definitions: &'p [(Range<usize>, Definition)],
    /// Families.
    pub families: &'p [(Range<usize>, Family)],
    /// Surfaces.
    pub surfaces: &'p [(Range<usize>, Surface)],
    /// Tests.
    pub tests: &'p [(Range<usize>, Test)],
}

fn without_spans<T>(things: Vec<(Range<usize>, T)>) -> Vec<T> {
    things.into_iter().map(|(_, thing)| thing).collect()
}

fn check_format(top: &mut TableReader<'_, '_>) {
    match top.needed_text("format") {
        Some(format) if format != FORMAT => {
            let what = format!("format is \"{}\", expected \"{FORMAT}\"", clean_text(&format));
            top.wrong_here(what);
        }
        _ => {}
    }
}

fn doubt_cut(top: &mut TableReader<'_, '_>) -> f64 {
    let cut = top.number("doubt_cut").unwrap_or(DOUBT_CUT);
    if !(0.0..=1.0).contains(&cut) {
        top.wrong_here("doubt_cut must lie between 0 and 1");
    }
    cut
}

/// The flags without whose tests nothing is assessed: all of them, where none is named.
fn assessed(
    notebook: &mut Notebook,
    rulebook: &Rulebook,
    named: Option<Vec<String>>,
) -> Vec<String> {
    let flags = rulebook.flags();
    let Some(named) = named else { return flags.into_iter().map(str::to_owned).collect() };
    for name in named.iter().filter(|name| !flags.contains(&name.as_str())) {
        let what = format!("no test speaks about {}{}", clean_text(name), meant(name, &flags));
        notebook.note(&(0..0), "assess", what);
    }
    named
}

/// `; did you mean …?` where a name is near.
pub fn meant(name: &str, known: &[&str]) -> String {
    match near_names(name, known.iter().copied()).first() {
        Some(near) => format!("; did you mean {near}?"),
        None => format!("; there are {}", known.join(", ")),
    }
}

/// Reads each table of an array; the path to it is its name where it has one.
fn each<'d, T>(
    notebook: &mut Notebook,
    key: &str,
    tables: &[(Range<usize>, &'d DeTable<'d>)],
    mut read: impl FnMut(&mut TableReader<'_, 'd>) -> Option<T>,
) -> Vec<(Range<usize>, T)> {
    let mut things = Vec::new();
    for (place, (span, table)) in tables.iter().enumerate() {
        let name = table.iter().find(|(name, _)| name.get_ref().as_ref() == "name");
        let path = match name.and_then(|(_, value)| value.get_ref().as_str()) {
            Some(name) => format!("{key} \"{}\"", clean_text(name)),
            None => format!("{key}, the {}", ordinal(place + 1)),
        };
        let mut reader = TableReader::new(notebook, &path, span.clone(), table);
        let thing = read(&mut reader);
        reader.finish();
        things.extend(thing.map(|thing| (span.clone(), thing)));
    }
    things
}

fn ordinal(number: usize) -> String {
    let ending = match (number % 10, number % 100) {
        (_, 11..=13) => "th",
        (1, _) => "st",
        (2, _) => "nd",
        (3, _) => "rd",
        _ => "th",
    };
    format!("{number}{ending}")
}

fn definition(table: &mut TableReader<'_, '_>) -> Option<Definition> {
    let name = table.needed_text("name");
    let expression = table.needed_expression("expression");
    let unit = table.text("unit").unwrap_or_default();
    let usual = table.value("usual").and_then(|value| {
        let numbers = table.numbers("usual", value)?;
        match numbers[..] {
            [low, high] if low <= high => Some((low, high)),
            _ => {
                table.wrong("usual", value, "expected two numbers, the smaller one first");
                None
            }
        }
    });
    let shows = table.text("shows").unwrap_or_default();
    let fails = table.text("fails").unwrap_or_default();
    let source = table.text("source").unwrap_or_default();
    Some(Definition { name: name?, expression: expression?, unit, usual, shows, fails, source })
}

fn family(table: &mut TableReader<'_, '_>) -> Option<Family> {
    let sees = table.text("sees").unwrap_or_default();
    let optional = table.truth("optional");
    Some(Family { name: table.needed_text("name")?, sees, optional })
}

fn anywhere() -> Surface {
    Surface {
        name: "anywhere".to_owned(),
        places: Vec::new(),
        unknown: false,
        note: String::new(),
        start: BTreeMap::new(),
        weights: BTreeMap::new(),
    }
}

fn surface(table: &mut TableReader<'_, '_>) -> Option<Surface> {
    let name = table.needed_text("name");
    let places = table.expressions("where");
    let unknown = table.truth("unknown");
    let note = table.text("note").unwrap_or_default();
    let start = table.numbers_by_name("start").into_iter().map(|(name, _, n)| (name, n)).collect();
    let mut weights = BTreeMap::new();
    if let Some(value) = table.value("weights") {
        match value.get_ref().as_table() {
            None => table.wrong("weights", value, "expected [surfaces.weights.<flag>] tables"),
            Some(flags) => {
                for (flag, families) in flags.iter() {
                    let of_flag = table.named_numbers("weights", families);
                    for (family, span, weight) in &of_flag {
                        if *weight < 0.0 {
                            let key = format!("{}, weights", table.path);
                            let what = format!("the weight of {family} is below zero");
                            table.notebook.note(span, &key, what);
                        }
                    }
                    let of_flag = of_flag.into_iter().map(|(name, _, n)| (name, n)).collect();
                    weights.insert(flag.get_ref().to_string(), of_flag);
                }
            }
        }
    }
    Some(Surface { name: name?, places, unknown, note, start, weights })
}

fn test(table: &mut TableReader<'_, '_>, surfaces: &[(Range<usize>, Surface)]) -> Option<Test> {
    let name = table.needed_text("name");
    let family = table.needed_text("family");
    let flag = table.needed_text("flag");
    let on = on_surfaces(table, surfaces);
    let when = table.expression("when");
    let halved_when = table.expression("halved_when");
    let against = table.number("against").unwrap_or(1.0);
    if !(0.0..=1.0).contains(&against) {
        table.wrong_here("against must lie between 0 and 1");
    }
    let first = way(table, None);
    let substitutes = table.tables("substitutes");
    let path = table.path.clone();
    let mut ways: Vec<Way> = first.into_iter().collect();
    let model = ways.first().cloned();
    let others = each(table.notebook, &format!("{path}, substitutes"), &substitutes, |table| {
        way(table, model.as_ref())
    });
    ways.extend(without_spans(others));
    (!ways.is_empty()).then_some(())?;
    Some(Test {
        name: name?,
        family: family?,
        flag: flag?,
        surfaces: on,
        when,
        halved_when,
        against,
        ways,
    })
}

fn on_surfaces(
    table: &mut TableReader<'_, '_>,
    surfaces: &[(Range<usize>, Surface)],
) -> Vec<usize> {
    let Some(named) = table.texts("on") else { return (0..surfaces.len()).collect() };
    let known: Vec<&str> = surfaces.iter().map(|(_, surface)| surface.name.as_str()).collect();
    let mut on = Vec::new();
    for name in named {
        match known.iter().position(|known| *known == name) {
            Some(place) => on.push(place),
            None => {
                let what =
                    format!("there is no surface {}{}", clean_text(&name), meant(&name, &known));
                table.wrong_here(what);
            }
        }
    }
    on
}

/// One way to do a test; a substitute takes over the sense of the test that it stands for.
fn way(table: &mut TableReader<'_, '_>, stands_for: Option<&Way>) -> Option<Way> {
    let expression = table.needed_expression("expression");
    let sense = match (table.value("sense"), stands_for) {
        (None, Some(other)) => Some(other.sense),
        _ => sense(table),
    };
    let threshold = threshold(table);
    let softness = match (table.number("softness"), stands_for) {
        (Some(softness), _) if softness > 0.0 => Some(softness),
        (None, Some(other)) => Some(other.softness),
        (None, None) => {
            table.wrong_here("softness is missing: how far from the threshold the margin is 1");
            None
        }
        _ => {
            table.wrong_here("softness must be more than zero");
            None
        }
    };
    let source = match (table.text("source"), stands_for) {
        (Some(source), _) if !source.is_empty() => source,
        (_, Some(other)) => other.source.clone(),
        _ => {
            table.wrong_here("source is missing: where the test comes from");
            String::new()
        }
    };
    let note = table.text("note").unwrap_or_default();
    let (expression, sense) = (expression?, sense?);
    Some(Way { expression, sense, threshold: threshold?, softness: softness?, source, note })
}

fn sense(table: &mut TableReader<'_, '_>) -> Option<Sense> {
    let word = table.needed_text("sense")?;
    let sense = [Sense::Above, Sense::Below].into_iter().find(|sense| sense.word() == word);
    if sense.is_none() {
        table.wrong_here(format!("sense is \"{}\", expected above or below", clean_text(&word)));
    }
    sense
}
