//! The Trace: the spectrum of the footprint under the cursor and of those pinned beside it.

mod axes;
mod bands;
mod curves;
mod draw;
mod behind;
mod envelope;
mod plot;
mod view;

pub use draw::{draw, wavenumber_at};
pub use view::{Area, BandName, Bar, ChannelMark, Curve, Guide, Mark, Segment, TraceView};
