//! What bodies do in a step: entering, landing, sliding (rules.md), and the step under each control.

use super::tables::{Ground, NONE, flag};
use super::{Rules, Scratch};
use crate::level::Dir;

impl Rules {
    fn ground_of<'a>(&'a self, s: &Scratch, cell: u16) -> &'a Ground {
        &self.tables.grounds[usize::from(s.ground[usize::from(cell)])]
    }

    /// Judges the gates, once, from the position before the step.
    pub(super) fn judge_gates(&self, s: &mut Scratch) {
        if self.tables.plates.is_empty() {
            return;
        }
        s.held.fill(false);
        for &cell in &self.tables.plates {
            let occupant = s.occupant[usize::from(cell)];
            let plate = self.ground_of(s, cell).plate;
            if plate != NONE
                && occupant != NONE
                && self.tables.bodies[usize::from(occupant)].presses
            {
                s.held[usize::from(plate)] = true;
            }
        }
    }

    /// `may_enter` of rules.md; occupancy is asked separately.
    fn may_enter(&self, s: &Scratch, slot: u16, cell: u16, dir: Dir) -> bool {
        let ground = self.ground_of(s, cell);
        if ground.flags & flag::ASKS == 0 {
            return true;
        }
        let body = &self.tables.bodies[usize::from(slot)];
        let closed = if body.walker {
            flag::CLOSED_TO_WALKER
        } else {
            flag::CLOSED_TO_CARGO
        };
        if ground.flags & closed != 0 || ground.enter & (1 << dir.index()) == 0 {
            return false;
        }
        if ground.flags & flag::GATE != 0 && !self.gate_is_open(s, cell) {
            return false;
        }
        if ground.flags & flag::SINK != 0 && !body.fills {
            return false;
        }
        ground.flags & flag::LOCK == 0 || body.walker && s.keys[usize::from(ground.lock)] > 0
    }

    /// Whether the ground of a cell is no gate, or one that was open before the step.
    pub(super) fn gate_is_open(&self, s: &Scratch, cell: u16) -> bool {
        let ground = self.ground_of(s, cell);
        let when_free = ground.flags & flag::OPENS_WHEN_FREE != 0;
        ground.flags & flag::GATE == 0 || s.held[usize::from(ground.gate)] != when_free
    }

    /// The body leaves `cell`: nobody stands there now, and frail ground changes.
    fn leave(&self, s: &mut Scratch, cell: u16) {
        s.occupant[usize::from(cell)] = NONE;
        let ground = self.ground_of(s, cell);
        if ground.flags & flag::FRAIL != 0 {
            s.ground[usize::from(cell)] = ground.frail_to;
        }
    }

    fn take_item(&self, s: &mut Scratch, cell: u16) {
        let item = self.tables.item_at[usize::from(cell)];
        if item == NONE || !s.item_left[usize::from(item)] {
            return;
        }
        s.item_left[usize::from(item)] = false;
        let key = self.tables.items[usize::from(item)].key;
        if key != NONE {
            s.keys[usize::from(key)] += 1;
        }
    }

    fn stand(&self, s: &mut Scratch, slot: u16, cell: u16, walker: bool) {
        s.at[usize::from(slot)] = cell;
        s.occupant[usize::from(cell)] = slot;
        s.landings.push(cell);
        if walker {
            self.take_item(s, cell);
        }
    }

    /// `land` of rules.md, for a body of one cell.
    fn land(&self, s: &mut Scratch, slot: u16, cell: u16) {
        let from = s.at[usize::from(slot)];
        let walker = self.tables.bodies[usize::from(slot)].walker;
        if !walker {
            s.cargo_moves.push((slot, from));
        }
        self.leave(s, from);
        self.stand(s, slot, cell, walker);
        let ground = self.ground_of(s, cell);
        if ground.flags & flag::LANDING == 0 {
            return;
        }
        if ground.flags & flag::LOCK != 0 {
            let keys = &mut s.keys[usize::from(ground.lock)];
            *keys = keys.saturating_sub(1);
            if ground.lock_to != NONE {
                s.ground[usize::from(cell)] = ground.lock_to;
            }
        } else if ground.flags & flag::SINK != 0 {
            s.occupant[usize::from(cell)] = NONE;
            s.at[usize::from(slot)] = NONE;
            if ground.sink_to != NONE {
                s.ground[usize::from(cell)] = ground.sink_to;
            }
        } else {
            self.warp(s, slot, cell, walker);
        }
    }

    fn warp(&self, s: &mut Scratch, slot: u16, cell: u16, walker: bool) {
        let twin = self.tables.twin[usize::from(cell)];
        if twin != NONE
            && self.ground_of(s, twin).flags & flag::WARP != 0
            && s.occupant[usize::from(twin)] == NONE
        {
            self.leave(s, cell);
            self.stand(s, slot, twin, walker);
        }
    }

    /// `slide` of rules.md. Without warps a body never comes back in one slide, so nothing is noted then.
    fn slide(&self, s: &mut Scratch, slot: u16, dir: Dir, shoved: bool) {
        let glides = shoved && self.tables.bodies[usize::from(slot)].glide;
        s.stood.clear();
        loop {
            let cell = s.at[usize::from(slot)];
            if cell == NONE {
                return;
            }
            if self.tables.has_warps {
                if s.stood.contains(&cell) {
                    return;
                }
                s.stood.push(cell);
            }
            if !glides && self.ground_of(s, cell).flags & flag::SLICK == 0 {
                return;
            }
            let next = self.tables.next[usize::from(cell)][dir.index()];
            if next == NONE
                || s.occupant[usize::from(next)] != NONE
                || !self.may_enter(s, slot, next, dir)
            {
                return;
            }
            self.land(s, slot, next);
        }
    }

    fn begin(&self, s: &mut Scratch) {
        s.landings.clear();
        s.cargo_moves.clear();
        self.judge_gates(s);
    }

    /// A step under control Steer, in place. Returns whether any body landed anywhere; if not, nothing has changed.
    pub(super) fn steer(&self, s: &mut Scratch, dir: Dir) -> bool {
        self.begin(s);
        if let [walker] = self.tables.walkers[..] {
            self.walk(s, walker, dir);
            return !s.landings.is_empty();
        }
        let mut order = std::mem::take(&mut s.walker_order);
        order.clear();
        order.extend_from_slice(&self.tables.walkers);
        let width = self.tables.size.width();
        order.sort_unstable_by_key(|&slot| {
            let cell = usize::from(s.at[usize::from(slot)]);
            let (x, y) = ((cell % width) as i32, (cell / width) as i32);
            let (dx, dy) = dir.delta();
            (-(x * dx + y * dy), y, x)
        });
        for &walker in &order {
            self.walk(s, walker, dir);
        }
        s.walker_order = order;
        !s.landings.is_empty()
    }

    fn walk(&self, s: &mut Scratch, walker: u16, dir: Dir) {
        let from = s.at[usize::from(walker)];
        let to = self.tables.next[usize::from(from)][dir.index()];
        if to == NONE || !self.may_enter(s, walker, to, dir) {
            return;
        }
        if s.occupant[usize::from(to)] != NONE
            && !(self.push_row(s, to, dir)
                && s.occupant[usize::from(to)] == NONE
                && self.may_enter(s, walker, to, dir))
        {
            return;
        }
        self.land(s, walker, to);
        self.slide(s, walker, dir, false);
        if self.tables.has_tow {
            self.tow(s, from, dir);
        }
    }

    /// Pushes the row of bodies that begins at `first`. Returns whether all of it moved on.
    fn push_row(&self, s: &mut Scratch, first: u16, dir: Dir) -> bool {
        let next = |cell: u16| self.tables.next[usize::from(cell)][dir.index()];
        let (mut cell, mut last, mut length) = (first, first, 0);
        while s.occupant[usize::from(cell)] != NONE {
            let slot = s.occupant[usize::from(cell)];
            length += 1;
            if length > self.tables.strength || !self.tables.bodies[usize::from(slot)].push {
                return false;
            }
            last = cell;
            cell = next(cell);
            if cell == NONE || !self.may_enter(s, slot, cell, dir) {
                return false;
            }
        }
        loop {
            let slot = s.occupant[usize::from(last)];
            let to = next(last);
            if s.occupant[usize::from(to)] != NONE || !self.may_enter(s, slot, to, dir) {
                return false;
            }
            self.land(s, slot, to);
            self.slide(s, slot, dir, true);
            if last == first {
                return true;
            }
            last = self.tables.next[usize::from(last)][dir.opposite().index()];
            if last == NONE {
                return false;
            }
        }
    }

    /// Cargo with tow behind the cell that a walker left follows it.
    fn tow(&self, s: &mut Scratch, left: u16, dir: Dir) {
        let behind = self.tables.next[usize::from(left)][dir.opposite().index()];
        if behind == NONE || s.occupant[usize::from(left)] != NONE {
            return;
        }
        let slot = s.occupant[usize::from(behind)];
        if slot != NONE
            && self.tables.bodies[usize::from(slot)].tow
            && self.may_enter(s, slot, left, dir)
        {
            self.land(s, slot, left);
            self.slide(s, slot, dir, true);
        }
    }

    /// A step under control Drag, in place. Returns whether the block moved; if not, nothing has changed.
    pub(super) fn drag(&self, s: &mut Scratch, slot: u16, dir: Dir) -> bool {
        self.begin(s);
        let Some(&anchor) = s.at.get(usize::from(slot)) else {
            return false;
        };
        let body = &self.tables.bodies[usize::from(slot)];
        if anchor == NONE || !body.axis.is_some_and(|axis| axis.allows(dir)) {
            return false;
        }
        let shape = &self.tables.classes[usize::from(body.class)].shape;
        let single = shape.len() == 1;
        let fits = shape.iter().all(|&delta| {
            let to = self.tables.next[(i32::from(anchor) + delta) as usize][dir.index()];
            to != NONE && {
                let occupant = s.occupant[usize::from(to)];
                (occupant == NONE || occupant == slot)
                    && self.may_enter(s, slot, to, dir)
                    && (single || self.ground_of(s, to).flags & flag::CLOSED_TO_BLOCKS == 0)
            }
        });
        if !fits {
            return false;
        }
        let to = self.tables.next[usize::from(anchor)][dir.index()];
        if single {
            self.land(s, slot, to);
            self.slide(s, slot, dir, false);
        } else {
            self.shift_block(s, slot, anchor, to);
        }
        true
    }

    fn shift_block(&self, s: &mut Scratch, slot: u16, from: u16, to: u16) {
        let class = usize::from(self.tables.bodies[usize::from(slot)].class);
        let shape = &self.tables.classes[class].shape;
        let cell = |anchor: u16, delta: i32| (i32::from(anchor) + delta) as u16;
        s.cargo_moves.push((slot, from));
        s.at[usize::from(slot)] = to;
        for &delta in shape {
            s.occupant[usize::from(cell(from, delta))] = NONE;
        }
        for &delta in shape {
            let covered = cell(to, delta);
            s.occupant[usize::from(covered)] = slot;
            s.landings.push(covered);
        }
        for &delta in shape {
            let old = cell(from, delta);
            if s.occupant[usize::from(old)] == NONE {
                self.leave(s, old);
            }
        }
    }

    /// Whether some cargo stands elsewhere than before the step, or has vanished.
    pub(super) fn cargo_moved(&self, s: &Scratch) -> bool {
        let moves = s.cargo_moves.iter().enumerate();
        moves.into_iter().any(|(at, &(slot, from))| {
            let first = !s.cargo_moves[..at].iter().any(|&(other, _)| other == slot);
            first && s.at[usize::from(slot)] != from
        })
    }
}
