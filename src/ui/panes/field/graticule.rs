//! Round latitudes and longitudes on a map that goes by them.

use ratatui::buffer::Buffer;

use super::pixels::{Dot, ground, is_signed, set_sign};
use super::{FieldView, Geometry};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::ticks;

/// Columns and rows that lines keep between them at least.
const APART: (u16, u16) = (12, 4);

/// One line of the graticule: where it lies on the map, and what it is.
struct Line {
    place: f64,
    label: String,
}

/// Draws lines on ground without footprints, their crossings everywhere, and their names at the left
/// and at the foot, over the map's colours.
pub(super) fn draw(view: &FieldView<'_>, geometry: &Geometry, theme: &Theme, buffer: &mut Buffer) {
    let Some(graticule) = view.placement.graticule() else { return };
    let (columns, rows) = geometry.shown();
    let at_column = |column: usize| graticule.west + column as f64 * graticule.step.0;
    let at_row = |row: usize| graticule.north - row as f64 * graticule.step.1;
    let meridians = lines(
        (at_column(columns.start), at_column(columns.end)),
        geometry.area.width / APART.0,
        |longitude| Line {
            place: (longitude - graticule.west) / graticule.step.0,
            label: east(longitude),
        },
    );
    let parallels =
        lines((at_row(rows.end), at_row(rows.start)), geometry.area.height / APART.1, |latitude| {
            Line {
                place: (graticule.north - latitude) / graticule.step.1,
                label: named(latitude, 'N', 'S'),
            }
        });
    let signs = if theme.ascii { ['|', '-', '+'] } else { ['│', '─', '┼'] };
    // A line on the very edge lies in no cell.
    let x_of = |line: &Line| Some(geometry.cell_at(line.place, rows.start as f64)?.0);
    let y_of = |line: &Line| Some(geometry.cell_at(columns.start as f64, line.place)?.1);
    let meridians: Vec<(u16, &Line)> =
        meridians.iter().filter_map(|line| Some((x_of(line)?, line))).collect();
    let parallels: Vec<(u16, &Line)> =
        parallels.iter().filter_map(|line| Some((y_of(line)?, line))).collect();
    let mut put = |x: u16, y: u16, sign: char, everywhere: bool| {
        put_sign((x, y), sign, everywhere, view, geometry, theme, buffer);
    };
    for (x, _) in &meridians {
        (geometry.area.y..geometry.area.bottom()).for_each(|y| put(*x, y, signs[0], false));
    }
    for (y, _) in &parallels {
        (geometry.area.x..geometry.area.right()).for_each(|x| put(x, *y, signs[1], false));
    }
    for (x, _) in &meridians {
        parallels.iter().for_each(|(y, _)| put(*x, *y, signs[2], true));
    }
    let mut write = |x: u16, y: u16, text: &str| {
        let fits = x + text.len() as u16 <= geometry.area.right();
        for (x, letter) in (x..).zip(text.chars()).filter(|_| fits) {
            put(x, y, letter, true);
        }
    };
    for (y, line) in &parallels {
        write(geometry.area.x, *y, &line.label);
    }
    for (x, line) in &meridians {
        write(
            x.saturating_sub(line.label.len() as u16 / 2).max(geometry.area.x),
            geometry.area.bottom() - 1,
            &line.label,
        );
    }
}

/// Round numbers of a range as lines.
fn lines((low, high): (f64, f64), most: u16, line: impl Fn(f64) -> Line) -> Vec<Line> {
    let (numbers, _) = ticks(low, high, usize::from(most).max(1));
    numbers.into_iter().map(line).collect()
}

/// Degrees with their side, without needless digits: `12.5S`, `0N`.
fn named(degrees: f64, positive: char, negative: char) -> String {
    let side = if degrees < 0.0 { negative } else { positive };
    let text = format!("{:.2}", degrees.abs());
    format!("{}{side}", text.trim_end_matches('0').trim_end_matches('.'))
}

/// A longitude beyond the date line counts from the other side.
fn east(longitude: f64) -> String {
    named((longitude + 180.0).rem_euclid(360.0) - 180.0, 'E', 'W')
}

