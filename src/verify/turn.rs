//! One step of the plain interpreter, clause by clause (rules.md, A step under control Steer and Drag).

use super::plain::{Body, Position, World, sorted};
use crate::level::{
    BodyIx, BodyKind, Cell, Channel, Dir, GroundIx, GroundKind, Item, ItemIx, KindId, Opens, Role,
};
use std::collections::{BTreeMap, BTreeSet};

/// A step under way. Bodies are known by number, so that one that moves can be followed; one that vanished is `None`.
pub(super) struct Turn<'w> {
    world: &'w World,
    kinds: Vec<BodyIx>,
    places: Vec<Option<Vec<Cell>>>,
    ground: Vec<GroundIx>,
    items: Vec<Option<ItemIx>>,
    keys: BTreeMap<Channel, u32>,
    /// The channels that were held before the step: gates are judged once.
    held: BTreeSet<Channel>,
    touched: BTreeSet<Cell>,
}

impl<'w> Turn<'w> {
    pub(super) fn new(world: &'w World, from: &Position) -> Turn<'w> {
        let mut held = BTreeSet::new();
        for body in &from.bodies {
            if world.mechanics.body(body.kind).presses {
                for &cell in &body.cells {
                    held.extend(world.ground(from, cell).plate.clone());
                }
            }
        }
        Turn {
            world,
            kinds: from.bodies.iter().map(|body| body.kind).collect(),
            places: from
                .bodies
                .iter()
                .map(|body| Some(body.cells.clone()))
                .collect(),
            ground: from.ground.clone(),
            items: from.items.clone(),
            keys: from.keys.clone(),
            held,
            touched: BTreeSet::new(),
        }
    }

    /// The position as it is now, the cells that bodies came onto, and where each body stands.
    pub(super) fn end(self) -> (Position, BTreeSet<Cell>, Vec<Option<Vec<Cell>>>) {
        let mut bodies: Vec<Body> = self
            .kinds
            .iter()
            .zip(&self.places)
            .filter_map(|(&kind, cells)| {
                let cells = cells.clone()?;
                Some(Body { kind, cells })
            })
            .collect();
        bodies.sort();
        let position = Position {
            ground: self.ground,
            bodies,
            items: self.items,
            keys: self.keys,
        };
        (position, self.touched, self.places)
    }

    fn kind(&self, body: usize) -> &'w BodyKind {
        self.world.mechanics.body(self.kinds[body])
    }

