//! Drawing the Trace.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::plot::{Plot, UNIT};
use super::{TraceView, axes, bands, behind, curves};
use crate::ui::colour::{Theme, Tone};
use crate::ui::widgets::{Frame, cut, put, put_right};

/// Draws the Trace: the curves between their axes, names of bands, and the channel in hand with
/// its value in words at the right of the title.
pub fn draw(view: &TraceView<'_>, theme: &Theme, area: Rect, buffer: &mut Buffer) {
    let (title, words) = titles(view, area.width, theme.ascii);
    let frame = Frame { name: "Trace", rest: &title, focused: view.focused };
    let Some(room) = frame.draw(theme, area, buffer) else { return };
    if !words.is_empty() {
        let rule = Rect { height: 1, width: area.width.saturating_sub(1), ..area };
        let accent = theme.style(Tone::Accent);
        put_right(rule, &format!(" {words} "), accent, theme.ascii, buffer);
    }
    let Some(plot) = Plot::new(view, room) else {
        let words = if view.empty.is_empty() { "no range to show" } else { view.empty };
        put(room, words, theme.style(Tone::Faint), theme.ascii, buffer);
        return;
    };
    axes::draw(&plot, view.unit, theme, buffer);
    behind::draw(view, &plot, theme, buffer);
    let drawn = curves::draw(view, &plot, theme, buffer);
    behind::draw_over(view, &plot, theme, buffer);
    bands::draw(&plot, view.bands, theme, buffer);
    if let Some(channel) = &view.channel {
        curves::draw_channel(channel, &plot, theme, buffer);
    }
    if !drawn || !view.empty.is_empty() {
        draw_empty(view, &plot, theme, drawn, buffer);
    }
}

/// The wavenumber under a place on the screen, for the mouse.
pub fn wavenumber_at(view: &TraceView<'_>, area: Rect, column: u16, row: u16) -> Option<f64> {
    let room = Rect { y: area.y + 1, height: area.height.checked_sub(1)?, ..area };
    if !room.contains((column, row).into()) {
        return None;
    }
    Plot::new(view, room)?.wavenumber_at(column)
}

/// The title and the words for the channel in hand, as far as both fit: what is measured is left
/// out first, as the unit says it too; then words are cut.
fn titles(view: &TraceView<'_>, width: u16, ascii: bool) -> (String, String) {
    let room = usize::from(width).saturating_sub(" Trace ".len() + 4);
    let words = view.channel.map_or("", |channel| channel.words);
    let short = view.channel.map_or("", |channel| channel.short);
    // A long unit finds no room above the values; it may stand behind the value already.
    let is_said = view.unit.width() <= UNIT || words.ends_with(view.unit);
    let unit = if is_said { "" } else { view.unit };
    let parts = |parts: [&str; 3]| {
        let said: Vec<&str> = parts.into_iter().filter(|part| !part.is_empty()).collect();
        said.join(", ")
    };
    let gap = if words.is_empty() { 0 } else { 4 };
    let whole = parts([view.title, view.quantity, unit]);
    let brief = parts([view.title, "", unit]);
    let (title, words) = [(whole, words), (brief, words)]
        .into_iter()
        .chain([(view.title.to_string(), words), (view.title.to_string(), short)])
        .find(|(title, words)| title.width() + gap + words.width() <= room)
        .unwrap_or_else(|| (view.title.to_string(), if short.is_empty() { words } else { short }));
    let words = cut(words, room.saturating_sub(gap), ascii);
    let title = cut(&title, room.saturating_sub(gap + words.width()), ascii);
    (title, words)
}

