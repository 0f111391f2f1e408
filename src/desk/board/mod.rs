//! The level in the middle of the desk: drawing it and painting on it.

mod place;

use super::action::Action;
use super::pictures::{Kind, Pictures};
use super::state::State;
use egui::{Color32, Sense};

pub use place::Place;

/// Draws the board and pushes what the user did on it. Returns where it lies.
pub fn show(
    ui: &mut egui::Ui,
    state: &State,
    pictures: &mut Pictures,
    actions: &mut Vec<Action>,
) -> Place {
    let _ = actions;
    let (response, painter) = ui.allocate_painter(ui.available_size(), Sense::click_and_drag());
    let size = state.current().size;
    let scale = ui.ctx().pixels_per_point();
    let place = match state.view {
        Some(view) => Place::of(view, size, response.rect, scale),
        None => Place::fit(size, response.rect, scale),
    };
    for cell in place.cells_in_view() {
        let kind = Kind::Ground(state.current().ground_at(cell));
        pictures.paint(&painter, place.rect(cell), kind, Color32::WHITE);
    }
    super::overlay::paint(&painter, state, &place);
    place
}
