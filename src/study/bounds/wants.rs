//! What the objective wants of cargo, in landings.

use super::Room;
use super::matching::NEVER;
use super::relaxed::{FAR, Moves, cells_on_board};
use crate::rules::Rules;

/// Larger matchings would cost more than they save.
const MOST: usize = 64;

/// No body.
const GONE: u16 = u16::MAX;

/// The position that is asked about.
pub(super) struct Need<'a> {
    /// By slot; `GONE` when vanished.
    pub anchors: &'a [u16],
    /// By slot, whether the body can't move; empty for none.
    pub fast: &'a [bool],
    /// When moves are counted: the slot of the block that may go on for nothing, or no slot.
    pub last: Option<usize>,
}

impl Need<'_> {
    /// What a way of `distance` landings costs the body in a slot.
    fn cost(&self, slot: usize, distance: u16) -> u32 {
        match (distance, self.last) {
            (FAR, _) => NEVER,
            (0, _) => 0,
            _ if self.is_fast(slot) => NEVER,
            (distance, None) => u32::from(distance),
            (_, Some(last)) => u32::from(slot != last),
        }
    }

    fn is_fast(&self, slot: usize) -> bool {
        self.fast.get(slot).is_some_and(|&fast| fast)
    }

    fn stands(&self, slot: usize) -> bool {
        self.anchors[slot] != GONE
    }
}

/// For each slot its class, for cargo.
fn cargo_slots(rules: &Rules) -> Vec<(usize, usize)> {
    (0..rules.bodies())
        .map(|slot| (slot, rules.body_traits(slot)))
        .filter(|(_, body)| !body.walker)
        .map(|(slot, body)| (slot, usize::from(body.class)))
        .collect()
}

/// Homes that must each hold cargo at the end.
pub(super) struct HomesWanted {
    homes: usize,
    slots: Vec<(usize, usize)>,
    /// By class, then home, then cell: landings until a body of the class covers the home. Empty for classes that none wants.
    ways: Vec<Vec<Vec<u16>>>,
    /// Whether each home takes a body of its own.
    one_each: bool,
}

impl HomesWanted {
    /// None if nothing can be said.
    pub fn new(rules: &Rules, moves: &[Option<Moves>]) -> Option<HomesWanted> {
        let homes: Vec<u16> = rules
            .home_cells()
            .iter()
            .copied()
            .filter(|&home| stays_home(rules, home) && !walker_may_fill(rules, home))
            .collect();
        let slots = cargo_slots(rules);
        if homes.is_empty() || homes.len() > MOST || slots.len() > MOST {
            return None;
        }
        let mut one_each = true;
        let mut ways = Vec::new();
        for (class, moves) in moves.iter().enumerate() {
            let kind = rules.body_traits(rules.class_slots(class).start).kind;
            let wanted = |home: u16| {
                rules
                    .possible_grounds(home)
                    .any(|ground| rules.accepts(ground, kind))
            };
            let Some(moves) = moves
                .as_ref()
                .filter(|_| homes.iter().any(|&home| wanted(home)))
            else {
                ways.push(Vec::new());
                continue;
            };
            one_each &= rules.class_cells(class, 0).count() == 1;
            let to = |&home: &u16| {
                let covering = anchors_that_cover(rules, class, home);
                let covering = covering.into_iter().filter(|_| wanted(home));
                moves.distances_to(covering)
            };
            ways.push(homes.iter().map(to).collect());
        }
        Some(HomesWanted {
            homes: homes.len(),
            slots,
            ways,
            one_each,
        })
    }

    /// Landings, or moves, that are still needed; none if no number suffices.
    pub fn landings(&self, need: &Need, room: &mut Room) -> Option<u32> {
        room.costs.clear();
        let standing = || {
            self.slots
                .iter()
                .filter(|&&(slot, class)| need.stands(slot) && !self.ways[class].is_empty())
        };
        for home in 0..self.homes {
            room.costs.extend(standing().map(|&(slot, class)| {
                let anchor = usize::from(need.anchors[slot]);
                need.cost(slot, self.ways[class][home][anchor])
            }));
        }
        let bodies = standing().count();
        if self.one_each {
            return room.matching.least_cost(self.homes, bodies, &room.costs);
        }
        if bodies == 0 {
            return None;
        }
        let nearest = room
            .costs
            .chunks(bodies)
            .map(|costs| costs.iter().copied().min().unwrap_or(NEVER));
        let most = nearest.max().unwrap_or(0);
        (most < NEVER).then_some(most)
    }
}

