//! Groups of cargo that hold each other fast.

use super::relaxed::Moves;
use crate::level::Dir;
use crate::rules::Rules;

/// Finds the cargo of a position that can never move again.
///
/// **Why it is safe.** Take the greatest set of bodies in which each body, for each direction in which the relaxed level would
/// let it begin to move, has a body of the set right ahead or right behind. Suppose that one of them moves some day, and look at the first
/// landing of any: all others still stand where they stood. With strength 1 a push needs a free cell ahead and a walker
/// right behind, and one of both holds a body of the set. So none ever moves. Gates, sinks, locks, frail ground, slides, warps and
/// more walkers change nothing about it, since a landing begins like that in any case.
///
/// **Where it is off.** Rows of two or more can be pushed from farther behind, and a tow needs no walker behind: with strength over
/// 1, or any cargo with tow, only bodies that the relaxed level lets begin nowhere count as fast.
#[derive(Debug)]
pub(super) struct Frozen {
    groups: bool,
    slots: Vec<usize>,
    fast: Vec<bool>,
    on_cell: Vec<u16>,
}

const NOBODY: u16 = u16::MAX;

impl Frozen {
    pub fn new(rules: &Rules) -> Frozen {
        let slots: Vec<usize> = (0..rules.bodies())
            .filter(|&slot| !rules.body_traits(slot).walker)
            .collect();
        let tow = slots.iter().any(|&slot| rules.body_traits(slot).tow);
        Frozen {
            groups: !tow && (rules.strength() == 1 || slots.len() == 1),
            fast: vec![false; rules.bodies()],
            on_cell: vec![NOBODY; rules.size().area()],
            slots,
        }
    }

    /// Whether each body is fast, by slot; `moves` are by class, `anchors` by slot, `u16::MAX` for bodies that have vanished.
    pub fn find(&mut self, rules: &Rules, moves: &[Option<Moves>], anchors: &[u16]) -> &[bool] {
        for &slot in &self.slots {
            let stands = anchors[slot] != NOBODY;
            self.fast[slot] = stands;
            if stands {
                self.on_cell[usize::from(anchors[slot])] = slot as u16;
            }
        }
        loop {
            let mut changed = false;
            for at in 0..self.slots.len() {
                let slot = self.slots[at];
                if self.fast[slot] && self.can_begin(rules, moves, slot, anchors[slot]) {
                    self.fast[slot] = false;
                    changed = true;
                }
            }
            if !changed {
                break;
            }
        }
        for &slot in &self.slots {
            if anchors[slot] != NOBODY {
                self.on_cell[usize::from(anchors[slot])] = NOBODY;
            }
        }
        &self.fast
    }

    fn can_begin(&self, rules: &Rules, moves: &[Option<Moves>], slot: usize, cell: u16) -> bool {
        let class = usize::from(rules.body_traits(slot).class);
        let Some(moves) = &moves[class] else {
            return true;
        };
        let begins = moves.begins[usize::from(cell)];
        let held = |cell: Option<u16>| {
            cell.is_some_and(|cell| {
                let slot = self.on_cell[usize::from(cell)];
                slot != NOBODY && self.fast[usize::from(slot)]
            })
        };
        Dir::ALL.into_iter().any(|dir| {
            let lets = begins & (1 << dir.index()) != 0;
            lets && !(self.groups
                && (held(rules.next(cell, dir)) || held(rules.next(cell, dir.opposite()))))
        })
    }
}
