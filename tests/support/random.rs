//! Random small packs, valid by rules.md, for tests that compare a fast answer with a slow one.
//!
//! Every level is a function of its seed and its mix, so that a failing case can be named by these two. The kinds are made
//! anew for each level: besides the plain ones, some carry two or three traits at once (slick and frail, plate and home,
//! a sink with a direction), because that is where interpreters come apart.

use super::placing::place;
use foldwright::level::{
    Axis, BodyKind, Channel, Clause, Control, Dir, Gate, GroundKind, Item, ItemKind, KindId,
    Legend, Level, Lock, Mechanics, Opens, Role,
};
use rand::rngs::StdRng;
use rand::seq::IndexedRandom;
use rand::{Rng, SeedableRng};
use std::ops::RangeInclusive;

/// A trait of ground that a mix may use.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Feature {
    OneRole,
    OneWay,
    Slick,
    Sink,
    Frail,
    Plate,
    Gate,
    Warp,
    Lock,
    Home,
    Exit,
}

use Feature::{Exit, Frail, Home, Lock as Locked, OneRole, OneWay, Plate, Sink, Slick, Warp};

/// Which traits the levels of a test may have.
#[derive(Clone, Debug)]
pub struct Mix {
    pub name: &'static str,
    pub control: Control,
    pub ground: &'static [Feature],
    pub gems: bool,
    pub tow: bool,
    pub glide: bool,
    /// Whether cargo may be unpushable or leave plates alone.
    pub odd_cargo: bool,
    pub walkers: RangeInclusive<usize>,
    pub strength: RangeInclusive<u8>,
}

const PUSH_ONLY: Mix = Mix {
    name: "push-only",
    control: Control::Steer,
    ground: &[Home],
    gems: false,
    tow: false,
    glide: false,
    odd_cargo: false,
    walkers: 1..=1,
    strength: 1..=1,
};

const ALL_GROUND: &[Feature] = &[
    OneRole,
    OneWay,
    Slick,
    Sink,
    Frail,
    Plate,
    Feature::Gate,
    Warp,
    Locked,
    Home,
    Exit,
];

/// Every mix, by name.
pub const MIXES: &[Mix] = &[
    PUSH_ONLY,
    Mix {
        name: "rows",
        ground: &[Home, OneWay, OneRole],
        strength: 2..=3,
        odd_cargo: true,
        ..PUSH_ONLY
    },
    Mix {
        name: "slides",
        ground: &[Home, Slick, OneWay, Exit],
        ..PUSH_ONLY
    },
    Mix {
        name: "gates",
        ground: &[Home, Plate, Feature::Gate, Exit],
        odd_cargo: true,
        ..PUSH_ONLY
    },
    Mix {
        name: "sinks",
        ground: &[Home, Sink, OneWay],
        ..PUSH_ONLY
    },
    Mix {
        name: "locks and gems",
        ground: &[Home, Locked, Exit],
        gems: true,
        ..PUSH_ONLY
    },
    Mix {
        name: "frail",
        ground: &[Home, Frail, Exit],
        gems: true,
        ..PUSH_ONLY
    },
    Mix {
        name: "warps",
        ground: &[Home, Warp, Slick, Frail],
        ..PUSH_ONLY
    },
    Mix {
        name: "tow and glide",
        ground: &[Home, OneRole],
        tow: true,
        glide: true,
        odd_cargo: true,
        ..PUSH_ONLY
    },
    Mix {
        name: "two walkers",
        ground: &[Home, Exit, Plate, Feature::Gate],
        walkers: 2..=3,
        ..PUSH_ONLY
    },
    EVERYTHING,
    Mix {
        name: "drag",
        control: Control::Drag,
        ground: ALL_GROUND,
        odd_cargo: true,
        walkers: 0..=0,
        ..PUSH_ONLY
    },
];

/// All Steer traits at once.
pub const EVERYTHING: Mix = Mix {
    name: "everything",
    control: Control::Steer,
    ground: ALL_GROUND,
    gems: true,
    tow: true,
    glide: true,
    odd_cargo: true,
    walkers: 1..=3,
    strength: 1..=3,
};

