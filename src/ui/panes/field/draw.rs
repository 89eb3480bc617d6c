//! Drawing the Field.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::graticule;
use super::legend;
use super::marks;
use super::pixels::draw_map;
use super::{FieldView, Geometry};
use crate::ui::colour::{ColourDepth, Theme, Tone};
use crate::ui::widgets::{Frame, cut, put};

/// So much of the layer's name is shown beside any value.
const SHORTEST: usize = 6;

/// Draws the Field: the map with its marks, and the legend below it.
pub fn draw(view: &FieldView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let room = usize::from(area.width).saturating_sub(" Field ".len() + 3 + view.value.width());
    let title = format!("{}{}", cut(view.title, room.max(SHORTEST), theme.ascii), view.value);
    let frame = Frame { name: "Field", rest: &title, focused: view.focused };
    let Some(inner) = frame.draw(theme, area, buffer) else { return };
    let (map, legend) = rooms(inner);
    match Geometry::new(map, dots(theme), view.placement, view.cursor, view.zoom) {
        Some(geometry) => {
            draw_map(view, &geometry, theme, buffer);
            graticule::draw(view, &geometry, theme, buffer);
            marks::draw(view, &geometry, theme, area, buffer);
        }
        None => {
            let words = "no footprints";
            put(map, words, theme.style(Tone::Faint), theme.ascii, buffer);
        }
    }
    legend::draw(view, theme, legend, buffer);
}

/// How the map of a view lies in the pane's area, to find footprints under the mouse.
pub fn geometry(view: &FieldView<'_>, theme: &Theme, area: Rect) -> Option<Geometry> {
    let inner = Rect { y: area.y + 1, height: area.height.checked_sub(1)?, ..area };
    Geometry::new(rooms(inner).0, dots(theme), view.placement, view.cursor, view.zoom)
}

/// Two dots to a cell where there are half blocks and colours to fill them with.
fn dots(theme: &Theme) -> u16 {
    if theme.ascii || theme.depth == ColourDepth::None { 1 } else { 2 }
}

