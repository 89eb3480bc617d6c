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
            Tone::Good => self.tinted(Color::Green, [114, 22]),
            Tone::Warning => self.tinted(Color::Yellow, [179, 94]),
            Tone::Bad => self.tinted(Color::Red, [203, 124]).add_modifier(Modifier::BOLD),
            Tone::Accent => self.tinted(Color::Cyan, [110, 24]).add_modifier(Modifier::BOLD),
        }
    }

    fn tinted(&self, sixteen: Color, [on_dark, on_light]: [u8; 2]) -> Style {
        match self.depth {
            ColourDepth::None => Style::new(),
            ColourDepth::Sixteen => Style::new().fg(sixteen),
            ColourDepth::Indexed | ColourDepth::True => {
                Style::new().fg(Color::Indexed(match self.background {
                    Background::Dark => on_dark,
                    Background::Light => on_light,
                }))
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
