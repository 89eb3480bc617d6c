//! Limits: numbers, tables, expressions.

use crate::layers::Expression;

/// On which side of the threshold a test speaks for its flag.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sense {
    /// Values above it.
    Above,
    /// Values below it.
    Below,
}

impl Sense {
    /// As written in a rulebook.
    pub fn word(self) -> &'static str {
        match self {
            Self::Above => "above",
            Self::Below => "below",
        }
    }

    /// As written between value and threshold.
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Above => ">",
            Self::Below => "<",
        }
    }

    /// Distance from the threshold in units of the softness, positive for the flag, clipped to
    /// ±1.5. NaN where value or threshold is.
    pub fn margin(self, value: f64, threshold: f64, softness: f64) -> f64 {
        let distance = match self {
            Self::Above => value - threshold,
            Self::Below => threshold - value,
        };
        (distance / softness).clamp(-1.5, 1.5)
    }
}

/// The limit of a test.
#[derive(Debug, Clone)]
pub enum Threshold {
    /// The same everywhere.
    Number(f64),
    /// From a table over one or two expressions.
    Table(Box<Table>),
    /// From an expression.
    Expression(Expression),
}

impl Threshold {
    /// What it is worked out from.
    pub fn expressions(&self) -> &[Expression] {
        match self {
            Self::Number(_) => &[],
            Self::Expression(expression) => std::slice::from_ref(expression),
            Self::Table(table) => &table.over,
        }
    }
}

/// A table over one or two expressions: linear between its points, constant beyond its edges.
#[derive(Debug, Clone)]
pub struct Table {
    /// What it is over.
    pub over: Vec<Expression>,
    /// Ascending points along each.
    pub at: Vec<Vec<f64>>,
    /// Values; along the last expression fastest.
    pub values: Vec<f64>,
}

impl Table {
    /// The value at a place, one number per expression; NaN where one of them is.
    pub fn value(&self, place: &[f64]) -> f64 {
        match (&self.at[..], place) {
            ([points], [x]) => {
                let (low, high, share) = between(points, *x);
                mix(self.values[low], self.values[high], share)
            }
            ([rows, columns], [y, x]) => {
                let (top, bottom, down) = between(rows, *y);
                let (left, right, across) = between(columns, *x);
                let row = |row: usize| {
                    let values = &self.values[row * columns.len()..(row + 1) * columns.len()];
                    mix(values[left], values[right], across)
                };
                mix(row(top), row(bottom), down)
            }
            _ => f64::NAN,
        }
    }
}

fn mix(low: f64, high: f64, share: f64) -> f64 {
    // Not low + share (high - low): at share 1 that may miss the table's own value.
    low * (1.0 - share) + high * share
}

/// The points around `x` and how far it lies between them; `points` is not empty.
fn between(points: &[f64], x: f64) -> (usize, usize, f64) {
    let after = points.partition_point(|point| *point <= x);
    let last = points.len() - 1;
    if x.is_nan() {
        (0, 0, f64::NAN)
    } else if after == 0 {
        (0, 0, 0.0)
    } else if after > last {
        (last, last, 0.0)
    } else {
        let (low, high) = (points[after - 1], points[after]);
        (after - 1, after, (x - low) / (high - low))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table(at: &[&[f64]], values: &[f64]) -> Table {
        let over = at.iter().map(|_| Expression::parse("lat").unwrap()).collect();
        Table { over, at: at.iter().map(|points| points.to_vec()).collect(), values: values.into() }
    }

    #[test]
    fn one_dimension_is_linear_between_and_constant_beyond() {
        let table = table(&[&[260.0, 270.0, 300.0]], &[1.0, 3.0, 0.0]);
        for (x, expected) in
            [(200.0, 1.0), (260.0, 1.0), (265.0, 2.0), (270.0, 3.0), (285.0, 1.5), (400.0, 0.0)]
        {
            assert_eq!(table.value(&[x]), expected, "{x}");
        }
        assert!(table.value(&[f64::NAN]).is_nan());
    }

    /// The published table [Saunders & Kriebel 1988], numbers from memory, at its points and
    /// between four of them.
    #[test]
    fn two_dimensions_are_bilinear() {
        let table =
            table(&[&[280.0, 290.0], &[1.0, 1.25, 1.5]], &[1.30, 1.61, 1.88, 3.06, 3.72, 3.95]);
        assert_eq!(table.value(&[290.0, 1.25]), 3.72);
        assert_eq!(table.value(&[310.0, 3.0]), 3.95);
        let middle = (1.30 + 1.61 + 3.06 + 3.72) / 4.0;
        // Four products are rounded once each.
        assert!((table.value(&[285.0, 1.125]) - middle).abs() < 1e-12);
        assert!(table.value(&[285.0, f64::NAN]).is_nan());
    }

    #[test]
    fn margins_are_signed_for_the_flag_and_clipped() {
        assert_eq!(Sense::Below.margin(267.0, 270.0, 3.0), 1.0);
        assert_eq!(Sense::Below.margin(271.5, 270.0, 3.0), -0.5);
        assert_eq!(Sense::Above.margin(280.0, 270.0, 3.0), 1.5);
        assert_eq!(Sense::Above.margin(0.0, 270.0, 3.0), -1.5);
        assert!(Sense::Above.margin(f64::NAN, 270.0, 3.0).is_nan());
    }
}
