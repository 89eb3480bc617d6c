//! The `:` command line: what was typed, understood; and what could be typed next.

use super::keys::{self, Action, BINDINGS};
use super::selecting::{Join, Wanted};
use super::side::Side;
use crate::review::Measure;
use crate::units::wavenumber_from_text;

/// A command with its words.
#[derive(Debug, Clone, PartialEq)]
pub enum Command {
    /// A named action that needs no words.
    Action(Action),
    /// Show this layer.
    Layer(String),
    /// Take the channel nearest to a wavenumber (cm-1) in hand.
    Go(f64),
    /// Flag the selection, with a reason if there is one.
    Flag(String, Option<String>),
    /// Withdraw a flag from the selection, with a reason if there is one.
    Withdraw(String, Option<String>),
    /// A second layer for the Spread; none where there are no words.
    Against(String),
    /// Compare all spectra with the one under the cursor.
    Alike(Option<Measure>),
    /// Pick all channels over so many times their noise.
    Noisy(f64),
    /// Take a test in hand, to try its threshold.
    Try(String),
    /// Select footprints.
    Select(Join, Wanted),
    /// Select all footprints on one side of a value of the layer.
    Side(Side),
    /// Planck curves of these temperatures, K; none takes them off.
    Planck(Vec<f64>),
    /// A spectrum in a file to show differences to.
    Reference(String),
    /// The colour range, in the layer's unit; none for percentiles again.
    Range(Option<(f64, f64)>),
    /// Set the granule aside, with the reason.
    Aside(String),
    /// A remark on the selection.
    Comment(String),
    /// Draw a sample for a spot check, with so many footprints with flag and without.
    Spot(usize),
    /// Export the mask into a folder, or where the campaign keeps its exports.
    Export(Option<String>),
}

/// A command that takes words.
struct Worded {
    name: &'static str,
    words: &'static str,
    help: &'static str,
    parse: fn(&str) -> Result<Command, String>,
}

const WORDED: &[Worded] = &[
    Worded {
        name: "layer",
        words: "EXPR",
        help: "show a layer, as in layer bt(900)",
        parse: layer,
    },
    Worded {
        name: "go",
        words: "CHANNEL",
        help: "channel at a wavenumber or length, as in go 900 or go 11um",
        parse: go,
    },
    Worded { name: "flag", words: "NAME [WHY]", help: "flag the selection", parse: flag },
    Worded {
        name: "withdraw",
        words: "NAME [WHY]",
        help: "withdraw a flag from the selection",
        parse: withdraw,
    },
    Worded {
        name: "against",
        words: "[EXPR]",
        help: "a second layer for the Spread; without words one again",
        parse: |words| Ok(Command::Against(words.to_owned())),
    },
    Worded {
        name: "like",
        words: "[MEASURE]",
        help: "spectra like this one, by distance (in BT), angle or components",
        parse: like,
    },
    Worded {
        name: "noisy",
        words: "[FACTOR]",
        help: "pick all channels over so many times their noise; 2 unless told",
        parse: |words| if words.is_empty() { Ok(2.0) } else { number(words) }.map(Command::Noisy),
    },
    Worded {
        name: "try",
        words: "TEST",
        help: "take a test of the rulebook in hand and try its threshold",
        parse: |words| sentence(words, "the test's name").map(Command::Try),
    },
    Worded {
        name: "select",
        words: "[+-&] WHAT",
        help: "select: a condition, test NAME for, flag NAME, no flag, all",
        parse: |words| Wanted::parse(words).map(|(join, wanted)| Command::Select(join, wanted)),
    },
    Worded {
        name: "side",
        words: "< VALUE",
        help: "select all on one side of a value of the layer",
        parse: |words| Side::parse(words).map(Command::Side),
    },
    Worded {
        name: "range",
        words: "[LOW HIGH]",
        help: "colour range; without words by percentiles",
        parse: range,
    },
    Worded {
        name: "planck",
        words: "[KELVIN …]",
        help: "Planck curves in radiances, as in planck 250 280",
        parse: planck,
    },
    Worded {
        name: "reference",
        words: "FILE",
        help: "differences to a spectrum in a CSV file",
        parse: |words| sentence(words, "the file").map(Command::Reference),
    },
    Worded {
        name: "aside",
        words: "WHY",
        help: "set the granule aside",
        parse: |words| sentence(words, "the reason").map(Command::Aside),
    },
    Worded {
        name: "comment",
        words: "TEXT",
        help: "write down a remark on the selection",
        parse: |words| sentence(words, "the remark").map(Command::Comment),
    },
    Worded {
        name: "spot",
        words: "COUNT",
        help: "judge a blind sample of so many with and without flag",
        parse: spot,
    },
    Worded { name: "export", words: "[FOLDER]", help: "export the flag mask", parse: export },
];

