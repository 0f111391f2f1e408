//! Which levels the fast lane takes, and what it makes of them.
//!
//! A trait without effect is treated as absent where that is certain: a plate without a gate to its channel, a gate that
//! nothing can hold, a lock without a key, a sink without cargo that fills, strength beyond the cargo there is. Ground
//! never changes here, so what is certain at the start stays so.

use super::board::{Plan, PlanKind};
use crate::level::{Control, Dir, Opens};
use crate::rules::{Condition, GroundTraits, Rules};

/// More cargo, or more homes, than this goes to the general lane: matchings would cost too much.
const MOST_BODIES: usize = 64;

/// Who may enter a cell.
#[derive(Clone, Copy)]
struct Open {
    walker: bool,
    cargo: bool,
}

const SHUT: Open = Open {
    walker: false,
    cargo: false,
};

/// Picks the numbers of the cells that a condition holds for.
type Pick<'a> = &'a dyn Fn(&dyn Fn(usize) -> bool) -> Vec<usize>;

/// The level as it stands at the start.
struct Start<'a> {
    rules: &'a Rules,
    open: Vec<Open>,
    /// By cell: the slot of the body on it.
    body: Vec<Option<usize>>,
    walker: usize,
    /// By cell: whether the walker could come there if cargo that can be pushed were not there.
    walk: Vec<bool>,
}

/// The plan of a level, or `None` if a trait is in play that the fast lane does not know.
pub(super) fn plan(rules: &Rules) -> Option<Plan> {
    let one_walker = rules.control() == Control::Steer && rules.walkers().len() == 1;
    let cargo = rules.bodies().checked_sub(1)?;
    let weak = rules.strength() == 1 || cargo == 1;
    let fits = cargo <= MOST_BODIES && rules.home_cells().len() <= MOST_BODIES;
    if !one_walker || !(weak || cargo == 0) || !fits || rules.ground_can_change() {
        return None;
    }
    let start = Start::of(rules)?;
    let objective = Objective::of(rules)?;
    start.lay_out(&objective)
}

struct Objective {
    never: bool,
    homes_filled: bool,
    walkers_out: bool,
    named: Vec<u16>,
}

impl Objective {
    fn of(rules: &Rules) -> Option<Objective> {
        let mut objective = Objective {
            never: rules.conditions().is_none(),
            homes_filled: false,
            walkers_out: false,
            named: Vec::new(),
        };
        for condition in rules.conditions().unwrap_or_default() {
            match condition {
                Condition::HomesFilled => objective.homes_filled = true,
                Condition::WalkersOut => objective.walkers_out = true,
                Condition::CargoHome(slots) => objective.named.extend(slots),
                Condition::GemsTaken(gems) if gems.is_empty() => {}
                Condition::GemsTaken(_) => return None,
            }
        }
        Some(objective)
    }
}

/// What is on the board that grounds listen to.
struct World {
    plates: Vec<u16>,
    keys: Vec<u16>,
    fills: bool,
}

impl World {
    fn of(rules: &Rules) -> World {
        let grounds = (0..rules.size().area()).map(|at| ground(rules, at));
        World {
            plates: grounds.filter_map(|ground| ground.plate).collect(),
            keys: rules.items().filter_map(|item| item.key).collect(),
            fills: (0..rules.bodies()).any(|slot| rules.body_traits(slot).fills),
        }
    }

    /// Who may enter such ground, or `None` if it is beyond the fast lane.
    fn open(&self, ground: &GroundTraits) -> Option<Open> {
        let held = |channel: u16| self.plates.contains(&channel);
        let gate_shut = ground
            .gate
            .is_some_and(|(channel, opens)| opens == Opens::WhenHeld && !held(channel));
        let lock_shut = ground
            .lock
            .is_some_and(|channel| !self.keys.contains(&channel));
        let sink_shut = ground.sink && (!self.fills || ground.closed_to_cargo);
        let closed = ground.closed_to_walkers && ground.closed_to_cargo;
        if closed || gate_shut || lock_shut || sink_shut {
            return Some(SHUT);
        }
        let beyond = ground.enter != 0b1111
            || ground.slick
            || ground.sink
            || ground.frail
            || ground.warp
            || ground.lock.is_some()
            || ground.gate.is_some_and(|(channel, _)| held(channel));
        (!beyond).then_some(Open {
            walker: !ground.closed_to_walkers,
            cargo: !ground.closed_to_cargo,
        })
    }
}

fn ground(rules: &Rules, at: usize) -> GroundTraits {
    let start = rules.possible_grounds(at as u16).next();
    rules.ground_traits(start.unwrap_or(crate::level::GroundIx(0)))
}

