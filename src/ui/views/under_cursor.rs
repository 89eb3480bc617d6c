//! What is under the cursor, in words.

use crate::flags::Scope;
use crate::ui::app::App;
use crate::ui::bench::Bench;

/// `(3, 2) · 12.34°N 5.67°E · cloudy, doubtful · doubt 0.42`
pub fn under_cursor(app: &App) -> String {
    let Some(bench) = app.bench() else { return String::new() };
    let parts = [
        Some(bench.position_words(bench.cursor)),
        place(bench),
        surface(bench),
        (!bench.is_blind()).then(|| flags(app, bench)).flatten(),
        (!bench.is_blind()).then(|| doubt(bench)).flatten(),
    ];
    let parts: Vec<String> = parts.into_iter().flatten().collect();
    parts.join(" · ")
}

/// Latitude and longitude to a hundredth of a degree, about a kilometre.
fn place(bench: &Bench) -> Option<String> {
    let field = |name: &str| {
        let values = bench.review.granule().geolocation().field(name)?;
        values.get(bench.cursor).copied().filter(|value| value.is_finite())
    };
    let (latitude, longitude) = (field("lat")?, field("lon")?);
    let east = (longitude + 180.0).rem_euclid(360.0) - 180.0;
    let (north, east_of) =
        (if latitude < 0.0 { 'S' } else { 'N' }, if east < 0.0 { 'W' } else { 'E' });
    Some(format!("{:.2}°{north} {:.2}°{east_of}", latitude.abs(), east.abs()))
}

fn surface(bench: &Bench) -> Option<String> {
    let values = bench.review.granule().geolocation().field("land")?;
    let land = values.get(bench.cursor).copied().filter(|value| value.is_finite())?;
    Some(match land {
        sea if sea < 0.01 => "sea".to_owned(),
        all if all > 0.99 => "land".to_owned(),
        some => format!("{:.0} % land", some * 100.0),
    })
}

fn flags(app: &App, bench: &Bench) -> Option<String> {
    let flags = bench.record.open()?.state().any_flags(bench.cursor);
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let kinds = vocabulary.of_scope(Scope::Footprint);
    let set = kinds.iter().filter(|kind| kind.mask() & flags != 0);
    let names: Vec<&str> = set.map(|kind| kind.name.as_str()).collect();
    (!names.is_empty()).then(|| names.join(", "))
}

fn doubt(bench: &Bench) -> Option<String> {
    let screened = bench.tests.screened.as_ref()?;
    let doubt = screened.doubt.get(bench.cursor).copied().filter(|doubt| doubt.is_finite())?;
    Some(format!("doubt {doubt:.2}"))
}