/// Understands a line.
///
/// # Errors
/// A message for the status line: what is wrong and what would be right.
pub fn parse(line: &str) -> Result<Command, String> {
    let line = line.trim();
    let (name, words) = line.split_once(char::is_whitespace).unwrap_or((line, ""));
    let words = words.trim();
    if let Some(worded) = WORDED.iter().find(|worded| worded.name == name) {
        return (worded.parse)(words);
    }
    let name = if name == "q" { "quit" } else { name };
    match keys::action_named(name) {
        Some(_) if !words.is_empty() => Err(format!("{name} takes no further words")),
        Some(action) => Ok(Command::Action(action)),
        None => Err(unknown(name)),
    }
}

fn unknown(name: &str) -> String {
    let near: Vec<&str> = names().filter(|known| is_near(name, known)).take(4).collect();
    if near.is_empty() {
        format!("no command {name}; Tab lists them")
    } else {
        format!("no command {name}; near it: {}", near.join(", "))
    }
}

fn is_near(typed: &str, known: &str) -> bool {
    let start: String = typed.chars().take(3).collect();
    !start.is_empty() && known.contains(&start)
}

fn number(text: &str) -> Result<f64, String> {
    match text.trim().parse::<f64>() {
        Ok(number) if number.is_finite() => Ok(number),
        _ => Err(format!("{} is no number", text.trim())),
    }
}

fn sentence(words: &str, what: &str) -> Result<String, String> {
    if words.is_empty() { Err(format!("{what} is missing")) } else { Ok(words.to_owned()) }
}

fn layer(words: &str) -> Result<Command, String> {
    sentence(words, "an expression such as bt(900)").map(Command::Layer)
}

fn go(words: &str) -> Result<Command, String> {
    wavenumber_from_text(words).map(Command::Go).map_err(|error| error.to_string())
}

fn name_and_reason(words: &str) -> Result<(String, Option<String>), String> {
    let (name, why) = words.split_once(char::is_whitespace).unwrap_or((words, ""));
    let name = sentence(name, "the flag's name")?;
    let why = why.trim();
    Ok((name, (!why.is_empty()).then(|| why.to_owned())))
}

fn flag(words: &str) -> Result<Command, String> {
    name_and_reason(words).map(|(name, why)| Command::Flag(name, why))
}

fn withdraw(words: &str) -> Result<Command, String> {
    name_and_reason(words).map(|(name, why)| Command::Withdraw(name, why))
}

fn range(words: &str) -> Result<Command, String> {
    if words.is_empty() {
        return Ok(Command::Range(None));
    }
    let (low, high) = words.split_once(char::is_whitespace).ok_or("two values, low and high")?;
    let (low, high) = (number(low)?, number(high)?);
    if low < high {
        Ok(Command::Range(Some((low, high))))
    } else {
        Err("the low end comes first".to_owned())
    }
}

fn planck(words: &str) -> Result<Command, String> {
    let kelvins: Vec<f64> = words.split_whitespace().map(number).collect::<Result<_, _>>()?;
    match kelvins.iter().all(|kelvin| (1.0..=10_000.0).contains(kelvin)) {
        true => Ok(Command::Planck(kelvins)),
        false => Err("temperatures are in K, from 1 to 10000".to_owned()),
    }
}

