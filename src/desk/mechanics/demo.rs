//! What each trait does, in three small pictures: a scene of 5 x 3 cells for each, played by the step engine.

use super::traits::Trait;
use crate::level::{
    Axis, BodyIx, BodyKind, Cell, Channel, Clause, Control, Dir, DragStep, Gate, GroundIx,
    GroundKind, Item, ItemIx, ItemKind, KindId, Legend, Level, Lock, Mechanics, Opens, Role, Route,
    Size,
};
use crate::rules::{Rules, View};
use std::sync::Arc;

/// Columns and rows of a scene.
pub const SIDES: (usize, usize) = (5, 3);

/// A scene that was played: the kinds that it is drawn with, and what stands where at three moments.
pub struct Demo {
    /// Kinds of the scene.
    pub mechanics: Arc<Mechanics>,
    /// The start, the middle and the end.
    pub frames: [View; 3],
}

/// The kinds of every scene, by place.
mod kinds {
    pub const FLOOR: u16 = 0;
    pub const WALL: u16 = 1;
    /// The ground that a scene is about.
    pub const SUBJECT: u16 = 2;
    /// A second ground of the scene.
    pub const OTHER: u16 = 3;
    pub const WALKER: u16 = 0;
    /// The cargo that a scene is about.
    pub const CARGO: u16 = 1;
    pub const GEM: u16 = 0;
    pub const KEY: u16 = 1;
}

/// The scene of a trait, played.
pub fn demo(of: Trait) -> Option<Demo> {
    let scene = Scene::of(of)?;
    let rules = Rules::compile_open(&scene.mechanics, &scene.level).ok()?;
    let mut views = vec![rules.start_view()];
    views.extend(
        rules
            .play(&scene.route)
            .into_iter()
            .map(|played| played.view),
    );
    let at = |index: usize| views.get(index).or(views.last()).cloned();
    let last = views.len() - 1;
    let frames = [at(0)?, at(scene.middle.min(last))?, at(last)?];
    Some(Demo {
        mechanics: Arc::new(scene.mechanics),
        frames,
    })
}

struct Scene {
    mechanics: Mechanics,
    level: Level,
    route: Route,
    /// After how many steps the second picture is taken.
    middle: usize,
}

fn id(text: &str) -> Option<KindId> {
    KindId::new(text).ok()
}

fn channel() -> Channel {
    Channel("a".to_owned())
}

impl Scene {
    fn of(of: Trait) -> Option<Scene> {
        let mut scene = Scene::bare(of)?;
        let (east, row) = (Dir::E, 1);
        scene.body(kinds::WALKER, 0, row);
        match of {
            Trait::ClosedToWalkers
            | Trait::Slick
            | Trait::Warp
            | Trait::Exit
            | Trait::OneWay
            | Trait::Frail => {
                scene.ground(kinds::SUBJECT, 2, row);
                if of == Trait::Slick {
                    scene.ground(kinds::SUBJECT, 3, row);
                }
                if of == Trait::Warp {
                    scene.ground(kinds::SUBJECT, 4, 0);
                }
                scene.steps(&[east, east, east]);
            }
            Trait::ClosedToCargo | Trait::Sink | Trait::Home => {
                scene.body(kinds::CARGO, 1, row);
                scene.ground(
                    kinds::SUBJECT,
                    if of == Trait::ClosedToCargo { 3 } else { 2 },
                    row,
                );
                scene.steps(&[east, east, east]);
            }
            Trait::Plate | Trait::Gate | Trait::Presses => {
                let (plate, gate) = if of == Trait::Gate {
                    (kinds::OTHER, kinds::SUBJECT)
                } else {
                    (kinds::SUBJECT, kinds::OTHER)
                };
                scene.body(kinds::CARGO, 1, row);
                scene.ground(plate, 2, row);
                scene.ground(gate, 2, 0);
                scene.steps(&[east, Dir::N, east]);
            }
            Trait::Lock | Trait::Key => {
                scene.item(kinds::KEY, 1, row);
                scene.ground(
                    if of == Trait::Lock {
                        kinds::SUBJECT
                    } else {
                        kinds::OTHER
                    },
                    3,
                    row,
                );
                scene.steps(&[east, east, east]);
            }
            Trait::Gem => {
                scene.item(kinds::GEM, 2, row);
                scene.steps(&[east, east, east]);
            }
            Trait::Push | Trait::Glide => {
                scene.body(kinds::CARGO, 1, row);
                scene.steps(&[east, east]);
            }
            Trait::Tow => {
                scene.body(kinds::WALKER, 2, row);
                scene.level.bodies[5] = None;
                scene.body(kinds::CARGO, 1, row);
                scene.steps(&[east, east]);
            }
            Trait::Fills => {
                scene.body(kinds::CARGO, 1, row);
                scene.ground(kinds::OTHER, 3, row);
                scene.steps(&[east, east, east]);
            }
            Trait::Axis => {
                scene.level.bodies.fill(None);
                scene.body(kinds::CARGO, 1, row);
                let step = DragStep {
                    block: 0,
                    dir: east,
                };
                scene.route = Route::Drag(vec![step, step]);
            }
        }
        Some(scene)
    }

    /// The board without anything on it, and the kinds that the trait needs.
    fn bare(of: Trait) -> Option<Scene> {
        let mechanics = mechanics_for(of);
        let size = Size::new(SIDES.0, SIDES.1)?;
        let mut level = Level::filled("scene", size, GroundIx(kinds::FLOOR));
        for x in 0..SIDES.0 {
            let at = level.size.index(Cell::new(x as u8, 2));
            level.ground[at] = GroundIx(kinds::WALL);
        }
        Some(Scene {
            mechanics,
            level,
            route: Route::Steer(Vec::new()),
            middle: 1,
        })
    }

