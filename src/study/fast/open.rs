//! Open lists: ids by small keys.

use super::store::held;

/// Ids in buckets by key. The last in is the first out among the lowest keys, which goes deep first among equals.
#[derive(Default)]
pub(super) struct Buckets {
    rows: Vec<Vec<u32>>,
    least: usize,
    len: usize,
    bytes: u64,
}

impl Buckets {
    /// Adds an id.
    #[inline]
    pub fn push(&mut self, key: u32, id: u32) {
        let key = key as usize;
        if key >= self.rows.len() {
            self.rows.resize_with(key + 1, Vec::new);
        }
        let row = &mut self.rows[key];
        let before = row.capacity();
        row.push(id);
        self.bytes += 4 * (row.capacity() - before) as u64;
        self.least = self.least.min(key);
        self.len += 1;
    }

    /// The lowest key, or `None` when empty.
    #[inline]
    pub fn least(&mut self) -> Option<u32> {
        if self.len == 0 {
            return None;
        }
        while self.rows[self.least].is_empty() {
            self.least += 1;
        }
        Some(self.least as u32)
    }

    /// Takes the last id of the lowest key.
    #[inline]
    pub fn pop(&mut self) -> Option<(u32, u32)> {
        let key = self.least()?;
        let id = self.rows[key as usize].pop()?;
        self.len -= 1;
        if self.len == 0 {
            self.least = usize::MAX;
        }
        Some((key, id))
    }

    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        self.bytes + held(&self.rows)
    }
}
