//! Decoding chunks without the C libraries that wrote them: in parallel, straight into place.
//!
//! The reader process says where the chunks lie ([`survey()`] makes a [`ChunkTable`]); this process
//! checks the table, takes the bytes out of the file and undoes the filters. It does so for an exact
//! list of ways to store values; all else is left to the reader process.

#[cfg(any(test, fuzzing))]
pub mod any_chunk;
mod chunk_file;
mod decode;
mod fast_path;
mod fault;
mod filters;
mod fletcher32;
mod grid;
mod sample;
mod survey;
mod table;

pub use decode::AtWork;
pub use fast_path::{Demand, FastPath, KnownFile};
pub use survey::survey;
pub use table::ChunkTable;

#[cfg(test)]
mod tests;
