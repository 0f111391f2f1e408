//! Writing out why a level can't be finished.
//!
//! The space is closed roam by roam, and every position met goes into the closed set, except that nothing is followed
//! beyond a position that the checker itself can see to be hopeless ([`crate::verify::hopeless`]). The bounds of the search
//! play no part: they may know more than the checker does, and a certificate must not rest on what can't be checked. What
//! was done here is not trusted either; [`crate::verify::check`] plays every step again by the plain rules.
//!
//! The cost is some hundred bytes for each roam, and a few microseconds for each position.

use super::{Limits, UndecidedReason};
use crate::level::{Channel, Level, Mechanics, Problem};
use crate::rules::{Position, Roam, Rules, Scratch, View};
use crate::verify::certificate::{Certificate, Reason};
use crate::verify::hopeless::Relaxed;
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

/// What one cut position costs in memory at most, in bytes.
const BYTES_FOR_A_CUT: u64 = 400;

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
        certificate: Certificate::new(mechanics, level),
        relaxed: Relaxed::new(mechanics, level),
        scratch: rules.scratch(),
        roam: Roam::default(),
        seen: FxHashSet::default(),
        open: Vec::new(),
        positions: 0,
        bytes: 0,
        rules: &rules,
    };
    let start = rules.start();
    if rules.finished(&start) {
        return Err(Uncertified::Solvable);
    }
    closing.follow(&start);
    while let Some(entry) = closing.open.pop() {
        closing.keep_within(limits, started)?;
        closing.expand(&entry)?;
    }
    Ok(closing.certificate)
}

/// A closure under way.
struct Closing<'a> {
    rules: &'a Rules,
    relaxed: Relaxed<'a>,
    certificate: Certificate,
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
    /// Notes a position that a step leads to: as cut, or to be expanded with its roam.
    fn meet(&mut self, position: &Position) -> Result<(), Uncertified> {
        if self.rules.finished_in(&mut self.scratch, &position.0) {
            return Err(Uncertified::Solvable);
        }
        let plain = as_plain(self.rules.view(position));
        if self.relaxed.hopeless(&plain) {
            self.certificate.add_cut(&plain, Reason::HomesOutOfReach);
            self.bytes += BYTES_FOR_A_CUT;
        } else {
            self.follow(position);
        }
        Ok(())
    }

    /// Puts the roam of a position among those to be expanded, if it is new.
    fn follow(&mut self, position: &Position) {
        self.rules
            .roam(&mut self.scratch, &position.0, &mut self.roam);
        let mut name = position.clone();
        self.rules
            .representative(&position.0, &self.roam, &mut name.0);
        if self.seen.insert(name.clone()) {
            self.bytes += BYTES_FOR_A_ROAM + 16 * name.0.len() as u64;
            self.open.push(name);
        }
    }

    /// Adds every position of a roam to the closed set and meets what its steps lead to.
    fn expand(&mut self, entry: &Position) -> Result<(), Uncertified> {
        self.rules.roam(&mut self.scratch, &entry.0, &mut self.roam);
        let members = self.roam.members.clone();
        let departures = self.roam.departures.clone();
        let mut member = entry.clone();
        for at in &members {
            self.rules.member_position(&entry.0, at, &mut member.0);
            self.certificate
                .add_closed(&as_plain(self.rules.view(&member)));
        }
        self.positions += members.len() as u64;
        self.bytes += 16 * members.len() as u64;
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
