//! The Trace: the spectrum of the footprint under the cursor and of those pinned beside it.

mod view;

pub use view::{BandName, ChannelMark, Curve, Segment, TraceView};
