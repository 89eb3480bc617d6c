//! What each tone of text looks like at each colour depth, on light and on dark terminals.
//!
//! Text keeps the terminal's own foreground and background; only what differs from plain text is styled.

use ratatui::style::{Color, Modifier, Style};

use super::ColourDepth;

/// Whether the terminal is known to be light; plain text does not depend on it, tints do.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Background {
    /// Light letters on a dark ground, or unknown.
    #[default]
    Dark,
    /// Dark letters on a light ground.
    Light,
}

impl Background {
    /// Out of `COLORFGBG` (`foreground;background` as indices of the sixteen colours), if it is set.
    pub fn from_colorfgbg(value: Option<&str>) -> Self {
        let ground = value
            .and_then(|text| text.rsplit(';').next())
            .and_then(|index| index.trim().parse::<u8>().ok());
        match ground {
            Some(7 | 9..=15) => Self::Light,
            _ => Self::Dark,
        }
    }
}

/// What a piece of text is, from which follows how it looks.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Tone {
    /// Ordinary text.
    #[default]
    Plain,
    /// Of less weight: units, rules, notes.
    Faint,
    /// Of more weight: titles, the value asked for.
    Strong,
    /// Done, kept, as it should be.
    Good,
    /// Worth a look.
    Warning,
    /// Failed or lost.
    Bad,
    /// Ours to notice: keys, the pane in focus.
    Accent,
    /// The row or choice under the cursor.
    Chosen,
}

/// Everything the panes need to know about the terminal's looks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Theme {
    /// How many colours there are.
    pub depth: ColourDepth,
    /// Only letters, digits and ASCII signs: no block, line or braille characters.
    pub ascii: bool,
    /// Light or dark terminal.
    pub background: Background,
}

impl Theme {
    /// The look of text of this tone.
    pub fn style(&self, tone: Tone) -> Style {
        let plain = Style::new();
        match tone {
            Tone::Plain => plain,
            Tone::Faint => plain.add_modifier(Modifier::DIM),
            Tone::Strong => plain.add_modifier(Modifier::BOLD),
            Tone::Chosen => plain.add_modifier(Modifier::REVERSED),
            Tone::Good => self.tinted([Color::Green, Color::Blue], [114, 22]),
            Tone::Warning => self.tinted([Color::Yellow, Color::Magenta], [179, 94]),
            Tone::Bad => {
                self.tinted([Color::LightRed, Color::Red], [203, 124]).add_modifier(Modifier::BOLD)
            }
            Tone::Accent => {
                self.tinted([Color::Cyan, Color::Blue], [110, 24]).add_modifier(Modifier::BOLD)
            }
        }
    }

    /// A tint for a dark and for a light ground, of sixteen colours and of 256. Of the sixteen, green,
    /// yellow and cyan can hardly be read on white.
    fn tinted(&self, sixteen: [Color; 2], indexed: [u8; 2]) -> Style {
        let ground = usize::from(self.background == Background::Light);
        match self.depth {
            ColourDepth::None => Style::new(),
            ColourDepth::Sixteen => Style::new().fg(sixteen[ground]),
            ColourDepth::Indexed | ColourDepth::True => {
                Style::new().fg(Color::Indexed(indexed[ground]))
            }
        }
    }
}

/// Tints of flags, each for a dark and for a light ground: indices of the 256 colours, and the
/// nearest of the sixteen. Chosen to differ in lightness as well as hue (after Okabe and Ito,
/// Color Universal Design, 2008).
const FLAG_TINTS: [([u8; 2], Color); 8] = [
    ([231, 16], Color::White),
    ([117, 25], Color::LightCyan),
    ([214, 130], Color::LightYellow),
    ([210, 124], Color::LightRed),
    ([219, 90], Color::LightMagenta),
    ([228, 94], Color::Yellow),
    ([120, 22], Color::LightGreen),
    ([189, 54], Color::LightBlue),
];

