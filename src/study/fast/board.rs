//! One push-only level as sets of cells, and what a push and a walk do to them.

use super::bits::Bits;
use super::distance::Distances;
use super::meet::Moved;
use crate::level::{Cell, Dir, Size};

/// Bodies in groups whose members are interchangeable.
///
/// A *group* stands for a kind in a closure, where positions are counted as the rules count them; a search may put kinds
/// that are wanted at the same homes into one group.
#[derive(Clone, Debug)]
pub(super) struct Cargo<const N: usize> {
    /// Cells at the start, by group.
    pub start: Vec<Bits<N>>,
    /// Homes that accept the group.
    pub homes: Vec<Bits<N>>,
    /// Whether the objective names the group in a `CargoHome`.
    pub named: Vec<bool>,
}

impl<const N: usize> Cargo<N> {
    /// Number of groups.
    pub fn groups(&self) -> usize {
        self.start.len()
    }
}

/// A compiled level. Cells are numbered row by row within the smallest box that holds all that can matter.
///
/// Moving a whole set by one cell is a shift by one or by the width of the box, with the first or last column masked off
/// when moving sideways. So the pushes of all cargo in one direction come from three shifts, and a walk grows by whole
/// fronts at a time.
#[derive(Clone, Debug)]
pub(super) struct Board<const N: usize> {
    /// Of the level.
    pub size: Size,
    /// Column and row of the box's first cell.
    pub corner: (usize, usize),
    pub width: usize,
    pub height: usize,
    /// Where the walker may come: what it could reach if there were no cargo that can be pushed.
    pub walk: Bits<N>,
    /// Where cargo may be pushed to.
    pub hold: Bits<N>,
    /// Where cargo may stand: that, and where it stands at the start.
    pub stands: Bits<N>,
    pub exits: Bits<N>,
    pub homes: Bits<N>,
    /// By cell: those around it, clockwise from the north; itself in place of those outside the box.
    near: Vec<[u16; 8]>,
    /// Cells that are not in the first, and not in the last column.
    not_first: Bits<N>,
    not_last: Bits<N>,
    pub walker: usize,
    /// The objective is off: nothing is ever finished.
    pub never: bool,
    pub homes_filled: bool,
    pub walkers_out: bool,
    /// By the kinds of the pack.
    pub kinds: Cargo<N>,
    /// By what is wanted of them.
    pub groups: Cargo<N>,
    /// Whether positions are told apart by nothing but bodies, so that a closure counts as the rules do.
    pub countable: bool,
    pub distances: Distances<N>,
    /// By group: where such cargo, if it has to come home, is lost.
    pub lost: Vec<Bits<N>>,
    /// By group: whether every finished position has it on a home that accepts it.
    pub bound_home: Vec<bool>,
    /// For a cell, those with which it makes a pair that never comes home; empty if not computed.
    pub lost_pairs: Vec<Bits<N>>,
}

/// What one box and its cells are made from.
#[derive(Clone, Debug)]
pub(super) struct Plan {
    pub size: Size,
    pub corner: (usize, usize),
    pub width: usize,
    pub height: usize,
    pub walk: Vec<usize>,
    pub hold: Vec<usize>,
    pub exits: Vec<usize>,
    pub homes: Vec<usize>,
    pub walker: usize,
    /// The objective is off: nothing is ever finished.
    pub never: bool,
    pub homes_filled: bool,
    pub walkers_out: bool,
    pub countable: bool,
    pub kinds: Vec<PlanKind>,
}

/// One kind of cargo of a plan.
#[derive(Clone, Debug)]
pub(super) struct PlanKind {
    pub start: Vec<usize>,
    pub homes: Vec<usize>,
    pub named: bool,
}

impl<const N: usize> Board<N> {
    pub fn new(plan: &Plan) -> Board<N> {
        let set = |cells: &[usize]| cells.iter().copied().collect::<Bits<N>>();
        let column = |without: usize| {
            (0..plan.width * plan.height)
                .filter(|at| at % plan.width != without)
                .collect::<Bits<N>>()
        };
        let kinds = Cargo {
            start: plan.kinds.iter().map(|kind| set(&kind.start)).collect(),
            homes: plan.kinds.iter().map(|kind| set(&kind.homes)).collect(),
            named: plan.kinds.iter().map(|kind| kind.named).collect(),
        };
        let kinds = if kinds.groups() == 0 { nobody() } else { kinds };
        let mut board = Board {
            size: plan.size,
            corner: plan.corner,
            width: plan.width,
            height: plan.height,
            walk: set(&plan.walk),
            hold: set(&plan.hold),
            stands: kinds
                .start
                .iter()
                .fold(set(&plan.hold), |all, &start| all | start),
            near: Vec::new(),
            exits: set(&plan.exits),
            homes: set(&plan.homes),
            not_first: column(0),
            not_last: column(plan.width - 1),
            walker: plan.walker,
            never: plan.never,
            homes_filled: plan.homes_filled,
            walkers_out: plan.walkers_out,
            groups: merge(&kinds),
            kinds,
            countable: plan.countable,
            distances: Distances::default(),
            lost: Vec::new(),
            bound_home: Vec::new(),
            lost_pairs: Vec::new(),
        };
        board.near = (0..board.area()).map(|at| board.around(at)).collect();
        board.distances = Distances::new(&board);
        board.settle_losses();
        board
    }

