//! Mechanics and level joined into tables that a step can look things up in.

use super::bodies::sort_bodies;
use crate::level::{
    Axis, BodyIx, Control, Dir, GroundKind, Item, Level, Mechanics, Opens, Role, Size,
};
use std::collections::BTreeSet;

/// No cell, no body, no channel, no ground: whatever the number would otherwise count.
pub(crate) const NONE: u16 = u16::MAX;

/// Trait bits of a ground kind.
pub(crate) mod flag {
    pub const CLOSED_TO_WALKER: u16 = 1;
    pub const CLOSED_TO_CARGO: u16 = 1 << 1;
    pub const SLICK: u16 = 1 << 2;
    pub const SINK: u16 = 1 << 3;
    pub const FRAIL: u16 = 1 << 4;
    pub const PLATE: u16 = 1 << 5;
    pub const GATE: u16 = 1 << 6;
    pub const OPENS_WHEN_FREE: u16 = 1 << 7;
    pub const WARP: u16 = 1 << 8;
    pub const LOCK: u16 = 1 << 9;
    pub const EXIT: u16 = 1 << 10;
    pub const HOME: u16 = 1 << 11;
    pub const ONE_WAY: u16 = 1 << 12;
    /// What `may_enter` has to look at.
    pub const ASKS: u16 = CLOSED_TO_WALKER | CLOSED_TO_CARGO | SINK | GATE | LOCK | ONE_WAY;
    /// What happens on landing, beyond taking items.
    pub const LANDING: u16 = SINK | WARP | LOCK;
    /// What blocks of several cells can't be moved onto, beside what is closed to cargo.
    pub const CLOSED_TO_BLOCKS: u16 = SLICK | SINK | WARP | LOCK;
}

/// A ground kind as the step engine sees it.
#[derive(Clone, Debug)]
pub(crate) struct Ground {
    pub flags: u16,
    /// Bit `Dir::index` is set if a body may enter in that direction.
    pub enter: u8,
    pub sink_to: u16,
    pub frail_to: u16,
    pub lock_to: u16,
    /// Gate channel that a plate here holds.
    pub plate: u16,
    /// Gate channel that a gate here listens to.
    pub gate: u16,
    /// Key channel of a lock.
    pub lock: u16,
}

/// A body kind as the step engine sees it.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Body {
    pub kind: BodyIx,
    pub walker: bool,
    pub push: bool,
    pub tow: bool,
    pub glide: bool,
    pub fills: bool,
    pub presses: bool,
    pub axis: Option<Axis>,
    /// Which of [`Tables::classes`].
    pub class: u16,
}

/// Bodies that are interchangeable: one kind, one shape.
#[derive(Clone, Debug)]
pub(crate) struct Class {
    pub kind: BodyIx,
    /// Differences of cell index from the anchor, which is the first cell in reading order; the first is 0.
    pub shape: Vec<i32>,
    /// First slot and one past the last.
    pub slots: (usize, usize),
    /// Whether a body of the class can vanish in a sink.
    pub can_vanish: bool,
}

/// One item of the level. Items never move, so the cell names it.
#[derive(Clone, Debug)]
pub(crate) struct ItemSpot {
    pub cell: u16,
    /// Index of the kind.
    pub kind: u16,
    pub gem: bool,
    /// Key channel, for keys.
    pub key: u16,
}

/// A cell whose ground can change.
#[derive(Clone, Debug)]
pub(crate) struct MutableCell {
    pub cell: u16,
    /// The ground at the start, then what it may turn into by links that can happen on this level.
    pub options: Vec<u16>,
}

