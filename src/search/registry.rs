//! Packed positions, each stored once.

use super::budget::{Budget, Column, Full};

/// Gives each distinct row of words an id, in the order in which they come.
///
/// **The problem.** A search meets the same position over and over, must know it again for certain (a fingerprint alone
/// would lose positions, and with them the proof), and wants to talk about it in four bytes.
///
/// **The solution.** All rows lie one after the other in one flat vector; the id is the place. An open-addressing table
/// finds them by hash: each slot holds 32 bits of the hash and the id, so that a row is read only when it is very likely the
/// one that is looked for. The comparison of the words decides.
///
/// **The cost.** The words, and 8 bytes a slot at a load of at most 7 in 10, which is 11 to 23 bytes a position. At most
/// 2^32 - 2 rows.
#[derive(Debug)]
pub struct Registry {
    words: usize,
    rows: Column<u64>,
    /// High half: hash; low half: id plus one, 0 for empty.
    slots: Vec<u64>,
    count: usize,
}

impl Registry {
    /// An empty registry of rows of `words` words, at least one.
    pub fn new(words: usize) -> Registry {
        Registry {
            words: words.max(1),
            rows: Column::new(),
            slots: Vec::new(),
            count: 0,
        }
    }

    /// Number of rows.
    pub fn len(&self) -> usize {
        self.count
    }

    /// Whether there is no row.
    pub fn is_empty(&self) -> bool {
        self.count == 0
    }

    /// The row of an id.
    pub fn row(&self, id: u32) -> &[u64] {
        let at = id as usize * self.words;
        &self.rows[at..at + self.words]
    }

    /// Bytes allocated.
    pub fn bytes(&self) -> u64 {
        self.rows.bytes() + self.slots.len() as u64 * 8
    }

    /// Makes room for `more` rows.
    ///
    /// # Errors
    /// If the budget does not give the bytes, or ids run out.
    pub fn reserve(&mut self, more: usize, budget: &mut Budget) -> Result<(), Full> {
        let needed = self.count + more;
        if needed >= u32::MAX as usize {
            return Err(Full);
        }
        self.rows.reserve(more * self.words, budget)?;
        if needed * 10 <= self.slots.len() * 7 {
            return Ok(());
        }
        let slots = (needed * 2).next_power_of_two().max(64);
        if !budget.take(slots as u64 * 8) {
            return Err(Full);
        }
        let old = std::mem::replace(&mut self.slots, vec![0; slots]);
        for id in 0..self.count as u32 {
            let hash = hash_of(self.row(id));
            let slot = self.free_slot(hash);
            self.slots[slot] = entry(hash, id);
        }
        budget.give(old.len() as u64 * 8);
        Ok(())
    }

    /// The id of a row, if it is there.
    pub fn find(&self, row: &[u64]) -> Option<u32> {
        if self.slots.is_empty() {
            return None;
        }
        self.look(hash_of(row), row).ok()
    }

    /// The id of a row, and whether it is new. Room must have been made.
    pub fn insert(&mut self, row: &[u64]) -> (u32, bool) {
        let hash = hash_of(row);
        match self.look(hash, row) {
            Ok(id) => (id, false),
            Err(slot) => {
                let id = self.count as u32;
                self.slots[slot] = entry(hash, id);
                self.rows.extend_from_slice(row);
                self.count += 1;
                (id, true)
            }
        }
    }

    /// The id of a row, or the free slot where it would be.
    fn look(&self, hash: u64, row: &[u64]) -> Result<u32, usize> {
        let mask = self.slots.len() - 1;
        let mut slot = hash as usize & mask;
        loop {
            let found = self.slots[slot];
            if found == 0 {
                return Err(slot);
            }
            if found >> 32 == hash >> 32 {
                let id = found as u32 - 1;
                if self.row(id) == row {
                    return Ok(id);
                }
            }
            slot = (slot + 1) & mask;
        }
    }

    fn free_slot(&self, hash: u64) -> usize {
        let mask = self.slots.len() - 1;
        let mut slot = hash as usize & mask;
        while self.slots[slot] != 0 {
            slot = (slot + 1) & mask;
        }
        slot
    }
}

fn entry(hash: u64, id: u32) -> u64 {
    hash & !0xffff_ffff | u64::from(id + 1)
}

/// A hash of words that is the same on every machine (multiply and fold, with odd constants from the golden ratio).
fn hash_of(row: &[u64]) -> u64 {
    let mut hash = 0x9e37_79b9_7f4a_7c15u64;
    for &word in row {
        let product = u128::from(hash ^ word) * 0xd134_2543_de82_ef95;
        hash = (product as u64) ^ ((product >> 64) as u64).rotate_left(29);
    }
    hash ^= hash >> 32;
    hash = hash.wrapping_mul(0x9fb2_1c65_1e98_df25);
    hash ^ hash >> 29
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::rngs::StdRng;
    use rand::{Rng, SeedableRng};
    use std::collections::HashMap;

    #[test]
    fn a_registry_knows_rows_again_as_a_map_does() {
        let mut rng = StdRng::seed_from_u64(5);
        let mut budget = Budget::new(1 << 30);
        let mut registry = Registry::new(2);
        let mut known: HashMap<[u64; 2], u32> = HashMap::new();
        for _ in 0..50_000 {
            let row = [
                rng.random_range(0..150u64) << 40,
                rng.random_range(0..150u64),
            ];
            assert_eq!(registry.find(&row), known.get(&row).copied());
            assert_eq!(registry.reserve(1, &mut budget), Ok(()));
            let next = known.len() as u32;
            let expected = *known.entry(row).or_insert(next);
            assert_eq!(registry.insert(&row), (expected, expected == next));
        }
        assert_eq!(registry.len(), known.len());
        assert_eq!(budget.used(), registry.bytes());
    }

    #[test]
    fn hashes_of_small_numbers_spread_over_both_halves() {
        let low: std::collections::HashSet<u64> =
            (0..4096).map(|n| hash_of(&[n]) & 0xffff).collect();
        let high: std::collections::HashSet<u64> = (0..4096).map(|n| hash_of(&[n]) >> 48).collect();
        assert!(
            low.len() > 3_800 && high.len() > 3_800,
            "{} {}",
            low.len(),
            high.len()
        );
    }
}
