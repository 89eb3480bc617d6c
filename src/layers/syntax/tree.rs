//! The syntax tree of an expression.

use std::ops::Range;

use super::place::Place;

/// Bytes of the text that a part of the tree was read from.
pub type Span = Range<usize>;

/// A part of an expression and where it stands in the text.
#[derive(Debug, Clone)]
pub struct Node {
    /// Where it stands.
    pub span: Span,
    /// What it is.
    pub kind: Kind,
}

impl Node {
    /// Shows this part and every part of it to `look`, in the order of the text.
    pub fn visit<'n>(&'n self, look: &mut dyn FnMut(&'n Node)) {
        look(self);
        match &self.kind {
            Kind::Planck(operand, _)
            | Kind::Prefix(_, operand)
            | Kind::Neighbourhood(_, _, operand) => operand.visit(look),
            Kind::Infix(_, left, right) => {
                left.visit(look);
                right.visit(look);
            }
            Kind::Call(_, operands) => operands.iter().for_each(|operand| operand.visit(look)),
            Kind::Number(_)
            | Kind::Name(_)
            | Kind::Variable(_)
            | Kind::Judged(..)
            | Kind::Spectral(..)
            | Kind::Calculated(..) => {}
        }
    }
}

/// Two parts are equal when they mean the same, wherever they stand.
impl PartialEq for Node {
    fn eq(&self, other: &Self) -> bool {
        self.kind == other.kind
    }
}

/// What a part of an expression is.
#[derive(Debug, Clone, PartialEq)]
pub enum Kind {
    /// A number.
    Number(f64),
    /// A bare name: a geolocation field, a definition, an index of a footprint dimension.
    Name(String),
    /// `var("name in the file")`.
    Variable(String),
    /// `doubt`, `doubt("cloudy")`, `margin("T01 gross window")`, …: what screening tests say.
    Judged(Judgement, Option<String>),
    /// `bt(…)` or `rad(…)`.
    Spectral(Quantity, Where),
    /// `bt_clear(nu)`, `departure(nu)`, …: the nearest channel and what a model calculated for it.
    Calculated(OfCalculated, Place),
    /// `planck(T, nu)`: the radiance of a black body.
    Planck(Box<Node>, Place),
    /// `-a`, `not a`.
    Prefix(Prefix, Box<Node>),
    /// `a + b`, `a < b`, `a and b`, …
    Infix(Infix, Box<Node>, Box<Node>),
    /// `min(a, b)`, `sqrt(a)`, …
    Call(Function, Vec<Node>),
    /// `sd3(a)`, `sd_cluster(a)`, …: over the footprints around each.
    Neighbourhood(Statistic, Around, Box<Node>),
}

/// What is asked of a channel for which a model calculated clear-sky spectra.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum OfCalculated {
    /// The calculated brightness temperature, K.
    Clear,
    /// Observed minus calculated, without the bias between them, K.
    Departure,
    /// That bias, K.
    Bias,
    /// Whether cloud reaches up into what the channel sees.
    Affected,
}

/// What is asked of a channel or an interval.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Quantity {
    /// Brightness temperature, K.
    BrightnessTemperature,
    /// Radiance, mW m-2 sr-1 (cm-1)-1.
    Radiance,
    /// Share of the channels that have no value, 0 to 1.
    MissingShare,
}

/// Where in the spectrum.
#[derive(Debug, Clone, PartialEq)]
pub enum Where {
    /// The nearest channel.
    At(Place),
    /// All channels of an interval; `low <= high` in wavenumber.
    Between(Place, Place),
}

/// Operators before their operand.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Prefix {
    /// Sign change.
    Negate,
    /// 1 for 0, 0 for anything else.
    Not,
}

/// Operators between their operands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum Infix {
    Or,
    And,
    Less,
    LessOrEqual,
    Greater,
    GreaterOrEqual,
    Equal,
    NotEqual,
    Add,
    Subtract,
    Multiply,
    Divide,
    Power,
}

impl Infix {
    /// Whether both sides ought to be measured in the same unit.
    pub fn wants_one_unit(self) -> bool {
        let free = [Self::Or, Self::And, Self::Multiply, Self::Divide, Self::Power];
        !free.contains(&self)
    }

    /// How it is written.
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Or => "or",
            Self::And => "and",
            Self::Less => "<",
            Self::LessOrEqual => "<=",
            Self::Greater => ">",
            Self::GreaterOrEqual => ">=",
            Self::Equal => "==",
            Self::NotEqual => "!=",
            Self::Add => "+",
            Self::Subtract => "-",
            Self::Multiply => "*",
            Self::Divide => "/",
            Self::Power => "^",
        }
    }
}

/// Functions of numbers, footprint by footprint.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Function {
    /// Smallest of two or more.
    Min,
    /// Largest of two or more.
    Max,
    /// Absolute value.
    Abs,
    /// Square root; missing below zero.
    Sqrt,
    /// Natural logarithm; missing at and below zero.
    Ln,
    /// Exponential.
    Exp,
    /// 1 where the value is missing, 0 where it is there.
    Missing,
}

/// What is asked of screening tests.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Judgement {
    /// How doubtful a footprint, or a flag there, is: 0 plain, 1 a coin toss or hardly tested.
    Doubt,
    /// How probable a flag is, 0 to 1.
    Probability,
    /// Whether a flag is set.
    Flag,
    /// By how much a test speaks for its flag, in units of its softness.
    Margin,
}

impl Judgement {
    /// In a word.
    pub fn word(self) -> &'static str {
        match self {
            Self::Doubt => "doubt",
            Self::Probability => "probability",
            Self::Flag => "a flag",
            Self::Margin => "a margin",
        }
    }
}

/// Which footprints a statistic is over.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Around {
    /// The neighbourhood on the ground, nine at the most.
    Nine,
    /// The detectors at the same scan line and position.
    Cluster,
}

/// Statistics of the footprints around one.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Statistic {
    /// Population standard deviation.
    StandardDeviation,
    /// Mean.
    Mean,
    /// Smallest.
    Minimum,
    /// Largest.
    Maximum,
    /// Largest minus smallest.
    Range,
}
