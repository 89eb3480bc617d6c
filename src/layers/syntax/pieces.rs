//! Numbers, names in quotes, and places in the spectrum.

use winnow::Parser;
use winnow::combinator::opt;
use winnow::stream::{Location, Stream};
use winnow::token::{any, literal};

use super::mistake::Mistake;
use super::place::Place;
use super::reading::{Input, Read, rest, spaced, spaces, unexpected, wrong};
use super::tree::{Kind, Quantity, Where};
use crate::units::SpectralUnit;

/// A place or an interval: `900`, `830..840`, `11um`, `10um..12um`.
pub fn spectral(input: &mut Input<'_>, quantity: Quantity) -> Read<Kind> {
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
pub fn place(input: &mut Input<'_>) -> Read<(Place, bool)> {
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
pub fn number(input: &mut Input<'_>, expected: &str) -> Read<f64> {
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

/// A name in quotes, as in `example`; a backslash takes the meaning from a quote or a backslash.
pub fn quoted(input: &mut Input<'_>, example: &str) -> Read<String> {
    let start = input.current_token_start();
    if opt('"').parse_next(input)?.is_none() {
        return unexpected(input, format!("a name in quotes, as in {example}"));
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
        return wrong(Mistake::new(start..end, "the name is empty", "a name in quotes"));
    }
    Ok(name)
}
