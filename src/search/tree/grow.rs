//! How the tree grows: descent, one new node, playout, rewards up; and how cycles collapse.

use super::node::{Node, NodeId, PositionId, State};
use super::{Growth, StepSpace, TreeKind, TreeSearch};
use rand::seq::IndexedRandom;

/// What trying one step came to.
enum Tried {
    /// A node was added.
    Added(NodeId),
    /// The position stands in the tree already, or nothing changed.
    Nothing,
    /// A cycle was closed; the descent stands at this node now.
    Folded(NodeId),
}

impl<S: StepSpace> TreeSearch<S> {
    pub(super) fn add_root(&mut self, start: Box<[u64]>) {
        let (first, _) = self.register(&start, None);
        self.add_node(first, None, None);
    }

    /// One iteration: down to a node with untried steps, one node more, a playout from it, its reward up to the root.
    pub fn grow(&mut self) -> Growth {
        if self.finished.is_some() {
            return Growth::Finished;
        }
        let root = NodeId(0);
        while self.nodes[root.index()].state == State::Open {
            let leaf = self.descend(root);
            if let Some(added) = self.expand(leaf) {
                self.counts.iterations += 1;
                let reward = self.play_out(added);
                self.back_up(added, reward);
                return if self.finished.is_some() {
                    Growth::Finished
                } else {
                    Growth::Grew
                };
            }
        }
        Growth::Closed
    }

    /// Follows the best upper confidence down to a node with untried steps. The node given must be open.
    fn descend(&self, from: NodeId) -> NodeId {
        let mut at = from;
        while self.nodes[at.index()].untried.is_empty() {
            let node = &self.nodes[at.index()];
            let best = node
                .children
                .iter()
                .filter(|child| self.nodes[child.index()].state == State::Open)
                .map(|&child| {
                    (
                        self.nodes[child.index()]
                            .upper_confidence(node.visits, self.settings.exploration),
                        child,
                    )
                })
                .reduce(|best, next| if next.0 > best.0 { next } else { best });
            match best {
                Some((_, child)) => at = child,
                // An open node has untried steps or an open child.
                None => return at,
            }
        }
        at
    }

    /// Tries steps at a node until one adds a node. None if they ran out; then what has nothing left is closed.
    fn expand(&mut self, leaf: NodeId) -> Option<NodeId> {
        let mut at = leaf;
        while let Some((from, step)) = self.take_untried(at) {
            match self.try_step(at, from, step) {
                Tried::Added(node) => return Some(node),
                Tried::Nothing => {}
                Tried::Folded(node) => at = node,
            }
        }
        self.close_upward(at);
        None
    }

    /// The untried steps of a node are taken in random order, so that none is favoured by its place in the list.
    fn take_untried(&mut self, at: NodeId) -> Option<(PositionId, S::Step)> {
        use rand::Rng;
        let untried = &mut self.nodes[at.index()].untried;
        if untried.is_empty() {
            return None;
        }
        let pick = self.random.random_range(0..untried.len());
        Some(untried.swap_remove(pick))
    }

    fn try_step(&mut self, at: NodeId, from: PositionId, step: S::Step) -> Tried {
        let mut to = std::mem::take(&mut self.scratch);
        let changed = self.space.step(&self.registry[from.index()], step, &mut to);
        let tried = if changed {
            self.enter(at, from, step, &to)
        } else {
            Tried::Nothing
        };
        self.scratch = to;
        tried
    }

    fn enter(&mut self, at: NodeId, from: PositionId, step: S::Step, to: &[u64]) -> Tried {
        let (position, known) = self.register(to, Some((from, step)));
        let by_path = matches!(self.settings.kind, TreeKind::Plain | TreeKind::Novelty);
        if known && !by_path {
            return self.meet(at, from, position);
        }
        let node = self.add_node(position, Some(at), Some((from, step)));
        if self.space.finished(to) {
            self.finished = Some(self.steps_to(node));
        }
        Tried::Added(node)
    }

