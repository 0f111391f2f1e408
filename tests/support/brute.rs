//! Answers by plain exploration: every position kept whole, every step asked of the plain interpreter.

use foldwright::level::{Cell, Dir, Level, Mechanics};
use foldwright::study::{MapCounts, TileClass};
use foldwright::verify::plain::{Act, Body, Position, World};
use petgraph::algo::tarjan_scc;
use petgraph::graphmap::DiGraphMap;
use rustc_hash::{FxBuildHasher, FxHashMap};
use std::collections::{BTreeMap, BTreeSet, VecDeque};

/// One step of the step graph.
#[derive(Clone, Debug)]
pub struct Edge {
    pub act: Act,
    pub to: usize,
    pub pushed: bool,
    /// Under Drag: the cells of the moved block before and after the step.
    pub before: Option<Vec<Cell>>,
    pub after: Option<Vec<Cell>>,
}

/// The whole step graph of a level. Position 0 is the start; finished positions have no outgoing edges.
pub struct Space {
    pub positions: Vec<Position>,
    pub finished: Vec<bool>,
    pub edges: Vec<Vec<Edge>>,
    /// Cells that a body came onto in some step, or stood on at the start.
    pub touched: BTreeSet<Cell>,
}

/// Explores everything, or gives up beyond `most` positions.
pub fn explore(world: &World, most: usize) -> Option<Space> {
    let mut number: FxHashMap<Position, usize> = FxHashMap::default();
    number.insert(world.start().clone(), 0);
    let mut space = Space {
        positions: vec![world.start().clone()],
        finished: Vec::new(),
        edges: Vec::new(),
        touched: covered(&world.start().bodies),
    };
    let mut at = 0;
    while at < space.positions.len() {
        let position = space.positions[at].clone();
        let finished = world.finished(&position);
        let mut edges = Vec::new();
        let steps = if finished {
            Vec::new()
        } else {
            world.steps(&position)
        };
        for (act, stepped) in steps {
            let known = space.positions.len();
            let to = *number.entry(stepped.position.clone()).or_insert(known);
            if to == known {
                space.positions.push(stepped.position);
            }
            space.touched.extend(stepped.touched);
            edges.push(Edge {
                act,
                to,
                pushed: stepped.pushed,
                before: block_of(&position, act),
                after: stepped.dragged,
            });
        }
        if space.positions.len() > most {
            return None;
        }
        space.finished.push(finished);
        space.edges.push(edges);
        at += 1;
    }
    Some(space)
}

fn covered(bodies: &[Body]) -> BTreeSet<Cell> {
    bodies
        .iter()
        .flat_map(|body| body.cells.iter().copied())
        .collect()
}

fn block_of(position: &Position, act: Act) -> Option<Vec<Cell>> {
    let Act::Drag(cell, _) = act else { return None };
    position
        .bodies
        .iter()
        .find(|body| body.cells.contains(&cell))
        .map(|body| body.cells.clone())
}

impl Space {
    /// The fewest steps to a finished position.
    pub fn par_steps(&self) -> Option<u32> {
        let mut depth = vec![None; self.positions.len()];
        depth[0] = Some(0);
        let mut queue = VecDeque::from([0]);
        while let Some(at) = queue.pop_front() {
            if self.finished[at] {
                return depth[at];
            }
            for edge in &self.edges[at] {
                if depth[edge.to].is_none() {
                    depth[edge.to] = depth[at].map(|d: u32| d + 1);
                    queue.push_back(edge.to);
                }
            }
        }
        None
    }

    /// The fewest pushes; under Drag the fewest moves. A node is a position together with the block moved last, because
    /// that block may go on for nothing. Under Steer no block is ever known, and pushes cost one each.
    pub fn par_pushes(&self) -> Option<u32> {
        type Node = (usize, Option<Vec<Cell>>);
        let mut best: BTreeMap<Node, u32> = BTreeMap::from([((0, None), 0)]);
        let mut queue: VecDeque<(Node, u32)> = VecDeque::from([((0, None), 0)]);
        while let Some((node, cost)) = queue.pop_front() {
            if best[&node] < cost {
                continue;
            }
            let (at, last) = node;
            if self.finished[at] {
                return Some(cost);
            }
            for edge in &self.edges[at] {
                let free = match &edge.before {
                    Some(_) => edge.before == last,
                    None => !edge.pushed,
                };
                let next: Node = (edge.to, edge.after.clone());
                let next_cost = cost + u32::from(!free);
                if best.get(&next).is_some_and(|&known| known <= next_cost) {
                    continue;
                }
                best.insert(next.clone(), next_cost);
                if free {
                    queue.push_front((next, next_cost));
                } else {
                    queue.push_back((next, next_cost));
                }
            }
        }
        None
    }

    /// Number of each position's fold, and the number of folds. The components come from petgraph, in an order in which
    /// every fold comes before those that lead to it.
    pub fn folds(&self) -> (Vec<usize>, usize) {
        let mut graph: DiGraphMap<usize, (), FxBuildHasher> = DiGraphMap::default();
        for (from, edges) in self.edges.iter().enumerate() {
            graph.add_node(from);
            for edge in edges {
                graph.add_edge(from, edge.to, ());
            }
        }
        let components = tarjan_scc(&graph);
        let mut fold = vec![0; self.positions.len()];
        for (number, component) in components.iter().enumerate() {
            for &at in component {
                fold[at] = number;
            }
        }
        (fold, components.len())
    }

    /// Ordered pairs of positions in different folds that a step leads from and to.
    pub fn commitments(&self, fold: &[usize]) -> BTreeSet<(usize, usize)> {
        self.edges
            .iter()
            .enumerate()
            .flat_map(|(from, edges)| edges.iter().map(move |edge| (from, edge.to)))
            .filter(|&(from, to)| fold[from] != fold[to])
            .collect()
    }

