//! Tables of what was measured.

use std::fmt::Write as _;

use radsieve::screening::Rulebook;

use crate::cases::{Case, Granule};
use crate::limits::{ASKED, CLIMATES, DEFECTS, MORE, Question, Share, of_scenes};

const FLAGS: [&str; 5] = ["cloudy", "thin_cloud", "dust_or_ash", "so2", "bad_spectrum"];
const SCENES: [&str; 7] = [
    "sea_of_lowen",
    "gulf_of_tamber",
    "strait_of_pell",
    "hesk_isles",
    "ketter_desert",
    "norrik_plateau",
    "iskel_sound",
];

/// All tables.
pub fn all(rulebook: &Rulebook, granules: &[Granule], samples: &[Granule]) -> String {
    let mut text = format!(
        "Measured with rulebook `{}`, fingerprint `{}`, on {} granules with {} footprints.\n",
        rulebook.name,
        rulebook.fingerprint,
        granules.len(),
        granules.iter().map(|granule| granule.cases.len()).sum::<usize>(),
    );
    for (title, table) in [
        ("What has a limit, by climate", climates(granules)),
        ("The same and more, by scene", scenes(granules)),
        ("The sample granules", SAMPLES.to_owned() + &of_samples(samples)),
        ("Planted defects", defects(granules)),
        ("Hits and misses", confusion(granules)),
        ("Each test alone", single(rulebook, granules)),
        ("Reliability", RELIABILITY.to_owned() + &reliability(granules)),
        ("Hits against false alarms", CURVE.to_owned() + &curve(granules)),
    ] {
        text += &format!("\n## {title}\n{table}");
    }
    text
}

const SAMPLES: &str = "
Four granules that come with the program, as they are drawn, without a climate of their own and with
instruments of their own. They are known to everybody, so they are no proof: they show what a user sees first.
";
const RELIABILITY: &str = "
How often a flag holds where the tests give it a probability: in the bar, `#` is how often it held, `|` how often
it was promised. Footprints of one cloud are not independent, so the counts promise more than they hold.
";
const CURVE: &str = "
As the probability from which a flag is set varies; the rulebook sets it above 0.5.
";

/// Which planted defects were found.
fn defects(granules: &[Granule]) -> String {
    let mut text = "\n| defect | found |\n| --- | --- |\n".to_owned();
    let cases = || granules.iter().flat_map(|granule| &granule.cases);
    for (name, bit) in DEFECTS {
        let mut share = Share::default();
        for case in cases().filter(|case| case.truth.defects & bit != 0) {
            share.all += 1;
            share.held += usize::from(case.is_bad());
        }
        let _ = writeln!(text, "| {name}, by footprint | {share} |");
    }
    let channels = |of: fn(&Granule) -> Share| {
        granules.iter().map(of).fold(Share::default(), |sum, share| Share {
            held: sum.held + share.held,
            all: sum.all + share.all,
        })
    };
    let planted = channels(|granule| granule.defective_channels);
    let sound = channels(|granule| granule.sound_channels);
    let _ = writeln!(text, "| dead, noisy or popping channel | {planted} |");
    let _ = writeln!(text, "| sound channel, suspected | {sound} |");
    text
}

fn head(first: &str, questions: &[&Question]) -> String {
    let heads: Vec<&str> = questions.iter().map(|question| question.head).collect();
    let rule = vec!["---"; heads.len() + 1].join(" | ");
    format!("\n| {first} | {} |\n| {rule} |\n", heads.join(" | "))
}

fn answers<'g>(
    questions: &[&Question],
    granules: impl Iterator<Item = &'g Granule> + Clone,
) -> String {
    let answers: Vec<String> =
        questions.iter().map(|question| question.answer(granules.clone()).to_string()).collect();
    answers.join(" | ")
}

/// What has a limit, climate by climate.
fn climates(granules: &[Granule]) -> String {
    let mut text = head("climate", &ASKED);
    for (climate, scenes) in CLIMATES {
        let granules: Vec<&Granule> = of_scenes(granules, scenes).collect();
        let _ = writeln!(text, "| {climate} | {} |", answers(&ASKED, granules.into_iter()));
    }
    text
}

/// Everything, scene by scene and instrument by instrument.
fn scenes(granules: &[Granule]) -> String {
    let more: Vec<&Question> = MORE.iter().collect();
    let mut text = String::new();
    for questions in [&ASKED[..], &more] {
        text += &head("scene", questions);
        for scene in SCENES {
            for (instrument, shape) in [("interferometer", "x9"), ("grating", "x30")] {
                let scene_alone = [scene];
                let granules = of_scenes(granules, &scene_alone);
                let granules: Vec<&Granule> =
                    granules.filter(|one| one.name.contains(shape)).collect();
                if granules.is_empty() {
                    continue;
                }
                let answers = answers(questions, granules.into_iter());
                let _ = writeln!(text, "| {}, {instrument} | {answers} |", scene.replace('_', " "));
            }
        }
    }
    text
}

