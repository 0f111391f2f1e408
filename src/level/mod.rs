//! What a designer writes: the mechanics of a game as kinds with traits, its levels, and how they are edited.
//!
//! Everything here is plain data with value semantics. A [`Pack`] shares its [`Mechanics`] and each [`Level`] through
//! `Arc`, so that an undo snapshot of a pack of a thousand levels costs a thousand pointers.

mod blocks;
mod edit;
mod grid;
mod history;
mod kinds;
mod pack;
mod problems;
mod reshape;
mod rework;
mod route;

pub use blocks::MOST_BLOCK_CELLS;
pub use edit::{Brush, box_cells, flood_cells, line_cells};
pub use grid::{Cell, Dir, MAX_SIDE, Size};
pub use history::History;
pub use kinds::{
    Axis, BodyIx, BodyKind, Channel, Clause, Control, Drawing, Gate, GroundIx, GroundKind, Item,
    ItemIx, ItemKind, KindId, KindIdError, Legend, Lock, Look, Mechanics, Opens, Picture, Role,
    Shape,
};
pub use pack::{Block, Level, Pack, Par};
pub use problems::{Problem, Severity, problems, structural_problems};
pub use reshape::Turn;
pub use rework::{KindRef, Layer, ReworkError, Uses};
pub use route::{DragStep, Route};