impl Start<'_> {
    fn of(rules: &Rules) -> Option<Start<'_>> {
        let area = rules.size().area();
        let world = World::of(rules);
        let mut body = vec![None; area];
        let position = rules.start();
        let mut walker = None;
        for slot in 0..rules.bodies() {
            let traits = rules.body_traits(slot);
            let at = usize::from(rules.anchor(&position.0, slot)?);
            body[at] = Some(slot);
            if traits.walker {
                walker = Some(at);
            } else if traits.tow || (traits.push && traits.glide) {
                return None;
            }
        }
        let mut open = Vec::with_capacity(area);
        for (at, held) in body.iter().enumerate().take(area) {
            let ground = ground(rules, at);
            if held.is_some() && ground.frail {
                return None;
            }
            open.push(if closed_off(rules, at) {
                SHUT
            } else {
                world.open(&ground)?
            });
        }
        let mut start = Start {
            rules,
            open,
            body,
            walker: walker?,
            walk: vec![false; area],
        };
        start.flood()?;
        Some(start)
    }

    /// Fills `walk`; `None` if the walker starts where it may not enter, as it cannot come back there.
    fn flood(&mut self) -> Option<()> {
        if !self.open[self.walker].walker {
            return None;
        }
        self.walk[self.walker] = true;
        let mut queue = vec![self.walker];
        while let Some(at) = queue.pop() {
            for dir in Dir::ALL {
                if let Some(next) = self.rules.next(at as u16, dir).map(usize::from)
                    && self.open[next].walker
                    && !self.walk[next]
                    && !self.fixed(next)
                {
                    self.walk[next] = true;
                    queue.push(next);
                }
            }
        }
        Some(())
    }

    /// Whether cargo stands here that stays for ever.
    fn fixed(&self, at: usize) -> bool {
        self.body[at].is_some_and(|slot| {
            let traits = self.rules.body_traits(slot);
            !traits.walker && !traits.push
        })
    }

    fn is_home(&self, at: usize) -> bool {
        ground(self.rules, at).home
    }

    /// Cells that the box must hold: where a body may come or stands, and homes.
    fn inside(&self) -> Vec<usize> {
        let beside = |at: usize| {
            let next = |dir: Dir| self.rules.next(at as u16, dir);
            Dir::ALL
                .iter()
                .any(|&dir| next(dir).is_some_and(|next| self.walk[usize::from(next)]))
        };
        (0..self.open.len())
            .filter(|&at| {
                self.walk[at]
                    || self.is_home(at)
                    || self.body[at].is_some()
                    || (self.open[at].cargo && beside(at))
            })
            .collect()
    }

    fn lay_out(&self, objective: &Objective) -> Option<Plan> {
        let size = self.rules.size();
        let inside = self.inside();
        let columns = || inside.iter().map(|at| at % size.width());
        let rows = || inside.iter().map(|at| at / size.width());
        let corner = (columns().min()?, rows().min()?);
        let width = columns().max()? - corner.0 + 1;
        let height = rows().max()? - corner.1 + 1;
        let number =
            |at: usize| (at / size.width() - corner.1) * width + at % size.width() - corner.0;
        let pick = |wanted: &dyn Fn(usize) -> bool| -> Vec<usize> {
            let cells = inside.iter().copied();
            cells.filter(|&at| wanted(at)).map(number).collect()
        };
        Some(Plan {
            size,
            corner,
            width,
            height,
            walk: pick(&|at| self.walk[at]),
            hold: pick(&|at| self.open[at].cargo),
            exits: pick(&|at| ground(self.rules, at).exit && self.walk[at]),
            homes: pick(&|at| self.is_home(at)),
            walker: number(self.walker),
            never: objective.never,
            homes_filled: objective.homes_filled,
            walkers_out: objective.walkers_out,
            countable: self.rules.items().next().is_none(),
            kinds: self.kinds(objective, &pick)?,
        })
    }

    /// Cargo by class; `None` if the objective asks something of walkers that this lane does not know.
    fn kinds(&self, objective: &Objective, pick: Pick<'_>) -> Option<Vec<PlanKind>> {
        let accepts = |at: usize, slot: usize| {
            let kind = self.rules.body_traits(slot).kind;
            let here = self.rules.possible_grounds(at as u16).next();
            self.is_home(at) && here.is_some_and(|ground| self.rules.accepts(ground, kind))
        };
        let mut kinds = Vec::new();
        for class in 0..self.rules.classes() {
            let slots = self.rules.class_slots(class);
            let first = slots.start;
            let named = slots
                .clone()
                .any(|slot| objective.named.contains(&(slot as u16)));
            let homes = pick(&|at| accepts(at, first));
            if self.rules.body_traits(first).walker {
                if named || !homes.is_empty() {
                    return None;
                }
                continue;
            }
            kinds.push(PlanKind {
                start: pick(&|at| self.body[at].is_some_and(|slot| slots.contains(&slot))),
                homes,
                named,
            });
        }
        Some(kinds)
    }
}

/// Whether a tile was closed (see [`Rules::closing`]): none of its neighbours leads to it.
fn closed_off(rules: &Rules, at: usize) -> bool {
    let cell = rules.size().cell(at);
    let mut neighbours = Dir::ALL
        .into_iter()
        .filter_map(|dir| Some((rules.size().neighbour(cell, dir)?, dir)))
        .peekable();
    neighbours.peek().is_some()
        && neighbours.all(|(beside, dir)| {
            let beside = rules.size().index(beside) as u16;
            rules.next(beside, dir.opposite()) != Some(at as u16)
        })
}