#[derive(Clone, Debug)]
pub(crate) struct Tables {
    pub size: Size,
    pub control: Control,
    pub strength: usize,
    pub grounds: Vec<Ground>,
    /// Whether ground `g` is a home for body kind `k`, at `g * body_kinds + k`.
    pub accepts: Vec<bool>,
    pub body_kinds: usize,
    pub classes: Vec<Class>,
    /// Kind of the body in each slot; slots are grouped by class.
    pub bodies: Vec<Body>,
    /// Anchor of each body at the start, ascending within a class.
    pub start_at: Vec<u16>,
    /// Number, in the order of [`Level::bodies_in_order`], of the body that starts in each slot.
    pub numbers: Vec<u16>,
    pub walkers: Vec<u16>,
    pub start_ground: Vec<u16>,
    pub mutable: Vec<MutableCell>,
    pub items: Vec<ItemSpot>,
    /// Index into `items` for each cell.
    pub item_at: Vec<u16>,
    /// Names of the key channels, sorted.
    pub key_names: Vec<String>,
    /// The most keys of each channel that can be held.
    pub keys_most: Vec<u32>,
    /// Names of the channels of plates and gates, sorted.
    pub gate_names: Vec<String>,
    pub next: Vec<[u16; 4]>,
    /// Where a warp on the cell leads, while both ends are there.
    pub twin: Vec<u16>,
    /// Cells that may be or become a plate, if there is any gate to hear them.
    pub plates: Vec<u16>,
    /// Cells that may be or become a gate.
    pub gates: Vec<u16>,
    /// Cells that may be or become a home.
    pub homes: Vec<u16>,
    /// Cells on which a body can ever stand, ascending.
    pub places: Vec<u16>,
    /// Inverse of `places`.
    pub place_of: Vec<u16>,
    pub has_warps: bool,
    pub has_tow: bool,
    /// Whether some cargo with tow can be pushed as well.
    pub pushes_to_tow: bool,
    /// Whether every body has one cell.
    pub all_single: bool,
}

impl Tables {
    pub fn compile(mechanics: &Mechanics, level: &Level) -> Tables {
        let size = level.size;
        let gate_names = gate_channels(mechanics);
        let key_names = key_channels(mechanics);
        let (classes, bodies, start_at, numbers) = sort_bodies(mechanics, level);
        let items = item_spots(mechanics, level, &key_names);
        let grounds: Vec<Ground> = mechanics
            .grounds
            .iter()
            .map(|kind| ground(mechanics, kind, &gate_names, &key_names))
            .collect();
        let mut keys_most = vec![0; key_names.len()];
        for item in items.iter().filter(|item| item.key != NONE) {
            keys_most[usize::from(item.key)] += 1;
        }
        let mut tables = Tables {
            size,
            control: mechanics.control,
            strength: usize::from(mechanics.strength),
            accepts: accepts(mechanics),
            body_kinds: mechanics.bodies.len(),
            walkers: slots_where(&bodies, |body| body.walker),
            start_ground: level.ground.iter().map(|ground| ground.0).collect(),
            mutable: Vec::new(),
            item_at: vec![NONE; size.area()],
            key_names,
            keys_most,
            gate_names,
            next: neighbours(size),
            twin: twins(mechanics, level),
            plates: Vec::new(),
            gates: Vec::new(),
            homes: Vec::new(),
            places: Vec::new(),
            place_of: vec![NONE; size.area()],
            has_warps: false,
            pushes_to_tow: bodies.iter().any(|body| body.tow && body.push),
            has_tow: bodies.iter().any(|body| body.tow),
            all_single: classes.iter().all(|class| class.shape.len() == 1),
            grounds,
            classes,
            bodies,
            start_at,
            numbers,
            items,
        };
        tables.has_warps = tables.twin.iter().any(|&twin| twin != NONE);
        for (at, item) in tables.items.iter().enumerate() {
            tables.item_at[usize::from(item.cell)] = at as u16;
        }
        tables.find_options();
        tables.find_places();
        tables
    }

    /// What the ground of each cell may turn into, by links that can happen on this level.
    fn find_options(&mut self) {
        let fillers = self
            .classes
            .iter()
            .any(|class| self.bodies[class.slots.0].fills && class.shape.len() == 1);
        for cell in 0..self.size.area() {
            let mut options = vec![self.start_ground[cell]];
            let mut seen = 0;
            while seen < options.len() {
                let ground = &self.grounds[usize::from(options[seen])];
                let key = ground.lock != NONE
                    && !self.walkers.is_empty()
                    && self.keys_most[usize::from(ground.lock)] > 0;
                let links = [
                    (ground.sink_to, fillers),
                    (ground.frail_to, true),
                    (ground.lock_to, key),
                ];
                for (to, can_happen) in links {
                    if to != NONE && can_happen && !options.contains(&to) {
                        options.push(to);
                    }
                }
                seen += 1;
            }
            if options.len() > 1 {
                let cell = cell as u16;
                self.mutable.push(MutableCell { cell, options });
            }
        }
        self.homes = self.cells_with(flag::HOME);
        self.gates = self.cells_with(flag::GATE);
        if !self.gates.is_empty() {
            self.plates = self.cells_with(flag::PLATE);
        }
    }

