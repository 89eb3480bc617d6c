//! The grammar. From the loosest: `or`, `and`, `not`, comparison, sum, product, sign, power.
//!
//! Texts come from rulebooks of unknown origin, too, so length, nesting and the number of operators
//! are limited: no text can exhaust the stack.

use winnow::Parser;
use winnow::combinator::{alt, opt, peek};
use winnow::error::ErrMode;
use winnow::stream::{LocatingSlice, Location, Stream};
use winnow::token::{any, literal, take_while};

use super::mistake::Mistake;
use super::pieces::{number, place, quoted, spectral};
use super::reading::{
    Input, LONGEST, Progress, Read, begins_word, count_operator, deeper, is_in_word, rest, spaced,
    spaces, symbol, unexpected, word, wrong,
};
use super::tree::{Infix, Judgement, Kind, Node, Prefix, Span};
use super::vocabulary::{Arity, Callable, JOINING_WORDS, callable, example_of, functions};
use crate::system::near_names;

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

fn whole(input: &mut Input<'_>) -> Read<Node> {
    spaces(input)?;
    let tree = disjunction(input)?;
    if input.eof_offset() > 0 {
        return match rest(input).chars().next() {
            Some('=') => unexpected(input, "== to compare"),
            Some('&' | '|' | '!') => unexpected(input, "the words and, or, not"),
            Some(')') => unexpected(input, "an operator or the end: no ( is open"),
            _ if starts_with_unit(rest(input)) => unexpected(
                input,
                "an operator or the end; a place in the spectrum stands in bt or rad, as in bt(11.1um)",
            ),
            _ => unexpected(input, "an operator or the end"),
        };
    }
    Ok(tree)
}

/// Whether a number before this is likely to be meant as a place in the spectrum.
fn starts_with_unit(rest: &str) -> bool {
    ["cm", "um", "µm", "nm", "THz", "GHz"].iter().any(|unit| rest.starts_with(unit))
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
        // The doubt about the whole footprint needs no words.
        (Some(Callable::Judged(Judgement::Doubt)), false) => {
            Ok(Node { span, kind: Kind::Judged(Judgement::Doubt, None) })
        }
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
        Callable::Calculated(what) => Kind::Calculated(what, place(input)?.0),
        Callable::Variable => Kind::Variable(quoted(input, example_of(name))?),
        Callable::Judged(judgement) => {
            Kind::Judged(judgement, Some(quoted(input, example_of(name))?))
        }
        Callable::Neighbourhood(statistic, around) => {
            Kind::Neighbourhood(statistic, around, Box::new(deeper(input, start, disjunction)?))
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

fn joined(infix: Infix, left: Node, right: Node) -> Node {
    let span = left.span.start..right.span.end;
    Node { span, kind: Kind::Infix(infix, Box::new(left), Box::new(right)) }
}

fn prefixed(prefix: Prefix, start: usize, operand: Node) -> Node {
    Node { span: start..operand.span.end, kind: Kind::Prefix(prefix, Box::new(operand)) }
}
