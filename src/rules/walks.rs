//! Spreading a roam over the board.
//!
//! Most steps of a walk are plain: from ground without surprises to a free cell of such ground, and back by the opposite step.
//! Those are told from a survey of the board, one byte a cell, made once a roam. Whatever the survey calls odd is tried with the real step,
//! forth and back, so that the roam is exact for every mix of traits.
//!
//! What is odd, for one walker: ground that slides, warps, changes when left or unlocked; cells with an item; plates that the walker
//! would hold, since gates are judged from where it stands; cells where standing may finish the level; cells beside cargo that
//! may follow. A push always changes more than where the walker stands unless a warp can bring cargo back, so cargo in the way is tried only on
//! levels with warps. The same holds for the way back of a step that the opposite one does not undo: without a warp, a
//! slide never comes round a corner.

use super::packing::Field;
use super::tables::{NONE, Tables, flag};
use super::{Condition, Departure, Member, Roam, Rules, Scratch, Step};
use crate::level::Dir;

/// What the survey notes of a cell; the low four bits say in which directions the walker may enter.
mod note {
    pub const ENTER: u8 = 0b1111;
    pub const ODD: u8 = 1 << 4;
    pub const TAKEN: u8 = 1 << 5;
    /// Taken by cargo that can be pushed.
    pub const PUSH: u8 = 1 << 6;
    /// Taken by cargo that may follow.
    pub const TOW: u8 = 1 << 7;
}

/// Whether standing somewhere can, for a walker, decide whether the level is finished.
pub(super) fn goal_minds_walker(tables: &Tables, goal: Option<&[Condition]>) -> bool {
    let walks = |slot: u16| tables.bodies[usize::from(slot)].walker;
    goal.is_some_and(|conditions| {
        conditions.iter().any(|wanted| match wanted {
            Condition::WalkersOut => true,
            Condition::CargoHome(slots) => slots.iter().any(|&slot| walks(slot)),
            Condition::HomesFilled => tables.walkers.iter().any(|&slot| {
                let kind = tables.bodies[usize::from(slot)].kind;
                (0..tables.grounds.len()).any(|ground| tables.is_home_for(ground as u16, kind))
            }),
            Condition::GemsTaken(_) => false,
        })
    })
}

/// What the survey notes of ground, for the walker, gates left out.
pub(super) fn ground_notes(tables: &Tables, minds_walker: bool) -> Vec<u8> {
    let presses = tables
        .walkers
        .iter()
        .any(|&slot| tables.bodies[usize::from(slot)].presses);
    let mut odd = flag::SLICK | flag::FRAIL | flag::LOCK | flag::WARP;
    if presses && !tables.plates.is_empty() {
        odd |= flag::PLATE;
    }
    if minds_walker {
        odd |= flag::EXIT | flag::HOME;
    }
    let notes = tables.grounds.iter().map(|ground| {
        let closed = ground.flags & (flag::CLOSED_TO_WALKER | flag::SINK) != 0;
        let enter = if closed { 0 } else { ground.enter };
        enter
            | if ground.flags & odd != 0 {
                note::ODD
            } else {
                0
            }
    });
    notes.collect()
}

impl Rules {
    /// Notes what a walk needs to know of every cell, for the position in the scratch.
    pub(super) fn survey(&self, s: &mut Scratch, walker: u16) {
        let tables = &self.tables;
        let home = s.at[usize::from(walker)];
        s.notes.clear();
        s.notes.extend_from_slice(&self.start_notes);
        for spot in &tables.mutable {
            let cell = usize::from(spot.cell);
            s.notes[cell] = self.ground_notes[usize::from(s.ground[cell])];
        }
        if !tables.gates.is_empty() {
            s.occupant[usize::from(home)] = NONE;
            self.judge_gates(s);
            s.occupant[usize::from(home)] = walker;
            for &cell in &tables.gates {
                if !self.gate_is_open(s, cell) {
                    s.notes[usize::from(cell)] &= !note::ENTER;
                }
            }
        }
        for (item, &left) in tables.items.iter().zip(&s.item_left) {
            if left {
                s.notes[usize::from(item.cell)] |= note::ODD;
            }
        }
        for (body, &cell) in tables.bodies.iter().zip(&s.at) {
            if cell == NONE || body.walker {
                continue;
            }
            let push = if body.push { note::PUSH } else { 0 };
            let tow = if body.tow { note::TOW } else { 0 };
            s.notes[usize::from(cell)] |= note::TAKEN | push | tow;
        }
    }