    /// Every ground that each cell has or may get.
    fn start_options(&self) -> impl Iterator<Item = (u16, u16)> {
        let start = self.start_ground.iter().enumerate();
        let later = self
            .mutable
            .iter()
            .flat_map(|spot| spot.options.iter().skip(1).map(|&to| (spot.cell, to)));
        start
            .map(|(cell, &ground)| (cell as u16, ground))
            .chain(later)
    }

    pub fn cells_with(&self, wanted: u16) -> Vec<u16> {
        let cells: BTreeSet<u16> = self
            .start_options()
            .filter(|&(_, ground)| self.grounds[usize::from(ground)].flags & wanted != 0)
            .map(|(cell, _)| cell)
            .collect();
        cells.into_iter().collect()
    }

    fn find_places(&mut self) {
        let mut closed = 0;
        if self.bodies.iter().any(|body| body.walker) {
            closed |= flag::CLOSED_TO_WALKER;
        }
        if self.bodies.iter().any(|body| !body.walker) {
            closed |= flag::CLOSED_TO_CARGO;
        }
        let opens = |ground: u16| {
            let flags = self.grounds[usize::from(ground)].flags;
            flags & closed != closed || flags & flag::WARP != 0
        };
        let mut places: BTreeSet<u16> = self
            .start_options()
            .filter(|&(_, ground)| opens(ground))
            .map(|(cell, _)| cell)
            .collect();
        places.extend(&self.start_at);
        self.places = places.into_iter().collect();
        for (place, &cell) in self.places.iter().enumerate() {
            self.place_of[usize::from(cell)] = place as u16;
        }
    }

    /// The cells of the body in `slot` when its anchor is `anchor`.
    pub fn cells_of(&self, slot: usize, anchor: u16) -> impl Iterator<Item = u16> {
        let class = usize::from(self.bodies[slot].class);
        self.classes[class]
            .shape
            .iter()
            .map(move |&delta| (i32::from(anchor) + delta) as u16)
    }

    /// Whether ground `ground` is a home for bodies of kind `kind`.
    pub fn is_home_for(&self, ground: u16, kind: BodyIx) -> bool {
        self.accepts[usize::from(ground) * self.body_kinds + usize::from(kind.0)]
    }
}

fn slots_where(bodies: &[Body], wanted: impl Fn(&Body) -> bool) -> Vec<u16> {
    let slots = bodies.iter().enumerate();
    slots
        .filter(|(_, body)| wanted(body))
        .map(|(slot, _)| slot as u16)
        .collect()
}

fn gate_channels(mechanics: &Mechanics) -> Vec<String> {
    let names: BTreeSet<&str> = mechanics
        .grounds
        .iter()
        .flat_map(|kind| {
            let gate = kind.gate.as_ref().map(|gate| gate.channel.0.as_str());
            let plate = kind.plate.as_ref().map(|channel| channel.0.as_str());
            gate.into_iter().chain(plate)
        })
        .collect();
    names.into_iter().map(String::from).collect()
}

fn key_channels(mechanics: &Mechanics) -> Vec<String> {
    let locks = mechanics
        .grounds
        .iter()
        .filter_map(|kind| kind.lock.as_ref().map(|lock| lock.channel.0.as_str()));
    let keys = mechanics.items.iter().filter_map(|kind| match &kind.item {
        Item::Key(channel) => Some(channel.0.as_str()),
        Item::Gem => None,
    });
    let names: BTreeSet<&str> = locks.chain(keys).collect();
    names.into_iter().map(String::from).collect()
}

