//! One body alone on the relaxed level.
//!
//! **The relaxation.** Everything that may ever help is granted: each cell has all grounds at once that it has or may get, gates are
//! open, locks have their key, nothing else is on the board, a slide may stop wherever it passes, a warp takes a body on or
//! leaves it. Whatever a real step does to a body, landing and slide together, is then *one* edge here: it begins in a
//! direction in which the relaxed ground lets it, and ends on a cell that the slide passes. Only what no change on the level can ever grant
//! is denied: ground closed for good, a wrong direction, no cell for a walker to push from.
//!
//! So a distance in edges never exceeds the number of landings that the body still needs, and falls by at most one with each.

use crate::level::{Control, Dir};
use crate::rules::Rules;

/// Out of reach.
pub(super) const FAR: u16 = u16::MAX;

/// The relaxed moves of one class of bodies, by anchor.
#[derive(Debug)]
pub(super) struct Moves {
    /// Where each edge leads, grouped by the cell that it leaves.
    ends: Vec<u16>,
    starts: Vec<u32>,
    /// For each cell, bit `Dir::index`: whether a move can begin in that direction.
    pub begins: Vec<u8>,
    /// For each cell: whether some move can end in a sink.
    vanishes: Vec<bool>,
}

impl Moves {
    /// The moves of a walker.
    pub fn of_walker(rules: &Rules, slot: usize) -> Moves {
        Moves::build(rules, slot, |cell, dir| {
            rules
                .next(cell, dir)
                .is_some_and(|next| rules.could_enter(slot, next, dir))
        })
    }

    /// The moves of cargo of one cell under Steer. `walked` tells the cells where a walker can ever stand.
    pub fn of_cargo(rules: &Rules, slot: usize, walker: usize, walked: &[bool]) -> Moves {
        let body = rules.body_traits(slot);
        Moves::build(rules, slot, |cell, dir| {
            let enters = rules
                .next(cell, dir)
                .is_some_and(|next| rules.could_enter(slot, next, dir));
            enters
                && (body.push && can_be_pushed(rules, walker, walked, cell, dir)
                    || body.tow && can_be_towed(rules, walker, walked, cell, dir))
        })
    }

    /// The moves of a block under Drag.
    pub fn of_block(rules: &Rules, slot: usize) -> Moves {
        let body = rules.body_traits(slot);
        let class = usize::from(body.class);
        Moves::build(rules, slot, |anchor, dir| {
            body.axis.is_some_and(|axis| axis.allows(dir))
                && cells_on_board(rules, class, anchor).is_some_and(|cells| {
                    cells.iter().all(|&cell| {
                        rules
                            .next(cell, dir)
                            .is_some_and(|next| rules.could_enter(slot, next, dir))
                    })
                })
        })
    }

    fn build(rules: &Rules, slot: usize, can_begin: impl Fn(u16, Dir) -> bool) -> Moves {
        let area = rules.size().area();
        let mut moves = Moves {
            ends: Vec::new(),
            starts: vec![0],
            begins: vec![0; area],
            vanishes: vec![false; area],
        };
        let mut passed = Vec::new();
        for cell in 0..area as u16 {
            let first = moves.ends.len();
            for dir in Dir::ALL {
                if !can_begin(cell, dir) {
                    continue;
                }
                moves.begins[usize::from(cell)] |= 1 << dir.index();
                moves.vanishes[usize::from(cell)] |= pass(rules, slot, cell, dir, &mut passed);
                for &end in &passed {
                    if end != cell && !moves.ends[first..].contains(&end) {
                        moves.ends.push(end);
                    }
                }
            }
            moves.starts.push(moves.ends.len() as u32);
        }
        moves
    }

    /// Where one move from a cell can end.
    pub fn ends(&self, cell: u16) -> &[u16] {
        let cell = usize::from(cell);
        &self.ends[self.starts[cell] as usize..self.starts[cell + 1] as usize]
    }

    /// Cells that can be reached from some of `from`, these included.
    pub fn reached(&self, from: impl IntoIterator<Item = u16>) -> Vec<bool> {
        let mut reached = vec![false; self.begins.len()];
        let mut open: Vec<u16> = from.into_iter().collect();
        for &cell in &open {
            reached[usize::from(cell)] = true;
        }
        while let Some(cell) = open.pop() {
            for &end in self.ends(cell) {
                if !std::mem::replace(&mut reached[usize::from(end)], true) {
                    open.push(end);
                }
            }
        }
        reached
    }

