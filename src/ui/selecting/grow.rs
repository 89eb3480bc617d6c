//! Footprints that hang together.

use std::collections::VecDeque;

use crate::flags::FootprintSet;
use crate::ui::panes::field::Placement;

/// Those of the footprints that are reached from `start` over neighbours on the map, the slanting
/// ones too; none where `start` is not among them. The map is that of the instrument: on one by
/// latitude and longitude neighbours may lie places apart.
pub fn connected(footprints: &FootprintSet, start: usize, map: &Placement) -> FootprintSet {
    let mut left = vec![false; map.footprints()];
    footprints.iter().filter_map(|one| left.get_mut(one).map(|mark| *mark = true)).count();
    let mut reached = Vec::new();
    let mut waiting = VecDeque::from([start]);
    while let Some(here) = waiting.pop_front() {
        match left.get_mut(here) {
            Some(mark) if *mark => *mark = false,
            _ => continue,
        }
        reached.push(here);
        let Some((column, row)) = map.place_of(here) else { continue };
        for y in row.saturating_sub(1)..=row + 1 {
            for x in column.saturating_sub(1)..=column + 1 {
                waiting.extend(map.footprint_at(x, y));
            }
        }
    }
    reached.into_iter().collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn it_grows_to_slanting_neighbours_and_stops_at_gaps() {
        // ##.#
        // ..#.
        // #...
        let map = Placement::unfold(&[3, 4], None);
        let set: FootprintSet = [0, 1, 3, 6, 8].into_iter().collect();
        let grown = |start| connected(&set, start, &map).iter().collect::<Vec<_>>();
        assert_eq!(grown(0), [0, 1, 3, 6]);
        assert_eq!(grown(8), [8]);
        assert!(grown(5).is_empty() && grown(99).is_empty());
    }
}
