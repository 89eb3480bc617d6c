//! Where each footprint lies on the map: scan lines downwards, positions to the right, the
//! detectors of a cluster unfolded into a block.

use super::clusters::Clusters;

/// How a map by latitude and longitude lies on the globe.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Graticule {
    /// The longitude of the western edge, degrees east.
    pub west: f64,
    /// The latitude of the northern edge, degrees north.
    pub north: f64,
    /// Degrees of longitude and of latitude to a place.
    pub step: (f64, f64),
}

/// A map of footprints on a grid of places, some of which may be empty. On a map by latitude and
/// longitude a footprint may own several places, and several may lie at one, which the nearest owns.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Placement {
    columns: usize,
    rows: usize,
    /// The footprint at each place, row by row.
    owners: Vec<Option<u32>>,
    /// The place of each footprint; none where its position is not known.
    places: Vec<Option<u32>>,
    /// Footprints at places that others own, by place.
    others: Vec<(u32, u32)>,
    /// How it lies on the globe, where it goes by latitude and longitude.
    graticule: Option<Graticule>,
}

impl Placement {
    /// Lays out footprints of these dimensions (slowest first, as in the file). One dimension is
    /// wrapped into rows, two stand as they are, of three the last is taken for the detectors of a
    /// cluster; any more in front are stacked downwards. `coordinates` are latitude and longitude
    /// in degrees per footprint, and order the detectors of a cluster where they are known.
    pub fn unfold(lengths: &[usize], coordinates: Option<(&[f64], &[f64])>) -> Self {
        match *lengths {
            [] => Self::wrapped(1),
            [count] => Self::wrapped(count),
            [lines, positions] => {
                Self::of(positions, lines, (0..lines * positions).map(|place| place as u32))
            }
            [ref stacked @ .., positions, detectors] => {
                let lines = stacked.iter().product();
                let clusters = Clusters::new(lines, positions, detectors, coordinates);
                let (columns, rows) = clusters.size();
                Self::of(columns, rows, clusters.places())
            }
        }
    }

    fn wrapped(count: usize) -> Self {
        // Two cells of the terminal's half-blocks make a square, and a map wider than high fits most
        // panes, hence the factor.
        let columns = ((2.0 * count as f64).sqrt().ceil() as usize).clamp(1, count.max(1));
        Self::of(columns, count.div_ceil(columns), (0..count).map(|place| place as u32))
    }

    fn of(columns: usize, rows: usize, places: impl Iterator<Item = u32>) -> Self {
        let places: Vec<u32> = places.collect();
        let mut owners = vec![None; columns * rows];
        for (footprint, place) in places.iter().enumerate() {
            if let Some(owner) = owners.get_mut(*place as usize) {
                *owner = Some(footprint as u32);
            }
        }
        let places = places.into_iter().map(Some).collect();
        Self { columns, rows, owners, places, others: Vec::new(), graticule: None }
    }

    /// A map by latitude and longitude, with the owner of each place and the place of each footprint.
    pub(super) fn on_map(
        columns: usize,
        owners: Vec<Option<u32>>,
        places: Vec<Option<u32>>,
        graticule: Graticule,
    ) -> Self {
        let rows = owners.len() / columns.max(1);
        let mut others: Vec<(u32, u32)> = Vec::new();
        for (footprint, place) in (0..).zip(&places) {
            let Some(place) = *place else { continue };
            if owners.get(place as usize) != Some(&Some(footprint)) {
                others.push((place, footprint));
            }
        }
        others.sort_unstable();
        Self { columns, rows, owners, places, others, graticule: Some(graticule) }
    }

    /// How it lies on the globe, where it goes by latitude and longitude.
    pub fn graticule(&self) -> Option<Graticule> {
        self.graticule
    }

    /// Every footprint at a place: its owner, and those that lie there too.
    pub fn all_at(&self, column: usize, row: usize) -> impl Iterator<Item = usize> {
        let place = (row * self.columns + column) as u32;
        let first = self.others.partition_point(|other| other.0 < place);
        let here = self.others.iter().skip(first).take_while(move |other| other.0 == place);
        let others = here.map(|other| other.1 as usize);
        self.footprint_at(column, row).into_iter().chain(others)
    }

    /// Places across.
    pub fn columns(&self) -> usize {
        self.columns
    }

    /// Places down.
    pub fn rows(&self) -> usize {
        self.rows
    }

    /// How many footprints there are.
    pub fn footprints(&self) -> usize {
        self.places.len()
    }

    /// The footprint at a place; `None` outside the map and where no footprint lies.
    pub fn footprint_at(&self, column: usize, row: usize) -> Option<usize> {
        if column >= self.columns {
            return None;
        }
        let owner = *self.owners.get(row.checked_mul(self.columns)? + column)?;
        owner.map(|footprint| footprint as usize)
    }

    /// Column and row of a footprint.
    pub fn place_of(&self, footprint: usize) -> Option<(usize, usize)> {
        let place = (*self.places.get(footprint)?)? as usize;
        Some((place % self.columns, place / self.columns))
    }

