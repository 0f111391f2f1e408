//! A level as a space of which the tree search knows nothing but its steps.

use super::{Limits, UndecidedReason};
use crate::level::Route;
use crate::rules::{Rules, Scratch, Step};
use crate::search::tree::{Growth, StepSpace, TreeCounts, TreeSearch, TreeSettings};

/// The step graph of a level, as [`TreeSearch`] sees it.
pub struct Steps<'a> {
    rules: &'a Rules,
    scratch: Scratch,
}

impl<'a> Steps<'a> {
    /// The steps of a level.
    pub fn new(rules: &'a Rules) -> Steps<'a> {
        Steps {
            rules,
            scratch: rules.scratch(),
        }
    }
}

impl StepSpace for Steps<'_> {
    type Step = Step;

    fn start(&mut self) -> Box<[u64]> {
        self.rules.start().0
    }

    fn candidates(&mut self, from: &[u64], into: &mut Vec<Step>) {
        self.rules
            .candidate_steps_into(&mut self.scratch, from, into);
    }

    fn step(&mut self, from: &[u64], step: Step, to: &mut [u64]) -> bool {
        self.rules
            .step_into(&mut self.scratch, from, step, to)
            .is_some()
    }

    fn finished(&mut self, position: &[u64]) -> bool {
        self.rules.finished_in(&mut self.scratch, position)
    }
}

/// What a tree search made of a level.
#[derive(Clone, Debug, PartialEq)]
pub struct Wandered {
    /// A route that finishes the level, replayed by the step engine. Not a cheapest.
    pub route: Option<Route>,
    /// Whether there is nothing left to try. Without a route, and if the kind of tree proves, the level is unsolvable.
    pub closed: bool,
    /// Nodes, positions and iterations.
    pub counts: TreeCounts,
}

/// Grows a tree for at most so many iterations within the limits. Needs no bound and no knowledge of the mechanics; also the
/// model of a player without insight.
///
/// # Errors
/// The limit that was met first.
pub fn wander(
    rules: &Rules,
    settings: TreeSettings,
    iterations: u64,
    limits: &Limits,
) -> Result<Wandered, UndecidedReason> {
    let started = std::time::Instant::now();
    let mut tree = TreeSearch::new(Steps::new(rules), settings);
    let mut growth = Growth::Grew;
    for iteration in 0..iterations {
        growth = tree.grow();
        if growth != Growth::Grew {
            break;
        }
        if limits.halt.fired() {
            return Err(UndecidedReason::Stopped);
        }
        if tree.bytes() > limits.bytes {
            return Err(UndecidedReason::Memory);
        }
        if iteration % 64 == 0 && limits.time.is_some_and(|time| started.elapsed() > time) {
            return Err(UndecidedReason::Time);
        }
    }
    let route = tree.route().map(|steps| rules.route(steps));
    let replays = |route: &Route| {
        let played = rules.play(route);
        let end = played
            .last()
            .map_or_else(|| rules.start(), |last| last.position.clone());
        played.len() == route.len() && rules.finished(&end)
    };
    Ok(Wandered {
        route: route.filter(replays),
        closed: growth == Growth::Closed,
        counts: tree.counts(),
    })
}
