//! Where each pane lies on the screen.

use ratatui::buffer::Buffer;
use ratatui::layout::{Rect, Size};

use super::{Arrangement, Pane};

/// The smallest terminal that everything fits on.
pub const SMALLEST: Size = Size { width: 80, height: 24 };

/// The parts of the screen that panes lie in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Part {
    /// Narrow, at the left.
    Left,
    /// Between left and right.
    Middle,
    /// At the right.
    Right,
    /// Below the right part, on a screen of middle size.
    Corner,
    /// A second column at the right, its upper part, on a wide screen.
    First,
    /// Below the first part.
    Second,
    /// Below the second part.
    Third,
    /// Across the whole width, below everything else.
    Bottom,
}

/// The smallest screen that has corners, and the smallest that has a second column at the right.
const ROOMIER: [Size; 2] = [Size { width: 110, height: 36 }, Size { width: 170, height: 48 }];

/// The rectangles of one screen.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct ScreenLayout {
    /// The panes on show and where.
    panes: Vec<(Pane, Rect)>,
    /// One line: what happened last and the counts.
    pub status: Rect,
    /// The last line: hints, or the command line while one is typed.
    pub command: Rect,
}

impl ScreenLayout {
    /// The layout of a screen. Of the panes that share a part the one that had the keys last is
    /// shown, or the first where none had. `None` where the terminal is smaller than [`SMALLEST`].
    pub fn of(screen: Rect, arrangement: &Arrangement) -> Option<Self> {
        if screen.width < SMALLEST.width || screen.height < SMALLEST.height {
            return None;
        }
        let lines = |y: u16, height: u16| Rect { y: screen.y + y, height, ..screen };
        let room = lines(0, screen.height - 2);
        let panes = match arrangement.is_zoomed() {
            true => vec![(arrangement.focus(), room)],
            false => share(room, &in_front(screen, arrangement)),
        };
        let (status, command) = (lines(screen.height - 2, 1), lines(screen.height - 1, 1));
        Some(Self { panes, status, command })
    }

    /// The whole screen, whose last line is that of commands.
    pub fn screen(&self) -> Rect {
        Rect { y: 0, height: self.command.bottom(), ..self.command }
    }

    /// The panes on show and where.
    pub fn panes(&self) -> impl Iterator<Item = (Pane, Rect)> {
        self.panes.iter().copied()
    }

    /// The rectangle of a pane, if it is on show.
    pub fn area(&self, pane: Pane) -> Option<Rect> {
        self.panes.iter().find(|(one, _)| *one == pane).map(|(_, area)| *area)
    }

    /// The pane at a place on the screen.
    pub fn pane_at(&self, column: u16, row: u16) -> Option<Pane> {
        let at = self.panes.iter().find(|(_, area)| area.contains((column, row).into()));
        at.map(|(pane, _)| *pane)
    }
}

/// The pane in front in each part that has any.
fn in_front(screen: Rect, arrangement: &Arrangement) -> Vec<(Part, Pane)> {
    let holds = |size: &&Size| screen.width >= size.width && screen.height >= size.height;
    let room = ROOMIER.iter().filter(holds).count();
    let mut front: Vec<(Part, Pane)> = Vec::new();
    for pane in Pane::all() {
        let Some(part) = pane.part(room) else { continue };
        match front.iter_mut().find(|(taken, _)| *taken == part) {
            None => front.push((part, pane)),
            Some((_, other)) => {
                let rank = |pane| arrangement.rank(pane).unwrap_or(usize::MAX);
                if rank(pane) < rank(*other) {
                    *other = pane;
                }
            }
        }
    }
    front
}

/// Shares the room out. What lies at the bottom, the spectrum as a rule, takes two fifths of the
/// height and the whole width; above it the middle takes what the others leave, which grow less than
/// the screen does.
fn share(room: Rect, front: &[(Part, Pane)]) -> Vec<(Pane, Rect)> {
    let pane_in = |part: Part| front.iter().find(|(one, _)| *one == part).map(|(_, pane)| *pane);
    let bottom = (room.height * 2 / 5).max(9);
    let above = room.height - bottom;
    let column = |x: u16, width: u16| Rect { x: room.x + x, width, height: above, ..room };
    let left = (room.width / 6).clamp(17, 26);
    let right = (room.width * 4 / 11).clamp(29, 46);
    let stacked: Vec<Pane> =
        [Part::First, Part::Second, Part::Third].into_iter().filter_map(pane_in).collect();
    let second = if stacked.is_empty() { 0 } else { (room.width / 4).min(56) };
    let middle = room.width - left - right - second;
    let (beside, corner) = split(column(left + middle, right), pane_in(Part::Corner).is_some());
    let mut panes: Vec<(Option<Pane>, Rect)> = vec![
        (pane_in(Part::Left), column(0, left)),
        (pane_in(Part::Middle), column(left, middle)),
        (pane_in(Part::Right), beside),
        (pane_in(Part::Corner), corner),
        (pane_in(Part::Bottom), Rect { y: room.y + above, height: bottom, ..room }),
    ];
    let stack = even(column(left + middle + right, second), stacked.len());
    panes.extend(stacked.into_iter().map(Some).zip(stack));
    panes.into_iter().filter_map(|(pane, area)| Some((pane?, area))).collect()
}

/// A part and the corner below it, which takes two fifths of the height.
fn split(area: Rect, has_corner: bool) -> (Rect, Rect) {
    let corner = if has_corner { (area.height * 2 / 5).max(9) } else { 0 };
    let upper = Rect { height: area.height - corner, ..area };
    (upper, Rect { y: upper.bottom(), height: corner, ..area })
}

