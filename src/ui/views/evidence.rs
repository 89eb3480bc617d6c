//! What the Evidence shows of the footprint under the cursor.

use jiff::Timestamp;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::flags::{Act, Decision, Scope};
use crate::review::Record;
use crate::system::clean_text;
use crate::ui::app::App;
use crate::ui::bench::{Bench, RecordState};
use crate::ui::colour::Tone;
use crate::ui::deciding;
use crate::ui::keys::Action;
use crate::ui::panes::Pane;
use crate::ui::panes::evidence::{self, EvidenceRow, EvidenceView};
use crate::ui::precedents;

/// Decisions about one footprint that are shown; the latest count most.
const MOST_DECISIONS: usize = 2;

/// Draws the Evidence.
pub fn draw(app: &App, area: Rect, buffer: &mut Buffer) {
    with_view(app, area, |view| evidence::draw(view, &app.theme, area, buffer));
}

/// How many lines of the Evidence can be scrolled away.
pub fn last_evidence_scroll(app: &App) -> usize {
    let area = app.area_of(Pane::Evidence);
    area.map_or(0, |area| with_view(app, area, |view| evidence::last_scroll(view, area)))
}

fn with_view<R>(app: &App, area: Rect, use_view: impl FnOnce(&EvidenceView<'_>) -> R) -> R {
    let rows = evidence_rows(app);
    let title = app.bench().map(|bench| bench.position_words(bench.cursor)).unwrap_or_default();
    use_view(&EvidenceView {
        title: &title,
        rows: &rows,
        scroll: app.evidence_scroll,
        focused: app.focus() == Pane::Evidence,
        detailed: area.width >= 60 || area.height >= 34,
    })
}

/// The rows, in order: what was decided, what the tests say, indices, windows, quality, geolocation.
fn evidence_rows(app: &App) -> Vec<EvidenceRow> {
    let Some(bench) = app.bench() else { return Vec::new() };
    let mut rows = Vec::new();
    if bench.is_blind() {
        let words = "what was decided and what the tests say is hidden during the spot check";
        rows.push(EvidenceRow::Words(words.to_owned(), Tone::Warning));
    } else {
        decided(bench, &mut rows);
        section(&mut rows, "Tests");
        super::tests_say::tests_say(bench, &mut rows);
        super::spectrum_says::spectrum_says(bench, &mut rows);
        most_alike(app, bench, &mut rows);
        super::tests_say::not_applicable(bench, &mut rows);
    }
    indices(bench, &mut rows);
    windows(bench, &mut rows);
    quality(bench, &mut rows);
    geolocation(bench, &mut rows);
    problems(bench, &mut rows);
    rows
}

fn section(rows: &mut Vec<EvidenceRow>, title: &str) {
    rows.push(EvidenceRow::Section(title.to_owned()));
}

fn fact(label: &str, value: impl Into<String>, unit: &str) -> EvidenceRow {
    EvidenceRow::Fact {
        label: label.to_owned(),
        value: value.into(),
        unit: unit.to_owned(),
        note: String::new(),
        tone: Tone::Plain,
    }
}

/// A value, or that it is missing or not read yet.
fn measured(label: &str, value: f64, unit: &str, bench: &Bench) -> EvidenceRow {
    if value.is_nan() {
        let words = if bench.filling.done { "missing" } else { "reading…" };
        return fact(label, words, "");
    }
    let shown = match unit {
        "K" => super::kelvins(value),
        _ => super::number(value),
    };
    fact(label, shown, unit)
}

/// Flags, who has assessed the footprint, and the decisions behind that.
fn decided(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    section(rows, "Decided");
    let record = match &bench.record {
        RecordState::Open(record) => record,
        RecordState::Reading => {
            rows.push(EvidenceRow::Words("reading the ledgers…".to_owned(), Tone::Faint));
            return;
        }
        RecordState::Failed(why) => {
            rows.push(EvidenceRow::Words(why.clone(), Tone::Bad));
            return;
        }
    };
    let flags = record.state().any_flags(bench.cursor);
    let kinds = record.vocabulary().of_scope(Scope::Footprint);
    let names: Vec<&str> = kinds
        .iter()
        .filter(|kind| flags & kind.mask() != 0)
        .map(|kind| kind.name.as_str())
        .collect();
    let tone = if names.is_empty() { Tone::Plain } else { Tone::Warning };
    let words = if names.is_empty() { "none".to_owned() } else { names.join(", ") };
    rows.push(EvidenceRow::Words(format!("flags: {words}"), tone));
    let review = record.state().review.get(bench.cursor).copied().unwrap_or_default();
    rows.push(EvidenceRow::Words(review.name().replace('_', " "), Tone::Plain));
    rows.extend(decisions(record, bench.cursor));
}

/// The latest decisions about a footprint that stand: what, who, when, why. What tests decided is told
/// in one line: why they did is the next thing that the Evidence tells.
fn decisions(record: &Record, footprint: usize) -> Vec<EvidenceRow> {
    let about = |decision: &&Decision| {
        decision.act.footprints().is_some_and(|footprints| footprints.contains(footprint))
    };
    let stand = record.decisions().iter().zip(record.standing()).filter(|(_, stands)| **stands);
    let stand = stand.map(|(decision, _)| decision).filter(about);
    let (mut latest, tests): (Vec<&Decision>, Vec<&Decision>) =
        stand.partition(|decision| decision.by_person());
    let skipped = latest.len().saturating_sub(MOST_DECISIONS);
    latest.drain(..skipped);
    latest.reverse();
    let mut rows: Vec<EvidenceRow> = latest
        .iter()
        .map(|decision| EvidenceRow::Words(decision_words(decision), Tone::Faint))
        .collect();
    if skipped > 0 {
        rows.push(EvidenceRow::Words(format!("and {skipped} before"), Tone::Faint));
    }
    let by_tests = tests.last().map(|last| {
        let time = last.at.strftime("%Y-%m-%d %H:%M");
        EvidenceRow::Words(format!("{time} {}", last.speaker()), Tone::Faint)
    });
    rows.extend(by_tests);
    rows
}

fn decision_words(decision: &Decision) -> String {
    let time = decision.at.strftime("%Y-%m-%d %H:%M");
    let who = decision.speaker();
    let what = match &decision.act {
        Act::Comment { .. } => clean_text(decision.why.as_deref().unwrap_or_default()),
        _ => deciding::words(decision),
    };
    format!("{time} {who}: {what}")
}

/// The most alike footprints that a person has decided.
fn most_alike(app: &App, bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    section(rows, "Most alike, decided");
    let Some(measured) = &bench.measured else {
        let words = match bench.awaited.measured {
            0 => format!("not compared yet; {} compares", app.keymap.hint(Action::Alike)),
            _ => "comparing…".to_owned(),
        };
        rows.push(EvidenceRow::Words(words, Tone::Faint));
        return;
    };
    let found = bench.precedents(bench.cursor, &app.known);
    if found.is_empty() {
        let words = "a person has decided none that can be compared".to_owned();
        rows.push(EvidenceRow::Words(words, Tone::Faint));
    }
    let unit = measured.yardstick().measure().unit();
    rows.extend(found.iter().map(|one| {
        let place = precedents::place(one, app);
        let words = format!("{place} {}", precedents::flags(one, app));
        fact(&words, super::number(one.far), unit)
    }));
}

fn indices(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    if bench.indices.is_empty() {
        return;
    }
    section(rows, "Indices");
    for index in &bench.indices {
        rows.push(match &index.values {
            Ok(values) => {
                let value = values.get(bench.cursor).copied().unwrap_or(f64::NAN);
                measured(&index.text.replace(' ', ""), value, &index.unit, bench)
            }
            Err(why) => EvidenceRow::Words(why.clone(), Tone::Faint),
        });
    }
}

/// Brightness temperatures at the window channels, out of the spectrum on show.
fn windows(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    let Some(spectrum) = &bench.spectrum else { return };
    if bench.windows.is_empty() {
        return;
    }
    section(rows, "Windows");
    for channel in &bench.windows {
        let band = spectrum.bands.get(channel.band);
        let value = band.and_then(|band| band.temperatures.get(channel.index));
        let label = format!("{:.2} cm-1", channel.wavenumber);
        rows.push(measured(&label, value.copied().unwrap_or(f64::NAN), "K", bench));
    }
}

/// What the producer says: the value, and its meaning where the file gives one.
fn quality(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    if bench.quality.is_empty() {
        return;
    }
    section(rows, "Quality");
    if let Some(why) = bench.review.producer().why(bench.cursor) {
        rows.push(EvidenceRow::Words(format!("rejected by the {}", clean_text(&why)), Tone::Bad));
    }
    for quality in &bench.quality {
        let Some(variable) = bench.review.granule().variables().get(quality.variable) else {
            continue;
        };
        let name = clean_text(&variable.name);
        rows.push(match &quality.values {
            Ok(values) => {
                let value = values.get(bench.cursor).copied().unwrap_or(f64::NAN);
                let meanings = bench.review.producer().shown(variable, value).join(", ");
                let shown = if value.is_nan() { "missing".to_owned() } else { value.to_string() };
                let units = if variable.units == "1" { "" } else { &variable.units };
                match fact(&name, shown, units) {
                    EvidenceRow::Fact { label, value, unit, tone, .. } => {
                        EvidenceRow::Fact { label, value, unit, note: meanings, tone }
                    }
                    other => other,
                }
            }
            Err(why) => EvidenceRow::Words(format!("{name}: {why}"), Tone::Faint),
        });
    }
}

fn geolocation(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    section(rows, "Footprint");
    let grid = bench.review.granule().footprints();
    for (name, place) in grid.names().iter().zip(grid.position(bench.cursor)) {
        rows.push(fact(&clean_text(name), place.to_string(), ""));
    }
    let place = bench.review.granule().geolocation();
    let at = |values: &Option<Vec<f64>>| values.as_ref()?.get(bench.cursor).copied();
    for (label, values, unit) in [
        ("latitude", &place.latitude, "°"),
        ("longitude", &place.longitude, "°"),
        ("view zenith", &place.view_zenith, "°"),
        ("view azimuth", &place.view_azimuth, "°"),
        ("solar zenith", &place.solar_zenith, "°"),
        ("solar azimuth", &place.solar_azimuth, "°"),
        ("land", &place.land_fraction, ""),
    ] {
        if let Some(value) = at(values) {
            let missing = value.is_nan();
            let shown = if missing { "missing".to_owned() } else { format!("{value:.3}") };
            rows.push(fact(label, shown, if missing { "" } else { unit }));
        }
    }
    if let Some(seconds) = at(&place.time) {
        rows.push(EvidenceRow::Words(format!("time {}", time_words(seconds)), Tone::Plain));
    }
}

/// Seconds since 1970 as a date and a time of day.
fn time_words(seconds: f64) -> String {
    let whole = (seconds.is_finite() && seconds.abs() < 1e12).then_some(seconds.floor() as i64);
    match whole.and_then(|seconds| Timestamp::from_second(seconds).ok()) {
        Some(time) => time.strftime("%Y-%m-%d %H:%M:%S UTC").to_string(),
        None => "missing".to_owned(),
    }
}

fn problems(bench: &Bench, rows: &mut Vec<EvidenceRow>) {
    let count = bench.review.granule().problems().len();
    if count > 0 {
        section(rows, "File");
        let words = format!("{count} found missing, guessed or odd: ! shows");
        rows.push(EvidenceRow::Words(words, Tone::Faint));
    }
    for note in &bench.layer.notes {
        rows.push(EvidenceRow::Words(note.clone(), Tone::Faint));
    }
}

#[cfg(test)]
mod tests {
    use super::time_words;

    #[test]
    fn times_are_dates_or_missing() {
        assert_eq!(time_words(86_400.75), "1970-01-02 00:00:00 UTC");
        for missing in [f64::NAN, f64::INFINITY, 1e300] {
            assert_eq!(time_words(missing), "missing");
        }
    }
}
