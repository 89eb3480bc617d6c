//! Tables of what was measured.

use std::fmt::Write as _;

use radsieve::screening::Rulebook;

use crate::cases::{Case, Granule};

const FLAGS: [&str; 4] = ["cloudy", "thin_cloud", "dust_or_ash", "bad_spectrum"];

/// All tables.
pub fn all(rulebook: &Rulebook, granules: &[Granule]) -> String {
    let mut text = format!("Rulebook {} ({})\n", rulebook.name, rulebook.fingerprint);
    text += &shares(granules);
    text += &confusion(granules);
    text += &reliability(granules);
    text += &curve(granules);
    text
}

fn share<'c>(cases: impl Iterator<Item = &'c Case>, holds: impl Fn(&Case) -> bool) -> String {
    let (mut all, mut held) = (0_usize, 0_usize);
    for case in cases {
        all += 1;
        held += usize::from(holds(case));
    }
    match all {
        0 => "-".to_owned(),
        all => format!("{:.1} % of {all}", 100.0 * held as f64 / all as f64),
    }
}

/// What users ask first, granule by granule.
fn shares(granules: &[Granule]) -> String {
    let mut text = "\n| granule | cloud, effective amount above 0.3, top above 2 km: flagged | thin, 0.05 to \
        0.3: flagged | low, above 0.3: flagged | clear sea, far from cloud: flagged | other clear ground, far from cloud: \
        flagged | dust 0.5 or more: \
        flagged | no dust: flagged | lost channels: flagged | sound: flagged bad | not assessed |\n\
        | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |\n"
        .to_owned();
    for granule in granules {
        let of = |wanted: fn(&Case) -> bool| granule.cases.iter().filter(move |case| wanted(case));
        let cells = [
            // 2 km lies near 800 hPa.
            share(
                of(|c| sound(c) && c.truth.effective > 0.3 && c.truth.top < 800.0),
                Case::is_cloud,
            ),
            share(
                of(|c| sound(c) && c.truth.top < 500.0 && (0.05..0.3).contains(&c.truth.effective)),
                Case::is_cloud,
            ),
            share(
                of(|c| sound(c) && c.truth.effective > 0.3 && c.truth.top >= 800.0),
                Case::is_cloud,
            ),
            share(of(|c| is_clear(c) && is_sea(c)), is_alarm),
            share(of(|c| is_clear(c) && !is_sea(c)), is_alarm),
            share(of(|c| sound(c) && c.truth.dust >= 0.5), |c| c.is_set("dust_or_ash")),
            share(of(|c| sound(c) && c.truth.dust < 0.02), |c| c.is_set("dust_or_ash")),
            share(of(|c| c.truth.deserves("bad_spectrum") == Some(true)), |c| {
                c.is_set("bad_spectrum")
            }),
            share(of(sound), |c| c.is_set("bad_spectrum")),
            share(of(|_| true), |c| !c.evidence.assessed),
        ];
        let _ = writeln!(text, "| {} | {} |", granule.name, cells.join(" | "));
    }
    text
}

fn is_clear(case: &Case) -> bool {
    sound(case) && case.truth.far_from_cloud && case.truth.dust < 0.02
}

fn is_sea(case: &Case) -> bool {
    case.evidence.surface.as_deref() == Some("sea")
}

fn is_alarm(case: &Case) -> bool {
    case.is_cloud() || case.is_set("dust_or_ash")
}

fn sound(case: &Case) -> bool {
    case.truth.defects == 0
}

/// Hits, misses, false alarms, rightly left alone, by flag and surface.
fn confusion(granules: &[Granule]) -> String {
    let mut text = "\n| flag | surface | hit | missed | false alarm | rightly not set |\n\
        | --- | --- | --- | --- | --- | --- |\n"
        .to_owned();
    for flag in FLAGS {
        for surface in ["sea", "land", "snow"] {
            let mut counts = [0_usize; 4];
            for case in granules.iter().flat_map(|granule| &granule.cases) {
                let here = case.evidence.surface.as_deref() == Some(surface);
                if let (true, Some(truth)) = (here, case.truth.deserves(flag)) {
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
            let _ = writeln!(text, "| {flag} | {surface} | {hit} | {missed} | {alarm} | {right} |");
        }
    }
    text
}

/// Cases with a truth and a probability.
fn judged<'g>(granules: &'g [Granule], flag: &'g str) -> impl Iterator<Item = (f64, bool)> + 'g {
    granules.iter().flat_map(|granule| &granule.cases).filter_map(move |case| {
        let found = case.evidence.flags.iter().find(|one| one.flag == flag)?;
        Some((found.probability?, case.truth.deserves(flag)?))
    })
}

/// How often a flag holds where the tests give it a probability.
fn reliability(granules: &[Granule]) -> String {
    const EDGES: [f64; 8] = [0.0, 0.05, 0.2, 0.4, 0.6, 0.8, 0.95, 1.000_001];
    let mut text = "\n| flag | probability given | mean given | true | footprints |\n\
        | --- | --- | --- | --- | --- |\n"
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
            let _ = writeln!(text, "| {flag} | {range} | {given:.2} | {held:.2} | {count} |");
        }
    }
    text
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
