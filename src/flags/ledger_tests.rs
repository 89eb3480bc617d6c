//! Writing ledgers and reading them back, whole and damaged.

use std::path::PathBuf;
use std::time::Duration;

use jiff::Timestamp;

use super::*;

/// Longer than any disk of a test machine needs; a test that waits so long has failed.
pub(super) const PATIENCE: Duration = Duration::from_secs(20);

pub(super) fn granule() -> GranuleIdentity {
    GranuleIdentity {
        hash: "0123456789abcdef0123".to_owned(),
        size: 3,
        name: "lowen_001.nc".to_owned(),
        footprints: vec![("line".to_owned(), 4), ("position".to_owned(), 5)],
        bands: Vec::new(),
        read_with: Vec::new(),
    }
}

fn author(person: &str) -> Author {
    Author { person: person.to_owned(), host: "node7".to_owned(), process: 11 }
}

pub(super) fn time(second: i64) -> Timestamp {
    Timestamp::from_second(1_700_000_000 + second).unwrap()
}

/// An accepted suggestion: flags given, flags withdrawn, all that was judged.
pub(super) fn judge(
    given: &[(&str, std::ops::Range<usize>)],
    withdrawn: &[(&str, std::ops::Range<usize>)],
    judged: std::ops::Range<usize>,
) -> Act {
    let part = |(flag, range): &(&str, std::ops::Range<usize>)| FlagAt {
        flag: (*flag).to_owned(),
        footprints: FootprintSet::range(range.clone()),
    };
    Act::Judge {
        ruling: Ruling::Accepted,
        rulebook: "built-in (0123)".to_owned(),
        given: given.iter().map(part).collect(),
        withdrawn: withdrawn.iter().map(part).collect(),
        footprints: FootprintSet::range(judged),
    }
}

pub(super) fn cloudy(footprints: std::ops::Range<usize>) -> Act {
    Act::Flag {
        flag: "cloudy".to_owned(),
        footprints: FootprintSet::range(footprints),
        bands: None,
    }
}

pub(super) struct Fixture {
    pub(super) dir: tempfile::TempDir,
    campaign: Campaign,
}

impl Fixture {
    pub(super) fn new() -> Self {
        let dir = tempfile::tempdir().unwrap();
        let campaign = Campaign::open_or_create(dir.path()).unwrap();
        Self { dir, campaign }
    }

    pub(super) fn writer(&self, person: &str) -> LedgerWriter {
        LedgerWriter::start(&self.campaign, &granule(), &author(person), "0.1.0", time(0)).unwrap()
    }

    pub(super) fn read(&self) -> LedgerReading {
        read_ledgers(&self.campaign, &granule())
    }

    pub(super) fn folder(&self) -> PathBuf {
        self.dir.path().join("ledgers/lowen_001-0123456789ab")
    }

    pub(super) fn files(&self) -> Vec<PathBuf> {
        let Ok(entries) = std::fs::read_dir(self.folder()) else { return Vec::new() };
        let mut files: Vec<_> = entries.map(|entry| entry.unwrap().path()).collect();
        files.sort();
        files
    }

    /// A ledger of three decisions, as text.
    pub(super) fn three_decisions(&self) -> (PathBuf, String) {
        let mut writer = self.writer("anna");
        for at in 0..3 {
            writer.append(Origin::Person, cloudy(at..at + 1), None, time(at as i64));
        }
        writer.close(PATIENCE).unwrap();
        let path = self.files().remove(0);
        let text = std::fs::read_to_string(&path).unwrap();
        (path, text)
    }
}

