//! Writing out why a level can't be finished.
//!
//! The whole space is closed roam by roam, without any bound, and every position met goes into the closed set. So a
//! certificate rests on the step engine and the roams alone; whether these are right, [`crate::verify`] finds out by
//! itself. The cost is that of the whole space: some hundred bytes for each roam, and a few microseconds for each position.

use super::{Limits, UndecidedReason};
use crate::level::{Channel, Level, Mechanics, Problem};
use crate::rules::{Position, Roam, Rules, Scratch, View};
use crate::verify::certificate::Certificate;
use crate::verify::plain::{self, Body};
use rustc_hash::FxHashSet;
use std::time::Instant;
use thiserror::Error;

/// Why there is no certificate.
#[derive(Debug, Error, PartialEq)]
pub enum Uncertified {
    /// The level asks no sensible question.
    #[error("the level is invalid")]
    Invalid(Vec<Problem>),
    /// The level can be finished.
    #[error("the level can be finished")]
    Solvable,
    /// The space did not fit the limits.
    #[error("the whole space did not fit the limits")]
    Undecided(UndecidedReason),
}

/// What one roam costs in memory beside its words and members, in bytes: the record of its frame, with allocations.
const BYTES_FOR_A_ROAM: u64 = 400;

/// The certificate of a level that can't be finished.
///
/// # Errors
/// Why there is none.
pub fn certificate(
    mechanics: &Mechanics,
    level: &Level,
    limits: &Limits,
) -> Result<Certificate, Uncertified> {
    let rules = Rules::compile(mechanics, level).map_err(Uncertified::Invalid)?;
    let started = Instant::now();
    let mut closing = Closing {
        scratch: rules.scratch(),
        roam: Roam::default(),
        seen: FxHashSet::default(),
        open: Vec::new(),
        positions: 0,
        bytes: 0,
        rules: &rules,
    };
    let mut certificate = Certificate::new(mechanics, level);
    closing.meet(&rules.start())?;
    while let Some(entry) = closing.open.pop() {
        closing.keep_within(limits, started)?;
        closing.expand(&entry, &mut certificate)?;
    }
    Ok(certificate)
}

/// A closure under way.
struct Closing<'a> {
    rules: &'a Rules,
    scratch: Scratch,
    roam: Roam,
    /// The representative of every roam met.
    seen: FxHashSet<Position>,
    /// Roams whose departures were not followed yet.
    open: Vec<Position>,
    positions: u64,
    bytes: u64,
}

impl Closing<'_> {
    /// Notes the roam of a position, to be expanded later if it is new.
    fn meet(&mut self, position: &Position) -> Result<(), Uncertified> {
        if self.rules.finished_in(&mut self.scratch, &position.0) {
            return Err(Uncertified::Solvable);
        }
        self.rules
            .roam(&mut self.scratch, &position.0, &mut self.roam);
        let mut name = position.clone();
        self.rules
            .representative(&position.0, &self.roam, &mut name.0);
        if self.seen.insert(name.clone()) {
            self.bytes += BYTES_FOR_A_ROAM + 16 * name.0.len() as u64;
            self.open.push(name);
        }
        Ok(())
    }

    /// Adds every position of a roam to the closed set and meets what its steps lead to.
    fn expand(
        &mut self,
        entry: &Position,
        certificate: &mut Certificate,
    ) -> Result<(), Uncertified> {
        self.rules.roam(&mut self.scratch, &entry.0, &mut self.roam);
        let mut member = entry.clone();
        for at in 0..self.roam.members.len() {
            self.rules
                .member_position(&entry.0, &self.roam.members[at], &mut member.0);
            certificate.add_closed(&as_plain(self.rules.view(&member)));
        }
        self.positions += self.roam.members.len() as u64;
        self.bytes += 16 * self.roam.members.len() as u64;
        let departures = self.roam.departures.clone();
        let members = self.roam.members.clone();
        for departure in departures {
            let from = &members[usize::from(departure.member)];
            self.rules.member_position(&entry.0, from, &mut member.0);
            if let Some((next, _)) = self.rules.step(&member, departure.step) {
                self.meet(&next)?;
            }
        }
        Ok(())
    }

    fn keep_within(&self, limits: &Limits, started: Instant) -> Result<(), Uncertified> {
        let reason = if limits.halt.fired() {
            UndecidedReason::Stopped
        } else if limits.time.is_some_and(|time| started.elapsed() > time) {
            UndecidedReason::Time
        } else if self.bytes > limits.bytes {
            UndecidedReason::Memory
        } else if limits.positions.is_some_and(|most| self.positions > most) {
            UndecidedReason::Positions
        } else {
            return Ok(());
        };
        Err(Uncertified::Undecided(reason))
    }
}

/// A position as the checker has it.
fn as_plain(view: View) -> plain::Position {
    let mut bodies: Vec<Body> = view
        .bodies
        .into_iter()
        .map(|body| {
            let mut cells = body.cells;
            cells.sort();
            let kind = body.kind;
            Body { kind, cells }
        })
        .collect();
    bodies.sort();
    plain::Position {
        ground: view.ground,
        bodies,
        items: view.items,
        keys: view
            .keys
            .into_iter()
            .map(|(name, count)| (Channel(name), count))
            .collect(),
    }
}
