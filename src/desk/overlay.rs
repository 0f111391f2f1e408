//! Overlays of the board: heat, hatching, reach of the fold, problems.

use super::board::Place;
use super::state::State;

/// Paints all overlays that are shown over the board, cells in view only.
pub fn paint(_painter: &egui::Painter, _state: &State, _place: &Place) {}
