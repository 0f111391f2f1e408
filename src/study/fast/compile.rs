//! Which levels the fast lane takes, and what it makes of them.
//!
//! A trait without effect is treated as absent where that is certain: a plate without a gate to its channel, a gate that
//! nothing can hold, a lock without a key, a sink without cargo that fills, strength beyond the cargo there is. Ground
//! never changes here, so what is certain at the start stays so.

use super::board::{Plan, PlanKind};
use crate::level::{
    Cell, Channel, Clause, Control, Dir, GroundKind, Item, Level, Mechanics, Opens, Role,
};

/// More cargo, or more homes, than this goes to the general lane: matchings would cost too much.
const MOST_BODIES: usize = 64;

/// What a ground kind is to a level of the fast lane.
#[derive(Clone, Copy, PartialEq, Eq)]
struct Open {
    walker: bool,
    cargo: bool,
}

/// The plan of a level, or `None` if a trait is in play that the fast lane does not know.
pub(super) fn plan(mechanics: &Mechanics, level: &Level) -> Option<Plan> {
    if mechanics.control != Control::Steer || !level.blocks.is_empty() {
        return None;
    }
    let walker = only_walker(mechanics, level)?;
    let cargo_count = level.bodies.iter().flatten().count() - 1;
    if cargo_count > MOST_BODIES || (mechanics.strength != 1 && cargo_count > 1) {
        return None;
    }
    let open = open_cells(mechanics, level)?;
    let objective = Objective::of(mechanics, level)?;
    let walk = walker_area(mechanics, level, &open, walker)?;
    let inside = inside(mechanics, level, &open, &walk);
    lay_out(mechanics, level, &objective, &open, &walk, &inside, walker)
}

fn only_walker(mechanics: &Mechanics, level: &Level) -> Option<usize> {
    let mut walker = None;
    for (at, kind) in level.bodies.iter().enumerate() {
        let Some(kind) = kind.map(|kind| mechanics.body(kind)) else {
            continue;
        };
        match kind.role {
            Role::Walker if walker.is_some() => return None,
            Role::Walker => walker = Some(at),
            Role::Cargo if kind.tow || (kind.push && kind.glide) => return None,
            Role::Cargo => {}
        }
    }
    walker
}

fn open_cells(mechanics: &Mechanics, level: &Level) -> Option<Vec<Open>> {
    let world = World::of(mechanics, level);
    let kinds: Vec<Option<Open>> = mechanics
        .grounds
        .iter()
        .map(|kind| world.open(kind))
        .collect();
    let mut open = Vec::with_capacity(level.ground.len());
    for (at, &ground) in level.ground.iter().enumerate() {
        let kind = mechanics.ground(ground);
        if level.bodies[at].is_some() && kind.frail.is_some() {
            return None;
        }
        open.push(kinds[usize::from(ground.0)]?);
    }
    Some(open)
}

/// What is on the board that other traits listen to.
struct World<'a> {
    plates: Vec<&'a Channel>,
    keys: Vec<&'a Channel>,
    fills: bool,
}

impl<'a> World<'a> {
    fn of(mechanics: &'a Mechanics, level: &'a Level) -> World<'a> {
        let plates = level
            .ground
            .iter()
            .filter_map(|&ground| mechanics.ground(ground).plate.as_ref());
        let keys = level
            .items
            .iter()
            .flatten()
            .filter_map(|&item| match &mechanics.item(item).item {
                Item::Key(channel) => Some(channel),
                Item::Gem => None,
            });
        World {
            plates: plates.collect(),
            keys: keys.collect(),
            fills: level
                .bodies
                .iter()
                .flatten()
                .any(|&body| mechanics.body(body).fills),
        }
    }

    /// Who may enter a kind, or `None` if it is beyond the fast lane.
    fn open(&self, kind: &GroundKind) -> Option<Open> {
        const SHUT: Open = Open {
            walker: false,
            cargo: false,
        };
        let listened = |channel: &Channel| self.plates.contains(&channel);
        let shut_gate = kind
            .gate
            .as_ref()
            .is_some_and(|gate| gate.opens == Opens::WhenHeld && !listened(&gate.channel));
        let shut_lock = kind
            .lock
            .as_ref()
            .is_some_and(|lock| !self.keys.contains(&&lock.channel));
        let shut_sink =
            kind.sink.is_some() && (!self.fills || kind.closed_to.contains(&Role::Cargo));
        if kind.closed_to_all() || shut_gate || shut_lock || shut_sink {
            return Some(SHUT);
        }
        let one_way =
            !kind.enter_only.is_empty() && !Dir::ALL.iter().all(|d| kind.enter_only.contains(d));
        let moves = kind
            .gate
            .as_ref()
            .is_some_and(|gate| listened(&gate.channel));
        let beyond = one_way
            || moves
            || kind.slick
            || kind.sink.is_some()
            || kind.frail.is_some()
            || kind.warp.is_some()
            || kind.lock.is_some();
        (!beyond).then(|| Open {
            walker: !kind.closed_to.contains(&Role::Walker),
            cargo: !kind.closed_to.contains(&Role::Cargo),
        })
    }
}