fn channel_id(names: &[String], name: Option<&str>) -> u16 {
    name.and_then(|name| names.iter().position(|known| known == name))
        .map_or(NONE, |at| at as u16)
}

fn ground(mechanics: &Mechanics, kind: &GroundKind, gates: &[String], keys: &[String]) -> Ground {
    let find = |id| mechanics.find_ground(id).map_or(NONE, |ix| ix.0);
    let sink_to = kind.sink.as_ref().map_or(NONE, find);
    let frail_to = kind.frail.as_ref().map_or(NONE, find);
    let lock_to = kind.lock.as_ref().map_or(NONE, |lock| find(&lock.becomes));
    let mut enter = 0;
    for dir in &kind.enter_only {
        enter |= 1 << dir.index();
    }
    let when_free = kind
        .gate
        .as_ref()
        .is_some_and(|gate| gate.opens == Opens::WhenFree);
    let bits = [
        (
            flag::CLOSED_TO_WALKER,
            kind.closed_to.contains(&Role::Walker),
        ),
        (flag::CLOSED_TO_CARGO, kind.closed_to.contains(&Role::Cargo)),
        (flag::SLICK, kind.slick),
        (flag::SINK, kind.sink.is_some()),
        (flag::FRAIL, frail_to != NONE),
        (flag::PLATE, kind.plate.is_some()),
        (flag::GATE, kind.gate.is_some()),
        (flag::OPENS_WHEN_FREE, when_free),
        (flag::WARP, kind.warp.is_some()),
        (flag::LOCK, kind.lock.is_some()),
        (flag::EXIT, kind.exit),
        (flag::HOME, !kind.home.is_empty()),
        (flag::ONE_WAY, !kind.enter_only.is_empty()),
    ];
    Ground {
        flags: bits
            .iter()
            .filter(|(_, set)| *set)
            .fold(0, |flags, (bit, _)| flags | bit),
        enter: if enter == 0 { 0b1111 } else { enter },
        sink_to,
        frail_to,
        lock_to,
        plate: channel_id(gates, kind.plate.as_ref().map(|channel| channel.0.as_str())),
        gate: channel_id(
            gates,
            kind.gate.as_ref().map(|gate| gate.channel.0.as_str()),
        ),
        lock: channel_id(keys, kind.lock.as_ref().map(|lock| lock.channel.0.as_str())),
    }
}

fn accepts(mechanics: &Mechanics) -> Vec<bool> {
    let homes = mechanics.grounds.iter().map(|kind| &kind.home);
    homes
        .flat_map(|home| mechanics.bodies.iter().map(|body| home.contains(&body.id)))
        .collect()
}

fn neighbours(size: Size) -> Vec<[u16; 4]> {
    size.cells()
        .map(|cell| {
            Dir::ALL.map(|dir| {
                size.neighbour(cell, dir)
                    .map_or(NONE, |next| size.index(next) as u16)
            })
        })
        .collect()
}

fn twins(mechanics: &Mechanics, level: &Level) -> Vec<u16> {
    let warp = |cell: usize| mechanics.ground(level.ground[cell]).warp.as_ref();
    let area = level.size.area();
    let warps: Vec<usize> = (0..area).filter(|&cell| warp(cell).is_some()).collect();
    let mut twin = vec![NONE; area];
    for &cell in &warps {
        let mut others = warps
            .iter()
            .filter(|&&other| other != cell && warp(other) == warp(cell));
        if let (Some(&other), None) = (others.next(), others.next()) {
            twin[cell] = other as u16;
        }
    }
    twin
}

fn item_spots(mechanics: &Mechanics, level: &Level, key_names: &[String]) -> Vec<ItemSpot> {
    let spots = level.items.iter().enumerate();
    spots
        .filter_map(|(cell, item)| item.map(|item| (cell, item)))
        .map(|(cell, item)| {
            let key = match &mechanics.item(item).item {
                Item::Key(channel) => Some(channel.0.as_str()),
                Item::Gem => None,
            };
            ItemSpot {
                cell: cell as u16,
                kind: item.0,
                gem: key.is_none(),
                key: channel_id(key_names, key),
            }
        })
        .collect()
}
