//! What is under the cursor, in words.

use crate::flags::Scope;
use crate::ui::app::App;
use crate::ui::bench::Bench;

/// `(3, 2) · 12.34°N 5.67°E · cloudy, doubtful · doubt 0.42`
pub fn under_cursor(app: &App) -> String {
    app.bench().map_or_else(String::new, |bench| footprint_words(app, bench, bench.cursor, None))
}

/// The same of any footprint, with the layer's value where it is given.
pub fn footprint_words(app: &App, bench: &Bench, at: usize, value: Option<String>) -> String {
    let open = !bench.is_blind();
    let parts = [
        Some(bench.position_words(at)),
        value,
        place(bench, at),
        surface(bench, at),
        open.then(|| flags(app, bench, at)).flatten(),
        open.then(|| doubt(bench, at)).flatten(),
    ];
    let parts: Vec<String> = parts.into_iter().flatten().collect();
    parts.join(" · ")
}

/// Latitude and longitude to a hundredth of a degree, about a kilometre.
fn place(bench: &Bench, at: usize) -> Option<String> {
    let field = |name: &str| {
        let values = bench.review.granule().geolocation().field(name)?;
        values.get(at).copied().filter(|value| value.is_finite())
    };
    let (latitude, longitude) = (field("lat")?, field("lon")?);
    let east = (longitude + 180.0).rem_euclid(360.0) - 180.0;
    let (north, east_of) =
        (if latitude < 0.0 { 'S' } else { 'N' }, if east < 0.0 { 'W' } else { 'E' });
    Some(format!("{:.2}°{north} {:.2}°{east_of}", latitude.abs(), east.abs()))
}

fn surface(bench: &Bench, at: usize) -> Option<String> {
    let values = bench.review.granule().geolocation().field("land")?;
    let land = values.get(at).copied().filter(|value| value.is_finite())?;
    Some(match land {
        sea if sea < 0.01 => "sea".to_owned(),
        all if all > 0.99 => "land".to_owned(),
        some => format!("{:.0} % land", some * 100.0),
    })
}

fn flags(app: &App, bench: &Bench, at: usize) -> Option<String> {
    let flags = bench.record.open()?.state().any_flags(at);
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let kinds = vocabulary.of_scope(Scope::Footprint);
    let set = kinds.iter().filter(|kind| kind.mask() & flags != 0);
    let names: Vec<&str> = set.map(|kind| kind.name.as_str()).collect();
    (!names.is_empty()).then(|| names.join(", "))
}

fn doubt(bench: &Bench, at: usize) -> Option<String> {
    let screened = bench.tests.screened.as_ref()?;
    let doubt = screened.doubt.get(at).copied().filter(|doubt| doubt.is_finite())?;
    Some(format!("doubt {doubt:.2}"))
}
