//! Reads a unit string: a product of powers, with prefixes and parentheses, as UDUNITS reads it.
//!
//! ```text
//! product = power { [ "*" | "." | "-" | "·" | "/" | "per" ] power }      from left to right
//! power   = ( number | word | "(" product ")" ) [ [ "^" | "**" ] integer ]
//! ```
//! A division takes the one power behind it: `W/m2 sr` is W m-2 sr, as in UDUNITS.

use super::decimal::Decimal;
use super::dimension::Dimension;
use super::symbols;

/// Longer texts are no units; the limit also bounds the work on a hostile file.
const MAX_CHARACTERS: usize = 120;
/// Deeper than any unit is written. Exponents multiply: 9 to the power of 5, times the number of factors
/// that fit, times the largest prefix stays far below what an `i32` holds.
const MAX_DEPTH: usize = 4;
const MAX_EXPONENT: i32 = 9;

/// What a unit string means.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Product {
    pub dimension: Dimension,
    pub scale: Decimal,
    /// The exponent that centimetres have in the product, apart from other lengths.
    pub centimetres: i32,
}

/// Where and why the text stopped making sense.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Malformed {
    /// Count of the character from 1.
    pub position: usize,
    pub reason: String,
}

/// Reads `text`, which is not empty.
pub fn parse(text: &str) -> Result<Product, Malformed> {
    let characters: Vec<char> = text.chars().map(plain_character).collect();
    let mut reader = Reader { characters, position: 0, depth: 0 };
    if reader.characters.len() > MAX_CHARACTERS {
        return Err(reader.fault("the text is too long for a unit"));
    }
    let product = reader.product()?;
    match reader.peek() {
        None => Ok(product),
        Some(_) => Err(reader.fault("a closing parenthesis without an opening one")),
    }
}

/// Superscripts, typographic minus signs and odd spaces in their plain form.
fn plain_character(character: char) -> char {
    match character {
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴'..='⁹' => char::from(b'4' + (character as u32 - '⁴' as u32) as u8),
        '⁻' | '−' | '‐' | '‑' | '–' => '-',
        '⁺' => '+',
        '·' | '⋅' | '×' => '*',
        _ if character.is_whitespace() => ' ',
        _ => character,
    }
}

struct Reader {
    characters: Vec<char>,
    position: usize,
    depth: usize,
}

impl Reader {
    fn product(&mut self) -> Result<Product, Malformed> {
        let mut product = self.power()?;
        loop {
            let divided = match self.separator()? {
                Separator::End => return Ok(product),
                Separator::Multiply => false,
                Separator::Divide => true,
            };
            let factor = self.power()?;
            product = product.times(if divided { factor.inverse() } else { factor });
        }
    }

    fn separator(&mut self) -> Result<Separator, Malformed> {
        self.skip_spaces();
        match self.peek() {
            None | Some(')') => Ok(Separator::End),
            Some('/') => Ok(self.take(1, Separator::Divide)),
            Some('-') if self.is_digit(self.position + 1) => {
                Err(self.fault("an exponent stands apart from its unit"))
            }
            Some('*' | '.' | '-') => Ok(self.take(1, Separator::Multiply)),
            Some('p') if self.word_at(self.position) == "per" => {
                Ok(self.take(3, Separator::Divide))
            }
            // Two powers side by side are multiplied.
            Some(_) => Ok(Separator::Multiply),
        }
    }

    fn power(&mut self) -> Result<Product, Malformed> {
        self.skip_spaces();
        let is_number = self.peek().is_some_and(|character| character.is_ascii_digit());
        let base = match self.peek() {
            None => return Err(self.fault("the text ends where a unit should follow")),
            Some('(') => self.parenthesis()?,
            Some(_) if is_number => self.number()?,
            Some(_) => self.unit()?,
        };
        // `m2` is a square metre, but `102` is not ten squared: a number's exponent is marked.
        let may_have_exponent = !is_number || matches!(self.peek(), Some('^' | '*'));
        let exponent = if may_have_exponent { self.exponent()? } else { 1 };
        Ok(base.raised(exponent))
    }

    fn parenthesis(&mut self) -> Result<Product, Malformed> {
        self.depth += 1;
        if self.depth > MAX_DEPTH {
            return Err(self.fault("too many parentheses"));
        }
        self.position += 1;
        let product = self.product()?;
        if self.peek() != Some(')') {
            return Err(self.fault("a closing parenthesis is missing"));
        }
        self.position += 1;
        self.depth -= 1;
        Ok(product)
    }

    fn unit(&mut self) -> Result<Product, Malformed> {
        let word = self.word_at(self.position);
        if word.is_empty() {
            return Err(self.fault("a unit or a number should stand here"));
        }
        let Some(symbol) = symbols::symbol(&word) else {
            return Err(self.fault(&format!("{word:?} is no unit known here")));
        };
        self.position += word.chars().count();
        let is_centimetre =
            symbol.dimension == Dimension::LENGTH && symbol.scale.is_power_of_ten(-2);
        Ok(Product {
            dimension: symbol.dimension,
            scale: symbol.scale,
            centimetres: i32::from(is_centimetre),
        })
    }

    /// A number such as `1`, `0.001`, `1e-3`; `10^-3` is a number with an exponent of its own.
    fn number(&mut self) -> Result<Product, Malformed> {
        let begin = self.position;
        self.digits();
        if self.peek() == Some('.') && self.is_digit(self.position + 1) {
            self.position += 1;
            self.digits();
        }
        if matches!(self.peek(), Some('e' | 'E')) {
            let signed = matches!(self.characters.get(self.position + 1), Some('+' | '-'));
            let first = self.position + 1 + usize::from(signed);
            if self.is_digit(first) {
                self.position = first;
                self.digits();
            }
        }
        let text: String = self.characters[begin..self.position].iter().collect();
        match text.parse::<f64>() {
            Ok(value) if value.is_normal() => {
                Ok(Product { dimension: Dimension::NUMBER, scale: tidy(value), centimetres: 0 })
            }
            _ => {
                self.position = begin;
                Err(self.fault("a factor must be a positive number"))
            }
        }
    }

