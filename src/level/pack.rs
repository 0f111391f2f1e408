//! Levels and packs.

use super::grid::{Cell, Size};
use super::kinds::{BodyIx, Clause, GroundIx, ItemIx, Mechanics};
use super::route::Route;
use std::sync::Arc;

/// A body of several cells, under control Drag. One of a single cell may be kept here too.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Block {
    /// Its kind.
    pub kind: BodyIx,
    /// Its cells, connected, at most 16, in the order of the file.
    pub cells: Vec<Cell>,
}

/// What a level cost when its designer last approved it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub struct Par {
    /// Fewest steps.
    pub steps: Option<u32>,
    /// Fewest pushes; moves under control Drag.
    pub pushes: Option<u32>,
}

/// One level of a pack. The vectors have one entry a cell, row by row, in the order of [`Size::index`].
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Level {
    /// What people call it; need not be unique.
    pub name: String,
    /// Free text of the designer.
    pub notes: String,
    /// Size of the board.
    pub size: Size,
    /// Ground of each cell.
    pub ground: Vec<GroundIx>,
    /// Single-cell body on each cell.
    pub bodies: Vec<Option<BodyIx>>,
    /// Item on each cell.
    pub items: Vec<Option<ItemIx>>,
    /// Bodies listed as blocks, of one or more cells; never overlap each other or `bodies`.
    pub blocks: Vec<Block>,
    /// Replaces the pack's objective.
    pub objective: Option<Vec<Clause>>,
    /// The route that the designer means.
    pub intended: Option<Route>,
    /// Par when last approved.
    pub par: Option<Par>,
}

impl Level {
    /// A level of one ground with nothing on it.
    pub fn filled(name: impl Into<String>, size: Size, ground: GroundIx) -> Level {
        Level {
            name: name.into(),
            notes: String::new(),
            size,
            ground: vec![ground; size.area()],
            bodies: vec![None; size.area()],
            items: vec![None; size.area()],
            blocks: Vec::new(),
            objective: None,
            intended: None,
            par: None,
        }
    }

    /// What must hold at the end of this level.
    pub fn objective<'a>(&'a self, mechanics: &'a Mechanics) -> &'a [Clause] {
        self.objective.as_deref().unwrap_or(&mechanics.objective)
    }

    /// Ground of a cell.
    pub fn ground_at(&self, cell: Cell) -> GroundIx {
        self.ground[self.size.index(cell)]
    }

    /// Item on a cell.
    pub fn item_at(&self, cell: Cell) -> Option<ItemIx> {
        self.items[self.size.index(cell)]
    }

    /// The body on a cell, be it a single cell or part of a block.
    pub fn body_at(&self, cell: Cell) -> Option<BodyIx> {
        self.bodies[self.size.index(cell)]
            .or_else(|| self.block_at(cell).map(|at| self.blocks[at].kind))
    }

    /// Index in `blocks` of the block that covers a cell.
    pub fn block_at(&self, cell: Cell) -> Option<usize> {
        self.blocks
            .iter()
            .position(|block| block.cells.contains(&cell))
    }

    /// All bodies in the order in which routes number them: blocks as listed, then single cells row by row.
    pub fn bodies_in_order(&self) -> Vec<Block> {
        let singles = self.bodies.iter().enumerate().filter_map(|(at, kind)| {
            kind.map(|kind| Block {
                kind,
                cells: vec![self.size.cell(at)],
            })
        });
        self.blocks.iter().cloned().chain(singles).collect()
    }

    /// Whether both levels ask the same question: same board and objective, whatever their names, notes, route and par.
    pub fn same_board(&self, other: &Level) -> bool {
        self.size == other.size
            && self.ground == other.ground
            && self.bodies == other.bodies
            && self.items == other.items
            && self.blocks == other.blocks
            && self.objective == other.objective
    }
}

/// A game's mechanics and its levels.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Pack {
    /// What people call it.
    pub name: String,
    /// Kinds and pack-wide rules.
    pub mechanics: Arc<Mechanics>,
    /// In playing order.
    pub levels: Vec<Arc<Level>>,
}
