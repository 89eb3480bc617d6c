//! What the panes are drawn from, gathered out of the state.
//!
//! **Never** changes the state.

mod evidence;
mod field;
mod help;
mod overlay;
mod status;
mod trace;
mod tray;

pub use evidence::evidence_rows;
pub use field::{FieldParts, footprint_under};
pub use help::{help_groups, problem_rows};
pub use overlay::draw_overlay;
pub use status::{hints, side_preview, status_facts};
pub use trace::{TraceParts, wavenumber_under};
pub use tray::{draw_tray, tray_row_under};

/// A value in five digits: `287.43`, `-0.12500`, `1.2346e-7`.
fn number(value: f64) -> String {
    let size = value.abs();
    if value == 0.0 {
        "0".to_owned()
    } else if !(1e-3..1e6).contains(&size) {
        format!("{value:.4e}")
    } else {
        let decimals = (4.0 - size.log10().floor()).clamp(0.0, 7.0) as usize;
        format!("{value:.decimals$}")
    }
}

#[cfg(test)]
mod tests {
    #[test]
    fn five_digits_whatever_the_size() {
        for (value, text) in [
            (287.4321, "287.43"),
            (-0.125, "-0.12500"),
            (1.23456e-7, "1.2346e-7"),
            (99999.4, "99999"),
            (0.0, "0"),
        ] {
            assert_eq!(super::number(value), text);
        }
    }
}
