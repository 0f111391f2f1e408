//! A position painted small: for the pictures of traits and the try-out bench.

use crate::desk::pictures::{Kind, Pictures};
use crate::level::{Cell, Size};
use crate::rules::View;
use egui::{Color32, Painter, Rect, Vec2, vec2};

/// The square of a cell of a board that fills `room` from its top left corner.
pub fn cell_rect(room: Rect, side: f32, cell: Cell) -> Rect {
    let corner = room.min + vec2(f32::from(cell.x), f32::from(cell.y)) * side;
    Rect::from_min_size(corner, Vec2::splat(side))
}

/// Paints a position with cells of `side` points.
pub fn paint_view(
    painter: &Painter,
    pictures: &mut Pictures,
    size: Size,
    view: &View,
    room: Rect,
    side: f32,
) {
    let at = |cell: Cell| cell_rect(room, side, cell);
    for cell in size.cells() {
        let place = size.index(cell);
        if let Some(&ground) = view.ground.get(place) {
            pictures.paint(painter, at(cell), Kind::Ground(ground), Color32::WHITE);
        }
        if let Some(&Some(item)) = view.items.get(place) {
            pictures.paint(painter, at(cell), Kind::Item(item), Color32::WHITE);
        }
    }
    for body in &view.bodies {
        pictures.paint_block(painter, body.kind, &body.cells, at, Color32::WHITE);
    }
}
