//! Changing a level: what a brush does to cells, and which cells a brush shape covers.

use super::grid::{Cell, Dir, Size};
use super::kinds::{BodyIx, GroundIx, ItemIx, Mechanics};
use super::pack::Level;

/// What is painted.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Brush {
    /// This ground. Ground that is closed to everything takes body and item away.
    Ground(GroundIx),
    /// This body. Ground that is closed to everything gives way to plain ground.
    Body(BodyIx),
    /// This item. Ground that is closed to everything gives way to plain ground.
    Item(ItemIx),
    /// Takes body and item away (of a block only the cell); where there are none, makes the ground plain.
    Clear,
}

impl Level {
    /// Paints `brush` on each of `cells` that is on the board.
    pub fn paint(
        &mut self,
        mechanics: &Mechanics,
        brush: Brush,
        cells: impl IntoIterator<Item = Cell>,
    ) {
        for cell in cells {
            if self.size.contains(cell) {
                self.paint_cell(mechanics, brush, cell);
            }
        }
    }

    fn paint_cell(&mut self, mechanics: &Mechanics, brush: Brush, cell: Cell) {
        let at = self.size.index(cell);
        match brush {
            Brush::Ground(ground) => {
                self.ground[at] = ground;
                if mechanics.ground(ground).closed_to_all() {
                    self.take_body(cell);
                    self.items[at] = None;
                }
            }
            Brush::Body(body) => {
                self.take_body(cell);
                self.bodies[at] = Some(body);
                self.open(mechanics, at);
            }
            Brush::Item(item) => {
                self.items[at] = Some(item);
                self.open(mechanics, at);
            }
            Brush::Clear => {
                let had_body = self.cut_block(cell) || self.take_body(cell);
                let had_item = self.items[at].take().is_some();
                if !had_body && !had_item {
                    self.ground[at] = plain_ground(mechanics).unwrap_or(self.ground[at]);
                }
            }
        }
    }

    /// Takes the body (a whole block, if it is one) off a cell. Returns whether there was one.
    pub fn take_body(&mut self, cell: Cell) -> bool {
        let single = self.bodies[self.size.index(cell)].take().is_some();
        let block = self
            .block_at(cell)
            .map(|at| self.blocks.remove(at))
            .is_some();
        single || block
    }

    fn open(&mut self, mechanics: &Mechanics, at: usize) {
        if mechanics.ground(self.ground[at]).closed_to_all() {
            self.ground[at] = plain_ground(mechanics).unwrap_or(self.ground[at]);
        }
    }
}

/// The first ground without any trait.
fn plain_ground(mechanics: &Mechanics) -> Option<GroundIx> {
    mechanics
        .grounds
        .iter()
        .position(super::kinds::GroundKind::is_plain)
        .map(|at| GroundIx(at as u16))
}

/// The cells of a straight line from `from` to `to`, both ends included (Bresenham 1965).
pub fn line_cells(from: Cell, to: Cell) -> Vec<Cell> {
    let (mut x, mut y) = (i32::from(from.x), i32::from(from.y));
    let (end_x, end_y) = (i32::from(to.x), i32::from(to.y));
    let (dx, dy) = ((end_x - x).abs(), -(end_y - y).abs());
    let (step_x, step_y) = ((end_x - x).signum(), (end_y - y).signum());
    let mut error = dx + dy;
    let mut cells = vec![from];
    while (x, y) != (end_x, end_y) {
        let doubled = 2 * error;
        if doubled >= dy {
            error += dy;
            x += step_x;
        }
        if doubled <= dx {
            error += dx;
            y += step_y;
        }
        cells.push(Cell::new(x as u8, y as u8));
    }
    cells
}

/// The cells of the rectangle that has `from` and `to` at opposite corners, filled.
pub fn box_cells(from: Cell, to: Cell) -> Vec<Cell> {
    let (left, right) = (from.x.min(to.x), from.x.max(to.x));
    let (top, bottom) = (from.y.min(to.y), from.y.max(to.y));
    (top..=bottom)
        .flat_map(|y| (left..=right).map(move |x| Cell::new(x, y)))
        .collect()
}

/// The cells linked to `from` side by side over cells that are `alike`, `from` included, in the order in which they are met.
pub fn flood_cells(size: Size, from: Cell, alike: impl Fn(Cell) -> bool) -> Vec<Cell> {
    let mut seen = vec![false; size.area()];
    let mut cells = vec![from];
    seen[size.index(from)] = true;
    let mut next = 0;
    while next < cells.len() {
        for dir in Dir::ALL {
            if let Some(neighbour) = size.neighbour(cells[next], dir)
                && !seen[size.index(neighbour)]
                && alike(neighbour)
            {
                seen[size.index(neighbour)] = true;
                cells.push(neighbour);
            }
        }
        next += 1;
    }
    cells
}
