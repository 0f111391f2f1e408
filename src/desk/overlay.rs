//! Overlays of the board: heat under the bodies; hatching, signs of tiles, reach of the fold and problems over them.
//!
//! What is from before the last edit is drawn fainter, as long as the board still has the same size; it would be worse to
//! flicker at each stroke of the brush.
//!
//! Signs on the board use the colours of the night in both themes: the pictures under them are the same by day and dark.

use super::board::Place;
use super::cividis::{cividis, heat_share};
use super::marks::hatch;
use super::state::State;
use super::theme::{Theme, counted, grouped};
use crate::level::{Cell, Dir};
use crate::study::TileClass;
use egui::{
    Align2, Color32, FontId, Mesh, Painter, Pos2, Rect, Shape, Stroke, StrokeKind, Vec2, pos2, vec2,
};

/// Opacity of the heat.
const HEAT_OPACITY: f32 = 0.55;
/// What is left of an opacity when the answer is from before the edit.
const STALE_OPACITY: f32 = 0.45;

fn theme_of(painter: &Painter) -> &'static Theme {
    Theme::for_dark(painter.ctx().theme() == egui::Theme::Dark)
}

/// Paints what lies between ground and bodies: the heat.
pub fn paint_under(painter: &Painter, state: &State, place: &Place) {
    let Some((heat, fresh)) = shown_heat(state) else {
        return;
    };
    let greatest = heat.iter().copied().max().unwrap_or(0);
    let opacity = if fresh {
        HEAT_OPACITY
    } else {
        HEAT_OPACITY * STALE_OPACITY
    };
    let mut mesh = Mesh::default();
    for cell in place.cells_in_view() {
        let count = heat[place.size.index(cell)];
        if count > 0 {
            let colour = cividis(heat_share(count, greatest)).gamma_multiply(opacity);
            mesh.add_colored_rect(place.rect(cell), colour);
        }
    }
    painter.add(mesh);
}

/// The heat that is to be shown, and whether it is of the level as it is now.
fn shown_heat(state: &State) -> Option<(&[u64], bool)> {
    let (revision, report) = state.answers.report()?;
    let fits = report.heat.len() == state.current().size.area();
    (state.show.heat && fits).then_some((&report.heat[..], state.is_fresh(revision)))
}

/// Paints what lies over the bodies, cells in view only.
pub fn paint(painter: &Painter, state: &State, place: &Place) {
    let theme = theme_of(painter);
    if state.show.idle_tiles {
        tiles(painter, state, place);
    }
    if state.show.fold_reach {
        reach(painter, state, place);
    }
    if state.show.problems {
        problems(painter, state, place);
    }
    legend(painter, state, place, theme);
}

fn shown_classes(state: &State) -> Option<(&[Option<TileClass>], bool)> {
    let tiles = state.answers.tiles.as_ref()?;
    let fits = tiles.value.classes.len() == state.current().size.area();
    (state.show.idle_tiles && fits)
        .then_some((&tiles.value.classes[..], state.is_fresh(tiles.revision)))
}

fn tiles(painter: &Painter, state: &State, place: &Place) {
    let Some((classes, fresh)) = shown_classes(state) else {
        return;
    };
    let (mechanics, level) = (state.mechanics(), state.current());
    let opacity = if fresh { 0.8 } else { 0.8 * STALE_OPACITY };
    let ink = Theme::DARK.muted.gamma_multiply(opacity);
    let stroke = Stroke::new((place.cell_points / 36.0).clamp(1.0, 1.8), ink);
    // A dark line under the light one keeps the hatching apart from bright heat as well.
    let shade = Theme::DARK.ground.gamma_multiply(opacity);
    let under = Stroke::new(stroke.width * 2.2, shade);
    for cell in place.cells_in_view() {
        let Some(class) = classes[place.size.index(cell)] else {
            continue;
        };
        let rect = place.rect(cell);
        match class {
            TileClass::CutOff if mechanics.ground(level.ground_at(cell)).closed_to_all() => {}
            TileClass::Idle | TileClass::CutOff => {
                let inner = rect.shrink(place.cell_points * 0.06);
                let gap = (place.cell_points / 5.0).max(4.0);
                let crossed = class == TileClass::CutOff;
                hatch(painter, inner, gap, under, crossed);
                hatch(painter, inner, gap, stroke, crossed);
            }
            TileClass::Vital | TileClass::Useful if place.cell_points >= 18.0 => {
                let side = (place.cell_points * 0.2).clamp(7.0, 13.0);
                let corner = Rect::from_min_size(rect.min + Vec2::splat(2.0), Vec2::splat(side));
                let mut faint = painter.clone();
                faint.multiply_opacity(if fresh { 1.0 } else { STALE_OPACITY });
                class_sign(&faint, corner, class, &Theme::DARK);
            }
            _ => {}
        }
    }
}