    /// For each position, whether a finished one can be reached: by going backward from these.
    pub fn alive(&self) -> Vec<bool> {
        let mut into = vec![Vec::new(); self.positions.len()];
        for (from, edges) in self.edges.iter().enumerate() {
            for edge in edges {
                into[edge.to].push(from);
            }
        }
        let mut alive = self.finished.clone();
        let mut open: Vec<usize> = (0..alive.len()).filter(|&at| alive[at]).collect();
        while let Some(at) = open.pop() {
            for &from in &into[at] {
                if !alive[from] {
                    alive[from] = true;
                    open.push(from);
                }
            }
        }
        alive
    }

    /// The counts of the whole map.
    pub fn map(&self) -> MapCounts {
        let (fold, folds) = self.folds();
        let alive = self.alive();
        let commitments = self.commitments(&fold);
        let alive_folds: BTreeSet<usize> = (0..fold.len())
            .filter(|&at| alive[at])
            .map(|at| fold[at])
            .collect();
        let is_trap = |&&(from, to): &&(usize, usize)| alive[from] && !alive[to];
        MapCounts {
            folds: folds as u64,
            alive: alive_folds.len() as u64,
            commitments: commitments.len() as u64,
            traps: commitments.iter().filter(is_trap).count() as u64,
            positions: self.positions.len() as u64,
            blind_finish_chance: self.blind_finish_chance(&fold, folds, &commitments),
        }
    }

    /// Sends a mass of one down from the start's fold, shared evenly at each fold among the positions that its commitments
    /// lead to, and adds up what arrives at finished positions.
    fn blind_finish_chance(
        &self,
        fold: &[usize],
        folds: usize,
        commitments: &BTreeSet<(usize, usize)>,
    ) -> f64 {
        let mut targets = vec![BTreeSet::new(); folds];
        for &(from, to) in commitments {
            targets[fold[from]].insert(to);
        }
        let mut mass = vec![0.0; folds];
        mass[fold[0]] = 1.0;
        for from in (0..folds).rev() {
            let share = mass[from] / targets[from].len() as f64;
            for &to in &targets[from] {
                mass[fold[to]] += share;
            }
        }
        (0..fold.len())
            .filter(|&at| self.finished[at])
            .map(|at| mass[fold[at]])
            .sum()
    }
}

/// The fewest steps, by breadth-first search that stops at the first finished position. The outer `None` is giving up.
pub fn par_steps(world: &World, most: usize) -> Option<Option<u32>> {
    let mut depth: FxHashMap<Position, u32> = FxHashMap::default();
    depth.insert(world.start().clone(), 0);
    let mut queue = VecDeque::from([world.start().clone()]);
    while let Some(position) = queue.pop_front() {
        let steps = depth[&position];
        if world.finished(&position) {
            return Some(Some(steps));
        }
        for (_, stepped) in world.steps(&position) {
            if !depth.contains_key(&stepped.position) {
                depth.insert(stepped.position.clone(), steps + 1);
                queue.push_back(stepped.position);
            }
        }
        if depth.len() > most {
            return None;
        }
    }
    Some(None)
}

/// The class of every tile by closing each in turn and searching again; `None` if some search gave up.
pub fn tile_classes(
    mechanics: &Mechanics,
    level: &Level,
    space: &Space,
    most: usize,
) -> Option<Vec<TileClass>> {
    let world = World::new(mechanics, level);
    let par = space.par_steps();
    let furnished = |cell: Cell| {
        level.body_at(cell).is_some()
            || level.item_at(cell).is_some()
            || !mechanics.ground(level.ground_at(cell)).home.is_empty()
    };
    level
        .size
        .cells()
        .map(|cell| {
            if !space.touched.contains(&cell) {
                return Some(TileClass::CutOff);
            }
            if furnished(cell) {
                return Some(TileClass::Furnished);
            }
            let closed = par_steps(&world.with_closed_tile(cell), most)?;
            Some(match (par, closed) {
                (Some(_), None) => TileClass::Vital,
                (before, after) if before == after => TileClass::Idle,
                _ => TileClass::Useful,
            })
        })
        .collect()
}

/// The roam of a position (rules.md, Folds): what is linked to it by steps undone at once that move nothing but walkers.
pub fn roam(world: &World, from: &Position) -> BTreeSet<Position> {
    let mut found = BTreeSet::from([from.clone()]);
    let mut open = vec![from.clone()];
    while let Some(position) = open.pop() {
        for next in plain_steps(world, &position) {
            let only_walkers_differ = next.ground == position.ground
                && next.items == position.items
                && next.keys == position.keys
                && cargo(world, &next) == cargo(world, &position);
            if only_walkers_differ
                && !found.contains(&next)
                && plain_steps(world, &next).contains(&position)
            {
                found.insert(next.clone());
                open.push(next);
            }
        }
    }
    found
}

fn plain_steps(world: &World, position: &Position) -> Vec<Position> {
    if world.finished(position) {
        return Vec::new();
    }
    world
        .steps(position)
        .into_iter()
        .map(|(_, stepped)| stepped.position)
        .collect()
}

fn cargo<'a>(world: &World, position: &'a Position) -> Vec<&'a Body> {
    let role =
        |body: &&Body| world.mechanics().body(body.kind).role == foldwright::level::Role::Cargo;
    position.bodies.iter().filter(role).collect()
}

/// A small letter string as Steer steps.
pub fn steer(letters: &str) -> Vec<Dir> {
    letters.chars().filter_map(Dir::from_letter).collect()
}
