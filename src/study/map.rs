//! The fold map: everything that can be reached, folded into what can be undone.

use super::bounds::Bounds;
use super::meter::Meter;
use super::space::LevelSpace;
use super::{Limits, MapCounts, UndecidedReason};
use crate::rules::{Position, Rules};
use crate::search::{Closure, Edge, Folded, Full, RoamId, strongly_connected};
use rustc_hash::FxHashMap;

/// Number of a fold; every commitment leads to a smaller number.
pub type FoldId = u32;

/// One fold: a strongly connected component of the step graph.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fold {
    /// Number of its positions.
    pub positions: u64,
    /// Whether it is a finished position.
    pub finished: bool,
    /// Whether a finished position can be reached from it.
    pub alive: bool,
    /// Fewest commitments from the start.
    pub depth: u32,
    /// Chance that a player who picks among commitments uniformly ends finished.
    pub blind_finish_chance: f64,
    /// Number of distinct positions that its commitments lead to.
    pub outcomes: u32,
    entry: RoamId,
}

/// All commitments from one fold to another.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Passage {
    /// Fold that they leave.
    pub from: FoldId,
    /// Fold that they lead to.
    pub to: FoldId,
    /// How many there are, as ordered pairs of positions.
    pub commitments: u64,
}

/// The exact graph of folds of a level (rules.md, Folds).
#[derive(Clone, Debug)]
pub struct FoldMap {
    /// All folds. A passage leads from a greater number to a smaller one.
    pub folds: Vec<Fold>,
    /// All passages, by `from`, then `to`.
    pub passages: Vec<Passage>,
    /// The fold of the start.
    pub start: FoldId,
    entries: Vec<Position>,
}

impl FoldMap {
    /// A position of a fold: one by which it is entered, the start for the fold of the start.
    pub fn entry(&self, fold: FoldId) -> &Position {
        &self.entries[fold as usize]
    }

    /// The counts of the map.
    pub fn counts(&self) -> MapCounts {
        let trap = |passage: &&Passage| {
            self.folds[passage.from as usize].alive && !self.folds[passage.to as usize].alive
        };
        let many = |passages: &mut dyn Iterator<Item = &Passage>| -> u64 {
            passages.map(|passage| passage.commitments).sum()
        };
        MapCounts {
            folds: self.folds.len() as u64,
            alive: self.folds.iter().filter(|fold| fold.alive).count() as u64,
            commitments: many(&mut self.passages.iter()),
            traps: many(&mut self.passages.iter().filter(trap)),
            positions: self.folds.iter().map(|fold| fold.positions).sum(),
            blind_finish_chance: self.folds[self.start as usize].blind_finish_chance,
        }
    }
}

/// A closed space: every roam that can be reached, with all its edges.
pub(super) struct Closed<'a> {
    pub graph: Folded<LevelSpace<'a>>,
}

/// Looks at everything that can be reached, without any bound.
pub(super) fn close<'a>(rules: &'a Rules, limits: &Limits) -> Result<Closed<'a>, UndecidedReason> {
    let mut meter = Meter::new(limits);
    let space = LevelSpace::new(rules, Bounds::none(rules));
    let halt = limits.halt.clone();
    let mut graph = Folded::new(space, limits.bytes, false).stopped_by(move || halt.fired());
    let mut closure = Closure::new();
    while closure.advance(&mut graph).map_err(|Full| {
        if limits.halt.fired() {
            UndecidedReason::Stopped
        } else {
            UndecidedReason::Memory
        }
    })? {
        meter.check(graph.positions())?;
    }
    Ok(Closed { graph })
}

/// The fold of each roam, and the number of folds.
fn folds_of(closed: &Closed) -> (Vec<FoldId>, u32) {
    let graph = &closed.graph;
    strongly_connected(graph.roam_count(), |roam, at| {
        graph.edges(roam).get(at).map(|edge| edge.to)
    })
}

/// The fold of each of some positions of a closed space; none for one that is not in it.
pub(super) fn folds_of_positions(closed: &Closed, positions: &[Position]) -> Vec<Option<FoldId>> {
    let (fold_of, _) = folds_of(closed);
    let graph = &closed.graph;
    let mut wanted: FxHashMap<Vec<u64>, Vec<(usize, u16)>> = FxHashMap::default();
    for (at, position) in positions.iter().enumerate() {
        let mut key = position.0.to_vec();
        let place = graph.space.rules.split(&mut key);
        wanted.entry(key).or_default().push((at, place));
    }
    let mut found = vec![None; positions.len()];
    for roam in 0..graph.roam_count() as RoamId {
        if let Some(alike) = wanted.get(graph.position(roam).0) {
            let members = graph.members(roam);
            for &(at, _) in alike.iter().filter(|(_, place)| members.contains(place)) {
                found[at] = Some(fold_of[roam as usize]);
            }
        }
    }
    found
}

