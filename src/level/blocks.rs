//! Blocks of several cells on a level: laying, growing, cutting.

use super::edit::Brush;
use super::grid::{Cell, Dir};
use super::kinds::{BodyIx, Mechanics};
use super::pack::{Block, Level};

/// The most cells of a block.
pub const MOST_BLOCK_CELLS: usize = 16;

impl Level {
    /// Lays one body of `kind` on `cells`, which must be linked side by side and at most [`MOST_BLOCK_CELLS`]; does nothing
    /// otherwise. What stood there is taken away; closed ground gives way as for any body.
    pub fn lay_block(&mut self, mechanics: &Mechanics, kind: BodyIx, cells: &[Cell]) {
        let on_board = cells.iter().all(|&cell| self.size.contains(cell));
        if !on_board || cells.len() > MOST_BLOCK_CELLS || parts(cells).len() != 1 {
            return;
        }
        self.paint(mechanics, Brush::Body(kind), cells.iter().copied());
        if cells.len() > 1 {
            for &cell in cells {
                self.take_body(cell);
            }
            self.blocks.push(Block {
                kind,
                cells: cells.to_vec(),
            });
        }
    }

    /// Takes one cell out of the block that covers it; what is left falls into its linked parts. Returns whether there was a
    /// block.
    pub fn cut_block(&mut self, cell: Cell) -> bool {
        let Some(at) = self.block_at(cell) else {
            return false;
        };
        let block = self.blocks.remove(at);
        let left: Vec<Cell> = block
            .cells
            .into_iter()
            .filter(|&other| other != cell)
            .collect();
        for part in parts(&left) {
            match part[..] {
                [single] => {
                    let at = self.size.index(single);
                    self.bodies[at] = Some(block.kind);
                }
                _ => self.blocks.push(Block {
                    kind: block.kind,
                    cells: part,
                }),
            }
        }
        true
    }
}

/// The parts of `cells` that are linked side by side, each in the order given.
fn parts(cells: &[Cell]) -> Vec<Vec<Cell>> {
    let touches = |one: Cell, other: Cell| {
        Dir::ALL.iter().any(|dir| {
            let (dx, dy) = dir.delta();
            (i32::from(one.x) + dx, i32::from(one.y) + dy)
                == (i32::from(other.x), i32::from(other.y))
        })
    };
    let mut parts: Vec<Vec<Cell>> = Vec::new();
    for &cell in cells {
        let (near, mut far): (Vec<Vec<Cell>>, Vec<Vec<Cell>>) = parts
            .into_iter()
            .partition(|part| part.iter().any(|&other| touches(cell, other)));
        let mut joined: Vec<Cell> = near.into_iter().flatten().collect();
        joined.push(cell);
        far.push(joined);
        parts = far;
    }
    parts
}

#[cfg(test)]
mod tests {
    use super::super::grid::Size;
    use super::super::kinds::{BodyKind, Control, GroundIx, GroundKind, KindId, Legend, Role};
    use super::*;

    fn mechanics() -> Mechanics {
        let id = |text: &str| KindId::new(text).expect("a good id");
        Mechanics {
            control: Control::Drag,
            strength: 1,
            objective: Vec::new(),
            grounds: vec![GroundKind::plain(id("gravel"), "gravel")],
            bodies: vec![BodyKind::plain(id("bench"), "bench", Role::Cargo)],
            items: Vec::new(),
            legend: Legend::default(),
        }
    }

    fn level() -> Level {
        Level::filled(
            "a level",
            Size::new(6, 6).expect("a good size"),
            GroundIx(0),
        )
    }

    fn row(xs: std::ops::Range<u8>) -> Vec<Cell> {
        xs.map(|x| Cell::new(x, 1)).collect()
    }

    #[test]
    fn a_cut_in_the_middle_leaves_a_block_and_a_single_body() {
        let mut level = level();
        level.lay_block(&mechanics(), BodyIx(0), &row(0..4));
        assert!(level.cut_block(Cell::new(1, 1)));
        assert_eq!(
            level.blocks,
            vec![Block {
                kind: BodyIx(0),
                cells: row(2..4)
            }]
        );
        assert_eq!(level.bodies.iter().flatten().count(), 1);
        assert_eq!(level.body_at(Cell::new(0, 1)), Some(BodyIx(0)));
        assert_eq!(level.body_at(Cell::new(1, 1)), None);
        assert!(!level.cut_block(Cell::new(5, 5)));
    }

    #[test]
    fn what_is_not_linked_or_too_large_is_not_laid() {
        let mut level = level();
        let apart = [Cell::new(0, 0), Cell::new(2, 0)];
        level.lay_block(&mechanics(), BodyIx(0), &apart);
        let large: Vec<Cell> = level.size.cells().take(MOST_BLOCK_CELLS + 1).collect();
        level.lay_block(&mechanics(), BodyIx(0), &large);
        assert!(level.blocks.is_empty());
        level.lay_block(&mechanics(), BodyIx(0), &large[..MOST_BLOCK_CELLS]);
        assert_eq!(level.blocks.len(), 1);
    }

    #[test]
    fn a_block_laid_over_another_takes_its_place() {
        let mut level = level();
        level.lay_block(&mechanics(), BodyIx(0), &row(0..2));
        level.lay_block(&mechanics(), BodyIx(0), &row(1..4));
        assert_eq!(
            level.blocks,
            vec![Block {
                kind: BodyIx(0),
                cells: row(1..4)
            }]
        );
        assert_eq!(level.bodies.iter().flatten().count(), 0);
    }
}