/// The sign of a tile class: a diamond for vital, a disc for useful, an empty square for furnished. Idle and cut-off tiles
/// are hatched instead, see [`hatch`].
pub fn class_sign(painter: &Painter, rect: Rect, class: TileClass, theme: &Theme) {
    let (centre, radius) = (rect.center(), rect.width() / 2.0);
    match class {
        TileClass::Vital => {
            let corners = [
                vec2(0.0, -1.0),
                vec2(1.0, 0.0),
                vec2(0.0, 1.0),
                vec2(-1.0, 0.0),
            ];
            let corners = corners
                .iter()
                .map(|&corner| centre + corner * radius)
                .collect();
            let edge = Stroke::new(1.0, theme.ground);
            painter.add(Shape::convex_polygon(corners, theme.amber, edge));
        }
        TileClass::Useful => {
            painter.circle(
                centre,
                radius * 0.8,
                theme.leaf,
                Stroke::new(1.0, theme.ground),
            );
        }
        TileClass::Furnished => {
            let square = Rect::from_center_size(centre, Vec2::splat(radius * 1.4));
            painter.rect_stroke(
                square,
                1.0,
                Stroke::new(1.5, theme.muted),
                StrokeKind::Inside,
            );
        }
        TileClass::Idle | TileClass::CutOff => {}
    }
}

fn reach(painter: &Painter, state: &State, place: &Place) {
    let Some(playback) = state
        .playback
        .as_ref()
        .filter(|playback| state.is_fresh(playback.revision))
    else {
        return;
    };
    if playback.reach.len() < 2 {
        return;
    }
    let stroke = Stroke::new(2.2, Theme::DARK.amber);
    outline(painter, place, &playback.reach, stroke, Some((7.0, 4.0)));
}

/// A line around a set of cells, dashed if lengths of dash and gap are given.
fn outline(
    painter: &Painter,
    place: &Place,
    cells: &[Cell],
    stroke: Stroke,
    dashes: Option<(f32, f32)>,
) {
    let mut inside = vec![false; place.size.area()];
    for &cell in cells.iter().filter(|&&cell| place.size.contains(cell)) {
        inside[place.size.index(cell)] = true;
    }
    let is_inside = |cell: Option<Cell>| cell.is_some_and(|cell| inside[place.size.index(cell)]);
    for cell in place.cells_in_view().filter(|&cell| is_inside(Some(cell))) {
        for dir in Dir::ALL {
            if !is_inside(place.size.neighbour(cell, dir)) {
                let ends = edge(place.rect(cell), dir);
                match dashes {
                    Some((dash, gap)) => {
                        painter.extend(Shape::dashed_line(&ends, stroke, dash, gap));
                    }
                    None => {
                        painter.line_segment(ends, stroke);
                    }
                }
            }
        }
    }
}

fn edge(rect: Rect, side: Dir) -> [Pos2; 2] {
    match side {
        Dir::N => [rect.left_top(), rect.right_top()],
        Dir::E => [rect.right_top(), rect.right_bottom()],
        Dir::S => [rect.left_bottom(), rect.right_bottom()],
        Dir::W => [rect.left_top(), rect.left_bottom()],
    }
}

