//! A compiled level as a state space.

use super::bounds::Bounds;
use crate::level::Dir;
use crate::rules::tables::NONE;
use crate::rules::{Roam, Rules, Scratch, Step};
use crate::search::{Arrival, EdgeList, EdgeOut, Outlook, StateSpace};

/// A level for the engines of [`crate::search`]: the key is the packed position without the lone walker, whose place is the
/// place; with several walkers, or under Drag, the key is the whole position and each is a roam of its own.
pub(super) struct LevelSpace<'a> {
    pub rules: &'a Rules,
    scratch: Scratch,
    bounds: Bounds,
    roam: Roam,
    here: Vec<u64>,
    there: Vec<u64>,
    /// For each cell: positions folded away with a walker on it; with cargo, under Drag.
    pub heat: Vec<u64>,
    /// Cells that walks within roams come onto. The scratch notes all other steps.
    walked: Vec<bool>,
}

impl<'a> LevelSpace<'a> {
    pub fn new(rules: &'a Rules, bounds: Bounds) -> LevelSpace<'a> {
        let words = rules.words();
        LevelSpace {
            rules,
            scratch: rules.scratch(),
            bounds,
            roam: Roam::default(),
            here: vec![0; words],
            there: vec![0; words],
            heat: vec![0; rules.tables().size.area()],
            walked: vec![false; rules.tables().size.area()],
        }
    }

    /// For each cell: whether a body ever came onto it or stood there at the start, in what was looked at.
    pub fn touched(&self) -> Vec<bool> {
        let mut touched = self.scratch.touched().to_vec();
        for (touched, &walked) in touched.iter_mut().zip(&self.walked) {
            *touched |= walked;
        }
        let tables = self.rules.tables();
        for (slot, &anchor) in tables.start_at.iter().enumerate() {
            for cell in tables.cells_of(slot, anchor) {
                touched[usize::from(cell)] = true;
            }
        }
        touched
    }

    fn load(&mut self, key: &[u64], place: u16) {
        self.here.copy_from_slice(key);
        self.rules.join(&mut self.here, place);
    }

    /// Counts the bodies of a position that isn't told by a lone walker.
    fn heat_of_position(&mut self) {
        self.rules.load(&mut self.scratch, &self.here);
        let tables = self.rules.tables();
        let walkers = !tables.walkers.is_empty();
        for (slot, &anchor) in self.scratch.anchors().iter().enumerate() {
            if anchor != NONE && tables.bodies[slot].walker == walkers {
                for cell in tables.cells_of(slot, anchor) {
                    self.heat[usize::from(cell)] += 1;
                }
            }
        }
    }

    fn place_of(&self, cell: u16) -> u16 {
        match cell {
            Roam::NOWHERE => 0,
            cell => self.rules.tables().place_of[usize::from(cell)],
        }
    }
}

/// Packs a step and the place that it is made from.
pub(super) fn label(place: u16, step: Step) -> u32 {
    u32::from(place) << 14 | u32::from(step.slot) << 2 | step.dir.index() as u32
}

/// The place and the step of a label.
pub(super) fn unlabel(label: u32) -> (u16, Step) {
    let step = Step {
        slot: (label >> 2 & 0xfff) as u16,
        dir: Dir::ALL[(label & 3) as usize],
    };
    ((label >> 14) as u16, step)
}

impl StateSpace for LevelSpace<'_> {
    fn words(&self) -> usize {
        self.rules.words()
    }

    fn places(&self) -> usize {
        match self.rules.lone_walker() {
            Some(_) => self.rules.tables().places.len().max(2),
            None => 1,
        }
    }

    fn start(&mut self, key: &mut [u64]) -> Arrival {
        key.copy_from_slice(&self.rules.start().0);
        let finished = self.rules.finished_in(&mut self.scratch, key);
        let place = self.rules.split(key);
        Arrival { place, finished }
    }

    fn roam(&mut self, key: &[u64], place: u16, members: &mut Vec<u16>) {
        self.load(key, place);
        if self.rules.lone_walker().is_none() {
            self.heat_of_position();
            members.push(0);
            return;
        }
        self.rules
            .roam_members(&mut self.scratch, &self.here, &mut self.roam);
        // Links lead both ways, so with two members or more a walk comes onto each.
        let links = self.roam.members.len() > 1;
        for member in &self.roam.members {
            self.heat[usize::from(member.cell)] += 1;
            self.walked[usize::from(member.cell)] |= links;
            members.push(self.place_of(member.cell));
        }
    }

    fn edges(&mut self, key: &[u64], place: u16, into: &mut EdgeList) {
        self.load(key, place);
        let mut roam = std::mem::take(&mut self.roam);
        self.rules.roam(&mut self.scratch, &self.here, &mut roam);
        let mut from = std::mem::take(&mut self.here);
        for departure in &roam.departures {
            let member = &roam.members[usize::from(departure.member)];
            self.rules.member_position(key, member, &mut from);
            let made =
                self.rules
                    .step_into(&mut self.scratch, &from, departure.step, &mut self.there);
            let Some(info) = made else {
                continue;
            };
            let from_place = self.place_of(member.cell);
            let to_place = self.rules.split(&mut self.there);
            let edge = EdgeOut {
                from: from_place,
                to: Arrival {
                    place: to_place,
                    finished: info.finished,
                },
                pushes: u8::from(info.pushed),
                label: label(from_place, departure.step),
            };
            let words = self.there.len();
            into.add(edge, words).copy_from_slice(&self.there);
        }
        self.here = from;
        self.roam = roam;
    }

    fn distances(&mut self, key: &[u64], place: u16, distances: &mut [u16]) {
        if self.rules.lone_walker().is_none() {
            distances[0] = 0;
            return;
        }
        self.load(key, place);
        self.rules
            .roam_members(&mut self.scratch, &self.here, &mut self.roam);
        distances.fill(u16::MAX);
        for member in &self.roam.members {
            distances[usize::from(self.place_of(member.cell))] = member.distance;
        }
    }

    fn outlook(&mut self, key: &[u64]) -> Outlook {
        self.rules.load(&mut self.scratch, key);
        self.bounds.outlook(self.rules, &self.scratch)
    }

    fn steps_ahead(&mut self, key: &[u64], place: u16) -> Option<u32> {
        if !self.bounds.asks_for_place() {
            return Some(0);
        }
        self.load(key, place);
        self.rules.load(&mut self.scratch, &self.here);
        self.bounds.walks(&self.scratch)
    }
}
