//! What bounds and drawings may ask of a compiled level. Read-only.
//!
//! Cells are indices of the row-by-row order here, bodies are *slots*: places in the canonical order of a position. Slots of
//! one class are interchangeable, so a slot names a body within one position only; its kind and class are the same in all.

use super::tables::{NONE, flag};
use super::{Condition, Rules};
use crate::level::{Axis, BodyIx, Dir, GroundIx, Opens, Size};
use std::ops::Range;

/// A ground kind as the rules see it. Channels are small numbers, gates' and keys' counted apart.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct GroundTraits {
    /// Walkers can't enter.
    pub closed_to_walkers: bool,
    /// Cargo can't enter.
    pub closed_to_cargo: bool,
    /// Bit [`Dir::index`] is set if a body may enter in that direction; all four for ground without `enter_only`.
    pub enter: u8,
    /// A body that enters keeps moving.
    pub slick: bool,
    /// It swallows cargo that fills.
    pub sink: bool,
    /// It changes when it is left.
    pub frail: bool,
    /// The gate channel that a body standing here holds.
    pub plate: Option<u16>,
    /// The gate channel that it listens to, and when it is open.
    pub gate: Option<(u16, Opens)>,
    /// It is one end of a warp.
    pub warp: bool,
    /// The key channel that opens it.
    pub lock: Option<u16>,
    /// Cargo is wanted here.
    pub home: bool,
    /// Walkers are wanted here.
    pub exit: bool,
}

/// The body in a slot as the rules see it. Cargo traits are false for walkers.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct BodyTraits {
    /// Its kind.
    pub kind: BodyIx,
    /// Index of its class of interchangeable bodies.
    pub class: u16,
    /// It is a walker.
    pub walker: bool,
    /// It can be pushed.
    pub push: bool,
    /// It follows a walker.
    pub tow: bool,
    /// It keeps moving when shoved.
    pub glide: bool,
    /// It fills sinks.
    pub fills: bool,
    /// It holds plates.
    pub presses: bool,
    /// Along what it may be dragged.
    pub axis: Option<Axis>,
}

/// An item of the level.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ItemTraits {
    /// Where it lies.
    pub cell: u16,
    /// The key channel; none for a gem.
    pub key: Option<u16>,
}

fn some(number: u16) -> Option<u16> {
    (number != NONE).then_some(number)
}

/// The level as it stands.
impl Rules {
    /// Size of the board.
    pub fn size(&self) -> Size {
        self.tables.size
    }

    /// The longest row of cargo that one walker can push.
    pub fn strength(&self) -> usize {
        self.tables.strength
    }

    /// The neighbour of a cell, or none off the board (or where [`Rules::closing`] closed it).
    pub fn next(&self, cell: u16, dir: Dir) -> Option<u16> {
        some(self.tables.next[usize::from(cell)][dir.index()])
    }

    /// Where a warp on the cell leads as long as both its ends are there.
    pub fn twin(&self, cell: u16) -> Option<u16> {
        some(self.tables.twin[usize::from(cell)])
    }