    fn ground(&mut self, kind: u16, x: u8, y: u8) {
        let at = self.level.size.index(Cell::new(x, y));
        self.level.ground[at] = GroundIx(kind);
    }

    fn body(&mut self, kind: u16, x: u8, y: u8) {
        let at = self.level.size.index(Cell::new(x, y));
        self.level.bodies[at] = Some(BodyIx(kind));
    }

    fn item(&mut self, kind: u16, x: u8, y: u8) {
        let at = self.level.size.index(Cell::new(x, y));
        self.level.items[at] = Some(ItemIx(kind));
    }

    fn steps(&mut self, dirs: &[Dir]) {
        self.route = Route::Steer(dirs.to_vec());
        self.middle = dirs.len() / 2;
    }
}

fn mechanics_for(of: Trait) -> Mechanics {
    let ground = |name: &str| id(name).map(|id| GroundKind::plain(id, name));
    let mut floor = ground("gravel");
    let mut wall = ground("hedge");
    if let Some(wall) = &mut wall {
        wall.closed_to = vec![Role::Walker, Role::Cargo];
    }
    let (mut subject, mut other) = (ground(subject_name(of)), ground(other_name(of)));
    if let Some(subject) = &mut subject {
        give(subject, of);
    }
    if let Some(other) = &mut other {
        give(other, counterpart(of));
    }
    let mut walker = id("gardener").map(|id| BodyKind::plain(id, "gardener", Role::Walker));
    let mut cargo = id(cargo_name(of)).map(|id| BodyKind::plain(id, "cargo", Role::Cargo));
    if let Some(cargo) = &mut cargo {
        cargo.tow = of == Trait::Tow;
        cargo.push = of != Trait::Tow;
        cargo.glide = of == Trait::Glide;
        cargo.fills = matches!(of, Trait::Sink | Trait::Fills);
        cargo.axis = (of == Trait::Axis).then_some(Axis::Row);
    }
    let item = |name: &str, item| {
        id(name).map(|id| ItemKind {
            id,
            label: name.to_owned(),
            look: None,
            item,
        })
    };
    let gem = item("seed", Item::Gem);
    let key = item("brass-key", Item::Key(channel()));
    Mechanics {
        control: if of == Trait::Axis {
            Control::Drag
        } else {
            Control::Steer
        },
        strength: 1,
        objective: vec![Clause::GemsTaken],
        grounds: [floor.take(), wall, subject, other]
            .into_iter()
            .flatten()
            .collect(),
        bodies: [walker.take(), cargo].into_iter().flatten().collect(),
        items: [gem, key].into_iter().flatten().collect(),
        legend: Legend::default(),
    }
}

/// The built-in picture that shows the trait best; ids name pictures.
fn subject_name(of: Trait) -> &'static str {
    match of {
        Trait::ClosedToWalkers => "lattice",
        Trait::ClosedToCargo => "kerb",
        Trait::OneWay => "turnstile",
        Trait::Slick => "moss",
        Trait::Sink => "drain",
        Trait::Frail => "board",
        Trait::Plate | Trait::Presses => "slab",
        Trait::Gate => "sluice",
        Trait::Warp => "shaft",
        Trait::Lock => "door",
        Trait::Home => "sun-bed",
        Trait::Exit => "way-out",
        _ => "stone",
    }
}

fn other_name(of: Trait) -> &'static str {
    match of {
        Trait::Plate | Trait::Presses => "sluice",
        Trait::Gate => "slab",
        Trait::Fills => "drain",
        Trait::Key => "door",
        _ => "path",
    }
}

fn cargo_name(of: Trait) -> &'static str {
    match of {
        Trait::Tow => "hose-reel",
        Trait::Glide => "trolley",
        Trait::Sink | Trait::Fills => "grit-sack",
        Trait::Axis => "bench",
        _ => "planter",
    }
}

/// What the second ground of a scene must do.
fn counterpart(of: Trait) -> Trait {
    match of {
        Trait::Plate | Trait::Presses => Trait::Gate,
        Trait::Gate => Trait::Plate,
        Trait::Fills => Trait::Sink,
        Trait::Key => Trait::Lock,
        _ => Trait::Gem,
    }
}

fn give(ground: &mut GroundKind, what: Trait) {
    let becomes = id("gravel");
    match what {
        Trait::ClosedToWalkers => ground.closed_to = vec![Role::Walker],
        Trait::ClosedToCargo => ground.closed_to = vec![Role::Cargo],
        Trait::OneWay => ground.enter_only = vec![Dir::E],
        Trait::Slick => ground.slick = true,
        Trait::Sink => ground.sink = becomes,
        Trait::Frail => ground.frail = id("hedge"),
        Trait::Plate | Trait::Presses => ground.plate = Some(channel()),
        Trait::Gate => {
            ground.gate = Some(Gate {
                channel: channel(),
                opens: Opens::WhenHeld,
            })
        }
        Trait::Warp => ground.warp = Some(channel()),
        Trait::Lock => {
            ground.lock = becomes.map(|becomes| Lock {
                channel: channel(),
                becomes,
            })
        }
        Trait::Home => ground.home = id("planter").into_iter().collect(),
        Trait::Exit => ground.exit = true,
        _ => {}
    }
}
