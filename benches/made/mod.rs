//! Levels of our own with fixed seeds, for timing.

#![allow(dead_code)]

use foldwright::level::{
    BodyIx, BodyKind, Cell, Channel, Clause, Control, Dir, Gate, GroundIx, GroundKind, Item,
    ItemIx, ItemKind, KindId, Legend, Level, Lock, Mechanics, Opens, Role, Size,
};
use foldwright::rules::{Position, Rules, Step};
use foldwright::study::{Limits, Prove, solve};
use rand::rngs::StdRng;
use rand::seq::{IndexedRandom, SliceRandom};
use rand::{Rng, SeedableRng};
use std::time::Duration;

const FLOOR: GroundIx = GroundIx(0);
const WALL: GroundIx = GroundIx(1);
const HOME: GroundIx = GroundIx(2);
const WALKER: BodyIx = BodyIx(0);
const CARGO: BodyIx = BodyIx(1);

fn id(text: &str) -> KindId {
    KindId::new(text).expect("an id")
}

/// One kind for each trait; a level that uses few of them is as if the others were not there.
pub fn mechanics() -> Mechanics {
    let ground = |name: &str| GroundKind::plain(id(name), name);
    let cargo = |name: &str| BodyKind::plain(id(name), name, Role::Cargo);
    let mut kinds = [
        "floor", "wall", "home", "moss", "drain", "slab", "sluice", "door", "rotten",
    ]
    .map(ground)
    .to_vec();
    kinds[1].closed_to = vec![Role::Walker, Role::Cargo];
    kinds[2].home = ["planter", "sack", "reel"].map(id).to_vec();
    kinds[3].slick = true;
    kinds[4].sink = Some(id("floor"));
    kinds[5].plate = Some(Channel("a".into()));
    kinds[6].gate = Some(Gate {
        channel: Channel("a".into()),
        opens: Opens::WhenHeld,
    });
    kinds[7].lock = Some(Lock {
        channel: Channel("brass".into()),
        becomes: id("floor"),
    });
    kinds[8].frail = Some(id("wall"));
    let mut bodies = vec![
        BodyKind::plain(id("gardener"), "gardener", Role::Walker),
        cargo("planter"),
        cargo("sack"),
        cargo("reel"),
    ];
    bodies[2].fills = true;
    bodies[3].tow = true;
    Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: vec![Clause::HomesFilled],
        grounds: kinds,
        bodies,
        items: vec![ItemKind {
            id: id("key"),
            label: "key".into(),
            look: None,
            item: Item::Key(Channel("brass".into())),
        }],
        legend: Legend::default(),
    }
}

/// Push-only levels with a par of over 20 steps.
pub fn push_only(
    many: usize,
    width: usize,
    height: usize,
    cargo: usize,
) -> Vec<(Mechanics, Level)> {
    let quick = Limits {
        time: Some(Duration::from_secs(20)),
        ..Limits::default()
    };
    push_only_where(many, width, height, cargo, |mechanics, level| {
        Rules::compile(mechanics, level).is_ok_and(|rules| {
            let report = solve(&rules, Prove::Steps, &quick, &mut ());
            report.steps.is_some_and(|steps| steps.fewest > 20)
        })
    })
}

/// The same, whatever their par.
pub fn push_only_unsolved(
    many: usize,
    width: usize,
    height: usize,
    cargo: usize,
) -> Vec<(Mechanics, Level)> {
    push_only_where(many, width, height, cargo, |_, _| true)
}

fn push_only_where(
    many: usize,
    width: usize,
    height: usize,
    cargo: usize,
    keep: impl Fn(&Mechanics, &Level) -> bool,
) -> Vec<(Mechanics, Level)> {
    let mechanics = mechanics();
    (0u64..)
        .filter_map(|seed| backward(seed, width, height, cargo))
        .filter(|level| keep(&mechanics, level))
        .take(many)
        .map(|level| (mechanics.clone(), level))
        .collect()
}

fn walled(rng: &mut StdRng, width: usize, height: usize, share: f64) -> Option<Level> {
    let size = Size::new(width, height)?;
    let mut level = Level::filled("made", size, FLOOR);
    for cell in size.cells() {
        let border = cell.x == 0
            || cell.y == 0
            || usize::from(cell.x) + 1 == width
            || usize::from(cell.y) + 1 == height;
        if border || rng.random_bool(share) {
            level.ground[size.index(cell)] = WALL;
        }
    }
    Some(level)
}

fn floor(level: &Level) -> Vec<usize> {
    (0..level.size.area())
        .filter(|&at| level.ground[at] == FLOOR && level.bodies[at].is_none())
        .collect()
}

