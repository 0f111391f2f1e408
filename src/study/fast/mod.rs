//! The fast lane: levels that are nothing but one walker that pushes.
//!
//! Most levels of most packs use few traits. Where one walker pushes single cargo over ground that never changes, a whole board fits into
//! a few machine words, and walks, pushes and frozen groups become shifts and masks. This lane is a second engine for
//! just those levels. It takes a level if every trait in play is one that it knows (`compile`), else says so, and the general lane
//! answers. Both must answer the same on levels that both can do; `tests/fast.rs` holds that.
//!
//! * `board`, `bits`: the level as sets of cells.
//! * `distance`, `matching`, `losses`: bounds and cuts, each with the reason why it is safe.
//! * `store`, `open`, `meter`: what was seen, what is next, what may be spent.
//! * `pushes`: first route, fewest pushes and exhaustion over folded positions; `steps`: fewest steps in waves;
//!   `meet`: the same from both ends; `prover`: which of the two.
//! * `closure`, `folds`: the whole map. `answer`: which search runs when.

mod answer;
mod bits;
mod board;
mod closure;
mod compile;
mod distance;
mod folds;
mod heat;
mod losses;
mod matching;
mod meet;
mod meter;
mod open;
mod prover;
mod pushes;
mod route;
mod steps;
mod store;

use super::{Limits, MapCounts, Prove, Report, UndecidedReason, Watch};
use crate::rules::Rules;
use board::Board;

/// A level compiled for the fast lane. Immutable and cheap to share behind an `Arc`.
#[derive(Clone, Debug)]
pub struct FastLevel {
    lane: Lane,
}

/// The board by the number of words that its box needs.
#[derive(Clone, Debug)]
enum Lane {
    W1(Box<Board<1>>),
    W2(Box<Board<2>>),
    W4(Box<Board<4>>),
    W16(Box<Board<16>>),
    W64(Box<Board<64>>),
}

macro_rules! on_board {
    ($level:expr, $board:ident => $answer:expr) => {
        match &$level.lane {
            Lane::W1($board) => $answer,
            Lane::W2($board) => $answer,
            Lane::W4($board) => $answer,
            Lane::W16($board) => $answer,
            Lane::W64($board) => $answer,
        }
    };
}

/// What a closure tells beside its counts.
#[derive(Clone, Debug, PartialEq)]
pub struct Closed {
    /// The counts of the fold map.
    pub counts: MapCounts,
    /// Nodes that the positions were folded into.
    pub roams: u64,
    /// For each cell, row by row: whether a body comes onto it or stands there, exactly.
    pub touched: Vec<bool>,
    /// For each cell, row by row: positions with the walker on it.
    pub heat: Vec<u64>,
    /// The most memory held, in bytes.
    pub bytes: u64,
}

impl FastLevel {
    /// Compiles a level, or says by `None` that a trait is in play that this lane does not know.
    pub fn compile(rules: &Rules) -> Option<FastLevel> {
        let plan = compile::plan(rules)?;
        let lane = match plan.width * plan.height {
            0..=64 => Lane::W1(Box::new(Board::new(&plan))),
            65..=128 => Lane::W2(Box::new(Board::new(&plan))),
            129..=256 => Lane::W4(Box::new(Board::new(&plan))),
            257..=1024 => Lane::W16(Box::new(Board::new(&plan))),
            _ => Lane::W64(Box::new(Board::new(&plan))),
        };
        Some(FastLevel { lane })
    }

    /// Whether the level can be finished and at what least cost. `rules` must be those of the same level; every route is
    /// replayed with them before it counts.
    pub fn solve(
        &self,
        rules: &Rules,
        prove: Prove,
        limits: &Limits,
        watch: &mut dyn Watch,
    ) -> Report {
        on_board!(self, board => answer::solve(board, Some(rules), prove, limits, watch))
    }

    /// The same without the replay by the step engine, for measuring.
    #[doc(hidden)]
    pub fn solve_alone(&self, prove: Prove, limits: &Limits, watch: &mut dyn Watch) -> Report {
        on_board!(self, board => answer::solve(board, None, prove, limits, watch))
    }

    /// For each cell, row by row: whether a body comes onto it or stands there, exactly. `seen` are cells that are known to be
    /// touched; if they are all that could be, nothing is searched, else the whole space is.
    ///
    /// # Errors
    /// The limit that was met first.
    pub fn touched(&self, seen: &[bool], limits: &Limits) -> Result<Vec<bool>, UndecidedReason> {
        on_board!(self, board => touched(board, seen, limits))
    }

    /// The whole fold map, counted exactly, or `None` if positions differ here by more than bodies, which this lane leaves
    /// out (items that bear on no verdict).
    ///
    /// # Errors
    /// The limit that was met first.
    pub fn closure(&self, limits: &Limits) -> Option<Result<Closed, UndecidedReason>> {
        on_board!(self, board => board.countable.then(|| close(board, limits)))
    }
}

/// Cells that bodies can come onto at most: those of every walk without cargo, and those that each cargo can be pushed to
/// without the others.
fn touched_at_most<const N: usize>(board: &Board<N>) -> bits::Bits<N> {
    let mut most = board.walk;
    for at in Board::all(&board.groups.start).ones() {
        let side = board.distances.side(at, board.walker);
        let far = board.distances.start_distances(board, at, side);
        let came = |cell: &usize| {
            let sides = &far[cell * 4..cell * 4 + 4];
            sides.iter().any(|&far| far != distance::NEVER)
        };
        most |= (0..board.area()).filter(came).collect();
    }
    most
}

/// See [`FastLevel::touched`].
fn touched<const N: usize>(
    board: &Board<N>,
    seen: &[bool],
    limits: &Limits,
) -> Result<Vec<bool>, UndecidedReason> {
    let most = touched_at_most(board);
    if most.ones().all(|at| seen[board.level_index(at)]) {
        let mut touched = vec![false; board.size.area()];
        most.ones()
            .for_each(|at| touched[board.level_index(at)] = true);
        return Ok(touched);
    }
    close(board, limits).map(|closed| closed.touched)
}

fn close<const N: usize>(board: &Board<N>, limits: &Limits) -> Result<Closed, UndecidedReason> {
    let mut meter = meter::Meter::new(limits);
    let closure = closure::close(board, &mut meter)?;
    let counts = folds::count(&closure, &mut meter)?;
    let mut heat = heat::Heat::default();
    for node in 0..closure.store.nodes() as u32 {
        heat.add(
            Board::all(closure.store.cargo(node)),
            closure.store.cells(node),
        );
    }
    Ok(Closed {
        counts,
        roams: closure.store.nodes() as u64,
        touched: heat.touched(board),
        heat: heat.counts(board),
        bytes: meter.bytes_peak,
    })
}
