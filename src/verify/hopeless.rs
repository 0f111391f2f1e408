//! When homes are out of reach for good, by a relaxation that looks at one body at a time.
//!
//! A body is followed as if all others were out of the way, every gate were open, and a walker could stand wherever one
//! ever might. Whatever the real level allows, this relaxed one allows too:
//! - Cargo comes onto a cell by a push, a tow, a slide or a warp, and in no other way. A push in direction d needs a body
//!   on the cell behind it: a walker if `strength` is 1, any body otherwise. A tow needs a cell two further on for the
//!   walker. A slide goes on in the direction of the shove, over ground that may be slick, or anywhere for cargo that glides.
//! - A cell is taken to be any of the grounds that its first one may turn into by sinks, frail ground and locks.
//! - A slide may end on every cell of its way, and a landing on a warp may end on either of its cells.
//!
//! So a cell outside the relaxed reach of a body is never held by it. A position is hopeless if the objective asks
//! - for all homes to be filled, and the cells that are homes whatever happens can't be given to different bodies that
//!   reach and fit them; or
//! - for cargo to be home, and the bodies of these kinds that can't vanish in a sink can't be given to different cells that
//!   they reach and that may accept them.
//!
//! Nothing is claimed under control Drag.

use super::plain::{Body, Position};
use crate::level::{
    BodyIx, Cell, Clause, Control, Dir, GroundKind, KindId, Level, Mechanics, Role,
};
use std::collections::{BTreeMap, BTreeSet};

/// The relaxed level, with what was found about each kind on each cell so far.
#[derive(Debug)]
pub struct Relaxed<'a> {
    mechanics: &'a Mechanics,
    level: &'a Level,
    /// The grounds that each cell may ever have.
    grounds: Vec<Vec<&'a GroundKind>>,
    /// Where cargo of a kind may come from a cell, and whether it may vanish on the way.
    known: BTreeMap<(BodyIx, Cell), (BTreeSet<Cell>, bool)>,
}