/// Plays backward from a finished position: walks, and now and then pulls cargo along.
fn backward(seed: u64, width: usize, height: usize, cargo: usize) -> Option<Level> {
    let mut rng = StdRng::seed_from_u64(seed);
    let mut level = walled(&mut rng, width, height, 0.18)?;
    let mut free = floor(&level);
    free.shuffle(&mut rng);
    for _ in 0..cargo {
        let at = free.pop()?;
        level.ground[at] = HOME;
        level.bodies[at] = Some(CARGO);
    }
    let size = level.size;
    let mut walker = size.cell(free.pop()?);
    let open = |level: &Level, cell: Cell| {
        let at = size.index(cell);
        level.ground[at] != WALL && level.bodies[at].is_none()
    };
    for _ in 0..width * height * 30 {
        let dir = Dir::ALL[rng.random_range(0..4)];
        let Some(to) = size.neighbour(walker, dir).filter(|&to| open(&level, to)) else {
            continue;
        };
        let behind = size.neighbour(walker, dir.opposite());
        if let Some(behind) = behind
            && rng.random_bool(0.8)
            && level.bodies[size.index(behind)].take().is_some()
        {
            level.bodies[size.index(walker)] = Some(CARGO);
        }
        walker = to;
    }
    level.bodies[size.index(walker)] = Some(WALKER);
    Some(level)
}

/// Levels of 8 x 8 to 12 x 12 in which several traits meet.
pub fn mixed(many: usize) -> Vec<(Mechanics, Level)> {
    let mechanics = mechanics();
    (0u64..)
        .filter_map(|seed| mix(&mechanics, seed))
        .take(many)
        .map(|level| (mechanics.clone(), level))
        .collect()
}

fn mix(mechanics: &Mechanics, seed: u64) -> Option<Level> {
    let mut rng = StdRng::seed_from_u64(seed);
    let (width, height) = (rng.random_range(8..=12), rng.random_range(8..=12));
    let mut level = walled(&mut rng, width, height, 0.15)?;
    let mut free = floor(&level);
    free.shuffle(&mut rng);
    let mut traits = [0, 1, 2, 3, 4, 5, 6];
    traits.shuffle(&mut rng);
    let mut cargo = vec![CARGO; rng.random_range(1..=3)];
    let mut walkers = 1;
    for kind in &traits[..rng.random_range(2..=4)] {
        let spots: &[GroundIx] = match kind {
            0 => &[GroundIx(3); 5],
            1 => &[GroundIx(4); 2],
            2 => &[GroundIx(5), GroundIx(6)],
            3 => &[GroundIx(7)],
            4 => &[GroundIx(8); 3],
            _ => &[],
        };
        for &ground in spots {
            level.ground[free.pop()?] = ground;
        }
        match kind {
            1 => cargo.push(BodyIx(2)),
            3 => level.items[free.pop()?] = Some(ItemIx(0)),
            5 => cargo.push(BodyIx(3)),
            6 => walkers = 2,
            _ => {}
        }
    }
    for body in cargo.into_iter().chain(vec![WALKER; walkers]) {
        level.bodies[free.pop()?] = Some(body);
    }
    want_where_cargo_goes(&mut rng, mechanics, &mut level)
}

/// Plays at random, and makes homes where the cargo is when it has gone farthest.
fn want_where_cargo_goes(
    rng: &mut StdRng,
    mechanics: &Mechanics,
    level: &mut Level,
) -> Option<Level> {
    let rules = Rules::compile_open(mechanics, level).ok()?;
    let start = cargo_cells(&rules, mechanics, &rules.start());
    let mut here = rules.start();
    let mut best: (usize, Vec<Cell>) = (0, Vec::new());
    for _ in 0..1_500 {
        let dir = *Dir::ALL.choose(rng)?;
        if let Some((next, _)) = rules.step(&here, Step { slot: 0, dir }) {
            here = next;
        }
        let cells = cargo_cells(&rules, mechanics, &here);
        let homes: Vec<Cell> = cells
            .iter()
            .copied()
            .filter(|&cell| level.ground_at(cell) == FLOOR && level.item_at(cell).is_none())
            .collect();
        let moved = homes.iter().filter(|cell| !start.contains(cell)).count();
        let spread: usize = homes
            .iter()
            .map(|home| {
                start
                    .iter()
                    .map(|from| apart(*home, *from))
                    .min()
                    .unwrap_or(0)
            })
            .sum();
        if homes.len() == cells.len() && moved > 0 && spread > best.0 {
            best = (spread, homes);
        }
    }
    for &home in &best.1 {
        let at = level.size.index(home);
        level.ground[at] = HOME;
    }
    (best.0 >= 3).then(|| level.clone())
}

fn apart(a: Cell, b: Cell) -> usize {
    usize::from(a.x.abs_diff(b.x) + a.y.abs_diff(b.y))
}

fn cargo_cells(rules: &Rules, mechanics: &Mechanics, position: &Position) -> Vec<Cell> {
    let view = rules.view(position);
    let cargo = |kind: BodyIx| mechanics.body(kind).role == Role::Cargo;
    view.bodies
        .iter()
        .filter(|body| cargo(body.kind))
        .flat_map(|body| body.cells.clone())
        .collect()
}
