//! What a study has spent, and when it has to stop.

use super::{Limits, UndecidedReason};
use std::time::{Duration, Instant};

/// Time between two glimpses of a running search.
const BETWEEN_GLIMPSES: Duration = Duration::from_millis(10);

/// Watches the limits from outside the engines. Asked after every node, which costs one relaxed load and one look at the clock.
pub(super) struct Meter<'a> {
    limits: &'a Limits,
    started: Instant,
    glimpsed: Instant,
}

impl<'a> Meter<'a> {
    pub fn new(limits: &'a Limits) -> Meter<'a> {
        let now = Instant::now();
        Meter {
            limits,
            started: now,
            glimpsed: now,
        }
    }

    /// Seconds since the start.
    pub fn seconds(&self) -> f64 {
        self.started.elapsed().as_secs_f64()
    }

    /// Whether to go on, after `positions` positions. Returns whether it is time for a glimpse.
    ///
    /// # Errors
    /// The limit that was met.
    pub fn check(&mut self, positions: u64) -> Result<bool, UndecidedReason> {
        if self.limits.positions.is_some_and(|most| positions >= most) {
            return Err(UndecidedReason::Positions);
        }
        if self.limits.halt.fired() {
            return Err(UndecidedReason::Stopped);
        }
        let now = Instant::now();
        if self
            .limits
            .time
            .is_some_and(|time| now - self.started >= time)
        {
            return Err(UndecidedReason::Time);
        }
        let due = now - self.glimpsed >= BETWEEN_GLIMPSES;
        if due {
            self.glimpsed = now;
        }
        Ok(due)
    }
}
