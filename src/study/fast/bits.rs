//! Sets of cells as bits.

use std::ops::{BitAnd, BitAndAssign, BitOr, BitOrAssign, BitXor, Not};

/// A set of cells of a box, `64 * N` of them at most; `N` is a power of two.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Bits<const N: usize>(pub [u64; N]);

impl<const N: usize> Bits<N> {
    /// The empty set.
    pub const NONE: Bits<N> = Bits([0; N]);

    /// The set of one cell.
    #[inline]
    pub fn one(at: usize) -> Bits<N> {
        let mut bits = Bits::NONE;
        bits.put(at);
        bits
    }

    /// The word of a cell. As `N` is a power of two, the mask changes nothing but spares the check of the index.
    #[inline]
    const fn word(at: usize) -> usize {
        (at >> 6) & (N - 1)
    }

    #[inline]
    pub fn has(&self, at: usize) -> bool {
        self.0[Self::word(at)] >> (at & 63) & 1 != 0
    }

    #[inline]
    pub fn put(&mut self, at: usize) {
        self.0[Self::word(at)] |= 1 << (at & 63);
    }

    #[inline]
    pub fn take(&mut self, at: usize) {
        self.0[Self::word(at)] &= !(1 << (at & 63));
    }

    /// The set without one cell.
    #[inline]
    pub fn without(mut self, at: usize) -> Bits<N> {
        self.take(at);
        self
    }

    /// The set with one cell more.
    #[inline]
    pub fn with(mut self, at: usize) -> Bits<N> {
        self.put(at);
        self
    }

    #[inline]
    pub fn any(&self) -> bool {
        self.0.iter().fold(0, |all, word| all | word) != 0
    }

    #[inline]
    pub fn count(&self) -> u32 {
        self.0.iter().map(|word| word.count_ones()).sum()
    }

    /// Number of members below a cell.
    #[inline]
    pub fn count_below(&self, at: usize) -> usize {
        let whole: u32 = self.0[..at >> 6].iter().map(|word| word.count_ones()).sum();
        let part = self.0[Self::word(at)] & ((1 << (at & 63)) - 1);
        (whole + part.count_ones()) as usize
    }

    /// Every member moved up by `by` cells, 1 to 64.
    #[inline]
    pub fn up(self, by: u32) -> Bits<N> {
        Bits(std::array::from_fn(|at| {
            let carried = if at == 0 {
                0
            } else {
                self.0[at - 1] >> (64 - by)
            };
            self.0[at] << (by - 1) << 1 | carried
        }))
    }

    /// Every member moved down by `by` cells, 1 to 64.
    #[inline]
    pub fn down(self, by: u32) -> Bits<N> {
        Bits(std::array::from_fn(|at| {
            let carried = if at + 1 == N {
                0
            } else {
                self.0[at + 1] << (64 - by)
            };
            self.0[at] >> (by - 1) >> 1 | carried
        }))
    }

    /// The members in rising order.
    #[inline]
    pub fn ones(self) -> Ones<N> {
        Ones {
            rest: self.0,
            word: 0,
        }
    }

    /// A hash of the set, mixed with that of what came before.
    #[inline]
    pub fn hash(&self, seed: u64) -> u64 {
        self.0.iter().fold(seed, |hash, &word| {
            let wide = u128::from(hash ^ word ^ 0x9e37_79b9_7f4a_7c15)
                * u128::from(0xd6e8_feb8_6659_fd93_u64);
            (wide as u64) ^ (wide >> 64) as u64
        })
    }
}

/// Iterator over the members of a set.
pub(super) struct Ones<const N: usize> {
    rest: [u64; N],
    word: usize,
}

impl<const N: usize> Iterator for Ones<N> {
    type Item = usize;

    #[inline]
    fn next(&mut self) -> Option<usize> {
        while self.word < N {
            let word = self.rest[self.word];
            if word != 0 {
                self.rest[self.word] = word & (word - 1);
                return Some(self.word * 64 + word.trailing_zeros() as usize);
            }
            self.word += 1;
        }
        None
    }
}

impl<const N: usize> FromIterator<usize> for Bits<N> {
    fn from_iter<I: IntoIterator<Item = usize>>(cells: I) -> Bits<N> {
        let mut bits = Bits::NONE;
        cells.into_iter().for_each(|at| bits.put(at));
        bits
    }
}

impl<const N: usize> BitAnd for Bits<N> {
    type Output = Bits<N>;
    #[inline]
    fn bitand(mut self, other: Bits<N>) -> Bits<N> {
        self &= other;
        self
    }
}

impl<const N: usize> BitAndAssign for Bits<N> {
    #[inline]
    fn bitand_assign(&mut self, other: Bits<N>) {
        self.0.iter_mut().zip(other.0).for_each(|(a, b)| *a &= b);
    }
}

impl<const N: usize> BitOr for Bits<N> {
    type Output = Bits<N>;
    #[inline]
    fn bitor(mut self, other: Bits<N>) -> Bits<N> {
        self |= other;
        self
    }
}

impl<const N: usize> BitOrAssign for Bits<N> {
    #[inline]
    fn bitor_assign(&mut self, other: Bits<N>) {
        self.0.iter_mut().zip(other.0).for_each(|(a, b)| *a |= b);
    }
}

impl<const N: usize> BitXor for Bits<N> {
    type Output = Bits<N>;
    #[inline]
    fn bitxor(mut self, other: Bits<N>) -> Bits<N> {
        self.0.iter_mut().zip(other.0).for_each(|(a, b)| *a ^= b);
        self
    }
}

impl<const N: usize> Not for Bits<N> {
    type Output = Bits<N>;
    #[inline]
    fn not(mut self) -> Bits<N> {
        self.0.iter_mut().for_each(|word| *word = !*word);
        self
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn members_move_across_words_and_fall_off_the_ends() {
        let set: Bits<2> = [0, 5, 63, 64, 127].into_iter().collect();
        let moved = |set: Bits<2>| set.ones().collect::<Vec<_>>();
        assert_eq!(moved(set.up(1)), [1, 6, 64, 65]);
        assert_eq!(moved(set.up(64)), [64, 69, 127]);
        assert_eq!(moved(set.down(1)), [4, 62, 63, 126]);
        assert_eq!(moved(set.down(64)), [0, 63]);
        assert_eq!(set.count(), 5);
        assert_eq!(set.count_below(64), 3);
    }
}
