//! Which dimensions of a file count footprints, and how smaller variables spread over them.

use super::footprints::FootprintGrid;
use crate::netcdf_files::{FileIndex, Variable};

/// The footprint dimensions of a granule, as places in the file's list, slowest first.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct FootprintDimensions(pub Vec<usize>);

/// How a variable lies over the footprints.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Spread {
    /// The footprint dimension that each of the variable's dimensions runs along.
    pub along: Vec<usize>,
    /// Whether a dimension of another group was taken for the same one by its name and length.
    pub guessed: bool,
}

impl FootprintDimensions {
    /// Which footprint dimension a dimension is, and whether that is a guess by name and length.
    pub fn place_of(&self, index: &FileIndex, dimension: usize) -> Option<(usize, bool)> {
        if let Some(place) = self.0.iter().position(|&own| own == dimension) {
            return Some((place, false));
        }
        let other = &index.dimensions[dimension];
        let alike = |&own: &usize| {
            let own = &index.dimensions[own];
            own.name == other.name && own.length == other.length
        };
        self.0.iter().position(alike).map(|place| (place, true))
    }

    /// How a variable lies over the footprints; none where it has other dimensions, or none at all.
    pub fn spread(&self, index: &FileIndex, variable: &Variable) -> Option<Spread> {
        let places: Option<Vec<(usize, bool)>> =
            variable.dimensions.iter().map(|&dimension| self.place_of(index, dimension)).collect();
        let places = places.filter(|places| !places.is_empty())?;
        let along: Vec<usize> = places.iter().map(|&(place, _)| place).collect();
        let twice = along.iter().enumerate().any(|(number, place)| along[..number].contains(place));
        let guessed = places.iter().any(|&(_, guessed)| guessed);
        (!twice).then_some(Spread { along, guessed })
    }
}

impl Spread {
    /// For a variable that is said to lie over the footprints: its dimensions are theirs, in their
    /// order, where the lengths agree.
    pub fn by_lengths(grid: &FootprintGrid, lengths: &[usize]) -> Option<Self> {
        let agree = grid.lengths() == lengths;
        agree.then(|| Self { along: (0..lengths.len()).collect(), guessed: true })
    }

    /// For a variable with one value, which is that of all footprints.
    pub fn of_single(index: &FileIndex, variable: &Variable) -> Option<Self> {
        let single = index.lengths(variable).iter().all(|length| *length == 1);
        single.then(|| Self { along: Vec::new(), guessed: false })
    }

    /// Whether there is one value for each footprint.
    pub fn is_full(&self, grid: &FootprintGrid) -> bool {
        self.along.len() == grid.lengths().len()
    }

    /// A variable's values, repeated along the dimensions that it lacks: one for each footprint.
    pub fn over(&self, grid: &FootprintGrid, values: Vec<f64>) -> Vec<f64> {
        if self.is_full(grid) && self.along.windows(2).all(|pair| pair[0] < pair[1]) {
            return values;
        }
        let mut strides = vec![0; grid.lengths().len()];
        let mut stride = 1;
        for &place in self.along.iter().rev() {
            strides[place] = stride;
            stride *= grid.lengths()[place];
        }
        let offset = |number| {
            grid.position(number).iter().zip(&strides).map(|(place, stride)| place * stride).sum()
        };
        let value = |number| values.get::<usize>(offset(number)).copied().unwrap_or(f64::NAN);
        (0..grid.count()).map(value).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn grid() -> FootprintGrid {
        FootprintGrid::new(vec!["line".into(), "position".into()], vec![2, 3])
    }

    fn over(along: &[usize], values: &[f64]) -> Vec<f64> {
        Spread { along: along.to_vec(), guessed: false }.over(&grid(), values.to_vec())
    }

    #[test]
    fn a_value_for_each_line_is_repeated_along_it() {
        assert_eq!(over(&[0], &[1.0, 2.0]), [1.0, 1.0, 1.0, 2.0, 2.0, 2.0]);
        assert_eq!(over(&[1], &[1.0, 2.0, 3.0]), [1.0, 2.0, 3.0, 1.0, 2.0, 3.0]);
    }

    #[test]
    fn turned_dimensions_are_turned_back() {
        // position x line, as stored.
        assert_eq!(over(&[1, 0], &[1.0, 4.0, 2.0, 5.0, 3.0, 6.0]), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]);
    }

    #[test]
    fn full_values_stay() {
        assert_eq!(over(&[0, 1], &[1.0, 2.0, 3.0, 4.0, 5.0, 6.0]), [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]);
    }
}
