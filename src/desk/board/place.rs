//! Where the cells of the level lie on the screen.

use crate::desk::state::BoardView;
use crate::level::{Cell, Size};
use egui::{Pos2, Rect, Vec2, pos2, vec2};

/// Maps cells to the screen and back, for one frame.
#[derive(Clone, Copy, Debug)]
pub struct Place {
    /// Size of the level.
    pub size: Size,
    /// The part of the window that the board may use.
    pub panel: Rect,
    /// Top left corner of cell (0, 0), on a whole pixel.
    pub origin: Pos2,
    /// Side of a cell, in points; a whole number of pixels.
    pub cell_points: f32,
    /// The side that was asked for, before it was cut to whole pixels: zooming in small steps adds up in it.
    asked_points: f32,
    pixels_per_point: f32,
}

/// The side of a cell in whole pixels, at least one.
fn snapped(points: f32, pixels_per_point: f32) -> f32 {
    (points * pixels_per_point + 0.001).floor().max(1.0) / pixels_per_point
}

impl Place {
    /// The place of a level so that all of it is seen.
    pub fn fit(size: Size, panel: Rect, pixels_per_point: f32) -> Place {
        let margin = 16.0;
        let room = (panel.size() - Vec2::splat(2.0 * margin)).max(Vec2::splat(8.0));
        let cell = (room.x / size.width() as f32).min(room.y / size.height() as f32);
        let view = BoardView {
            cell_points: cell.min(96.0),
            centre: (size.width() as f32 / 2.0, size.height() as f32 / 2.0),
        };
        Place::of(view, size, panel, pixels_per_point)
    }

    /// The place that a view asks for.
    pub fn of(view: BoardView, size: Size, panel: Rect, pixels_per_point: f32) -> Place {
        let to_pixel = |points: f32| (points * pixels_per_point).round() / pixels_per_point;
        let cell_points = snapped(view.cell_points, pixels_per_point);
        let centre = vec2(view.centre.0, view.centre.1) * cell_points;
        let corner = panel.center() - centre;
        Place {
            size,
            panel,
            origin: pos2(to_pixel(corner.x), to_pixel(corner.y)),
            cell_points,
            asked_points: view.cell_points,
            pixels_per_point,
        }
    }

    /// The view that this place shows.
    pub fn view(&self) -> BoardView {
        let centre = (self.panel.center() - self.origin) / self.cell_points;
        BoardView {
            cell_points: self.asked_points,
            centre: (centre.x, centre.y),
        }
    }

    /// The view when the board is moved by this much.
    pub fn panned(&self, by: Vec2) -> BoardView {
        let centre = (self.panel.center() - self.origin - by) / self.cell_points;
        let within = |at: f32, side: usize| at.clamp(0.0, side as f32);
        BoardView {
            cell_points: self.asked_points,
            centre: (
                within(centre.x, self.size.width()),
                within(centre.y, self.size.height()),
            ),
        }
    }

    /// The square of a cell.
    pub fn rect(&self, cell: Cell) -> Rect {
        let corner = self.origin + vec2(f32::from(cell.x), f32::from(cell.y)) * self.cell_points;
        Rect::from_min_size(corner, Vec2::splat(self.cell_points))
    }

    /// The rectangle of the whole level.
    pub fn level_rect(&self) -> Rect {
        let side = vec2(self.size.width() as f32, self.size.height() as f32);
        Rect::from_min_size(self.origin, side * self.cell_points)
    }

    /// The cell at a point of the screen, if it is on the level.
    pub fn cell_at(&self, point: Pos2) -> Option<Cell> {
        let at = ((point - self.origin) / self.cell_points).floor();
        let inside = at.x >= 0.0
            && at.y >= 0.0
            && (at.x as usize) < self.size.width()
            && (at.y as usize) < self.size.height();
        inside.then(|| Cell::new(at.x as u8, at.y as u8))
    }

    /// The cell of the level that is nearest to a point of the screen.
    pub fn nearest_cell(&self, point: Pos2) -> Cell {
        let at = ((point - self.origin) / self.cell_points).floor();
        let within = |at: f32, side: usize| at.clamp(0.0, side as f32 - 1.0) as u8;
        Cell::new(
            within(at.x, self.size.width()),
            within(at.y, self.size.height()),
        )
    }