/// The mix of this name.
pub fn mix(name: &str) -> &'static Mix {
    MIXES
        .iter()
        .find(|mix| mix.name == name)
        .expect("a mix of that name")
}

/// How large a level may be.
#[derive(Clone, Copy, Debug)]
pub struct Bulk {
    pub width: (usize, usize),
    pub height: (usize, usize),
    pub cargo: (usize, usize),
}

/// For comparing steps: boards of up to 7 x 6.
pub const SMALL: Bulk = Bulk {
    width: (3, 7),
    height: (3, 6),
    cargo: (1, 5),
};

/// For exploring whole spaces.
pub const TINY: Bulk = Bulk {
    width: (3, 5),
    height: (3, 4),
    cargo: (1, 3),
};

/// For thousands of whole spaces in a few seconds.
pub const MINUTE: Bulk = Bulk {
    width: (3, 4),
    height: (2, 4),
    cargo: (1, 2),
};

/// The level of this seed.
pub fn level(mix: &Mix, bulk: Bulk, seed: u64) -> (Mechanics, Level) {
    let mut rng = StdRng::seed_from_u64(seed);
    let mechanics = Maker {
        rng: &mut rng,
        mix,
        grounds: Vec::new(),
        cargo: Vec::new(),
    }
    .mechanics();
    let level = place(&mut rng, mix, bulk, &mechanics, seed);
    (mechanics, level)
}

pub fn id(text: &str) -> KindId {
    KindId::new(text).expect("an id")
}

fn channel(rng: &mut StdRng) -> Channel {
    // The same names for plates, warps and keys: channels of different use must not meet.
    Channel(["a", "b"].choose(rng).expect("two").to_string())
}

struct Maker<'a> {
    rng: &'a mut StdRng,
    mix: &'a Mix,
    grounds: Vec<GroundKind>,
    cargo: Vec<KindId>,
}