/// Everything, sample by sample; questions down, for there are few granules.
fn of_samples(samples: &[Granule]) -> String {
    let heads: Vec<String> = samples.iter().map(|granule| granule.place()).collect();
    let rule = vec!["---"; heads.len() + 1].join(" | ");
    let mut text = format!("\n| question | {} |\n| {rule} |\n", heads.join(" | "));
    for question in ASKED.iter().copied().chain(&MORE) {
        let answers: Vec<String> =
            samples.iter().map(|granule| question.answer([granule]).to_string()).collect();
        let _ = writeln!(text, "| {} | {} |", question.head, answers.join(" | "));
    }
    let channels: Vec<String> =
        samples.iter().map(|granule| granule.defective_channels.to_string()).collect();
    let _ = writeln!(text, "| channels with a defect: found | {} |", channels.join(" | "));
    text
}

/// Hits, misses, false alarms, rightly left alone, by scene and flag.
fn confusion(granules: &[Granule]) -> String {
    let mut text = "\n| scene | flag | hit | missed | false alarm | rightly not set |\n\
        | --- | --- | --- | --- | --- | --- |\n"
        .to_owned();
    for scene in SCENES {
        for flag in FLAGS {
            let mut counts = [0_usize; 4];
            for case in of_scenes(granules, &[scene]).flat_map(|granule| &granule.cases) {
                if let Some(truth) = case.truth.deserves(flag) {
                    let place = match (truth, case.is_set(flag)) {
                        (true, true) => 0,
                        (true, false) => 1,
                        (false, true) => 2,
                        (false, false) => 3,
                    };
                    counts[place] += 1;
                }
            }
            let [hit, missed, alarm, right] = counts;
            if hit + missed + alarm > 0 {
                let scene = scene.replace('_', " ");
                let _ =
                    writeln!(text, "| {scene} | {flag} | {hit} | {missed} | {alarm} | {right} |");
            }
        }
    }
    text
}

/// What each test says alone.
fn single(rulebook: &Rulebook, granules: &[Granule]) -> String {
    let mut text = "\n| test | speaks | speaks for: rightly | speaks for: wrongly |\n\
        | --- | --- | --- | --- |\n"
        .to_owned();
    let cases = || granules.iter().flat_map(|granule| &granule.cases);
    for (place, test) in rulebook.tests.iter().enumerate() {
        let mut shares = [Share::default(); 2];
        for case in cases().filter(|case| !case.margins[place].is_nan()) {
            let Some(truth) = case.truth.deserves(&test.flag) else { continue };
            let share = &mut shares[usize::from(!truth)];
            share.all += 1;
            share.held += usize::from(case.margins[place] > 0.0);
        }
        let all = shares[0].all + shares[1].all;
        if all > 0 {
            let [right, wrong] = shares;
            let _ = writeln!(text, "| {} | {all} | {right} | {wrong} |", test.name);
        }
    }
    text
}

/// Cases with a truth and a probability.
fn judged<'g>(granules: &'g [Granule], flag: &'g str) -> impl Iterator<Item = (f64, bool)> + 'g {
    let cases = granules.iter().flat_map(|granule| &granule.cases);
    cases.filter_map(move |case: &Case| {
        Some((case.found(flag)?.probability?, case.truth.deserves(flag)?))
    })
}

/// How often a flag holds where the tests give it a probability.
fn reliability(granules: &[Granule]) -> String {
    const EDGES: [f64; 8] = [0.0, 0.05, 0.2, 0.4, 0.6, 0.8, 0.95, 1.000_001];
    let mut text =
        "\n| flag | probability given | mean given | true | footprints | true, as a bar |\n\
        | --- | --- | --- | --- | --- | --- |\n"
            .to_owned();
    for flag in FLAGS {
        for edges in EDGES.windows(2) {
            let inside: Vec<(f64, bool)> = judged(granules, flag)
                .filter(|(given, _)| (edges[0]..edges[1]).contains(given))
                .collect();
            if inside.is_empty() {
                continue;
            }
            let count = inside.len() as f64;
            let given = inside.iter().map(|(given, _)| given).sum::<f64>() / count;
            let held = inside.iter().filter(|(_, truth)| *truth).count() as f64 / count;
            let range = format!("{} to {:.2}", edges[0], edges[1]);
            let bar = bar(given, held);
            let _ =
                writeln!(text, "| {flag} | {range} | {given:.2} | {held:.2} | {count} | `{bar}` |");
        }
    }
    text
}

/// 20 places: how often it held as `#`, where it should have been as `|`.
fn bar(given: f64, held: f64) -> String {
    let place = |share: f64| (share * 20.0).round() as usize;
    (0..=20)
        .map(|at| match at {
            at if at == place(given) => '|',
            at if at < place(held) => '#',
            _ => '.',
        })
        .collect()
}

/// Hits against false alarms as the probability from which a flag is set varies.
fn curve(granules: &[Granule]) -> String {
    let mut text =
        "\n| flag | set from | hits | false alarms |\n| --- | --- | --- | --- |\n".to_owned();
    for flag in FLAGS {
        let cases: Vec<(f64, bool)> = judged(granules, flag).collect();
        for from in [0.05, 0.1, 0.2, 0.3, 0.5, 0.7, 0.9, 0.95] {
            let rate = |wanted: bool| {
                let all = cases.iter().filter(|(_, truth)| *truth == wanted).count();
                let set = cases.iter().filter(|(given, truth)| *truth == wanted && *given > from);
                match all {
                    0 => "-".to_owned(),
                    all => format!("{:.1} %", 100.0 * set.count() as f64 / all as f64),
                }
            };
            let _ = writeln!(text, "| {flag} | {from} | {} | {} |", rate(true), rate(false));
        }
    }
    text
}
