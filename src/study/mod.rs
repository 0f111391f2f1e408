//! The designer's questions, answered: rules joined with search.

mod certificate;
pub mod fast;
mod report;

pub use certificate::{Uncertified, certificate};
pub use report::{
    Bounds, Figure, Halt, Limits, MapCounts, Outcome, Progress, Prove, Report, Stage, TileClass,
    UndecidedReason, Watch,
};

use crate::rules::Rules;

/// Answers whether a level can be finished and at what least cost.
///
/// The route of the answer was replayed by the step engine. "Unsolvable" means that the space was closed.
pub fn solve(_rules: &Rules, _prove: Prove, _limits: &Limits, _watch: &mut dyn Watch) -> Report {
    todo!()
}

/// The whole fold map, or why it did not fit the limits.
///
/// # Errors
/// The limit that was met first.
pub fn map_counts(_rules: &Rules, _limits: &Limits) -> Result<MapCounts, UndecidedReason> {
    todo!()
}

/// The class of every cell, row by row, exact; `None` where a limit was met first, and for cells that the classes leave out.
/// `known` is the answer of [`solve`] with proved steps; `tell` hears of each tile as it is settled.
pub fn tile_classes(
    _mechanics: &crate::level::Mechanics,
    _level: &crate::level::Level,
    _known: &Report,
    _limits: &Limits,
    _tell: &mut dyn FnMut(crate::level::Cell, TileClass),
) -> Vec<Option<TileClass>> {
    todo!()
}
