//! The invariants of the tree, checked one by one. For tests; a whole audit costs a replay of every edge.

use super::node::{NodeId, PositionId, State};
use super::{StepSpace, TreeKind, TreeSearch};
use thiserror::Error;

/// An invariant that does not hold.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum AuditError {
    /// Visits of a node are not those of its children and its own together.
    #[error("node {node}: {visits} visits, {counted} counted below it")]
    Visits {
        /// Which node.
        node: u32,
        /// As noted.
        visits: u64,
        /// Own and children's.
        counted: u64,
    },
    /// The steps of an edge do not lead from the first position of the parent to that of the child.
    #[error("the edge to node {node} does not replay")]
    Edge {
        /// Which node.
        node: u32,
    },
    /// Members of the nodes in the tree are not the positions of the registry, each once.
    #[error("{members} members in the tree, {positions} positions in the registry")]
    Members {
        /// Counted over the tree.
        members: u64,
        /// In the registry.
        positions: u64,
    },
    /// A node can't be reached from the root through the lists of children.
    #[error("{listed} nodes listed below the root, {counted} counted")]
    Nodes {
        /// By walking the tree.
        listed: u64,
        /// As noted.
        counted: u64,
    },
}

/// An edge of the tree: its steps, the first position of the parent, the first position of the child.
pub type Edge<Step> = (Vec<Step>, Box<[u64]>, Box<[u64]>);

impl<S: StepSpace> TreeSearch<S> {
    /// Checks that visits add up, that every edge replays, that no position stands twice and that no node is lost.
    ///
    /// # Errors
    /// The first invariant that does not hold.
    pub fn audit(&mut self) -> Result<(), AuditError> {
        let listed = self.listed();
        if listed.len() as u64 != self.counts.nodes {
            return Err(AuditError::Nodes {
                listed: listed.len() as u64,
                counted: self.counts.nodes,
            });
        }
        for &node in &listed {
            self.audit_visits(node)?;
            self.audit_edge(node)?;
        }
        if matches!(
            self.settings.kind,
            TreeKind::NoDuplicates | TreeKind::Folding
        ) {
            self.audit_members(&listed)?;
        }
        Ok(())
    }

    /// The lists of steps on the edges below the root and deeper: (steps, first position of the parent, of the child).
    pub fn edge_steps(&self) -> Vec<Edge<S::Step>> {
        let place = |id: PositionId| self.registry[id.index()].clone();
        let edge = |&id: &NodeId| {
            let node = &self.nodes[id.index()];
            let parent = node.parent?;
            Some((
                self.edge_of(id),
                place(self.nodes[parent.index()].first),
                place(node.first),
            ))
        };
        self.listed().iter().filter_map(edge).collect()
    }

    /// The nodes of the tree, by walking it.
    fn listed(&self) -> Vec<NodeId> {
        let mut listed = vec![NodeId(0)];
        let mut next = 0;
        while next < listed.len() {
            listed.extend(&self.nodes[listed[next].index()].children);
            next += 1;
        }
        listed
    }

    fn audit_visits(&self, id: NodeId) -> Result<(), AuditError> {
        let node = &self.nodes[id.index()];
        let below: u64 = node
            .children
            .iter()
            .map(|child| self.nodes[child.index()].visits)
            .sum();
        let counted = node.own_visits + below;
        if counted == node.visits {
            Ok(())
        } else {
            Err(AuditError::Visits {
                node: id.0,
                visits: node.visits,
                counted,
            })
        }
    }

    fn audit_edge(&mut self, id: NodeId) -> Result<(), AuditError> {
        let Some(parent) = self.nodes[id.index()].parent else {
            return Ok(());
        };
        let mut at = self.registry[self.nodes[parent.index()].first.index()].to_vec();
        let mut next = vec![0; at.len()];
        for step in self.edge_of(id) {
            if !self.space.step(&at, step, &mut next) {
                return Err(AuditError::Edge { node: id.0 });
            }
            std::mem::swap(&mut at, &mut next);
        }
        let goal = &self.registry[self.nodes[id.index()].first.index()];
        if at[..] == goal[..] {
            Ok(())
        } else {
            Err(AuditError::Edge { node: id.0 })
        }
    }

    fn audit_members(&mut self, listed: &[NodeId]) -> Result<(), AuditError> {
        let positions = self.registry.len() as u64;
        let members: u64 = listed
            .iter()
            .map(|id| u64::from(self.nodes[id.index()].members))
            .sum();
        let mut counted = vec![0_u32; self.nodes.len()];
        for position in 0..self.registry.len() {
            counted[self.node_of(PositionId(position as u32)).index()] += 1;
        }
        let alike = self
            .nodes
            .iter()
            .zip(&counted)
            .all(|(node, &counted)| match node.state {
                State::Collapsed(_) => counted == 0,
                State::Open | State::Closed => counted == node.members,
            });
        if members == positions && alike {
            Ok(())
        } else {
            Err(AuditError::Members { members, positions })
        }
    }
}
