//! A mistake in an expression, shown with the place.

use std::fmt;

use unicode_width::UnicodeWidthChar;

use super::tree::Span;

/// What is wrong where, what was expected there, and which names may have been meant.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Mistake {
    /// Bytes of the text.
    pub span: Span,
    /// What is wrong.
    pub what: String,
    /// What would have been right; may be empty.
    pub expected: String,
    /// Names that may have been meant.
    pub near: Vec<String>,
}

impl Mistake {
    /// A mistake without near names.
    pub fn new(span: Span, what: impl Into<String>, expected: impl Into<String>) -> Self {
        Self { span, what: what.into(), expected: expected.into(), near: Vec::new() }
    }

    /// With names that may have been meant.
    pub fn near(mut self, names: Vec<String>) -> Self {
        self.near = names;
        self
    }

    /// All of it in one line, for a status line.
    pub fn in_one_line(&self) -> String {
        let mut line = self.what.clone();
        if !self.expected.is_empty() {
            line += &format!("; expected {}", self.expected);
        }
        if let Some((last, rest)) = self.near.split_last() {
            let names = if rest.is_empty() {
                last.clone()
            } else {
                format!("{} or {last}", rest.join(", "))
            };
            line += &format!("; did you mean {names}?");
        }
        line
    }

    /// One line of words, then the line of the text with carets under the place.
    pub fn show(&self, text: &str, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        writeln!(out, "{}", self.in_one_line())?;
        let (line, marks) = self.pointing(text);
        writeln!(out, "    {line}")?;
        write!(out, "    {marks}")
    }

    /// The line of the text that holds the place, and the carets that belong under it.
    fn pointing(&self, text: &str) -> (String, String) {
        let start = floor_boundary(text, self.span.start);
        let end = floor_boundary(text, self.span.end.max(start));
        let line_start = text[..start].rfind('\n').map_or(0, |at| at + 1);
        let line_end = text[start..].find('\n').map_or(text.len(), |at| start + at);
        let line = crate::system::clean_text(&text[line_start..line_end]);
        let before = columns(&text[line_start..start]);
        let under = columns(&text[start..end.min(line_end)]).max(1);
        (line, " ".repeat(before) + &"^".repeat(under))
    }
}

/// Terminal columns of a text after cleaning, where a control character becomes one column wide.
fn columns(text: &str) -> usize {
    crate::system::clean_text(text).chars().map(|c| c.width().unwrap_or(1)).sum()
}

fn floor_boundary(text: &str, at: usize) -> usize {
    let mut at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

#[cfg(test)]
mod tests {
    use super::*;

    struct Shown<'a>(&'a str, Mistake);

    impl fmt::Display for Shown<'_> {
        fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
            self.1.show(self.0, out)
        }
    }

    #[test]
    fn carets_stand_under_the_place() {
        let mistake = Mistake::new(4..7, "there is no foo", "a name").near(vec!["fog".into()]);
        assert_eq!(
            Shown("1 + foo", mistake).to_string(),
            "there is no foo; expected a name; did you mean fog?\n    1 + foo\n        ^^^"
        );
    }

    #[test]
    fn the_end_of_the_text_can_be_pointed_at() {
        let mistake = Mistake::new(3..3, "the text ends", "a value");
        assert!(Shown("1 +", mistake).to_string().ends_with("\n    1 +\n       ^"));
    }

    #[test]
    fn only_the_line_in_question_is_shown_and_wide_letters_count_twice() {
        let text = "1 +\n\u{4e2d} + ?";
        let at = text.find('?').unwrap();
        let mistake = Mistake::new(at..at + 1, "what", "");
        assert_eq!(Shown(text, mistake).to_string(), "what\n    \u{4e2d} + ?\n         ^");
    }
}