/// Says why nothing, or not everything, is there.
fn draw_empty(view: &TraceView<'_>, plot: &Plot, theme: &Theme, drawn: bool, buffer: &mut Buffer) {
    let words = match (view.empty, view.curves.is_empty()) {
        ("", true) => "no spectrum".to_string(),
        ("", false) => {
            format!("no channel with a value between {:.1} and {:.1} cm-1", plot.x.0, plot.x.1)
        }
        (reason, _) => reason.to_string(),
    };
    let width = (words.width() as u16).min(plot.area.width);
    let place = if drawn {
        Rect { x: plot.area.right() - width, width, height: 1, ..plot.area }
    } else {
        Rect {
            x: plot.area.x + (plot.area.width - width) / 2,
            y: plot.area.y + plot.area.height / 2,
            width,
            height: 1,
        }
    };
    put(place, &words, theme.style(Tone::Warning), theme.ascii, buffer);
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ui::panes::trace::{BandName, ChannelMark, Curve, Segment};
    use crate::ui::widgets::{Screen, THEME};
    use proptest::prelude::*;
    use ratatui::style::Color;

    const ASCII: Theme = Theme { ascii: true, ..THEME };

    fn view<'a>(curves: &'a [Curve<'a>]) -> TraceView<'a> {
        TraceView { curves, ..TraceView::plain() }
    }

    fn curve<'a>(letter: Option<char>, pieces: &[(&'a [f64], &'a [f64])]) -> Curve<'a> {
        let segments =
            pieces.iter().map(|(wavenumbers, values)| Segment { wavenumbers, values }).collect();
        Curve { letter, segments }
    }

    #[test]
    fn curve_axes_and_gap_in_plain_letters() {
        let curves = [curve(
            None,
            &[(&[600.0, 700.0], &[210.0, 210.0]), (&[800.0, 1000.0], &[290.0, 290.0])],
        )];
        let mut screen = Screen::new(46, 9);
        draw(&view(&curves), &ASCII, screen.area(), &mut screen.buffer);
        assert_eq!(
            screen.lines(),
            [
                "- Trace 12, 3, BT ----------------------------",
                "  K      15   14    13    12      11       um",
                "300+                    *********************",
                "   |",
                "   |",
                "250+",
                "   |",
                "200+***********",
                "    600      700       800       900     cm-1",
            ]
        );
    }

    #[test]
    fn a_spike_of_one_channel_reaches_the_top_at_any_width() {
        let wavenumbers: Vec<f64> = (0..800).map(|i| 600.0 + f64::from(i) * 0.5).collect();
        let mut values = vec![210.0; 800];
        values[333] = 299.9;
        let curves = [curve(None, &[(&wavenumbers, &values)])];
        for width in 20..200 {
            let mut screen = Screen::new(width, 9);
            draw(&view(&curves), &ASCII, screen.area(), &mut screen.buffer);
            let lines = screen.lines();
            // Its two flanks may fall into neighbouring columns.
            let reached = lines[2].matches('*').count();
            assert!((1..=2).contains(&reached), "width {width}: {lines:#?}");
        }
    }

    #[test]
    fn curves_differ_by_colour_and_letter() {
        let curves = [
            curve(None, &[(&[600.0, 1000.0], &[290.0, 290.0])]),
            curve(Some('a'), &[(&[600.0, 1000.0], &[250.0, 250.0])]),
            curve(Some('b'), &[(&[600.0, 1000.0], &[210.0, 210.0])]),
        ];
        let mut screen = Screen::new(60, 12);
        draw(&view(&curves), &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        let find = |letter: char| {
            (2..11).find(|row| lines[*row].contains(letter)).expect("the letter is on the plot")
        };
        let (a, b) = (find('a'), find('b'));
        assert!(a < b, "{lines:#?}");
        let colour = |row: usize| screen.buffer[(50, row as u16)].fg;
        assert_ne!(colour(a), colour(b));
        assert_ne!(colour(a), Color::Reset, "the cursor's curve alone has the text's own colour");
    }

    #[test]
    fn the_channel_in_hand_has_a_rule_and_its_value_in_words() {
        let curves = [curve(None, &[(&[600.0, 1000.0], &[290.0, 290.0])])];
        let mut view = view(&curves);
        let words = "900.00 cm-1 · 11.111 µm · 290.00 K";
        view.channel = Some(ChannelMark { wavenumber: 900.0, words, short: "" });
        let mut screen = Screen::new(70, 9);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        assert!(lines[0].contains(words), "{lines:#?}");
        let signs: Vec<char> = lines[5].chars().collect();
        let rule = signs.iter().rposition(|sign| *sign == '│').unwrap();
        assert!(rule > 40, "beside that of the axis: {lines:#?}");
        let area = screen.area();
        let there = wavenumber_at(&view, area, rule as u16, 5).unwrap();
        assert!((there - 900.0).abs() < 400.0 / 60.0, "{there}");
    }

    #[test]
    fn the_quantity_makes_room_for_the_value_and_then_the_title_does() {
        let mut view = view(&[]);
        view.title = "line 12, position 3";
        view.quantity = "brightness temperature";
        let words = "900.00 cm-1 · 290.00 K";
        view.channel =
            Some(ChannelMark { wavenumber: 900.0, words, short: "900.00 cm-1 · 290 K" });
        for (width, line) in [
            (
                80,
                "─ Trace line 12, position 3, brightness temperature ─── 900.00 cm-1 · 290.00 K ─",
            ),
            (60, "─ Trace line 12, position 3 ─────── 900.00 cm-1 · 290.00 K ─"),
            (54, "─ Trace line 12, position 3 ──── 900.00 cm-1 · 290 K ─"),
            (46, "─ Trace line 12, po… ─── 900.00 cm-1 · 290 K ─"),
        ] {
            let mut screen = Screen::new(width, 9);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            assert_eq!(screen.lines()[0], line);
        }
    }

    #[test]
    fn names_of_bands_never_touch() {
        let curves = [curve(None, &[(&[600.0, 1000.0], &[290.0, 290.0])])];
        let mut view = view(&curves);
        let band = |label, low, high| BandName { label, low, high };
        let bands = [
            band("CO2 v2", 580.0, 760.0),
            band("CO2 hot", 700.0, 745.0),
            band("window", 800.0, 980.0),
            band("beyond", 1200.0, 1300.0),
        ];
        view.bands = &bands;
        let mut screen = Screen::new(46, 14);
        draw(&view, &ASCII, screen.area(), &mut screen.buffer);
        assert_eq!(screen.lines()[2], "    -----CO2 v2------   ------window-------");
    }

    #[test]
    fn an_empty_plot_says_why() {
        for (empty, curves, words) in [
            ("reading…", vec![], "reading…"),
            ("", vec![], "no spectrum"),
            ("", vec![curve(None, &[(&[700.0], &[f64::NAN])])], "no channel with a value"),
        ] {
            let mut view = view(&curves);
            view.empty = empty;
            let mut screen = Screen::new(60, 9);
            draw(&view, &THEME, screen.area(), &mut screen.buffer);
            assert!(screen.lines().iter().any(|line| line.contains(words)), "{words}");
        }
    }

    #[test]
    fn values_without_a_range_of_their_own_are_fitted() {
        let curves = [curve(None, &[(&[700.0, 800.0], &[281.0, 281.0])])];
        let mut view = view(&curves);
        view.y = None;
        let mut screen = Screen::new(60, 12);
        draw(&view, &THEME, screen.area(), &mut screen.buffer);
        let lines = screen.lines();
        let row = |text: &str| lines.iter().position(|line| line.contains(text)).unwrap();
        let curve = row("⠉⠉⠉⠉");
        assert!(row("282┤") < curve && curve < row("280┤"), "{lines:#?}");
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(64))]
        #[test]
        fn any_size_and_any_input_is_survived(
            width in 0u16..250, height in 0u16..80, x in 0u16..40, y in 0u16..20,
            points in prop::collection::vec((any::<f64>(), any::<f64>()), 0..50),
            range in (any::<f64>(), any::<f64>()), values in prop::option::of((any::<f64>(), any::<f64>())),
            near in 0f64..3000.0, ascii: bool,
        ) {
            let (wavenumbers, samples): (Vec<f64>, Vec<f64>) = points.into_iter().unzip();
            let curves = [
                curve(None, &[(&wavenumbers, &samples)]),
                curve(Some('a'), &[(&samples, &wavenumbers)]),
            ];
            let bands = [BandName { label: "CO2 ν2", low: near - 80.0, high: near + 80.0 }];
            for range in [range, (near, near + 500.0)] {
                let mut view = view(&curves);
                view.x = range;
                view.y = values;
                view.bands = &bands;
                view.channel = Some(ChannelMark { wavenumber: near, words: "words", short: "" });
                let mut screen = Screen::new(width, height);
                let area = Rect::new(x, y, width, height);
                draw(&view, &Theme { ascii, ..THEME }, area, &mut screen.buffer);
                wavenumber_at(&view, area, x + 9, y + 3);
            }
        }
    }
}