impl<'a> Relaxed<'a> {
    /// The relaxation of a level.
    pub fn new(mechanics: &'a Mechanics, level: &'a Level) -> Relaxed<'a> {
        let grounds = level
            .ground
            .iter()
            .map(|&ground| turns_into(mechanics, mechanics.ground(ground)))
            .collect();
        Relaxed {
            mechanics,
            level,
            grounds,
            known: BTreeMap::new(),
        }
    }

    /// Whether nothing finished can be reached from a position of the level, as far as this relaxation can tell.
    pub fn hopeless(&mut self, position: &Position) -> bool {
        if self.mechanics.control != Control::Steer {
            return false;
        }
        let (mechanics, level) = (self.mechanics, self.level);
        level
            .objective(mechanics)
            .iter()
            .any(|clause| match clause {
                Clause::HomesFilled => self.homes_stay_empty(position),
                Clause::CargoHome(ids) => self.cargo_stays_out(position, ids),
                Clause::WalkersOut | Clause::GemsTaken => false,
            })
    }

    fn homes_stay_empty(&mut self, position: &Position) -> bool {
        let mut choices = Vec::new();
        for cell in self.level.size.cells() {
            let grounds = self.grounds_of(cell);
            if grounds.iter().any(|ground| ground.home.is_empty()) {
                continue;
            }
            let accepted: BTreeSet<KindId> = grounds
                .iter()
                .flat_map(|ground| ground.home.iter().cloned())
                .collect();
            let fitting = |(at, body): (usize, &Body)| {
                let fits = accepted.contains(&self.mechanics.body(body.kind).id);
                (fits && self.reach(body).0.contains(&cell)).then_some(at)
            };
            choices.push(
                position
                    .bodies
                    .iter()
                    .enumerate()
                    .filter_map(fitting)
                    .collect(),
            );
        }
        !all_can_choose(&choices)
    }

    fn cargo_stays_out(&mut self, position: &Position, ids: &[KindId]) -> bool {
        let mut choices = Vec::new();
        for body in &position.bodies {
            let id = &self.mechanics.body(body.kind).id;
            if !ids.contains(id) {
                continue;
            }
            let (cells, vanishes) = self.reach(body);
            if vanishes {
                continue;
            }
            let accepts = |cell: &&Cell| {
                self.grounds_of(**cell)
                    .iter()
                    .any(|ground| ground.home.contains(id))
            };
            let homes = cells.iter().filter(accepts);
            choices.push(homes.map(|&cell| self.level.size.index(cell)).collect());
        }
        !all_can_choose(&choices)
    }

    fn grounds_of(&self, cell: Cell) -> &[&'a GroundKind] {
        &self.grounds[self.level.size.index(cell)]
    }

    /// Where a body may ever stand, and whether it may vanish. Walkers are taken to come everywhere.
    fn reach(&mut self, body: &Body) -> (BTreeSet<Cell>, bool) {
        if self.mechanics.body(body.kind).role == Role::Walker {
            return (self.level.size.cells().collect(), false);
        }
        let mut cells = BTreeSet::new();
        let mut vanishes = false;
        for &cell in &body.cells {
            let key = (body.kind, cell);
            if !self.known.contains_key(&key) {
                let found = self.explore(body.kind, cell);
                self.known.insert(key, found);
            }
            if let Some((reached, gone)) = self.known.get(&key) {
                cells.extend(reached.iter().copied());
                vanishes |= gone;
            }
        }
        (cells, vanishes)
    }

    fn explore(&self, kind: BodyIx, from: Cell) -> (BTreeSet<Cell>, bool) {
        let mut rests = BTreeSet::from([from]);
        let mut open = vec![from];
        let mut vanishes = false;
        while let Some(cell) = open.pop() {
            for dir in Dir::ALL
                .into_iter()
                .filter(|&dir| self.may_be_shoved(kind, cell, dir))
            {
                let mut passed = BTreeSet::new();
                vanishes |= self.shove(kind, cell, dir, &mut passed);
                open.extend(passed.iter().filter(|&&cell| rests.insert(cell)));
            }
        }
        (rests, vanishes)
    }

    fn may_be_shoved(&self, kind: BodyIx, cell: Cell, dir: Dir) -> bool {
        let size = self.level.size;
        let kind = self.mechanics.body(kind);
        let behind = size.neighbour(cell, dir.opposite());
        let pushed = kind.push
            && behind.is_some_and(|cell| {
                self.mechanics.strength > 1 || self.a_walker_may_stand_on(cell)
            });
        let ahead = size.neighbour(cell, dir);
        let towed = kind.tow && ahead.and_then(|cell| size.neighbour(cell, dir)).is_some();
        pushed || towed
    }

    fn a_walker_may_stand_on(&self, cell: Cell) -> bool {
        let starts_there = self
            .level
            .body_at(cell)
            .is_some_and(|kind| self.mechanics.body(kind).role == Role::Walker);
        starts_there
            || self.grounds_of(cell).iter().any(|ground| {
                let entered = !ground.closed_to.contains(&Role::Walker) && ground.sink.is_none();
                entered || ground.warp.is_some()
            })
    }

    /// Collects every cell that a shove from `cell` may bring the body to. Returns whether it may vanish.
    fn shove(&self, kind: BodyIx, cell: Cell, dir: Dir, passed: &mut BTreeSet<Cell>) -> bool {
        let mut vanishes = false;
        let mut open = vec![cell];
        while let Some(cell) = open.pop() {
            let Some(next) = self.level.size.neighbour(cell, dir) else {
                continue;
            };
            let entered = |ground: &&&GroundKind| self.may_enter(kind, ground, dir);
            let entered: Vec<_> = self.grounds_of(next).iter().filter(entered).collect();
            vanishes |= entered.iter().any(|ground| ground.sink.is_some());
            if entered.is_empty() {
                continue;
            }
            for end in [Some(next), self.twin(next)].into_iter().flatten() {
                if passed.insert(end) && self.slides_on(kind, end) {
                    open.push(end);
                }
            }
        }
        vanishes
    }

    fn may_enter(&self, kind: BodyIx, ground: &GroundKind, dir: Dir) -> bool {
        !ground.closed_to.contains(&Role::Cargo)
            && (ground.enter_only.is_empty() || ground.enter_only.contains(&dir))
            && (ground.sink.is_none() || self.mechanics.body(kind).fills)
            && ground.lock.is_none()
    }

    fn slides_on(&self, kind: BodyIx, cell: Cell) -> bool {
        self.mechanics.body(kind).glide || self.grounds_of(cell).iter().any(|ground| ground.slick)
    }

    fn twin(&self, cell: Cell) -> Option<Cell> {
        let channel = |cell: Cell| {
            self.mechanics
                .ground(self.level.ground_at(cell))
                .warp
                .as_ref()
        };
        let mine = channel(cell)?;
        self.level
            .size
            .cells()
            .find(|&other| other != cell && channel(other) == Some(mine))
    }
}

/// A ground and everything that it may turn into.
fn turns_into<'a>(mechanics: &'a Mechanics, first: &'a GroundKind) -> Vec<&'a GroundKind> {
    let mut grounds = vec![first];
    let mut at = 0;
    while at < grounds.len() {
        for id in grounds[at].becomes() {
            let next = mechanics.find_ground(id).map(|ix| mechanics.ground(ix));
            grounds.extend(next.filter(|next| !grounds.iter().any(|known| known.id == next.id)));
        }
        at += 1;
    }
    grounds
}

/// Whether everyone can have one of its choices, no choice twice (augmenting paths).
fn all_can_choose(choices: &[Vec<usize>]) -> bool {
    let mut taken: BTreeMap<usize, usize> = BTreeMap::new();
    (0..choices.len()).all(|who| find_choice(who, choices, &mut taken, &mut BTreeSet::new()))
}

fn find_choice(
    who: usize,
    choices: &[Vec<usize>],
    taken: &mut BTreeMap<usize, usize>,
    asked: &mut BTreeSet<usize>,
) -> bool {
    for &choice in &choices[who] {
        if !asked.insert(choice) {
            continue;
        }
        let holder = taken.get(&choice).copied();
        if holder.is_none_or(|holder| find_choice(holder, choices, taken, asked)) {
            taken.insert(choice, who);
            return true;
        }
    }
    false
}
