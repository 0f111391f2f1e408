//! The fewest steps, proved from both ends.
//!
//! Where there is one set of cargo cells to end on, positions can be followed back from it as well: a walk back is a walk, a push
//! taken back is a pull. Both sides go out in layers of equal cost, the smaller layer first, and the first position that both
//! have seen ends a cheapest route: had there been a shorter one, an earlier pair of layers would have met on it. Each side goes about half
//! as deep as one alone would, and so sees far less where there is room.
//!
//! As in `steps`, a roam keeps its walker cells as sets, and one shift in each direction moves a whole front on. Roams are the same for both
//! sides, since they depend on the cargo alone, so they share one store, and meeting is a bit test.
//!
//! A route with `ceiling` steps is known or taken for granted, and what cannot be on a shorter one is left out: going forward, by the cheapest matching
//! to homes; going back, by the cheapest matching to the cells that cargo started on, with push distances away from there. Both are
//! lower bounds on the pushes, hence on the steps, that are missing (`distance`, `matching`).

use super::bits::Bits;
use super::board::Board;
use super::matching::{Demand, Matching, Origins};
use super::meter::Meter;
use super::pushes::Slice;
use super::route::walk;
use super::store::{NONE, Store, hash_set, held, reserve};
use crate::level::Dir;
use crate::study::UndecidedReason;

const UNKNOWN: u32 = u32::MAX;
const HOPELESS: u32 = u32::MAX - 1;

/// One of the two sides.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Side {
    Forward,
    Back,
}

/// What one side knows of a roam.
#[derive(Clone, Copy)]
struct Half<const N: usize> {
    seen: Bits<N>,
    /// Fronts of the layer that is being taken and of the next one, by the parity of their cost.
    fronts: [Bits<N>; 2],
    /// Pushes that are missing at least; [`UNKNOWN`] until asked.
    bound: u32,
    first_arrival: u32,
}

/// An entry into a roam by a push, or by one taken back.
#[derive(Clone, Copy)]
struct Arrival {
    parent: u32,
    time: u32,
    next: u32,
    /// The walker's cell in the roam entered.
    at: u16,
    /// The direction of the push, as it is played.
    dir: Dir,
}

/// One side's layers.
struct Layers {
    now: Vec<u32>,
    next: Vec<u32>,
    time: u32,
    taken: usize,
}

/// A search from both ends that is advanced slice by slice.
pub(super) struct MeetSearch<'b, const N: usize> {
    board: &'b Board<N>,
    demand: &'b Demand,
    origins: Origins,
    store: Store<N>,
    halves: [Vec<Half<N>>; 2],
    arrivals: [Vec<Arrival>; 2],
    layers: [Layers; 2],
    side: Side,
    matching: Matching,
    cargo: Vec<Bits<N>>,
    /// Roam and walker's cell where both sides have met.
    met: Option<(u32, usize)>,
    /// Nothing that needs this many steps or more is looked at.
    pub ceiling: u32,
    /// No finish needs fewer steps.
    pub low: u32,
}