    /// A step leads to a position that stands in the tree.
    fn meet(&mut self, at: NodeId, from: PositionId, to: PositionId) -> Tried {
        if self.settings.kind != TreeKind::Folding {
            return Tried::Nothing;
        }
        let target = self.node_of(to);
        if target == at {
            return Tried::Nothing;
        }
        if !self.is_above(target, at) {
            self.nodes[target.index()].crossing.push((from, to));
            self.bytes += size_of::<(PositionId, PositionId)>() as u64;
            return Tried::Nothing;
        }
        self.collapse(target, at);
        self.collapse_crossings(target);
        Tried::Folded(target)
    }

    /// Collapses the path from `ancestor` down to `from` into `ancestor`.
    fn collapse(&mut self, ancestor: NodeId, from: NodeId) {
        let mut path = Vec::new();
        let mut at = from;
        while at != ancestor {
            path.push(at);
            match self.nodes[at.index()].parent {
                Some(parent) => at = parent,
                None => return,
            }
        }
        for &node in &path {
            let taken = &mut self.nodes[node.index()];
            taken.collapse_into(ancestor);
            let (untried, children) = (
                std::mem::take(&mut taken.untried),
                std::mem::take(&mut taken.children),
            );
            let (crossing, members, own) = (
                std::mem::take(&mut taken.crossing),
                taken.members,
                taken.own_visits,
            );
            for &child in &children {
                self.nodes[child.index()].parent = Some(ancestor);
            }
            let into = &mut self.nodes[ancestor.index()];
            into.untried.extend(untried);
            into.children.extend(children);
            into.crossing.extend(crossing);
            into.members += members;
            into.own_visits += own;
        }
        let nodes = &mut self.nodes;
        let mut children = std::mem::take(&mut nodes[ancestor.index()].children);
        children.retain(|child| !matches!(nodes[child.index()].state, State::Collapsed(_)));
        nodes[ancestor.index()].children = children;
        self.counts.nodes -= path.len() as u64;
        self.counts.collapsed += path.len() as u64;
    }

    /// Steps from below `node` that were remembered as leading to what has collapsed into it close cycles, too.
    fn collapse_crossings(&mut self, node: NodeId) {
        let mut waiting = std::mem::take(&mut self.nodes[node.index()].crossing);
        let mut kept = Vec::new();
        while let Some((from, to)) = waiting.pop() {
            let source = self.node_of(from);
            if source == node {
                continue;
            }
            if self.is_above(node, source) {
                self.collapse(node, source);
                waiting.append(&mut self.nodes[node.index()].crossing);
                waiting.append(&mut kept);
            } else {
                kept.push((from, to));
            }
        }
        self.nodes[node.index()].crossing = kept;
        let open = |child: &NodeId| self.nodes[child.index()].state == State::Open;
        debug_assert!(
            self.nodes[node.index()].state == State::Open
                || !self.nodes[node.index()].children.iter().any(open)
        );
    }

    /// Random steps from a new node; the reward is from 0 to 1.
    fn play_out(&mut self, node: NodeId) -> f64 {
        if self.finished.is_some() {
            return 1.0;
        }
        let mut at = self.registry[self.nodes[node.index()].first.index()].to_vec();
        let mut next = vec![0; at.len()];
        let (mut steps, mut made, mut fresh) = (Vec::new(), Vec::new(), 0_u32);
        for _ in 0..self.settings.playout_steps {
            steps.clear();
            self.space.candidates(&at, &mut steps);
            let Some(&step) = steps.choose(&mut self.random) else {
                break;
            };
            if self.space.step(&at, step, &mut next) {
                std::mem::swap(&mut at, &mut next);
                made.push(step);
                if self.space.finished(&at) {
                    let mut route = self.steps_to(node);
                    route.extend(made);
                    self.finished = Some(route);
                    return 1.0;
                }
                if self.settings.kind == TreeKind::Novelty && self.met.insert(at.clone().into()) {
                    fresh += 1;
                    self.bytes += (at.len() * 8 + 24) as u64;
                }
            }
        }
        f64::from(fresh) / f64::from(self.settings.playout_steps.max(1))
    }

