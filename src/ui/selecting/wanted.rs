//! What `:select` is asked for, as typed.

use crate::screening::Verdict;

use super::Join;

/// What to select.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Wanted {
    /// Where a condition holds.
    Condition(String),
    /// Where a test of the rulebook says this.
    Test(String, Says),
    /// Where a flag stands.
    Flag(String),
    /// Footprints without any flag.
    NoFlag,
    /// Every footprint.
    All,
}

/// What a test may say about a footprint.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Says {
    /// It speaks for its flag.
    For,
    /// It speaks against its flag.
    Against,
    /// It says nothing, for whatever reason.
    Missing,
}

impl Says {
    /// Whether a verdict says this.
    pub fn fits(self, verdict: Verdict) -> bool {
        match self {
            Says::For => verdict == Verdict::For,
            Says::Against => verdict == Verdict::Against,
            Says::Missing => !verdict.is_result(),
        }
    }

    /// All that may be said.
    pub const ALL: [Says; 3] = [Says::For, Says::Against, Says::Missing];

    /// As it is typed.
    pub fn word(self) -> &'static str {
        match self {
            Says::For => "for",
            Says::Against => "against",
            Says::Missing => "missing",
        }
    }
}

impl Wanted {
    /// `bt(900) < 250`, `test T03 for`, `flag cloudy`, `no flag`, `all`; behind `+`, `-` or `&` it is
    /// joined to what is selected.
    ///
    /// # Errors
    /// A message that shows the form.
    pub fn parse(text: &str) -> Result<(Join, Wanted), String> {
        let text = text.trim();
        let signs = [Join::Add, Join::Minus, Join::Common];
        let signed = signs.into_iter().find_map(|join| {
            let rest = text.strip_prefix(join.sign())?;
            (rest.is_empty() || rest.starts_with(char::is_whitespace))
                .then_some((join, rest.trim()))
        });
        let (join, text) = signed.unwrap_or((Join::Anew, text));
        let words: Vec<&str> = text.split_whitespace().collect();
        let wanted = match words[..] {
            [] => return Err("a condition, test NAME for, flag NAME, no flag or all".to_owned()),
            ["all"] => Wanted::All,
            ["no", "flag"] => Wanted::NoFlag,
            ["flag", name] => Wanted::Flag(name.to_owned()),
            ["test", ref name @ .., says] if !name.is_empty() => {
                let known = Says::ALL.into_iter().find(|known| known.word() == says);
                let says = known.ok_or("a test says for, against or missing")?;
                Wanted::Test(name.join(" "), says)
            }
            ["test" | "flag", ..] => return Err("test NAME for, or flag NAME".to_owned()),
            _ => Wanted::Condition(text.to_owned()),
        };
        Ok((join, wanted))
    }

    /// In words, for prompts and messages.
    pub fn words(&self) -> String {
        match self {
            Wanted::Condition(text) => format!("where {text}"),
            Wanted::Test(name, Says::Missing) => format!("where {name} says nothing"),
            Wanted::Test(name, says) => format!("where {name} speaks {}", says.word()),
            Wanted::Flag(name) => format!("with {name}"),
            Wanted::NoFlag => "without a flag".to_owned(),
            Wanted::All => "in all".to_owned(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_typed_is_understood() {
        let condition = |text: &str| Wanted::Condition(text.to_owned());
        for (typed, expected) in [
            ("bt(900) < 250", (Join::Anew, condition("bt(900) < 250"))),
            ("+ lat > 3", (Join::Add, condition("lat > 3"))),
            ("& all", (Join::Common, Wanted::All)),
            ("- flag cloudy", (Join::Minus, Wanted::Flag("cloudy".to_owned()))),
            ("-lat > 3", (Join::Anew, condition("-lat > 3"))),
            ("no flag", (Join::Anew, Wanted::NoFlag)),
            (
                "test T03 colder than a neighbour missing",
                (Join::Anew, Wanted::Test("T03 colder than a neighbour".into(), Says::Missing)),
            ),
            ("test T03 against", (Join::Anew, Wanted::Test("T03".to_owned(), Says::Against))),
        ] {
            assert_eq!(Wanted::parse(typed), Ok(expected), "{typed}");
        }
        for wrong in ["", "+ ", "test T03", "test T03 perhaps", "flag"] {
            assert!(Wanted::parse(wrong).is_err(), "{wrong}");
        }
    }
}
