//! Nodes of the tree and their ids.

/// Index of a position in the registry.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub(super) struct PositionId(pub(super) u32);

impl PositionId {
    pub(super) fn index(self) -> usize {
        self.0 as usize
    }
}

/// Index of a node in the tree's list.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub(super) struct NodeId(pub(super) u32);

impl NodeId {
    pub(super) fn index(self) -> usize {
        self.0 as usize
    }
}

/// Where a node is in its life.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum State {
    /// In the tree, with something left to try below it.
    Open,
    /// In the tree, with nothing left to try below it.
    Closed,
    /// Collapsed into this ancestor.
    Collapsed(NodeId),
}

/// A set of positions that reach each other (one position, unless folding).
#[derive(Debug)]
pub(super) struct Node<Step> {
    pub(super) state: State,
    pub(super) parent: Option<NodeId>,
    /// Its first position; edges are relative to it.
    pub(super) first: PositionId,
    /// The step by which its first position is reached from a position of the parent. Path nodes differ from the registry.
    pub(super) entered_by: Option<(PositionId, Step)>,
    /// Number of positions.
    pub(super) members: u32,
    /// Steps that were not tried yet, with the position that they start from.
    pub(super) untried: Vec<(PositionId, Step)>,
    pub(super) children: Vec<NodeId>,
    /// Steps from elsewhere in the tree that lead here: (from, to).
    pub(super) crossing: Vec<(PositionId, PositionId)>,
    /// Iterations that went through here.
    pub(super) visits: u64,
    /// Iterations that ended here: visits less those of the children.
    pub(super) own_visits: u64,
    /// Rewards of the iterations that went through here.
    pub(super) reward: f64,
}

impl<Step> Node<Step> {
    pub(super) fn new(
        first: PositionId,
        parent: Option<NodeId>,
        entered_by: Option<(PositionId, Step)>,
    ) -> Node<Step> {
        Node {
            state: State::Open,
            parent,
            first,
            entered_by,
            members: 1,
            untried: Vec::new(),
            children: Vec::new(),
            crossing: Vec::new(),
            visits: 0,
            own_visits: 0,
            reward: 0.0,
        }
    }

    /// Nothing is left to try below.
    pub(super) fn close(&mut self) {
        debug_assert_eq!(self.state, State::Open);
        self.state = State::Closed;
    }

    /// Ends its life in the tree.
    pub(super) fn collapse_into(&mut self, ancestor: NodeId) {
        debug_assert!(!matches!(self.state, State::Collapsed(_)));
        self.state = State::Collapsed(ancestor);
    }

    /// Mean reward plus exploring term (UCB1, Auer et al. 2002).
    pub(super) fn upper_confidence(&self, parent_visits: u64, exploration: f64) -> f64 {
        if self.visits == 0 {
            return f64::INFINITY;
        }
        let visits = self.visits as f64;
        let spread = ((parent_visits.max(1) as f64).ln() / visits).sqrt();
        self.reward / visits + exploration * spread
    }
}
