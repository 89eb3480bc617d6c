//! Every pane at every size: odd sizes and odd texts must not break a screen.

use proptest::prelude::*;
use ratatui::layout::Rect;

use super::command::{self, CommandView, Completion};
use super::evidence::{self, EvidenceRow, EvidenceView};
use super::margin_bar::MarginBar;
use super::messages::{self, MessageRow, MessagesView};
use super::prompt::{self, FlagChoice, PromptView};
use super::status::{self, Hint, StatusView};
use super::tray::{self, TrayRow, TrayShares, TrayState, TrayView};
use crate::ui::colour::{ColourDepth, Theme, Tone};
use crate::ui::widgets::{Screen, THEME};

/// A screen and an area that may reach beyond it.
fn places() -> impl Strategy<Value = (u16, u16, Rect)> {
    (0u16..250, 0u16..80, 0u16..60, 0u16..30, 0u16..250, 0u16..80).prop_map(
        |(width, height, x, y, columns, rows)| (width, height, Rect::new(x, y, columns, rows)),
    )
}

fn themes() -> impl Strategy<Value = Theme> {
    (any::<bool>(), any::<bool>()).prop_map(|(ascii, plain)| Theme {
        depth: if plain { ColourDepth::None } else { ColourDepth::Indexed },
        ascii,
        ..THEME
    })
}

/// Texts with letters of two columns, of none, and of many bytes.
fn texts() -> impl Strategy<Value = String> {
    prop_oneof!["\\PC{0,30}", "[a-z ]{0,80}", Just("輝度温度 ".repeat(9)), Just(String::new())]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(96))]

    #[test]
    fn tray(
        (width, height, area) in places(), theme in themes(), name in texts(),
        count in 0usize..40, cursor in 0usize..50, share: f64, focused: bool,
    ) {
        let shares = Some(TrayShares { flagged: share, no_flag: share, not_assessed: share, in_doubt: Some(share) });
        let row = TrayRow { state: TrayState::InHand, name, shares, note: String::new() };
        let rows = vec![row; count];
        let view = TrayView { rows: &rows, current: cursor / 2, cursor, focused };
        let mut screen = Screen::new(width, height);
        tray::draw(&view, &theme, area, &mut screen.buffer);
        tray::row_at(&view, area, area.x, area.y.saturating_add(1));
    }

    #[test]
    fn evidence(
        (width, height, area) in places(), theme in themes(), text in texts(), scroll: usize,
    ) {
        let fact = EvidenceRow::Fact {
            label: text.clone(),
            value: text.clone(),
            unit: text.clone(),
            note: text.clone(),
            tone: Tone::Warning,
        };
        let bar = MarginBar {
            label: text.clone(),
            margin: scroll as f64 / 1e19 - 0.9,
            value: text.clone(),
            note: text.clone(),
        };
        let rows = [
            EvidenceRow::Section(text.clone()),
            fact,
            EvidenceRow::Margin(bar),
            EvidenceRow::Words(text.clone(), Tone::Bad),
        ];
        let view = EvidenceView { title: &text, rows: &rows, scroll, focused: true, detailed: true };
        let mut screen = Screen::new(width, height);
        evidence::draw(&view, &theme, area, &mut screen.buffer);
    }

    #[test]
    fn status_and_hints((width, height, area) in places(), theme in themes(), text in texts()) {
        let facts = [(text.clone(), Tone::Good), (text.clone(), Tone::Plain)];
        let view = StatusView { message: &text, tone: Tone::Bad, facts: &facts };
        let mut screen = Screen::new(width, height);
        status::draw(&view, &theme, area, &mut screen.buffer);
        let hints = [Hint { key: &text, does: &text }; 3];
        status::draw_hints(&hints, &theme, area, &mut screen.buffer);
    }

    #[test]
    fn command_line(
        (width, height, area) in places(), theme in themes(), text in texts(),
        cursor in 0usize..200, chosen in prop::option::of(0usize..20), count in 0usize..15,
    ) {
        let completions = vec![Completion { text: text.clone(), help: text.clone() }; count];
        let view = CommandView {
            lead: ":",
            text: &text,
            cursor,
            completions: &completions,
            chosen,
            problem: &text,
        };
        let mut screen = Screen::new(width, height);
        command::draw(&view, &theme, area, &mut screen.buffer);
    }

    #[test]
    fn prompts_and_messages(
        (width, height, area) in places(), theme in themes(), text in texts(),
        cursor in 0usize..200, scroll: usize,
    ) {
        let choice = FlagChoice {
            key: 'c',
            glyph: 'C',
            tint: cursor as u8,
            name: text.clone(),
            meaning: text.clone(),
        };
        let choices = vec![choice; 9];
        let lines = [text.clone(), text.clone()];
        let mut screen = Screen::new(width, height);
        for view in [
            PromptView::Flags { title: &text, choices: &choices, cursor },
            PromptView::Text { title: &text, text: &text, cursor, hint: &text },
            PromptView::YesNo { title: &text, lines: &lines },
        ] {
            prompt::draw(&view, &theme, area, &mut screen.buffer);
        }
        let rows = [MessageRow { tone: Tone::Plain, text: text.clone(), advice: text.clone() }];
        let view = MessagesView { title: &text, rows: &rows, scroll, empty: &text };
        messages::draw(&view, &theme, area, &mut screen.buffer);
    }
}