    /// Number of cells of the box.
    pub fn area(&self) -> usize {
        self.width * self.height
    }

    /// Every member moved by one cell; what leaves the box is gone.
    #[inline]
    pub fn shift(&self, set: Bits<N>, dir: Dir) -> Bits<N> {
        match dir {
            Dir::N => set.down(self.width as u32),
            Dir::E => set.up(1) & self.not_first,
            Dir::S => set.up(self.width as u32),
            Dir::W => set.down(1) & self.not_last,
        }
    }

    /// The cell next to another, which must lie in the box.
    #[inline]
    pub fn next(&self, at: usize, dir: Dir) -> usize {
        match dir {
            Dir::N => at - self.width,
            Dir::E => at + 1,
            Dir::S => at + self.width,
            Dir::W => at - 1,
        }
    }

    /// The cell next to another, if it lies in the box.
    pub fn neighbour(&self, at: usize, dir: Dir) -> Option<usize> {
        let column = at % self.width;
        let inside = match dir {
            Dir::N => at >= self.width,
            Dir::E => column + 1 < self.width,
            Dir::S => at + self.width < self.area(),
            Dir::W => column > 0,
        };
        inside.then(|| self.next(at, dir))
    }

    /// The set with all cells beside it.
    #[inline]
    pub fn grown(&self, set: Bits<N>) -> Bits<N> {
        let [n, e, s, w] = Dir::ALL.map(|dir| self.shift(set, dir));
        set | n | e | s | w
    }

    /// Everything of `free` that is linked to `seed`, side by side, with the seed's own cells that are free.
    #[inline]
    pub fn flood(&self, free: Bits<N>, seed: Bits<N>) -> Bits<N> {
        let mut seen = seed & free;
        loop {
            let mut grown = seen;
            grown |= self.shift(grown, Dir::E) & free;
            grown |= self.shift(grown, Dir::S) & free;
            grown |= self.shift(grown, Dir::W) & free;
            grown |= self.shift(grown, Dir::N) & free;
            if grown == seen {
                return seen;
            }
            seen = grown;
        }
    }

    /// Cargo that a walker in `reach` can push in a direction.
    #[inline]
    pub fn pushable(&self, cargo: Bits<N>, reach: Bits<N>, dir: Dir) -> Bits<N> {
        let touched = self.shift(reach, dir) & cargo & self.walk;
        if touched.any() {
            touched & self.shift(self.hold & !cargo, dir.opposite())
        } else {
            touched
        }
    }

    /// Whether the cargo stands as the objective wants it, whatever the walker does.
    #[inline]
    pub fn cargo_done(&self, cargo: &Cargo<N>, groups: &[Bits<N>]) -> bool {
        if self.never {
            return false;
        }
        let mut unfilled = if self.homes_filled {
            self.homes
        } else {
            Bits::NONE
        };
        for (group, &set) in groups.iter().enumerate() {
            if cargo.named[group] && (set & !cargo.homes[group]).any() {
                return false;
            }
            unfilled &= !(set & cargo.homes[group]);
        }
        !unfilled.any()
    }

    /// Cells of one group's bodies that come after those of the groups before it, in the order of matchings.
    pub fn all(groups: &[Bits<N>]) -> Bits<N> {
        groups.iter().fold(Bits::NONE, |all, &set| all | set)
    }

    /// What a walker at `at` folds into, given all cargo and whether it is done.
    ///
    /// Finished positions have no way out and are folded with nothing. With `WalkersOut` and the cargo done, a walker
    /// that comes to an exit has finished; so walks do not go through exits then.
    #[inline]
    pub fn roam(&self, all: Bits<N>, done: bool, at: usize) -> Roam<N> {
        if done && (!self.walkers_out || self.exits.has(at)) {
            return Roam {
                cells: Bits::one(at),
                finished: true,
            };
        }
        let mut free = self.walk & !all;
        if done {
            free &= !self.exits;
        }
        Roam {
            cells: self.flood(free, Bits::one(at)),
            finished: false,
        }
    }

