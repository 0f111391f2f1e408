//! The open list: ids by priority.

use super::budget::{Budget, Full};

const PAGE: usize = 256;
const NO_PAGE: u32 = u32::MAX;

/// A bucket queue: one stack of ids for each priority, the least priority first, the newest id first within one.
///
/// Priorities are small whole numbers, so a bucket for each costs less than a heap and keeps the order the same on every
/// machine. Ids lie in pages of a kilobyte that buckets borrow from a common pool and give back when empty.
#[derive(Debug, Default)]
pub struct OpenList {
    /// Boxed one by one, so that a growing list moves pointers and not pages.
    #[allow(clippy::vec_box)]
    pages: Vec<Box<[u32; PAGE]>>,
    below: Vec<u32>,
    free: Vec<u32>,
    /// Top page and number of ids on it.
    buckets: Vec<(u32, u16)>,
    least: usize,
    len: usize,
}

impl OpenList {
    /// An empty list.
    pub fn new() -> OpenList {
        OpenList::default()
    }

    /// Number of ids.
    pub fn len(&self) -> usize {
        self.len
    }

    /// Whether there is no id.
    pub fn is_empty(&self) -> bool {
        self.len == 0
    }

    /// The least priority of any id.
    pub fn least(&mut self) -> Option<u32> {
        if self.len == 0 {
            return None;
        }
        while self.buckets[self.least].0 == NO_PAGE {
            self.least += 1;
        }
        Some(self.least as u32)
    }

    /// Adds an id.
    ///
    /// # Errors
    /// If the budget does not give the bytes.
    pub fn push(&mut self, priority: u32, id: u32, budget: &mut Budget) -> Result<(), Full> {
        let bucket = priority as usize;
        if bucket >= self.buckets.len() {
            let more = bucket + 1 - self.buckets.len();
            if !budget.take(more as u64 * 8) {
                return Err(Full);
            }
            self.buckets.resize(bucket + 1, (NO_PAGE, 0));
        }
        let (page, used) = self.buckets[bucket];
        if page == NO_PAGE || usize::from(used) == PAGE {
            let fresh = self.fresh_page(budget)?;
            self.below[fresh as usize] = page;
            self.buckets[bucket] = (fresh, 0);
        }
        let (page, used) = &mut self.buckets[bucket];
        self.pages[*page as usize][usize::from(*used)] = id;
        *used += 1;
        self.len += 1;
        self.least = self.least.min(bucket);
        Ok(())
    }

    /// Takes the newest id of the least priority, with its priority.
    pub fn pop(&mut self) -> Option<(u32, u32)> {
        let priority = self.least()?;
        let (page, used) = self.buckets[self.least];
        let id = self.pages[page as usize][usize::from(used) - 1];
        self.len -= 1;
        self.buckets[self.least] = match (used - 1, self.below[page as usize]) {
            (0, below) => {
                self.free.push(page);
                let full = if below == NO_PAGE { 0 } else { PAGE as u16 };
                (below, full)
            }
            (left, _) => (page, left),
        };
        Some((priority, id))
    }

    fn fresh_page(&mut self, budget: &mut Budget) -> Result<u32, Full> {
        if let Some(page) = self.free.pop() {
            return Ok(page);
        }
        // The page, and its places in `pages`, `below` and `free` with what vectors hold in reserve.
        if !budget.take(PAGE as u64 * 4 + 32) {
            return Err(Full);
        }
        self.pages.push(Box::new([0; PAGE]));
        self.below.push(NO_PAGE);
        Ok(self.pages.len() as u32 - 1)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::rngs::StdRng;
    use rand::{Rng, SeedableRng};

    #[test]
    fn the_least_priority_comes_first_and_the_newest_within_it() {
        let mut rng = StdRng::seed_from_u64(9);
        let mut budget = Budget::new(1 << 24);
        let mut open = OpenList::new();
        let mut plain: Vec<(u32, u32)> = Vec::new();
        for id in 0..40_000u32 {
            if rng.random_range(0..3) > 0 {
                let priority = rng.random_range(0..20);
                assert_eq!(open.push(priority, id, &mut budget), Ok(()));
                plain.push((priority, id));
            } else {
                let best = plain
                    .iter()
                    .enumerate()
                    .min_by_key(|(at, (priority, _))| (*priority, usize::MAX - at));
                let expected = best.map(|(at, _)| at).map(|at| plain.remove(at));
                assert_eq!(open.pop(), expected);
            }
            assert_eq!(open.len(), plain.len());
        }
    }
}