    fn exponent(&mut self) -> Result<i32, Malformed> {
        let begin = self.position;
        let marked = match (self.peek(), self.characters.get(self.position + 1)) {
            (Some('^'), _) => self.take(1, true),
            (Some('*'), Some('*')) => self.take(2, true),
            _ => false,
        };
        let negative = self.peek() == Some('-');
        if matches!(self.peek(), Some('+' | '-')) {
            self.position += 1;
        }
        let first = self.position;
        self.digits();
        if first == self.position {
            if marked {
                return Err(self.fault("an exponent should stand here"));
            }
            self.position = begin;
            return Ok(1);
        }
        let text: String = self.characters[first..self.position].iter().collect();
        match text.parse::<i32>() {
            Ok(size) if size <= MAX_EXPONENT => Ok(if negative { -size } else { size }),
            _ => Err(self.fault("the exponent is too large")),
        }
    }

    fn word_at(&self, begin: usize) -> String {
        self.characters[begin..].iter().take_while(|character| character.is_alphabetic()).collect()
    }

    fn digits(&mut self) {
        while self.is_digit(self.position) {
            self.position += 1;
        }
    }

    fn is_digit(&self, position: usize) -> bool {
        self.characters.get(position).is_some_and(char::is_ascii_digit)
    }

    fn skip_spaces(&mut self) {
        while self.peek() == Some(' ') {
            self.position += 1;
        }
    }

    fn peek(&self) -> Option<char> {
        self.characters.get(self.position).copied()
    }

    fn take<T>(&mut self, characters: usize, value: T) -> T {
        self.position += characters;
        value
    }

    fn fault(&self, reason: &str) -> Malformed {
        Malformed { position: self.position + 1, reason: reason.to_owned() }
    }
}

enum Separator {
    Multiply,
    Divide,
    End,
}

impl Product {
    fn times(self, other: Self) -> Self {
        Self {
            dimension: self.dimension.times(other.dimension),
            scale: self.scale.times(other.scale),
            centimetres: self.centimetres + other.centimetres,
        }
    }

    fn raised(self, exponent: i32) -> Self {
        Self {
            dimension: self.dimension.raised(exponent),
            scale: self.scale.raised(exponent),
            centimetres: self.centimetres * exponent,
        }
    }

    fn inverse(self) -> Self {
        self.raised(-1)
    }
}

/// A number that is a power of ten becomes one, so that `1e-3 W` and `mW` are the same unit.
fn tidy(value: f64) -> Decimal {
    let number = Decimal { mantissa: value, power: 0 };
    let power = value.log10().round();
    if power.abs() < 30.0 && number.is_power_of_ten(power as i32) {
        Decimal::power_of_ten(power as i32)
    } else {
        number
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn meaning(text: &str) -> (Dimension, f64) {
        let product = parse(text).unwrap();
        (product.dimension, product.scale.value())
    }

    #[test]
    fn a_division_takes_the_one_power_behind_it() {
        assert_eq!(meaning("W/m2 sr").0, Dimension::IRRADIANCE.times(Dimension::SOLID_ANGLE));
        assert_eq!(meaning("W/m2/sr").0, Dimension::RADIANCE);
        assert_eq!(meaning("W/(m2 sr)").0, Dimension::RADIANCE);
        assert_eq!(meaning("watt per metre^2 per steradian").0, Dimension::RADIANCE);
    }

    #[test]
    fn exponents_are_written_in_many_ways() {
        for text in ["m-2", "m^-2", "m**-2", "m⁻²", "1/m2", "1/m^2", "(m2)-1", "(1/m)2", "(m-1)^2"]
        {
            assert_eq!(meaning(text), (Dimension::WAVENUMBER.raised(2), 1.0), "{text}");
        }
    }

    #[test]
    fn numbers_scale() {
        assert_eq!(meaning("1e-3 W"), meaning("mW"));
        assert_eq!(meaning("10^-3 W"), meaning("mW"));
        assert_eq!(meaning("0.001 W"), meaning("mW"));
        assert_eq!(meaning("2.5 m").1, 2.5);
    }

    #[test]
    fn the_largest_exponents_do_not_overflow() {
        let inner = ["fg9"; 20].join(" ");
        assert_eq!(
            parse(&format!("(((({inner})9)9)9)9")).unwrap().scale.power,
            -18 * 20 * 9_i32.pow(5)
        );
    }

    #[test]
    fn nonsense_is_refused_where_it_stands() {
        for (text, position) in [
            ("mW parsec", 4),
            ("mW m-2 (sr", 11),
            ("mW)", 3),
            ("W /", 4),
            ("m^", 3),
            ("m99", 4),
            ("10 -3", 4),
            ("0 W", 1),
            ("((((((m", 5),
        ] {
            assert_eq!(parse(text).unwrap_err().position, position, "{text}");
        }
        assert!(parse(&"m ".repeat(100)).is_err());
    }

    proptest::proptest! {
        #[test]
        fn no_text_makes_the_reader_fail(text in "\\PC{0,40}") {
            let _ = parse(&text);
        }

        #[test]
        fn no_product_makes_the_reader_fail(text in "[mWsrc0-9 ()^*/.e-]{0,40}") {
            let _ = parse(&text);
        }
    }
}
