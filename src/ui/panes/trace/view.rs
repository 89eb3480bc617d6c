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
    /// Lowest and highest wavenumber on show, cm-1.
    pub x: (f64, f64),
    /// Lowest and highest value on show; `None` fits the values on show.
    pub y: Option<(f64, f64)>,
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
