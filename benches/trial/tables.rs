//! Tables of what came of the review.

use std::fmt::Write as _;
use std::time::Duration;

use radsieve::flags::Campaign;

use crate::agreement::Table;
use crate::desk::Granule;
use crate::review::Came;
use crate::reviewer::WRONG;
use crate::truth::FLAGS;

/// All tables.
pub fn all(granules: &[Granule], campaigns: (&Campaign, &Campaign), came: &Came) -> String {
    let mut text = format!("## Keys and time\n\n{}", effort(granules, came));
    let _ = write!(text, "\n## Agreement with truth\n\n{}", agreement(granules, campaigns));
    let _ = write!(text, "\n## Granule by granule\n\n{}", each(granules, campaigns, came));
    text
}

fn effort(granules: &[Granule], came: &Came) -> String {
    let sum = |of: fn((usize, usize)) -> usize| {
        granules.iter().map(|granule| of(granule.footprints())).sum::<usize>()
    };
    let (footprints, doubtful) = (sum(|(all, _)| all), sum(|(_, doubtful)| doubtful));
    let cases: usize = came.cases.iter().map(Vec::len).sum();
    let strokes: usize = came.hands.strokes.values().sum();
    let mut text = format!(
        "{} granules of {footprints} footprints, {doubtful} of them in doubt: {cases} cases decided, {} \
         of them wrongly ({:.0} % was the aim), with {strokes} keystrokes, {:.1} for each granule and \
         {:.2} for each case. From the first key to the last answer {:.0} s went by, {:.0} s of them waiting \
         for granules to be read and tested and the rest mostly for the screen to rest.\n\n",
        granules.len(),
        came.mistakes,
        100.0 * WRONG,
        strokes as f64 / granules.len() as f64,
        strokes as f64 / cases.max(1) as f64,
        came.wall.as_secs_f64(),
        came.waiting.as_secs_f64(),
    );
    text += "| keys | keystrokes | screen follows after, median | at worst |\n| --- | --- | --- | --- |\n";
    for (purpose, count) in &came.hands.strokes {
        let mut answers = came.hands.answers[purpose].clone();
        answers.sort();
        let milliseconds = |time: Duration| format!("{:.0} ms", 1e3 * time.as_secs_f64());
        let (median, worst) = (answers[answers.len() / 2], answers[answers.len() - 1]);
        let _ = writeln!(
            text,
            "| {purpose} | {count} | {} | {} |",
            milliseconds(median),
            milliseconds(worst)
        );
    }
    text
}

fn agreement(granules: &[Granule], campaigns: (&Campaign, &Campaign)) -> String {
    let mut text =
        "| what | footprints | tests alone | reviewed | kappa, tests alone | kappa, reviewed |\n\
        | --- | --- | --- | --- | --- | --- |\n"
            .to_owned();
    let sum = |of: &dyn Fn(&Granule, &Campaign) -> Table, campaign| {
        granules.iter().map(|granule| of(granule, campaign)).fold(Table::default(), |a, b| a + b)
    };
    let mut row = |what: &str, of: &dyn Fn(&Granule, &Campaign) -> Table| {
        let (before, after) = (sum(of, campaigns.0), sum(of, campaigns.1));
        let _ = writeln!(
            text,
            "| {what} | {} | {:.1} % | {:.1} % | {:.3} | {:.3} |",
            before.all(),
            100.0 * before.agreement(),
            100.0 * after.agreement(),
            before.kappa(),
            after.kappa(),
        );
    };
    row("usable, where the truth is plain", &|granule, campaign| {
        granule.usable(&granule.state(campaign)).0
    });
    row("usable, everywhere", &|granule, campaign| granule.usable(&granule.state(campaign)).1);
    for flag in FLAGS {
        row(&format!("`{flag}`"), &|granule, campaign| {
            granule.agreement(&granule.state(campaign), flag)
        });
    }
    text
}

fn each(granules: &[Granule], campaigns: (&Campaign, &Campaign), came: &Came) -> String {
    let mut text =
        "| granule | footprints | in doubt | cases | usable: kappa, tests alone | reviewed |\n\
        | --- | --- | --- | --- | --- | --- |\n"
            .to_owned();
    for (granule, cases) in granules.iter().zip(&came.cases) {
        let (all, doubtful) = granule.footprints();
        let kappa = |campaign: &Campaign| granule.usable(&granule.state(campaign)).1.kappa();
        let _ = writeln!(
            text,
            "| {} | {all} | {doubtful} | {} | {:.3} | {:.3} |",
            granule.name.trim_start_matches("synthetic_brindle_").trim_end_matches(".nc"),
            cases.len(),
            kappa(campaigns.0),
            kappa(campaigns.1),
        );
    }
    text
}
