//! The global attributes of a mask: what it is, where it comes from, and what it cannot assure.

use super::provenance::{Provenance, Record};
use super::source::MaskSource;
use crate::flags::ReviewState;
use crate::netcdf_files::{NetcdfWriter, WriterError};
use crate::system::clean_text;

/// What goes with every mask.
pub const CAUTIONS: &str = "A screening aid for retrieval runs, not a warning service and no \
    certified product. \"Not flagged\" does not mean clear: thin cirrus, uniform low cloud and \
    cloud over inversions can escape infrared tests. \"Flagged\" does not mean present: deserts, \
    inversions, glint, moist air and noise on cold scenes can cause false flags. A footprint that \
    is not_assessed is not usable. Not for the safety of life: an ash, dust or SO2 flag must not be \
    used as, or in place of, an advisory of the responsible authorities, and the absence of flags \
    must not be read as safe airspace. Keep the granule's own quality fields; this mask adds to \
    them.";

pub(super) fn write_globals(
    writer: &mut NetcdfWriter,
    source: &MaskSource,
    record: &Record<'_>,
    provenance: &Provenance,
    problems: &[String],
) -> Result<(), WriterError> {
    for (name, text) in globals(source, record, provenance, problems) {
        writer.global_attribute(name, text)?;
    }
    Ok(())
}

/// Names and texts in the order in which they stand in the file.
fn globals(
    source: &MaskSource,
    record: &Record<'_>,
    provenance: &Provenance,
    problems: &[String],
) -> Vec<(&'static str, String)> {
    let name = clean_text(&source.name);
    let mut globals = vec![
        ("Conventions", "CF-1.8".to_owned()),
        ("title", format!("Flag mask of {name}")),
        ("history", history(source, provenance)),
        ("source", origin(source, provenance)),
        ("comment", CAUTIONS.to_owned()),
        ("references", "Flags and formats: docs/flags.md of radsieve".to_owned()),
        ("date_created", seconds(provenance.now)),
        ("granule_name", name),
        ("granule_size_bytes", source.size.to_string()),
        ("granule_blake3", source.hash.clone()),
    ];
    if !source.read_with.is_empty() {
        globals.push(("read_with", source.read_with.join("; ")));
    }
    globals.extend(source.title.iter().map(|title| ("granule_title", clean_text(title))));
    globals.extend(provenance.campaign.iter().map(|title| ("campaign", clean_text(title))));
    globals.extend(record_attributes(source, record));
    globals.push(("program", format!("radsieve {}", provenance.program)));
    if !problems.is_empty() {
        globals.push(("problems", problems.join("; ")));
    }
    globals
}

fn record_attributes(source: &MaskSource, record: &Record<'_>) -> Vec<(&'static str, String)> {
    let people = record.people();
    let mut attributes = vec![
        ("reviewers", if people.is_empty() { "none".to_owned() } else { people.join(", ") }),
        ("decision_count", record.decisions.len().to_string()),
    ];
    if let Some((first, last)) = record.span() {
        attributes.push(("first_decision", seconds(first)));
        attributes.push(("last_decision", seconds(last)));
    }
    attributes.push(("granule_state", record.state.granule.name().to_owned()));
    attributes.push((
        "signed_off_by",
        record.signed_off_by().unwrap_or_else(|| "nobody: decisions may be incomplete".to_owned()),
    ));
    let assessed = record.state.review.iter().filter(|&&state| state != ReviewState::NotAssessed);
    let share = format!("{} of {}", assessed.count(), source.footprint_count());
    attributes.push(("assessed_footprints", share));
    let producer = record.producer();
    if !producer.is_empty() {
        attributes.push(("rejected_by_producer", producer.join("; ")));
    }
    if let Some(check) = record.spot_check() {
        attributes.push(("spot_check", clean_text(&check.words())));
        attributes.push(("spot_check_rulebook", clean_text(&check.rulebook)));
        attributes.push(("spot_check_seed", check.seed.to_string()));
    }
    attributes.push(("vocabulary", vocabulary(record)));
    attributes.push(("usable_rule", usable_rule(record)));
    attributes
}

/// The granule's history and one line of ours.
fn history(source: &MaskSource, provenance: &Provenance) -> String {
    let ours = format!(
        "{} radsieve {} export: flag mask of {} by {}",
        seconds(provenance.now),
        provenance.program,
        clean_text(&source.name),
        clean_text(&provenance.person)
    );
    match source.history.as_deref().map(str::trim_end) {
        Some(old) if !old.is_empty() => {
            let lines: Vec<String> = old.lines().map(clean_text).collect();
            format!("{}\n{ours}", lines.join("\n"))
        }
        _ => ours,
    }
}

fn origin(source: &MaskSource, provenance: &Provenance) -> String {
    let granule = source.source.as_deref().map(clean_text);
    let granule = granule.unwrap_or_else(|| "a granule that names no source".to_owned());
    format!("radsieve {}, from the decisions of reviewers about {granule}", provenance.program)
}

fn vocabulary(record: &Record<'_>) -> String {
    let own = record.vocabulary.kinds().iter().filter(|kind| !kind.released);
    let own: Vec<&str> = own.map(|kind| kind.name.as_str()).collect();
    match own.as_slice() {
        [] => "the released flags".to_owned(),
        names => format!("the released flags and this campaign's own: {}", names.join(", ")),
    }
}

fn usable_rule(record: &Record<'_>) -> String {
    let vocabulary = record.vocabulary;
    let names =
        vocabulary.names(crate::flags::Scope::Footprint, vocabulary.excluding_mask()).join(", ");
    format!("review_state is not not_assessed, and footprint_flag has none of {names}")
}

/// To the second, as ISO 8601 has it: fractions are in the ledgers.
fn seconds(time: jiff::Timestamp) -> String {
    time.strftime("%Y-%m-%dT%H:%M:%SZ").to_string()
}
