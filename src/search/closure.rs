//! Looking at everything that can be reached.

use super::budget::Full;
use super::folded::{Folded, NO_ROAM};
use super::space::StateSpace;

/// Opens every roam that can be reached, in the order in which they are found.
///
/// The registry of roams is the queue: what is found is opened in turn, so a cursor is all that is kept.
#[derive(Debug, Default)]
pub struct Closure {
    next: usize,
    started: bool,
}

impl Closure {
    /// A closure that has not begun.
    pub fn new() -> Closure {
        Closure::default()
    }

    /// Opens one roam. Returns false when all are open.
    ///
    /// # Errors
    /// If memory has run out.
    pub fn advance<S: StateSpace>(&mut self, graph: &mut Folded<S>) -> Result<bool, Full> {
        if !self.started {
            let (roam, _) = graph.start()?;
            self.started = true;
            return Ok(roam != NO_ROAM);
        }
        if self.next >= graph.roam_count() {
            return Ok(false);
        }
        graph.open(self.next as u32)?;
        self.next += 1;
        Ok(true)
    }
}
