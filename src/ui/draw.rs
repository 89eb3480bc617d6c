//! Drawing: reads the state and changes nothing.

use ratatui::Frame;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::app::App;
use super::overlay::Overlay;
use super::panes::evidence::EvidenceView;
use super::panes::status::{Hint, StatusView};
use super::panes::{self, Pane, ScreenLayout};
use super::views::{self, FieldParts, TraceParts};

/// Draws the whole screen.
pub fn draw(app: &App, frame: &mut Frame<'_>) {
    let screen = frame.area();
    let Some(layout) = ScreenLayout::of(screen, app.zoomed) else {
        panes::draw_too_small(screen, frame.buffer_mut());
        return;
    };
    let buffer = frame.buffer_mut();
    draw_panes(app, &layout, buffer);
    draw_lines(app, &layout, buffer);
    views::draw_overlay(app, screen, layout.command, buffer);
}

fn draw_panes(app: &App, layout: &ScreenLayout, buffer: &mut Buffer) {
    let theme = &app.theme;
    if let Some(area) = layout.tray {
        views::draw_tray(app, area, buffer);
    }
    if let Some(area) = layout.field {
        let parts = FieldParts::of(app);
        panes::field::draw(&parts.view(app), theme, area, buffer);
    }
    if let Some(area) = layout.evidence {
        draw_evidence(app, area, buffer);
    }
    if let Some(area) = layout.trace {
        let parts = TraceParts::of(app);
        parts.with_view(app, |view| panes::trace::draw(view, theme, area, buffer));
    }
}

fn draw_evidence(app: &App, area: Rect, buffer: &mut Buffer) {
    let rows = views::evidence_rows(app);
    let title = app.bench().map(|bench| bench.position_words(bench.cursor)).unwrap_or_default();
    let view = EvidenceView {
        title: &title,
        rows: &rows,
        scroll: app.evidence_scroll,
        focused: app.focus == Pane::Evidence,
    };
    panes::evidence::draw(&view, &app.theme, area, buffer);
}

/// The status line, and the hints where no line is being typed.
fn draw_lines(app: &App, layout: &ScreenLayout, buffer: &mut Buffer) {
    let preview = views::side_preview(app);
    // What is being chosen matters more than what has been counted.
    let facts = preview.as_ref().map_or_else(|| views::status_facts(app), |_| Vec::new());
    let (message, tone) = match &preview {
        Some(words) => (words.as_str(), super::colour::Tone::Strong),
        None => (app.message.0.as_str(), app.message.1),
    };
    let view = StatusView { message, tone, facts: &facts };
    panes::status::draw(&view, &app.theme, layout.status, buffer);
    if matches!(app.overlay, Overlay::Line(_)) {
        return;
    }
    let hints = views::hints(app);
    let hints: Vec<Hint<'_>> = hints.iter().map(|(key, does)| Hint { key, does }).collect();
    panes::status::draw_hints(&hints, &app.theme, layout.command, buffer);
}
