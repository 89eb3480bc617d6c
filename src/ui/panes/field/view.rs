//! What the Field is drawn from.

use crate::ui::colour::Scale;

use super::Placement;

/// Everything the Field shows. Values stand per footprint, in the granule's flat (row-major) order;
/// slices that are empty or too short mean that nothing is known of the footprints beyond their end.
#[derive(Clone, Debug)]
pub struct FieldView<'a> {
    /// What follows the pane's name in the title: the layer, as a rule.
    pub title: &'a str,
    /// What ends the title and is never cut: the value under the cursor.
    pub value: &'a str,
    /// The unit beside the legend; empty for a bare number.
    pub unit: &'a str,
    /// Where each footprint lies on the map.
    pub placement: &'a Placement,
    /// The layer's value per footprint; NaN is missing.
    pub values: &'a [f64],
    /// Footprints that are still being read. Empty: none is.
    pub pending: &'a [bool],
    /// Flags per footprint, one bit each.
    pub flags: &'a [u32],
    /// How each flag is drawn, the weightiest first; flags that are not listed are not drawn.
    pub signs: &'a [FlagSign],
    /// Footprints of a selection to be marked (a box being drawn, one side of a threshold). Empty: none.
    pub selected: &'a [bool],
    /// How values become colours.
    pub scale: Scale,
    /// Half of the levels are enough: fewer colours change from cell to cell.
    pub coarse: bool,
    /// The footprint under the cursor.
    pub cursor: Option<usize>,
    /// Whether it is marked on the map.
    pub marked: bool,
    /// Opposite corners of a box being drawn, as footprints.
    pub corners: Option<(usize, usize)>,
    /// The corners of a polygon being drawn but for the last, which is the cursor.
    pub polygon: &'a [usize],
    /// Pinned footprints with their letters.
    pub pins: &'a [Pin],
    /// 0 shows the whole map; each step shows half the width and height, around the cursor.
    pub zoom: u8,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// How one flag is drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct FlagSign {
    /// The flag's bit.
    pub mask: u32,
    /// Its letter or sign, one column wide.
    pub glyph: char,
    /// Its colour, as a number into [`crate::ui::colour::Theme::flag_tint`].
    pub tint: u8,
}

/// A footprint kept for comparison.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Pin {
    /// The flat index of the footprint.
    pub footprint: usize,
    /// Its letter, the same as in the Trace.
    pub letter: char,
}