impl Maker<'_> {
    fn mechanics(mut self) -> Mechanics {
        let bodies = self.bodies();
        self.grounds.push(GroundKind::plain(id("floor"), "floor"));
        let mut wall = GroundKind::plain(id("wall"), "wall");
        wall.closed_to = vec![Role::Walker, Role::Cargo];
        self.grounds.push(wall);
        for feature in self.mix.ground {
            self.ground(&[*feature]);
        }
        for _ in 0..self.rng.random_range(0..=4) {
            let count = self.rng.random_range(1..=3);
            let features: Vec<Feature> = (0..count)
                .filter_map(|_| self.mix.ground.choose(self.rng).copied())
                .collect();
            self.ground(&features);
        }
        let objective = objective(self.rng, self.mix, &self.cargo);
        Mechanics {
            control: self.mix.control,
            strength: self.rng.random_range(self.mix.strength.clone()),
            objective,
            grounds: self.grounds,
            bodies,
            items: items(),
            legend: Legend::default(),
        }
    }

    fn bodies(&mut self) -> Vec<BodyKind> {
        let mut bodies = Vec::new();
        if self.mix.control == Control::Steer {
            for name in ["walker", "heron"] {
                let mut walker = BodyKind::plain(id(name), name, Role::Walker);
                walker.presses = !self.mix.odd_cargo || self.rng.random_bool(0.7);
                bodies.push(walker);
            }
        }
        for number in 0..self.rng.random_range(1..=3) {
            let name = id(&format!("cargo-{number}"));
            self.cargo.push(name.clone());
            let mut cargo = BodyKind::plain(name, "cargo", Role::Cargo);
            cargo.push = !self.mix.odd_cargo || self.rng.random_bool(0.85);
            cargo.presses = !self.mix.odd_cargo || self.rng.random_bool(0.8);
            cargo.tow = self.mix.tow && self.rng.random_bool(0.4);
            cargo.glide = self.mix.glide && self.rng.random_bool(0.4);
            cargo.fills = self.mix.ground.contains(&Sink) && self.rng.random_bool(0.6);
            if self.mix.control == Control::Drag {
                let axes = [Axis::Any, Axis::Any, Axis::Row, Axis::Column];
                cargo.axis = axes
                    .choose(self.rng)
                    .copied()
                    .filter(|_| self.rng.random_bool(0.9));
            }
            bodies.push(cargo);
        }
        bodies
    }

    /// A kind with these traits; of sink, warp, lock and gate the first counts.
    fn ground(&mut self, features: &[Feature]) {
        let name = format!("ground-{}", self.grounds.len());
        let mut kind = GroundKind::plain(id(&name), name.clone());
        for feature in features {
            let taken = kind.sink.is_some()
                || kind.warp.is_some()
                || kind.lock.is_some()
                || kind.gate.is_some();
            match feature {
                Sink | Warp | Locked | Feature::Gate if taken => {}
                OneRole => {
                    let roles = [Role::Walker, Role::Cargo];
                    kind.closed_to = vec![*roles.choose(self.rng).expect("two")];
                }
                OneWay => kind.enter_only = self.directions(),
                Slick => kind.slick = true,
                Sink => kind.sink = Some(self.earlier(false)),
                Frail => kind.frail = Some(self.earlier(false)),
                Plate => kind.plate = Some(channel(self.rng)),
                Feature::Gate => {
                    kind.gate = Some(Gate {
                        channel: channel(self.rng),
                        opens: if self.rng.random_bool(0.6) {
                            Opens::WhenHeld
                        } else {
                            Opens::WhenFree
                        },
                    });
                }
                Warp => kind.warp = Some(channel(self.rng)),
                Locked => {
                    kind.lock = Some(Lock {
                        channel: channel(self.rng),
                        becomes: self.earlier(true),
                    });
                }
                Home => kind.home = self.some_cargo(),
                Exit => kind.exit = true,
            }
        }
        self.grounds.push(kind);
    }

    /// A kind made before, so that becomes-links run in no circle; never a warp, and not a sink for a lock.
    fn earlier(&mut self, for_lock: bool) -> KindId {
        let fits = |kind: &&GroundKind| kind.warp.is_none() && !(for_lock && kind.sink.is_some());
        let fitting: Vec<&GroundKind> = self.grounds.iter().filter(fits).collect();
        let floor = fitting[0];
        let chosen = if self.rng.random_bool(0.3) {
            floor
        } else {
            fitting.choose(self.rng).copied().unwrap_or(floor)
        };
        chosen.id.clone()
    }

    fn directions(&mut self) -> Vec<Dir> {
        let count = self.rng.random_range(1..=3);
        Dir::ALL.choose_multiple(self.rng, count).copied().collect()
    }

    fn some_cargo(&mut self) -> Vec<KindId> {
        let count = self.rng.random_range(1..=self.cargo.len());
        self.cargo
            .choose_multiple(self.rng, count)
            .cloned()
            .collect()
    }
}

fn items() -> Vec<ItemKind> {
    let item = |name: &str, item| ItemKind {
        id: id(name),
        label: name.to_string(),
        look: None,
        item,
    };
    vec![
        item("gem", Item::Gem),
        item("key-a", Item::Key(Channel("a".into()))),
        item("key-b", Item::Key(Channel("b".into()))),
    ]
}

pub fn objective(rng: &mut StdRng, mix: &Mix, cargo: &[KindId]) -> Vec<Clause> {
    let mut clauses = vec![Clause::HomesFilled, Clause::HomesFilled];
    let count = rng.random_range(1..=cargo.len());
    clauses.push(Clause::CargoHome(
        cargo.choose_multiple(rng, count).cloned().collect(),
    ));
    if mix.ground.contains(&Exit) && mix.control == Control::Steer {
        clauses.push(Clause::WalkersOut);
    }
    if mix.gems {
        clauses.push(Clause::GemsTaken);
    }
    let count = [1, 1, 1, 2].choose(rng).copied().unwrap_or(1);
    let mut chosen: Vec<Clause> = clauses.choose_multiple(rng, count).cloned().collect();
    chosen.dedup();
    chosen
}
