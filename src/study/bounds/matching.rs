//! Minimum-cost assignment.

/// No assignment of this pair.
pub(super) const NEVER: u32 = 1 << 24;

/// Room for the Hungarian method (Kuhn 1955; with potentials and shortest augmenting paths, Jonker and Volgenant 1987).
#[derive(Debug, Default)]
pub(super) struct Matching {
    row_potential: Vec<i64>,
    column_potential: Vec<i64>,
    row_of: Vec<usize>,
    way: Vec<usize>,
    least: Vec<i64>,
    used: Vec<bool>,
}

impl Matching {
    /// The least total cost of giving each of `rows` rows a column of its own; none if that is not possible without a pair
    /// that costs [`NEVER`]. `costs` has `rows * columns` entries, row by row. Time is O(rows^2 * columns).
    pub fn least_cost(&mut self, rows: usize, columns: usize, costs: &[u32]) -> Option<u32> {
        if rows > columns {
            return None;
        }
        self.begin(rows, columns);
        for row in 1..=rows {
            self.augment(row, columns, costs);
        }
        let pairs = (1..=columns).filter(|&column| self.row_of[column] != 0);
        let mut total = 0u32;
        for column in pairs {
            let cost = costs[(self.row_of[column] - 1) * columns + column - 1];
            if cost >= NEVER {
                return None;
            }
            total += cost;
        }
        Some(total)
    }

    fn begin(&mut self, rows: usize, columns: usize) {
        fn fill<T: Clone>(room: &mut Vec<T>, len: usize, with: T) {
            room.clear();
            room.resize(len, with);
        }
        fill(&mut self.row_potential, rows + 1, 0);
        fill(&mut self.column_potential, columns + 1, 0);
        fill(&mut self.row_of, columns + 1, 0);
        fill(&mut self.way, columns + 1, 0);
        fill(&mut self.least, columns + 1, 0);
        fill(&mut self.used, columns + 1, false);
    }

    /// Finds a column for one row more; column 0 stands for "none yet".
    fn augment(&mut self, row: usize, columns: usize, costs: &[u32]) {
        self.row_of[0] = row;
        self.least.fill(i64::MAX);
        self.used.fill(false);
        let mut column = 0;
        loop {
            self.used[column] = true;
            let here = self.row_of[column];
            let (mut step, mut next) = (i64::MAX, 0);
            for other in 1..=columns {
                if self.used[other] {
                    continue;
                }
                let cost = i64::from(costs[(here - 1) * columns + other - 1]);
                let reduced = cost - self.row_potential[here] - self.column_potential[other];
                if reduced < self.least[other] {
                    self.least[other] = reduced;
                    self.way[other] = column;
                }
                if self.least[other] < step {
                    step = self.least[other];
                    next = other;
                }
            }
            for other in 0..=columns {
                if self.used[other] {
                    self.row_potential[self.row_of[other]] += step;
                    self.column_potential[other] -= step;
                } else if self.least[other] != i64::MAX {
                    self.least[other] -= step;
                }
            }
            column = next;
            if self.row_of[column] == 0 {
                break;
            }
        }
        while column != 0 {
            let before = self.way[column];
            self.row_of[column] = self.row_of[before];
            column = before;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::rngs::StdRng;
    use rand::{Rng, SeedableRng};

    fn by_trying(
        row: usize,
        rows: usize,
        columns: usize,
        costs: &[u32],
        taken: &mut Vec<bool>,
    ) -> Option<u32> {
        if row == rows {
            return Some(0);
        }
        let mut best = None;
        for column in 0..columns {
            let cost = costs[row * columns + column];
            if taken[column] || cost >= NEVER {
                continue;
            }
            taken[column] = true;
            if let Some(rest) = by_trying(row + 1, rows, columns, costs, taken) {
                best = Some(best.map_or(cost + rest, |best: u32| best.min(cost + rest)));
            }
            taken[column] = false;
        }
        best
    }

    #[test]
    fn the_assignment_costs_as_little_as_trying_all() {
        let mut rng = StdRng::seed_from_u64(55);
        let mut matching = Matching::default();
        let mut impossible = 0;
        for _ in 0..3_000 {
            let rows = rng.random_range(0..5);
            let columns = rng.random_range(0..6);
            let costs: Vec<u32> = (0..rows * columns)
                .map(|_| {
                    if rng.random_bool(0.3) {
                        NEVER
                    } else {
                        rng.random_range(0..9)
                    }
                })
                .collect();
            let expected = by_trying(0, rows, columns, &costs, &mut vec![false; columns]);
            impossible += usize::from(expected.is_none());
            assert_eq!(
                matching.least_cost(rows, columns, &costs),
                expected,
                "{rows} {columns} {costs:?}"
            );
        }
        assert!((300..2_700).contains(&impossible), "{impossible}");
    }
}
