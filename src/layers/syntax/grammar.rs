//! The grammar. From the loosest: `or`, `and`, `not`, comparison, sum, product, sign, power.
//!
//! Texts come from rulebooks of unknown origin, too, so length, nesting and the number of operators
//! are limited: no text can exhaust the stack.

use winnow::combinator::{alt, opt, peek};
use winnow::error::{ErrMode, ParserError};
use winnow::stream::{LocatingSlice, Location, Stateful, Stream};
use winnow::token::{any, literal, take_while};
use winnow::{ModalResult, Parser};

use super::mistake::Mistake;
use super::near_names::near_names;
use super::place::Place;
use super::tree::{Infix, Kind, Node, Prefix, Quantity, Span, Where};
use super::vocabulary::{Arity, Callable, JOINING_WORDS, callable, example_of, functions};
use crate::units::SpectralUnit;

/// Bytes of a text.
const LONGEST: usize = 4096;
/// Parentheses, functions, signs and powers inside one another.
const DEEPEST: usize = 48;
/// Operators in one text; they bound the depth of the tree together with the nesting.
const MOST_OPERATORS: usize = 400;

const A_VALUE: &str = "a number, a name, a function or a parenthesis";

/// Reads a whole text.
pub fn parse(text: &str) -> Result<Node, Mistake> {
    if text.len() > LONGEST {
        let what = format!("the expression is longer than {LONGEST} bytes");
        return Err(Mistake::new(0..1, what, "shorter pieces, joined by definitions"));
    }
    let mut input = Input { input: LocatingSlice::new(text), state: Progress::default() };
    whole(&mut input).map_err(|error| match error {
        ErrMode::Backtrack(trouble) | ErrMode::Cut(trouble) => *trouble.0,
        // Only streams that are still arriving can be incomplete.
        ErrMode::Incomplete(_) => Mistake::new(text.len()..text.len(), "the text ends", A_VALUE),
    })
}

type Input<'t> = Stateful<LocatingSlice<&'t str>, Progress>;
type Read<T> = ModalResult<T, Trouble>;

/// What has been used up of the limits, and where the last token ended.
#[derive(Debug, Clone, Copy, Default)]
struct Progress {
    depth: usize,
    operators: usize,
    token_end: usize,
    spaces_end: usize,
}

/// A mistake on its way up; boxed, for every rule's result carries its size.
#[derive(Debug)]
struct Trouble(Box<Mistake>);

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

fn wrong<T>(mistake: Mistake) -> Read<T> {
    Err(ErrMode::Cut(Trouble(Box::new(mistake))))
}

/// A mistake at what stands next.
fn unexpected<T>(input: &Input<'_>, expected: impl Into<String>) -> Read<T> {
    let start = input.current_token_start();
    let rest = rest(input);
    let Some(first) = rest.chars().next() else {
        return wrong(Mistake::new(start..start, "the expression ends too early", expected));
    };
    let word = rest.find(|c: char| !is_in_word(c)).unwrap_or(rest.len()).max(first.len_utf8());
    let shown = crate::system::clean_text(&rest[..word]);
    wrong(Mistake::new(start..start + word, format!("\"{shown}\" can't stand here"), expected))
}

fn whole(input: &mut Input<'_>) -> Read<Node> {
    spaces(input)?;
    let tree = disjunction(input)?;
    if input.eof_offset() > 0 {
        return match rest(input).chars().next() {
            Some('=') => unexpected(input, "== to compare"),
            Some('&' | '|' | '!') => unexpected(input, "the words and, or, not"),
            Some(')') => unexpected(input, "an operator or the end: no ( is open"),
            _ => unexpected(input, "an operator or the end"),
        };
    }
    Ok(tree)
}

fn disjunction(input: &mut Input<'_>) -> Read<Node> {
    chain(input, conjunction, |input| word("or").value(Infix::Or).parse_next(input))
}

fn conjunction(input: &mut Input<'_>) -> Read<Node> {
    chain(input, negation, |input| word("and").value(Infix::And).parse_next(input))
}

fn negation(input: &mut Input<'_>) -> Read<Node> {
    let start = input.current_token_start();
    if opt(word("not")).parse_next(input)?.is_none() {
        return comparison(input);
    }
    let operand = deeper(input, start, negation)?;
    Ok(prefixed(Prefix::Not, start, operand))
}

fn comparison(input: &mut Input<'_>) -> Read<Node> {
    let left = sum(input)?;
    let Some(infix) = opt(comparing).parse_next(input)? else { return Ok(left) };
    count_operator(input, &left.span)?;
    let right = sum(input)?;
    let start = input.current_token_start();
    if opt(comparing).parse_next(input)?.is_some() {
        let end = input.state.token_end;
        let what = "comparisons can't be chained";
        return wrong(Mistake::new(start..end, what, "two comparisons joined by and"));
    }
    Ok(joined(infix, left, right))
}