    /// For each cell, the fewest moves to any of `goals`; [`FAR`] if there is no way.
    pub fn distances_to(&self, goals: impl IntoIterator<Item = u16>) -> Vec<u16> {
        self.backward(goals.into_iter().map(|goal| (goal, 0)).collect())
    }

    /// For each cell, the fewest moves until the body has vanished in a sink; [`FAR`] if it can't.
    pub fn distances_to_sinks(&self) -> Vec<u16> {
        let sinking =
            (0..self.begins.len() as u16).filter(|&cell| self.vanishes[usize::from(cell)]);
        self.backward(sinking.map(|cell| (cell, 1)).collect())
    }

    fn backward(&self, goals: Vec<(u16, u16)>) -> Vec<u16> {
        let area = self.begins.len();
        let mut into: Vec<Vec<u16>> = vec![Vec::new(); area];
        for cell in 0..area as u16 {
            for &end in self.ends(cell) {
                into[usize::from(end)].push(cell);
            }
        }
        let mut distances = vec![FAR; area];
        let mut queue = std::collections::VecDeque::new();
        for (goal, distance) in goals {
            distances[usize::from(goal)] = distance;
            queue.push_back(goal);
        }
        while let Some(cell) = queue.pop_front() {
            let next = distances[usize::from(cell)] + 1;
            for &before in &into[usize::from(cell)] {
                if distances[usize::from(before)] == FAR {
                    distances[usize::from(before)] = next;
                    queue.push_back(before);
                }
            }
        }
        distances
    }
}

/// The cells of a block, or none if some lie off the board. An anchor so near the side that the block would go on in another row
/// is not told apart: no block ever stands there, and no move from where one can stand leads there.
pub(super) fn cells_on_board(rules: &Rules, class: usize, anchor: u16) -> Option<Vec<u16>> {
    let cells: Vec<u16> = rules.class_cells(class, anchor).collect();
    let area = rules.size().area();
    cells
        .iter()
        .all(|&cell| usize::from(cell) < area)
        .then_some(cells)
}

/// Collects the cells where a body can stop that begins to move from `cell`; returns whether it can be swallowed on the way.
fn pass(rules: &Rules, slot: usize, cell: u16, dir: Dir, passed: &mut Vec<u16>) -> bool {
    passed.clear();
    let body = rules.body_traits(slot);
    let Some(first) = rules.next(cell, dir) else {
        return false;
    };
    let shoved = rules.control() == Control::Steer && !body.walker;
    let mut vanishes = false;
    let mut at = 0;
    passed.push(first);
    while at < passed.len() {
        let here = passed[at];
        let (mut slick, mut warp) = (false, false);
        for ground in rules.possible_grounds(here) {
            let ground = rules.ground_traits(ground);
            slick |= ground.slick;
            warp |= ground.warp;
            vanishes |= ground.sink && body.fills;
        }
        let twin = rules.twin(here).filter(|_| warp);
        let slides = slick || body.glide && shoved;
        let onward = rules
            .next(here, dir)
            .filter(|&next| slides && rules.could_enter(slot, next, dir));
        for next in twin.into_iter().chain(onward) {
            if !passed.contains(&next) {
                passed.push(next);
            }
        }
        at += 1;
    }
    vanishes
}

/// Whether cargo on `cell` can be in a row that is pushed in `dir`: some cell behind it, as far as the longest row reaches,
/// can hold a walker that may enter the next.
fn can_be_pushed(rules: &Rules, walker: usize, walked: &[bool], cell: u16, dir: Dir) -> bool {
    let mut ahead = cell;
    for _ in 0..rules.strength().min(rules.bodies()) {
        let Some(behind) = back(rules, ahead, dir) else {
            return false;
        };
        if walked[usize::from(behind)] && rules.could_enter(walker, ahead, dir) {
            return true;
        }
        ahead = behind;
    }
    false
}

/// Whether cargo on `cell` can follow a walker that leaves the next cell in `dir`.
fn can_be_towed(rules: &Rules, walker: usize, walked: &[bool], cell: u16, dir: Dir) -> bool {
    rules.next(cell, dir).is_some_and(|left| {
        walked[usize::from(left)]
            && rules
                .next(left, dir)
                .is_some_and(|next| rules.could_enter(walker, next, dir))
    })
}

/// The cell behind another; unlike [`Rules::next`] it may be one that was closed afterwards, where nobody stands then.
fn back(rules: &Rules, cell: u16, dir: Dir) -> Option<u16> {
    let size = rules.size();
    let cell = size.cell(usize::from(cell));
    size.neighbour(cell, dir.opposite())
        .map(|behind| size.index(behind) as u16)
}