    fn ground(&self, cell: Cell) -> &'w GroundKind {
        let at = self.world.size.index(cell);
        self.world.mechanics.ground(self.ground[at])
    }

    fn turn_ground_into(&mut self, cell: Cell, id: &KindId) {
        if let Some(ground) = self.world.mechanics.find_ground(id) {
            self.ground[self.world.size.index(cell)] = ground;
        }
    }

    fn body_at(&self, cell: Cell) -> Option<usize> {
        let covers = |cells: &Option<Vec<Cell>>| cells.iter().flatten().any(|&c| c == cell);
        self.places.iter().position(covers)
    }

    fn is_walker(&self, body: usize) -> bool {
        self.kind(body).role == Role::Walker
    }

    /// Where a single-cell body stands.
    fn cell_of(&self, body: usize) -> Option<Cell> {
        self.places[body]
            .as_ref()
            .and_then(|cells| cells.first().copied())
    }

    fn next(&self, cell: Cell, dir: Dir) -> Option<Cell> {
        self.world.size.neighbour(cell, dir)
    }

    /// `may_enter(b, q, d)`; `None` is a cell off the board.
    fn may_enter(&self, body: usize, cell: Option<Cell>, dir: Dir) -> bool {
        let Some(cell) = cell else { return false };
        if self.world.shut == Some(cell) {
            return false;
        }
        let (kind, ground) = (self.kind(body), self.ground(cell));
        let role_is_let_in = !ground.closed_to.contains(&kind.role);
        let direction_is_let_in = ground.enter_only.is_empty() || ground.enter_only.contains(&dir);
        let gate_is_open = ground.gate.as_ref().is_none_or(|gate| match gate.opens {
            Opens::WhenHeld => self.held.contains(&gate.channel),
            Opens::WhenFree => !self.held.contains(&gate.channel),
        });
        let sink_is_let_in = ground.sink.is_none() || (kind.role == Role::Cargo && kind.fills);
        let lock_is_let_in = ground.lock.as_ref().is_none_or(|lock| {
            kind.role == Role::Walker && self.keys.get(&lock.channel).is_some_and(|&n| n > 0)
        });
        role_is_let_in && direction_is_let_in && gate_is_open && sink_is_let_in && lock_is_let_in
    }

    /// `land(b, q, d)`, for single-cell bodies.
    fn land(&mut self, body: usize, cell: Cell) {
        self.leave(body);
        self.come_onto(body, cell);
        if let Some(lock) = &self.ground(cell).lock {
            self.spend_key(&lock.channel);
            self.turn_ground_into(cell, &lock.becomes);
        }
        self.take_item(body, cell);
        if let Some(becomes) = &self.ground(cell).sink {
            self.places[body] = None;
            self.turn_ground_into(cell, becomes);
            return;
        }
        if let Some(twin) = self.twin(cell)
            && self.body_at(twin).is_none()
            && self.world.shut != Some(twin)
        {
            self.leave(body);
            self.come_onto(body, twin);
            self.take_item(body, twin);
        }
    }

    /// The body is about to stand elsewhere: frail ground under it changes now.
    fn leave(&mut self, body: usize) {
        if let Some(cell) = self.cell_of(body)
            && let Some(becomes) = &self.ground(cell).frail
        {
            self.turn_ground_into(cell, becomes);
        }
    }

    fn come_onto(&mut self, body: usize, cell: Cell) {
        self.places[body] = Some(vec![cell]);
        self.touched.insert(cell);
    }

    fn spend_key(&mut self, channel: &Channel) {
        if let Some(count) = self.keys.get_mut(channel) {
            *count -= 1;
            if *count == 0 {
                self.keys.remove(channel);
            }
        }
    }

    fn take_item(&mut self, body: usize, cell: Cell) {
        if !self.is_walker(body) {
            return;
        }
        if let Some(item) = self.items[self.world.size.index(cell)].take()
            && let Item::Key(channel) = &self.world.mechanics.item(item).item
        {
            *self.keys.entry(channel.clone()).or_insert(0) += 1;
        }
    }

    /// The other cell whose ground is, as of now, a warp of the same channel.
    fn twin(&self, cell: Cell) -> Option<Cell> {
        let channel = self.ground(cell).warp.as_ref()?;
        self.world
            .size
            .cells()
            .find(|&other| other != cell && self.ground(other).warp.as_ref() == Some(channel))
    }

    /// `slide(b, d, shoved)`.
    fn slide(&mut self, body: usize, dir: Dir, shoved: bool) {
        let mut stood_on = BTreeSet::new();
        while let Some(cell) = self.cell_of(body) {
            let come_again = !stood_on.insert(cell);
            let keeps_moving = self.ground(cell).slick || (self.kind(body).glide && shoved);
            if come_again || !keeps_moving {
                return;
            }
            let next = self.next(cell, dir);
            match next {
                Some(next)
                    if self.may_enter(body, Some(next), dir) && self.body_at(next).is_none() =>
                {
                    self.land(body, next);
                }
                _ => return,
            }
        }
    }

    /// A step under control Steer.
    pub(super) fn walk(&mut self, dir: Dir) {
        let mut walkers: Vec<(i32, Cell, usize)> = (0..self.kinds.len())
            .filter(|&body| self.is_walker(body))
            .filter_map(|body| {
                let cell = self.cell_of(body)?;
                let (dx, dy) = dir.delta();
                let forward = dx * i32::from(cell.x) + dy * i32::from(cell.y);
                Some((-forward, cell, body))
            })
            .collect();
        walkers.sort();
        for (_, cell, walker) in walkers {
            self.walk_one(walker, cell, dir);
        }
    }

    fn walk_one(&mut self, walker: usize, from: Cell, dir: Dir) {
        let ahead = self.next(from, dir);
        let Some(to) = ahead else { return };
        if !self.may_enter(walker, ahead, dir) {
            return;
        }
        if let Some(other) = self.body_at(to)
            && (self.is_walker(other) || !self.push_row(to, dir))
        {
            return;
        }
        if self.body_at(to).is_some() || !self.may_enter(walker, ahead, dir) {
            return;
        }
        self.land(walker, to);
        self.slide(walker, dir, false);
        self.tow(from, dir);
    }

    /// Pushes the unbroken row of bodies that begins at `first`. Returns whether the walker need not stay.
    fn push_row(&mut self, first: Cell, dir: Dir) -> bool {
        let mut row = Vec::new();
        let mut beyond = Some(first);
        while let Some(cell) = beyond
            && let Some(body) = self.body_at(cell)
        {
            row.push((body, self.next(cell, dir)));
            beyond = self.next(cell, dir);
        }
        let too_long = row.len() > usize::from(self.world.mechanics.strength);
        let stuck = row.iter().any(|&(body, next)| {
            self.is_walker(body) || !self.kind(body).push || !self.may_enter(body, next, dir)
        });
        if too_long || stuck || beyond.is_none() {
            return false;
        }
        for &(body, next) in row.iter().rev() {
            match next {
                Some(to) if self.body_at(to).is_none() && self.may_enter(body, next, dir) => {
                    self.land(body, to);
                    self.slide(body, dir, true);
                }
                _ => return false,
            }
        }
        true
    }

    /// The walker has left `from`; cargo behind that cell may follow onto it.
    fn tow(&mut self, from: Cell, dir: Dir) {
        let behind = self.next(from, dir.opposite());
        let Some(body) = behind.and_then(|cell| self.body_at(cell)) else {
            return;
        };
        let follows = !self.is_walker(body) && self.kind(body).tow;
        if follows && self.body_at(from).is_none() && self.may_enter(body, Some(from), dir) {
            self.land(body, from);
            self.slide(body, dir, true);
        }
    }

    /// A step under control Drag: the block that covers `cell`. Returns the block's number if it could move.
    pub(super) fn drag(&mut self, cell: Cell, dir: Dir) -> Option<usize> {
        let block = self.body_at(cell)?;
        if !self.kind(block).axis.is_some_and(|axis| axis.allows(dir)) {
            return None;
        }
        let old = self.places[block].clone()?;
        let new: Vec<Cell> = old
            .iter()
            .map(|&cell| self.next(cell, dir))
            .collect::<Option<_>>()?;
        let single = old.len() == 1;
        let may_stand = |&cell: &Cell| {
            let ground = self.ground(cell);
            let closed_to_large = ground.slick
                || ground.sink.is_some()
                || ground.warp.is_some()
                || ground.lock.is_some();
            self.body_at(cell).is_none_or(|other| other == block)
                && self.may_enter(block, Some(cell), dir)
                && (single || !closed_to_large)
        };
        if !new.iter().all(may_stand) {
            return None;
        }
        if single {
            self.land(block, new[0]);
            self.slide(block, dir, false);
        } else {
            self.shift(block, &old, &new);
        }
        Some(block)
    }

    /// Moves a block of several cells; frail ground changes on each cell that it has left altogether.
    fn shift(&mut self, block: usize, old: &[Cell], new: &[Cell]) {
        for &cell in old.iter().filter(|cell| !new.contains(cell)) {
            if let Some(becomes) = &self.ground(cell).frail {
                self.turn_ground_into(cell, becomes);
            }
        }
        self.places[block] = Some(sorted(new.to_vec()));
        self.touched.extend(new.iter().copied());
    }
}
