//! Bounds and dead ends derived from the traits of a level.
//!
//! Nothing here knows a game. Each part rests on the relaxed level (`relaxed`), which grants everything that any mix of traits might
//! ever grant, and each states what it needs:
//!
//! * **Homes filled.** A home that is one on all grounds that its cell may get must hold cargo of its own at the end. The
//!   least total distance over all ways to give each home a body of its own (`matching`) is landings that are still needed. Safe with all
//!   traits: homes that may change, or that a walker may fill, are left out; cargo that has vanished is not offered.
//! * **Cargo home.** Each body named must get to a home of its own or into a sink. The same matching, with a sink of its own for each body.
//! * **From landings to steps.** One walker lands at most `strength` bodies by pushing and one by tow in a step, so with `w` walkers the
//!   total falls by at most `w * (strength + tow)` a step; it is divided by that and rounded up. Under Drag a step lands one block.
//!   A step that lands cargo is a push or changes nothing in the total; so the same number bounds pushes.
//! * **Walkers out, gems taken.** A step takes each walker along at most one relaxed edge: the greatest distance of a walker to
//!   its nearest exit, and of a gem to its nearest walker, are bounds. Both are maxima, never added: a slide may take a gem and
//!   come to an exit in one step.
//! * **Frozen groups.** See `frozen`: a body that can't move serves the home that it stands on and no other.
//! * **Blocks under Drag.** A block of several cells may fill several homes at once, so there the greatest distance of any home counts,
//!   not a total; for cargo home the sum counts, since a step moves one block.
//! * **Moves under Drag.** A block that is not where it must be needs one move at least; the block moved last may go on for nothing.
//!
//! All parts are maxima of consistent bounds, so they are consistent together. Where no way is left, the position is a dead
//! end by a safe rule. Tested against search without them on random levels of every mix (`tests/study.rs`, `tests/brute.rs`).

mod frozen;
mod matching;
mod relaxed;
mod wants;

use crate::level::Control;
use crate::rules::{Condition, Rules, Scratch};
use crate::search::{Ahead, Outlook, SafeCut};
use frozen::Frozen;
use matching::Matching;
use relaxed::{FAR, Moves};
use wants::{CargoWanted, HomesWanted, Need};

/// What lies ahead of a position, at least.
pub(super) struct Bounds {
    /// By class; none for walkers.
    moves: Vec<Option<Moves>>,
    frozen: Option<Frozen>,
    homes: Option<HomesWanted>,
    cargo: Vec<CargoWanted>,
    /// For each cell: a walker's way to the nearest exit; empty if exits are not asked for.
    to_exit: Vec<u16>,
    /// For each gem: its item and a walker's ways to it.
    to_gems: Vec<(usize, Vec<u16>)>,
    walkers: Vec<u16>,
    lone: bool,
    landings_a_step: u32,
    room: Room,
}

/// Reusable room for one estimate.
#[derive(Default)]
struct Room {
    matching: Matching,
    costs: Vec<u32>,
}

impl Bounds {
    /// No bound at all.
    pub fn none(rules: &Rules) -> Bounds {
        Bounds {
            moves: Vec::new(),
            frozen: None,
            homes: None,
            cargo: Vec::new(),
            to_exit: Vec::new(),
            to_gems: Vec::new(),
            walkers: rules.walkers().to_vec(),
            lone: rules.lone_walker().is_some(),
            landings_a_step: 1,
            room: Room::default(),
        }
    }

    /// Bounds by the traits of the level.
    pub fn new(rules: &Rules) -> Bounds {
        let mut bounds = Bounds::none(rules);
        let Some(conditions) = rules.conditions() else {
            return bounds;
        };
        let walker = rules.walkers().first().map(|&slot| usize::from(slot));
        let walking = walker.map(|slot| Moves::of_walker(rules, slot));
        bounds.moves = cargo_moves(rules, walker, walking.as_ref());
        bounds.landings_a_step = landings_a_step(rules);
        let known = |class: usize| {
            let slot = rules.class_slots(class).start;
            bounds.moves[class].is_some() || rules.body_traits(slot).walker
        };
        if !(0..rules.classes()).all(known) {
            return Bounds::none(rules);
        }
        for condition in conditions {
            match condition {
                Condition::HomesFilled => bounds.homes = HomesWanted::new(rules, &bounds.moves),
                Condition::CargoHome(slots) => {
                    bounds
                        .cargo
                        .extend(CargoWanted::new(rules, &bounds.moves, slots));
                }
                Condition::WalkersOut => bounds.to_exit = to_exit(rules, walking.as_ref()),
                Condition::GemsTaken(gems) => {
                    bounds.to_gems = to_gems(rules, walking.as_ref(), gems);
                }
            }
        }
        let wants_cargo = bounds.homes.is_some() || !bounds.cargo.is_empty();
        if wants_cargo && rules.control() == Control::Steer {
            bounds.frozen = Some(Frozen::new(rules));
        }
        bounds
    }

