//! What a change of the kinds means for the desk.

use crate::desk::state::State;
use crate::level::{Brush, Mechanics, Pack};
use std::sync::Arc;

impl State {
    /// Takes a pack with other kinds or pack-wide rules as one edit, unless its mechanics make no pack.
    pub(in crate::desk) fn rework(&mut self, label: String, pack: Pack) {
        match crate::file::refusal(&pack.mechanics) {
            Some(reason) => self.said = reason,
            None => self.edit_pack(label, |now| *now = pack),
        }
    }

    /// After an edit, undo or redo that changed the kinds: the brush follows its kind, and every level is asked about again.
    /// Returns whether they had changed.
    pub(in crate::desk) fn follow_kinds(&mut self) -> bool {
        let now = Arc::clone(&self.pack.mechanics);
        if Arc::ptr_eq(&self.asked_kinds, &now) || self.asked_kinds == now {
            return false;
        }
        self.brush = followed(self.brush, &self.asked_kinds, &now);
        self.asked_kinds = now;
        true
    }
}

/// The brush for the kind of the same id; for a kind that is gone, what clears.
fn followed(brush: Brush, old: &Mechanics, new: &Mechanics) -> Brush {
    let kind = match brush {
        Brush::Ground(ix) => old
            .grounds
            .get(usize::from(ix.0))
            .and_then(|kind| new.find_ground(&kind.id))
            .map(Brush::Ground),
        Brush::Body(ix) => old
            .bodies
            .get(usize::from(ix.0))
            .and_then(|kind| new.find_body(&kind.id))
            .map(Brush::Body),
        Brush::Item(ix) => old
            .items
            .get(usize::from(ix.0))
            .and_then(|kind| new.find_item(&kind.id))
            .map(Brush::Item),
        Brush::Clear => None,
    };
    kind.unwrap_or(Brush::Clear)
}
