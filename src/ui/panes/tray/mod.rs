//! The Tray: the granules in hand, each with its state and its shares.

mod draw;
mod names;
mod shares;
mod view;

pub use draw::{draw, row_at};
pub use view::{TrayRow, TrayShares, TrayState, TrayView};
