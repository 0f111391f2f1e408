//! Random rooms of a few mechanics, small enough for a general planner.

use foldwright::level::{
    BodyIx, BodyKind, Cell, Channel, Clause, Control, Dir, Gate, GroundIx, GroundKind, Item,
    ItemIx, ItemKind, KindId, Legend, Level, Lock, Mechanics, Opens, Role, Size,
};
use rand::rngs::StdRng;
use rand::seq::IndexedRandom;
use rand::{Rng, SeedableRng};

/// Which mechanic a room is about.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mix {
    Push,
    OneWay,
    Plates,
    Sinks,
    Frail,
    Locks,
    Gems,
    Everything,
}

impl Mix {
    pub const ALL: [Mix; 8] = [
        Mix::Push,
        Mix::OneWay,
        Mix::Plates,
        Mix::Sinks,
        Mix::Frail,
        Mix::Locks,
        Mix::Gems,
        Mix::Everything,
    ];
}

pub const GRAVEL: GroundIx = GroundIx(0);
pub const HEDGE: GroundIx = GroundIx(1);
pub const BED: GroundIx = GroundIx(2);
pub const SLAB: GroundIx = GroundIx(3);
pub const SLUICE: GroundIx = GroundIx(4);
pub const DRAIN: GroundIx = GroundIx(5);
pub const BOARD: GroundIx = GroundIx(6);
pub const DOOR: GroundIx = GroundIx(7);
/// The first of four turnstiles, in the order of [`Dir::ALL`].
pub const TURNSTILE: GroundIx = GroundIx(8);
pub const GARDENER: BodyIx = BodyIx(0);
pub const PLANTER: BodyIx = BodyIx(1);
pub const SACK: BodyIx = BodyIx(2);
pub const SEED: ItemIx = ItemIx(0);
pub const KEY: ItemIx = ItemIx(1);

fn id(text: &str) -> KindId {
    KindId::new(text).expect("a good id")
}

fn ground(name: &str, change: impl FnOnce(&mut GroundKind)) -> GroundKind {
    let mut kind = GroundKind::plain(id(name), name);
    change(&mut kind);
    kind
}

/// The kinds that every room draws from, with the objective of one mix.
pub fn mechanics(mix: Mix) -> Mechanics {
    let channel = |name: &str| Channel(name.to_owned());
    let mut grounds = vec![
        ground("gravel", |_| {}),
        ground("hedge", |kind| {
            kind.closed_to = vec![Role::Walker, Role::Cargo]
        }),
        ground("bed", |kind| kind.home = vec![id("planter")]),
        ground("slab", |kind| kind.plate = Some(channel("a"))),
        ground("sluice", |kind| {
            kind.gate = Some(Gate {
                channel: channel("a"),
                opens: Opens::WhenHeld,
            });
        }),
        ground("drain", |kind| kind.sink = Some(id("gravel"))),
        ground("board", |kind| kind.frail = Some(id("hedge"))),
        ground("door", |kind| {
            kind.lock = Some(Lock {
                channel: channel("brass"),
                becomes: id("gravel"),
            });
        }),
    ];
    for dir in Dir::ALL {
        let name = format!("turnstile-{}", dir.letter());
        grounds.push(ground(&name, |kind| kind.enter_only = vec![dir]));
    }
    let mut sack = BodyKind::plain(id("sack"), "sack", Role::Cargo);
    sack.fills = true;
    let item = |name: &str, item| ItemKind {
        id: id(name),
        label: name.to_owned(),
        look: None,
        item,
    };
    let mut objective = vec![Clause::HomesFilled];
    if matches!(mix, Mix::Gems | Mix::Everything) {
        objective.push(Clause::GemsTaken);
    }
    Mechanics {
        control: Control::Steer,
        strength: 1,
        objective,
        grounds,
        bodies: vec![
            BodyKind::plain(id("gardener"), "gardener", Role::Walker),
            BodyKind::plain(id("planter"), "planter", Role::Cargo),
            sack,
        ],
        items: vec![
            item("seed", Item::Gem),
            item("key", Item::Key(channel("brass"))),
        ],
        legend: Legend::default(),
    }
}

/// A random room of 7 x 6 to 8 x 7 cells with a closed border. The same seed gives the same room.
pub fn room(mix: Mix, seed: u64) -> Level {
    let mut random = StdRng::seed_from_u64(seed);
    let (width, height) = (random.random_range(7..=8), random.random_range(6..=7));
    let size = Size::new(width, height).expect("a good size");
    let mut level = Level::filled(format!("{mix:?} {seed}"), size, GRAVEL);
    for cell in size.cells() {
        let border = cell.x == 0
            || cell.y == 0
            || usize::from(cell.x) == width - 1
            || usize::from(cell.y) == height - 1;
        if border || random.random_bool(0.12) {
            level.ground[size.index(cell)] = HEDGE;
        }
    }
    furnish(&mut level, mix, &mut random);
    level
}

fn furnish(level: &mut Level, mix: Mix, random: &mut StdRng) {
    let has = |wanted: Mix| mix == wanted || mix == Mix::Everything;
    let cargo = if mix == Mix::Everything { 1 } else { 2 };
    put_ground(level, random, BED, cargo);
    if has(Mix::OneWay) {
        for _ in 0..3 {
            let turnstile = GroundIx(TURNSTILE.0 + random.random_range(0..4));
            put_ground(level, random, turnstile, 1);
        }
    }
    if has(Mix::Plates) {
        put_ground(level, random, SLAB, 1);
        put_ground(level, random, SLUICE, 2);
    }
    if has(Mix::Sinks) {
        put_ground(level, random, DRAIN, 2);
        put_body(level, random, SACK, 1);
    }
    if has(Mix::Frail) {
        put_ground(level, random, BOARD, 3);
    }
    if has(Mix::Locks) {
        put_ground(level, random, DOOR, 2);
        put_item(level, random, KEY, 2);
    }
    if has(Mix::Gems) {
        put_item(level, random, SEED, 2);
    }
    put_body(level, random, PLANTER, cargo);
    put_body(level, random, GARDENER, 1);
}

/// A random cell of plain ground with nothing on it.
fn bare(level: &Level, random: &mut StdRng) -> Option<Cell> {
    let bare: Vec<Cell> = level
        .size
        .cells()
        .filter(|&cell| level.ground_at(cell) == GRAVEL)
        .filter(|&cell| level.body_at(cell).is_none() && level.item_at(cell).is_none())
        .collect();
    bare.choose(random).copied()
}

fn put_ground(level: &mut Level, random: &mut StdRng, ground: GroundIx, times: usize) {
    for _ in 0..times {
        if let Some(cell) = bare(level, random) {
            let at = level.size.index(cell);
            level.ground[at] = ground;
        }
    }
}

fn put_body(level: &mut Level, random: &mut StdRng, body: BodyIx, times: usize) {
    for _ in 0..times {
        if let Some(cell) = bare(level, random) {
            let at = level.size.index(cell);
            level.bodies[at] = Some(body);
        }
    }
}

fn put_item(level: &mut Level, random: &mut StdRng, item: ItemIx, times: usize) {
    for _ in 0..times {
        if let Some(cell) = bare(level, random) {
            let at = level.size.index(cell);
            level.items[at] = Some(item);
        }
    }
}
