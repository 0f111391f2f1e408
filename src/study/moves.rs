//! Moves under control Drag as a state space.

use super::bounds::Bounds;
use super::space::label;
use crate::rules::{Rules, Scratch, Step, StepInfo};
use crate::search::{Arrival, EdgeList, EdgeOut, Outlook, StateSpace};

/// A level under Drag, counted in moves: consecutive steps of one block are one move.
///
/// The block that was moved last may go on for nothing, so a position alone does not tell what lies ahead. The key is the
/// packed position and one word more: the slot of the block moved last, plus one; 0 at the start or when it has vanished. A
/// "push" of this space is a step by which a move begins.
pub(super) struct MoveSpace<'a> {
    rules: &'a Rules,
    scratch: Scratch,
    bounds: Bounds,
    steps: Vec<Step>,
    there: Vec<u64>,
}

impl<'a> MoveSpace<'a> {
    pub fn new(rules: &'a Rules, bounds: Bounds) -> MoveSpace<'a> {
        MoveSpace {
            rules,
            scratch: rules.scratch(),
            bounds,
            steps: Vec::new(),
            there: vec![0; rules.words()],
        }
    }
}

impl StateSpace for MoveSpace<'_> {
    fn words(&self) -> usize {
        self.rules.words() + 1
    }

    fn places(&self) -> usize {
        1
    }

    fn start(&mut self, key: &mut [u64]) -> Arrival {
        let words = self.rules.words();
        let start = self.rules.start();
        key[..words].copy_from_slice(&start.0);
        key[words] = 0;
        let finished = self.rules.finished_in(&mut self.scratch, &start.0);
        Arrival { place: 0, finished }
    }

    fn roam(&mut self, _key: &[u64], _place: u16, members: &mut Vec<u16>) {
        members.push(0);
    }

    fn edges(&mut self, key: &[u64], _place: u16, into: &mut EdgeList) {
        let words = self.rules.words();
        let from = &key[..words];
        self.rules
            .candidate_steps_into(&mut self.scratch, from, &mut self.steps);
        for &step in &self.steps {
            let made = self
                .rules
                .step_into(&mut self.scratch, from, step, &mut self.there);
            let Some(info) = made else {
                continue;
            };
            let goes_on = u64::from(step.slot) + 1 == key[words];
            let edge = EdgeOut {
                from: 0,
                to: Arrival {
                    place: 0,
                    finished: info.finished,
                },
                pushes: u8::from(!goes_on),
                label: label(0, step),
            };
            let last = match info.slot {
                StepInfo::NO_SLOT => 0,
                slot => u64::from(slot) + 1,
            };
            let to = into.add(edge, words + 1);
            to[..words].copy_from_slice(&self.there);
            to[words] = last;
        }
    }

    fn distances(&mut self, _key: &[u64], _place: u16, distances: &mut [u16]) {
        distances[0] = 0;
    }

    fn outlook(&mut self, key: &[u64]) -> Outlook {
        let words = self.rules.words();
        self.rules.load(&mut self.scratch, &key[..words]);
        let last = key[words].checked_sub(1).map(|slot| slot as u16);
        self.bounds.moves_outlook(self.rules, &self.scratch, last)
    }

    fn steps_ahead(&mut self, _key: &[u64], _place: u16) -> Option<u32> {
        Some(0)
    }
}
