//! Placeholder until the panel of this name is drawn.

use super::action::Action;
use super::pictures::Pictures;
use super::state::State;

/// Draws the panel and pushes what the user did.
pub fn show(
    _ui: &mut egui::Ui,
    _state: &State,
    _pictures: &mut Pictures,
    _actions: &mut Vec<Action>,
) {
}
