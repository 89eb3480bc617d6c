//! What the tests say on the screen: start state, keys, expected.

use crate::flags::{Author, Campaign};
use crate::granule::Opening;
use crate::netcdf_files::ReaderProgram;
use crate::review::{OnRecord, Record, Review, rulebook_of};
use crate::ui::trial::{Place, Trial};

/// Footprint n is at 250 + n kelvins: below 260 K it is cloudy, above 275.2 K dusty. Around the
/// limits the tests are in doubt: at footprints 9, 10 and 11, and at 25.
pub const RULEBOOK: &str = r#"
format = "radsieve rulebook 1"
name = "lowen"
title = "Two tests for a trial"
note = "Made up."
calibration = "none: equal weights"
doubt_cut = 0.5
assess = ["cloudy"]
[[surfaces]]
name = "anywhere"
[[families]]
name = "window"
sees = "how cold the window is"
[[tests]]
name = "cold window"
family = "window"
flag = "cloudy"
expression = "bt(900)"
sense = "below"
threshold = 260
softness = 4
source = "made up"
[[tests]]
name = "warm window"
family = "window"
flag = "dust_or_ash"
expression = "bt(900)"
sense = "above"
threshold = 275.2
softness = 2
source = "made up"
[[tests]]
name = "no such channel"
family = "window"
flag = "so2"
expression = "bt(2500)"
sense = "above"
threshold = 300
softness = 2
source = "made up"
"#;

/// A folder with granules, and a campaign with [`RULEBOOK`].
pub fn place(names: &[&str]) -> Place {
    let place = Place::with(names);
    let campaign = Campaign::open_or_create(&place.path("campaign")).unwrap();
    std::fs::write(campaign.rulebook_path(), RULEBOOK).unwrap();
    place
}

fn one_granule() -> (Place, Trial) {
    let place = place(&["lowen_001.nc"]);
    let trial = place.review(&["lowen_001.nc"]);
    (place, trial)
}

/// Records what the tests say about a granule, as `screen` does.
pub fn screen(place: &Place, name: &str) {
    let campaign = Campaign::open(&place.path("campaign")).unwrap();
    let opening = Opening::new(ReaderProgram::in_process());
    let review = Review::open(&opening, &place.path(name)).unwrap();
    let rulebook = rulebook_of(&campaign).unwrap();
    let screened = review.screen(&rulebook, &crate::system::Cancel::new()).unwrap();
    let author = Author { person: "night".into(), host: "desk".into(), process: 8 };
    let now = "2026-03-01T03:00:00Z".parse().unwrap();
    let identity = review.identify().unwrap();
    let mut record = Record::open(&campaign, identity, &author, "0.0.0", now).unwrap();
    record.tests_decide(&screened, now).unwrap();
    record.close(std::time::Duration::from_secs(60)).unwrap();
}

#[test]
fn opening_a_granule_runs_the_campaigns_rulebook() {
    let (_place, mut trial) = one_granule();
    let screened = trial.bench().tests.screened.clone().unwrap();
    assert_eq!(screened.rulebook.name, "lowen");
    let doubtful: Vec<usize> = (0..30).filter(|at| screened.is_doubtful(*at)).collect();
    assert_eq!(doubtful, [9, 10, 11, 25]);
    let screen = trial.screen(200, 60);
    for words in ["suggested: cloudy", "plain", "cold window", "+1.5", "made up"] {
        assert!(screen.contains(words), "{words}: {screen}");
    }
    assert!(screen.contains("no such channel: no channel near 2500"), "{screen}");
    trial.keys("Down Right Right Right Right");
    assert!(trial.screen(80, 24).contains("in doubt"), "{}", trial.screen(80, 24));
}

#[test]
fn what_the_tests_say_is_a_layer_too() {
    let (_place, mut trial) = one_granule();
    for (layer, footprint, value) in [
        ("doubt", 10, 1.0),
        ("margin(\"cold window\")", 8, 0.5),
        ("flag(\"cloudy\")", 9, 1.0),
        ("probability(\"cloudy\") > 0.5 and doubt > 0.5", 8, 0.0),
    ] {
        trial.types(&format!(":layer {layer}")).keys("Enter");
        let found = trial.bench().layer.values[footprint];
        assert!((found - value).abs() < 1e-6, "{layer}: {found}, {}", trial.message());
    }
    trial.types(":layer margin(\"cold\")").keys("Enter");
    assert!(
        trial.message().contains("cold window"),
        "the near name is offered: {}",
        trial.message()
    );
    assert!(trial.bench().suggested.contains(&"doubt".to_owned()));
}

#[test]
fn what_was_screened_before_agrees_with_what_is_shown() {
    let place = place(&["lowen_001.nc"]);
    screen(&place, "lowen_001.nc");
    let trial = place.review(&["lowen_001.nc"]);
    assert_eq!(trial.bench().tests.on_record, OnRecord::Same);
    let screened = trial.bench().tests.screened.clone().unwrap();
    for flag in &screened.flags {
        let set: Vec<usize> = (0..30).filter(|at| flag.is_set(*at)).collect();
        assert_eq!(trial.flagged(&flag.flag), set, "{}", flag.flag);
    }
    assert_eq!(trial.flagged("doubtful"), [9, 10, 11, 25]);
}

#[test]
fn a_rulebook_changed_since_is_told() {
    let place = place(&["lowen_001.nc"]);
    screen(&place, "lowen_001.nc");
    let campaign = Campaign::open(&place.path("campaign")).unwrap();
    let changed = RULEBOOK.replace("threshold = 260", "threshold = 255");
    std::fs::write(campaign.rulebook_path(), changed).unwrap();
    let mut trial = place.review(&["lowen_001.nc"]);
    assert!(matches!(trial.bench().tests.on_record, OnRecord::Differs(_)));
    assert!(trial.screen(200, 60).contains("another outcome"));
    std::fs::write(campaign.rulebook_path(), RULEBOOK).unwrap();
    trial.keys("T");
    assert_eq!(trial.bench().tests.on_record, OnRecord::Same);
}

#[test]
fn a_mistaken_rulebook_is_told_and_harms_nothing_else() {
    let place = place(&["lowen_001.nc"]);
    let campaign = Campaign::open(&place.path("campaign")).unwrap();
    std::fs::write(campaign.rulebook_path(), "name = 3").unwrap();
    let mut trial = place.review(&["lowen_001.nc"]);
    assert!(trial.message().contains("rulebook.toml has mistakes"), "{}", trial.message());
    trial.keys("f c");
    assert_eq!(trial.flagged("cloudy"), [0]);
}

#[test]
fn running_tests_are_given_up_by_escape() {
    let (_place, mut trial) = one_granule();
    trial.press("T");
    assert!(trial.screen(120, 40).contains("tests 0 %, Esc ends them"));
    trial.press("Esc");
    trial.settle();
    assert!(trial.message().contains("given up"), "{}", trial.message());
    assert!(trial.jobs.is_empty());
}
