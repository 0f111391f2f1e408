//! Tree search that needs no bound and no knowledge of the mechanics: UCT (Kocsis & Szepesvari 2006) in four kinds.
//!
//! **The problem.** In a puzzle most steps can be taken back. A tree that grows by steps therefore fills with copies: every
//! detour that comes back to where it began hangs the whole space below itself once more, and the few steps that can't be
//! taken back, which are the ones that matter, drown.
//!
//! **Folding.** A node of the tree is a *set* of positions that can all reach each other. It begins as one position. When
//! an untried step leads to a position of an ancestor, a cycle is closed: all nodes on the path from the ancestor down
//! collapse into the ancestor. Nothing is lost by it: members, untried steps, visits and rewards are added to the
//! ancestor's, the subtrees that hung off the path hang off the ancestor from then on. A step to a position that stands
//! elsewhere in the tree opens nothing, but is remembered at its target: when the target later collapses into an ancestor
//! of the step's source, a cycle has come about through it, and that collapses as well.
//!
//! **Positions stand once.** A registry maps each position to its node, so that none is generated as a node twice. Each
//! position keeps the step by which it was first reached. Following these steps back from the first position of a child
//! gives the list of steps of the edge above it, relative to the first position of its parent; it need not be stored and
//! can't go stale in a collapse ([`TreeSearch::edge_steps`]).
//!
//! **Proof.** A node without untried steps and without open children is closed. With folding and without duplicates every
//! position stands once and all its steps were tried, so a closed root means that the whole space was seen.
//!
//! **Cost.** One iteration is a descent, a few steps, a playout. Memory is the registry plus one small node for each fold.
//! Plain UCT and UCT with a novelty reward keep a node for each *path*; they are here to be compared with.

mod audit;
mod grow;
mod node;

pub use audit::{AuditError, Edge};

use indexmap::IndexSet;
use node::{Node, NodeId, PositionId};
use rand::SeedableRng;
use rand::rngs::StdRng;
use rustc_hash::FxBuildHasher;
use std::fmt::Debug;
use std::hash::Hash;

/// A state space of which nothing is known but its steps and which positions are equal.
pub trait StepSpace {
    /// What the player can do.
    type Step: Copy + Debug + Eq + Hash;

    /// The packed position at the start. All positions have as many words.
    fn start(&mut self) -> Box<[u64]>;

    /// Adds the steps that may be tried in a position to `into`, in a fixed order; some may change nothing.
    fn candidates(&mut self, from: &[u64], into: &mut Vec<Self::Step>);

    /// Makes a step: writes the position after it to `to` and returns true, or returns false if it changes nothing.
    fn step(&mut self, from: &[u64], step: Self::Step, to: &mut [u64]) -> bool;

    /// Whether the objective holds. The search stops there.
    fn finished(&mut self, position: &[u64]) -> bool;
}

/// The four kinds of the search.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum TreeKind {
    /// A node for each path; reward 1 for a finished playout.
    Plain,
    /// A node for each path; the reward also counts how many positions of the playout were never seen before.
    Novelty,
    /// A node for each position; a step to a known position is dropped.
    NoDuplicates,
    /// A node for each set of positions that reach each other.
    Folding,
}

/// How the search is tuned. The same settings give the same tree on every run and machine.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TreeSettings {
    /// Which kind.
    pub kind: TreeKind,
    /// Weight of the exploring term of UCB1; the square root of 2 for rewards from 0 to 1 (Auer et al. 2002).
    pub exploration: f64,
    /// Steps of a playout.
    pub playout_steps: u32,
    /// Seed of the random playouts.
    pub seed: u64,
}

impl TreeSettings {
    /// The usual tuning of a kind.
    pub fn of(kind: TreeKind) -> TreeSettings {
        TreeSettings {
            kind,
            exploration: std::f64::consts::SQRT_2,
            playout_steps: 30,
            seed: 1,
        }
    }
}

/// How one iteration ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Growth {
    /// The tree grew.
    Grew,
    /// A finished position was found; see [`TreeSearch::route`].
    Finished,
    /// There is nothing left to try. Without path nodes (see [`TreeSearch::proves`]) no finished position can be reached.
    Closed,
}

/// What the search has done so far.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct TreeCounts {
    /// Calls of [`TreeSearch::grow`] that grew the tree.
    pub iterations: u64,
    /// Nodes that were ever added.
    pub nodes_added: u64,
    /// Nodes in the tree now.
    pub nodes: u64,
    /// Distinct positions in the tree.
    pub positions: u64,
    /// Nodes that collapsed into an ancestor.
    pub collapsed: u64,
}

/// The search. Advance it with [`TreeSearch::grow`]; limits and cancelling are checked outside.
pub struct TreeSearch<S: StepSpace> {
    space: S,
    settings: TreeSettings,
    random: StdRng,
    /// Every position of the tree once; its index is its [`PositionId`].
    registry: IndexSet<Box<[u64]>, FxBuildHasher>,
    /// How each position was first reached: from where and by which step. None for the start.
    reached: Vec<Option<(PositionId, S::Step)>>,
    /// The node of each position when it was added; collapsed nodes point on.
    home: Vec<NodeId>,
    nodes: Vec<Node<S::Step>>,
    /// Positions of playouts seen before, for the novelty reward.
    met: rustc_hash::FxHashSet<Box<[u64]>>,
    counts: TreeCounts,
    finished: Option<Vec<S::Step>>,
    scratch: Vec<u64>,
    bytes: u64,
}

impl<S: StepSpace> TreeSearch<S> {
    /// A tree that holds the start alone.
    pub fn new(mut space: S, settings: TreeSettings) -> TreeSearch<S> {
        let start = space.start();
        let mut search = TreeSearch {
            scratch: vec![0; start.len()],
            random: StdRng::seed_from_u64(settings.seed),
            space,
            settings,
            registry: IndexSet::default(),
            reached: Vec::new(),
            home: Vec::new(),
            nodes: Vec::new(),
            met: Default::default(),
            counts: TreeCounts::default(),
            finished: None,
            bytes: 0,
        };
        if search.space.finished(&start) {
            search.finished = Some(Vec::new());
        }
        search.add_root(start);
        search
    }

    /// Counts so far.
    pub fn counts(&self) -> TreeCounts {
        TreeCounts {
            positions: self.registry.len() as u64,
            ..self.counts
        }
    }

    /// About how many bytes the tree holds.
    pub fn bytes(&self) -> u64 {
        self.bytes
    }

    /// Whether [`Growth::Closed`] proves that no finished position can be reached.
    pub fn proves(&self) -> bool {
        matches!(
            self.settings.kind,
            TreeKind::NoDuplicates | TreeKind::Folding
        )
    }

    /// The steps from the start to the finished position that was found. Not the fewest.
    pub fn route(&self) -> Option<&[S::Step]> {
        self.finished.as_deref()
    }
}
