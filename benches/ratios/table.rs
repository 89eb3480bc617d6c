//! What a section reports.

use std::fmt;
use std::time::Duration;

/// One table: the first row is the plain path, to which the others are compared.
pub struct Section {
    /// What was done, over how much.
    pub title: String,
    /// Name and time of each path, the plain one first.
    pub rows: Vec<(&'static str, Duration)>,
    /// Further facts, such as errors.
    pub notes: Vec<String>,
}

impl fmt::Display for Section {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        writeln!(formatter, "{}", self.title)?;
        let plain = self.rows.first().map_or(0.0, |(_, time)| time.as_secs_f64());
        for (name, time) in &self.rows {
            let seconds = time.as_secs_f64();
            writeln!(
                formatter,
                "  {name:<44} {:>9.2} ms {:>7.2}x",
                1e3 * seconds,
                plain / seconds
            )?;
        }
        for note in &self.notes {
            writeln!(formatter, "  {note}")?;
        }
        Ok(())
    }
}