impl Theme {
    /// The look of a flag's sign on a plain ground (lists, prompts).
    pub fn flag_tint(&self, tint: u8) -> Style {
        self.flag_tint_on(tint, self.background == Background::Light)
    }

    /// The look of a flag's sign on a dark or light ground; bold at every depth.
    pub fn flag_tint_on(&self, tint: u8, light_ground: bool) -> Style {
        let ([on_dark, on_light], sixteen) = FLAG_TINTS[usize::from(tint) % FLAG_TINTS.len()];
        let style = Style::new().add_modifier(Modifier::BOLD);
        match self.depth {
            ColourDepth::None => style,
            ColourDepth::Sixteen => style.fg(if light_ground { Color::Black } else { sixteen }),
            ColourDepth::Indexed | ColourDepth::True => {
                style.fg(Color::Indexed(if light_ground { on_light } else { on_dark }))
            }
        }
    }

    /// The look of a sign without a colour of its own on a coloured ground, or on none.
    pub fn sign_on(&self, has_ground: bool, light_ground: bool) -> Style {
        match (self.depth, has_ground, light_ground) {
            (ColourDepth::None, ..) | (_, false, _) => Style::new(),
            (ColourDepth::Sixteen, _, true) => Style::new().fg(Color::Black),
            (ColourDepth::Sixteen, _, false) => Style::new().fg(Color::White),
            (_, _, true) => Style::new().fg(Color::Indexed(16)),
            (_, _, false) => Style::new().fg(Color::Indexed(231)),
        }
    }

    /// The look of what has to be found at once: the cursor, pins.
    pub fn mark(&self) -> Style {
        let style = Style::new().add_modifier(Modifier::BOLD);
        match (self.depth, self.background) {
            (ColourDepth::None, _) => style.add_modifier(Modifier::REVERSED),
            // The one colour that no map of the sixteen has.
            (ColourDepth::Sixteen, _) => style.fg(Color::White).bg(Color::Magenta),
            (_, Background::Dark) => style.fg(Color::Indexed(16)).bg(Color::Indexed(231)),
            (_, Background::Light) => style.fg(Color::Indexed(231)).bg(Color::Indexed(16)),
        }
    }

    /// A look made to stand out from its like: something that is selected.
    pub fn reversed(&self, style: Style) -> Style {
        style.add_modifier(Modifier::REVERSED)
    }

