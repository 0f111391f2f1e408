//! Search over folded positions by pushes: a first route, the fewest pushes, or the proof that there is none.
//!
//! Nodes are roams; an edge is one push, whatever the walk before it. Roams are safe for pushes and for the verdict: walking
//! costs no push and can be undone. They are not safe for steps (`steps`). The bound is the cheapest matching (`matching`), which is
//! consistent, so A* opens nothing twice and the first finished node that it takes has the fewest pushes.

use super::bits::Bits;
use super::board::{Board, Roam};
use super::matching::{Demand, Matching};
use super::meet::Moved;
use super::meter::Meter;
use super::open::Buckets;
use super::store::{NONE, Store, hash_set, held, reserve};
use crate::level::Dir;
use crate::study::UndecidedReason;

/// What is opened first.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Order {
    /// The least pushes so far plus bound: the first finish has the fewest pushes.
    Fewest,
    /// The least of pushes plus three times the bound, now and then the least bound: a finish soon.
    AnyRoute,
}

/// How a node was come by, and where it stands.
#[derive(Clone, Copy)]
struct Node {
    parent: u32,
    pushes: u32,
    bound: u32,
    /// The walker's cell after the push that led here.
    at: u16,
    dir: Dir,
    closed: bool,
    finished: bool,
}

/// How a slice of work ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Slice {
    /// A finished node was found (the cheapest, under [`Order::Fewest`]).
    Finished(u32),
    /// Nothing is left to open.
    Exhausted,
    /// There is more to do.
    More,
}

/// A search that is advanced slice by slice.
pub(super) struct PushSearch<'b, const N: usize> {
    board: &'b Board<N>,
    demand: &'b Demand,
    order: Order,
    pub store: Store<N>,
    nodes: Vec<Node>,
    open: Buckets,
    second: Buckets,
    turn: u32,
    /// A finished node that was made but need not be the cheapest.
    best: Option<u32>,
    /// Nodes that cannot lead to fewer pushes than this are not opened.
    pub ceiling: u32,
    /// Whether anything was cut, so that not all reachable positions are in the store.
    pub cut: bool,
    /// No finish needs fewer pushes.
    pub low: u32,
    matching: Matching,
    cargo: Vec<Bits<N>>,
}