    fn back_up(&mut self, from: NodeId, reward: f64) {
        self.nodes[from.index()].own_visits += 1;
        let mut at = Some(from);
        while let Some(node) = at {
            let node = &mut self.nodes[node.index()];
            node.visits += 1;
            node.reward += reward;
            at = node.parent;
        }
    }

    /// Closes a node that has nothing left to try, and those above it of which it was the last.
    fn close_upward(&mut self, from: NodeId) {
        let mut at = Some(from);
        while let Some(id) = at {
            let node = &self.nodes[id.index()];
            let open = |child: &NodeId| self.nodes[child.index()].state == State::Open;
            if node.state != State::Open
                || !node.untried.is_empty()
                || node.children.iter().any(open)
            {
                return;
            }
            self.nodes[id.index()].close();
            at = self.nodes[id.index()].parent;
        }
    }

    /// The id of a position, and whether it was known.
    fn register(
        &mut self,
        position: &[u64],
        reached: Option<(PositionId, S::Step)>,
    ) -> (PositionId, bool) {
        if let Some(known) = self.registry.get_index_of(position) {
            return (PositionId(known as u32), true);
        }
        let id = PositionId(self.registry.len() as u32);
        self.registry.insert(position.into());
        self.reached.push(reached);
        self.bytes += (position.len() * 8
            + size_of::<(Box<[u64]>, u64)>()
            + size_of::<(PositionId, S::Step)>()
            + 16) as u64;
        (id, false)
    }

    fn add_node(
        &mut self,
        first: PositionId,
        parent: Option<NodeId>,
        entered_by: Option<(PositionId, S::Step)>,
    ) -> NodeId {
        let id = NodeId(self.nodes.len() as u32);
        let mut node = Node::new(first, parent, entered_by);
        let mut steps = Vec::new();
        self.space
            .candidates(&self.registry[first.index()], &mut steps);
        node.untried
            .extend(steps.into_iter().map(|step| (first, step)));
        self.bytes += (size_of::<Node<S::Step>>()
            + node.untried.len() * size_of::<(PositionId, S::Step)>()) as u64;
        self.nodes.push(node);
        if first.index() == self.home.len() {
            self.home.push(id);
        }
        if let Some(parent) = parent {
            self.nodes[parent.index()].children.push(id);
        }
        self.counts.nodes += 1;
        self.counts.nodes_added += 1;
        id
    }

    /// The node in which a position stands now. Shortens the chain of collapsed nodes that it follows.
    pub(super) fn node_of(&mut self, position: PositionId) -> NodeId {
        let mut at = self.home[position.index()];
        while let State::Collapsed(into) = self.nodes[at.index()].state {
            at = into;
        }
        self.home[position.index()] = at;
        at
    }

    fn is_above(&self, ancestor: NodeId, node: NodeId) -> bool {
        let mut at = self.nodes[node.index()].parent;
        while let Some(above) = at {
            if above == ancestor {
                return true;
            }
            at = self.nodes[above.index()].parent;
        }
        false
    }

    /// The steps from the start to the first position of a node.
    fn steps_to(&mut self, node: NodeId) -> Vec<S::Step> {
        let mut edges = Vec::new();
        let mut at = Some(node);
        while let Some(id) = at {
            edges.push(self.edge_of(id));
            at = self.nodes[id.index()].parent;
        }
        edges.into_iter().rev().flatten().collect()
    }

    /// The steps from the first position of a node's parent to its own; none for the root.
    pub(super) fn edge_of(&self, node: NodeId) -> Vec<S::Step> {
        let node = &self.nodes[node.index()];
        let (Some(parent), Some((mut at, last))) = (node.parent, node.entered_by) else {
            return Vec::new();
        };
        let goal = self.nodes[parent.index()].first;
        let mut steps = vec![last];
        while at != goal
            && let Some((before, step)) = self.reached[at.index()]
        {
            steps.push(step);
            at = before;
        }
        steps.reverse();
        steps
    }
}
