//! The coloured cells of the map.

use ratatui::buffer::{Buffer, Cell};
use ratatui::style::{Color, Style};

use super::{FieldView, Geometry};
use crate::ui::colour::{ColourDepth, Palette, Theme, Tone};

/// What a dot of the map shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Dot {
    /// No footprint lies there.
    Nothing,
    /// A footprint that is still being read.
    Pending,
    /// A footprint without a value.
    Missing,
    /// A level of the colour map.
    Level(u8),
}

impl Dot {
    /// What the dot at a place of the geometry shows.
    pub(super) fn of(view: &FieldView<'_>, geometry: &Geometry, dot: (usize, usize)) -> Self {
        let Some(footprint) = geometry.footprint_of(dot, view.placement) else {
            return Self::Nothing;
        };
        if view.pending.get(footprint).copied().unwrap_or(false) {
            return Self::Pending;
        }
        let value = view.values.get(footprint).copied().unwrap_or(f64::NAN);
        let level = view.scale.level(value);
        level.map_or(Self::Missing, |level| {
            Self::Level(if view.coarse { level & !1 } else { level })
        })
    }

    fn colour(self, palette: Palette, depth: ColourDepth) -> Option<Color> {
        match self {
            Self::Level(level) => palette.colour(level, depth),
            _ => None,
        }
    }

    fn sign(self, ascii: bool) -> char {
        match (self, ascii) {
            (Self::Nothing, _) => ' ',
            (Self::Pending, false) => '░',
            (Self::Pending, true) => '?',
            (Self::Missing, false) => '·',
            (Self::Missing, true) => '.',
            (Self::Level(level), _) => Palette::ink(level),
        }
    }
}

/// Draws every cell of the map, with the sign of the weightiest flag of all footprints that a cell
/// stands for, so that no flag vanishes when the map is thinned out.
pub(super) fn draw_map(
    view: &FieldView<'_>,
    geometry: &Geometry,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    for row in geometry.area.rows() {
        for position in row.columns() {
            let at = (position.x, position.y);
            let Some(cell) = buffer.cell_mut(at) else { continue };
            let mut dots = [Dot::Nothing; 2];
            for (slot, dot) in dots.iter_mut().zip(geometry.dots_of(at)) {
                *slot = Dot::of(view, geometry, dot);
            }
            draw_dots(dots, geometry.dots == 2, view.scale.palette, theme, cell);
            let (flags, selected) = gather(view, geometry, at);
            if flags != 0 || selected {
                draw_signs(view, flags, selected, dots, theme, cell);
            }
        }
    }
}

fn draw_dots(
    [upper, lower]: [Dot; 2],
    halves: bool,
    palette: Palette,
    theme: &Theme,
    cell: &mut Cell,
) {
    let colours = [upper, lower].map(|dot| dot.colour(palette, theme.depth));
    match (halves, colours) {
        (true, [Some(upper), Some(lower)]) => {
            cell.set_char('▀').set_fg(upper).set_bg(lower);
        }
        (true, [Some(upper), None]) => {
            cell.set_char('▀').set_fg(upper);
        }
        (true, [None, Some(lower)]) => {
            cell.set_char('▄').set_fg(lower);
        }
        (false, [Some(colour), _]) => {
            cell.set_char(' ').set_bg(colour);
        }
        _ => {
            let dot = if upper == Dot::Nothing { lower } else { upper };
            let tone = if matches!(dot, Dot::Level(_)) { Tone::Plain } else { Tone::Faint };
            cell.set_char(dot.sign(theme.ascii || !halves)).set_style(theme.style(tone));
        }
    }
}

/// All flags of the footprints that a cell stands for, and whether one of them is selected.
fn gather(view: &FieldView<'_>, geometry: &Geometry, cell: (u16, u16)) -> (u32, bool) {
    let (mut flags, mut selected) = (0, false);
    if view.flags.is_empty() && view.selected.is_empty() {
        return (flags, selected);
    }
    for (columns, rows) in geometry.dots_of(cell).filter_map(|dot| geometry.places(dot)) {
        for row in rows {
            for column in columns.clone() {
                for footprint in view.placement.all_at(column, row) {
                    flags |= view.flags.get(footprint).copied().unwrap_or(0);
                    selected |= view.selected.get(footprint).copied().unwrap_or(false);
                }
            }
        }
    }
    (flags, selected)
}

/// Whether a cell carries the sign of a flag or of the selection.
pub(super) fn is_signed(view: &FieldView<'_>, geometry: &Geometry, cell: (u16, u16)) -> bool {
    let (flags, selected) = gather(view, geometry, cell);
    selected || view.signs.iter().any(|sign| sign.mask & flags != 0)
}

/// A flag's sign, or that of the selection, over the colour of the cell.
fn draw_signs(
    view: &FieldView<'_>,
    flags: u32,
    selected: bool,
    dots: [Dot; 2],
    theme: &Theme,
    cell: &mut Cell,
) {
    let sign = view.signs.iter().find(|sign| sign.mask & flags != 0);
    let (glyph, tint) = match (sign, selected) {
        (Some(sign), _) => (sign.glyph, Some(sign.tint)),
        (None, true) => ('/', None),
        (None, false) => return,
    };
    let (ground, light) = ground(dots, view.scale.palette, theme);
    let mut style = match tint {
        Some(tint) if ground.is_some() => theme.flag_tint_on(tint, light),
        Some(tint) => theme.flag_tint(tint),
        None => theme.sign_on(ground.is_some(), light),
    };
    if selected && tint.is_some() {
        style = theme.reversed(style);
    }
    set_sign(glyph, style, ground, cell);
}

/// The colour on which a sign of a cell stands, and whether it is a light one.
pub(super) fn ground(dots: [Dot; 2], palette: Palette, theme: &Theme) -> (Option<Color>, bool) {
    let level = dots.iter().find_map(|dot| match dot {
        Dot::Level(level) => Some(*level),
        _ => None,
    });
    match level {
        Some(level) => (palette.colour(level, theme.depth), palette.is_light(level, theme.depth)),
        None => (None, false),
    }
}

/// Puts a sign over a cell.
pub(super) fn set_sign(glyph: char, style: Style, ground: Option<Color>, cell: &mut Cell) {
    cell.reset();
    cell.set_char(glyph).set_style(style);
    if let Some(ground) = ground {
        cell.set_bg(ground);
    }
}
