//! What the panes are drawn from, gathered out of the state.
//!
//! **Never** changes the state.

mod evidence;
mod field;
mod field_signs;
mod help;
mod ledger;
mod overlay;
mod spectrum_says;
mod spread;
mod status;
mod strip;
mod tests_say;
mod trace;
mod trace_values;
mod tray;
mod under_cursor;
mod under_mouse;

pub use evidence::last_evidence_scroll;
pub use field::footprint_under;
pub use help::{help_groups, problem_rows};
pub use overlay::{draw_overlay, last_problem_scroll};
pub use spread::spread_place_under;
pub use status::{hints, side_preview, status_facts};
pub use strip::{strip_entry_under, strip_footprint_under};
pub use trace::wavenumber_under;
pub use tray::tray_row_under;
pub use under_cursor::under_cursor;
pub use under_mouse::under_mouse;

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::layers::LayerUnit;
use crate::ui::app::App;
use crate::ui::panes::Pane;

/// Draws a pane.
pub fn draw_pane(app: &App, pane: Pane, area: Rect, buffer: &mut Buffer) {
    let draw = match pane {
        Pane::Tray => tray::draw,
        Pane::Field => field::draw,
        Pane::Trace => trace::draw,
        Pane::Spread => spread::draw,
        Pane::Strip => strip::draw,
        Pane::Evidence => evidence::draw,
        Pane::Ledger => ledger::draw,
    };
    draw(app, area, buffer);
}

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

/// A kelvin value to a hundredth: noise is larger in all but the best channels.
fn kelvins(value: f64) -> String {
    format!("{:.2}", if value.abs() < 0.005 { 0.0 } else { value })
}

/// A layer's value with the label of its unit, as one reads it.
fn with_unit(value: f64, unit: &str) -> String {
    let truth = LayerUnit::Truth.label();
    match unit {
        "K" => format!("{} K", kelvins(value)),
        "" if value.fract() == 0.0 && value.abs() < 1e15 => format!("{value}"),
        "" => number(value),
        unit if unit == truth => if value == 0.0 { "false" } else { "true" }.to_owned(),
        unit => format!("{} {unit}", number(value)),
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

    #[test]
    fn values_are_read_with_their_units() {
        for (value, unit, text) in [
            (1.2487, "K", "1.25 K"),
            (-0.001, "K", "0.00 K"),
            (4.0, "", "4"),
            (0.25, "", "0.25000"),
            (1.0, super::LayerUnit::Truth.label(), "true"),
            (20.2019, "degrees", "20.202 degrees"),
        ] {
            assert_eq!(super::with_unit(value, unit), text);
        }
    }
}
