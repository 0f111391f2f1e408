//! The objective, compiled.

use super::tables::{NONE, Tables, flag};
use super::{Rules, Scratch};
use crate::level::{BodyIx, Clause, Level, Mechanics};

/// One condition of the objective, ready to be judged. Slots and items are counted as in [`Rules::body_traits`] and
/// [`Rules::items`]; a condition names all slots of a class or none.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Condition {
    /// Every home cell holds a body that it accepts.
    HomesFilled,
    /// The bodies in these slots that are on the board stand wholly on homes that accept them.
    CargoHome(Vec<u16>),
    /// Every walker stands on an exit.
    WalkersOut,
    /// None of these items is left.
    GemsTaken(Vec<u16>),
}

pub(crate) fn compile(mechanics: &Mechanics, level: &Level, tables: &Tables) -> Vec<Condition> {
    let clauses = level.objective(mechanics).iter();
    clauses
        .map(|clause| match clause {
            Clause::HomesFilled => Condition::HomesFilled,
            Clause::WalkersOut => Condition::WalkersOut,
            Clause::CargoHome(ids) => {
                let kinds: Vec<BodyIx> = ids
                    .iter()
                    .filter_map(|id| mechanics.find_body(id))
                    .collect();
                let slots = tables.bodies.iter().enumerate();
                Condition::CargoHome(
                    slots
                        .filter(|(_, body)| kinds.contains(&body.kind))
                        .map(|(slot, _)| slot as u16)
                        .collect(),
                )
            }
            Clause::GemsTaken => {
                let items = tables.items.iter().enumerate();
                Condition::GemsTaken(
                    items
                        .filter(|(_, item)| item.gem)
                        .map(|(at, _)| at as u16)
                        .collect(),
                )
            }
        })
        .collect()
}

impl Rules {
    /// Whether the objective holds in what the scratch holds.
    pub(super) fn goal_holds(&self, s: &Scratch) -> bool {
        match &self.goal {
            None => false,
            Some(conditions) => conditions.iter().all(|wanted| self.holds(s, wanted)),
        }
    }

    pub(super) fn holds(&self, s: &Scratch, wanted: &Condition) -> bool {
        let tables = &self.tables;
        match wanted {
            Condition::HomesFilled => tables.homes.iter().all(|&cell| {
                let ground = s.ground[usize::from(cell)];
                let occupant = s.occupant[usize::from(cell)];
                tables.grounds[usize::from(ground)].flags & flag::HOME == 0
                    || occupant != NONE
                        && tables.is_home_for(ground, tables.bodies[usize::from(occupant)].kind)
            }),
            Condition::CargoHome(slots) => slots.iter().all(|&slot| {
                let slot = usize::from(slot);
                let anchor = s.at[slot];
                anchor == NONE
                    || tables.cells_of(slot, anchor).all(|cell| {
                        let ground = s.ground[usize::from(cell)];
                        tables.is_home_for(ground, tables.bodies[slot].kind)
                    })
            }),
            Condition::WalkersOut => tables.walkers.iter().all(|&slot| {
                let ground = s.ground[usize::from(s.at[usize::from(slot)])];
                tables.grounds[usize::from(ground)].flags & flag::EXIT != 0
            }),
            Condition::GemsTaken(items) => {
                items.iter().all(|&item| !s.item_left[usize::from(item)])
            }
        }
    }
}
