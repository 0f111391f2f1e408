//! What a study has spent, and when it has to stop.

use crate::study::{Limits, UndecidedReason};
use std::time::Instant;

/// Units of work between two looks at the clock. One unit is one expansion over one word of cells, some 100 ns.
const WORK_BETWEEN_LOOKS: u32 = 2_048;

/// Watches the limits. Positions are checked at every expansion, so that a limit on them stops a search at the same
/// place on every machine; clock, memory and cancelling several times a millisecond.
pub(super) struct Meter<'a> {
    limits: &'a Limits,
    started: Instant,
    left: u32,
    /// Positions looked at.
    pub positions: u64,
    /// Bytes held by engines other than the one that runs.
    pub bytes_aside: u64,
    /// The most bytes held.
    pub bytes_peak: u64,
    /// Set when it is time to look at the clock for other purposes too.
    pub looked: bool,
}

impl<'a> Meter<'a> {
    pub fn new(limits: &'a Limits) -> Meter<'a> {
        Meter {
            limits,
            started: Instant::now(),
            left: 0,
            positions: 0,
            bytes_aside: 0,
            bytes_peak: 0,
            looked: false,
        }
    }

    /// Seconds since the start.
    pub fn seconds(&self) -> f64 {
        self.started.elapsed().as_secs_f64()
    }

    /// Bytes that the running engine may still take, given what it holds.
    pub fn spare(&self, held: u64) -> u64 {
        self.limits
            .bytes
            .saturating_sub(held)
            .saturating_sub(self.bytes_aside)
    }

    /// Accounts for `work` units.
    ///
    /// # Errors
    /// The limit that was met.
    #[inline]
    pub fn spend(&mut self, work: u32, held: impl FnOnce() -> u64) -> Result<(), UndecidedReason> {
        if self
            .limits
            .positions
            .is_some_and(|most| self.positions >= most)
        {
            return Err(UndecidedReason::Positions);
        }
        if self.left > work {
            self.left -= work;
            return Ok(());
        }
        self.left = WORK_BETWEEN_LOOKS;
        self.look(held())
    }

    /// Accounts for roams that were flooded since the last [`Meter::spend`]. Long ways over many words make them dear.
    #[inline]
    pub fn owe<const N: usize>(&mut self, roams: usize) {
        let each = if N >= 16 { 8 * N } else { N };
        self.left = self.left.saturating_sub((roams * each) as u32);
    }

    #[cold]
    fn look(&mut self, held: u64) -> Result<(), UndecidedReason> {
        self.looked = true;
        self.note_bytes(held);
        if self.limits.halt.fired() {
            return Err(UndecidedReason::Stopped);
        }
        if held + self.bytes_aside > self.limits.bytes {
            return Err(UndecidedReason::Memory);
        }
        match self.limits.time {
            Some(time) if self.started.elapsed() >= time => Err(UndecidedReason::Time),
            _ => Ok(()),
        }
    }

    /// Remembers the most bytes held.
    pub fn note_bytes(&mut self, held: u64) {
        self.bytes_peak = self.bytes_peak.max(held + self.bytes_aside);
    }
}
