//! Which cells a search has met bodies on, and how often the walker.

use super::bits::Bits;
use super::board::Board;

/// Counts for every cell at once: plane `i` holds bit `i` of each cell's count, so that adding a set is one carry through
/// the planes, two on average.
#[derive(Default)]
pub(super) struct Heat<const N: usize> {
    planes: Vec<Bits<N>>,
    walker: Bits<N>,
    cargo: Bits<N>,
}

impl<const N: usize> Default for Bits<N> {
    fn default() -> Bits<N> {
        Bits::NONE
    }
}

impl<const N: usize> Heat<N> {
    /// Adds the positions with this cargo and the walker on each of `cells`.
    #[inline]
    pub fn add(&mut self, cargo: Bits<N>, cells: Bits<N>) {
        self.walker |= cells;
        self.cargo |= cargo;
        let mut carry = cells;
        for plane in &mut self.planes {
            let both = *plane & carry;
            *plane = *plane ^ carry;
            carry = both;
            if !carry.any() {
                return;
            }
        }
        if carry.any() {
            self.planes.push(carry);
        }
    }

    /// Cells that a body was on.
    pub fn bodies(&self) -> Bits<N> {
        self.walker | self.cargo
    }

    /// By cell of the level: positions with the walker on it.
    pub fn counts(&self, board: &Board<N>) -> Vec<u64> {
        let mut counts = vec![0; board.size.area()];
        for (bit, plane) in self.planes.iter().enumerate() {
            for at in plane.ones() {
                counts[board.level_index(at)] += 1 << bit;
            }
        }
        counts
    }

    /// By cell of the level: whether a body was on it.
    pub fn touched(&self, board: &Board<N>) -> Vec<bool> {
        let mut touched = vec![false; board.size.area()];
        for at in self.bodies().ones() {
            touched[board.level_index(at)] = true;
        }
        touched
    }
}
