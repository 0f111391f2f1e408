//! Routes: the steps of a player, as files and reports have them.

use super::grid::Dir;
use serde::{Deserialize, Serialize};

/// One step under control Drag: which block, and where to.
///
/// Blocks are numbered from 0 as they stand at the start of the level: those of [`super::Level::blocks`] as listed, then
/// the single-cell ones of [`super::Level::bodies`] row by row. A block keeps its number while it moves.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub struct DragStep {
    /// Number of the block.
    pub block: u16,
    /// Where it is moved by one cell.
    pub dir: Dir,
}

/// The steps of a player from the start of a level.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Route {
    /// Under control Steer.
    Steer(Vec<Dir>),
    /// Under control Drag.
    Drag(Vec<DragStep>),
}

impl Route {
    /// Number of steps.
    pub fn len(&self) -> usize {
        match self {
            Route::Steer(steps) => steps.len(),
            Route::Drag(steps) => steps.len(),
        }
    }

    /// Whether there is no step.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// Under Drag, the number of moves: runs of consecutive steps of one block. None under Steer.
    pub fn moves(&self) -> Option<usize> {
        match self {
            Route::Steer(_) => None,
            Route::Drag(steps) => Some(steps.chunk_by(|one, next| one.block == next.block).count()),
        }
    }

    /// The letters of a Steer route; for a Drag route, `block:letter` with spaces between.
    pub fn text(&self) -> String {
        match self {
            Route::Steer(steps) => steps.iter().map(|dir| dir.letter()).collect(),
            Route::Drag(steps) => steps
                .iter()
                .map(|step| format!("{}:{}", step.block, step.dir.letter()))
                .collect::<Vec<_>>()
                .join(" "),
        }
    }
}