/// The room for the map, beside a column for the cursor's tick, and for the legend below it.
fn rooms(inner: Rect) -> (Rect, Rect) {
    let legend = if inner.height >= 4 { 1 } else { 0 };
    let map = Rect {
        x: inner.x + 1.min(inner.width),
        width: inner.width.saturating_sub(2),
        height: inner.height - legend,
        ..inner
    };
    (map, Rect { y: map.bottom(), height: legend, ..map })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::colour::{Palette, Scale};
    use crate::ui::panes::field::{FlagSign, Pin, Placement};
    use crate::ui::widgets::{Screen, THEME};
    use proptest::prelude::*;
    use ratatui::style::Color;

    const SIGNS: [FlagSign; 2] =
        [FlagSign { mask: 1, glyph: 'c', tint: 1 }, FlagSign { mask: 4, glyph: 'd', tint: 2 }];
    const NO_COLOURS: Theme = Theme { depth: ColourDepth::None, ..THEME };

    fn view<'a>(placement: &'a Placement, values: &'a [f64]) -> FieldView<'a> {
        FieldView {
            title: "bt(900)",
            value: "",
            unit: "K",
            placement,
            values,
            pending: &[],
            flags: &[],
            signs: &SIGNS,
            selected: &[],
            scale: Scale { palette: Palette::Viridis, low: 200.0, high: 300.0 },
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

    fn ramp(count: usize) -> Vec<f64> {
        (0..count).map(|i| 200.0 + 100.0 * i as f64 / (count - 1) as f64).collect()
    }

    #[test]
    fn without_colours_the_map_is_drawn_in_ink() {
        let placement = Placement::unfold(&[4, 8], None);
        let mut values = ramp(32);
        values[9] = f64::NAN;
        let mut pending = [false; 32];
        pending[31] = true;
        let flags: Vec<u32> = (0..32).map(|i| if i == 12 { 5 } else { 0 }).collect();
        let mut view = view(&placement, &values);
        view.pending = &pending;
        view.flags = &flags;
        view.cursor = Some(20);
        let mut screen = Screen::new(10, 6);
        draw(&view, &Theme { ascii: true, ..NO_COLOURS }, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            ["- Field --", " ::::----", " =.==c+++", ">****X###", " %%%%@@@?", " 200 to ~",]
        );
    }

    #[test]
    fn a_long_title_keeps_the_value() {
        let placement = Placement::unfold(&[4, 8], None);
        let values = ramp(32);
        let mut view = view(&placement, &values);
        view.title = "sd3(bt(900)) - sd3(bt(1231))";
        view.value = " = 12.34 K";
        let mut screen = Screen::new(34, 8);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines()[0], "─ Field sd3(bt(900)) … = 12.34 K ─");
    }

    #[test]
    fn the_cursor_does_not_hide_the_flag_just_set() {
        let placement = Placement::unfold(&[4, 8], None);
        let values = ramp(32);
        let mut flags = [0; 32];
        flags[9] = 4;
        let mut view = view(&placement, &values);
        view.cursor = Some(9);
        for flags in [&flags[..], &[]] {
            view.flags = flags;
            let mut screen = Screen::new(34, 8);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            let (x, y) = geometry(&view, &THEME, screen.area())
                .and_then(|geometry| geometry.cell_of(&placement, 9))
                .unwrap();
            let cell = &screen.buffer[(x, y)];
            assert_eq!(cell.symbol(), if flags.is_empty() { "╋" } else { "d" });
            assert_eq!((cell.fg, cell.bg), (Color::Indexed(16), Color::Indexed(231)));
        }
    }

    #[test]
    fn half_blocks_show_two_footprints_in_a_cell() {
        let placement = Placement::unfold(&[2, 2], None);
        let values = [200.0, 300.0, 300.0, f64::NAN];
        let mut screen = Screen::new(4, 3);
        draw(&view(&placement, &values), &THEME, screen.area(), &mut screen.buffer);
        // Two columns and four rows of dots: each footprint is one dot wide and two high.
        let (low, high) = (Color::Indexed(53), Color::Indexed(220));
        let cell = |x, y| &screen.buffer[(x, y)];
        assert_eq!((cell(1, 1).fg, cell(1, 1).bg), (low, low));
        assert_eq!((cell(2, 1).fg, cell(2, 1).bg), (high, high));
        assert_eq!((cell(1, 2).fg, cell(1, 2).bg), (high, high));
        assert_eq!(cell(2, 2).symbol(), "·", "a missing value is no low value");
        assert_eq!(cell(2, 2).bg, Color::Reset);
    }

    #[test]
    fn the_cursor_is_seen_at_every_depth() {
        let placement = Placement::unfold(&[9, 9], None);
        let values = ramp(81);
        for depth in
            [ColourDepth::None, ColourDepth::Sixteen, ColourDepth::Indexed, ColourDepth::True]
        {
            for ascii in [false, true] {
                let theme = Theme { depth, ascii, ..THEME };
                let mut view = view(&placement, &values);
                let mut without = Screen::new(30, 12);
                draw(&view, &theme, without.area(), &mut without.buffer);
                view.cursor = Some(40);
                let mut with = Screen::new(30, 12);
                draw(&view, &theme, with.area(), &mut with.buffer);
                let (x, y) = geometry(&view, &theme, with.area())
                    .and_then(|geometry| geometry.cell_of(&placement, 40))
                    .unwrap();
                assert_ne!(with.buffer[(x, y)], without.buffer[(x, y)], "{theme:?}");
                assert_ne!(with.buffer[(0, y)].symbol(), " ", "a tick at the left, {theme:?}");
            }
        }
    }

    #[test]
    fn no_flag_vanishes_when_the_map_is_thinned_out() {
        let placement = Placement::unfold(&[45, 30, 9], None);
        let values = ramp(45 * 30 * 9);
        for flagged in (0..values.len()).step_by(97) {
            let mut flags = vec![0; values.len()];
            flags[flagged] = 4;
            let mut view = view(&placement, &values);
            view.flags = &flags;
            let mut screen = Screen::new(36, 13);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            let lines = screen.lines();
            let signs = lines[1..12].iter().flat_map(|line| line.chars()).filter(|c| *c == 'd');
            assert_eq!(signs.count(), 1, "footprint {flagged}: {lines:#?}");
        }
    }

    #[test]
    fn the_weightiest_flag_is_drawn_in_its_colour() {
        let placement = Placement::unfold(&[1, 1], None);
        let mut view = view(&placement, &[250.0]);
        view.flags = &[5];
        let mut screen = Screen::new(4, 3);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let cell = &screen.buffer[(1, 1)];
        assert_eq!(cell.symbol(), "c");
        assert_eq!(cell.bg, Color::Indexed(30), "the layer still shows behind the sign");
        assert_eq!(cell.fg, Color::Indexed(117));
    }

    #[test]
    fn pins_box_and_selection_are_marked() {
        let placement = Placement::unfold(&[6, 12], None);
        let values = ramp(72);
        let pins = [Pin { footprint: 71, letter: 'a' }];
        let selected: Vec<bool> = (0..72).map(|i| i % 12 == 0).collect();
        let mut view = view(&placement, &values);
        view.pins = &pins;
        view.selected = &selected;
        view.corners = Some((14, 43));
        let mut screen = Screen::new(14, 8);
        draw(&view, &Theme { ascii: true, ..THEME }, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines()[1..7],
            [" /", " / +----+", " / |    |", " / +----+", " /", " /          a"]
        );
    }

    #[test]
    fn a_polygon_shows_its_corners_and_its_sides() {
        let placement = Placement::unfold(&[6, 12], None);
        let values = ramp(72);
        let mut view = view(&placement, &values);
        view.polygon = &[0, 38];
        let mut screen = Screen::new(14, 8);
        draw(&view, &Theme { ascii: true, ..THEME }, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines()[1..5], [" o", "  .", "  .", "   o"]);
        // With the cursor as the last corner it closes.
        view.cursor = Some(11);
        let mut screen = Screen::new(14, 8);
        draw(&view, &Theme { ascii: true, ..THEME }, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        assert!(lines[1].starts_with(">o..........X"), "{lines:#?}");
        assert!(lines[2].contains('.') && lines[4].starts_with("   o"), "{lines:#?}");
    }

    #[test]
    fn the_legend_names_range_unit_and_the_cursors_value() {
        let placement = Placement::unfold(&[5, 5], None);
        let values = ramp(25);
        let mut view = view(&placement, &values);
        view.cursor = Some(24);
        let mut screen = Screen::new(60, 8);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        assert!(lines[7].starts_with(" 200 "), "{lines:#?}");
        assert!(lines[7].contains("250") && lines[7].ends_with("╋ 300 K"), "{lines:#?}");
    }

    #[test]
    fn a_layer_without_values_says_so() {
        let placement = Placement::unfold(&[2, 2], None);
        let mut screen = Screen::new(20, 6);
        draw(&view(&placement, &[f64::NAN; 4]), &THEME, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines()[5], " no values");
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(64))]
        #[test]
        fn any_size_and_any_input_is_survived(
            width in 0u16..250, height in 0u16..80, x in 0u16..40, y in 0u16..20,
            lengths in prop::collection::vec(0usize..30, 0..4),
            value: f64, low: f64, high: f64, zoom: u8, cursor in 0usize..3000, ascii: bool,
            known in 0usize..3000,
        ) {
            let placement = Placement::unfold(&lengths, None);
            let values = vec![value; known];
            let mut view = view(&placement, &values);
            view.scale = Scale { palette: Palette::Vik, low, high };
            view.cursor = Some(cursor);
            view.zoom = zoom;
            view.corners = Some((cursor / 2, cursor));
            let pins = [Pin { footprint: cursor / 3, letter: 'b' }];
            view.pins = &pins;
            let mut screen = Screen::new(width, height);
            // Also areas that reach beyond the screen.
            let area = Rect::new(x, y, width, height);
            draw(&view, &Theme { ascii, ..THEME }, area, &mut screen.buffer);
        }
    }
}
