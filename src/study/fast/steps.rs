//! The fewest steps, proved: A* in waves.
//!
//! A position is a set of cargo cells and a cell of the walker, and every step costs one, so walking has to be followed
//! cell by cell. But positions of one roam share their bound, the cheapest matching of pushes (`matching`): within a roam, those with
//! the same cost so far have the same estimate. So each roam keeps its walker cells as two sets, those seen and the *front*
//! that was reached with the current cost, and one shift in each direction moves a whole front on by one step. A front of estimate
//! `f` goes on as one of `f + 1`; a push that comes nearer to the finish keeps `f`. Fronts are taken in order of `f`. As the bound is
//! consistent, a cell is reached first at its least cost, and the first finish has the fewest steps.
//!
//! The cuts of `losses` hold for steps. Nothing here lets a push stand for a walk or the other way round, and bounds of walking
//! are not added up over cargo: pushes of one may be steps of the walk to another.
//!
//! How a cell was come by is not kept; only the push that entered a roam is (an *arrival*), with its time. A route is found backward:
//! of a roam's arrivals, take one whose time and walk add up to the time wanted.

use super::bits::Bits;
use super::board::Board;
use super::matching::{Demand, Matching};
use super::meet::Moved;
use super::meter::Meter;
use super::open::Buckets;
use super::pushes::Slice;
use super::route::walk;
use super::store::{NONE, Store, hash_set, held, reserve};
use crate::level::Dir;
use crate::study::UndecidedReason;

const NO_TIME: u32 = u32::MAX;

/// What is known of a roam beside its cells.
#[derive(Clone, Copy)]
struct Wave<const N: usize> {
    seen: Bits<N>,
    front: Bits<N>,
    /// The cost of `front`; [`NO_TIME`] if there is none to go on with.
    front_time: u32,
    bound: u32,
    first_arrival: u32,
    done: bool,
}

/// An entry into a roam.
#[derive(Clone, Copy)]
struct Arrival {
    node: u32,
    parent: u32,
    time: u32,
    /// The next arrival of the same roam.
    next: u32,
    /// The walker's cell after the push.
    at: u16,
    dir: Dir,
}

/// The last step of a route.
#[derive(Clone, Copy)]
struct End {
    /// The roam that it is made from.
    node: u32,
    /// The walker's cell before it.
    at: usize,
    dir: Dir,
    time: u32,
}

/// A search that is advanced slice by slice.
pub(super) struct StepSearch<'b, const N: usize> {
    board: &'b Board<N>,
    demand: &'b Demand,
    store: Store<N>,
    waves: Vec<Wave<N>>,
    arrivals: Vec<Arrival>,
    arriving: Buckets,
    fronts: Buckets,
    matching: Matching,
    cargo: Vec<Bits<N>>,
    end: Option<End>,
    /// Nothing that needs this many steps or more is looked at: a route as good is known.
    pub ceiling: u32,
    /// No finish needs fewer steps.
    pub low: u32,
    /// Whether anything was cut.
    pub cut: bool,
}

