//! Where each pane lies on the screen.

use ratatui::buffer::Buffer;
use ratatui::layout::{Rect, Size};

/// The smallest terminal that everything fits on.
pub const SMALLEST: Size = Size { width: 80, height: 24 };

/// The panes, by the names that their titles begin with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Pane {
    /// The granules in hand.
    Tray,
    /// The footprint map.
    Field,
    /// The spectrum.
    Trace,
    /// What is known of the footprint under the cursor.
    Evidence,
}

impl Pane {
    /// Every pane, in the order in which the focus goes round.
    pub const ALL: [Self; 4] = [Self::Tray, Self::Field, Self::Evidence, Self::Trace];

    /// The name that the title begins with.
    pub fn name(self) -> &'static str {
        match self {
            Self::Tray => "Tray",
            Self::Field => "Field",
            Self::Trace => "Trace",
            Self::Evidence => "Evidence",
        }
    }

    /// The next one, or the one before, round and round.
    pub fn step(self, forward: bool) -> Self {
        let count = Self::ALL.len();
        let here = Self::ALL.iter().position(|pane| *pane == self).unwrap_or(0);
        Self::ALL[(here + if forward { 1 } else { count - 1 }) % count]
    }
}

/// The rectangles of one screen. A pane that is not on show has none.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct ScreenLayout {
    /// The granules in hand, narrow at the left.
    pub tray: Option<Rect>,
    /// The footprint map.
    pub field: Option<Rect>,
    /// What is known of a footprint, at the right.
    pub evidence: Option<Rect>,
    /// The spectrum, across the full width.
    pub trace: Option<Rect>,
    /// One line: what happened last and the counts.
    pub status: Rect,
    /// The last line: hints, or the command line while one is typed.
    pub command: Rect,
}

impl ScreenLayout {
    /// The layout of a screen, all panes or only the one that is zoomed.
    /// `None` where the terminal is smaller than [`SMALLEST`].
    pub fn of(screen: Rect, zoomed: Option<Pane>) -> Option<Self> {
        if screen.width < SMALLEST.width || screen.height < SMALLEST.height {
            return None;
        }
        let lines = |y: u16, height: u16| Rect { y: screen.y + y, height, ..screen };
        let mut layout = Self {
            status: lines(screen.height - 2, 1),
            command: lines(screen.height - 1, 1),
            ..Self::default()
        };
        let room = lines(0, screen.height - 2);
        match zoomed {
            Some(pane) => *layout.slot(pane) = Some(room),
            None => layout.share(room),
        }
        Some(layout)
    }

    /// The rectangle of a pane, if it is on show.
    pub fn area(&self, pane: Pane) -> Option<Rect> {
        match pane {
            Pane::Tray => self.tray,
            Pane::Field => self.field,
            Pane::Trace => self.trace,
            Pane::Evidence => self.evidence,
        }
    }

    /// The pane at a place on the screen.
    pub fn pane_at(&self, column: u16, row: u16) -> Option<Pane> {
        Pane::ALL
            .into_iter()
            .find(|pane| self.area(*pane).is_some_and(|area| area.contains((column, row).into())))
    }

    fn slot(&mut self, pane: Pane) -> &mut Option<Rect> {
        match pane {
            Pane::Tray => &mut self.tray,
            Pane::Field => &mut self.field,
            Pane::Trace => &mut self.trace,
            Pane::Evidence => &mut self.evidence,
        }
    }

    /// The Trace takes two fifths of the height and the whole width; above it the Field takes what
    /// the Tray and the Evidence leave, which grow less than the screen does.
    fn share(&mut self, room: Rect) {
        let trace = (room.height * 2 / 5).max(9);
        let above = room.height - trace;
        let tray = (room.width / 6).clamp(17, 30);
        let evidence = (room.width * 4 / 11).clamp(29, 46);
        let field = room.width - tray - evidence;
        let column = |x: u16, width: u16| Rect { x: room.x + x, width, height: above, ..room };
        self.tray = Some(column(0, tray));
        self.field = Some(column(tray, field));
        self.evidence = Some(column(tray + field, evidence));
        self.trace = Some(Rect { y: room.y + above, height: trace, ..room });
    }
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

    #[test]
    fn the_smallest_screen_shows_every_pane() {
        let layout = ScreenLayout::of(Rect::new(0, 0, 80, 24), None).unwrap();
        assert_eq!(layout.tray, Some(Rect::new(0, 0, 17, 13)));
        assert_eq!(layout.field, Some(Rect::new(17, 0, 34, 13)));
        assert_eq!(layout.evidence, Some(Rect::new(51, 0, 29, 13)));
        assert_eq!(layout.trace, Some(Rect::new(0, 13, 80, 9)));
        assert_eq!(layout.status, Rect::new(0, 22, 80, 1));
        assert_eq!(layout.command, Rect::new(0, 23, 80, 1));
    }

    #[test]
    fn a_zoomed_pane_has_the_screen_but_for_the_last_two_lines() {
        let layout = ScreenLayout::of(Rect::new(0, 0, 120, 40), Some(Pane::Trace)).unwrap();
        assert_eq!(layout.trace, Some(Rect::new(0, 0, 120, 38)));
        assert_eq!((layout.tray, layout.field, layout.evidence), (None, None, None));
    }

    #[test]
    fn a_screen_that_is_too_small_says_what_it_needs() {
        assert_eq!(ScreenLayout::of(Rect::new(0, 0, 79, 24), None), None);
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

    #[test]
    fn the_focus_goes_round_both_ways() {
        let round = Pane::ALL.iter().fold(Pane::Field, |pane, _| pane.step(true));
        assert_eq!(round, Pane::Field);
        for pane in Pane::ALL {
            assert_eq!(pane.step(true).step(false), pane);
        }
    }

    proptest! {
        #[test]
        fn panes_tile_the_screen(width in 80u16..300, height in 24u16..120) {
            let screen = Rect::new(0, 0, width, height);
            let layout = ScreenLayout::of(screen, None).unwrap();
            let mut areas: Vec<Rect> =
                Pane::ALL.iter().filter_map(|pane| layout.area(*pane)).collect();
            areas.extend([layout.status, layout.command]);
            let covered: u32 = areas.iter().map(|area| area.area()).sum();
            prop_assert_eq!(covered, screen.area());
            for (index, one) in areas.iter().enumerate() {
                prop_assert_eq!(one.intersection(screen), *one);
                prop_assert!(areas[index + 1..].iter().all(|other| !one.intersects(*other)));
            }
            for pane in Pane::ALL {
                let area = layout.area(pane).unwrap();
                prop_assert_eq!(layout.pane_at(area.right() - 1, area.y), Some(pane));
            }
        }

        #[test]
        fn any_size_is_survived(width in 0u16..250, height in 0u16..80) {
            let mut screen = Screen::new(width, height);
            draw_too_small(screen.area(), &mut screen.buffer);
            ScreenLayout::of(screen.area(), Some(Pane::Field));
        }
    }
}
