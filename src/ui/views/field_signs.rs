//! The signs over the Field: flags that stand, what the tests say, or doubt.

use crate::flags::{FlagKind, Scope};
use crate::ui::app::App;
use crate::ui::bench::{Bench, Signs};
use crate::ui::panes::field::FlagSign;

/// The tenths of doubt from which on a footprint shows its doubt; below, it is plain.
const LEAST_DOUBT: u32 = 2;

/// One bit mask for each footprint; empty where there is nothing to show.
pub fn masks(app: &App, bench: &Bench) -> Vec<u32> {
    match bench.signs {
        _ if bench.is_blind() => Vec::new(),
        Signs::Flags => standing(bench),
        Signs::Tests => by_tests(app, bench),
        Signs::Doubt => doubts(bench),
        Signs::None => Vec::new(),
    }
}

/// How each bit is drawn, the weightiest first.
pub fn signs(app: &App, bench: &Bench) -> Vec<FlagSign> {
    match bench.signs {
        Signs::Doubt => (LEAST_DOUBT..=9).rev().map(tenth).collect(),
        _ => of_flags(app),
    }
}

fn standing(bench: &Bench) -> Vec<u32> {
    let Some(record) = bench.record.open() else { return Vec::new() };
    let state = record.state();
    if state.band_flags.is_empty() {
        return state.footprint_flags.clone();
    }
    (0..bench.footprints()).map(|footprint| state.any_flags(footprint)).collect()
}

/// Flags that the tests set, whatever persons have decided.
fn by_tests(app: &App, bench: &Bench) -> Vec<u32> {
    let Some(screened) = &bench.tests.screened else { return Vec::new() };
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let mut masks = vec![0; bench.footprints()];
    for result in &screened.flags {
        let Some(kind) = vocabulary.by_name(&result.flag) else { continue };
        for (footprint, mask) in masks.iter_mut().enumerate() {
            if footprint < result.conclusions.len() && result.is_set(footprint) {
                *mask |= kind.mask();
            }
        }
    }
    masks
}

fn doubts(bench: &Bench) -> Vec<u32> {
    let Some(screened) = &bench.tests.screened else { return Vec::new() };
    screened
        .doubt
        .iter()
        .map(|doubt| if doubt.is_nan() { 0 } else { 1 << tenths(*doubt) })
        .collect()
}

/// The tenths of a doubt, 0 to 9.
fn tenths(doubt: f64) -> u32 {
    ((doubt.clamp(0.0, 1.0) * 10.0) as u32).min(9)
}

/// A doubt as its digit; from a half on, where it is doubtful, in another colour.
fn tenth(tenth: u32) -> FlagSign {
    let glyph = char::from_digit(tenth, 10).unwrap_or('9');
    FlagSign { mask: 1 << tenth, glyph, tint: if tenth < 5 { 1 } else { 2 } }
}

/// Flags that keep a footprint from the retrieval come first.
fn of_flags(app: &App) -> Vec<FlagSign> {
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let mut kinds = vocabulary.of_scope(Scope::Footprint);
    kinds.sort_by_key(|kind| !kind.excludes);
    let sign = |kind: &&FlagKind| FlagSign { mask: kind.mask(), glyph: kind.glyph, tint: kind.bit };
    kinds.iter().map(sign).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn doubt_shows_its_tenths() {
        for (doubt, digit) in [(0.0, 0), (0.29, 2), (0.5, 5), (1.0, 9)] {
            assert_eq!(tenths(doubt), digit);
        }
        assert_eq!((tenth(7).glyph, tenth(7).mask), ('7', 1 << 7));
        assert_ne!(tenth(4).tint, tenth(5).tint);
    }
}
