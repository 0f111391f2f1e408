//! Best-first search over the folded graph, one node at a time.

use super::budget::{Column, Full};
use super::folded::{Folded, NO_ROAM, RoamId};
use super::open::OpenList;
use super::registry::Registry;
use super::space::{Hint, StateSpace};

/// What an engine looks for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Aim {
    /// Any route, soon: the most promising roam first. Each roam is opened at most once.
    First,
    /// A route of the fewest pushes: A* (Hart, Nilsson, Raphael 1968) over roams, where only pushes cost.
    Pushes,
    /// A route of the fewest steps: A* over entries, where an edge costs its step and the walk to it.
    Steps,
}

/// What came of one advance.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Advance {
    /// Nothing new.
    Going,
    /// A route, cheaper than those before by the measure of the engine; see [`Engine::trail`].
    Better,
    /// No route is left that is cheaper than the cheapest known. With none known, there is none.
    Closed,
}

/// The labels of the edges of a route, from the start on. From each position on it the walk to the place where the next edge
/// departs, then its step, make the steps.
pub type Trail = Vec<u32>;

#[derive(Clone, Copy, Debug)]
struct Node {
    cost: u32,
    parent: u32,
    label: u32,
    ahead: u16,
    open: bool,
}

const NO_NODE: u32 = u32::MAX;

/// What is ahead of a node that is a dead end.
const DEAD: u32 = u16::MAX as u32;

/// How much the hint outweighs the length so far when any route will do. The length keeps a search without any hint broad.
const HINT_WEIGHT: u32 = 4;

/// A best-first search that is advanced from outside, so that limits and cancelling are no concern of its own.
///
/// Nodes are roams or, by steps, entries; they are numbered by a registry of one word. All engines on one [`Folded`] share
/// what it found.
#[derive(Debug)]
pub struct Engine {
    aim: Aim,
    ids: Registry,
    nodes: Column<Node>,
    open: OpenList,
    best: Option<(u32, u32)>,
    low: u32,
    expanded: u64,
    distances: Vec<u16>,
}

impl Engine {
    /// An engine with the start as its only node.
    ///
    /// # Errors
    /// If memory has run out.
    pub fn new<S: StateSpace>(aim: Aim, graph: &mut Folded<S>) -> Result<Engine, Full> {
        let mut engine = Engine {
            aim,
            ids: Registry::new(1),
            nodes: Column::new(),
            open: OpenList::new(),
            best: None,
            low: 0,
            expanded: 0,
            distances: vec![u16::MAX; graph.space.places()],
        };
        let (roam, place) = graph.start()?;
        if roam != NO_ROAM {
            engine.reach(graph, roam, place, 0, NO_NODE, 0, u32::MAX)?;
            engine.low = engine.nodes.first().map_or(0, |node| u32::from(node.ahead));
        }
        Ok(engine)
    }

    /// Opens one node. Routes of `upper` or more are of no interest.
    ///
    /// # Errors
    /// If memory has run out. Calling again is allowed, and fails again unless bytes were given back.
    pub fn advance<S: StateSpace>(
        &mut self,
        graph: &mut Folded<S>,
        upper: u32,
    ) -> Result<Advance, Full> {
        let upper = self.upper(upper);
        let before = self.best;
        let Some((priority, id)) = self.open.pop() else {
            return Ok(Advance::Closed);
        };
        if self.aim != Aim::First && priority >= upper {
            self.open.push(priority, id, &mut graph.budget)?;
            return Ok(Advance::Closed);
        }
        let node = self.nodes[id as usize];
        if !node.open || priority != self.priority(node.cost, u32::from(node.ahead)) {
            return Ok(Advance::Going);
        }
        if self.aim != Aim::First {
            self.low = self.low.max(priority);
        }
        if let Err(full) = self.expand(graph, id, upper) {
            self.open.push(priority, id, &mut graph.budget)?;
            return Err(full);
        }
        self.nodes[id as usize].open = false;
        self.expanded += 1;
        Ok(if self.best == before {
            Advance::Going
        } else {
            Advance::Better
        })
    }

    fn upper(&self, upper: u32) -> u32 {
        self.best.map_or(upper, |(cost, _)| cost.min(upper))
    }

    fn priority(&self, cost: u32, ahead: u32) -> u32 {
        match self.aim {
            Aim::First => self.hint(cost, ahead).0,
            Aim::Pushes | Aim::Steps => cost + ahead,
        }
    }

