//! What a study may read of the compiled tables and of a position, to derive bounds and to fold walks.

use super::tables::Tables;
use super::{Rules, Scratch};
use crate::level::Control;

impl Rules {
    pub(crate) fn tables(&self) -> &Tables {
        &self.tables
    }

    /// Slot of the walker whose walks are folded: that of a level with just one.
    pub(crate) fn lone_walker(&self) -> Option<u16> {
        match self.tables.walkers[..] {
            [walker] if self.tables.control == Control::Steer => Some(walker),
            _ => None,
        }
    }

    /// Takes the place of the lone walker out of a position and returns it; without one, changes nothing and returns 0.
    pub(crate) fn split(&self, words: &mut [u64]) -> u16 {
        let Some(walker) = self.lone_walker() else {
            return 0;
        };
        let field = self.layout.bodies[usize::from(walker)];
        let place = field.read(words);
        field.write(words, 0);
        place as u16
    }

    /// Puts the place of the lone walker back.
    pub(crate) fn join(&self, words: &mut [u64], place: u16) {
        if let Some(walker) = self.lone_walker() {
            self.layout.bodies[usize::from(walker)].write(words, usize::from(place));
        }
    }
}

impl Scratch {
    /// Anchor of the body in each slot of the position last loaded; `NONE` when it has vanished.
    pub(crate) fn anchors(&self) -> &[u16] {
        &self.at
    }
}

impl Scratch {
    /// Whether each item of the position last loaded is left.
    pub(crate) fn items_left(&self) -> &[bool] {
        &self.item_left
    }
}

impl Tables {
    /// Every ground that a cell has or may get.
    pub(crate) fn options_of(&self, cell: u16) -> &[u16] {
        match self.mutable.binary_search_by_key(&cell, |spot| spot.cell) {
            Ok(at) => &self.mutable[at].options,
            Err(_) => std::slice::from_ref(&self.start_ground[usize::from(cell)]),
        }
    }

    /// Whether some cell has, or may get, ground with any of these trait bits.
    pub(crate) fn has_anywhere(&self, flags: u16) -> bool {
        let has = |ground: &u16| self.grounds[usize::from(*ground)].flags & flags != 0;
        (0..self.start_ground.len()).any(|cell| self.options_of(cell as u16).iter().any(has))
    }
}
