//! What lies over the panes, drawn.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use crate::screening::Threshold;
use crate::ui::app::App;
use crate::ui::by_rule;
use crate::ui::overlay::{FlagPrompt, LinePrompt, Overlay, Purpose};
use crate::ui::panes::command::{self, CommandView, Completion};
use crate::ui::panes::help::{self, HelpView};
use crate::ui::panes::messages::{self, MessagesView};
use crate::ui::panes::prompt::{self, FlagChoice, PromptView};
use crate::ui::signing;

/// Draws the overlay over the screen; prompts of one line go to the command line.
pub fn draw_overlay(app: &App, screen: Rect, command_line: Rect, buffer: &mut Buffer) {
    let theme = &app.theme;
    match &app.overlay {
        Overlay::None => {}
        Overlay::Help(scroll) => {
            let groups = super::help_groups(app);
            let view = HelpView { title: "Keys and commands", groups: &groups, scroll: *scroll };
            help::draw(&view, theme, screen, buffer);
        }
        Overlay::Problems(scroll) => {
            with_problems(app, *scroll, |view| messages::draw(view, theme, screen, buffer));
        }
        Overlay::Line(prompt) => draw_line(app, prompt, screen, command_line, buffer),
        Overlay::Flags(prompt) => draw_flags(app, prompt, screen, buffer),
        Overlay::SignOff => {
            let lines = signing::summary(app);
            let view =
                PromptView::Answers { title: "Sign off: was the rest looked at?", lines: &lines };
            prompt::draw(&view, theme, screen, buffer);
        }
        Overlay::ByRule(offer) => {
            let lines = by_rule::lines(app, offer);
            let view = PromptView::Answers { title: "Sign off by rule?", lines: &lines };
            prompt::draw(&view, theme, screen, buffer);
        }
        Overlay::LeaveAnyway => {
            let lines = leave_lines(app);
            let view = PromptView::YesNo { title: "Leave all the same?", lines: &lines };
            prompt::draw(&view, theme, screen, buffer);
        }
    }
}

/// How many lines of the problems can be scrolled away.
pub fn last_problem_scroll(app: &App) -> usize {
    let Some(layout) = &app.layout else { return 0 };
    let screen = layout.screen();
    with_problems(app, 0, |view| messages::last_scroll(view, screen))
}

fn with_problems<R>(app: &App, scroll: usize, use_view: impl FnOnce(&MessagesView<'_>) -> R) -> R {
    use_view(&MessagesView {
        title: "Problems and guesses",
        rows: &super::problem_rows(app),
        scroll,
        empty: "nothing was missing, guessed or odd",
    })
}

fn draw_line(
    app: &App,
    prompt: &LinePrompt,
    screen: Rect,
    command_line: Rect,
    buffer: &mut Buffer,
) {
    let (text, cursor) = (prompt.line.text(), prompt.line.before_cursor().len());
    let lead = match &prompt.purpose {
        Purpose::Command => ":".to_owned(),
        Purpose::Side => match app.bench() {
            Some(bench) => format!("{} ", bench.layer.text),
            None => String::new(),
        },
        Purpose::Reason { flag, selection, .. } => {
            let title = format!("Why {flag} at {}?", selection.words);
            return draw_text(
                app,
                &title,
                prompt,
                "Enter without words gives no reason",
                screen,
                buffer,
            );
        }
        Purpose::Adopt => {
            let title = adopt_title(app);
            let hint = "kept in the campaign's ledger; Enter without words gives no reason";
            return draw_text(app, &title, prompt, hint, screen, buffer);
        }
        Purpose::Aside => {
            return draw_text(app, "Set aside: why?", prompt, "a reason is needed", screen, buffer);
        }
        Purpose::Comment(selection) => {
            let title = format!("Remark on {}", selection.words);
            return draw_text(app, &title, prompt, "kept in the ledger", screen, buffer);
        }
    };
    let completions: Vec<Completion> = prompt
        .completions
        .iter()
        .map(|text| Completion { text: text.clone(), help: String::new() })
        .collect();
    let view = CommandView {
        lead: &lead,
        text,
        cursor,
        completions: &completions,
        chosen: prompt.chosen,
        problem: &prompt.problem,
    };
    command::draw(&view, &app.theme, command_line, buffer);
}

/// What is about to change in the rulebook.
fn adopt_title(app: &App) -> String {
    let bench = app.bench();
    let test = bench.and_then(|bench| Some((bench.spread_test()?, bench.spread.x?)));
    let Some(((screened, place, way), to)) = test else { return String::new() };
    let name = &screened.rulebook.tests[place].name;
    match way.threshold {
        Threshold::Number(old) => format!("{name}: {to} in place of {old}: why?"),
        _ => format!("{name}: its threshold moved by {to}: why?"),
    }
}

fn draw_text(
    app: &App,
    title: &str,
    prompt: &LinePrompt,
    hint: &str,
    screen: Rect,
    buffer: &mut Buffer,
) {
    let (text, cursor) = (prompt.line.text(), prompt.line.before_cursor().len());
    let view = PromptView::Text { title, text, cursor, hint };
    prompt::draw(&view, &app.theme, screen, buffer);
}

fn draw_flags(app: &App, flags: &FlagPrompt, screen: Rect, buffer: &mut Buffer) {
    let vocabulary = &app.outside.campaign.settings().vocabulary;
    let choices: Vec<FlagChoice> = flags
        .flags
        .iter()
        .filter_map(|name| vocabulary.by_name(name))
        .map(|kind| FlagChoice {
            key: kind.key,
            glyph: kind.glyph,
            tint: kind.bit,
            name: kind.name.clone(),
            meaning: kind.meaning.clone(),
        })
        .collect();
    let verb = if flags.give { "Flag" } else { "Withdraw from" };
    let reason = if flags.with_reason { ", with a reason" } else { " (Tab: with a reason)" };
    let title = format!("{verb} {}{reason}", flags.selection.words);
    let view = PromptView::Flags { title: &title, choices: &choices, cursor: flags.cursor };
    prompt::draw(&view, &app.theme, screen, buffer);
}

fn leave_lines(app: &App) -> Vec<String> {
    if app.pending() == 0 {
        let under_way =
            app.across.as_ref().map_or_else(|| app.owed.words(), |across| across.words());
        let words = format!("still {under_way}");
        return vec![words, "y: leave and lose it   n: stay".to_owned()];
    }
    let mut lines = vec![format!("{} decisions could not be written:", app.pending())];
    let why = app.write_failure().unwrap_or("the disk does not answer");
    lines.extend(wrapped(why, 70));
    lines.push("y: leave and lose them   n: stay   r: try again".to_owned());
    lines
}

fn wrapped(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        match lines.last_mut() {
            Some(line) if line.len() + 1 + word.len() <= width => {
                line.push(' ');
                line.push_str(word);
            }
            _ => lines.push(word.to_owned()),
        }
    }
    lines
}