fn problems(painter: &Painter, state: &State, place: &Place) {
    let coral = Theme::DARK.coral;
    for problem in &state.problems {
        for &cell in problem
            .cells
            .iter()
            .filter(|&&cell| place.size.contains(cell))
        {
            brackets(
                painter,
                place.rect(cell).shrink(2.0),
                Stroke::new(2.0, coral),
            );
        }
    }
    outline(painter, place, &state.marked, Stroke::new(3.0, coral), None);
}

/// Four corners of a frame.
fn brackets(painter: &Painter, rect: Rect, stroke: Stroke) {
    let arm = rect.width() * 0.26;
    for (corner, x, y) in [
        (rect.left_top(), 1.0, 1.0),
        (rect.right_top(), -1.0, 1.0),
        (rect.left_bottom(), 1.0, -1.0),
        (rect.right_bottom(), -1.0, -1.0),
    ] {
        let points = vec![
            corner + vec2(arm * x, 0.0),
            corner,
            corner + vec2(0.0, arm * y),
        ];
        painter.line(points, stroke);
    }
}

/// One line at the foot of the board: what the colours and signs in use mean, and the number under the pointer.
fn legend(painter: &Painter, state: &State, place: &Place, theme: &Theme) {
    let heat = shown_heat(state);
    let Some((heat, fresh)) = heat else {
        return;
    };
    let greatest = heat.iter().copied().max().unwrap_or(0);
    let size = place.size;
    let mut text = match state.hovered.filter(|&cell| size.contains(cell)) {
        Some(cell) => format!(
            "{} with the walker on ({}, {})",
            counted(heat[size.index(cell)], "position", "positions"),
            cell.x,
            cell.y
        ),
        None => "positions folded away, by tile".to_owned(),
    };
    if !fresh {
        text.push_str(" (before the edit)");
    }
    legend_line(
        painter,
        place.panel.shrink(6.0),
        &grouped(greatest),
        text,
        theme,
    );
}

/// "1 [gradient] GREATEST  WORDS" at the left foot of `room`.
fn legend_line(painter: &Painter, room: Rect, greatest: &str, words: String, theme: &Theme) {
    let laid = |text: String, colour: Color32| {
        painter.layout_no_wrap(text, FontId::proportional(11.5), colour)
    };
    let low = laid("1".to_owned(), theme.muted);
    let high = laid(greatest.to_owned(), theme.muted);
    let words = laid(words, theme.text);
    let (bar_width, gap) = (90.0, 7.0);
    let after_low = gap + low.size().x + gap;
    let after_bar = after_low + bar_width + gap;
    let after_high = after_bar + high.size().x + 2.0 * gap;
    let width = (after_high + words.size().x + gap).min(room.width());
    let back = Align2::LEFT_BOTTOM.align_size_within_rect(vec2(width, 24.0), room);
    painter.rect(back, 6.0, theme.panel, theme.hairline(), StrokeKind::Inside);
    let inside = painter.with_clip_rect(back.intersect(painter.clip_rect()));
    let middle = back.center().y;
    let bar = Rect::from_min_size(
        pos2(back.left() + after_low, middle - 5.0),
        vec2(bar_width, 10.0),
    );
    gradient(&inside, bar);
    for (galley, from) in [(low, gap), (high, after_bar), (words, after_high)] {
        let corner = pos2(back.left() + from, middle - galley.size().y / 2.0);
        inside.galley(corner, galley, theme.text);
    }
}

fn gradient(painter: &Painter, rect: Rect) {
    let mut mesh = Mesh::default();
    let steps = 30;
    for at in 0..=steps {
        let share = at as f32 / steps as f32;
        let x = rect.left() + rect.width() * share;
        mesh.colored_vertex(pos2(x, rect.top()), cividis(share));
        mesh.colored_vertex(pos2(x, rect.bottom()), cividis(share));
    }
    for at in 0..steps {
        let from = 2 * at;
        mesh.add_triangle(from, from + 1, from + 2);
        mesh.add_triangle(from + 1, from + 2, from + 3);
    }
    painter.add(mesh);
}
