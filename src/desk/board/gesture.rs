//! Pointer gestures on the board, read event by event, so that a fast hand loses nothing between two frames.

use super::Place;
use crate::desk::action::Action;
use crate::desk::state::State;
use egui::{Event, Key, PointerButton, Pos2, Response, Ui};

/// How much one unit of wheel motion scales.
const ZOOM_PER_POINT: f32 = 1.0 / 240.0;

/// Painting: pointer down to pointer up, with the left button, and clearing with the right one.
pub fn pointer(ui: &Ui, board: &Response, state: &State, place: &Place, actions: &mut Vec<Action>) {
    let events: Vec<Event> = ui.input(|input| input.events.clone());
    let panning = ui.input(|input| input.key_down(Key::Space));
    let mut down = state.stroke.is_some();
    let mut last = state.stroke.as_ref().map(|stroke| stroke.to);
    for event in events {
        match event {
            Event::PointerButton {
                pos,
                button,
                pressed: true,
                ..
            } if !down && !panning && is_on_board(ui, board, pos) => {
                let clear = match button {
                    PointerButton::Primary => false,
                    PointerButton::Secondary => true,
                    _ => continue,
                };
                board.request_focus();
                if let Some(cell) = place.cell_at(pos) {
                    actions.push(Action::StrokeStart { cell, clear });
                    last = Some(cell);
                    down = true;
                }
            }
            Event::PointerMoved(pos) if down => {
                let cell = place.nearest_cell(pos);
                if last != Some(cell) {
                    actions.push(Action::StrokeMove(cell));
                    last = Some(cell);
                }
            }
            Event::PointerButton {
                button: PointerButton::Primary | PointerButton::Secondary,
                pressed: false,
                ..
            }
            | Event::PointerGone
                if down =>
            {
                actions.push(Action::StrokeEnd);
                down = false;
            }
            _ => {}
        }
    }
    // The release may have been lost to another window.
    if down && !ui.input(|input| input.pointer.any_down()) {
        actions.push(Action::StrokeEnd);
    }
}

/// Whether a press there is meant for the board: no dialog, menu or window lies above.
fn is_on_board(ui: &Ui, board: &Response, pos: Pos2) -> bool {
    board.rect.contains(pos)
        && ui.ctx().layer_id_at(pos) == Some(board.layer_id)
        && !egui::Popup::is_any_open(ui.ctx())
}

/// The wheel scales about the pointer; the middle button, or Space with the left one, moves the board.
pub fn zoom_and_pan(
    ui: &Ui,
    board: &Response,
    state: &State,
    place: &Place,
    actions: &mut Vec<Action>,
) {
    let (pointer, wheel, pinch, space) = ui.input(|input| {
        (
            input.pointer.hover_pos(),
            input.smooth_scroll_delta().y,
            input.zoom_delta(),
            input.key_down(Key::Space),
        )
    });
    let factor = (wheel * ZOOM_PER_POINT).exp() * pinch;
    if let Some(pointer) = pointer.filter(|_| board.hovered())
        && (factor - 1.0).abs() > 1e-4
    {
        actions.push(Action::SetView(place.zoomed_about(pointer, factor)));
    }
    let drags = board.dragged_by(PointerButton::Middle)
        || (space && state.stroke.is_none() && board.dragged_by(PointerButton::Primary));
    if drags && board.drag_delta() != egui::Vec2::ZERO {
        actions.push(Action::SetView(place.panned(board.drag_delta())));
    }
    if space && board.hovered() || board.dragged_by(PointerButton::Middle) {
        ui.ctx().set_cursor_icon(egui::CursorIcon::Grab);
    } else if board.hovered() {
        ui.ctx().set_cursor_icon(egui::CursorIcon::Crosshair);
    }
}
