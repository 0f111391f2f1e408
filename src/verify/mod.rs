//! Checking answers without trusting the machinery that found them.
//!
//! Nothing here uses the step engine, the search or the studies: the level model and its file form are all that is shared
//! with them. What is trusted is [`plain`], the rules written a second time, and [`hopeless`], one page of argument.

pub mod certificate;
pub mod hopeless;
pub mod plain;
mod turn;

use crate::level::{Severity, problems};
use certificate::{Certificate, Unreadable};
use hopeless::Relaxed;
use plain::{Act, World};
use thiserror::Error;

/// What a certificate was found to prove: that this level can't be finished.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Verified {
    /// The name of the level in the certificate.
    pub level: String,
    /// Positions of the closed set, each of which was played on in every direction.
    pub positions: u64,
    /// Cut positions, for each of which the reason was found to hold.
    pub cut: u64,
}

/// Why a certificate proves nothing.
#[derive(Debug, Error)]
pub enum Refusal {
    /// It can't be read.
    #[error(transparent)]
    Unreadable(#[from] Unreadable),
    /// The level in it asks no sensible question.
    #[error("the level in this certificate is invalid: {0}")]
    Invalid(String),
    /// The start is not in the closed set.
    #[error("the closed set does not hold the start")]
    StartOutside,
    /// The objective holds in a position of the closed set.
    #[error("position {0} of the closed set is finished")]
    Finished(u64),
    /// A step leads out of the closed set to a position that was not cut.
    #[error("the step {1:?} from position {0} leads out of the closed set")]
    Open(u64, Act),
    /// The reason given for a cut position does not hold there.
    #[error("the reason given for cut position {0} does not hold there")]
    Reason(u64),
}

/// Reads and checks a certificate, with the plain rules alone.
///
/// Takes time in the order of the number of its positions, some microseconds each.
///
/// # Errors
/// The first thing that keeps it from being a proof.
pub fn check(text: &str) -> Result<Verified, Refusal> {
    let certificate = Certificate::read(text)?;
    let (mechanics, level) = (certificate.mechanics(), certificate.level());
    let invalid = problems(mechanics, level)
        .into_iter()
        .find(|problem| problem.severity == Severity::Invalid);
    if let Some(problem) = invalid {
        return Err(Refusal::Invalid(problem.text));
    }
    let world = World::new(mechanics, level);
    if !certificate.is_closed(world.start()) {
        return Err(Refusal::StartOutside);
    }
    let mut relaxed = Relaxed::new(mechanics, level);
    let mut cut = 0;
    for (position, _) in certificate.cut() {
        if !relaxed.hopeless(&position) {
            return Err(Refusal::Reason(cut));
        }
        cut += 1;
    }
    Ok(Verified {
        level: level.name.clone(),
        positions: closed_under_steps(&certificate, &world)?,
        cut,
    })
}

/// Plays on from every position of the closed set. Returns their number.
fn closed_under_steps(certificate: &Certificate, world: &World) -> Result<u64, Refusal> {
    let mut positions = 0;
    for position in certificate.closed() {
        if world.finished(&position) {
            return Err(Refusal::Finished(positions));
        }
        for (act, stepped) in world.steps(&position) {
            if !certificate.is_closed(&stepped.position) && !certificate.is_cut(&stepped.position) {
                return Err(Refusal::Open(positions, act));
            }
        }
        positions += 1;
    }
    Ok(positions)
}