/// An area in so many parts, one above the other.
fn even(area: Rect, parts: usize) -> Vec<Rect> {
    let edge = |part: usize| (usize::from(area.height) * part / parts.max(1)) as u16;
    let part =
        |part: usize| Rect { y: area.y + edge(part), height: edge(part + 1) - edge(part), ..area };
    (0..parts).map(part).collect()
}

/// What stands on a screen that is too small to work on.
pub fn draw_too_small(area: Rect, buffer: &mut Buffer) {
    let size = format!("{}x{}", area.width, area.height);
    let needed = format!("{}x{}", SMALLEST.width, SMALLEST.height);
    let lines = [
        "radsieve needs more room".to_string(),
        format!("{needed} at least, now {size}"),
        "nothing is lost; q leaves".to_string(),
    ];
    let area = area.intersection(buffer.area);
    for (row, line) in area.rows().zip(&lines) {
        buffer.set_stringn(
            row.x,
            row.y,
            line,
            usize::from(row.width),
            ratatui::style::Style::new(),
        );
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::widgets::Screen;
    use proptest::prelude::*;

    fn layout(width: u16, height: u16, focus: &[Pane]) -> ScreenLayout {
        let mut arrangement = Arrangement::default();
        for pane in focus {
            arrangement.focus_on(*pane);
        }
        ScreenLayout::of(Rect::new(0, 0, width, height), &arrangement).unwrap()
    }

    fn names(layout: &ScreenLayout) -> Vec<&'static str> {
        Pane::all().filter(|pane| layout.area(*pane).is_some()).map(Pane::name).collect()
    }

    #[test]
    fn the_smallest_screen_shows_four_panes() {
        let layout = layout(80, 24, &[]);
        assert_eq!(layout.area(Pane::Tray), Some(Rect::new(0, 0, 17, 13)));
        assert_eq!(layout.area(Pane::Field), Some(Rect::new(17, 0, 34, 13)));
        assert_eq!(layout.area(Pane::Evidence), Some(Rect::new(51, 0, 29, 13)));
        assert_eq!(layout.area(Pane::Trace), Some(Rect::new(0, 13, 80, 9)));
        assert_eq!(layout.status, Rect::new(0, 22, 80, 1));
        assert_eq!(layout.command, Rect::new(0, 23, 80, 1));
        assert_eq!(names(&layout), ["Tray", "Field", "Trace", "Evidence"]);
    }

    #[test]
    fn panes_that_share_a_part_take_turns() {
        let strip = layout(80, 24, &[Pane::Strip, Pane::Field]);
        assert_eq!(names(&strip), ["Tray", "Field", "Strip", "Evidence"]);
        let trace = layout(80, 24, &[Pane::Strip, Pane::Trace, Pane::Field]);
        assert_eq!(names(&trace), ["Tray", "Field", "Trace", "Evidence"]);
    }

    #[test]
    fn the_widest_screen_shows_every_pane() {
        let layout = layout(200, 60, &[]);
        assert_eq!(layout.panes().count(), Pane::all().count());
        let trace = layout.area(Pane::Trace).unwrap();
        assert_eq!((trace.width, trace.height), (200, 23));
    }

    #[test]
    fn a_zoomed_pane_has_the_screen_but_for_the_last_two_lines() {
        let mut arrangement = Arrangement::default();
        arrangement.focus_on(Pane::Trace);
        arrangement.zoom(true);
        let layout = ScreenLayout::of(Rect::new(0, 0, 120, 40), &arrangement).unwrap();
        assert_eq!(layout.panes, [(Pane::Trace, Rect::new(0, 0, 120, 38))]);
    }

    #[test]
    fn a_screen_that_is_too_small_says_what_it_needs() {
        let small = ScreenLayout::of(Rect::new(0, 0, 79, 24), &Arrangement::default());
        assert_eq!(small, None);
        let mut screen = Screen::new(30, 4);
        draw_too_small(screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "radsieve needs more room",
                "80x24 at least, now 30x4",
                "nothing is lost; q leaves",
                "",
            ]
        );
    }

    proptest! {
        #[test]
        fn panes_tile_the_screen(width in 80u16..300, height in 24u16..120, last in 0usize..7) {
            let screen = Rect::new(0, 0, width, height);
            let focus = Pane::all().nth(last % Pane::all().count()).unwrap();
            let layout = layout(width, height, &[focus]);
            prop_assert!(layout.area(focus).is_some(), "the pane with the keys is on show");
            let mut areas: Vec<Rect> = layout.panes().map(|(_, area)| area).collect();
            areas.extend([layout.status, layout.command]);
            let covered: u32 = areas.iter().map(|area| area.area()).sum();
            prop_assert_eq!(covered, screen.area());
            for (index, one) in areas.iter().enumerate() {
                prop_assert_eq!(one.intersection(screen), *one);
                prop_assert!(areas[index + 1..].iter().all(|other| !one.intersects(*other)));
            }
            for (pane, area) in layout.panes() {
                prop_assert!(area.width >= 17 && area.height >= 9, "{:?} has {:?}", pane, area);
                prop_assert_eq!(layout.pane_at(area.right() - 1, area.y), Some(pane));
            }
        }

        #[test]
        fn any_size_is_survived(width in 0u16..250, height in 0u16..80) {
            let mut screen = Screen::new(width, height);
            draw_too_small(screen.area(), &mut screen.buffer);
            ScreenLayout::of(screen.area(), &Arrangement::default());
        }
    }
}