#[test]
fn what_is_written_is_read_back() {
    let fixture = Fixture::new();
    let mut writer = fixture.writer("anna");
    let acts = [
        cloudy(3..5),
        Act::Withdraw {
            flag: "cloudy".to_owned(),
            footprints: FootprintSet::single(3),
            bands: Some(vec!["long_wave".to_owned()]),
        },
        Act::FlagChannels {
            flag: "dead".to_owned(),
            channels: vec![ChannelName { band: "b".to_owned(), index: 7, wavenumber: 900.25 }],
        },
        Act::WithdrawChannels { flag: "dead".to_owned(), channels: Vec::new() },
        Act::Assess { footprints: FootprintSet::all(2) },
        Act::SignOff { rest_assessed: FootprintSet::all(20), summary: "20 usable".to_owned() },
        judge(&[("cloudy", 0..3)], &[("so2", 3..4)], 0..5),
        Act::SpotCheck(SpotCheck {
            rulebook: "built-in (0123)".to_owned(),
            seed: u64::MAX,
            strata: vec![Stratum {
                flagged: true,
                plain: 20,
                right: FootprintSet::all(3),
                wrong: FootprintSet::single(4),
                untold: FootprintSet::empty(),
            }],
        }),
        Act::SetAside,
        Act::Reopen,
        Act::Comment { footprints: FootprintSet::empty() },
    ];
    let mut written = Vec::new();
    for act in acts {
        let why = Some("edge of the \"deck\"\n".to_owned());
        written.push(writer.append(Origin::Person, act, why, time(written.len() as i64)));
    }
    let test = Origin::Test("window_bt".to_owned());
    written.push(writer.append(test, cloudy(0..9), None, time(50)));
    let revoke = Act::Revoke { decision: written[0].id.clone() };
    written.push(writer.append(Origin::Person, revoke, None, time(51)));
    writer.close(PATIENCE).unwrap();
    let reading = fixture.read();
    assert_eq!(reading.problems, []);
    assert_eq!(reading.decisions, written);
    assert_eq!(reading.files, 1);
}

#[test]
fn no_file_before_the_first_decision_and_one_for_each_writer() {
    let fixture = Fixture::new();
    let idle = fixture.writer("anna");
    idle.close(PATIENCE).unwrap();
    assert_eq!(fixture.files(), Vec::<PathBuf>::new());
    assert_eq!(fixture.read(), LedgerReading::default());
    for _ in 0..2 {
        let mut writer = fixture.writer("anna");
        writer.append(Origin::Person, cloudy(0..1), None, time(1));
        writer.close(PATIENCE).unwrap();
    }
    assert_eq!(fixture.files().len(), 2);
    assert_eq!(fixture.read().decisions.len(), 2);
}

#[test]
fn a_file_of_the_same_name_is_never_touched() {
    let fixture = Fixture::new();
    std::fs::create_dir_all(fixture.folder()).unwrap();
    // The numbers of writers are of this process, so all that can come are made.
    for number in 0..5000 {
        std::fs::write(fixture.folder().join(format!("anna-node7-11-{number}.jsonl")), "").unwrap();
    }
    let mut writer = fixture.writer("anna");
    writer.append(Origin::Person, cloudy(0..1), None, time(1));
    writer.close(PATIENCE).unwrap();
    let written: Vec<_> = fixture
        .files()
        .into_iter()
        .filter(|path| std::fs::metadata(path).unwrap().len() > 0)
        .collect();
    assert_eq!(written.len(), 1);
    assert!(written[0].to_string_lossy().ends_with(".2.jsonl"));
    assert_eq!(fixture.read().decisions.len(), 1);
}

#[test]
fn a_torn_last_line_is_reported_and_left_as_it_is() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    for cut in 1..text.len() {
        std::fs::write(&path, &text[..cut]).unwrap();
        let whole = text[..cut].matches('\n').count();
        // A line without its break may still be whole JSON; then nothing is lost by taking it.
        let decisions = fixture.read().decisions.len();
        let taken = whole.saturating_sub(1);
        assert!(decisions == taken || decisions == taken + 1, "cut at {cut}: {decisions}");
        assert!(fixture.read().problems.iter().all(|problem| problem.loss == Loss::Nothing));
        assert_eq!(std::fs::read_to_string(&path).unwrap(), text[..cut]);
    }
    std::fs::write(&path, &text[..text.len() - 10]).unwrap();
    let problem = fixture.read().problems.remove(0);
    assert_eq!(problem.line, 4);
    assert!(problem.to_string().contains("line 4: the last line was cut off"), "{problem}");
}

