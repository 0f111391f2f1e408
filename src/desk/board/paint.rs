//! Drawing the level: grounds as one mesh a kind, then items and bodies, then the marks of hand and keyboard.

use super::Place;
use crate::desk::overlay;
use crate::desk::pictures::{Kind, Pictures};
use crate::desk::state::{Brush, State};
use crate::desk::theme::Theme;
use crate::level::{BodyIx, Cell, GroundIx, ItemIx};
use egui::{Color32, Painter, Rect, Shape, Stroke, StrokeKind};

/// Below this side of a cell, in points, no grid is drawn.
const LEAST_GRID_POINTS: f32 = 14.0;

/// What is drawn: the level as it starts, or a position on the trail.
struct Scene<'a> {
    ground: &'a [GroundIx],
    items: &'a [Option<ItemIx>],
    bodies: Vec<(BodyIx, Vec<Cell>)>,
}

/// Draws grounds, items and bodies of the position that is shown, cells in view only.
pub fn level(painter: &Painter, state: &State, pictures: &mut Pictures, place: &Place) {
    let scene = scene(state);
    let size = state.current().size;
    let mut grounds: Vec<(GroundIx, Vec<Rect>)> = Vec::new();
    for cell in place.cells_in_view() {
        let ground = scene.ground[size.index(cell)];
        match grounds.iter_mut().find(|(kind, _)| *kind == ground) {
            Some((_, rects)) => rects.push(place.rect(cell)),
            None => grounds.push((ground, vec![place.rect(cell)])),
        }
    }
    for (ground, rects) in &grounds {
        pictures.paint_all(painter, rects, Kind::Ground(*ground), Color32::WHITE);
    }
    grid(painter, place);
    overlay::paint_under(painter, state, place);
    for cell in place.cells_in_view() {
        if let Some(item) = scene.items[size.index(cell)] {
            pictures.paint(painter, place.rect(cell), Kind::Item(item), Color32::WHITE);
        }
    }
    let seen = place.panel;
    for (kind, cells) in &scene.bodies {
        if cells.iter().any(|&cell| place.rect(cell).intersects(seen)) {
            pictures.paint_block(
                painter,
                *kind,
                cells,
                |cell| place.rect(cell),
                Color32::WHITE,
            );
        }
    }
}

fn scene(state: &State) -> Scene<'_> {
    let level = state.current();
    let moved = state
        .playback
        .as_ref()
        .filter(|playback| playback.at > 0 && state.is_fresh(playback.revision));
    match moved {
        Some(playback) => {
            let view = playback.view();
            Scene {
                ground: &view.ground,
                items: &view.items,
                bodies: view
                    .bodies
                    .iter()
                    .map(|body| (body.kind, body.cells.clone()))
                    .collect(),
            }
        }
        None => Scene {
            ground: &level.ground,
            items: &level.items,
            bodies: level
                .bodies_in_order()
                .into_iter()
                .map(|body| (body.kind, body.cells))
                .collect(),
        },
    }
}

fn grid(painter: &Painter, place: &Place) {
    if place.cell_points < LEAST_GRID_POINTS {
        return;
    }
    let whole = place.level_rect();
    let seen = whole.intersect(place.panel);
    let stroke = Stroke::new(1.0, Color32::from_black_alpha(46));
    let mut lines = Vec::new();
    for x in 0..=place.size.width() {
        let at = whole.left() + x as f32 * place.cell_points;
        if seen.x_range().contains(at) {
            lines.push(Shape::vline(at, seen.y_range(), stroke));
        }
    }
    for y in 0..=place.size.height() {
        let at = whole.top() + y as f32 * place.cell_points;
        if seen.y_range().contains(at) {
            lines.push(Shape::hline(seen.x_range(), at, stroke));
        }
    }
    painter.extend(lines);
}

/// Marks of the gesture under way and of the keyboard cursor.
pub fn marks(
    painter: &Painter,
    theme: &Theme,
    state: &State,
    pictures: &mut Pictures,
    place: &Place,
) {
    if let Some(stroke) = &state.stroke {
        for cell in stroke.preview() {
            let rect = place.rect(cell);
            if let Some(kind) = Kind::of(stroke.brush) {
                pictures.paint(painter, rect, kind, Color32::from_white_alpha(190));
            }
            painter.rect_stroke(
                rect,
                0.0,
                (1.5, mark_colour(theme, stroke.brush)),
                StrokeKind::Inside,
            );
        }
    }
    if let Some(cursor) = state.cursor {
        let rect = place.rect(cursor);
        painter.rect_stroke(rect, 2.0, (4.0, theme.ground), StrokeKind::Outside);
        painter.rect_stroke(rect, 2.0, (2.5, theme.amber), StrokeKind::Outside);
    }
}

/// Outlines the cell under the pointer.
pub fn hovered(painter: &Painter, theme: &Theme, state: &State, place: &Place, cell: Cell) {
    if state.stroke.is_none() {
        let colour = mark_colour(theme, state.brush);
        painter.rect_stroke(place.rect(cell), 1.0, (1.5, colour), StrokeKind::Inside);
    }
}

fn mark_colour(theme: &Theme, brush: Brush) -> Color32 {
    if brush == Brush::Clear {
        theme.coral
    } else {
        theme.amber
    }
}
