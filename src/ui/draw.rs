//! Drawing: reads the state and changes nothing.

use ratatui::Frame;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;

use super::app::App;
use super::overlay::Overlay;
use super::panes::status::{Hint, StatusView};
use super::panes::{self, ScreenLayout};
use super::views;

/// Draws the whole screen.
pub fn draw(app: &App, frame: &mut Frame<'_>) {
    draw_over(app, None, frame);
}

/// Draws the screen; while the cursor does not rest, panes that tell of the footprint under it keep
/// what they showed the last time.
pub fn draw_over(app: &App, last: Option<&Buffer>, frame: &mut Frame<'_>) {
    let screen = frame.area();
    let Some(layout) = ScreenLayout::of(screen, &app.panes) else {
        panes::draw_too_small(screen, frame.buffer_mut());
        return;
    };
    let buffer = frame.buffer_mut();
    for (pane, area) in layout.panes() {
        let kept = last.filter(|last| !app.rested && last.area == screen && pane.waits());
        match kept {
            Some(last) => keep(last, area, buffer),
            None => views::draw_pane(app, pane, area, buffer),
        }
    }
    draw_lines(app, &layout, buffer);
    views::draw_overlay(app, screen, layout.command, buffer);
}

/// Puts what an area showed the last time there again.
fn keep(last: &Buffer, area: Rect, buffer: &mut Buffer) {
    for place in area.positions() {
        if let (Some(cell), Some(before)) = (buffer.cell_mut(place), last.cell(place)) {
            cell.clone_from(before);
        }
    }
}

/// The status line, and the hints where no line is being typed.
fn draw_lines(app: &App, layout: &ScreenLayout, buffer: &mut Buffer) {
    let preview = views::side_preview(app);
    // What is being chosen matters more than what has been counted.
    let facts = preview.as_ref().map_or_else(|| views::status_facts(app), |_| Vec::new());
    let under = views::under_cursor(app);
    let (message, tone) = match &preview {
        Some(words) => (words.as_str(), super::colour::Tone::Strong),
        None if app.hovered.is_some() => {
            (app.hovered.as_deref().unwrap_or_default(), super::colour::Tone::Faint)
        }
        None if app.message.0.is_empty() => (under.as_str(), super::colour::Tone::Plain),
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