    /// What is ahead of the position that the scratch holds, wherever a lone walker stands.
    pub fn outlook(&mut self, rules: &Rules, position: &Scratch) -> Outlook {
        let Some(landings) = self.landings(rules, position, None) else {
            return Outlook::Dead(SafeCut("cargo that is wanted at home can't get there"));
        };
        let pushes = landings.div_ceil(self.landings_a_step);
        let walks = if self.lone {
            Some(0)
        } else {
            self.walks(position)
        };
        let Some(walks) = walks else {
            return Outlook::Dead(SafeCut("a walker can't get where it is wanted"));
        };
        let drag = rules.control() == Control::Drag;
        Outlook::Open(Ahead {
            steps: narrow(pushes.max(walks)),
            // Under Drag moves are counted, see `moves_outlook`.
            pushes: if drag { 0 } else { narrow(pushes) },
        })
    }

    /// Whether [`Bounds::steps_ahead`] knows more than [`Bounds::outlook`].
    pub fn asks_for_place(&self) -> bool {
        self.lone && !(self.to_exit.is_empty() && self.to_gems.is_empty())
    }

    /// Fewest steps ahead of the position that the scratch holds, from where its walkers stand; none if it is a dead end.
    pub fn walks(&self, position: &Scratch) -> Option<u32> {
        let anchors = position.anchors();
        let standing = || self.walkers.iter().map(|&slot| anchors[usize::from(slot)]);
        let mut most = 0;
        if !self.to_exit.is_empty() {
            for cell in standing() {
                most = most.max(self.to_exit[usize::from(cell)]);
            }
        }
        for (item, ways) in &self.to_gems {
            if position.items_left()[*item] {
                let nearest = standing().map(|cell| ways[usize::from(cell)]).min();
                most = most.max(nearest.unwrap_or(FAR));
            }
        }
        (most != FAR).then_some(u32::from(most))
    }

    /// What is ahead under Drag, in moves, when the block in slot `last` may go on for nothing.
    pub fn moves_outlook(
        &mut self,
        rules: &Rules,
        position: &Scratch,
        last: Option<u16>,
    ) -> Outlook {
        let last = Some(last.map_or(usize::MAX, usize::from));
        match self.landings(rules, position, last) {
            Some(moves) => Outlook::Open(Ahead {
                steps: 0,
                pushes: narrow(moves),
            }),
            None => Outlook::Dead(SafeCut("cargo that is wanted at home can't get there")),
        }
    }

    /// Landings that cargo still needs; none if no number suffices. With `last` (a slot, or no slot for none) what is counted
    /// is blocks other than that which must move.
    fn landings(&mut self, rules: &Rules, position: &Scratch, last: Option<usize>) -> Option<u32> {
        let anchors = position.anchors();
        let fast = match &mut self.frozen {
            Some(frozen) => frozen.find(rules, &self.moves, anchors),
            None => &[],
        };
        let need = Need {
            anchors,
            fast,
            last,
        };
        let mut most = 0;
        if let Some(homes) = &self.homes {
            most = homes.landings(&need, &mut self.room)?;
        }
        for cargo in &self.cargo {
            most = most.max(cargo.landings(&need, &mut self.room)?);
        }
        Some(most)
    }
}

fn narrow(bound: u32) -> u16 {
    bound.min(u32::from(u16::MAX - 1)) as u16
}

fn cargo_moves(
    rules: &Rules,
    walker: Option<usize>,
    walking: Option<&Moves>,
) -> Vec<Option<Moves>> {
    let anchors = &rules.tables().start_at;
    let walked = walking.map(|walking| {
        walking.reached(
            rules
                .walkers()
                .iter()
                .map(|&slot| anchors[usize::from(slot)]),
        )
    });
    (0..rules.classes())
        .map(|class| {
            let slot = rules.class_slots(class).start;
            match (rules.control(), walker, &walked) {
                _ if rules.body_traits(slot).walker => None,
                (Control::Steer, Some(walker), Some(walked)) => {
                    Some(Moves::of_cargo(rules, slot, walker, walked))
                }
                (Control::Drag, ..) => Some(Moves::of_block(rules, slot)),
                _ => None,
            }
        })
        .collect()
}

/// The most landings of cargo, slides included, that a step can make.
fn landings_a_step(rules: &Rules) -> u32 {
    if rules.control() == Control::Drag {
        return 1;
    }
    let cargo: Vec<_> = (0..rules.bodies())
        .map(|slot| rules.body_traits(slot))
        .filter(|body| !body.walker)
        .collect();
    let row = rules.strength().min(cargo.len());
    let tow = usize::from(cargo.iter().any(|body| body.tow));
    (rules.walkers().len() * (row + tow)).max(1) as u32
}

fn to_exit(rules: &Rules, walking: Option<&Moves>) -> Vec<u16> {
    let Some(walking) = walking else {
        return Vec::new();
    };
    let is_exit = |cell: &u16| {
        rules
            .possible_grounds(*cell)
            .any(|ground| rules.ground_traits(ground).exit)
    };
    walking.distances_to((0..rules.size().area() as u16).filter(is_exit))
}

fn to_gems(rules: &Rules, walking: Option<&Moves>, gems: &[u16]) -> Vec<(usize, Vec<u16>)> {
    let Some(walking) = walking else {
        return Vec::new();
    };
    let items: Vec<_> = rules.items().collect();
    gems.iter()
        .map(|&gem| {
            let gem = usize::from(gem);
            (gem, walking.distances_to([items[gem].cell]))
        })
        .collect()
}
