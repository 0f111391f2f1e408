//! Tree search on random graphs: the invariants hold after every growth, and a closed tree is the whole space.

use foldwright::search::tree::{Growth, StepSpace, TreeKind, TreeSearch, TreeSettings};
use petgraph::algo::tarjan_scc;
use petgraph::graphmap::DiGraphMap;
use rand::rngs::StdRng;
use rand::{Rng, SeedableRng};
use rustc_hash::FxBuildHasher;

/// A random graph of one-word positions: many steps both ways, some one way, perhaps a finished position.
#[derive(Clone)]
struct Graph {
    edges: Vec<Vec<u64>>,
    finished: Option<u64>,
}

impl Graph {
    fn random(seed: u64, with_goal: bool) -> Graph {
        let mut random = StdRng::seed_from_u64(seed);
        let nodes = random.random_range(2..60);
        let mut edges = vec![Vec::new(); nodes];
        for _ in 0..nodes * 2 {
            let (from, to) = (random.random_range(0..nodes), random.random_range(0..nodes));
            edges[from].push(to as u64);
            if random.random_bool(0.5) {
                edges[to].push(from as u64);
            }
        }
        let finished = with_goal.then(|| random.random_range(0..nodes as u64));
        Graph { edges, finished }
    }

    fn reachable(&self) -> Vec<u64> {
        let (mut seen, mut next) = (vec![0_u64], 0);
        while next < seen.len() {
            for &to in &self.edges[seen[next] as usize] {
                if !seen.contains(&to) {
                    seen.push(to);
                }
            }
            next += 1;
        }
        seen
    }
}

impl StepSpace for Graph {
    type Step = u16;

    fn start(&mut self) -> Box<[u64]> {
        Box::new([0])
    }

    fn candidates(&mut self, from: &[u64], into: &mut Vec<u16>) {
        into.extend(0..self.edges[from[0] as usize].len() as u16);
    }

    fn step(&mut self, from: &[u64], step: u16, to: &mut [u64]) -> bool {
        to[0] = self.edges[from[0] as usize][usize::from(step)];
        to[0] != from[0]
    }

    fn finished(&mut self, position: &[u64]) -> bool {
        self.finished == Some(position[0])
    }
}

fn search(graph: &Graph, kind: TreeKind, playout_steps: u32) -> TreeSearch<Graph> {
    let settings = TreeSettings {
        playout_steps,
        ..TreeSettings::of(kind)
    };
    TreeSearch::new(graph.clone(), settings)
}

const KINDS: [TreeKind; 4] = [
    TreeKind::Plain,
    TreeKind::Novelty,
    TreeKind::NoDuplicates,
    TreeKind::Folding,
];

#[test]
fn after_every_growth_visits_add_up_edges_replay_and_no_position_stands_twice() {
    for seed in 0..300 {
        let graph = Graph::random(seed, false);
        for kind in KINDS {
            let mut tree = search(&graph, kind, 5);
            for growth in 0..200 {
                let grew = tree.grow();
                assert_eq!(
                    tree.audit(),
                    Ok(()),
                    "seed {seed}, {kind:?}, growth {growth}"
                );
                if grew != Growth::Grew {
                    break;
                }
            }
        }
    }
}

#[test]
fn a_closed_tree_without_a_finished_position_has_seen_the_whole_space() {
    for seed in 0..500 {
        let graph = Graph::random(seed, false);
        for kind in [TreeKind::NoDuplicates, TreeKind::Folding] {
            let mut tree = search(&graph, kind, 3);
            while tree.grow() == Growth::Grew {}
            assert!(tree.proves());
            assert_eq!(
                tree.counts().positions,
                graph.reachable().len() as u64,
                "seed {seed}"
            );
        }
    }
}

#[test]
fn a_finished_position_is_found_exactly_when_it_can_be_reached_and_its_route_replays() {
    let mut found = 0;
    for seed in 0..500 {
        let graph = Graph::random(seed, true);
        let goal = graph.finished.expect("asked for");
        for kind in [TreeKind::NoDuplicates, TreeKind::Folding] {
            let mut tree = search(&graph, kind, 3);
            let mut end = tree.grow();
            while end == Growth::Grew {
                end = tree.grow();
            }
            let reachable = graph.reachable().contains(&goal);
            assert_eq!(end == Growth::Finished, reachable, "seed {seed}, {kind:?}");
            let Some(route) = tree.route() else { continue };
            let end = route
                .iter()
                .fold(0, |at, &step| graph.edges[at as usize][usize::from(step)]);
            assert_eq!(end, goal, "seed {seed}, {kind:?}");
            found += 1;
        }
    }
    assert!(
        found > 300,
        "only {found} of the random graphs had a goal in reach"
    );
}

#[test]
fn folds_never_join_what_petgraph_says_is_apart_and_mostly_join_what_is_together() {
    let (mut folds, mut components) = (0, 0);
    for seed in 0..500 {
        let graph = Graph::random(seed, false);
        let mut tree = search(&graph, TreeKind::Folding, 0);
        while tree.grow() == Growth::Grew {}
        let mut steps = DiGraphMap::<u64, (), FxBuildHasher>::default();
        for from in graph.reachable() {
            steps.add_node(from);
            for &to in &graph.edges[from as usize] {
                steps.add_edge(from, to, ());
            }
        }
        let exact = tarjan_scc(&steps).len() as u64;
        assert!(tree.counts().nodes >= exact, "seed {seed}");
        folds += tree.counts().nodes;
        components += exact;
    }
    assert!(
        folds < components * 11 / 10,
        "{folds} nodes for {components} components"
    );
}

#[test]
fn the_same_settings_grow_the_same_tree() {
    let graph = Graph::random(7, false);
    for kind in KINDS {
        let grown = || {
            let mut tree = search(&graph, kind, 8);
            (0..100).for_each(|_| {
                tree.grow();
            });
            (tree.counts(), tree.edge_steps())
        };
        assert_eq!(grown(), grown(), "{kind:?}");
    }
}
