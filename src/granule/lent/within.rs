//! How near in place and time is near enough.

use std::fmt;
use std::str::FromStr;

/// The tolerance of a join by place and time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Within {
    /// Distance on the ground, m.
    pub metres: f64,
    /// Difference in time, s.
    pub seconds: f64,
}

impl Default for Within {
    /// 10 km, about a footprint, and 15 minutes, in which a cloud drifts as far.
    fn default() -> Self {
        Self { metres: 10_000.0, seconds: 900.0 }
    }
}

/// Units of length with their metres.
const LENGTHS: [(&str, f64); 2] = [("km", 1000.0), ("m", 1.0)];
/// Units of time with their seconds.
const TIMES: [(&str, f64); 4] = [("min", 60.0), ("s", 1.0), ("h", 3600.0), ("d", 86_400.0)];

impl FromStr for Within {
    type Err = String;

    /// Reads `10km,15min`, or one of the two; the other is as without.
    fn from_str(text: &str) -> Result<Self, String> {
        let mut within = Self::default();
        for part in text.split(',') {
            let (number, unit) = parted(part.trim()).ok_or_else(|| {
                format!("{part:?} is no distance or time; write it as in 10km,15min")
            })?;
            if let Some((_, metres)) = LENGTHS.iter().find(|(name, _)| *name == unit) {
                within.metres = number * metres;
            } else if let Some((_, seconds)) = TIMES.iter().find(|(name, _)| *name == unit) {
                within.seconds = number * seconds;
            } else {
                return Err(format!("unit {unit:?} is none of km, m, s, min, h, d"));
            }
        }
        Ok(within)
    }
}

/// A number of zero or more, and what follows it.
fn parted(text: &str) -> Option<(f64, &str)> {
    let end = text.find(|c: char| c.is_ascii_alphabetic())?;
    let number: f64 = text[..end].trim().parse().ok()?;
    (number.is_finite() && number >= 0.0).then_some((number, &text[end..]))
}

impl fmt::Display for Within {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.metres < 1000.0 {
            true => write!(out, "{} m", self.metres)?,
            false => write!(out, "{} km", self.metres / 1000.0)?,
        }
        // The largest unit in which it is a whole number.
        let whole = |worth: &f64| self.seconds >= *worth && self.seconds % worth == 0.0;
        let units = [("d", 86_400.0), ("h", 3600.0), ("min", 60.0)];
        match units.iter().find(|(_, worth)| whole(worth)) {
            Some((name, worth)) => write!(out, ", {} {name}", self.seconds / worth),
            None => write!(out, ", {} s", self.seconds),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn tolerances_are_read_and_written() {
        let read = |text: &str| text.parse::<Within>().unwrap();
        assert_eq!(read("25km"), Within { metres: 25_000.0, ..Within::default() });
        assert_eq!(read("500 m, 2h"), Within { metres: 500.0, seconds: 7200.0 });
        for (text, shown) in [("30s", "10 km, 30 s"), ("90s", "10 km, 90 s"), ("3h", "10 km, 3 h")]
        {
            assert_eq!(read(text).to_string(), shown);
        }
        assert_eq!(Within::default().to_string(), "10 km, 15 min");
        for bad in ["", "10", "km", "10 miles", "-1km", "1km,,", "nankm", "infs"] {
            assert!(bad.parse::<Within>().is_err(), "{bad}");
        }
    }
}
