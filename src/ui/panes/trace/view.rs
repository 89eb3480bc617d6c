//! What the Trace is drawn from.

/// Everything the Trace shows.
#[derive(Clone, Debug)]
pub struct TraceView<'a> {
    /// What follows the pane's name in the title: which footprint.
    pub title: &'a str,
    /// What the values are, such as "brightness temperature".
    pub quantity: &'a str,
    /// The unit of the values.
    pub unit: &'a str,
    /// The spectra; the cursor's first.
    pub curves: &'a [Curve<'a>],
    /// Curves to compare with, such as those of black bodies.
    pub guides: &'a [Guide<'a>],
    /// Filled areas behind the curves, the widest first.
    pub areas: &'a [Area<'a>],
    /// The line in the middle of the areas.
    pub median: &'a [Segment<'a>],
    /// Noise bars of the cursor's spectrum.
    pub bars: &'a [Bar],
    /// Channels to be marked at the foot of the plot.
    pub marks: &'a [Mark],
    /// Lowest and highest wavenumber on show, cm-1.
    pub x: (f64, f64),
    /// Lowest and highest value on show; `None` fits the values on show.
    pub y: Option<(f64, f64)>,
    /// Values that differ by less than this make no shape: the range is no narrower.
    pub least: f64,
    /// The channel in hand.
    pub channel: Option<ChannelMark<'a>>,
    /// Names of absorption bands, the more important first.
    pub bands: &'a [BandName<'a>],
    /// Why there is no spectrum, where there is none: "reading…", "no spectrum: …".
    pub empty: &'a str,
    /// Whether the keys go to this pane.
    pub focused: bool,
}

/// One spectrum.
#[derive(Clone, Debug, Default)]
pub struct Curve<'a> {
    /// `None` for the footprint under the cursor, else the letter of the pin.
    pub letter: Option<char>,
    /// The pieces between gaps, in any order. No line is drawn from one to the next.
    pub segments: Vec<Segment<'a>>,
}

/// A curve to compare with, and what is written on it.
#[derive(Clone, Debug)]
pub struct Guide<'a> {
    /// What it is: "280 K".
    pub label: &'a str,
    /// Its pieces.
    pub segments: Vec<Segment<'a>>,
}

/// The room between two curves of the same channels.
#[derive(Clone, Debug)]
pub struct Area<'a> {
    /// The lower curve.
    pub low: Vec<Segment<'a>>,
    /// The upper one, piece by piece.
    pub high: Vec<Segment<'a>>,
    /// Whether it lies within another: it is filled more densely.
    pub inner: bool,
}

/// A channel's value with a reach to both sides.
#[derive(Clone, Copy, Debug)]
pub struct Bar {
    /// Where the channel lies, cm-1.
    pub wavenumber: f64,
    /// The lower end.
    pub low: f64,
    /// The upper end.
    pub high: f64,
}

/// A channel to be marked: the layer or test in hand is made from it.
#[derive(Clone, Copy, Debug)]
pub struct Mark {
    /// Where it lies, cm-1.
    pub wavenumber: f64,
    /// The letter of its flag, or a sign; the layer or test in hand is made from it where there is
    /// none.
    pub sign: Option<char>,
}

/// An unbroken run of channels.
#[derive(Clone, Copy, Debug, Default)]
pub struct Segment<'a> {
    /// cm-1, ascending or descending; not finite ones are skipped.
    pub wavenumbers: &'a [f64],
    /// The value of each channel; NaN is missing and breaks the line.
    pub values: &'a [f64],
}

/// The channel in hand.
#[derive(Clone, Copy, Debug)]
pub struct ChannelMark<'a> {
    /// Where it lies, cm-1.
    pub wavenumber: f64,
    /// Its exact value in words: "900.31 cm-1 · 11.107 µm · 287.43 K".
    pub words: &'a str,
    /// The same without what can be left out where there is little room; may be empty.
    pub short: &'a str,
}

/// An absorption band's name and extent.
#[derive(Clone, Copy, Debug)]
pub struct BandName<'a> {
    /// The name as written on the plot.
    pub label: &'a str,
    /// Lower end, cm-1.
    pub low: f64,
    /// Upper end, cm-1.
    pub high: f64,
}

#[cfg(test)]
impl TraceView<'_> {
    /// Axes from 600 to 1000 cm-1 and 200 to 300 K, and nothing on them.
    pub fn plain() -> TraceView<'static> {
        TraceView {
            title: "12, 3",
            quantity: "BT",
            unit: "K",
            curves: &[],
            guides: &[],
            areas: &[],
            median: &[],
            bars: &[],
            marks: &[],
            x: (600.0, 1000.0),
            y: Some((200.0, 300.0)),
            least: 0.0,
            channel: None,
            bands: &[],
            empty: "",
            focused: false,
        }
    }
}
