//! The footprints of a granule: their dimensions, and places in row-major order.

/// The grid of footprints: one, two or three dimensions, in the file's order.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct FootprintGrid {
    names: Vec<String>,
    lengths: Vec<usize>,
}

impl FootprintGrid {
    /// A grid with the given dimension names and lengths.
    pub fn new(names: Vec<String>, lengths: Vec<usize>) -> Self {
        Self { names, lengths }
    }

    /// The name of a table's column beside those of the indices: another one where a dimension has that
    /// name, for the indices stand under it.
    pub fn column(&self, name: &str) -> String {
        match self.names.iter().any(|dimension| dimension == name) {
            true => format!("{name}_of_footprint"),
            false => name.to_owned(),
        }
    }

    /// The dimensions' names in the file, slowest first.
    pub fn names(&self) -> &[String] {
        &self.names
    }

    /// The dimensions' lengths, slowest first.
    pub fn lengths(&self) -> &[usize] {
        &self.lengths
    }

    /// How many footprints there are.
    pub fn count(&self) -> usize {
        self.lengths.iter().product()
    }

    /// How many footprints share one place along the first dimension.
    pub fn row_length(&self) -> usize {
        self.lengths.iter().skip(1).product()
    }

    /// The footprint's number in row-major order; none outside of the grid.
    pub fn number(&self, position: &[usize]) -> Option<usize> {
        let inside = position.len() == self.lengths.len()
            && position.iter().zip(&self.lengths).all(|(place, length)| place < length);
        let number = || {
            position
                .iter()
                .zip(&self.lengths)
                .fold(0, |number, (place, length)| number * length + place)
        };
        inside.then(number)
    }

    /// The zero-based indices of a footprint in words: `(12, 34, 5)`.
    pub fn position_words(&self, number: usize) -> String {
        let parts: Vec<String> = self.position(number).iter().map(usize::to_string).collect();
        format!("({})", parts.join(", "))
    }

    /// The zero-based indices of a footprint along each dimension.
    pub fn position(&self, number: usize) -> Vec<usize> {
        let mut rest = number;
        let mut position = vec![0; self.lengths.len()];
        for (place, &length) in position.iter_mut().zip(&self.lengths).rev() {
            // A grid without footprints has no positions either; nothing is divided by zero.
            *place = rest % length.max(1);
            rest /= length.max(1);
        }
        position
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn grid() -> FootprintGrid {
        FootprintGrid::new(vec!["line".into(), "position".into(), "detector".into()], vec![4, 3, 2])
    }

    #[test]
    fn numbers_and_positions_are_inverse() {
        let grid = grid();
        assert_eq!(grid.count(), 24);
        for number in 0..grid.count() {
            assert_eq!(grid.number(&grid.position(number)), Some(number));
        }
        assert_eq!(grid.number(&[1, 2, 1]), Some(6 + 5));
    }

    #[test]
    fn places_outside_have_no_number() {
        assert_eq!(grid().number(&[4, 0, 0]), None);
        assert_eq!(grid().number(&[0, 0]), None);
    }
}