impl<'b, const N: usize> MeetSearch<'b, N> {
    /// A search from a start that is not finished, or `None` if the level has more than one set of cells to end on.
    pub fn new(board: &'b Board<N>, demand: &'b Demand) -> Option<MeetSearch<'b, N>> {
        let goal = board.only_goal()?;
        let layers = || Layers {
            now: Vec::new(),
            next: Vec::new(),
            time: 0,
            taken: 0,
        };
        let mut search = MeetSearch {
            board,
            demand,
            origins: Origins::new(board),
            store: Store::new(board.groups.groups()),
            halves: [Vec::new(), Vec::new()],
            arrivals: [Vec::new(), Vec::new()],
            layers: [layers(), layers()],
            side: Side::Forward,
            matching: Matching::default(),
            cargo: Vec::new(),
            met: None,
            ceiling: u32::MAX,
            low: 1,
        };
        let free = |groups: &[Bits<N>]| board.walk & !Board::all(groups);
        let mut left = free(&goal);
        while let Some(at) = left.ones().next() {
            let cells = board.flood(left, Bits::one(at));
            left &= !cells;
            search.begin(Side::Back, &goal, cells, cells);
        }
        let start = &board.groups.start;
        let cells = board.flood(free(start), Bits::one(board.walker));
        search.begin(Side::Forward, start, cells, Bits::one(board.walker));
        Some(search)
    }

    fn begin(&mut self, side: Side, groups: &[Bits<N>], cells: Bits<N>, front: Bits<N>) {
        let hash = hash_set(groups);
        let set = match self.store.find_set(groups, hash) {
            Some(set) => set,
            None => self.store.add_set(groups, hash),
        };
        let known = cells
            .ones()
            .next()
            .and_then(|at| self.store.find_node(set, at));
        let node = known.unwrap_or_else(|| self.add(set, cells));
        let at = front.ones().next().unwrap_or(0);
        let half = &mut self.halves[side as usize][node as usize];
        half.fronts[0] = front;
        half.first_arrival = self.arrivals[side as usize].len() as u32;
        self.arrivals[side as usize].push(Arrival {
            parent: NONE,
            time: 0,
            next: NONE,
            at: at as u16,
            dir: Dir::N,
        });
        self.layers[side as usize].now.push(node);
    }

    fn add(&mut self, set: u32, cells: Bits<N>) -> u32 {
        for half in &mut self.halves {
            half.push(Half {
                seen: Bits::NONE,
                fronts: [Bits::NONE; 2],
                bound: UNKNOWN,
                first_arrival: NONE,
            });
        }
        self.store.add_node(set, cells)
    }

    /// Moves up to `most` fronts on.
    ///
    /// # Errors
    /// The limit that was met.
    pub fn advance(&mut self, meter: &mut Meter, most: u32) -> Result<Slice, UndecidedReason> {
        for _ in 0..most {
            let layers = &mut self.layers[self.side as usize];
            if layers.taken == layers.now.len() {
                layers.now.clear();
                std::mem::swap(&mut layers.now, &mut layers.next);
                layers.taken = 0;
                layers.time += 1;
                if let Some(ended) = self.turn() {
                    return Ok(ended);
                }
                continue;
            }
            let node = layers.now[layers.taken];
            layers.taken += 1;
            meter.spend(N as u32, || self.bytes())?;
            self.make_room(meter)?;
            let before = self.store.nodes();
            self.take(node, meter);
            meter.owe::<N>(self.store.nodes() - before);
            if self.met.is_some() {
                self.low = self.cost();
                return Ok(Slice::Finished(0));
            }
        }
        Ok(Slice::More)
    }

    /// Layers of cost below `time` are whole on each side: chooses the side to go on with, or ends.
    fn turn(&mut self) -> Option<Slice> {
        let [forward, back] = &self.layers;
        // Side by side, layers below `time` hold no pair that meets; the next to be taken adds one.
        self.low = self.low.max((forward.time + back.time).saturating_sub(1));
        if self.low >= self.ceiling || forward.now.is_empty() || back.now.is_empty() {
            self.low = self.ceiling;
            return Some(Slice::Exhausted);
        }
        self.side = if forward.now.len() <= back.now.len() {
            Side::Forward
        } else {
            Side::Back
        };
        None
    }

    /// Steps of the route that was met on.
    fn cost(&self) -> u32 {
        let [forward, back] = &self.layers;
        // The side that goes on meets what the other has seen: its last whole layer.
        match self.side {
            Side::Forward => forward.time + back.time - 1,
            Side::Back => back.time + forward.time - 1,
        }
    }

    /// Makes all steps from one front.
    fn take(&mut self, node: u32, meter: &mut Meter) {
        let (side, other) = match self.side {
            Side::Forward => (0, 1),
            Side::Back => (1, 0),
        };
        let time = self.layers[side].time;
        let parity = (time & 1) as usize;
        let bound = self.bound(node);
        let half = &mut self.halves[side][node as usize];
        let front = std::mem::replace(&mut half.fronts[parity], Bits::NONE) & !half.seen;
        if time.saturating_add(bound) >= self.ceiling {
            return;
        }
        half.seen |= front;
        meter.positions += u64::from(front.count());
        let both = front & self.halves[other][node as usize].seen;
        if let Some(at) = both.ones().next() {
            self.met = Some((node, at));
            return;
        }
        let cells = self.store.cells(node);
        let moved = Dir::ALL.map(|dir| self.board.shift(front, dir));
        let around = moved[0] | moved[1] | moved[2] | moved[3];
        let half = &mut self.halves[side][node as usize];
        let next = around & cells & !half.seen;
        if next.any() {
            if !half.fronts[1 - parity].any() {
                self.layers[side].next.push(node);
            }
            half.fronts[1 - parity] |= next;
        }
        let all = Board::all(self.store.cargo(node));
        if (around & all).any() {
            match self.side {
                Side::Forward => self.push_all(node, all, moved, time + 1),
                Side::Back => self.pull_all(node, all, front, time + 1),
            }
        }
    }

    /// Pushes missing at least on the way of this side; [`HOPELESS`] if there is no way.
    fn bound(&mut self, node: u32) -> u32 {
        let known = self.halves[self.side as usize][node as usize].bound;
        if known != UNKNOWN {
            return known;
        }
        let at = self.store.cells(node).ones().next().unwrap_or(0);
        let cargo = self.store.cargo(node);
        let bound = match self.side {
            Side::Forward => self.matching.bound(self.board, self.demand, cargo, at),
            Side::Back => self
                .origins
                .bound(self.board, &mut self.matching, cargo, at),
        };
        let bound = bound.unwrap_or(HOPELESS);
        self.halves[self.side as usize][node as usize].bound = bound;
        bound
    }

    fn push_all(&mut self, node: u32, all: Bits<N>, moved: [Bits<N>; 4], time: u32) {
        self.cargo.clear();
        self.cargo.extend_from_slice(self.store.cargo(node));
        for dir in Dir::ALL {
            let touched = moved[dir.index()] & all & self.board.walk;
            if !touched.any() {
                continue;
            }
            let open = self.board.shift(self.board.hold & !all, dir.opposite());
            for from in (touched & open).ones() {
                let to = self.board.next(from, dir);
                let group = self.cargo.iter().position(|set| set.has(from)).unwrap_or(0);
                if self.board.lost[group].has(to) {
                    continue;
                }
                self.cargo[group] = self.cargo[group].without(from).with(to);
                self.enter(
                    node,
                    Moved {
                        taken: to,
                        walker: from,
                        dir,
                    },
                    time,
                );
                self.cargo[group] = self.cargo[group].without(to).with(from);
            }
        }
    }

    /// Takes back pushes of the cargo beside `front`: the walker steps away from it and it follows.
    fn pull_all(&mut self, node: u32, all: Bits<N>, front: Bits<N>, time: u32) {
        self.cargo.clear();
        self.cargo.extend_from_slice(self.store.cargo(node));
        let free = self.board.walk & !all;
        for dir in Dir::ALL {
            // The walker came from behind `from` to `from`, the cargo from there to `to`.
            let before = self.board.shift(all & self.board.hold, dir.opposite());
            let behind = self.board.shift(free, dir);
            for from in (front & before & behind & self.board.stands).ones() {
                let to = self.board.next(from, dir);
                let walker = self.board.next(from, dir.opposite());
                let group = self.cargo.iter().position(|set| set.has(to)).unwrap_or(0);
                self.cargo[group] = self.cargo[group].without(to).with(from);
                self.enter(
                    node,
                    Moved {
                        taken: from,
                        walker,
                        dir,
                    },
                    time,
                );
                self.cargo[group] = self.cargo[group].without(from).with(to);
            }
        }
    }

    /// Enters the roam that a push, or one taken back, leads to; `self.cargo` is after it.
    fn enter(&mut self, parent: u32, moved: Moved, time: u32) {
        let hash = hash_set(&self.cargo);
        let set = self.store.find_set(&self.cargo, hash);
        let known = set.and_then(|set| self.store.find_node(set, moved.walker));
        let node = match known {
            Some(node) => node,
            None => {
                let all = Board::all(&self.cargo);
                if self.side == Side::Forward && self.board.is_lost(&self.cargo, all, moved.taken) {
                    return;
                }
                let cells = self.board.roam_after(all, self.store.cells(parent), &moved);
                let set = set.unwrap_or_else(|| self.store.add_set(&self.cargo, hash));
                self.add(set, cells)
            }
        };
        let side = self.side as usize;
        if time.saturating_add(self.bound(node)) >= self.ceiling {
            return;
        }
        let half = &mut self.halves[side][node as usize];
        let parity = (time & 1) as usize;
        if half.seen.has(moved.walker) || half.fronts[parity].has(moved.walker) {
            return;
        }
        if !half.fronts[parity].any() {
            self.layers[side].next.push(node);
        }
        half.fronts[parity].put(moved.walker);
        let id = self.arrivals[side].len() as u32;
        self.arrivals[side].push(Arrival {
            parent,
            time,
            next: half.first_arrival,
            at: moved.walker as u16,
            dir: moved.dir,
        });
        half.first_arrival = id;
    }

    fn make_room(&mut self, meter: &Meter) -> Result<(), UndecidedReason> {
        let extra = 4 * self.board.groups.start.iter().map(Bits::count).sum::<u32>() as usize;
        let beside = self.bytes() - self.store.bytes();
        self.store
            .make_room(extra, |store| meter.spare(store.bytes() + beside))?;
        for side in 0..2 {
            let spare = meter.spare(self.bytes());
            reserve(&mut self.halves[side], extra, || spare)?;
            let spare = meter.spare(self.bytes());
            reserve(&mut self.arrivals[side], extra, || spare)?;
            let spare = meter.spare(self.bytes());
            reserve(&mut self.layers[side].next, extra, || spare)?;
            if self.arrivals[side].len() + extra >= NONE as usize {
                return Err(UndecidedReason::Memory);
            }
        }
        Ok(())
    }

    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        let halves = self.halves.iter().map(held).sum::<u64>();
        let arrivals = self.arrivals.iter().map(held).sum::<u64>();
        let layers = self
            .layers
            .iter()
            .map(|layers| held(&layers.now) + held(&layers.next));
        self.store.bytes() + halves + arrivals + layers.sum::<u64>()
    }

    /// Number of roams.
    pub fn nodes(&self) -> usize {
        self.store.nodes()
    }

    /// Cargo and walker cells of each roam, as far as they were looked at from the start; what was looked at from the end need not
    /// be reachable.
    pub fn looked_at(&self) -> impl Iterator<Item = (Bits<N>, Bits<N>)> + '_ {
        let forward = self.halves[0].iter().enumerate();
        forward
            .filter(|(_, half)| half.seen.any())
            .map(|(node, half)| (Board::all(self.store.cargo(node as u32)), half.seen))
    }

    /// The steps of the route that was met on.
    pub fn route(&self) -> Option<Vec<Dir>> {
        let (node, at) = self.met?;
        let [forward, back] = &self.layers;
        let (ahead, behind) = match self.side {
            Side::Forward => (forward.time, back.time - 1),
            Side::Back => (forward.time - 1, back.time),
        };
        let mut steps = self.way(Side::Forward, node, at, ahead)?;
        steps.reverse();
        steps.extend(self.way(Side::Back, node, at, behind)?);
        Some(steps)
    }

    /// The steps between a position and the side's beginning, from the position on. Those of the forward side come last to first.
    fn way(&self, side: Side, node: u32, at: usize, time: u32) -> Option<Vec<Dir>> {
        let mut steps = Vec::new();
        let (mut node, mut at, mut time) = (node, at, time);
        while time > 0 {
            let (arrival, walked) = self.came(side, node, at, time)?;
            match side {
                Side::Forward => steps.extend(walked.iter().rev()),
                Side::Back => steps.extend(walked.iter().rev().map(|dir| dir.opposite())),
            }
            if arrival.parent == NONE {
                break;
            }
            steps.push(arrival.dir);
            node = arrival.parent;
            let entered = usize::from(arrival.at);
            at = match side {
                Side::Forward => self.board.next(entered, arrival.dir.opposite()),
                Side::Back => self.board.next(entered, arrival.dir),
            };
            time = arrival.time - 1;
        }
        Some(steps)
    }

    /// The arrival from which a walk leads to `at` in just the time that it was reached in, and that walk.
    fn came(&self, side: Side, node: u32, at: usize, time: u32) -> Option<(Arrival, Vec<Dir>)> {
        let cells = self.store.cells(node);
        let mut id = self.halves[side as usize][node as usize].first_arrival;
        while id != NONE {
            let arrival = self.arrivals[side as usize][id as usize];
            if arrival.time <= time
                && let Some(steps) = walk(self.board, cells, usize::from(arrival.at), at)
                && arrival.time + steps.len() as u32 == time
            {
                return Some((arrival, steps));
            }
            id = arrival.next;
        }
        None
    }
}

/// What a push, or one taken back, did.
pub(super) struct Moved {
    /// The cell that cargo came to.
    pub taken: usize,
    /// The walker's cell after it.
    pub walker: usize,
    /// The direction of the push, as it is played.
    pub dir: Dir,
}
