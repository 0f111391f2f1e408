//! The cheapest way to match cargo to homes, as a lower bound on pushes.
//!
//! Rows are bodies, columns are homes; the matrix is made square. With `HomesFilled` there are columns for cargo that
//! stays out, which are free to cargo that no clause names. Without it there are rows for homes that stay empty, and only named
//! cargo has rows. The cost of a pair is the push distance of that body to that home (`distance`), so the cheapest matching
//! never exceeds the pushes left. Method: Kuhn (1955) with potentials, one shortest augmenting path for each row; changing one row
//! costs one path only.

use super::bits::Bits;
use super::board::Board;
use super::distance::NEVER;

/// The cost of what cannot be matched. Sums of 64 true distances stay far below.
const CLOSED: i32 = 1 << 22;

/// A matching over one matrix, with the potentials that prove it cheapest. Reused from position to position.
#[derive(Clone, Debug, Default)]
pub(super) struct Matching {
    side: usize,
    cost: Vec<i32>,
    row_gain: Vec<i32>,
    column_gain: Vec<i32>,
    /// By column: its row; the last entry is for the row that is being matched.
    row_of: Vec<usize>,
    trial: Trial,
}

/// Working space of one augmentation.
#[derive(Clone, Debug, Default)]
struct Trial {
    slack: Vec<i32>,
    way: Vec<usize>,
    used: Vec<bool>,
    row_gain: Vec<i32>,
    column_gain: Vec<i32>,
    row_of: Vec<usize>,
}

const NO_ROW: usize = usize::MAX;

/// What a level wants matched.
#[derive(Clone, Debug)]
pub(super) struct Demand {
    /// Side of the square matrix.
    side: usize,
    /// Number of homes.
    homes: usize,
    /// By group: whether its bodies have rows.
    pub matched: Vec<bool>,
    /// By group: whether its bodies may stay out.
    may_stay_out: Vec<bool>,
}

impl Demand {
    /// The demand of a level, or `None` if it has fewer bodies than homes to fill, or fewer homes than bodies to bring home:
    /// such a level is never finished.
    pub fn of<const N: usize>(board: &Board<N>) -> Option<Demand> {
        let groups = board.groups.groups();
        let matched: Vec<bool> = (0..groups)
            .map(|group| board.homes_filled || board.groups.named[group])
            .collect();
        let rows: usize = (0..groups)
            .filter(|&group| matched[group])
            .map(|group| board.groups.start[group].count() as usize)
            .sum();
        let homes = board.homes.count() as usize;
        let possible = if board.never {
            false
        } else if board.homes_filled {
            rows >= homes
        } else {
            homes >= rows
        };
        possible.then(|| Demand {
            side: if rows == 0 { 0 } else { rows.max(homes) },
            homes,
            may_stay_out: board.groups.named.iter().map(|named| !named).collect(),
            matched,
        })
    }

    /// Writes one row for a body of `group` with these push distances.
    fn write(&self, group: usize, far: &[u16], row: &mut [i32]) {
        for (cost, &far) in row.iter_mut().zip(far) {
            *cost = if far == NEVER { CLOSED } else { i32::from(far) };
        }
        let out = if self.may_stay_out[group] { 0 } else { CLOSED };
        row[self.homes..].fill(out);
    }

    /// The place among the rows of the body of `group` at `at`, or `None` if it has no row.
    #[inline]
    pub fn row_index<const N: usize>(
        &self,
        groups: &[Bits<N>],
        group: usize,
        at: usize,
    ) -> Option<usize> {
        if !self.matched[group] {
            return None;
        }
        let before: u32 = (0..group)
            .filter(|&group| self.matched[group])
            .map(|group| groups[group].count())
            .sum();
        Some(before as usize + groups[group].count_below(at))
    }
}

