//! How far one goes from a spectrum to those that are like it: up to all granules of the Tray.

use std::collections::BTreeMap;
use std::sync::Arc;

use super::Reach;
use crate::review::Yardstick;
use crate::ui::across::{self, ComparedGranule, DecidedSpectrum, Errand};
use crate::ui::app::App;
use crate::ui::jobs::Job;
use crate::ui::keys::Action;
use crate::ui::looking::no_granule;

/// Footprints that persons have decided in granules whose spectra were compared.
#[derive(Debug, Default)]
pub struct Known {
    yardstick: Option<Arc<Yardstick>>,
    granules: BTreeMap<usize, Vec<DecidedSpectrum>>,
}

impl Known {
    /// By the entries of the Tray, those that are compared by just this.
    pub fn by(
        &self,
        yardstick: &Arc<Yardstick>,
    ) -> impl Iterator<Item = (usize, &[DecidedSpectrum])> {
        let same = self.yardstick.as_ref().is_some_and(|own| Arc::ptr_eq(own, yardstick));
        let granules = self.granules.iter().filter(move |_| same);
        granules.map(|(entry, decided)| (*entry, &decided[..]))
    }

    fn take(&mut self, yardstick: &Arc<Yardstick>, entry: usize, decided: Vec<DecidedSpectrum>) {
        if self.yardstick.as_ref().is_none_or(|own| !Arc::ptr_eq(own, yardstick)) {
            self.yardstick = Some(Arc::clone(yardstick));
            self.granules.clear();
        }
        self.granules.insert(entry, decided);
    }
}

/// From those that hang together with the one to all of the granule, to the Tray, and back.
pub fn switch(app: &mut App) -> Vec<Job> {
    let others = across::others(app);
    let like = app.keymap.hint(Action::Alike);
    let Some(bench) = app.bench_mut() else { return no_granule(app) };
    if bench.awaited.alike != 0 {
        app.say("one moment: the spectra are being compared");
        return Vec::new();
    }
    if bench.spread_alike().is_none() {
        app.say(format!("{like} finds spectra like the one under the cursor first"));
        return Vec::new();
    }
    bench.spread.reach = match bench.spread.reach {
        Reach::Grown => Reach::Here,
        Reach::Here if !others.is_empty() => Reach::Tray,
        _ => Reach::Grown,
    };
    match bench.spread.reach {
        Reach::Grown => app.say("those that hang together with it"),
        Reach::Here => app.say("anywhere in the granule"),
        Reach::Tray => return to_tray(app, &others),
    }
    Vec::new()
}

/// Compares the spectra of the granules that have not been compared yet.
fn to_tray(app: &mut App, others: &[usize]) -> Vec<Job> {
    let Some(alike) = app.bench().and_then(|bench| bench.spread_alike()) else { return Vec::new() };
    let left: Vec<usize> =
        others.iter().copied().filter(|entry| !alike.elsewhere.contains_key(entry)).collect();
    let yardstick = Arc::clone(alike.measured.yardstick());
    let spectrum = alike.measured.of(alike.footprint).to_vec();
    if left.is_empty() {
        say_in_tray(app);
        return Vec::new();
    }
    let count = left.len();
    let jobs = across::begin(app, Errand::Compare { yardstick, spectrum }, &left);
    match jobs.is_empty() {
        // Decisions are being written; that was told.
        true => app.bench_mut().into_iter().for_each(|bench| bench.spread.reach = Reach::Here),
        false => app.say(format!("comparing the spectra of {count} more granules…")),
    }
    jobs
}

/// Takes how far the spectra of a granule are from the one in hand.
pub fn compared(app: &mut App, entry: usize, granule: ComparedGranule) {
    let alike = match &mut app.table {
        crate::ui::app::Table::Bench(bench) => bench.spread.alike.as_mut(),
        _ => None,
    };
    let Some(alike) = alike else { return };
    alike.elsewhere.insert(entry, granule.values);
    app.known.take(alike.measured.yardstick(), entry, granule.decided);
}

/// Says how many there are in all granules, before anything is decided.
pub fn say_in_tray(app: &mut App) {
    let flag = app.keymap.hint(Action::Flag);
    let Some(bench) = app.bench() else { return };
    let Some(alike) = bench.spread_alike() else { return };
    let (selection, all) = (bench.selection(), alike.elsewhere.len() + 1);
    let granules = selection.elsewhere.len() + usize::from(!selection.footprints.is_empty());
    let words = format!(
        "{} alike in {granules} of {all} granules; {flag} flags them in one step",
        selection.count()
    );
    app.say(words);
}
