//! Levels laid out at random with given kinds.

use super::random::{Bulk, Feature, Mix, objective};
use foldwright::level::{
    Block, BodyIx, Cell, Channel, Clause, Control, Dir, GroundIx, ItemIx, KindId, Level, Mechanics,
    Role, Size,
};
use rand::Rng;
use rand::rngs::StdRng;
use rand::seq::IndexedRandom;

pub fn place(rng: &mut StdRng, mix: &Mix, bulk: Bulk, mechanics: &Mechanics, seed: u64) -> Level {
    let width = rng.random_range(bulk.width.0..=bulk.width.1);
    let height = rng.random_range(bulk.height.0..=bulk.height.1);
    let size = Size::new(width, height).expect("a small size");
    let mut level = Level::filled(format!("{} {seed}", mix.name), size, GroundIx(0));
    place_ground(rng, mechanics, &mut level);
    place_warps(rng, mechanics, &mut level);
    place_bodies(rng, mix, bulk, mechanics, &mut level);
    place_items(rng, mix, mechanics, &mut level);
    if rng.random_bool(0.1) {
        let cargo: Vec<KindId> = mechanics
            .bodies
            .iter()
            .filter(|kind| kind.role == Role::Cargo)
            .map(|kind| kind.id.clone())
            .collect();
        level.objective = Some(objective(rng, mix, &cargo));
    }
    spare_homes(rng, mechanics, &mut level);
    level
}

fn place_ground(rng: &mut StdRng, mechanics: &Mechanics, level: &mut Level) {
    let special: Vec<GroundIx> = (2..mechanics.grounds.len())
        .map(|at| GroundIx(at as u16))
        .filter(|&ix| mechanics.ground(ix).warp.is_none())
        .collect();
    let walls = rng.random_range(0.0..0.3);
    let specials = rng.random_range(0.1..0.5);
    for ground in &mut level.ground {
        let draw: f64 = rng.random();
        if draw < walls {
            *ground = GroundIx(1);
        } else if draw < walls + specials {
            *ground = special.choose(rng).copied().unwrap_or(GroundIx(0));
        }
    }
}

/// Each warp channel on exactly two cells or on none.
fn place_warps(rng: &mut StdRng, mechanics: &Mechanics, level: &mut Level) {
    let mut free: Vec<usize> = (0..level.size.area()).collect();
    for name in ["a", "b"] {
        let kinds: Vec<GroundIx> = (0..mechanics.grounds.len())
            .map(|at| GroundIx(at as u16))
            .filter(|&ix| mechanics.ground(ix).warp == Some(Channel(name.into())))
            .collect();
        if kinds.is_empty() || rng.random_bool(0.2) {
            continue;
        }
        for _ in 0..2 {
            let at = free.swap_remove(rng.random_range(0..free.len()));
            level.ground[at] = *kinds.choose(rng).expect("some kind");
        }
    }
}

fn place_bodies(rng: &mut StdRng, mix: &Mix, bulk: Bulk, mechanics: &Mechanics, level: &mut Level) {
    let of_role = |role| -> Vec<BodyIx> {
        (0..mechanics.bodies.len())
            .map(|at| BodyIx(at as u16))
            .filter(|&ix| mechanics.body(ix).role == role)
            .collect()
    };
    let (walkers, cargo) = (of_role(Role::Walker), of_role(Role::Cargo));
    for _ in 0..rng.random_range(mix.walkers.clone()) {
        let kind = *walkers.choose(rng).expect("a walker");
        if let Some(cell) = free_cell(rng, mechanics, level) {
            level.bodies[level.size.index(cell)] = Some(kind);
        }
    }
    for _ in 0..rng.random_range(bulk.cargo.0..=bulk.cargo.1) {
        let kind = *cargo.choose(rng).expect("some cargo");
        let Some(cell) = free_cell(rng, mechanics, level) else {
            return;
        };
        if mix.control == Control::Drag && rng.random_bool(0.6) {
            let length = rng.random_range(2..=4);
            let cells = grow(rng, mechanics, level, cell, length);
            if cells.len() > 1 {
                level.blocks.push(Block { kind, cells });
                continue;
            }
        }
        level.bodies[level.size.index(cell)] = Some(kind);
    }
}

/// A cell without a body; now and then one on closed ground, where a body may stand but nothing could enter.
fn free_cell(rng: &mut StdRng, mechanics: &Mechanics, level: &Level) -> Option<Cell> {
    let anywhere = rng.random_bool(0.03);
    let fits = |cell: &Cell| {
        level.body_at(*cell).is_none()
            && (anywhere || !mechanics.ground(level.ground_at(*cell)).closed_to_all())
    };
    let cells: Vec<Cell> = level.size.cells().filter(fits).collect();
    cells.choose(rng).copied()
}

/// A connected set of up to `length` free cells that holds `first`.
fn grow(
    rng: &mut StdRng,
    mechanics: &Mechanics,
    level: &Level,
    first: Cell,
    length: usize,
) -> Vec<Cell> {
    let mut cells = vec![first];
    while cells.len() < length {
        let around: Vec<Cell> = cells
            .iter()
            .flat_map(|&cell| Dir::ALL.map(|dir| level.size.neighbour(cell, dir)))
            .flatten()
            .filter(|cell| !cells.contains(cell) && level.body_at(*cell).is_none())
            .filter(|&cell| !mechanics.ground(level.ground_at(cell)).closed_to_all())
            .collect();
        let Some(cell) = around.choose(rng) else {
            break;
        };
        cells.push(*cell);
    }
    cells
}

fn place_items(rng: &mut StdRng, mix: &Mix, mechanics: &Mechanics, level: &mut Level) {
    let locks = mix.ground.contains(&Feature::Lock);
    for at in 0..level.items.len() {
        let reachable = !mechanics.ground(level.ground[at]).closed_to_all();
        if reachable && mix.gems && rng.random_bool(0.06) {
            level.items[at] = Some(ItemIx(0));
        } else if reachable && locks && rng.random_bool(0.1) {
            level.items[at] = Some(ItemIx(rng.random_range(1..=2)));
        }
    }
}

/// Where all homes must be filled, no more homes than bodies, so that a fair share of the levels can be finished.
fn spare_homes(rng: &mut StdRng, mechanics: &Mechanics, level: &mut Level) {
    if !level.objective(mechanics).contains(&Clause::HomesFilled) {
        return;
    }
    let cargo = level
        .bodies_in_order()
        .iter()
        .filter(|body| mechanics.body(body.kind).role == Role::Cargo)
        .map(|body| body.cells.len())
        .sum::<usize>();
    let is_home = |at: &usize| !mechanics.ground(level.ground[*at]).home.is_empty();
    let mut homes: Vec<usize> = (0..level.ground.len()).filter(is_home).collect();
    let wanted = rng.random_range(1..=cargo.max(1));
    while homes.len() > wanted {
        let at = homes.swap_remove(rng.random_range(0..homes.len()));
        if mechanics.ground(level.ground[at]).warp.is_none() {
            level.ground[at] = GroundIx(0);
        }
    }
}