    fn hint(&self, cost: u32, ahead: u32) -> Hint {
        Hint(cost.saturating_add(ahead.saturating_mul(HINT_WEIGHT)))
    }

    fn expand<S: StateSpace>(
        &mut self,
        graph: &mut Folded<S>,
        id: u32,
        upper: u32,
    ) -> Result<(), Full> {
        let (roam, place) = self.place_of(id);
        graph.open(roam)?;
        let many = graph.edges(roam).len();
        self.ids.reserve(many, &mut graph.budget)?;
        self.nodes.reserve(many, &mut graph.budget)?;
        if self.aim == Aim::Steps {
            graph.distances(roam, place, &mut self.distances);
        }
        let cost = self.nodes[id as usize].cost;
        for at in 0..many {
            let edge = graph.edges(roam)[at];
            if edge.to == NO_ROAM {
                continue;
            }
            let step = match self.aim {
                Aim::First => 1,
                Aim::Pushes => u32::from(edge.pushes),
                Aim::Steps => 1 + u32::from(self.distances[usize::from(edge.from_place)]),
            };
            let upper = self.upper(upper);
            self.reach(
                graph,
                edge.to,
                edge.to_place,
                cost + step,
                id,
                edge.label,
                upper,
            )?;
        }
        Ok(())
    }

    #[allow(clippy::too_many_arguments)]
    fn reach<S: StateSpace>(
        &mut self,
        graph: &mut Folded<S>,
        roam: RoamId,
        place: u16,
        cost: u32,
        parent: u32,
        label: u32,
        upper: u32,
    ) -> Result<(), Full> {
        self.ids.reserve(1, &mut graph.budget)?;
        self.nodes.reserve(1, &mut graph.budget)?;
        let (id, new) = self.ids.insert(&[self.word(roam, place)]);
        let ahead = if new {
            self.ahead(graph, roam, place)
                .map_or(DEAD, |ahead| ahead.min(DEAD - 1))
        } else {
            let node = self.nodes[id as usize];
            if node.cost <= cost || self.aim == Aim::First {
                return Ok(());
            }
            u32::from(node.ahead)
        };
        let node = Node {
            cost,
            parent,
            label,
            ahead: ahead as u16,
            open: true,
        };
        if new {
            self.nodes.push(node);
        } else {
            self.nodes[id as usize] = node;
        }
        if ahead == DEAD {
            return Ok(());
        }
        let worth = self.aim == Aim::First || cost.saturating_add(ahead) < upper;
        if graph.is_finished(roam) {
            if worth && self.best.is_none_or(|(best, _)| cost < best) {
                self.best = Some((cost, id));
            }
            return Ok(());
        }
        if worth {
            let priority = self.priority(cost, ahead);
            self.open.push(priority, id, &mut graph.budget)?;
        }
        Ok(())
    }

    fn ahead<S: StateSpace>(&self, graph: &mut Folded<S>, roam: RoamId, place: u16) -> Option<u32> {
        match self.aim {
            Aim::First => Some(graph.steps_ahead(roam)),
            Aim::Pushes => Some(graph.pushes_ahead(roam)),
            Aim::Steps => graph.entry_steps_ahead(roam, place),
        }
    }

    fn word(&self, roam: RoamId, place: u16) -> u64 {
        match self.aim {
            Aim::First | Aim::Pushes => u64::from(roam),
            Aim::Steps => u64::from(roam) << 16 | u64::from(place),
        }
    }

    fn place_of(&self, id: u32) -> (RoamId, u16) {
        let word = self.ids.row(id)[0];
        match self.aim {
            Aim::First | Aim::Pushes => (word as RoamId, 0),
            Aim::Steps => ((word >> 16) as RoamId, word as u16),
        }
    }

    /// No route is cheaper than this, by the engine's measure, as long as none was found; 0 for [`Aim::First`].
    pub fn low(&self) -> u32 {
        self.low
    }

    /// Cost of the best route found, by the engine's measure.
    pub fn best(&self) -> Option<u32> {
        self.best.map(|(cost, _)| cost)
    }

    /// Nodes opened.
    pub fn expanded(&self) -> u64 {
        self.expanded
    }

    /// The best route found; empty if none was.
    pub fn trail(&self) -> Trail {
        let mut labels = Trail::new();
        let mut id = self.best.map_or(NO_NODE, |(_, id)| id);
        while id != NO_NODE {
            let node = self.nodes[id as usize];
            if node.parent != NO_NODE {
                labels.push(node.label);
            }
            id = node.parent;
        }
        labels.reverse();
        labels
    }
}