fn comparing(input: &mut Input<'_>) -> Read<Infix> {
    let symbols = alt((
        literal("<=").value(Infix::LessOrEqual),
        literal(">=").value(Infix::GreaterOrEqual),
        literal("==").value(Infix::Equal),
        literal("!=").value(Infix::NotEqual),
        literal("<").value(Infix::Less),
        literal(">").value(Infix::Greater),
    ));
    spaced(symbols).parse_next(input)
}

fn sum(input: &mut Input<'_>) -> Read<Node> {
    chain(input, product, |input| {
        spaced(alt(('+'.value(Infix::Add), '-'.value(Infix::Subtract)))).parse_next(input)
    })
}

fn product(input: &mut Input<'_>) -> Read<Node> {
    chain(input, signed, |input| {
        spaced(alt(('*'.value(Infix::Multiply), '/'.value(Infix::Divide)))).parse_next(input)
    })
}

fn signed(input: &mut Input<'_>) -> Read<Node> {
    let start = input.current_token_start();
    match opt(spaced(alt(('-', '+')))).parse_next(input)? {
        None => power(input),
        Some('+') => deeper(input, start, signed),
        Some(_) => {
            let operand = deeper(input, start, signed)?;
            Ok(prefixed(Prefix::Negate, start, operand))
        }
    }
}

/// Binds tighter than a sign before it and to the right: `-2^2` is -4, `2^3^2` is 2^9.
fn power(input: &mut Input<'_>) -> Read<Node> {
    let base = value(input)?;
    let start = input.current_token_start();
    if opt(spaced('^')).parse_next(input)?.is_none() {
        return Ok(base);
    }
    count_operator(input, &base.span)?;
    let exponent = deeper(input, start, signed)?;
    Ok(joined(Infix::Power, base, exponent))
}

fn value(input: &mut Input<'_>) -> Read<Node> {
    let start = input.current_token_start();
    match peek(opt(any)).parse_next(input)? {
        Some('(') => {
            symbol(input, '(', "")?;
            let inner = deeper(input, start, disjunction)?;
            symbol(input, ')', "an operator or )")?;
            Ok(inner)
        }
        Some(first) if first.is_ascii_digit() || first == '.' => {
            let number = number(input, A_VALUE)?;
            spaces(input)?;
            Ok(Node { span: start..input.state.token_end, kind: Kind::Number(number) })
        }
        Some(first) if begins_word(first) => named(input),
        Some('*') => unexpected(input, "one operator at a time; a power is written ^"),
        _ => unexpected(input, A_VALUE),
    }
}

/// A name, or a function with its operands.
fn named(input: &mut Input<'_>) -> Read<Node> {
    let start = input.current_token_start();
    let name = take_while(1.., is_in_word).parse_next(input)?;
    let span = start..input.previous_token_end();
    spaces(input)?;
    if JOINING_WORDS.contains(&name) {
        let what = format!("\"{name}\" can't stand here");
        return wrong(Mistake::new(span, what, A_VALUE));
    }
    let open = peek(opt(literal("("))).parse_next(input)?.is_some();
    match (callable(name), open) {
        (Some(callable), true) => call(input, name, callable, span),
        (Some(_), false) => {
            let what = format!("{name} is a function");
            wrong(Mistake::new(span, what, format!("it to be used as in {}", example_of(name))))
        }
        (None, true) => {
            let near = near_names(name, functions().map(|(name, _)| name));
            let names: Vec<&str> = functions().map(|(name, _)| name).collect();
            let expected = format!("one of {}", names.join(", "));
            wrong(Mistake::new(span, format!("there is no function {name}"), expected).near(near))
        }
        (None, false) => Ok(Node { span, kind: Kind::Name(name.to_owned()) }),
    }
}

fn call(input: &mut Input<'_>, name: &str, callable: Callable, head: Span) -> Read<Node> {
    let start = head.start;
    symbol(input, '(', "")?;
    let kind = match callable {
        Callable::Spectral(quantity) => spectral(input, quantity)?,
        Callable::Planck => {
            let temperature = deeper(input, start, disjunction)?;
            symbol(input, ',', "a comma and a wavenumber, as in planck(280, 900)")?;
            Kind::Planck(Box::new(temperature), place(input)?.0)
        }
        Callable::Variable => Kind::Variable(quoted(input)?),
        Callable::Neighbourhood(statistic) => {
            Kind::Neighbourhood(statistic, Box::new(deeper(input, start, disjunction)?))
        }
        Callable::Function(function, arity) => {
            Kind::Call(function, operands(input, name, arity, head)?)
        }
    };
    symbol(input, ')', "a )")?;
    Ok(Node { span: start..input.state.token_end, kind })
}