impl Matching {
    /// Matches a position. The least pushes left, or `None` if it can't be finished.
    #[inline]
    pub fn solve<const N: usize>(
        &mut self,
        board: &Board<N>,
        demand: &Demand,
        groups: &[Bits<N>],
        walker: usize,
    ) -> Option<u32> {
        self.fill(board, demand, groups, walker);
        if self.side == 0 { Some(0) } else { self.run() }
    }

    /// Writes the matrix of a position.
    fn fill<const N: usize>(
        &mut self,
        board: &Board<N>,
        demand: &Demand,
        groups: &[Bits<N>],
        walker: usize,
    ) {
        let side = demand.side;
        self.side = side;
        self.cost.resize(side * side, 0);
        let mut row = 0;
        for (group, set) in groups.iter().enumerate() {
            if demand.matched[group] {
                for at in set.ones() {
                    let far = board
                        .distances
                        .row(group, at, board.distances.side(at, walker));
                    demand.write(group, far, &mut self.cost[row * side..][..side]);
                    row += 1;
                }
            }
        }
        self.cost[row * side..].fill(0);
    }

    /// Like [`Matching::solve`], for the bound alone: [`Matching::with_row`] must not follow.
    #[inline]
    pub fn bound<const N: usize>(
        &mut self,
        board: &Board<N>,
        demand: &Demand,
        groups: &[Bits<N>],
        walker: usize,
    ) -> Option<u32> {
        self.fill(board, demand, groups, walker);
        self.least()
    }

    /// The cost of the cheapest matching. Four rows, the most common number, need no potentials.
    fn least(&mut self) -> Option<u32> {
        match self.side {
            0 => Some(0),
            4 => {
                let total = least_of_four(&self.cost);
                (total < CLOSED).then_some(total as u32)
            }
            _ => self.run(),
        }
    }

    fn run(&mut self) -> Option<u32> {
        let side = self.side;
        self.row_gain.clear();
        self.row_gain.resize(side, 0);
        self.column_gain.clear();
        self.column_gain.resize(side + 1, 0);
        self.row_of.clear();
        self.row_of.resize(side + 1, NO_ROW);
        let trial = &mut self.trial;
        trial.begin(side);
        for row in 0..side {
            augment(
                &self.cost,
                side,
                row,
                &mut self.row_gain,
                &mut self.column_gain,
                &mut self.row_of,
                (&mut trial.slack, &mut trial.way, &mut trial.used),
            );
        }
        let total: i32 = (0..side)
            .map(|column| self.cost[self.row_of[column] * side + column])
            .sum();
        (total < CLOSED).then_some(total as u32)
    }

    /// The cheapest matching after one row changed, everything else as in the last [`Matching::solve`]; that is left as it was.
    pub fn with_row(
        &mut self,
        demand: &Demand,
        group: usize,
        row: usize,
        far: &[u16],
    ) -> Option<u32> {
        let side = self.side;
        let trial = &mut self.trial;
        let mut old = [0; 64];
        let cost = &mut self.cost[row * side..][..side];
        old[..side].copy_from_slice(cost);
        demand.write(group, far, cost);
        trial.row_gain.clone_from(&self.row_gain);
        trial.column_gain.clone_from(&self.column_gain);
        trial.row_of.clone_from(&self.row_of);
        if let Some(column) = trial.row_of.iter().position(|&matched| matched == row) {
            trial.row_of[column] = NO_ROW;
        }
        augment(
            &self.cost,
            side,
            row,
            &mut trial.row_gain,
            &mut trial.column_gain,
            &mut trial.row_of,
            (&mut trial.slack, &mut trial.way, &mut trial.used),
        );
        let total: i32 = (0..side)
            .map(|column| self.cost[trial.row_of[column] * side + column])
            .sum();
        self.cost[row * side..][..side].copy_from_slice(&old[..side]);
        (total < CLOSED).then_some(total as u32)
    }
}

