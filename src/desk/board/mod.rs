//! The level in the middle of the desk: drawing it and painting on it.

mod gesture;
mod paint;
mod place;

use super::action::Action;
use super::pictures::Pictures;
use super::state::State;
use super::theme::Theme;
use crate::level::Cell;
use egui::{Event, Key, Modifiers, Rect, Role, Sense, Ui, WidgetInfo};

pub use place::Place;

/// What of the board is to be remembered for the next frame.
#[derive(Clone, Copy, Debug)]
pub struct Shown {
    /// Where the level lies.
    pub place: Place,
    /// The cell under the pointer.
    pub hovered: Option<Cell>,
}

/// Draws the board and pushes what the user did on it.
pub fn show(
    ui: &mut Ui,
    state: &State,
    pictures: &mut Pictures,
    actions: &mut Vec<Action>,
) -> Shown {
    let theme = Theme::of(ui);
    let rect = ui.available_rect_before_wrap();
    let id = ui.make_persistent_id("board");
    let response = ui.interact(rect, id, Sense::click_and_drag());
    ui.advance_cursor_after_rect(rect);
    response.widget_info(|| WidgetInfo::labeled(Role::Canvas, true, board_label(state)));

    let painter = ui.painter_at(rect);
    painter.rect_filled(rect, 0.0, theme.ground);
    let place = place_in(state, rect, ui.pixels_per_point());
    paint::level(&painter, state, pictures, &place);
    super::overlay::paint(&painter, state, &place);
    paint::marks(&painter, theme, state, pictures, &place);

    let pointer = ui.input(|input| input.pointer.hover_pos());
    let hovered = pointer
        .filter(|&at| response.hovered() && rect.contains(at))
        .and_then(|at| place.cell_at(at));
    if let Some(cell) = hovered {
        paint::hovered(&painter, theme, state, &place, cell);
    }
    gesture::pointer(ui, &response, state, &place, actions);
    gesture::zoom_and_pan(ui, &response, state, &place, actions);
    if state.dialog.is_none() && !ui.ctx().text_edit_focused() {
        keyboard(ui, &response, state, actions);
    }
    Shown { place, hovered }
}

fn place_in(state: &State, rect: Rect, pixels_per_point: f32) -> Place {
    let size = state.current().size;
    match state.view {
        Some(view) => Place::of(view, size, rect, pixels_per_point),
        None => Place::fit(size, rect, pixels_per_point),
    }
}

fn board_label(state: &State) -> String {
    let size = state.current().size;
    format!("board, {} by {} cells", size.width(), size.height())
}

/// Arrows move the cursor, Space and Enter paint there, unless another part of the window has the keyboard.
fn keyboard(ui: &Ui, board: &egui::Response, state: &State, actions: &mut Vec<Action>) {
    let owner = ui.memory(|memory| memory.focused());
    if owner.is_some() && owner != Some(board.id) {
        return;
    }
    if board.has_focus() {
        let filter = egui::EventFilter {
            horizontal_arrows: true,
            vertical_arrows: true,
            ..egui::EventFilter::default()
        };
        ui.memory_mut(|memory| memory.set_focus_lock_filter(board.id, filter));
    }
    let arrows = [
        (Key::ArrowLeft, (-1, 0)),
        (Key::ArrowRight, (1, 0)),
        (Key::ArrowUp, (0, -1)),
        (Key::ArrowDown, (0, 1)),
    ];
    let pointer_down = ui.input(|input| input.pointer.any_down());
    for (key, (dx, dy)) in arrows {
        for _ in 0..presses(ui, key) {
            actions.push(Action::MoveCursor(dx, dy));
        }
    }
    if state.cursor.is_none() || pointer_down {
        return;
    }
    if presses(ui, Key::Space) + presses(ui, Key::Enter) > 0 {
        actions.push(Action::PaintAtCursor { clear: false });
    }
    if presses(ui, Key::Backspace) + presses(ui, Key::Delete) > 0 {
        actions.push(Action::PaintAtCursor { clear: true });
    }
    if presses(ui, Key::Escape) > 0 {
        actions.push(Action::HideCursor);
    }
}

/// How often a key went down in this frame, without Ctrl and the like; held keys repeat.
fn presses(ui: &Ui, wanted: Key) -> usize {
    ui.input(|input| {
        input
            .events
            .iter()
            .filter(|event| {
                matches!(event, Event::Key { key, pressed: true, modifiers, .. }
                    if *key == wanted && *modifiers == Modifiers::NONE)
            })
            .count()
    })
}