    /// The roam after cargo moved and the walker came to where it is, given the cells of the roam before. Only for cargo that is
    /// not done.
    ///
    /// If the cells beside the one that was taken are still linked around it, the old roam stays in one piece and is a seed that
    /// the flood has little to add to.
    #[inline]
    pub fn roam_after(&self, all: Bits<N>, before: Bits<N>, moved: &Moved) -> Bits<N> {
        let free = self.walk & !all;
        let seed = Bits::one(moved.walker);
        if self.linked_around(free, moved.taken) {
            self.flood(free, seed | before)
        } else {
            self.flood(free, seed)
        }
    }

    /// Whether the cells of `free` beside a cell that is not of it are linked through the eight around it.
    #[inline]
    pub fn linked_around(&self, free: Bits<N>, at: usize) -> bool {
        let near = &self.near[at];
        let open = |around: usize| u32::from(free.has(usize::from(near[around & 7])));
        let (n, e, s, w) = (open(0), open(2), open(4), open(6));
        let links = (n & open(1) & e) + (e & open(3) & s) + (s & open(5) & w) + (w & open(7) & n);
        n + e + s + w <= links + 1
    }

    fn around(&self, at: usize) -> [u16; 8] {
        let beside = |at: Option<usize>, dir: Dir| at.and_then(|at| self.neighbour(at, dir));
        let corner = |dir: Dir, turn: Dir| beside(beside(Some(at), dir), turn);
        let [n, e, s, w] = Dir::ALL.map(|dir| self.neighbour(at, dir));
        let around = [
            n,
            corner(Dir::N, Dir::E),
            e,
            corner(Dir::E, Dir::S),
            s,
            corner(Dir::S, Dir::W),
            w,
            corner(Dir::W, Dir::N),
        ];
        around.map(|cell| cell.unwrap_or(at) as u16)
    }

    /// The cargo of every finished position, by group, if it is the same in all and where the walker is does not matter.
    pub fn only_goal(&self) -> Option<Vec<Bits<N>>> {
        let mut taken = Bits::NONE;
        for (group, &homes) in self.groups.homes.iter().enumerate() {
            let full = homes.count() == self.groups.start[group].count();
            if !self.bound_home[group] || !full || (taken & homes).any() {
                return None;
            }
            taken |= homes;
        }
        let whole = !self.homes_filled || taken == self.homes;
        (whole && !self.never && !self.walkers_out).then(|| self.groups.homes.clone())
    }

    /// Exits that a walker in `reach` can step on, with the cargo done.
    pub fn ways_out(&self, all: Bits<N>, reach: Bits<N>) -> Bits<N> {
        if self.walkers_out {
            self.grown(reach) & self.exits & self.walk & !all
        } else {
            Bits::NONE
        }
    }

    /// The place in the level's row-by-row order of a cell of the box.
    pub fn level_index(&self, at: usize) -> usize {
        let cell = Cell::new(
            (self.corner.0 + at % self.width) as u8,
            (self.corner.1 + at / self.width) as u8,
        );
        self.size.index(cell)
    }
}

/// A roam: where a walker may be without a push.
pub(super) struct Roam<const N: usize> {
    pub cells: Bits<N>,
    pub finished: bool,
}

/// One group without a body, for levels without cargo: a set of cargo then still has a key.
fn nobody<const N: usize>() -> Cargo<N> {
    Cargo {
        start: vec![Bits::NONE],
        homes: vec![Bits::NONE],
        named: vec![false],
    }
}

/// Puts kinds that are wanted alike into one group. Their positions then count as one, and any route for one is a route
/// for the other: no clause tells their bodies apart.
fn merge<const N: usize>(kinds: &Cargo<N>) -> Cargo<N> {
    let mut groups = Cargo {
        start: Vec::new(),
        homes: Vec::new(),
        named: Vec::new(),
    };
    for kind in 0..kinds.groups() {
        let alike = (0..groups.groups()).find(|&group| {
            groups.homes[group] == kinds.homes[kind] && groups.named[group] == kinds.named[kind]
        });
        match alike {
            Some(group) => groups.start[group] |= kinds.start[kind],
            None => {
                groups.start.push(kinds.start[kind]);
                groups.homes.push(kinds.homes[kind]);
                groups.named.push(kinds.named[kind]);
            }
        }
    }
    groups
}
