//! The 256 indexed colours: a 6x6x6 cube and 24 greys above the terminal's own sixteen, whose actual
//! looks are not known and which are therefore left alone.

use super::tables::Rgb;

/// The steps of the colour cube (xterm's, which every other terminal has taken over).
const CUBE: [u8; 6] = [0, 95, 135, 175, 215, 255];

/// The colour behind an index of 16 or more.
pub(super) fn rgb(index: u8) -> Rgb {
    if index >= 232 {
        let grey = 8 + 10 * (index - 232);
        return [grey, grey, grey];
    }
    let index = usize::from(index.saturating_sub(16));
    [CUBE[index / 36], CUBE[index / 6 % 6], CUBE[index % 6]]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn known_corners_of_the_cube_and_the_greys() {
        assert_eq!(rgb(16), [0, 0, 0]);
        assert_eq!(rgb(196), [255, 0, 0]);
        assert_eq!(rgb(231), [255, 255, 255]);
        assert_eq!(rgb(232), [8, 8, 8]);
        assert_eq!(rgb(255), [238, 238, 238]);
    }
}
