//! What the desk asks the worker and what it hears back. Every event carries the revision that it is for.

use crate::level::{Cell, Level, Mechanics, Problem, Route};
use crate::study::{MapCounts, Outcome, Progress, Prove, Report, TileClass};
use std::sync::Arc;

/// What the desk asks. A newer `Study` cancels the older one, with all that follows from it.
#[derive(Clone, Debug)]
pub enum Request {
    /// Study the level on the board.
    Study {
        /// Counts the edits; echoed in every event.
        revision: u64,
        /// The kinds.
        mechanics: Arc<Mechanics>,
        /// The level.
        level: Arc<Level>,
        /// What to prove.
        prove: Prove,
        /// The route of the level before the edit, to be replayed first.
        last_route: Option<Route>,
        /// Whether to go on to tile classes and the fold map after the verdict.
        studies: bool,
    },
    /// Answer all levels of the pack, in the background, the one on the board excepted. Replaces an earlier wish.
    Shelf {
        /// The kinds.
        mechanics: Arc<Mechanics>,
        /// The levels, in the order of the shelf.
        levels: Vec<Arc<Level>>,
        /// What to prove.
        prove: Prove,
    },
    /// Change what a search may spend.
    Budget {
        /// Seconds for each level.
        seconds: f64,
        /// Mebibytes.
        mebibytes: u64,
    },
    /// Stop the current study; what is known stays.
    Stop,
}

/// The verdict on a level as people and shelves see it.
#[derive(Clone, Debug, PartialEq)]
pub enum Verdict {
    /// It asks no sensible question.
    Invalid(Vec<Problem>),
    /// It was searched.
    Studied(Outcome),
}

/// A whole answer on one level.
#[derive(Clone, Debug, PartialEq)]
pub enum Answer {
    /// It asks no sensible question.
    Invalid(Vec<Problem>),
    /// It was searched.
    Studied(Arc<Report>),
}

impl Answer {
    /// The verdict alone.
    pub fn verdict(&self) -> Verdict {
        match self {
            Answer::Invalid(problems) => Verdict::Invalid(problems.clone()),
            Answer::Studied(report) => Verdict::Studied(report.outcome),
        }
    }
}

/// One line of the shelf.
#[derive(Clone, Debug, PartialEq)]
pub struct ShelfLine {
    /// The level that was asked about; match by pointer or by board.
    pub level: Arc<Level>,
    /// Its answer.
    pub answer: Answer,
}

/// What the desk hears.
#[derive(Clone, Debug)]
pub enum Event {
    /// The last route was replayed on the edited level: whether it still finishes it.
    Replayed {
        /// Of the request.
        revision: u64,
        /// The route.
        route: Route,
        /// Whether it still finishes the level.
        still_works: bool,
    },
    /// A glimpse of the running search, at most 30 a second.
    Progress {
        /// Of the request.
        revision: u64,
        /// The glimpse.
        progress: Progress,
    },
    /// A route that finishes the level, better than those before.
    Route {
        /// Of the request.
        revision: u64,
        /// The route.
        route: Route,
    },
    /// The answer.
    Answered {
        /// Of the request.
        revision: u64,
        /// The answer.
        answer: Answer,
        /// Whether it was remembered from before.
        remembered: bool,
    },
    /// One tile was classified.
    Tile {
        /// Of the request.
        revision: u64,
        /// Which.
        cell: Cell,
        /// Its class.
        class: TileClass,
        /// How many tiles are still to be asked.
        left: usize,
    },
    /// Tile classes are as complete as the limits allow.
    TilesDone {
        /// Of the request.
        revision: u64,
        /// The class of every cell, row by row, where it is settled.
        classes: Arc<Vec<Option<TileClass>>>,
    },
    /// The folds along the route of the answer are known from the whole map.
    Spans {
        /// Of the request.
        revision: u64,
        /// The route.
        route: Route,
        /// Steps between commitments; they add up to its length.
        spans: Vec<u32>,
    },
    /// The fold map was counted, or did not fit the limits.
    Map {
        /// Of the request.
        revision: u64,
        /// The counts.
        counts: Option<MapCounts>,
    },
    /// A level of the shelf was answered.
    Shelf(ShelfLine),
    /// A job panicked. The worker lives on.
    Failed {
        /// Of the request; 0 for a shelf job.
        revision: u64,
        /// What it said.
        message: String,
    },
}
