//! The line at the bottom: what was done last, what is under the pointer, what the search is at.

use super::action::Action;
use super::keys::key_text;
use super::state::State;
use super::theme::{Theme, grouped};
use crate::level::Cell;
use egui::{Align, Label, Layout, RichText, Ui};

/// Draws the line.
pub fn show(ui: &mut Ui, state: &State) {
    let theme = Theme::of(ui);
    ui.horizontal(|ui| {
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.label(RichText::new(search_text(state)).small().color(theme.muted));
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                let text = [last_text(ui, state), hover_text(state)]
                    .into_iter()
                    .filter(|part| !part.is_empty())
                    .collect::<Vec<_>>()
                    .join("   |   ");
                ui.add(Label::new(RichText::new(text).small().color(theme.muted)).truncate());
            });
        });
    });
}

fn last_text(ui: &Ui, state: &State) -> String {
    match state.history.undo_label() {
        Some(label) if label == state.said => {
            let key = key_text(ui.ctx(), state, &Action::Undo).unwrap_or_default();
            format!("{label} · undo {key}")
        }
        _ => state.said.clone(),
    }
}

fn hover_text(state: &State) -> String {
    match state.hovered.or(state.cursor) {
        Some(cell) if state.current().size.contains(cell) => {
            format!("{}, {}: {}", cell.x, cell.y, what_is_at(state, cell))
        }
        _ => String::new(),
    }
}

/// What is on a cell of the level as it starts, from the ground up.
pub fn what_is_at(state: &State, cell: Cell) -> String {
    let (level, mechanics) = (state.current(), state.mechanics());
    let mut parts = vec![mechanics.ground(level.ground_at(cell)).label.as_str()];
    parts.extend(
        level
            .item_at(cell)
            .map(|ix| mechanics.item(ix).label.as_str()),
    );
    parts.extend(
        level
            .body_at(cell)
            .map(|ix| mechanics.body(ix).label.as_str()),
    );
    parts.join(", ")
}

fn search_text(state: &State) -> String {
    let fresh = |revision: u64| state.is_fresh(revision);
    if let Some((revision, report)) = state.answers.report()
        && fresh(revision)
    {
        let mut text = format!(
            "{} positions · {}",
            grouped(report.positions),
            bytes_text(report.bytes)
        );
        if let Some(tiles) = state
            .answers
            .tiles
            .as_ref()
            .filter(|tiles| fresh(tiles.revision))
            && !tiles.value.done
        {
            text = format!("{} tiles to ask · {text}", tiles.value.left);
        }
        return text;
    }
    match state
        .answers
        .progress
        .as_ref()
        .filter(|progress| fresh(progress.revision))
    {
        Some(progress) => {
            let progress = &progress.value;
            let speed = progress.positions as f64 / progress.seconds.max(1e-3);
            format!(
                "searching: {} positions, {} a second · {}",
                grouped(progress.positions),
                grouped(speed as u64),
                bytes_text(progress.bytes)
            )
        }
        None => String::new(),
    }
}

/// Bytes as people read them.
pub fn bytes_text(bytes: u64) -> String {
    match bytes {
        0..=1_048_575 => format!("{} KiB", bytes.div_ceil(1024)),
        _ => format!("{} MiB", bytes >> 20),
    }
}