/// Whether a cell is a home whatever becomes of its ground.
fn stays_home(rules: &Rules, cell: u16) -> bool {
    rules
        .possible_grounds(cell)
        .all(|ground| rules.ground_traits(ground).home)
}

fn walker_may_fill(rules: &Rules, cell: u16) -> bool {
    rules.walkers().iter().any(|&slot| {
        let kind = rules.body_traits(usize::from(slot)).kind;
        rules
            .possible_grounds(cell)
            .any(|ground| rules.accepts(ground, kind))
    })
}

fn anchors_that_cover(rules: &Rules, class: usize, cell: u16) -> Vec<u16> {
    let offsets = rules.class_cells(class, 0).map(i32::from);
    offsets
        .map(|offset| i32::from(cell) - offset)
        .filter(|&anchor| (0..rules.size().area() as i32).contains(&anchor))
        .map(|anchor| anchor as u16)
        .collect()
}

/// Bodies that must each be home at the end, or gone.
pub(super) struct CargoWanted {
    slots: Vec<(usize, usize)>,
    /// Number of homes that bodies compete for; 0 if blocks are larger than a cell, or homes too many.
    homes: usize,
    /// By class: landings to each home by cell, where bodies compete; else to the nearest place where the body is home.
    ways: Vec<Vec<Vec<u16>>>,
    /// By class: landings until a body is swallowed.
    sinks: Vec<Vec<u16>>,
}

impl CargoWanted {
    /// None if nothing can be said.
    pub fn new(rules: &Rules, moves: &[Option<Moves>], wanted: &[u16]) -> Option<CargoWanted> {
        let slots: Vec<(usize, usize)> = cargo_slots(rules)
            .into_iter()
            .filter(|&(slot, _)| wanted.contains(&(slot as u16)))
            .collect();
        if slots.is_empty() || slots.len() > MOST {
            return None;
        }
        let single = slots
            .iter()
            .all(|&(_, class)| rules.class_cells(class, 0).count() == 1);
        let homes = rules.home_cells();
        let compete = single && homes.len() <= MOST;
        let (mut ways, mut sinks) = (Vec::new(), Vec::new());
        for (class, moves) in moves.iter().enumerate() {
            let named = slots.iter().any(|&(_, known)| known == class);
            let Some(moves) = moves.as_ref().filter(|_| named) else {
                ways.push(Vec::new());
                sinks.push(Vec::new());
                continue;
            };
            let is_home = |&anchor: &u16| at_home(rules, class, anchor);
            ways.push(if compete {
                let to = |&home: &u16| moves.distances_to(Some(home).filter(is_home));
                homes.iter().map(to).collect()
            } else {
                let all = 0..rules.size().area() as u16;
                vec![moves.distances_to(all.filter(is_home))]
            });
            sinks.push(moves.distances_to_sinks());
        }
        Some(CargoWanted {
            slots,
            homes: if compete { homes.len() } else { 0 },
            ways,
            sinks,
        })
    }

    /// Landings, or moves, that are still needed; none if no number suffices.
    pub fn landings(&self, need: &Need, room: &mut Room) -> Option<u32> {
        let standing: Vec<(usize, usize)> = self
            .slots
            .iter()
            .copied()
            .filter(|&(slot, _)| need.stands(slot))
            .collect();
        let way =
            |slot: usize, ways: &[u16]| need.cost(slot, ways[usize::from(need.anchors[slot])]);
        if self.homes == 0 {
            let mut total = 0;
            for &(slot, class) in &standing {
                let home = self.ways[class].first();
                let home = home.map_or(NEVER, |ways| way(slot, ways));
                let least = home.min(way(slot, &self.sinks[class]));
                if least >= NEVER {
                    return None;
                }
                total += least;
            }
            return Some(total);
        }
        room.costs.clear();
        for (row, &(slot, class)) in standing.iter().enumerate() {
            let homes = self.ways[class].iter().map(|ways| way(slot, ways));
            room.costs.extend(homes);
            let sink = way(slot, &self.sinks[class]);
            let own = (0..standing.len()).map(|column| if column == row { sink } else { NEVER });
            room.costs.extend(own);
        }
        let columns = self.homes + standing.len();
        room.matching
            .least_cost(standing.len(), columns, &room.costs)
    }
}

/// Whether a body of a class would be home with its anchor there, on some ground that its cells may get.
fn at_home(rules: &Rules, class: usize, anchor: u16) -> bool {
    let kind = rules.body_traits(rules.class_slots(class).start).kind;
    cells_on_board(rules, class, anchor).is_some_and(|cells| {
        cells.iter().all(|&cell| {
            rules
                .possible_grounds(cell)
                .any(|ground| rules.accepts(ground, kind))
        })
    })
}