    /// Every ground that a cell has at the start or may get by links that can happen on this level, the start's first.
    pub fn possible_grounds(&self, cell: u16) -> impl Iterator<Item = GroundIx> + '_ {
        let start = &self.tables.start_ground[usize::from(cell)];
        let options = match self
            .tables
            .mutable
            .binary_search_by_key(&cell, |spot| spot.cell)
        {
            Ok(at) => self.tables.mutable[at].options.as_slice(),
            Err(_) => std::slice::from_ref(start),
        };
        options.iter().map(|&ground| GroundIx(ground))
    }

    /// Whether the ground of any cell can change.
    pub fn ground_can_change(&self) -> bool {
        !self.tables.mutable.is_empty()
    }

    /// The traits of a ground kind.
    pub fn ground_traits(&self, ix: GroundIx) -> GroundTraits {
        let ground = &self.tables.grounds[usize::from(ix.0)];
        let has = |bit: u16| ground.flags & bit != 0;
        let opens = if has(flag::OPENS_WHEN_FREE) {
            Opens::WhenFree
        } else {
            Opens::WhenHeld
        };
        GroundTraits {
            closed_to_walkers: has(flag::CLOSED_TO_WALKER),
            closed_to_cargo: has(flag::CLOSED_TO_CARGO),
            enter: ground.enter,
            slick: has(flag::SLICK),
            sink: has(flag::SINK),
            frail: has(flag::FRAIL),
            plate: some(ground.plate),
            gate: some(ground.gate).map(|channel| (channel, opens)),
            warp: has(flag::WARP),
            lock: some(ground.lock),
            home: has(flag::HOME),
            exit: has(flag::EXIT),
        }
    }

    /// Whether ground of this kind is a home for bodies of that kind.
    pub fn accepts(&self, ground: GroundIx, kind: BodyIx) -> bool {
        self.tables.is_home_for(ground.0, kind)
    }

    /// Number of slots: bodies at the start.
    pub fn bodies(&self) -> usize {
        self.tables.bodies.len()
    }

    /// The traits of the body in a slot.
    pub fn body_traits(&self, slot: usize) -> BodyTraits {
        let body = &self.tables.bodies[slot];
        BodyTraits {
            kind: body.kind,
            class: body.class,
            walker: body.walker,
            push: body.push,
            tow: body.tow,
            glide: body.glide,
            fills: body.fills,
            presses: body.presses,
            axis: body.axis,
        }
    }

    /// Number of classes: bodies of one kind and one shape are interchangeable.
    pub fn classes(&self) -> usize {
        self.tables.classes.len()
    }

    /// The slots of a class.
    pub fn class_slots(&self, class: usize) -> Range<usize> {
        let (first, end) = self.tables.classes[class].slots;
        first..end
    }

    /// Cells of a body of a class when its anchor, its first cell in reading order, is `anchor`.
    pub fn class_cells(&self, class: usize, anchor: u16) -> impl Iterator<Item = u16> + '_ {
        let shape = self.tables.classes[class].shape.iter();
        shape.map(move |&delta| (i32::from(anchor) + delta) as u16)
    }

    /// Slots of the walkers.
    pub fn walkers(&self) -> &[u16] {
        &self.tables.walkers
    }

    /// The items at the start. Their order is that of [`Rules::item_left`].
    pub fn items(&self) -> impl Iterator<Item = ItemTraits> + '_ {
        self.tables.items.iter().map(|item| ItemTraits {
            cell: item.cell,
            key: some(item.key),
        })
    }

    /// Cells that may be or become a home.
    pub fn home_cells(&self) -> &[u16] {
        &self.tables.homes
    }

    /// Cells on which any body can ever stand, ascending.
    pub fn places(&self) -> &[u16] {
        &self.tables.places
    }

    /// What must hold at the end; none if the objective is off.
    pub fn conditions(&self) -> Option<&[Condition]> {
        self.goal.as_deref()
    }

    /// Whether a body of this slot could enter `cell` in direction `dir` on some ground that the cell has or may get: gates
    /// taken as open, locks as openable, whoever stands there ignored. Never says no wrongly; says yes too often.
    pub fn could_enter(&self, slot: usize, cell: u16, dir: Dir) -> bool {
        let body = &self.tables.bodies[slot];
        self.possible_grounds(cell).any(|ix| {
            let ground = &self.tables.grounds[usize::from(ix.0)];
            let has = |bit: u16| ground.flags & bit != 0;
            let closed = if body.walker {
                has(flag::CLOSED_TO_WALKER)
            } else {
                has(flag::CLOSED_TO_CARGO) || has(flag::LOCK)
            };
            let big = self.tables.classes[usize::from(body.class)].shape.len() > 1;
            !closed
                && ground.enter & (1 << dir.index()) != 0
                && (!has(flag::SINK) || body.fills)
                && !(big && has(flag::CLOSED_TO_BLOCKS))
        })
    }
}

/// A packed position read in place.
impl Rules {
    /// The anchor of the body in a slot; none if it has vanished.
    pub fn anchor(&self, words: &[u64], slot: usize) -> Option<u16> {
        let place = self.layout.bodies[slot].read(words);
        self.tables.places.get(place).copied()
    }

    /// The ground of a cell.
    pub fn ground_now(&self, words: &[u64], cell: u16) -> GroundIx {
        let mutable = &self.tables.mutable;
        match mutable.binary_search_by_key(&cell, |spot| spot.cell) {
            Ok(at) => {
                let options = &mutable[at].options;
                GroundIx(options[self.layout.grounds[at].read(words).min(options.len() - 1)])
            }
            Err(_) => GroundIx(self.tables.start_ground[usize::from(cell)]),
        }
    }

    /// Whether an item, counted as in [`Rules::items`], is left.
    pub fn item_left(&self, words: &[u64], item: usize) -> bool {
        let field = self.layout.items.get(item);
        field.is_none_or(|field| field.read(words) != 0)
    }

    /// Keys held of a channel.
    pub fn keys_held(&self, words: &[u64], channel: u16) -> usize {
        let field = self.layout.keys.get(usize::from(channel));
        field.map_or(0, |field| field.read(words))
    }
}
