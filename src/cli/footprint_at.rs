//! A footprint as it is named on the command line: its indices with commas.

use super::exit::UsageError;
use crate::granule::FootprintGrid;

/// The indices that were typed behind `option`.
///
/// # Errors
/// They are no whole numbers.
pub fn indices(option: &str, text: &str) -> Result<Vec<usize>, UsageError> {
    let index = |part: &str| {
        part.trim().parse::<usize>().map_err(|_| {
            UsageError(format!(
                "{option}: {:?} is no index; give whole numbers from 0 with commas, as in 12,34",
                part.trim()
            ))
        })
    };
    text.split(',').map(index).collect()
}

/// The footprint's number.
///
/// # Errors
/// There is none; the message tells the dimensions.
pub fn footprint(
    option: &str,
    grid: &FootprintGrid,
    position: &[usize],
) -> Result<usize, UsageError> {
    grid.number(position).ok_or_else(|| {
        let dimensions = grid.names().iter().zip(grid.lengths());
        let ranges: Vec<String> = dimensions
            .map(|(name, length)| match length.checked_sub(1) {
                Some(last) => format!("{name} 0 to {last}"),
                None => format!("{name} (empty)"),
            })
            .collect();
        let typed: Vec<String> = position.iter().map(usize::to_string).collect();
        UsageError(format!(
            "{option}: there is no footprint {}; the file has {}",
            typed.join(","),
            ranges.join(", ")
        ))
    })
}
