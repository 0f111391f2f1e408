//! Undo and redo as labelled snapshots.

use super::pack::Pack;
use std::collections::VecDeque;

/// The most snapshots kept; older ones are forgotten.
const MOST_KEPT: usize = 1_000;

/// The past and future of a pack, one labelled snapshot a gesture (pointer down to pointer up).
///
/// A snapshot shares every level that the gesture did not touch, so that its cost is one level and a vector of pointers.
/// Going back and forth is exact by construction: what is restored is the very value that was recorded.
#[derive(Debug, Default)]
pub struct History {
    past: VecDeque<(String, Pack)>,
    future: Vec<(String, Pack)>,
}

impl History {
    /// Notes that `before` was left by the gesture called `label`. Forgets what had been undone.
    pub fn record(&mut self, label: impl Into<String>, before: Pack) {
        self.future.clear();
        self.past.push_back((label.into(), before));
        if self.past.len() > MOST_KEPT {
            self.past.pop_front();
        }
    }

    /// Takes back the last gesture: swaps `now` for what was before it. Returns the gesture's label, or `None` at the beginning.
    pub fn undo(&mut self, now: &mut Pack) -> Option<String> {
        let (label, before) = self.past.pop_back()?;
        self.future
            .push((label.clone(), std::mem::replace(now, before)));
        Some(label)
    }

    /// Does the last undone gesture again. Returns its label, or `None` if nothing was undone.
    pub fn redo(&mut self, now: &mut Pack) -> Option<String> {
        let (label, after) = self.future.pop()?;
        self.past
            .push_back((label.clone(), std::mem::replace(now, after)));
        Some(label)
    }

    /// What undo would take back.
    pub fn undo_label(&self) -> Option<&str> {
        self.past.back().map(|(label, _)| label.as_str())
    }

    /// What redo would do again.
    pub fn redo_label(&self) -> Option<&str> {
        self.future.last().map(|(label, _)| label.as_str())
    }
}