#[test]
fn a_broken_middle_line_is_named_and_the_others_count() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    let mut lines: Vec<&str> = text.lines().collect();
    for broken in ["", "}{", "[]", "{\"sequence\":1}", "\u{0}", "{\"act\":\"flag\"}"] {
        lines[2] = broken;
        std::fs::write(&path, lines.join("\n") + "\n").unwrap();
        let reading = fixture.read();
        assert_eq!(reading.decisions.len(), 2, "{broken:?}");
        assert_eq!(reading.problems.len(), 1, "{broken:?}");
        assert_eq!(reading.problems[0].line, 3);
        assert_eq!(reading.problems[0].loss, Loss::Line);
    }
}

#[test]
fn a_newer_format_says_so() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    std::fs::write(&path, text.replacen("\"version\":1", "\"version\":2", 1)).unwrap();
    let reading = fixture.read();
    assert_eq!(reading.decisions, []);
    assert_eq!(reading.problems[0].loss, Loss::File);
    assert!(reading.problems[0].what.contains("use a newer version"), "{}", reading.problems[0]);
}

#[test]
fn an_act_of_a_newer_version_is_kept_and_reported_by_the_fold() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    let line = r#"{"sequence":9,"at":"2026-01-01T00:00:00Z","act":"tint","hue":[1,2],"why":"new"}"#;
    std::fs::write(&path, format!("{text}{line}\n")).unwrap();
    let reading = fixture.read();
    assert_eq!(reading.problems, []);
    assert_eq!(reading.decisions.len(), 4);
    let state = FlagState::replay(20, &[], &reading.decisions, &Vocabulary::released());
    assert_eq!(state.problems.len(), 1);
    assert!(state.problems[0].contains("act `tint`"), "{:?}", state.problems);
}

#[test]
fn ledgers_of_other_granules_and_other_files_do_not_count() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    let other = text.replace("0123456789abcdef0123", "0123456789abffffffff");
    std::fs::write(path.with_file_name("other.jsonl"), other).unwrap();
    std::fs::write(path.with_file_name("notes.txt"), "no ledger").unwrap();
    std::fs::write(path.with_file_name("odd.jsonl"), "no ledger\n").unwrap();
    std::fs::create_dir(path.with_file_name("folder.jsonl")).unwrap();
    let reading = fixture.read();
    assert_eq!(reading.decisions.len(), 3);
    let words: Vec<_> = reading.problems.iter().map(|problem| problem.what.as_str()).collect();
    assert_eq!(words.len(), 3, "{words:?}");
    assert!(words.iter().any(|what| what.contains("another granule")));
    assert!(words.iter().any(|what| what.contains("no ledger header")));
    assert!(words.iter().any(|what| what.contains("no ordinary file")));
}

#[test]
fn copies_count_once_and_other_decisions_of_the_same_name_count_too() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    std::fs::copy(&path, path.with_file_name("copy.jsonl")).unwrap();
    let once = fixture.read();
    assert_eq!((once.decisions.len(), once.problems.len()), (3, 0));
    std::fs::write(path.with_file_name("copy.jsonl"), text.replace("[[2,1]]", "[[9,1]]")).unwrap();
    let both = fixture.read();
    assert_eq!((both.decisions.len(), both.problems.len()), (4, 1));
    assert!(both.problems[0].what.contains("number of another decision"));
}

