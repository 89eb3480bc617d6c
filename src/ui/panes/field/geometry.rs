//! From places of the map to cells of the screen and back.

use std::ops::Range;

use ratatui::layout::Rect;

use super::Placement;

/// How much more one direction may be stretched than the other, to use the room.
const STRETCH: f64 = 2.5;

/// How a part of the map is spread over an area of the screen. A cell holds one or two dots, one
/// above the other; a dot shows one place, or several of which one is taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Geometry {
    /// The cells that are used, at the top left of what was offered.
    pub area: Rect,
    /// Dots in each cell, 1 or 2.
    pub dots: u16,
    /// First column and row of the map on show.
    origin: (usize, usize),
    /// Columns and rows of the map on show.
    extent: (usize, usize),
    /// Columns and rows of dots.
    size: (usize, usize),
}

impl Geometry {
    /// Spreads a map over an area, so that both directions are stretched about alike and, where there
    /// is room, by whole or half numbers. `zoom` halves what is shown as often, around
    /// the cursor; what is shown moves on by half its size at a time, so that most moves of the
    /// cursor leave the picture as it is. `None` where there is nothing to show or no room.
    pub fn new(
        area: Rect,
        dots: u16,
        placement: &Placement,
        cursor: Option<usize>,
        zoom: u8,
    ) -> Option<Self> {
        let whole = (placement.columns(), placement.rows());
        if area.is_empty() || whole.0 == 0 || whole.1 == 0 {
            return None;
        }
        let centre = cursor.and_then(|footprint| placement.place_of(footprint));
        let centre = centre.unwrap_or((whole.0 / 2, whole.1 / 2));
        let (x, columns) = window(centre.0, whole.0, zoom);
        let (y, rows) = window(centre.1, whole.1, zoom);
        let dots = dots.clamp(1, 2);
        let room = (usize::from(area.width), usize::from(area.height) * usize::from(dots));
        let size = spread(room, (columns, rows), dots);
        let used = Rect {
            width: size.0 as u16,
            height: (size.1 as u16).div_ceil(dots).min(area.height),
            ..area
        };
        Some(Self { area: used, dots, origin: (x, y), extent: (columns, rows), size })
    }

    /// The places that a dot stands for: columns and rows of the map. `None` outside.
    pub(super) fn places(&self, dot: (usize, usize)) -> Option<(Range<usize>, Range<usize>)> {
        if dot.0 >= self.size.0 || dot.1 >= self.size.1 {
            return None;
        }
        let along = |dot: usize, origin: usize, extent: usize, size: usize| {
            let start = dot * extent / size;
            let end = ((dot + 1) * extent / size).max(start + 1);
            origin + start..origin + end
        };
        Some((
            along(dot.0, self.origin.0, self.extent.0, self.size.0),
            along(dot.1, self.origin.1, self.extent.1, self.size.1),
        ))
    }

    /// The cell of the screen in which a place of the map lies, where fractions are parts of a place.
    pub(super) fn cell_at(&self, column: f64, row: f64) -> Option<(u16, u16)> {
        let along = |place: f64, origin: usize, extent: usize, size: usize| {
            let share = (place - origin as f64) / extent as f64;
            (0.0..1.0).contains(&share).then_some((share * size as f64) as u16)
        };
        let x = along(column, self.origin.0, self.extent.0, self.size.0)?;
        let y = along(row, self.origin.1, self.extent.1, self.size.1)?;
        Some((self.area.x + x, self.area.y + y / self.dots))
    }

    /// Columns and rows of the map on show: first and behind the last.
    pub(super) fn shown(&self) -> (Range<usize>, Range<usize>) {
        let range = |origin: usize, extent: usize| origin..origin + extent;
        (range(self.origin.0, self.extent.0), range(self.origin.1, self.extent.1))
    }

    /// The dots of a cell, from above.
    pub(super) fn dots_of(&self, cell: (u16, u16)) -> impl Iterator<Item = (usize, usize)> {
        let column = usize::from(cell.0 - self.area.x);
        let first = usize::from(cell.1 - self.area.y) * usize::from(self.dots);
        (first..first + usize::from(self.dots)).map(move |row| (column, row))
    }

    /// The footprint that a dot shows: the middle one of its places, or the first that is there.
    pub(super) fn footprint_of(&self, dot: (usize, usize), placement: &Placement) -> Option<usize> {
        let (columns, rows) = self.places(dot)?;
        let middle = (
            columns.start + (columns.end - columns.start) / 2,
            rows.start + (rows.end - rows.start) / 2,
        );
        placement.footprint_at(middle.0, middle.1).or_else(|| {
            rows.flat_map(|row| columns.clone().map(move |column| (column, row)))
                .find_map(|(column, row)| placement.footprint_at(column, row))
        })
    }

    /// The footprint that a cell of the screen shows, the upper one of two; `None` outside the map.
    pub fn footprint_at(&self, placement: &Placement, cell: (u16, u16)) -> Option<usize> {
        if !self.area.contains(cell.into()) {
            return None;
        }
        self.dots_of(cell).find_map(|dot| self.footprint_of(dot, placement))
    }

