//! Cuts: positions that cannot be finished any more, seen without a search.
//!
//! All of them are safe for the verdict, for fewest pushes and for fewest steps: they only cut positions from which no
//! finished one can be reached, and argue from the level with some cargo left out. Leaving cargo out gives the walker more
//! freedom, never less, and every route of the whole level stays one when the pushes of the absent are read as walking.
//!
//! * *Lost cells*: cargo that has to come home stands where it cannot, whatever side the walker is on (`distance`).
//! * *No matching*: bodies and homes cannot be matched (`matching`).
//! * *Lost pairs*: two that have to come home, and cannot with only each other in the way. The table gives the walker all
//!   sides of both, which only adds to what they can do.
//! * *Frozen groups*: a set of cargo none of which can make the first move, because in each direction the cell behind
//!   or the cell before is closed, or lost to all, or holds another of the set. While none moves, none can move; so none ever
//!   does, and one that is not home and has to be will not come. Pushing one onto a lost cell counts as no move, as no finish
//!   lies behind it.

use super::bits::Bits;
use super::board::Board;
use crate::level::Dir;

/// Boxes of more cells than this get no table of pairs; it would cost more than it saves.
const PAIR_CELLS: usize = 256;

impl<const N: usize> Board<N> {
    /// Computes what of the cuts can be known before a search.
    pub(super) fn settle_losses(&mut self) {
        let cargo: u32 = self.groups.start.iter().map(Bits::count).sum();
        let all_bound = self.homes_filled && cargo == self.homes.count();
        self.bound_home = self
            .groups
            .named
            .iter()
            .map(|named| *named || all_bound)
            .collect();
        self.lost = (0..self.groups.groups())
            .map(|group| self.lost_cells(group))
            .collect();
        let one_kind = self.groups.groups() == 1;
        if one_kind && self.bound_home[0] && cargo >= 2 && self.area() <= PAIR_CELLS {
            self.lost_pairs = self.pairs();
        }
    }

    /// Cells on which cargo of a group is lost on every side; none if it need not come home.
    fn lost_cells(&self, group: usize) -> Bits<N> {
        if !self.bound_home[group] {
            return Bits::NONE;
        }
        let hopeless = |&at: &usize| {
            (0..self.distances.side_count(at)).all(|side| {
                let row = self.distances.row(group, at, side);
                row.iter().all(|&far| far == super::distance::NEVER)
            })
        };
        (0..self.area()).filter(hopeless).collect()
    }

    /// Cells that are lost to all groups.
    fn lost_to_all(&self) -> Bits<N> {
        let mut sets = self.lost.iter();
        let first = sets.next().copied().unwrap_or(Bits::NONE);
        sets.fold(first, |all, &set| all & set)
    }

    /// For each cell, the cells with which it makes a lost pair: the greatest table with no way out, found from the other
    /// end by letting pairs that are home grow backward, by pushes of either, until nothing is added.
    fn pairs(&self) -> Vec<Bits<N>> {
        let homes = self.groups.homes[0];
        let live = (self.hold | self.groups.start[0]) & !self.lost[0];
        let mut alive = vec![Bits::NONE; self.area()];
        for home in homes.ones() {
            alive[home] = homes.without(home);
        }
        let mut changed = true;
        while changed {
            changed = false;
            for at in live.ones() {
                let grown = self.grown_pairs(&alive, live, at);
                if grown != alive[at] {
                    alive[at] = grown;
                    changed = true;
                }
            }
        }
        (0..self.area())
            .map(|at| (self.hold | self.groups.start[0]).without(at) & !alive[at])
            .collect()
    }

    /// What `alive[at]` gets by one push of the cargo at `at` and any number of pushes of the other one.
    fn grown_pairs(&self, alive: &[Bits<N>], live: Bits<N>, at: usize) -> Bits<N> {
        let mut set = alive[at];
        if self.walk.has(at) {
            for dir in Dir::ALL {
                let to = self.neighbour(at, dir);
                let from = self.neighbour(at, dir.opposite());
                if let (Some(to), Some(from)) = (to, from)
                    && self.hold.has(to)
                    && self.walk.has(from)
                {
                    set |= alive[to].without(from).without(at);
                }
            }
        }
        let (walk, hold) = (self.walk.without(at), self.hold.without(at));
        let pushed_from = Dir::ALL.map(|dir| live & walk & self.shift(walk, dir));
        loop {
            let mut grown = set;
            for dir in Dir::ALL {
                let came = self.shift(grown & hold, dir.opposite());
                grown |= came & pushed_from[dir.index()];
            }
            if grown == set {
                return set;
            }
            set = grown;
        }
    }

    /// Whether a push that brought cargo of `group` to `at` made a lost pair or froze a group that is not home.
    #[inline]
    pub(super) fn is_lost(&self, groups: &[Bits<N>], all: Bits<N>, at: usize) -> bool {
        if let Some(pairs) = self.lost_pairs.get(at)
            && (*pairs & all).any()
        {
            return true;
        }
        self.freezes(groups, all, at)
    }

    /// Whether a frozen group with `at` in it has a member that has to come home and is not there.
    fn freezes(&self, groups: &[Bits<N>], all: Bits<N>, at: usize) -> bool {
        let open = self.hold & !self.lost_to_all();
        let mut frozen = all;
        loop {
            let (behind, before) = (self.walk & !frozen, open & !frozen);
            let moves = Dir::ALL.iter().fold(Bits::NONE, |moves, &dir| {
                moves | (self.shift(behind, dir) & self.shift(before, dir.opposite()))
            });
            // A member on ground that the walker cannot enter is never pushed.
            let left = frozen & !(moves & self.walk);
            if !left.has(at) {
                return false;
            }
            if left == frozen {
                break;
            }
            frozen = left;
        }
        groups.iter().enumerate().any(|(group, &set)| {
            self.bound_home[group] && (set & frozen & !self.groups.homes[group]).any()
        })
    }
}
