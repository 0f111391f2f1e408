//! The whole of the reachable space, folded by roams, with every push kept as an edge.
//!
//! Nothing is cut. Kinds are told apart as the rules do, so that positions are counted exactly. Nodes are numbered in the
//! order in which they are met and opened in that order, so that the edges of all nodes lie one after the other in
//! one vector. An edge holds its target and the walker's cell after the step: the roam and the cell are the position.

use super::bits::Bits;
use super::board::{Board, Roam};
use super::meet::Moved;
use super::meter::Meter;
use super::store::{Store, hash_set, held, reserve};
use crate::level::Dir;
use crate::study::UndecidedReason;

/// Steps between roams, as pairs of positions.
#[derive(Default)]
pub(super) struct Edges {
    /// By node, and one more: where its edges begin.
    pub begin: Vec<u32>,
    /// The node that a step leads to.
    pub target: Vec<u32>,
    /// The walker's cell after it.
    pub cell: Vec<u16>,
}

impl Edges {
    /// The edges of a node.
    #[inline]
    pub fn of(&self, node: u32) -> std::ops::Range<usize> {
        self.begin[node as usize] as usize..self.begin[node as usize + 1] as usize
    }

    fn add(&mut self, target: u32, cell: usize) {
        self.target.push(target);
        self.cell.push(cell as u16);
    }

    pub fn bytes(&self) -> u64 {
        held(&self.begin) + held(&self.target) + held(&self.cell)
    }
}

/// The closed space.
pub(super) struct Closure<const N: usize> {
    pub store: Store<N>,
    pub edges: Edges,
    /// By node: whether it is a finished position.
    pub finished: Vec<bool>,
}

/// Opens everything.
///
/// # Errors
/// The limit that was met.
pub(super) fn close<const N: usize>(
    board: &Board<N>,
    meter: &mut Meter,
) -> Result<Closure<N>, UndecidedReason> {
    let mut closure = Closure {
        store: Store::new(board.kinds.groups()),
        edges: Edges::default(),
        finished: Vec::new(),
    };
    let mut cargo = board.kinds.start.clone();
    let most = 4 * board.kinds.start.iter().map(Bits::count).sum::<u32>() as usize
        + 4 * board.exits.count() as usize;
    closure.make_room(most.max(1), meter)?;
    closure.meet(board, &cargo, board.walker, None, meter);
    let mut node = 0;
    while (node as usize) < closure.store.nodes() {
        meter.spend(N as u32, || closure.bytes())?;
        closure.make_room(most.max(1), meter)?;
        closure.edges.begin.push(closure.edges.target.len() as u32);
        if !closure.finished[node as usize] {
            let before = closure.store.nodes();
            closure.open(board, node, &mut cargo, meter);
            meter.owe::<N>(closure.store.nodes() - before);
        }
        node += 1;
    }
    closure.edges.begin.push(closure.edges.target.len() as u32);
    meter.note_bytes(closure.bytes());
    Ok(closure)
}

impl<const N: usize> Closure<N> {
    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        self.store.bytes() + self.edges.bytes() + held(&self.finished)
    }

    fn open(&mut self, board: &Board<N>, node: u32, cargo: &mut Vec<Bits<N>>, meter: &mut Meter) {
        let reach = self.store.cells(node);
        cargo.clear();
        cargo.extend_from_slice(self.store.cargo(node));
        let all = Board::all(cargo);
        for dir in Dir::ALL {
            for from in board.pushable(all, reach, dir).ones() {
                let to = board.next(from, dir);
                let group = cargo.iter().position(|set| set.has(from)).unwrap_or(0);
                cargo[group] = cargo[group].without(from).with(to);
                let moved = Moved {
                    taken: to,
                    walker: from,
                    dir,
                };
                let target = self.meet(board, cargo, from, Some((reach, moved)), meter);
                cargo[group] = cargo[group].without(to).with(from);
                self.edges.add(target, from);
            }
        }
        if board.walkers_out && board.cargo_done(&board.kinds, cargo) {
            let exits = board.exits & !all;
            for dir in Dir::ALL {
                for exit in (board.shift(reach, dir) & exits).ones() {
                    let target = self.meet(board, cargo, exit, None, meter);
                    self.edges.add(target, exit);
                }
            }
        }
    }

    /// The node of a position, added if it is new.
    #[inline]
    fn meet(
        &mut self,
        board: &Board<N>,
        cargo: &[Bits<N>],
        at: usize,
        moved: Option<(Bits<N>, Moved)>,
        meter: &mut Meter,
    ) -> u32 {
        let hash = hash_set(cargo);
        let set = match self.store.find_set(cargo, hash) {
            Some(set) => {
                if let Some(node) = self.store.find_node(set, at) {
                    return node;
                }
                set
            }
            None => self.store.add_set(cargo, hash),
        };
        let done = board.cargo_done(&board.kinds, cargo);
        let all = Board::all(cargo);
        let roam = match moved {
            Some((before, moved)) if !done => Roam {
                cells: board.roam_after(all, before, &moved),
                finished: false,
            },
            _ => board.roam(all, done, at),
        };
        meter.positions += u64::from(roam.cells.count());
        self.finished.push(roam.finished);
        self.store.add_node(set, roam.cells)
    }

    fn make_room(&mut self, extra: usize, meter: &Meter) -> Result<(), UndecidedReason> {
        let beside = self.edges.bytes() + held(&self.finished);
        self.store
            .make_room(extra, |store| meter.spare(store.bytes() + beside))?;
        let edges = self.edges.target.len() + extra;
        if edges >= u32::MAX as usize {
            return Err(UndecidedReason::Memory);
        }
        let spare = meter.spare(self.bytes());
        reserve(&mut self.edges.begin, 2, || spare)?;
        let spare = meter.spare(self.bytes());
        reserve(&mut self.edges.target, extra, || spare)?;
        let spare = meter.spare(self.bytes());
        reserve(&mut self.edges.cell, extra, || spare)?;
        let spare = meter.spare(self.bytes());
        reserve(&mut self.finished, extra, || spare)
    }
}