    /// The look of a curve: the cursor's own, or that of a pinned footprint by its number.
    pub fn curve(&self, pinned: Option<usize>) -> Style {
        // The first tint is that of plain text, which the cursor's curve has.
        pinned.map_or(Style::new(), |number| self.flag_tint(1 + (number % 7) as u8))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const TONES: [Tone; 8] = [
        Tone::Plain,
        Tone::Faint,
        Tone::Strong,
        Tone::Good,
        Tone::Warning,
        Tone::Bad,
        Tone::Accent,
        Tone::Chosen,
    ];

    fn theme(depth: ColourDepth, background: Background) -> Theme {
        Theme { depth, ascii: false, background }
    }

    #[test]
    fn without_colours_no_style_has_one() {
        let theme = theme(ColourDepth::None, Background::Dark);
        let mut styles: Vec<Style> = TONES.map(|tone| theme.style(tone)).to_vec();
        styles.extend((0..8).map(|tint| theme.flag_tint(tint)));
        styles.extend([theme.mark(), theme.sign_on(true, true), theme.curve(Some(2))]);
        for style in styles {
            assert_eq!((style.fg, style.bg), (None, None));
        }
    }

    #[test]
    fn text_never_has_a_ground_of_its_own() {
        for depth in [ColourDepth::Sixteen, ColourDepth::Indexed, ColourDepth::True] {
            for background in [Background::Dark, Background::Light] {
                for tone in TONES {
                    assert_eq!(theme(depth, background).style(tone).bg, None);
                }
            }
        }
    }

    #[test]
    fn tints_differ_and_suit_the_ground() {
        let dark = theme(ColourDepth::Indexed, Background::Dark);
        let light = theme(ColourDepth::Indexed, Background::Light);
        for tint in 0..8 {
            assert_ne!(dark.flag_tint(tint).fg, light.flag_tint(tint).fg);
            for other in 0..tint {
                assert_ne!(dark.flag_tint(tint).fg, dark.flag_tint(other).fg);
                assert_ne!(light.flag_tint(tint).fg, light.flag_tint(other).fg);
            }
        }
    }

    /// The sixteen colours as xterm has them unless told otherwise, then the colour cube of 256.
    fn rgb(colour: Color) -> [u8; 3] {
        match colour {
            Color::Red => [205, 0, 0],
            Color::Green => [0, 205, 0],
            Color::Yellow => [205, 205, 0],
            Color::Blue => [0, 0, 238],
            Color::Magenta => [205, 0, 205],
            Color::Cyan => [0, 205, 205],
            Color::LightRed => [255, 0, 0],
            Color::Indexed(index @ 16..=231) => {
                let level = |step: u8| if step == 0 { 0 } else { 55 + 40 * step };
                let place = index - 16;
                [place / 36, place / 6 % 6, place % 6].map(level)
            }
            other => panic!("{other:?} is not used for text"),
        }
    }

    /// Relative luminance and contrast ratio as the Web Content Accessibility Guidelines 2.1 define them.
    fn luminance(rgb: [u8; 3]) -> f64 {
        let linear = rgb.map(|part| match f64::from(part) / 255.0 {
            low if low <= 0.03928 => low / 12.92,
            high => ((high + 0.055) / 1.055).powf(2.4),
        });
        0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]
    }

    fn contrast(one: [u8; 3], other: [u8; 3]) -> f64 {
        let (one, other) = (luminance(one), luminance(other));
        (one.max(other) + 0.05) / (one.min(other) + 0.05)
    }

    #[test]
    fn contrast_is_that_of_the_guidelines() {
        // Black on white is 21 : 1, and #777777 on white just misses 4.5 : 1, as the guidelines say.
        assert!((contrast([0; 3], [255; 3]) - 21.0).abs() < 1e-9);
        assert!((contrast([0x77; 3], [255; 3]) - 4.48).abs() < 0.01);
    }

    #[test]
    fn text_stands_out_from_a_dark_and_from_a_light_ground() {
        // The guidelines ask 4.5 : 1 of text and 3 : 1 of bold text and signs. The sixteen colours are the
        // terminal's own and no more than a likely case.
        let grounds = [(Background::Dark, [16; 3]), (Background::Light, [255; 3])];
        for (background, ground) in grounds {
            for (depth, least) in [(ColourDepth::Indexed, 4.5), (ColourDepth::Sixteen, 3.0)] {
                let theme = theme(depth, background);
                for tone in TONES {
                    if let Some(colour) = theme.style(tone).fg {
                        let found = contrast(rgb(colour), ground);
                        assert!(found >= least, "{tone:?} {background:?} {depth:?}: {found:.1}");
                    }
                }
            }
            for tint in 0..8 {
                let tint = theme(ColourDepth::Indexed, background).flag_tint(tint).fg.unwrap();
                assert!(contrast(rgb(tint), ground) >= 4.5, "{tint:?} {background:?}");
            }
        }
    }

    #[test]
    fn the_ground_is_read_from_the_usual_variable() {
        for (value, expected) in [
            (None, Background::Dark),
            (Some("15;0"), Background::Dark),
            (Some("0;15"), Background::Light),
            (Some("0;default;7"), Background::Light),
            (Some("nonsense"), Background::Dark),
        ] {
            assert_eq!(Background::from_colorfgbg(value), expected, "{value:?}");
        }
    }
}