/// Folds a closed space.
pub(super) fn fold(closed: &Closed, halt: &super::Halt) -> Result<FoldMap, UndecidedReason> {
    let graph = &closed.graph;
    let count = graph.roam_count();
    let (fold_of, folds) = folds_of(closed);
    let mut map = FoldMap {
        folds: (0..folds).map(|_| EMPTY).collect(),
        passages: Vec::new(),
        start: fold_of[0],
        entries: Vec::new(),
    };
    for roam in 0..count as RoamId {
        let fold = &mut map.folds[fold_of[roam as usize] as usize];
        fold.positions += u64::from(graph.size(roam));
        fold.finished |= graph.is_finished(roam);
        fold.entry = fold.entry.min(roam);
    }
    let by_fold = group(&fold_of, folds);
    let mut room = Room::default();
    for fold in 0..folds {
        if halt.fired() {
            return Err(UndecidedReason::Stopped);
        }
        settle(
            graph,
            &fold_of,
            by_fold.members(fold),
            fold,
            &mut map,
            &mut room,
        );
    }
    measure_depth(&mut map);
    map.entries = map
        .folds
        .iter()
        .map(|fold| position(graph, fold.entry))
        .collect();
    Ok(map)
}

const EMPTY: Fold = Fold {
    positions: 0,
    finished: false,
    alive: false,
    depth: u32::MAX,
    blind_finish_chance: 0.0,
    outcomes: 0,
    entry: RoamId::MAX,
};

fn position(graph: &Folded<LevelSpace>, roam: RoamId) -> Position {
    let (key, place) = graph.position(roam);
    let mut words = key.to_vec();
    graph.space.rules.join(&mut words, place);
    Position(words.into_boxed_slice())
}

/// Roams sorted by fold.
struct Groups {
    starts: Vec<u32>,
    roams: Vec<RoamId>,
}

impl Groups {
    fn members(&self, fold: FoldId) -> &[RoamId] {
        let fold = fold as usize;
        &self.roams[self.starts[fold] as usize..self.starts[fold + 1] as usize]
    }
}

fn group(fold_of: &[FoldId], folds: u32) -> Groups {
    let mut starts = vec![0u32; folds as usize + 1];
    for &fold in fold_of {
        starts[fold as usize + 1] += 1;
    }
    for at in 0..folds as usize {
        starts[at + 1] += starts[at];
    }
    let mut next = starts.clone();
    let mut roams = vec![0; fold_of.len()];
    for (roam, &fold) in fold_of.iter().enumerate() {
        roams[next[fold as usize] as usize] = roam as RoamId;
        next[fold as usize] += 1;
    }
    Groups { starts, roams }
}

#[derive(Default)]
struct Room {
    leaving: Vec<(u16, RoamId, u16)>,
    outcomes: Vec<(RoamId, u16)>,
    passages: Vec<(FoldId, u64)>,
}

/// Works out one fold from those that its commitments lead to, which all come before it.
fn settle(
    graph: &Folded<LevelSpace>,
    fold_of: &[FoldId],
    members: &[RoamId],
    fold: FoldId,
    map: &mut FoldMap,
    room: &mut Room,
) {
    room.outcomes.clear();
    room.passages.clear();
    for &roam in members {
        room.leaving.clear();
        let leaves = |edge: &&Edge| fold_of[edge.to as usize] != fold;
        let edges = graph.edges(roam).iter().filter(leaves);
        room.leaving
            .extend(edges.map(|edge| (edge.from_place, edge.to, edge.to_place)));
        // Two steps from one position to one other are one commitment.
        room.leaving.sort_unstable();
        room.leaving.dedup();
        for &(_, to, place) in &room.leaving {
            room.outcomes.push((to, place));
            room.passages.push((fold_of[to as usize], 1));
        }
    }
    room.outcomes.sort_unstable();
    room.outcomes.dedup();
    let chances = room.outcomes.iter().map(|&(to, _)| {
        let ahead = &map.folds[fold_of[to as usize] as usize];
        ahead.blind_finish_chance
    });
    let sum: f64 = chances.sum();
    let any_alive = room
        .passages
        .iter()
        .any(|&(to, _)| map.folds[to as usize].alive);
    let settled = &mut map.folds[fold as usize];
    settled.outcomes = room.outcomes.len() as u32;
    settled.alive = settled.finished || any_alive;
    settled.blind_finish_chance = match (settled.finished, room.outcomes.len()) {
        (true, _) => 1.0,
        (false, 0) => 0.0,
        (false, many) => sum / many as f64,
    };
    room.passages.sort_unstable();
    for &(to, many) in &room.passages {
        match map.passages.last_mut() {
            Some(last) if last.from == fold && last.to == to => last.commitments += many,
            _ => map.passages.push(Passage {
                from: fold,
                to,
                commitments: many,
            }),
        }
    }
}

/// Fewest commitments from the start to each fold, breadth first.
fn measure_depth(map: &mut FoldMap) {
    let mut first = vec![map.passages.len(); map.folds.len() + 1];
    for (at, passage) in map.passages.iter().enumerate().rev() {
        first[passage.from as usize] = at;
    }
    let mut queue = std::collections::VecDeque::from([map.start]);
    map.folds[map.start as usize].depth = 0;
    while let Some(fold) = queue.pop_front() {
        let depth = map.folds[fold as usize].depth + 1;
        let passages = map.passages[first[fold as usize]..].iter();
        for passage in passages.take_while(|passage| passage.from == fold) {
            let to = &mut map.folds[passage.to as usize];
            if to.depth == u32::MAX {
                to.depth = depth;
                queue.push_back(passage.to);
            }
        }
    }
}
