//! One side of a value of a layer: `< 230`, `>= 1.5`.

/// One side of a value, the value itself left out or taken in as typed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Side {
    /// Which side.
    pub relation: Relation,
    /// The value, in the layer's unit.
    pub value: f64,
}

/// How a footprint's value has to stand to the side's.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Relation {
    /// `<`
    Below,
    /// `<=`
    UpTo,
    /// `>`
    Above,
    /// `>=`
    From,
}

impl Relation {
    /// As it is typed.
    pub fn symbol(self) -> &'static str {
        match self {
            Relation::Below => "<",
            Relation::UpTo => "<=",
            Relation::Above => ">",
            Relation::From => ">=",
        }
    }

    /// The other side.
    pub fn opposite(self) -> Relation {
        match self {
            Relation::Below => Relation::From,
            Relation::UpTo => Relation::Above,
            Relation::Above => Relation::UpTo,
            Relation::From => Relation::Below,
        }
    }
}

impl Side {
    /// `< 230`, `>=1.5`.
    ///
    /// # Errors
    /// A message that shows the form.
    pub fn parse(text: &str) -> Result<Side, String> {
        let text = text.trim();
        let (relation, rest) = [
            ("<=", Relation::UpTo),
            ("<", Relation::Below),
            (">=", Relation::From),
            (">", Relation::Above),
        ]
        .into_iter()
        .find_map(|(symbol, relation)| Some((relation, text.strip_prefix(symbol)?)))
        .ok_or("begin with < or > and a value, as in < 230")?;
        let value = rest.trim().parse().ok().filter(|value: &f64| value.is_finite());
        let value = value.ok_or_else(|| format!("{} is no number", rest.trim()))?;
        Ok(Side { relation, value })
    }

    /// Whether a value lies on this side; a missing value never does.
    pub fn holds(&self, value: f64) -> bool {
        match self.relation {
            Relation::Below => value < self.value,
            Relation::UpTo => value <= self.value,
            Relation::Above => value > self.value,
            Relation::From => value >= self.value,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_missing_value_lies_on_no_side() {
        for relation in [Relation::Below, Relation::UpTo, Relation::Above, Relation::From] {
            let side = Side { relation, value: 1.0 };
            assert!(!side.holds(f64::NAN));
            assert_ne!(
                side.holds(1.0),
                Side { relation: relation.opposite(), value: 1.0 }.holds(1.0)
            );
        }
    }
}