fn operands(input: &mut Input<'_>, name: &str, arity: Arity, head: Span) -> Read<Vec<Node>> {
    let mut operands = vec![deeper(input, head.start, disjunction)?];
    while opt(spaced(',')).parse_next(input)?.is_some() {
        count_operator(input, &head)?;
        operands.push(deeper(input, head.start, disjunction)?);
    }
    let (fits, expected) = match arity {
        Arity::One => (operands.len() == 1, "one value"),
        Arity::TwoOrMore => (operands.len() >= 2, "two values or more"),
    };
    if fits {
        return Ok(operands);
    }
    let what = format!("{name} was given {}", operands.len());
    wrong(Mistake::new(head, what, format!("{expected}, as in {}", example_of(name))))
}

/// A place or an interval: `900`, `830..840`, `11um`, `10um..12um`.
fn spectral(input: &mut Input<'_>, quantity: Quantity) -> Read<Kind> {
    let start = input.current_token_start();
    let (low, low_has_unit) = place(input)?;
    if opt(spaced(literal(".."))).parse_next(input)?.is_none() {
        return Ok(Kind::Spectral(quantity, Where::At(low)));
    }
    let (high, high_has_unit) = place(input)?;
    let span = start..input.state.token_end;
    // `10..12um`: a bare number takes over the unit beside it.
    let unit = match (low_has_unit, high_has_unit) {
        (true, false) => low.unit(),
        _ => high.unit(),
    };
    let taken = |place: Place, has_unit| {
        if has_unit { Some(place) } else { Place::new(place.value(), unit) }
    };
    let ends = taken(low, low_has_unit).zip(taken(high, high_has_unit));
    let Some((low, high)) = ends else {
        return wrong(Mistake::new(span, "this is no interval", "830..840 or 10um..12um"));
    };
    if low.unit() == high.unit() && low.value() >= high.value() {
        let what = "the interval is empty or runs backwards";
        return wrong(Mistake::new(span, what, "the smaller number first"));
    }
    let between = if low.wavenumber() <= high.wavenumber() {
        Where::Between(low, high)
    } else {
        Where::Between(high, low)
    };
    Ok(Kind::Spectral(quantity, between))
}

/// A place, and whether its unit was written.
fn place(input: &mut Input<'_>) -> Read<(Place, bool)> {
    const EXPECTED: &str = "a wavenumber (900, 900cm-1) or a wavelength (11.1um, 11100nm)";
    let start = input.current_token_start();
    let number = number(input, EXPECTED)?;
    spaces(input)?;
    let unit = unit(input)?;
    spaces(input)?;
    let end = input.state.token_end;
    match Place::new(number, unit.unwrap_or(SpectralUnit::PerCentimetre)) {
        Some(place) => Ok((place, unit.is_some())),
        None => wrong(Mistake::new(start..end, "no wave is that long or that short", EXPECTED)),
    }
}

/// A unit, in any spelling of files; it reaches to what ends a place.
fn unit(input: &mut Input<'_>) -> Read<Option<SpectralUnit>> {
    const EXPECTED: &str = "a unit: cm-1, m-1, um, nm, Hz, GHz or THz";
    let start = input.current_token_start();
    let rest = rest(input);
    if !rest.starts_with(char::is_alphabetic) {
        return Ok(None);
    }
    let ends = [rest.find([')', ',']), rest.find("..")];
    let length = ends.into_iter().flatten().min().unwrap_or(rest.len());
    let written = rest[..length].trim_end();
    match SpectralUnit::parse(written) {
        Ok(unit) => {
            input.next_slice(written.len());
            Ok(Some(unit))
        }
        Err(_) => {
            let what =
                format!("\"{}\" is no unit of a spectrum", crate::system::clean_text(written));
            wrong(Mistake::new(start..start + written.len(), what, EXPECTED))
        }
    }
}

/// Digits with an optional fraction and power of ten. The dots of `830..840` are left alone.
fn number(input: &mut Input<'_>, expected: &str) -> Read<f64> {
    let start = input.current_token_start();
    let rest = rest(input);
    let length = number_length(rest);
    if length == 0 {
        return unexpected(input, expected);
    }
    let written = input.next_slice(length);
    match written.parse::<f64>() {
        Ok(value) if value.is_finite() => Ok(value),
        _ => {
            let what = "this number is too large";
            wrong(Mistake::new(start..start + length, what, "at most 1e308"))
        }
    }
}

fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let digits = |from: usize| bytes[from..].iter().take_while(|b| b.is_ascii_digit()).count();
    let whole = digits(0);
    let mut length = whole;
    if bytes.get(length) == Some(&b'.') && bytes.get(length + 1) != Some(&b'.') {
        let fraction = digits(length + 1);
        if whole + fraction == 0 {
            return 0;
        }
        length += 1 + fraction;
    }
    if length > 0 && matches!(bytes.get(length), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(length + 1), Some(b'+' | b'-')));
        let from = (length + 1 + sign).min(bytes.len());
        let exponent = digits(from);
        if exponent > 0 {
            length = from + exponent;
        }
    }
    length
}

/// A name in quotes; a backslash takes the meaning from a quote or a backslash.
fn quoted(input: &mut Input<'_>) -> Read<String> {
    let start = input.current_token_start();
    if opt('"').parse_next(input)?.is_none() {
        return unexpected(input, "the variable's name in quotes, as in var(\"quality\")");
    }
    let mut name = String::new();
    loop {
        match opt(any).parse_next(input)? {
            Some('"') => break,
            Some('\\') => match opt(any).parse_next(input)? {
                Some(marked @ ('"' | '\\')) => name.push(marked),
                _ => return unexpected(input, "a quote or a backslash behind a backslash"),
            },
            Some(letter) => name.push(letter),
            None => {
                let end = input.current_token_start();
                let what = "the name in quotes does not end";
                return wrong(Mistake::new(start..end, what, "a closing quote"));
            }
        }
    }
    spaces(input)?;
    if name.is_empty() {
        let end = input.state.token_end;
        return wrong(Mistake::new(start..end, "the name is empty", "a variable's name"));
    }
    Ok(name)
}

/// `operand (operator operand)*`, joined to the left.
fn chain(
    input: &mut Input<'_>,
    operand: fn(&mut Input<'_>) -> Read<Node>,
    operator: fn(&mut Input<'_>) -> Read<Infix>,
) -> Read<Node> {
    let mut left = operand(input)?;
    while let Some(infix) = opt(operator).parse_next(input)? {
        count_operator(input, &left.span)?;
        let right = operand(input)?;
        left = joined(infix, left, right);
    }
    Ok(left)
}

/// Reads something that stands inside something else.
fn deeper(
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

fn count_operator(input: &mut Input<'_>, at: &Span) -> Read<()> {
    input.state.operators += 1;
    if input.state.operators > MOST_OPERATORS {
        let what = format!("the expression has more than {MOST_OPERATORS} operators");
        return wrong(Mistake::new(at.clone(), what, "simpler pieces, joined by definitions"));
    }
    Ok(())
}

fn joined(infix: Infix, left: Node, right: Node) -> Node {
    let span = left.span.start..right.span.end;
    Node { span, kind: Kind::Infix(infix, Box::new(left), Box::new(right)) }
}

fn prefixed(prefix: Prefix, start: usize, operand: Node) -> Node {
    Node { span: start..operand.span.end, kind: Kind::Prefix(prefix, Box::new(operand)) }
}

fn symbol(input: &mut Input<'_>, wanted: char, expected: &str) -> Read<()> {
    match opt(spaced(wanted)).parse_next(input)? {
        Some(_) => Ok(()),
        None => unexpected(input, expected),
    }
}

/// A word that ends where letters and digits end.
fn word<'t>(wanted: &'static str) -> impl Parser<Input<'t>, &'t str, ErrMode<Trouble>> {
    spaced(take_while(1.., is_in_word).verify(move |found: &str| found == wanted))
}

fn spaced<'t, T>(
    parser: impl Parser<Input<'t>, T, ErrMode<Trouble>>,
) -> impl Parser<Input<'t>, T, ErrMode<Trouble>> {
    winnow::combinator::terminated(parser, spaces)
}

/// Skips spaces and remembers where the token before them ended.
fn spaces(input: &mut Input<'_>) -> Read<()> {
    let here = input.current_token_start();
    if here > input.state.spaces_end {
        input.state.token_end = here;
    }
    take_while(0.., [' ', '\t', '\n', '\r']).void().parse_next(input)?;
    input.state.spaces_end = input.current_token_start();
    Ok(())
}

/// What has not been read yet.
fn rest<'t>(input: &Input<'t>) -> &'t str {
    input.peek_finish()
}

fn begins_word(c: char) -> bool {
    c.is_ascii_alphabetic() || c == '_'
}

fn is_in_word(c: char) -> bool {
    c.is_ascii_alphanumeric() || c == '_'
}