/// The cheapest matching of a matrix of four: the first two rows take two columns, the others the rest.
fn least_of_four(cost: &[i32]) -> i32 {
    let Some(cost) = cost.first_chunk::<16>() else {
        return CLOSED;
    };
    let pair = |row: usize, left: usize, right: usize| {
        let (a, b) = (row * 4, row * 4 + 4);
        (cost[a + left] + cost[b + right]).min(cost[a + right] + cost[b + left])
    };
    [
        (0, 1, 2, 3),
        (0, 2, 1, 3),
        (0, 3, 1, 2),
        (1, 2, 0, 3),
        (1, 3, 0, 2),
        (2, 3, 0, 1),
    ]
    .into_iter()
    .map(|(i, j, k, l)| pair(0, i, j) + pair(2, k, l))
    .fold(i32::MAX, i32::min)
}

/// Push distances from where cargo started: what a position costs at least from the start.
#[derive(Clone, Debug)]
pub(super) struct Origins {
    /// Group and distances to every cell and side, for each body of the start.
    starts: Vec<(usize, Vec<u16>)>,
}

impl Origins {
    pub fn new<const N: usize>(board: &Board<N>) -> Origins {
        let groups = board.groups.start.iter().enumerate();
        let starts = groups.flat_map(|(group, set)| {
            set.ones().map(move |at| {
                let side = board.distances.side(at, board.walker);
                (group, board.distances.start_distances(board, at, side))
            })
        });
        Origins {
            starts: starts.collect(),
        }
    }

    /// Pushes from the start to a position at least, or `None` if none suffice. The cargo of each start cell must be somewhere, so
    /// this is a matching of start cells to cells, by push distance.
    pub fn bound<const N: usize>(
        &self,
        board: &Board<N>,
        matching: &mut Matching,
        groups: &[Bits<N>],
        walker: usize,
    ) -> Option<u32> {
        let side = self.starts.len();
        matching.side = side;
        matching.cost.resize(side * side, 0);
        let mut row = 0;
        for (group, set) in groups.iter().enumerate() {
            for at in set.ones() {
                let state = at * 4 + board.distances.side(at, walker);
                for (column, (from, far)) in self.starts.iter().enumerate() {
                    matching.cost[row * side + column] = match far[state] {
                        _ if *from != group => CLOSED,
                        NEVER => CLOSED,
                        far => i32::from(far),
                    };
                }
                row += 1;
            }
        }
        matching.least()
    }
}

impl Trial {
    fn begin(&mut self, side: usize) {
        self.slack.resize(side + 1, 0);
        self.way.resize(side + 1, 0);
        self.used.resize(side + 1, false);
    }
}

/// Matches one more row by the shortest augmenting path. The matrix has free columns for it.
fn augment(
    cost: &[i32],
    side: usize,
    row: usize,
    row_gain: &mut [i32],
    column_gain: &mut [i32],
    row_of: &mut [usize],
    (slack, way, used): (&mut [i32], &mut [usize], &mut [bool]),
) {
    let outside = side;
    row_of[outside] = row;
    slack[..side].fill(i32::MAX);
    used[..=side].fill(false);
    let mut column = outside;
    while row_of[column] != NO_ROW {
        used[column] = true;
        let here = row_of[column];
        let line = &cost[here * side..][..side];
        let (mut least, mut next) = (i32::MAX, outside);
        for other in 0..side {
            if used[other] {
                continue;
            }
            let reduced = line[other] - row_gain[here] - column_gain[other];
            if reduced < slack[other] {
                slack[other] = reduced;
                way[other] = column;
            }
            if slack[other] < least {
                least = slack[other];
                next = other;
            }
        }
        for other in 0..=side {
            if used[other] {
                row_gain[row_of[other]] += least;
                column_gain[other] -= least;
            } else if other < side {
                slack[other] -= least;
            }
        }
        column = next;
    }
    while column != outside {
        let before = way[column];
        row_of[column] = row_of[before];
        column = before;
    }
}