impl<'b, const N: usize> PushSearch<'b, N> {
    pub fn new(
        board: &'b Board<N>,
        demand: &'b Demand,
        order: Order,
        meter: &mut Meter,
    ) -> PushSearch<'b, N> {
        let mut search = PushSearch {
            board,
            demand,
            order,
            store: Store::new(board.groups.groups()),
            nodes: Vec::new(),
            open: Buckets::default(),
            second: Buckets::default(),
            turn: 0,
            best: None,
            ceiling: u32::MAX,
            cut: false,
            low: 0,
            matching: Matching::default(),
            cargo: board.groups.start.clone(),
        };
        let bound = search
            .matching
            .solve(board, demand, &search.cargo, board.walker);
        match bound {
            Some(bound) => {
                let hash = hash_set(&search.cargo);
                let set = search.store.add_set(&search.cargo, hash);
                let start = Node {
                    parent: NONE,
                    pushes: 0,
                    bound,
                    at: board.walker as u16,
                    dir: Dir::N,
                    closed: false,
                    finished: false,
                };
                search.add(set, start, None, meter);
            }
            None => search.cut = true,
        }
        search
    }

    /// Opens up to `most` nodes.
    ///
    /// # Errors
    /// The limit that was met.
    pub fn advance(&mut self, meter: &mut Meter, most: u32) -> Result<Slice, UndecidedReason> {
        for _ in 0..most {
            let Some(node) = self.take() else {
                self.low = self.ceiling;
                return Ok(match self.best {
                    Some(best) => Slice::Finished(best),
                    None => Slice::Exhausted,
                });
            };
            if self.nodes[node as usize].finished {
                return Ok(Slice::Finished(node));
            }
            meter.spend(N as u32, || self.bytes())?;
            self.make_room(meter)?;
            let before = self.store.nodes();
            self.open(node, meter);
            meter.owe::<N>(self.store.nodes() - before);
            if let Some(best) = self.best
                && (self.order == Order::AnyRoute || self.nodes[best as usize].pushes <= self.low)
            {
                return Ok(Slice::Finished(best));
            }
        }
        Ok(Slice::More)
    }

    /// The next node to open.
    fn take(&mut self) -> Option<u32> {
        loop {
            let (key, node) = match self.order {
                Order::Fewest => self.open.pop()?,
                Order::AnyRoute => {
                    self.turn += 1;
                    if self.turn.is_multiple_of(4) {
                        self.second.pop()?
                    } else {
                        self.open.pop()?
                    }
                }
            };
            let here = &mut self.nodes[node as usize];
            if here.closed {
                continue;
            }
            if self.order == Order::Fewest {
                if key >= self.ceiling {
                    return None;
                }
                self.low = key;
            }
            here.closed = true;
            return Some(node);
        }
    }

    fn open(&mut self, node: u32, meter: &mut Meter) {
        let here = self.nodes[node as usize];
        let reach = self.store.cells(node);
        self.cargo.clear();
        self.cargo.extend_from_slice(self.store.cargo(node));
        let all = Board::all(&self.cargo);
        let mut matched = false;
        for dir in Dir::ALL {
            for from in self.board.pushable(all, reach, dir).ones() {
                let to = self.board.next(from, dir);
                let group = self.cargo.iter().position(|set| set.has(from)).unwrap_or(0);
                if self.board.lost[group].has(to) {
                    self.cut = true;
                    continue;
                }
                let row = self.demand.row_index(&self.cargo, group, from);
                self.cargo[group] = self.cargo[group].without(from).with(to);
                let push = Push {
                    node,
                    pushes: here.pushes + 1,
                    from,
                    to,
                    dir,
                    group,
                };
                self.push(push, row, &mut matched, meter);
                self.cargo[group] = self.cargo[group].without(to).with(from);
            }
        }
    }

    /// Meets the node that a push leads to; `self.cargo` is after the push.
    fn push(&mut self, push: Push, row: Option<usize>, matched: &mut bool, meter: &mut Meter) {
        let hash = hash_set(&self.cargo);
        let set = self.store.find_set(&self.cargo, hash);
        if let Some(known) = set.and_then(|set| self.store.find_node(set, push.from)) {
            self.meet_again(known, &push);
            return;
        }
        let all = Board::all(&self.cargo);
        if self.board.is_lost(&self.cargo, all, push.to) {
            self.cut = true;
            return;
        }
        let Some(bound) = self.bound(&push, row, matched) else {
            self.cut = true;
            return;
        };
        if push.pushes + bound >= self.ceiling {
            self.cut = true;
            return;
        }
        let set = set.unwrap_or_else(|| self.store.add_set(&self.cargo, hash));
        let node = Node {
            parent: push.node,
            pushes: push.pushes,
            bound,
            at: push.from as u16,
            dir: push.dir,
            closed: false,
            finished: false,
        };
        let moved = Moved {
            taken: push.to,
            walker: push.from,
            dir: push.dir,
        };
        self.add(set, node, Some((push.node, moved)), meter);
    }

    /// The bound after a push. Only the row of the pushed cargo has changed (`distance`), and the bound of a child is at least
    /// that of its parent less one.
    fn bound(&mut self, push: &Push, row: Option<usize>, matched: &mut bool) -> Option<u32> {
        let parent = &self.nodes[push.node as usize];
        let Some(row) = row else {
            return Some(parent.bound);
        };
        if !*matched {
            let before = self.store.cargo(push.node);
            self.matching
                .solve(self.board, self.demand, before, usize::from(parent.at));
            *matched = true;
        }
        let side = self.board.distances.side(push.to, push.from);
        let far = self.board.distances.row(push.group, push.to, side);
        self.matching.with_row(self.demand, push.group, row, far)
    }

    fn meet_again(&mut self, known: u32, push: &Push) {
        let node = &mut self.nodes[known as usize];
        if push.pushes >= node.pushes || node.closed {
            return;
        }
        node.parent = push.node;
        node.pushes = push.pushes;
        node.at = push.from as u16;
        node.dir = push.dir;
        self.enqueue(known);
    }

    fn add(&mut self, set: u32, mut node: Node, moved: Option<(u32, Moved)>, meter: &mut Meter) {
        let cargo = self.store.set(set);
        let all = Board::all(cargo);
        let done = self.board.cargo_done(&self.board.groups, cargo);
        let roam = match moved {
            Some((before, moved)) if !done => Roam {
                cells: self.board.roam_after(all, self.store.cells(before), &moved),
                finished: false,
            },
            _ => self.board.roam(all, done, usize::from(node.at)),
        };
        node.finished = roam.finished || (done && self.board.ways_out(all, roam.cells).any());
        let id = self.store.add_node(set, roam.cells);
        meter.positions += u64::from(roam.cells.count());
        self.nodes.push(node);
        if node.finished
            && self
                .best
                .is_none_or(|best| node.pushes < self.nodes[best as usize].pushes)
        {
            self.best = Some(id);
        }
        self.enqueue(id);
    }

    fn enqueue(&mut self, id: u32) {
        let node = &self.nodes[id as usize];
        match self.order {
            Order::Fewest => self.open.push(node.pushes + node.bound, id),
            Order::AnyRoute => {
                self.open.push(node.pushes + 3 * node.bound, id);
                self.second.push(node.bound, id);
            }
        }
    }

    fn make_room(&mut self, meter: &Meter) -> Result<(), UndecidedReason> {
        let extra = 4 * self.board.groups.start.iter().map(Bits::count).sum::<u32>() as usize;
        let beside = held(&self.nodes) + self.open.bytes() + self.second.bytes();
        self.store
            .make_room(extra, |store| meter.spare(store.bytes() + beside))?;
        let spare = meter.spare(self.bytes());
        reserve(&mut self.nodes, extra, || spare)
    }

    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        self.store.bytes() + held(&self.nodes) + self.open.bytes() + self.second.bytes()
    }

    /// Pushes that led to a node.
    pub fn cost(&self, node: u32) -> u32 {
        self.nodes[node as usize].pushes
    }

    /// The pushes that led to a node, first to last: the walker's cell after each, and its direction.
    pub fn pushes_to(&self, node: u32) -> Vec<(usize, Dir)> {
        let mut pushes = Vec::new();
        let mut node = &self.nodes[node as usize];
        while node.parent != NONE {
            pushes.push((usize::from(node.at), node.dir));
            node = &self.nodes[node.parent as usize];
        }
        pushes.reverse();
        pushes
    }
}

/// One push, as it is looked at.
struct Push {
    node: u32,
    pushes: u32,
    from: usize,
    to: usize,
    dir: Dir,
    group: usize,
}
