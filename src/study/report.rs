//! What a study is asked and what it answers.

use crate::level::Route;
use std::sync::Arc;
use std::sync::atomic::{AtomicU64, Ordering};
use std::time::Duration;

/// Which measure must be proved.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Prove {
    /// The fewest steps.
    #[default]
    Steps,
    /// The fewest pushes (moves under control Drag).
    Pushes,
    /// Both; the route is a cheapest by steps.
    Both,
    /// Neither: any route will do.
    None,
}

/// Cancelling by generation: work started for one generation stops as soon as the counter has moved on.
///
/// Clone it freely; clones share the counter. A check costs one relaxed load.
#[derive(Clone, Debug, Default)]
pub struct Halt {
    counter: Arc<AtomicU64>,
    mine: u64,
}

impl Halt {
    /// A halt that never fires unless [`Halt::advance`] is called on a clone.
    pub fn never() -> Halt {
        Halt::default()
    }

    /// Moves the shared counter on: everything started before stops. Returns the halt for what starts now.
    #[must_use]
    pub fn advance(&self) -> Halt {
        let mine = self.counter.fetch_add(1, Ordering::Relaxed) + 1;
        Halt {
            counter: Arc::clone(&self.counter),
            mine,
        }
    }

    /// The halt of the shared counter's present generation: fires at the next advance.
    #[must_use]
    pub fn current(&self) -> Halt {
        Halt {
            counter: Arc::clone(&self.counter),
            mine: self.counter.load(Ordering::Relaxed),
        }
    }

    /// Whether the work must stop.
    pub fn fired(&self) -> bool {
        self.counter.load(Ordering::Relaxed) != self.mine
    }
}

/// What a study may spend.
#[derive(Clone, Debug)]
pub struct Limits {
    /// Wall time; none for no limit.
    pub time: Option<Duration>,
    /// Memory that the search may hold, in bytes, by its own count.
    pub bytes: u64,
    /// The most positions to look at, for runs that must be the same everywhere; none for no limit.
    pub positions: Option<u64>,
    /// Stops the work from outside.
    pub halt: Halt,
}

impl Default for Limits {
    /// 10 s and 2 GiB, as the command line has it.
    fn default() -> Limits {
        Limits {
            time: Some(Duration::from_secs(10)),
            bytes: 2048 << 20,
            positions: None,
            halt: Halt::never(),
        }
    }
}

/// Why a search gave no certain answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum UndecidedReason {
    /// The time was up.
    Time,
    /// The memory was used up.
    Memory,
    /// The limit of positions was reached.
    Positions,
    /// It was cancelled.
    Stopped,
}

/// The verdict. "Exhausted" and "gave up" are never merged.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Outcome {
    /// A route was found and replayed by the step engine.
    Solvable,
    /// The whole space, cut only by rules proved safe, was closed without a finished position.
    Unsolvable,
    /// Neither.
    Undecided(UndecidedReason),
}

/// A cost that is known to be reached by a route.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Figure {
    /// The least cost of the routes found.
    pub fewest: u32,
    /// Whether no cheaper route exists.
    pub proved: bool,
}

/// What is known of a cost so far: it is at least `low`, and at most `high` if a route is known.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub struct Bounds {
    /// No route is cheaper.
    pub low: u32,
    /// A route of this cost is known.
    pub high: Option<u32>,
}

/// How far an answer has come.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Stage {
    /// No route yet.
    Looking,
    /// A route is known; whether it is the cheapest is not.
    RouteFound,
    /// Done.
    Proved,
}

/// A glimpse of a running search.
#[derive(Clone, Debug)]
pub struct Progress {
    /// How far it has come.
    pub stage: Stage,
    /// Steps so far.
    pub steps: Bounds,
    /// Pushes so far.
    pub pushes: Bounds,
    /// Positions looked at.
    pub positions: u64,
    /// Nodes that they were folded into.
    pub folds: u64,
    /// Memory held, by the search's own count.
    pub bytes: u64,
    /// Time since the start, in seconds.
    pub seconds: f64,
}

/// Looks on while a study runs. The study calls it now and then; it must return soon.
pub trait Watch {
    /// Called at most every few milliseconds, and at each change of stage.
    fn progress(&mut self, progress: &Progress);
    /// Called when a route was found that is better than those before. It has been replayed.
    fn route(&mut self, _route: &Route) {}
}

impl Watch for () {
    fn progress(&mut self, _progress: &Progress) {}
}

/// The answer of [`crate::study`] to "can it be finished, and in how few steps?".
#[derive(Clone, Debug, PartialEq)]
pub struct Report {
    /// The verdict.
    pub outcome: Outcome,
    /// Fewest steps; none when no route is known.
    pub steps: Option<Figure>,
    /// Fewest pushes (moves under Drag); none when no route is known.
    pub pushes: Option<Figure>,
    /// What is proved about each measure when it was not settled.
    pub steps_low: u32,
    /// The same for pushes.
    pub pushes_low: u32,
    /// A cheapest route known by the measure asked for.
    pub route: Option<Route>,
    /// Lengths, in steps, of the spans between the commitments of the route as the search folds it (roams), or of its
    /// folds where the map is known; they add up to the length of the route.
    pub spans: Vec<u32>,
    /// Positions that this search looked at.
    pub positions: u64,
    /// Nodes that they were folded into.
    pub folds: u64,
    /// The most memory held, in bytes, by the search's own count.
    pub bytes: u64,
    /// Time spent.
    pub seconds: f64,
    /// For each cell, row by row: positions folded away with the walker on it (with any cargo on it, under Drag).
    pub heat: Vec<u64>,
    /// For each cell, row by row: whether a body ever came onto it or stood there, in what the search looked at.
    pub touched: Vec<bool>,
    /// Whether the whole reachable space was looked at, so that `touched` is exact.
    pub closed: bool,
}

/// The class of a tile (rules.md, Measures of a level).
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum TileClass {
    /// No body ever comes onto it.
    CutOff,
    /// Closing it changes neither verdict nor par.
    Idle,
    /// Closing it changes the par, or makes an unsolvable level solvable.
    Useful,
    /// Closing it makes the level unsolvable.
    Vital,
    /// Not asked: it holds a body, an item or a home at the start.
    Furnished,
}

/// The counts of the fold map (rules.md, Folds).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MapCounts {
    /// Strongly connected components of the step graph.
    pub folds: u64,
    /// Those from which a finished position can be reached.
    pub alive: u64,
    /// Steps between folds, as ordered pairs of positions.
    pub commitments: u64,
    /// Commitments from an alive fold to a lost one.
    pub traps: u64,
    /// Reachable positions.
    pub positions: u64,
    /// Chance that a player who picks among commitments uniformly ends finished.
    pub blind_finish_chance: f64,
}
