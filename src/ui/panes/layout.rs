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
        let evidence = (room.width / 3).clamp(27, 44);
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
