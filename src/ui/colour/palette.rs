//! The colour maps at each colour depth.

use ratatui::style::Color;

use super::ColourDepth;
use super::indexed;
use super::tables::{
    CIVIDIS, CIVIDIS_INDICES, LEVELS, Rgb, VIK, VIK_INDICES, VIRIDIS, VIRIDIS_INDICES,
};

/// A colour map.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Palette {
    /// From dark violet over green to yellow.
    #[default]
    Viridis,
    /// From dark blue over grey to yellow; the same to nearly every eye.
    Cividis,
    /// Blue below the middle, brown above it: for differences.
    Vik,
}

/// Dark to light in the sixteen colours of nearly every scheme.
const SIXTEEN_RISING: [Color; 7] = [
    Color::Blue,
    Color::LightBlue,
    Color::Cyan,
    Color::Green,
    Color::LightGreen,
    Color::LightYellow,
    Color::White,
];
const SIXTEEN_DIVERGING: [Color; 7] = [
    Color::Blue,
    Color::LightBlue,
    Color::LightCyan,
    Color::White,
    Color::LightYellow,
    Color::LightRed,
    Color::Red,
];

/// Rising weight of ink, for terminals without colours. No letters, which are flags; no dot and no
/// question mark, which are missing and unread footprints.
const INK: [char; 8] = [':', '-', '=', '+', '*', '#', '%', '@'];

impl Palette {
    /// Every map.
    pub const ALL: [Self; 3] = [Self::Viridis, Self::Cividis, Self::Vik];

    /// The name for settings and the command line.
    pub fn name(self) -> &'static str {
        match self {
            Self::Viridis => "viridis",
            Self::Cividis => "cividis",
            Self::Vik => "vik",
        }
    }

    /// Whether the middle of the map means "no difference".
    pub fn is_diverging(self) -> bool {
        self == Self::Vik
    }

    /// The colour of a level (0 to 31) at this depth; `None` where there are no colours.
    pub fn colour(self, level: u8, depth: ColourDepth) -> Option<Color> {
        let level = clamp(level);
        match depth {
            ColourDepth::None => None,
            ColourDepth::Sixteen => {
                let few = if self.is_diverging() { &SIXTEEN_DIVERGING } else { &SIXTEEN_RISING };
                Some(few[level * few.len() / LEVELS])
            }
            ColourDepth::Indexed => Some(Color::Indexed(self.indices()[level])),
            ColourDepth::True => {
                let [red, green, blue] = self.table()[level];
                Some(Color::Rgb(red, green, blue))
            }
        }
    }

    /// Whether a sign on this level has to be dark to be read.
    pub fn is_light(self, level: u8, depth: ColourDepth) -> bool {
        match depth {
            ColourDepth::None => false,
            ColourDepth::Sixteen => !matches!(
                self.colour(level, depth),
                Some(Color::Blue | Color::LightBlue | Color::Red | Color::LightRed)
            ),
            ColourDepth::Indexed => luminance(indexed::rgb(self.indices()[clamp(level)])) > 110.0,
            ColourDepth::True => luminance(self.table()[clamp(level)]) > 110.0,
        }
    }

    /// The sign of a level where there are no colours.
    pub fn ink(level: u8) -> char {
        INK[clamp(level) * INK.len() / LEVELS]
    }

    fn table(self) -> &'static [Rgb; LEVELS] {
        match self {
            Self::Viridis => &VIRIDIS,
            Self::Cividis => &CIVIDIS,
            Self::Vik => &VIK,
        }
    }

    fn indices(self) -> &'static [u8; LEVELS] {
        match self {
            Self::Viridis => &VIRIDIS_INDICES,
            Self::Cividis => &CIVIDIS_INDICES,
            Self::Vik => &VIK_INDICES,
        }
    }
}

fn clamp(level: u8) -> usize {
    usize::from(level).min(LEVELS - 1)
}

/// Luma of an 8-bit colour, 0 to 255 (weights of ITU-R BT.601).
fn luminance([red, green, blue]: Rgb) -> f64 {
    0.299 * f64::from(red) + 0.587 * f64::from(green) + 0.114 * f64::from(blue)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rising_maps_rise_in_lightness() {
        for palette in [Palette::Viridis, Palette::Cividis] {
            for pair in palette.table().windows(2) {
                assert!(luminance(pair[0]) < luminance(pair[1]), "{palette:?} {pair:?}");
            }
        }
    }

    /// Lightness must not step back, or the picture shows structure that is not there. Ten steps are
    /// what the colour cube can give to each map.
    #[test]
    fn indexed_maps_keep_their_order() {
        for palette in [Palette::Viridis, Palette::Cividis] {
            let lightness = lightness_of(palette);
            assert!(lightness.is_sorted(), "{palette:?} {lightness:?}");
            let mut distinct = palette.indices().to_vec();
            distinct.dedup();
            assert!(distinct.len() >= 10, "{palette:?} has only {} steps", distinct.len());
        }
        let lightness = lightness_of(Palette::Vik);
        assert!(lightness[..16].is_sorted(), "{lightness:?}");
        assert!(lightness[16..].is_sorted_by(|a, b| a >= b), "{lightness:?}");
    }

    /// Relative luminance of each indexed level (IEC 61966-2-1), on which the lightness of CIELAB
    /// depends alone.
    fn lightness_of(palette: Palette) -> Vec<f64> {
        let linear = |value: u8| match f64::from(value) / 255.0 {
            small if small <= 0.04045 => small / 12.92,
            value => ((value + 0.055) / 1.055).powf(2.4),
        };
        let of = |index: &u8| {
            let [red, green, blue] = indexed::rgb(*index);
            0.2126 * linear(red) + 0.7152 * linear(green) + 0.0722 * linear(blue)
        };
        palette.indices().iter().map(of).collect()
    }

    /// Indexed levels stay near the map they stand for: 50 of 255 in the mean over red, green and
    /// blue is little more than one step of the cube.
    #[test]
    fn indexed_levels_resemble_their_map() {
        for palette in Palette::ALL {
            for (level, index) in palette.indices().iter().enumerate() {
                let (exact, coarse) = (palette.table()[level], indexed::rgb(*index));
                let off: i32 =
                    (0..3).map(|channel| i32::from(exact[channel].abs_diff(coarse[channel]))).sum();
                assert!(off < 3 * 50, "{palette:?} level {level}: {exact:?} as {coarse:?}");
            }
        }
    }

    #[test]
    fn the_difference_map_is_lightest_in_the_middle() {
        let middle = luminance(VIK[15]);
        assert!(middle > luminance(VIK[0]) + 150.0);
        assert!(middle > luminance(VIK[31]) + 150.0);
    }

    #[test]
    fn each_depth_speaks_its_own_colours() {
        let top = 31;
        assert_eq!(Palette::Viridis.colour(top, ColourDepth::None), None);
        assert_eq!(Palette::Viridis.colour(top, ColourDepth::Sixteen), Some(Color::White));
        assert_eq!(Palette::Viridis.colour(top, ColourDepth::True), Some(Color::Rgb(246, 230, 32)));
        assert!(matches!(
            Palette::Viridis.colour(200, ColourDepth::Indexed),
            Some(Color::Indexed(16..))
        ));
        assert_eq!(Palette::ink(0), ':');
        assert_eq!(Palette::ink(31), '@');
    }
}