struct Objective<'a> {
    homes_filled: bool,
    walkers_out: bool,
    named: Vec<&'a crate::level::KindId>,
}

impl<'a> Objective<'a> {
    fn of(mechanics: &'a Mechanics, level: &'a Level) -> Option<Objective<'a>> {
        let clauses = level.objective(mechanics);
        if clauses.is_empty() {
            return None;
        }
        let mut objective = Objective {
            homes_filled: false,
            walkers_out: false,
            named: Vec::new(),
        };
        for clause in clauses {
            match clause {
                Clause::HomesFilled => objective.homes_filled = true,
                Clause::WalkersOut => objective.walkers_out = true,
                Clause::CargoHome(ids) => objective.named.extend(ids),
                Clause::GemsTaken => {
                    let gem = |&item| mechanics.item(item).item == Item::Gem;
                    if level.items.iter().flatten().any(gem) {
                        return None;
                    }
                }
            }
        }
        Some(objective)
    }
}

/// Cargo that stands where it is for ever.
fn fixed(mechanics: &Mechanics, level: &Level, at: usize) -> bool {
    level.bodies[at].is_some_and(|body| {
        let kind = mechanics.body(body);
        kind.role == Role::Cargo && !kind.push
    })
}

/// Where the walker could come if cargo that can be pushed were not there; `None` if it starts where it may not enter.
fn walker_area(
    mechanics: &Mechanics,
    level: &Level,
    open: &[Open],
    walker: usize,
) -> Option<Vec<bool>> {
    if !open[walker].walker {
        return None;
    }
    let mut area = vec![false; open.len()];
    area[walker] = true;
    let mut queue = vec![walker];
    while let Some(at) = queue.pop() {
        for dir in Dir::ALL {
            let Some(next) = level.size.neighbour(level.size.cell(at), dir) else {
                continue;
            };
            let next = level.size.index(next);
            if open[next].walker && !area[next] && !fixed(mechanics, level, next) {
                area[next] = true;
                queue.push(next);
            }
        }
    }
    Some(area)
}

/// Cells that the box must hold: where a body may come or stands, and homes.
fn inside(mechanics: &Mechanics, level: &Level, open: &[Open], walk: &[bool]) -> Vec<bool> {
    let beside = |cell: Cell| {
        Dir::ALL.iter().any(|&dir| {
            level
                .size
                .neighbour(cell, dir)
                .is_some_and(|next| walk[level.size.index(next)])
        })
    };
    level
        .size
        .cells()
        .enumerate()
        .map(|(at, cell)| {
            let home = !mechanics.ground(level.ground[at]).home.is_empty();
            walk[at] || home || level.bodies[at].is_some() || (open[at].cargo && beside(cell))
        })
        .collect()
}

fn lay_out(
    mechanics: &Mechanics,
    level: &Level,
    objective: &Objective<'_>,
    open: &[Open],
    walk: &[bool],
    inside: &[bool],
    walker: usize,
) -> Option<Plan> {
    let size = level.size;
    let cells = || (0..size.area()).filter(|&at| inside[at]);
    let column = |at: usize| at % size.width();
    let row = |at: usize| at / size.width();
    let corner = (cells().map(column).min()?, cells().map(row).min()?);
    let width = cells().map(column).max()? - corner.0 + 1;
    let height = cells().map(row).max()? - corner.1 + 1;
    let number = |at: usize| (row(at) - corner.1) * width + column(at) - corner.0;
    let pick = |wanted: &dyn Fn(usize) -> bool| {
        cells()
            .filter(|&at| wanted(at))
            .map(number)
            .collect::<Vec<_>>()
    };
    let ground = |at: usize| mechanics.ground(level.ground[at]);
    let homes = pick(&|at| !ground(at).home.is_empty());
    if homes.len() > MOST_BODIES {
        return None;
    }
    let roles = |at: usize| level.bodies[at].map(|body| mechanics.body(body).role);
    let walker_id = &mechanics.body(level.bodies[walker]?).id;
    if objective.named.contains(&walker_id) || cells().any(|at| ground(at).home.contains(walker_id))
    {
        return None;
    }
    let mut kinds = Vec::new();
    for (index, kind) in mechanics.bodies.iter().enumerate() {
        let here = |at: usize| level.bodies[at].is_some_and(|body| usize::from(body.0) == index);
        let start = pick(&|at| here(at) && roles(at) == Some(Role::Cargo));
        if !start.is_empty() {
            kinds.push(PlanKind {
                start,
                homes: pick(&|at| ground(at).home.contains(&kind.id)),
                named: objective.named.contains(&&kind.id),
            });
        }
    }
    Some(Plan {
        size,
        corner,
        width,
        height,
        walk: pick(&|at| walk[at]),
        hold: pick(&|at| open[at].cargo),
        exits: pick(&|at| ground(at).exit && walk[at]),
        homes,
        walker: number(walker),
        homes_filled: objective.homes_filled,
        walkers_out: objective.walkers_out,
        countable: level.items.iter().all(Option::is_none),
        kinds,
    })
}
