//! What could be typed next on the command line.

use super::command::{names, takes_words};
use super::selecting::Says;
use crate::review::Measure;

/// What the words of a command can be completed from.
#[derive(Debug, Clone, Default)]
pub struct Known {
    /// Layer expressions.
    pub layers: Vec<String>,
    /// Flag names.
    pub flags: Vec<String>,
    /// Names of the rulebook's tests.
    pub tests: Vec<String>,
}

/// All whole lines that begin with what stands before the cursor, in a fixed order.
pub fn completions(before_cursor: &str, known: &Known) -> Vec<String> {
    let typed = before_cursor.trim_start();
    match typed.split_once(char::is_whitespace) {
        None => {
            let mut names: Vec<String> = names()
                .filter(|name| name.starts_with(typed))
                .map(|name| if takes_words(name) { format!("{name} ") } else { name.to_owned() })
                .collect();
            names.sort();
            names
        }
        Some((name, words)) => {
            let words = words.trim_start();
            let (lead, candidates) = match name {
                "layer" | "against" => ("", known.layers.clone()),
                "try" => ("", known.tests.clone()),
                "like" => ("", Measure::ALL.map(|one| one.word().to_owned()).to_vec()),
                "flag" | "withdraw" => ("", known.flags.clone()),
                "select" => (sign_of(words), selections(known)),
                _ => return Vec::new(),
            };
            let rest = words.get(lead.len()..).unwrap_or_default();
            let matching = candidates.iter().filter(|candidate| candidate.starts_with(rest));
            matching.map(|candidate| format!("{name} {lead}{candidate}")).collect()
        }
    }
}

/// `+ `, `- `, `& ` or nothing in front of what is to be selected.
fn sign_of(words: &str) -> &str {
    let end = words.find(|letter: char| !"+-& ".contains(letter)).unwrap_or(words.len());
    let sign = words.get(..end).unwrap_or_default();
    if sign.ends_with(' ') { sign } else { "" }
}

/// What can be selected, as it is typed; the layers as beginnings of conditions.
fn selections(known: &Known) -> Vec<String> {
    let tests = known
        .tests
        .iter()
        .flat_map(|test| Says::ALL.map(|says| format!("test {test} {}", says.word())));
    let flags = known.flags.iter().map(|flag| format!("flag {flag}"));
    let fixed = ["no flag", "all"].map(str::to_owned);
    flags.chain(fixed).chain(tests).chain(known.layers.iter().cloned()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn completion_offers_names_then_words() {
        let known = Known {
            layers: vec!["bt(900)".to_owned(), "lat".to_owned()],
            flags: vec!["cloudy".to_owned()],
            tests: vec!["T01".to_owned()],
        };
        assert_eq!(completions("select - f", &known), ["select - flag cloudy"]);
        assert_eq!(completions("select test T01 a", &known), ["select test T01 against"]);
        assert_eq!(completions("und", &known), ["undo"]);
        assert_eq!(completions("lay", &known), ["layer "]);
        assert_eq!(completions("layer ", &known), ["layer bt(900)", "layer lat"]);
        assert_eq!(completions("layer l", &known), ["layer lat"]);
        assert_eq!(completions("flag c", &known), ["flag cloudy"]);
        assert!(completions("undo ", &known).is_empty());
    }
}
