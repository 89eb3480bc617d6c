//! The text on its way through the grammar: limits, mistakes, and the smallest pieces.

use winnow::combinator::{opt, terminated};
use winnow::error::{ErrMode, ParserError};
use winnow::stream::{LocatingSlice, Location, Stateful, Stream};
use winnow::token::take_while;
use winnow::{ModalResult, Parser};

use super::mistake::Mistake;
use super::tree::{Node, Span};

/// Bytes of a text.
pub const LONGEST: usize = 4096;
/// Parentheses, functions, signs and powers inside one another.
pub const DEEPEST: usize = 48;
/// Operators in one text; they bound the depth of the tree together with the nesting.
pub const MOST_OPERATORS: usize = 400;

/// The text, where it has been read to, and the limits.
pub type Input<'t> = Stateful<LocatingSlice<&'t str>, Progress>;
/// What a rule gives.
pub type Read<T> = ModalResult<T, Trouble>;

/// What has been used up of the limits, and where the last token ended.
#[derive(Debug, Clone, Copy, Default)]
pub struct Progress {
    depth: usize,
    operators: usize,
    /// Where the last token ended, before the spaces behind it.
    pub token_end: usize,
    spaces_end: usize,
}

/// A mistake on its way up; boxed, for every rule's result carries its size.
#[derive(Debug)]
pub struct Trouble(pub Box<Mistake>);

impl<'t> ParserError<Input<'t>> for Trouble {
    type Inner = Self;

    fn from_input(input: &Input<'t>) -> Self {
        let at = input.current_token_start();
        Self(Box::new(Mistake::new(at..at, "this can't be read", "")))
    }

    fn into_inner(self) -> Result<Self, Self> {
        Ok(self)
    }
}

/// A mistake that no other rule can make good.
pub fn wrong<T>(mistake: Mistake) -> Read<T> {
    Err(ErrMode::Cut(Trouble(Box::new(mistake))))
}

/// A mistake at what stands next.
pub fn unexpected<T>(input: &Input<'_>, expected: impl Into<String>) -> Read<T> {
    let start = input.current_token_start();
    let rest = rest(input);
    let Some(first) = rest.chars().next() else {
        return wrong(Mistake::new(start..start, "the expression ends too early", expected));
    };
    let word = rest.find(|c: char| !is_in_word(c)).unwrap_or(rest.len()).max(first.len_utf8());
    let shown = crate::system::clean_text(&rest[..word]);
    wrong(Mistake::new(start..start + word, format!("\"{shown}\" can't stand here"), expected))
}

/// Reads something that stands inside something else.
pub fn deeper(
    input: &mut Input<'_>,
    start: usize,
    rule: fn(&mut Input<'_>) -> Read<Node>,
) -> Read<Node> {
    input.state.depth += 1;
    if input.state.depth > DEEPEST {
        let what = format!("more than {DEEPEST} things stand inside one another");
        return wrong(Mistake::new(
            start..start + 1,
            what,
            "simpler pieces, joined by definitions",
        ));
    }
    let node = rule(input)?;
    input.state.depth -= 1;
    Ok(node)
}

/// One operator more.
pub fn count_operator(input: &mut Input<'_>, at: &Span) -> Read<()> {
    input.state.operators += 1;
    if input.state.operators > MOST_OPERATORS {
        let what = format!("the expression has more than {MOST_OPERATORS} operators");
        return wrong(Mistake::new(at.clone(), what, "simpler pieces, joined by definitions"));
    }
    Ok(())
}

/// A sign that must stand here.
pub fn symbol(input: &mut Input<'_>, wanted: char, expected: &str) -> Read<()> {
    match opt(spaced(wanted)).parse_next(input)? {
        Some(_) => Ok(()),
        None => unexpected(input, expected),
    }
}

/// A word that ends where letters and digits end.
pub fn word<'t>(wanted: &'static str) -> impl Parser<Input<'t>, &'t str, ErrMode<Trouble>> {
    spaced(take_while(1.., is_in_word).verify(move |found: &str| found == wanted))
}

/// Something and the spaces behind it.
pub fn spaced<'t, T>(
    parser: impl Parser<Input<'t>, T, ErrMode<Trouble>>,
) -> impl Parser<Input<'t>, T, ErrMode<Trouble>> {
    terminated(parser, spaces)
}

/// Skips spaces and remembers where the token before them ended.
pub fn spaces(input: &mut Input<'_>) -> Read<()> {
    let here = input.current_token_start();
    if here > input.state.spaces_end {
        input.state.token_end = here;
    }
    take_while(0.., [' ', '\t', '\n', '\r']).void().parse_next(input)?;
    input.state.spaces_end = input.current_token_start();
    Ok(())
}

/// What has not been read yet.
pub fn rest<'t>(input: &Input<'t>) -> &'t str {
    input.peek_finish()
}

/// Whether a word may begin with it.
pub fn begins_word(c: char) -> bool {
    c.is_ascii_alphabetic() || c == '_'
}

/// Whether a word may have it inside.
pub fn is_in_word(c: char) -> bool {
    c.is_ascii_alphanumeric() || c == '_'
}