/// Damage of any size is told in a bounded number of words.
#[test]
fn many_broken_and_doubled_lines_are_only_counted() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    let doubled: String = (0..3000)
        .map(|at| {
            format!(
                "{{\"sequence\":1,\"at\":\"2026-01-01T00:00:{:02}Z\",\"act\":\"reopen\"}}\n",
                at % 60
            )
        })
        .collect();
    std::fs::write(&path, format!("{text}{}{doubled}", "broken\n".repeat(5000))).unwrap();
    let reading = fixture.read();
    assert!(reading.problems.len() < 1100, "{}", reading.problems.len());
    assert!(reading.problems.iter().any(|problem| problem.what.contains("more problems")));
    assert!((3..20).contains(&reading.decisions.len()), "{}", reading.decisions.len());
}

/// Two hosts whose clocks disagree: who saw a decision decides after it.
#[test]
fn a_decision_comes_after_those_its_writer_saw() {
    let fixture = Fixture::new();
    let mut ahead = fixture.writer("anna");
    let first = ahead.append(Origin::Person, cloudy(0..1), None, time(3600));
    ahead.close(PATIENCE).unwrap();
    let mut behind = fixture.writer("bert");
    behind.saw(&fixture.read().decisions);
    let withdraw = Act::Withdraw {
        flag: "cloudy".to_owned(),
        footprints: FootprintSet::single(0),
        bands: None,
    };
    let second = behind.append(Origin::Person, withdraw, None, time(0));
    behind.close(PATIENCE).unwrap();
    assert!(second.order() > first.order());
    assert_eq!(second.clock, Some(time(0)));
    let state = FlagState::replay(20, &[], &fixture.read().decisions, &Vocabulary::released());
    assert_eq!(state.footprint_flags[0], 0);
}

/// The document's lines are read as they stand.
#[test]
fn the_lines_in_the_document_are_a_ledger() {
    let document = include_str!("../../docs/flags.md");
    let example = |number| document.split("```json\n").nth(number).unwrap().lines().next().unwrap();
    let header = example(1).replace("<64 hexadecimal digits>", &granule().hash);
    let fixture = Fixture::new();
    std::fs::create_dir_all(fixture.folder()).unwrap();
    let text = format!("{header}\n{}\n", example(2));
    std::fs::write(fixture.folder().join("example.jsonl"), text).unwrap();
    let dimensions = [("scan_line", 45), ("position", 30), ("detector", 9)];
    let footprints = dimensions.map(|(name, length)| (name.to_owned(), length)).to_vec();
    let of_document = GranuleIdentity { footprints, ..granule() };
    let reading = read_ledgers(&fixture.campaign, &of_document);
    assert_eq!(reading.problems, []);
    let decision = &reading.decisions[0];
    assert_eq!((decision.person.as_str(), decision.id.sequence), ("anna", 1));
    assert_eq!(decision.act.footprints().unwrap().len(), 17);
    assert_eq!(decision.why.as_deref(), Some("edge of the deck"));
}

#[test]
fn a_ledger_over_other_dimensions_does_not_count_and_one_read_otherwise_is_told() {
    let fixture = Fixture::new();
    let (path, text) = fixture.three_decisions();
    let there = serde_json::to_string(&granule().footprints).unwrap();
    assert!(text.contains(&there), "{there} in {text}");
    let turned = text.replacen(&there, r#"[["position",4],["line",5]]"#, 1);
    std::fs::write(&path, turned).unwrap();
    let reading = fixture.read();
    assert_eq!(reading.decisions, []);
    assert_eq!(reading.problems[0].loss, Loss::OtherFootprints);
    assert!(reading.problems[0].what.contains("position 4, line 5"), "{}", reading.problems[0]);
    let otherwise =
        text.replacen(r#""footprints""#, r#""read_with":["flip.toml"],"footprints""#, 1);
    std::fs::write(&path, otherwise).unwrap();
    let reading = fixture.read();
    assert_eq!((reading.decisions.len(), reading.problems.len()), (3, 1));
    assert!(reading.problems[0].what.contains("flip.toml"), "{}", reading.problems[0]);
}