/// Puts a sign on a cell; on one that shows a footprint only where it is to stand everywhere.
fn put_sign(
    at: (u16, u16),
    sign: char,
    everywhere: bool,
    view: &FieldView<'_>,
    geometry: &Geometry,
    theme: &Theme,
    buffer: &mut Buffer,
) {
    if !geometry.area.contains(at.into()) {
        return;
    }
    let mut dots = [Dot::Nothing; 2];
    for (slot, dot) in dots.iter_mut().zip(geometry.dots_of(at)) {
        *slot = Dot::of(view, geometry, dot);
    }
    let is_empty = dots.iter().all(|dot| *dot == Dot::Nothing);
    let Some(cell) = buffer.cell_mut(at) else { return };
    if is_empty {
        set_sign(sign, theme.style(Tone::Faint), None, cell);
    } else if everywhere && !is_signed(view, geometry, at) {
        // Signs of flags and of the selection say more.
        let (ground, light) = ground(dots, view.scale.palette, theme);
        set_sign(sign, theme.sign_on(ground.is_some(), light), ground, cell);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::colour::Scale;
    use crate::ui::panes::field::{Placement, draw as draw_field};
    use crate::ui::widgets::{Screen, THEME};

    fn plain() -> FieldView<'static> {
        static NOWHERE: std::sync::LazyLock<Placement> =
            std::sync::LazyLock::new(Placement::default);
        FieldView {
            title: "lat",
            value: "",
            unit: "K",
            placement: &NOWHERE,
            values: &[],
            pending: &[],
            flags: &[],
            signs: &[],
            selected: &[],
            scale: Scale::default(),
            coarse: false,
            cursor: None,
            marked: true,
            corners: None,
            polygon: &[],
            pins: &[],
            zoom: 0,
            focused: false,
        }
    }

    #[test]
    fn degrees_are_named_by_their_side() {
        assert_eq!(named(12.5, 'N', 'S'), "12.5N");
        assert_eq!(named(-30.0, 'N', 'S'), "30S");
        assert_eq!(
            (east(181.0), east(-10.0), east(370.0)),
            ("179W".into(), "10W".into(), "10E".into())
        );
    }

    #[test]
    fn labels_stand_on_any_ink_and_at_their_own_lines() {
        // The southern edge is at 5N exactly; without colours the map is all ink.
        let latitude: Vec<f64> = (0..66).map(|at| 15.0 - f64::from(at / 6)).collect();
        let longitude: Vec<f64> = (0..66).map(|at| 20.0 + f64::from(at % 6)).collect();
        let placement = Placement::geographic(&latitude, &longitude).unwrap();
        let values: Vec<f64> = (0..66).map(f64::from).collect();
        let view = FieldView {
            placement: &placement,
            values: &values,
            scale: Scale { low: 0.0, high: 65.0, ..Scale::default() },
            ..plain()
        };
        let theme = Theme { depth: crate::ui::colour::ColourDepth::None, ..THEME };
        let mut screen = Screen::new(50, 30);
        draw_field(&view, &theme, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        let labelled: Vec<(usize, f64)> = lines
            .iter()
            .enumerate()
            .filter_map(|(row, line)| {
                let label = line.trim_start().split('N').next()?;
                Some((row, label.parse().ok()?))
            })
            .collect();
        assert!(labelled.len() >= 2, "{lines:#?}");
        let graticule = placement.graticule().unwrap();
        for (row, latitude) in labelled {
            let place = (graticule.north - latitude) / graticule.step.1;
            let geometry = super::super::geometry(&view, &theme, screen.area()).unwrap();
            assert_eq!(geometry.cell_at(0.0, place).unwrap().1 as usize, row, "{lines:#?}");
        }
    }

    #[test]
    fn lines_run_through_empty_ground_and_cross_everywhere() {
        // Two far footprints leave most of the map empty.
        let placement =
            Placement::geographic(&[10.0, 10.0, 0.0, 0.0], &[20.0, 20.5, 30.0, 29.5]).unwrap();
        let values = [1.0, 2.0, 3.0, 4.0];
        let view = FieldView {
            placement: &placement,
            values: &values,
            scale: Scale { low: 1.0, high: 4.0, ..Scale::default() },
            ..plain()
        };
        let mut screen = Screen::new(50, 16);
        draw_field(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        let text = lines.join("\n");
        assert!(text.contains('┼') && text.contains("─────"), "{text}");
        assert!(text.contains("5N") && text.contains("25E"), "{text}");
    }
}