    /// Grows the roam from its entry, breadth first.
    pub(super) fn spread(&self, s: &mut Scratch, from: &[u64], field: Field, out: &mut Roam) {
        let notes = std::mem::take(&mut s.notes);
        let mut at = 0;
        while at < out.members.len() {
            let cell = usize::from(out.members[at].cell);
            let here = notes[cell];
            for dir in Dir::ALL {
                let to = self.walk_next[cell][dir.index()];
                match self.judge(&notes, cell, here, to, dir) {
                    Walk::Stay => {}
                    Walk::Link => out.reach_cell(to, at, dir),
                    Walk::Leave => out.depart(at, dir),
                    Walk::Try => self.try_walk(s, from, field, out, at, dir),
                }
            }
            at += 1;
        }
        s.notes = notes;
    }

    #[inline]
    fn judge(&self, notes: &[u8], cell: usize, here: u8, to: u16, dir: Dir) -> Walk {
        let there = notes[usize::from(to)];
        let back = dir.opposite();
        if here & note::ODD != 0 {
            return Walk::Try;
        }
        if there & (1 << dir.index()) == 0 {
            return Walk::Stay;
        }
        if there & note::TAKEN != 0 {
            return self.judge_push(notes, there, to, dir);
        }
        if there & note::ODD != 0 {
            return Walk::Try;
        }
        if self.tables.has_tow {
            let behind = notes[usize::from(self.walk_next[cell][back.index()])];
            let beyond = notes[usize::from(self.walk_next[usize::from(to)][dir.index()])];
            if (behind | beyond) & note::TOW != 0 {
                return Walk::Try;
            }
        }
        if here & (1 << back.index()) != 0 {
            Walk::Link
        } else if self.tables.has_warps {
            Walk::Try
        } else {
            Walk::Leave
        }
    }

    fn judge_push(&self, notes: &[u8], there: u8, to: u16, dir: Dir) -> Walk {
        let beyond = self.walk_next[usize::from(to)][dir.index()];
        let blocked = usize::from(beyond) == self.tables.size.area()
            || self.tables.strength == 1 && notes[usize::from(beyond)] & note::TAKEN != 0;
        if there & note::PUSH == 0 || blocked {
            Walk::Stay
        } else if self.tables.has_warps {
            Walk::Try
        } else {
            Walk::Leave
        }
    }

    /// Makes the real step from a member, forth and back, and files it.
    fn try_walk(
        &self,
        s: &mut Scratch,
        from: &[u64],
        field: Field,
        out: &mut Roam,
        at: usize,
        dir: Dir,
    ) {
        let [mut here, mut there, mut back] = std::mem::take(&mut s.words);
        self.member_position(from, &out.members[at], &mut here);
        let step = Step { slot: 0, dir };
        if let Some(info) = self.step_into(s, &here, step, &mut there) {
            let linked = !info.finished
                && same_but(field, &here, &there)
                && self.leads_back(s, &there, &here, &mut back, dir.opposite());
            if linked {
                out.reach_cell(self.cell_in(field, &there), at, dir);
            } else {
                out.depart(at, dir);
            }
        }
        s.words = [here, there, back];
    }

    /// Whether one step leads from `there` to `here`; `first` is tried first.
    fn leads_back(
        &self,
        s: &mut Scratch,
        there: &[u64],
        here: &[u64],
        back: &mut [u64],
        first: Dir,
    ) -> bool {
        let others = Dir::ALL.into_iter().filter(|&dir| dir != first);
        std::iter::once(first).chain(others).any(|dir| {
            self.step_into(s, there, Step { slot: 0, dir }, back)
                .is_some()
                && *back == *here
        })
    }
}

/// What a step from a member is to the roam.
enum Walk {
    /// No step.
    Stay,
    /// A step of the roam.
    Link,
    /// A step that is not.
    Leave,
    /// Not told by the survey.
    Try,
}

impl Roam {
    fn reach_cell(&mut self, cell: u16, parent: usize, dir: Dir) {
        if self.member_at(cell).is_none() {
            let distance = self.members[parent].distance + 1;
            let parent = parent as u16;
            self.add(Member {
                cell,
                distance,
                parent,
                dir,
            });
        }
    }

    fn depart(&mut self, member: usize, dir: Dir) {
        let step = Step { slot: 0, dir };
        let member = member as u16;
        self.departures.push(Departure { member, step });
    }
}

/// Whether two positions agree in all but one field.
fn same_but(field: Field, one: &[u64], other: &[u64]) -> bool {
    one.iter().zip(other).enumerate().all(|(word, (a, b))| {
        let ignored = if word == field.word as usize {
            field.mask << field.shift
        } else {
            0
        };
        (a ^ b) & !ignored == 0
    })
}
