//! A ledger file: the lines behind a sound first line, or all of it; then the flags that it makes.
#![no_main]

use std::cell::OnceCell;
use std::path::PathBuf;

use radsieve::flags::{
    Campaign, FlagState, GranuleIdentity, LEDGER_FORMAT, LEDGER_VERSION, read_ledgers,
};

/// A campaign with one ledger file.
struct Desk {
    campaign: Campaign,
    granule: GranuleIdentity,
    ledger: PathBuf,
    _folder: tempfile::TempDir,
}

const FOOTPRINTS: usize = 12;

fn desk() -> Desk {
    let folder = tempfile::tempdir().expect("a folder for the campaign");
    let campaign = Campaign::open_or_create(folder.path()).expect("a campaign");
    let granule = GranuleIdentity {
        hash: "0123456789abcdef".repeat(4),
        size: 4096,
        name: "synthetic.nc".to_owned(),
        footprints: vec![("line".to_owned(), 3), ("position".to_owned(), 4)],
        read_with: Vec::new(),
    };
    let ledgers = folder.path().join("ledgers").join(format!("synthetic-{}", granule.short()));
    std::fs::create_dir_all(&ledgers).expect("a folder for ledgers");
    Desk { campaign, granule, ledger: ledgers.join("ada-desk-7-1.jsonl"), _folder: folder }
}

fn first_line(granule: &GranuleIdentity) -> String {
    format!(
        r#"{{"format":"{LEDGER_FORMAT}","version":{LEDGER_VERSION},"writer":"ada","granule":{{"hash":"{}","size":4096,"name":"synthetic.nc","footprints":[["line",3],["position",4]]}},"author":{{"person":"ada","host":"desk","process":7}},"program":"0","opened":"2026-03-01T12:00:00Z"}}
"#,
        granule.hash
    )
}

thread_local! {
    static DESK: OnceCell<Desk> = const { OnceCell::new() };
}

libfuzzer_sys::fuzz_target!(|bytes: &[u8]| {
    DESK.with(|kept| {
        let desk = kept.get_or_init(desk);
        let Some((&whole, rest)) = bytes.split_first() else { return };
        let mut text =
            if whole == b'!' { Vec::new() } else { first_line(&desk.granule).into_bytes() };
        text.extend(rest);
        std::fs::write(&desk.ledger, text).expect("a ledger");
        let reading = read_ledgers(&desk.campaign, &desk.granule);
        let vocabulary = &desk.campaign.settings().vocabulary;
        let state = FlagState::replay(FOOTPRINTS, &reading.decisions, vocabulary);
        assert_eq!(state.footprint_flags.len(), FOOTPRINTS);
    });
});
