//! Bytes counted by the search itself.

/// How many bytes a search may hold, and how many it holds.
///
/// Everything that grows with the number of positions asks here before it grows, with the bytes of what it allocates. So a
/// search never holds more than its limit, and what it reports is what it allocated, not an estimate.
#[derive(Clone, Debug)]
pub struct Budget {
    limit: u64,
    used: u64,
    peak: u64,
}

impl Budget {
    /// A budget of `limit` bytes, with nothing used.
    pub fn new(limit: u64) -> Budget {
        Budget {
            limit,
            used: 0,
            peak: 0,
        }
    }

    /// Takes bytes. Returns false, and takes nothing, if they are not to be had.
    #[must_use]
    pub fn take(&mut self, bytes: u64) -> bool {
        match self.used.checked_add(bytes) {
            Some(used) if used <= self.limit => {
                self.used = used;
                self.peak = self.peak.max(used);
                true
            }
            _ => false,
        }
    }

    /// Gives bytes back.
    pub fn give(&mut self, bytes: u64) {
        self.used = self.used.saturating_sub(bytes);
    }

    /// Bytes held now.
    pub fn used(&self) -> u64 {
        self.used
    }

    /// The most bytes held so far.
    pub fn peak(&self) -> u64 {
        self.peak
    }
}

/// No more room: memory has run out (the budget did not give what was asked for), or work was stopped.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Full;

/// A side table indexed by id: a vector that grows on budget.
///
/// Growing is separate from pushing, so that a search finds out before an expansion, not in the middle of it, that memory
/// has run out. Small tables double; large ones grow by a sixteenth, for which the allocator moves pages, not bytes.
#[derive(Clone, Debug, Default)]
pub struct Column<T> {
    items: Vec<T>,
}

impl<T: Copy> Column<T> {
    /// An empty table.
    pub fn new() -> Column<T> {
        Column { items: Vec::new() }
    }

    /// Makes room for `more` entries.
    ///
    /// # Errors
    /// If the budget does not give the bytes.
    pub fn reserve(&mut self, more: usize, budget: &mut Budget) -> Result<(), Full> {
        let needed = self.items.len() + more;
        let capacity = self.items.capacity();
        if needed <= capacity {
            return Ok(());
        }
        let bytes_each = size_of::<T>().max(1);
        let small = capacity * bytes_each < 1 << 20;
        let roomier = if small {
            capacity * 2
        } else {
            capacity + capacity / 16
        };
        let wanted = roomier.max(needed + 8);
        let grows = |to: usize| (to - capacity) as u64 * bytes_each as u64;
        let to = if budget.take(grows(wanted)) {
            wanted
        } else if budget.take(grows(needed)) {
            needed
        } else {
            return Err(Full);
        };
        self.items.reserve_exact(to - self.items.len());
        Ok(())
    }

    /// Adds an entry, for which room was made.
    pub fn push(&mut self, item: T) {
        self.items.push(item);
    }

    /// Adds entries, for which room was made.
    pub fn extend_from_slice(&mut self, items: &[T]) {
        self.items.extend_from_slice(items);
    }

    /// Forgets all entries from `len` on; the bytes are kept.
    pub fn truncate(&mut self, len: usize) {
        self.items.truncate(len);
    }

    /// Bytes allocated.
    pub fn bytes(&self) -> u64 {
        (self.items.capacity() * size_of::<T>()) as u64
    }
}

impl<T> std::ops::Deref for Column<T> {
    type Target = [T];
    fn deref(&self) -> &[T] {
        &self.items
    }
}

impl<T> std::ops::DerefMut for Column<T> {
    fn deref_mut(&mut self) -> &mut [T] {
        &mut self.items
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_column_counts_exactly_what_it_allocates() {
        let mut budget = Budget::new(1 << 24);
        let mut column = Column::new();
        for item in 0..300_000u64 {
            assert_eq!(column.reserve(1, &mut budget), Ok(()));
            column.push(item);
        }
        assert_eq!(budget.used(), column.bytes());
        assert_eq!(column[299_999], 299_999);
    }

    #[test]
    fn a_column_fills_its_budget_and_not_more() {
        let mut budget = Budget::new(80_000);
        let mut column = Column::new();
        while column.reserve(1, &mut budget).is_ok() {
            column.push(7u64);
        }
        assert_eq!(column.len(), 10_000);
        assert_eq!(budget.peak(), 80_000);
    }
}
