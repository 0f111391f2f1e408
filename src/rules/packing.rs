//! How a position is packed into words.
//!
//! A position is a row of small numbers: the place of each body, sorted among bodies that are interchangeable; which of its
//! possible grounds each changeable cell has; whether each item is left; how many keys of each channel are held. Each
//! number gets the bits that its greatest value needs; none straddles two words. What can't change on this level takes no room: a board of
//! 10 x 10 with a walker and four bodies of cargo fits in one word.

use super::tables::Tables;

/// Where one number lies.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Field {
    pub word: u32,
    pub shift: u32,
    pub mask: u64,
}

impl Field {
    pub fn read(self, words: &[u64]) -> usize {
        ((words[self.word as usize] >> self.shift) & self.mask) as usize
    }

    /// Adds the number to words that are zero there.
    pub fn add(self, words: &mut [u64], value: usize) {
        words[self.word as usize] |= (value as u64 & self.mask) << self.shift;
    }

    /// Replaces the number.
    pub fn write(self, words: &mut [u64], value: usize) {
        words[self.word as usize] &= !(self.mask << self.shift);
        self.add(words, value);
    }
}

/// The places of all numbers of a position.
#[derive(Clone, Debug)]
pub(crate) struct Layout {
    pub words: usize,
    /// By slot.
    pub bodies: Vec<Field>,
    /// In the order of `Tables::mutable`.
    pub grounds: Vec<Field>,
    /// In the order of `Tables::items`; empty where no walker takes them.
    pub items: Vec<Field>,
    /// By key channel.
    pub keys: Vec<Field>,
}

struct Allot {
    word: u32,
    used: u32,
}

impl Allot {
    /// A field for numbers up to `most`.
    fn field(&mut self, most: usize) -> Field {
        let bits = usize::BITS - most.leading_zeros();
        if self.used + bits > u64::BITS {
            self.word += 1;
            self.used = 0;
        }
        let shift = self.used.min(u64::BITS - 1);
        self.used += bits;
        Field {
            word: self.word,
            shift,
            mask: (1u64 << bits) - 1,
        }
    }
}

impl Layout {
    pub fn new(tables: &Tables) -> Layout {
        let mut allot = Allot { word: 0, used: 0 };
        let last_place = tables.places.len().saturating_sub(1);
        let bodies = tables
            .bodies
            .iter()
            .map(|body| {
                let gone = usize::from(tables.classes[usize::from(body.class)].can_vanish);
                allot.field(last_place + gone)
            })
            .collect();
        let grounds = tables
            .mutable
            .iter()
            .map(|spot| allot.field(spot.options.len() - 1))
            .collect();
        let taken = if tables.walkers.is_empty() {
            0
        } else {
            tables.items.len()
        };
        let items = (0..taken).map(|_| allot.field(1)).collect();
        let keys = tables
            .keys_most
            .iter()
            .map(|&most| allot.field(if taken == 0 { 0 } else { most as usize }))
            .collect();
        Layout {
            words: allot.word as usize + 1,
            bodies,
            grounds,
            items,
            keys,
        }
    }
}