impl<'b, const N: usize> StepSearch<'b, N> {
    /// A search from a start that is not finished.
    pub fn new(board: &'b Board<N>, demand: &'b Demand) -> StepSearch<'b, N> {
        let mut search = StepSearch {
            board,
            demand,
            store: Store::new(board.groups.groups()),
            waves: Vec::new(),
            arrivals: Vec::new(),
            arriving: Buckets::default(),
            fronts: Buckets::default(),
            matching: Matching::default(),
            cargo: board.groups.start.clone(),
            end: None,
            ceiling: u32::MAX,
            low: 0,
            cut: false,
        };
        let hash = hash_set(&search.cargo);
        let set = search.store.add_set(&search.cargo, hash);
        match search.meet(set, board.walker, None) {
            Some(node) => search.arrive(node, NONE, 0, board.walker, Dir::N),
            None => search.cut = true,
        }
        search
    }

    /// Moves up to `most` fronts on.
    ///
    /// # Errors
    /// The limit that was met.
    pub fn advance(&mut self, meter: &mut Meter, most: u32) -> Result<Slice, UndecidedReason> {
        for _ in 0..most {
            let (arriving, front) = (self.arriving.least(), self.fronts.least());
            let Some(least) = arriving.into_iter().chain(front).min() else {
                self.low = self.ceiling;
                return Ok(self.ended());
            };
            if least >= self.ceiling {
                self.low = self.ceiling;
                return Ok(self.ended());
            }
            self.low = least;
            meter.spend(N as u32, || self.bytes())?;
            self.make_room(meter)?;
            let before = self.store.nodes();
            if arriving == Some(least) {
                self.take_arrival(meter);
            } else {
                self.take_front(meter);
            }
            meter.owe::<N>(self.store.nodes() - before);
        }
        Ok(Slice::More)
    }

    fn ended(&self) -> Slice {
        match self.end {
            Some(_) => Slice::Finished(0),
            None => Slice::Exhausted,
        }
    }

    fn take_arrival(&mut self, meter: &mut Meter) {
        let Some((key, id)) = self.arriving.pop() else {
            return;
        };
        let Arrival { node, time, at, .. } = self.arrivals[id as usize];
        let wave = &mut self.waves[node as usize];
        let at = usize::from(at);
        if wave.seen.has(at) {
            return;
        }
        if wave.front_time == time {
            wave.front.put(at);
        } else if wave.front_time == NO_TIME {
            wave.front = Bits::one(at);
            wave.front_time = time;
            self.fronts.push(key, node);
        } else {
            // The front of this time was taken already and goes on with the next.
            self.spread(node, Bits::one(at), time, meter);
        }
    }

    fn take_front(&mut self, meter: &mut Meter) {
        let Some((_, node)) = self.fronts.pop() else {
            return;
        };
        let wave = &mut self.waves[node as usize];
        let (time, front) = (wave.front_time, wave.front & !wave.seen);
        wave.front_time = NO_TIME;
        if front.any() {
            self.spread(node, front, time, meter);
        }
    }

    /// Makes all steps from the cells of `front`, reached after `time` steps and not seen before.
    fn spread(&mut self, node: u32, front: Bits<N>, time: u32, meter: &mut Meter) {
        let cells = self.store.cells(node);
        let wave = &mut self.waves[node as usize];
        wave.seen |= front;
        meter.positions += u64::from(front.count());
        let (bound, done) = (wave.bound, wave.done);
        let moved = Dir::ALL.map(|dir| self.board.shift(front, dir));
        let all = Board::all(self.store.cargo(node));
        let around = moved[0] | moved[1] | moved[2] | moved[3];
        if done && self.leave(node, all, moved, time) {
            return;
        }
        let wave = &mut self.waves[node as usize];
        let next = around & cells & !wave.seen;
        if next.any() && time + 1 + bound < self.ceiling {
            if wave.front_time == time + 1 {
                wave.front |= next;
            } else {
                wave.front = next;
                wave.front_time = time + 1;
                self.fronts.push(time + 1 + bound, node);
            }
        }
        if (around & all).any() {
            self.push_all(node, all, moved, time);
        }
    }

    /// Steps on an exit, if one is beside the front.
    fn leave(&mut self, node: u32, all: Bits<N>, moved: [Bits<N>; 4], time: u32) -> bool {
        let exits = self.board.exits & !all;
        for dir in Dir::ALL {
            if let Some(exit) = (moved[dir.index()] & exits).ones().next() {
                let at = self.board.next(exit, dir.opposite());
                self.finish(End {
                    node,
                    at,
                    dir,
                    time: time + 1,
                });
                return true;
            }
        }
        false
    }

    fn finish(&mut self, end: End) {
        if end.time < self.ceiling {
            self.ceiling = end.time;
            self.end = Some(end);
        }
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
                    self.cut = true;
                    continue;
                }
                self.cargo[group] = self.cargo[group].without(from).with(to);
                self.push(node, from, to, dir, time + 1);
                self.cargo[group] = self.cargo[group].without(to).with(from);
            }
        }
    }

    /// Meets the roam that a push leads to; `self.cargo` is after the push.
    fn push(&mut self, parent: u32, from: usize, to: usize, dir: Dir, time: u32) {
        let hash = hash_set(&self.cargo);
        let set = self.store.find_set(&self.cargo, hash);
        let known = set.and_then(|set| self.store.find_node(set, from));
        let node = match known {
            Some(known) => Some(known),
            None => {
                let all = Board::all(&self.cargo);
                if self.board.cargo_done(&self.board.groups, &self.cargo)
                    && (!self.board.walkers_out || self.board.exits.has(from))
                {
                    let at = self.board.next(from, dir.opposite());
                    self.finish(End {
                        node: parent,
                        at,
                        dir,
                        time,
                    });
                    return;
                }
                if self.board.is_lost(&self.cargo, all, to) {
                    None
                } else {
                    let set = set.unwrap_or_else(|| self.store.add_set(&self.cargo, hash));
                    let moved = Moved {
                        taken: to,
                        walker: from,
                        dir,
                    };
                    self.meet(set, from, Some((parent, moved)))
                }
            }
        };
        let Some(node) = node else {
            self.cut = true;
            return;
        };
        let wave = &self.waves[node as usize];
        if !wave.seen.has(from) && time + wave.bound < self.ceiling {
            self.arrive(node, parent, time, from, dir);
        }
    }

    /// Adds the roam of a walker at `at`, or `None` if it cannot be finished from.
    fn meet(&mut self, set: u32, at: usize, moved: Option<(u32, Moved)>) -> Option<u32> {
        let cargo = self.store.set(set);
        let bound = self.matching.bound(self.board, self.demand, cargo, at)?;
        let done = self.board.cargo_done(&self.board.groups, cargo);
        let all = Board::all(cargo);
        let cells = match moved {
            Some((before, moved)) if !done => {
                self.board.roam_after(all, self.store.cells(before), &moved)
            }
            _ => self.board.roam(all, done, at).cells,
        };
        let node = self.store.add_node(set, cells);
        self.waves.push(Wave {
            seen: Bits::NONE,
            front: Bits::NONE,
            front_time: NO_TIME,
            bound,
            first_arrival: NONE,
            done,
        });
        Some(node)
    }

    fn arrive(&mut self, node: u32, parent: u32, time: u32, at: usize, dir: Dir) {
        let id = self.arrivals.len() as u32;
        let wave = &mut self.waves[node as usize];
        self.arrivals.push(Arrival {
            node,
            parent,
            time,
            next: wave.first_arrival,
            at: at as u16,
            dir,
        });
        wave.first_arrival = id;
        self.arriving.push(time + wave.bound, id);
    }

    fn make_room(&mut self, meter: &Meter) -> Result<(), UndecidedReason> {
        let extra = 4 * self.board.groups.start.iter().map(Bits::count).sum::<u32>() as usize;
        let beside =
            held(&self.waves) + held(&self.arrivals) + self.arriving.bytes() + self.fronts.bytes();
        self.store
            .make_room(extra, |store| meter.spare(store.bytes() + beside))?;
        let spare = meter.spare(self.bytes());
        reserve(&mut self.waves, extra, || spare)?;
        let spare = meter.spare(self.bytes());
        if self.arrivals.len() + extra >= NONE as usize {
            return Err(UndecidedReason::Memory);
        }
        reserve(&mut self.arrivals, extra, || spare)
    }

    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        self.store.bytes()
            + held(&self.waves)
            + held(&self.arrivals)
            + self.arriving.bytes()
            + self.fronts.bytes()
    }

    /// Number of roams.
    pub fn nodes(&self) -> usize {
        self.waves.len()
    }

    /// Cargo and walker cells of each roam, as far as they were looked at.
    pub fn looked_at(&self) -> impl Iterator<Item = (Bits<N>, Bits<N>)> + '_ {
        self.waves
            .iter()
            .enumerate()
            .map(|(node, wave)| (Board::all(self.store.cargo(node as u32)), wave.seen))
    }

    /// The steps of the best route found, if one below the ceiling was.
    pub fn route(&self) -> Option<Vec<Dir>> {
        let end = self.end?;
        let mut back = vec![end.dir];
        let (mut node, mut at, mut time) = (end.node, end.at, end.time - 1);
        loop {
            let (arrival, steps) = self.came(node, at, time)?;
            back.extend(steps.iter().rev());
            if arrival.parent == NONE {
                break;
            }
            back.push(arrival.dir);
            node = arrival.parent;
            at = self
                .board
                .next(usize::from(arrival.at), arrival.dir.opposite());
            time = arrival.time - 1;
        }
        back.reverse();
        Some(back)
    }

    /// The arrival from which a walk leads to `at` in just the time that it was reached in.
    fn came(&self, node: u32, at: usize, time: u32) -> Option<(Arrival, Vec<Dir>)> {
        let cells = self.store.cells(node);
        let mut id = self.waves[node as usize].first_arrival;
        while id != NONE {
            let arrival = self.arrivals[id as usize];
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
