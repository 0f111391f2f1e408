//! The designer's questions, answered: rules joined with search.
//!
//! [`solve`] answers whether a level can be finished and at what least cost; [`fold_map`] and [`map_counts`] tell its shape;
//! [`tile_classes`] which tiles it needs. All work for every level of `rules.md`; what is known of the mechanics only makes them
//! faster.

mod bounds;
mod certificate;
pub mod fast;
mod map;
mod meter;
mod moves;
mod report;
mod solve;
mod space;
mod spans;
mod tiles;
mod trail;
mod wander;

pub use certificate::{Uncertified, certificate};
pub use map::{Fold, FoldId, FoldMap, Passage};
pub use report::{
    Bounds, Figure, Halt, Limits, MapCounts, Outcome, Progress, Prove, Report, Stage, TileClass,
    UndecidedReason, Watch,
};

pub use spans::fold_spans;
pub use wander::{Steps, Wandered, wander};

use crate::rules::Rules;

/// Cells of the largest board that the fast lane answers. On larger ones its tables take longer to make, and a piece of its
/// search longer to end, than a newer edit may wait.
const LARGEST_FAST_BOARD: usize = 400;

/// Answers whether a level can be finished and at what least cost.
///
/// The route of the answer was replayed by the step engine. "Unsolvable" means that the space, cut only by safe rules, was
/// closed. The same limits in positions give the same answer, to the node, on every run.
pub fn solve(rules: &Rules, prove: Prove, limits: &Limits, watch: &mut dyn Watch) -> Report {
    let small = rules.size().area() <= LARGEST_FAST_BOARD;
    match small.then(|| fast::FastLevel::compile(rules)).flatten() {
        Some(fast) => fast.solve(rules, prove, limits, watch),
        None => solve_general(rules, prove, limits, watch),
    }
}

/// The answer of the general lane, which takes every level; [`solve`] chooses the lane.
pub fn solve_general(
    rules: &Rules,
    prove: Prove,
    limits: &Limits,
    watch: &mut dyn Watch,
) -> Report {
    solve::solve(rules, prove, limits, watch)
}

/// The whole fold map, or why it did not fit the limits.
///
/// # Errors
/// The limit that was met first.
pub fn fold_map(rules: &Rules, limits: &Limits) -> Result<FoldMap, UndecidedReason> {
    let closed = map::close(rules, limits)?;
    map::fold(&closed, &limits.halt)
}

/// The counts of the whole fold map, or why it did not fit the limits.
///
/// # Errors
/// The limit that was met first.
pub fn map_counts(rules: &Rules, limits: &Limits) -> Result<MapCounts, UndecidedReason> {
    let fast = fast::FastLevel::compile(rules).and_then(|fast| fast.closure(limits));
    match fast {
        Some(closed) => closed.map(|closed| closed.counts),
        None => fold_map(rules, limits).map(|map| map.counts()),
    }
}

/// The class of every cell, row by row, exact; `None` where a limit was met first, and for cells that the classes leave out.
/// `known` is the answer of [`solve`] with proved steps; `tell` hears of each tile as it is settled.
pub fn tile_classes(
    mechanics: &crate::level::Mechanics,
    level: &crate::level::Level,
    known: &Report,
    limits: &Limits,
    tell: &mut dyn FnMut(crate::level::Cell, TileClass),
) -> Vec<Option<TileClass>> {
    tiles::tile_classes(mechanics, level, known, limits, tell)
}
