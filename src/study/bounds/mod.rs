//! Bounds and dead ends derived from the traits of a level.

use crate::rules::{Rules, Scratch};
use crate::search::{Ahead, Outlook};

/// What lies ahead of a position, at least.
pub(super) struct Bounds {}

impl Bounds {
    /// No bound at all.
    pub fn none() -> Bounds {
        Bounds {}
    }

    /// Bounds by the traits of the level.
    pub fn new(_rules: &Rules) -> Bounds {
        Bounds {}
    }

    /// What is ahead of the position that the scratch holds, wherever a lone walker stands.
    pub fn outlook(&mut self, _rules: &Rules, _position: &Scratch) -> Outlook {
        Outlook::Open(Ahead::default())
    }

    /// Whether [`Bounds::steps_ahead`] knows more than [`Bounds::outlook`].
    pub fn asks_for_place(&self) -> bool {
        false
    }

    /// Fewest steps ahead of the position that the scratch holds, the walker's place included.
    pub fn steps_ahead(&mut self, _rules: &Rules, _position: &Scratch) -> u32 {
        0
    }

    /// What is ahead under Drag, in moves, when the block in slot `last` may go on for nothing.
    pub fn moves_outlook(
        &mut self,
        _rules: &Rules,
        _position: &Scratch,
        _last: Option<u16>,
    ) -> Outlook {
        Outlook::Open(Ahead::default())
    }
}
