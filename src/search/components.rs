//! Strongly connected components.

/// Tarjan's algorithm (1972), without recursion: the component of each of `count` nodes, and the number of components.
///
/// `successor(node, at)` gives the `at`-th successor of a node, or none past the last. Components are numbered so that
/// every edge leads to a component of the same or a smaller number: a pass over components from 0 on sees what lies ahead
/// first. Time is linear in nodes and edges; memory is 16 bytes a node, and 8 more along the deepest path.
pub fn strongly_connected(
    count: usize,
    mut successor: impl FnMut(u32, usize) -> Option<u32>,
) -> (Vec<u32>, u32) {
    const UNSEEN: u32 = u32::MAX;
    let mut order = vec![UNSEEN; count];
    let mut low = vec![0u32; count];
    let mut component = vec![UNSEEN; count];
    let mut stack: Vec<u32> = Vec::new();
    let mut path: Vec<(u32, u32)> = Vec::new();
    let (mut met, mut components) = (0u32, 0u32);
    for root in 0..count as u32 {
        if order[root as usize] != UNSEEN {
            continue;
        }
        path.push((root, 0));
        while let Some(&mut (node, ref mut at)) = path.last_mut() {
            let here = node as usize;
            if *at == 0 && order[here] == UNSEEN {
                order[here] = met;
                low[here] = met;
                met += 1;
                stack.push(node);
            }
            if let Some(next) = successor(node, *at as usize) {
                *at += 1;
                let there = next as usize;
                if order[there] == UNSEEN {
                    path.push((next, 0));
                } else if component[there] == UNSEEN {
                    low[here] = low[here].min(order[there]);
                }
                continue;
            }
            path.pop();
            if let Some(&(above, _)) = path.last() {
                low[above as usize] = low[above as usize].min(low[here]);
            }
            if low[here] == order[here] {
                while let Some(member) = stack.pop() {
                    component[member as usize] = components;
                    if member == node {
                        break;
                    }
                }
                components += 1;
            }
        }
    }
    (component, components)
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::rngs::StdRng;
    use rand::{Rng, SeedableRng};

    fn edges(rng: &mut StdRng, nodes: u32) -> Vec<Vec<u32>> {
        let many = rng.random_range(1..4);
        (0..nodes)
            .map(|_| {
                let out = rng.random_range(0..many);
                (0..out).map(|_| rng.random_range(0..nodes)).collect()
            })
            .collect()
    }

    #[test]
    fn components_equal_those_of_petgraph_and_come_sinks_first() {
        let mut rng = StdRng::seed_from_u64(72);
        for _ in 0..500 {
            let nodes = rng.random_range(1..60);
            let lists = edges(&mut rng, nodes);
            let (component, count) = strongly_connected(lists.len(), |node, at| {
                lists[node as usize].get(at).copied()
            });
            let mut graph =
                petgraph::graphmap::DiGraphMap::<u32, (), rustc_hash::FxBuildHasher>::default();
            (0..nodes).for_each(|node| {
                graph.add_node(node);
            });
            for (from, tos) in lists.iter().enumerate() {
                for &to in tos {
                    graph.add_edge(from as u32, to, ());
                    assert!(component[to as usize] <= component[from]);
                }
            }
            let theirs = petgraph::algo::tarjan_scc(&graph);
            assert_eq!(theirs.len(), count as usize);
            for members in theirs {
                assert!(
                    members
                        .iter()
                        .all(|&m| component[m as usize] == component[members[0] as usize])
                );
            }
        }
    }
}
