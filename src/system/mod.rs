//! What every program needs of the machine: whole-file writes, cancellation, deadlines, clean text.
//!
//! Uses: no other room.
//!
//! **Never** knows what a granule is.

mod cancel;
mod clean_text;
mod deadline;
mod errand;
mod memory;
mod near_names;
mod patient_file;
mod unchanged;
mod whole_file;

pub use cancel::Cancel;
pub use clean_text::clean_text;
pub use deadline::Deadline;
pub use errand::within;
pub use memory::free_memory;
pub use near_names::near_names;
pub use patient_file::{PatientFile, open_without_waiting, stamp_in_time};
pub use unchanged::FileStamp;
pub use whole_file::{
    Placing, WriteError, make_folder, place_whole, remove_unfinished, sync_folder, write_whole,
};
