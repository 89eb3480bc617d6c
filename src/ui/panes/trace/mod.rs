//! The Trace: the spectrum of the footprint under the cursor and of those pinned beside it.

mod axes;
mod bands;
mod curves;
mod draw;
mod envelope;
mod plot;
mod view;

pub use draw::{draw, wavenumber_at};
pub use view::{BandName, ChannelMark, Curve, Segment, TraceView};