    /// The cells that can be seen, row by row.
    pub fn cells_in_view(&self) -> impl Iterator<Item = Cell> + use<> {
        let seen = self.panel.intersect(self.level_rect());
        let (first, last) = if seen.is_positive() {
            (
                self.nearest_cell(seen.min),
                self.nearest_cell(seen.max - vec2(0.01, 0.01)),
            )
        } else {
            (Cell::new(1, 1), Cell::new(0, 0))
        };
        (first.y..=last.y).flat_map(move |y| (first.x..=last.x).map(move |x| Cell::new(x, y)))
    }

    /// Logs where the board lies, in pixels of the window, whenever that changes; for tests that drive the real window.
    pub fn log_when_changed(&self, ctx: &egui::Context) {
        if !log::log_enabled!(target: "foldwright::geometry", log::Level::Debug) {
            return;
        }
        let scale = ctx.pixels_per_point();
        let text = format!(
            "board origin {:.0} {:.0} cell {:.0}",
            self.origin.x * scale,
            self.origin.y * scale,
            self.cell_points * scale
        );
        let last = egui::Id::unique("logged-board-place");
        if ctx.data(|data| data.get_temp::<String>(last)).as_ref() != Some(&text) {
            log::debug!(target: "foldwright::geometry", "{text}");
            ctx.data_mut(|data| data.insert_temp(last, text));
        }
    }

    /// The view when the scale is multiplied by `factor` and the level stays put under `point`.
    pub fn zoomed_about(&self, point: Pos2, factor: f32) -> BoardView {
        let limits = crate::desk::execute::CELL_POINTS;
        let asked = (self.asked_points * factor).clamp(*limits.start(), *limits.end());
        let under = (point - self.origin) / self.cell_points;
        let side = snapped(asked, self.pixels_per_point);
        let centre = under + (self.panel.center() - point) / side;
        BoardView {
            cell_points: asked,
            centre: (centre.x, centre.y),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn place(view: BoardView) -> Place {
        let size = Size::new(20, 10).expect("a size");
        let panel = Rect::from_min_size(pos2(100.0, 50.0), vec2(800.0, 500.0));
        Place::of(view, size, panel, 1.0)
    }

    #[test]
    fn what_is_under_the_pointer_stays_under_it_when_zooming() {
        let before = place(BoardView {
            cell_points: 30.0,
            centre: (10.0, 5.0),
        });
        for factor in [0.7, 1.01, 1.3, 2.0] {
            let pointer = pos2(333.0, 222.0);
            let after = place(before.zoomed_about(pointer, factor));
            let under = |place: &Place| (pointer - place.origin) / place.cell_points;
            let moved = (under(&before) - under(&after)).length() * after.cell_points;
            // The origin is on whole pixels.
            assert!(moved <= 1.0, "{factor}: {moved}");
        }
    }

    #[test]
    fn small_steps_of_zooming_add_up() {
        let mut now = place(BoardView {
            cell_points: 30.0,
            centre: (10.0, 5.0),
        });
        for _ in 0..100 {
            now = place(now.zoomed_about(pos2(500.0, 300.0), 1.01));
        }
        assert!((now.cell_points - 30.0 * 1.01_f32.powi(100)).abs() < 1.5);
    }

    #[test]
    fn cells_and_points_agree() {
        let size = Size::new(64, 64).expect("a size");
        let panel = Rect::from_min_size(pos2(0.0, 0.0), vec2(640.0, 480.0));
        let place = Place::fit(size, panel, 1.5);
        for cell in size.cells() {
            assert_eq!(place.cell_at(place.rect(cell).center()), Some(cell));
            assert!(panel.contains_rect(place.rect(cell)));
        }
        assert_eq!(place.cells_in_view().count(), 64 * 64);
        assert_eq!(place.cell_at(pos2(1.0, 1.0)), None);
    }

    #[test]
    fn only_cells_in_view_are_named() {
        let zoomed = place(BoardView {
            cell_points: 100.0,
            centre: (10.0, 5.0),
        });
        let seen = zoomed.cells_in_view().count();
        assert!((40..=60).contains(&seen), "{seen}");
        let away = place(BoardView {
            cell_points: 30.0,
            centre: (500.0, 5.0),
        });
        assert_eq!(away.cells_in_view().count(), 0);
    }
}
