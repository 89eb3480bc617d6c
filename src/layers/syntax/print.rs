//! A tree as text: one way to write each meaning, with no more parentheses than needed.

use std::fmt;

use super::place::Place;
use super::tree::{Infix, Kind, Node, Prefix, Quantity, Where};
use super::vocabulary::{Callable, function_name, name_of};
use crate::units::SpectralUnit;

/// How tightly a part holds together; the grammar's levels from the loosest.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Hold {
    Or,
    And,
    Not,
    Comparison,
    Sum,
    Product,
    Sign,
    Power,
    Value,
}

impl fmt::Display for Node {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match &self.kind {
            Kind::Number(value) => write_number(*value, out),
            Kind::Name(name) => out.write_str(name),
            Kind::Variable(name) => write!(out, "var({})", quoted(name)),
            Kind::Spectral(quantity, place) => write_spectral(*quantity, place, out),
            Kind::Calculated(what, place) => {
                write!(out, "{}({place})", name_of(Callable::Calculated(*what)))
            }
            Kind::Planck(temperature, place) => {
                write!(out, "planck({temperature}, {place})")
            }
            Kind::Judged(judgement, of) => {
                out.write_str(name_of(Callable::Judged(*judgement)))?;
                of.as_ref().map_or(Ok(()), |of| write!(out, "({})", quoted(of)))
            }
            Kind::Prefix(prefix, operand) => write_prefix(*prefix, operand, out),
            Kind::Infix(infix, left, right) => write_infix(*infix, left, right, out),
            Kind::Call(function, operands) => {
                write!(out, "{}(", function_name(*function))?;
                for (place, operand) in operands.iter().enumerate() {
                    let comma = if place > 0 { ", " } else { "" };
                    write!(out, "{comma}{operand}")?;
                }
                out.write_str(")")
            }
            Kind::Neighbourhood(statistic, around, operand) => {
                write!(out, "{}({operand})", name_of(Callable::Neighbourhood(*statistic, *around)))
            }
        }
    }
}

impl fmt::Display for Place {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write_number(self.value(), out)?;
        match self.unit() {
            SpectralUnit::PerCentimetre => Ok(()),
            unit => out.write_str(unit.label()),
        }
    }
}

fn write_spectral(quantity: Quantity, place: &Where, out: &mut fmt::Formatter<'_>) -> fmt::Result {
    let name = name_of(Callable::Spectral(quantity));
    match place {
        Where::At(place) => write!(out, "{name}({place})"),
        // A bare number beside a length would take over its unit, so both get theirs.
        Where::Between(low, high) if low.unit() != high.unit() => write!(
            out,
            "{name}({}{}..{}{})",
            Number(low.value()),
            low.unit().label(),
            Number(high.value()),
            high.unit().label()
        ),
        // Lengths run the other way than wavenumbers.
        Where::Between(low, high) if low.value() > high.value() => {
            write!(out, "{name}({high}..{low})")
        }
        Where::Between(low, high) => write!(out, "{name}({low}..{high})"),
    }
}

fn write_prefix(prefix: Prefix, operand: &Node, out: &mut fmt::Formatter<'_>) -> fmt::Result {
    match prefix {
        Prefix::Negate => {
            out.write_str("-")?;
            write_held(operand, Hold::Sign, out)
        }
        Prefix::Not => {
            out.write_str("not ")?;
            write_held(operand, Hold::Not, out)
        }
    }
}

fn write_infix(
    infix: Infix,
    left: &Node,
    right: &Node,
    out: &mut fmt::Formatter<'_>,
) -> fmt::Result {
    let (hold_left, hold_right) = match infix {
        Infix::Or => (Hold::Or, Hold::And),
        Infix::And => (Hold::And, Hold::Not),
        Infix::Add | Infix::Subtract => (Hold::Sum, Hold::Product),
        Infix::Multiply | Infix::Divide => (Hold::Product, Hold::Sign),
        Infix::Power => (Hold::Value, Hold::Sign),
        _ => (Hold::Sum, Hold::Sum),
    };
    write_held(left, hold_left, out)?;
    if infix == Infix::Power {
        out.write_str("^")?;
    } else {
        write!(out, " {} ", infix.symbol())?;
    }
    write_held(right, hold_right, out)
}

/// Writes a part, in parentheses where it holds together less tightly than it must.
fn write_held(node: &Node, at_least: Hold, out: &mut fmt::Formatter<'_>) -> fmt::Result {
    if hold(node) >= at_least { write!(out, "{node}") } else { write!(out, "({node})") }
}

fn hold(node: &Node) -> Hold {
    match &node.kind {
        Kind::Prefix(Prefix::Negate, _) => Hold::Sign,
        Kind::Prefix(Prefix::Not, _) => Hold::Not,
        Kind::Infix(infix, ..) => match infix {
            Infix::Or => Hold::Or,
            Infix::And => Hold::And,
            Infix::Add | Infix::Subtract => Hold::Sum,
            Infix::Multiply | Infix::Divide => Hold::Product,
            Infix::Power => Hold::Power,
            _ => Hold::Comparison,
        },
        _ => Hold::Value,
    }
}

struct Number(f64);

impl fmt::Display for Number {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write_number(self.0, out)
    }
}

/// The shortest digits that read back as the same number.
fn write_number(value: f64, out: &mut fmt::Formatter<'_>) -> fmt::Result {
    let plain = value == 0.0 || (1e-5..1e15).contains(&value.abs());
    if plain { write!(out, "{value}") } else { write!(out, "{value:e}") }
}

/// A name in quotes, with what would end them marked.
fn quoted(name: &str) -> String {
    format!("\"{}\"", name.replace('\\', "\\\\").replace('"', "\\\""))
}