    /// The footprint that lies so many places to the right and down, at most up to the edge; empty
    /// places are stepped over, and where nothing more lies that way the footprint itself.
    pub fn moved(&self, footprint: usize, right: isize, down: isize) -> usize {
        let Some((column, row)) = self.place_of(footprint) else {
            return self.beside_in_file(footprint, right + down);
        };
        let clamp = |from: usize, step: isize, length: usize| {
            from.saturating_add_signed(step).min(length.saturating_sub(1))
        };
        let target = (clamp(column, right, self.columns), clamp(row, down, self.rows));
        let forth = (right.signum(), down.signum());
        self.first_towards(target, forth, Some(footprint))
            .or_else(|| self.first_towards(target, (-forth.0, -forth.1), None))
            .unwrap_or(footprint)
    }

    /// The footprint before or after one in the file.
    fn beside_in_file(&self, footprint: usize, step: isize) -> usize {
        let last = self.places.len().saturating_sub(1);
        match footprint {
            outside if outside > last => outside,
            inside => inside.saturating_add_signed(step.signum()).min(last),
        }
    }

    /// The first footprint but this one from a place on in a direction.
    fn first_towards(
        &self,
        from: (usize, usize),
        step: (isize, isize),
        but: Option<usize>,
    ) -> Option<usize> {
        let (mut column, mut row) = from;
        loop {
            if column >= self.columns || row >= self.rows {
                return None;
            }
            let here = self.footprint_at(column, row);
            if here.is_some() && here != but {
                return here;
            }
            if step == (0, 0) {
                return None;
            }
            column = column.checked_add_signed(step.0)?;
            row = row.checked_add_signed(step.1)?;
        }
    }

    /// All footprints in the box between two footprints, in the map's order of rows and columns.
    pub fn footprints_between(&self, one: usize, other: usize) -> Vec<usize> {
        let (Some(a), Some(b)) = (self.place_of(one), self.place_of(other)) else {
            return Vec::new();
        };
        let columns = a.0.min(b.0)..=a.0.max(b.0);
        if self.graticule.is_some() {
            let rows = a.1.min(b.1)..=a.1.max(b.1);
            let is_in =
                |place: (usize, usize)| columns.contains(&place.0) && rows.contains(&place.1);
            return (0..self.places.len())
                .filter(|footprint| self.place_of(*footprint).is_some_and(is_in))
                .collect();
        }
        (a.1.min(b.1)..=a.1.max(b.1))
            .flat_map(|row| columns.clone().map(move |column| (column, row)))
            .filter_map(|(column, row)| self.footprint_at(column, row))
            .collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn two_dimensions_stand_as_they_are() {
        let map = Placement::unfold(&[3, 4], None);
        assert_eq!((map.columns(), map.rows()), (4, 3));
        assert_eq!(map.footprint_at(1, 2), Some(9));
        assert_eq!(map.place_of(9), Some((1, 2)));
    }

    #[test]
    fn one_dimension_is_wrapped() {
        let map = Placement::unfold(&[18], None);
        assert_eq!((map.columns(), map.rows()), (6, 3));
        assert_eq!(map.footprint_at(0, 1), Some(6));
    }

    #[test]
    fn nine_detectors_make_a_block_of_three_by_three() {
        let map = Placement::unfold(&[2, 5, 9], None);
        assert_eq!((map.columns(), map.rows()), (15, 6));
        // Detector 4 is the middle of its cluster; cluster (1, 2) begins at column 6, row 3.
        assert_eq!(map.place_of((5 + 2) * 9 + 4), Some((7, 4)));
    }

    #[test]
    fn moves_stop_at_the_edge_and_step_over_empty_places() {
        let map = Placement::unfold(&[2, 2, 3], None);
        // Three detectors leave one place of each 2x2 block empty:  0 1 | 3 4
        //                                                           2 . | 5 .
        assert_eq!(map.moved(2, 1, 0), 5);
        assert_eq!(map.moved(5, 1, 0), 5, "nothing lies further to the right");
        assert_eq!(map.moved(0, -1, 0), 0);
        assert_eq!(map.moved(0, 100, 0), 4);
        assert_eq!(map.moved(0, 0, 1), 2);
    }

    #[test]
    fn a_box_holds_what_lies_between_its_corners() {
        let map = Placement::unfold(&[4, 5], None);
        assert_eq!(map.footprints_between(13, 6), vec![6, 7, 8, 11, 12, 13]);
        assert_eq!(map.footprints_between(3, 3), vec![3]);
        assert_eq!(map.footprints_between(3, 99), Vec::<usize>::new());
    }

    proptest! {
        #[test]
        fn every_footprint_has_a_place_of_its_own(
            lengths in prop::collection::vec(0usize..7, 0..5),
            seed in prop::collection::vec(-400f64..400.0, 0..64),
            steps in prop::collection::vec((0usize..3000, -9isize..9, -9isize..9), 0..20),
        ) {
            let count: usize = lengths.iter().product();
            let number = |i: usize| seed.get(i % seed.len().max(1)).copied().unwrap_or(f64::NAN);
            let latitude: Vec<f64> = (0..count).map(number).collect();
            let longitude: Vec<f64> = (0..count).map(|i| number(i * 7 + 3)).collect();
            for coordinates in [None, Some((&latitude[..], &longitude[..]))] {
                let map = Placement::unfold(&lengths, coordinates);
                prop_assert_eq!(map.footprints(), count);
                for footprint in 0..count {
                    let (column, row) = map.place_of(footprint).unwrap();
                    prop_assert_eq!(map.footprint_at(column, row), Some(footprint));
                }
                for (footprint, right, down) in &steps {
                    let moved = map.moved(*footprint, *right, *down);
                    prop_assert!(moved < count || moved == *footprint);
                }
            }
        }
    }
}
