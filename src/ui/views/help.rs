//! The help and the list of problems.

use crate::granule::{Problem, ProblemKind};
use crate::ui::app::App;
use crate::ui::colour::Tone;
use crate::ui::command;
use crate::ui::keys::{BINDINGS, Group};
use crate::ui::panes::help::HelpGroup;
use crate::ui::panes::messages::MessageRow;

/// The whole table of keys, those of the pane in focus first, and the commands that take words.
pub fn help_groups(app: &App) -> Vec<HelpGroup> {
    let mut order = Group::ALL;
    order.sort_by_key(|group| group.pane() != Some(app.focus()));
    let mut groups: Vec<HelpGroup> = order.into_iter().map(|group| of_group(app, group)).collect();
    groups.push(HelpGroup {
        title: "Commands behind :".to_owned(),
        rows: command::worded_help().map(|(typed, help)| (typed, help.to_owned())).collect(),
    });
    groups
}

fn of_group(app: &App, group: Group) -> HelpGroup {
    let bindings = BINDINGS.iter().filter(|binding| binding.group == group);
    // What settings left without a key is done by its name.
    let keys = |action| match app.keymap.text(action) {
        none if none.is_empty() => app.keymap.hint(action),
        keys => keys,
    };
    HelpGroup {
        title: group.title().to_owned(),
        rows: bindings.map(|binding| (keys(binding.action), binding.help.to_owned())).collect(),
    }
}

/// What is missing, guessed or odd in the file on the table, in its ledgers, and what could not be
/// opened at all.
pub fn problem_rows(app: &App) -> Vec<MessageRow> {
    let mut rows = Vec::new();
    if let Some(bench) = app.bench() {
        let granule = bench.review.granule();
        rows.extend(granule.problems().iter().map(of_file));
        rows.extend(bench.review.cube().notes().iter().map(of_file));
        let producer = &bench.review.producer().problems;
        rows.extend(producer.iter().map(|text| warning(text.clone())));
        rows.extend(bench.review.bases_problem().map(|text| warning(text.to_owned())));
        if let Some(record) = bench.record.open() {
            rows.extend(record.problems().iter().map(|text| warning(text.clone())));
            rows.extend(record.state().problems.iter().map(|text| warning(text.clone())));
        }
    }
    let settings = app.outside.campaign.settings();
    rows.extend(settings.problems.iter().map(|text| warning(text.clone())));
    rows.extend(app.keymap.problems().iter().map(|text| warning(text.clone())));
    let failed = app.tray.entries().iter().filter_map(|entry| {
        let text = format!("{}: {}", entry.name, entry.error.as_ref()?);
        Some(MessageRow { tone: Tone::Bad, text, advice: String::new() })
    });
    rows.extend(failed);
    rows
}

fn warning(text: String) -> MessageRow {
    MessageRow {
        tone: Tone::Warning,
        text: crate::system::clean_text(&text),
        advice: String::new(),
    }
}

fn of_file(problem: &Problem) -> MessageRow {
    let tone = match problem.kind {
        ProblemKind::Missing | ProblemKind::Guess | ProblemKind::Refused => Tone::Warning,
        ProblemKind::Note => Tone::Plain,
    };
    let mut text = format!("{}: {}", problem.kind.label(), problem.what);
    if !problem.where_.is_empty() {
        text += &format!(" ({})", problem.where_);
    }
    MessageRow { tone, text, advice: problem.advice.clone() }
}
