//! The levels of the colour maps as 8-bit red, green and blue.
//!
//! Perceptually uniform and safe for colour-blind eyes: `VIRIDIS` by Nathaniel Smith, Stéfan van der
//! Walt and Eric Firing (CC0), `CIVIDIS` by Jamie Nuñez, Christopher Anderton and Ryan Renslow
//! (PLoS ONE 13, e0199239, 2018; CC0), and for differences `VIK` by Fabio Crameri (Scientific colour
//! maps, Zenodo, doi 10.5281/zenodo.1243862, 2018; copyright (c) 2020 Fabio Crameri, MIT licence).
//! Each is the published 256-level map read at the centres of 32 equal intervals.

/// Red, green and blue.
pub type Rgb = [u8; 3];

/// How many levels a map has. More would not be told apart, and each change of colour costs bytes.
pub const LEVELS: usize = 32;

#[rustfmt::skip]
pub(super) const VIRIDIS: [Rgb; LEVELS] = [
    [70, 7, 90], [71, 19, 101], [72, 29, 111], [72, 40, 120],
    [70, 50, 126], [68, 59, 132], [64, 69, 136], [61, 78, 138],
    [57, 86, 140], [53, 95, 141], [49, 103, 142], [46, 111, 142],
    [42, 118, 142], [39, 126, 142], [37, 133, 142], [34, 141, 141],
    [31, 148, 140], [30, 156, 137], [32, 163, 134], [37, 171, 130],
    [45, 178, 125], [56, 185, 119], [70, 192, 111], [86, 198, 103],
    [103, 204, 92], [122, 209, 81], [142, 214, 69], [162, 218, 55],
    [184, 222, 41], [205, 225, 29], [226, 228, 24], [246, 230, 32],
];

#[rustfmt::skip]
pub(super) const CIVIDIS: [Rgb; LEVELS] = [
    [0, 37, 84], [0, 43, 98], [0, 48, 112], [18, 53, 112],
    [33, 59, 110], [45, 65, 109], [54, 70, 108], [63, 76, 108],
    [71, 81, 108], [79, 87, 108], [86, 92, 109], [94, 98, 110],
    [101, 104, 112], [108, 109, 114], [114, 115, 116], [121, 121, 119],
    [128, 127, 120], [136, 133, 120], [144, 139, 120], [151, 145, 119],
    [159, 151, 117], [167, 157, 115], [175, 164, 113], [184, 170, 110],
    [192, 177, 106], [200, 184, 102], [209, 191, 97], [218, 198, 91],
    [226, 205, 84], [235, 212, 75], [245, 220, 65], [254, 228, 52],
];

#[rustfmt::skip]
pub(super) const VIK: [Rgb; LEVELS] = [
    [1, 24, 101], [2, 37, 109], [2, 49, 117], [3, 62, 125],
    [3, 74, 133], [7, 87, 141], [19, 102, 151], [37, 117, 161],
    [60, 133, 172], [84, 150, 183], [109, 166, 194], [135, 182, 205],
    [160, 197, 216], [186, 213, 226], [210, 225, 233], [231, 231, 231],
    [238, 224, 216], [236, 209, 195], [229, 193, 173], [223, 178, 152],
    [216, 162, 131], [210, 148, 112], [204, 133, 93], [198, 119, 74],
    [191, 105, 56], [183, 90, 38], [171, 72, 20], [154, 53, 8],
    [137, 38, 6], [122, 26, 6], [108, 14, 7], [94, 3, 8],
];
// The same maps in the 256 indexed colours. The nearest colour of each level alone would jump back
// and forth in lightness, which reads as structure that is not there; so these are rows of near
// colours whose lightness only rises, or for `VIK` rises to the middle and falls.

#[rustfmt::skip]
pub(super) const VIRIDIS_INDICES: [u8; LEVELS] = [
    53, 53, 53, 54, 54, 54, 24, 24, 24, 24, 24, 30, 30, 30, 30, 30,
    30, 30, 36, 36, 36, 71, 78, 78, 113, 113, 113, 148, 148, 184, 184, 220,
];

#[rustfmt::skip]
pub(super) const CIVIDIS_INDICES: [u8; LEVELS] = [
    24, 25, 25, 25, 60, 60, 60, 60, 60, 60, 242, 242, 242, 242, 243, 243,
    244, 244, 244, 101, 101, 101, 101, 143, 143, 143, 179, 185, 185, 185, 220, 220,
];

#[rustfmt::skip]
pub(super) const VIK_INDICES: [u8; LEVELS] = [
    17, 17, 25, 25, 25, 25, 31, 31, 31, 67, 74, 110, 152, 152, 253, 254,
    254, 224, 180, 180, 180, 173, 173, 173, 173, 130, 130, 88, 88, 88, 52, 52,
];
