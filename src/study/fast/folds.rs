//! Folds of a closed space and what can be counted over them (rules.md, Folds and Measures).
//!
//! A roam lies within one fold, so folds are the strongly connected components of the roams (Tarjan 1972, without recursion).
//! That method settles a component only after all that it leads to, so that one pass in its order also settles what is alive
//! and the chance of a blind finish.

use super::closure::{Closure, Edges};
use super::meter::Meter;
use crate::study::{MapCounts, UndecidedReason};

const UNSEEN: u32 = u32::MAX;

/// Components in the order in which they are settled, those that lead nowhere first.
struct Components {
    /// By node.
    of: Vec<u32>,
    /// Nodes, component by component.
    members: Vec<u32>,
    /// By component, and one more: where its members begin.
    begin: Vec<u32>,
}

/// Counts the fold map of a closed space.
///
/// # Errors
/// The limit that was met.
pub(super) fn count<const N: usize>(
    closure: &Closure<N>,
    meter: &mut Meter,
) -> Result<MapCounts, UndecidedReason> {
    let nodes = closure.store.nodes() as u64;
    // Index, low, component, members and two stacks, 4 bytes each, and chances of 8.
    let working = closure.bytes() + nodes * 36;
    if meter.spare(working) == 0 {
        return Err(UndecidedReason::Memory);
    }
    meter.note_bytes(working);
    let components = components(&closure.edges, meter, working)?;
    let mut counts = MapCounts {
        folds: components.begin.len() as u64 - 1,
        alive: 0,
        commitments: 0,
        traps: 0,
        positions: (0..nodes as u32)
            .map(|node| u64::from(closure.store.cells(node).count()))
            .sum(),
        blind_finish_chance: 0.0,
    };
    let mut chances: Vec<f64> = Vec::with_capacity(components.begin.len());
    let mut alive: Vec<bool> = Vec::with_capacity(components.begin.len());
    let mut leaving = Vec::new();
    for component in 0..components.begin.len() - 1 {
        meter.spend(1, || working)?;
        let fold = Fold::of(closure, &components, component, &mut leaving);
        let leads_on = leaving
            .iter()
            .any(|&(target, _)| alive[components.of[target as usize] as usize]);
        let lives = fold.finished || leads_on;
        counts.alive += u64::from(lives);
        counts.commitments += leaving.len() as u64;
        if lives {
            let lost =
                |&&(target, _): &&(u32, u16)| !alive[components.of[target as usize] as usize];
            counts.traps += leaving.iter().filter(lost).count() as u64;
        }
        alive.push(lives);
        chances.push(fold.chance(&components, &chances, &mut leaving));
    }
    let start = components.of.first().map_or(0, |&fold| fold as usize);
    counts.blind_finish_chance = chances[start];
    Ok(counts)
}

struct Fold {
    finished: bool,
    /// Whether several of its steps may lead to one position.
    may_repeat: bool,
}

impl Fold {
    /// Looks at one fold and collects the steps that leave it.
    fn of<const N: usize>(
        closure: &Closure<N>,
        components: &Components,
        component: usize,
        leaving: &mut Vec<(u32, u16)>,
    ) -> Fold {
        leaving.clear();
        let members =
            components.begin[component] as usize..components.begin[component + 1] as usize;
        let mut fold = Fold {
            finished: false,
            may_repeat: members.len() > 1,
        };
        for &node in &components.members[members] {
            fold.finished |= closure.finished[node as usize];
            for edge in closure.edges.of(node) {
                let target = closure.edges.target[edge];
                if components.of[target as usize] as usize != component {
                    // A walk onto an exit keeps the set; several cells may lead to one exit.
                    fold.may_repeat |= closure.store.set_of(target) == closure.store.set_of(node);
                    leaving.push((target, closure.edges.cell[edge]));
                }
            }
        }
        fold
    }

    /// The chance of a blind finish, given those of all folds that this one leads to.
    fn chance(
        &self,
        components: &Components,
        chances: &[f64],
        leaving: &mut Vec<(u32, u16)>,
    ) -> f64 {
        if self.finished {
            return 1.0;
        }
        if self.may_repeat {
            leaving.sort_unstable();
            leaving.dedup();
        }
        if leaving.is_empty() {
            return 0.0;
        }
        let sum: f64 = leaving
            .iter()
            .map(|&(target, _)| chances[components.of[target as usize] as usize])
            .sum();
        sum / leaving.len() as f64
    }
}

fn components(
    edges: &Edges,
    meter: &mut Meter,
    working: u64,
) -> Result<Components, UndecidedReason> {
    let nodes = edges.begin.len() - 1;
    let mut found = Components {
        of: vec![UNSEEN; nodes],
        members: Vec::with_capacity(nodes),
        begin: vec![0],
    };
    let mut low = vec![UNSEEN; nodes];
    let mut pending: Vec<u32> = Vec::new();
    // Everything is reached from node 0. Each entry: a node, its index, and its next edge.
    let mut path: Vec<(u32, u32, u32)> = vec![(0, 0, edges.begin[0])];
    let mut next_index = 1;
    low[0] = 0;
    pending.push(0);
    while let Some(&mut (node, index, ref mut next)) = path.last_mut() {
        if *next < edges.begin[node as usize + 1] {
            let target = edges.target[*next as usize];
            *next += 1;
            if low[target as usize] == UNSEEN {
                meter.spend(1, || working)?;
                low[target as usize] = next_index;
                pending.push(target);
                path.push((target, next_index, edges.begin[target as usize]));
                next_index += 1;
            } else if found.of[target as usize] == UNSEEN {
                low[node as usize] = low[node as usize].min(low[target as usize]);
            }
            continue;
        }
        path.pop();
        let own = low[node as usize];
        if own == index {
            settle(&mut found, &mut pending, node);
        }
        if let Some(&(parent, _, _)) = path.last() {
            low[parent as usize] = low[parent as usize].min(own);
        }
    }
    Ok(found)
}

fn settle(found: &mut Components, pending: &mut Vec<u32>, root: u32) {
    let component = found.begin.len() as u32 - 1;
    while let Some(member) = pending.pop() {
        found.of[member as usize] = component;
        found.members.push(member);
        if member == root {
            break;
        }
    }
    found.begin.push(found.members.len() as u32);
}