fn like(words: &str) -> Result<Command, String> {
    let named = Measure::ALL.into_iter().find(|measure| measure.word() == words);
    match (words, named) {
        ("", _) => Ok(Command::Alike(None)),
        (_, Some(measure)) => Ok(Command::Alike(Some(measure))),
        _ => Err("distance, angle or components".to_owned()),
    }
}

fn spot(words: &str) -> Result<Command, String> {
    match words.parse() {
        Ok(count @ 1..=1000) => Ok(Command::Spot(count)),
        _ => Err("a number from 1 to 1000 is missing, as in spot 20".to_owned()),
    }
}

fn export(words: &str) -> Result<Command, String> {
    Ok(Command::Export((!words.is_empty()).then(|| words.to_owned())))
}

/// All names, those that take words first.
pub fn names() -> impl Iterator<Item = &'static str> {
    let worded = WORDED.iter().map(|worded| worded.name);
    // `export` stands in both tables: with a folder and without.
    let plain = BINDINGS.iter().map(|binding| binding.name).filter(|name| *name != "export");
    worded.chain(plain)
}

/// Whether words may follow a name.
pub fn takes_words(name: &str) -> bool {
    WORDED.iter().any(|worded| worded.name == name)
}

/// The commands that take words, for the help: (how it is typed, what it does).
pub fn worded_help() -> impl Iterator<Item = (String, &'static str)> {
    WORDED.iter().map(|worded| (format!("{} {}", worded.name, worded.words), worded.help))
}

#[cfg(test)]
mod tests {
    use super::super::side::Relation;
    use super::*;

    #[test]
    fn lines_are_understood() {
        for (line, expected) in [
            ("undo", Command::Action(Action::Undo)),
            (" q ", Command::Action(Action::Quit)),
            ("layer bt(900) - bt(831)", Command::Layer("bt(900) - bt(831)".to_owned())),
            ("go 900.5", Command::Go(900.5)),
            ("go 10um", Command::Go(1000.0)),
            ("go 30 THz", Command::Go(30e12 / 29_979_245_800.0)),
            ("flag cloudy", Command::Flag("cloudy".to_owned(), None)),
            ("flag so2 plume edge", Command::Flag("so2".into(), Some("plume edge".into()))),
            ("range 200 300", Command::Range(Some((200.0, 300.0)))),
            ("range", Command::Range(None)),
            ("side <=230", Command::Side(Side { relation: Relation::UpTo, value: 230.0 })),
            ("planck 250 280.5", Command::Planck(vec![250.0, 280.5])),
            ("planck", Command::Planck(Vec::new())),
            ("reference clear.csv", Command::Reference("clear.csv".to_owned())),
            ("aside half of it is missing", Command::Aside("half of it is missing".to_owned())),
            ("export masks", Command::Export(Some("masks".to_owned()))),
        ] {
            assert_eq!(parse(line), Ok(expected), "{line}");
        }
    }

    #[test]
    fn what_makes_no_sense_says_so() {
        for (line, part) in [
            ("undoo", "near it: undo"),
            ("undo twice", "no further words"),
            ("layer", "expression"),
            ("go -3", "must be positive"),
            ("go soon", "does not begin with a number"),
            ("side 230", "< or >"),
            ("range 300 200", "comes first"),
            ("planck -3", "from 1"),
            ("reference", "the file is missing"),
            ("", "no command"),
        ] {
            let message = parse(line).unwrap_err();
            assert!(message.contains(part), "{line}: {message}");
        }
    }

    #[test]
    fn every_action_is_a_command() {
        for binding in BINDINGS {
            let parsed = parse(binding.name).unwrap();
            let expected = match binding.action {
                Action::Export => Command::Export(None),
                action => Command::Action(action),
            };
            assert_eq!(parsed, expected);
        }
    }
}