    /// The cell of the screen where a footprint lies, the middle one of several; `None` where it is
    /// not on show.
    pub fn cell_of(&self, placement: &Placement, footprint: usize) -> Option<(u16, u16)> {
        let (column, row) = placement.place_of(footprint)?;
        let along = |place: usize, origin: usize, extent: usize, size: usize| {
            let place = place.checked_sub(origin).filter(|place| *place < extent)?;
            // First and last dot whose places include this one.
            let last = ((place + 1) * size - 1) / extent;
            let first = (place * size).div_ceil(extent).min(last);
            Some((first + last) / 2)
        };
        let x = along(column, self.origin.0, self.extent.0, self.size.0)?;
        let y = along(row, self.origin.1, self.extent.1, self.size.1)?;
        Some((self.area.x + x as u16, self.area.y + y as u16 / self.dots))
    }
}

/// The part of a length on show after halving it so often: its start and length.
fn window(centre: usize, length: usize, zoom: u8) -> (usize, usize) {
    let shown = length.checked_shr(u32::from(zoom)).unwrap_or(0).max(4).min(length);
    let half = (shown / 2).max(1);
    let start = (centre / half * half).saturating_sub(half / 2);
    (start.min(length - shown), shown)
}

/// Columns and rows of dots for so many columns and rows of the map.
fn spread(room: (usize, usize), extent: (usize, usize), dots: u16) -> (usize, usize) {
    // A cell of the terminal is about twice as high as wide, so half a cell is a square.
    let height = 2.0 / f64::from(dots);
    let across = room.0 as f64 / extent.0 as f64;
    let down = room.1 as f64 / extent.1 as f64 * height;
    let fit = |scale: f64, extent: usize, room: usize| {
        // Halves still make a regular pattern, of one dot and two by turns.
        let scale = if scale >= 1.0 { (2.0 * scale).floor() / 2.0 } else { scale };
        ((scale * extent as f64) as usize).clamp(1, room)
    };
    (
        fit(across.min(STRETCH * down), extent.0, room.0),
        fit(down.min(STRETCH * across) / height, extent.1, room.1),
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn a_small_map_is_enlarged_by_whole_numbers() {
        let map = Placement::unfold(&[3, 4], None);
        let geometry = Geometry::new(Rect::new(10, 5, 21, 9), 2, &map, None, 0).unwrap();
        assert_eq!(geometry.area, Rect::new(10, 5, 20, 9));
        assert_eq!(geometry.footprint_at(&map, (10, 5)), Some(0));
        assert_eq!(geometry.footprint_at(&map, (29, 13)), Some(11));
        assert_eq!(geometry.footprint_at(&map, (30, 13)), None);
        assert_eq!(geometry.cell_of(&map, 5), Some((17, 9)));
    }

    #[test]
    fn a_large_map_is_thinned_out() {
        let map = Placement::unfold(&[45, 30, 9], None);
        let geometry = Geometry::new(Rect::new(0, 0, 35, 11), 2, &map, None, 0).unwrap();
        assert!(geometry.area.width >= 29 && geometry.area.height == 11, "{geometry:?}");
        assert_eq!(geometry.cell_of(&map, 0), Some((0, 0)));
    }

    #[test]
    fn zooming_keeps_the_cursor_on_show_and_the_picture_still() {
        let map = Placement::unfold(&[100, 80], None);
        let area = Rect::new(0, 0, 40, 20);
        let mut pictures = 0;
        let mut previous = None;
        for column in 0..80 {
            let cursor = 50 * 80 + column;
            let geometry = Geometry::new(area, 2, &map, Some(cursor), 2).unwrap();
            assert!(geometry.cell_of(&map, cursor).is_some());
            pictures += usize::from(previous.replace(geometry) != Some(geometry));
        }
        assert!(pictures <= 8, "80 moves redrew the picture {pictures} times");
    }

    proptest! {
        #[test]
        fn cells_and_footprints_find_each_other(
            lengths in prop::collection::vec(1usize..40, 1..4),
            width in 0u16..120, height in 0u16..50,
            dots in 1u16..3, zoom in 0u8..9, cursor in 0usize..2000,
        ) {
            let map = Placement::unfold(&lengths, None);
            let area = Rect::new(3, 2, width, height);
            let cursor = cursor % map.footprints();
            let Some(geometry) = Geometry::new(area, dots, &map, Some(cursor), zoom) else {
                prop_assert!(area.is_empty());
                return Ok(());
            };
            prop_assert_eq!(geometry.area.intersection(area), geometry.area);
            let cell = geometry.cell_of(&map, cursor);
            prop_assert!(cell.is_some(), "the cursor is always on show");
            for footprint in 0..map.footprints() {
                let Some(cell) = geometry.cell_of(&map, footprint) else { continue };
                prop_assert!(geometry.area.contains(cell.into()));
                let (column, row) = map.place_of(footprint).unwrap();
                let shown = geometry.dots_of(cell).filter_map(|dot| geometry.places(dot)).any(
                    |(columns, rows)| columns.contains(&column) && rows.contains(&row),
                );
                prop_assert!(shown, "the cell stands for the footprint");
            }
            for row in geometry.area.rows() {
                for position in row.columns() {
                    let here = (position.x, position.y);
                    let Some(footprint) = geometry.footprint_at(&map, here) else { continue };
                    prop_assert!(geometry.cell_of(&map, footprint).is_some());
                }
            }
        }
    }
}
