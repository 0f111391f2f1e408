//! How many pushes one cargo needs to come home if no other were there, knowing on which side of it the walker is.
//!
//! The single cargo splits what the walker may come to into parts, at most four, one for each neighbour. A *side* is
//! such a part. Leaving all other cargo out is a relaxation: every route of the level, with the pushes of other cargo
//! read as walking, is a route of the single cargo. So a distance never exceeds the pushes that this cargo still gets,
//! and no distance at all means that it never comes home. Both hold for fewest pushes and fewest steps alike.
//!
//! Within one roam, and over a push of another cargo, the side of a cargo does not change: the walker went there without
//! crossing it. So the distances of one cargo change only by its own pushes, by at most one each: sums and matchings of
//! them are consistent bounds, and A* over them never opens a position again.

use super::bits::Bits;
use super::board::Board;
use crate::level::Dir;

/// No number of pushes suffices.
pub(super) const NEVER: u16 = u16::MAX;
/// No cell.
const NOWHERE: u16 = u16::MAX;
const NO_SIDE: u8 = 4;

/// Sides and push distances of every cell.
#[derive(Clone, Debug, Default)]
pub(super) struct Distances<const N: usize> {
    /// By cell: how many sides it has.
    sides: Vec<u8>,
    /// By cell: where its sides begin in `parts`, if it has two or more.
    first_part: Vec<u32>,
    parts: Vec<Bits<N>>,
    /// By cell and direction: the side that the neighbour lies in.
    side_beside: Vec<[u8; 4]>,
    /// By group: by cell, side and home.
    far: Vec<Vec<u16>>,
    homes: usize,
}

impl<const N: usize> Distances<N> {
    pub fn new(board: &Board<N>) -> Distances<N> {
        let area = board.area();
        let mut distances = Distances {
            sides: vec![1; area],
            first_part: vec![0; area],
            parts: Vec::new(),
            side_beside: vec![[NO_SIDE; 4]; area],
            far: Vec::new(),
            homes: board.homes.count() as usize,
        };
        let next = neighbours(board);
        for (at, next) in next.iter().enumerate() {
            distances.split(board, at, next);
        }
        distances.measure(board, &next);
        distances
    }

    /// Number of sides of a cell.
    pub fn side_count(&self, at: usize) -> usize {
        usize::from(self.sides[at])
    }

    /// The side on which a walker is of a cargo at `at`.
    #[inline]
    pub fn side(&self, at: usize, walker: usize) -> usize {
        let sides = self.side_count(at);
        if sides == 1 {
            return 0;
        }
        let first = self.first_part[at] as usize;
        (0..sides)
            .find(|side| self.parts[first + side].has(walker))
            .unwrap_or(0)
    }

    /// Push distances to every home, in rising order of their cells, of a cargo of `group`.
    #[inline]
    pub fn row(&self, group: usize, at: usize, side: usize) -> &[u16] {
        let begin = (at * 4 + side) * self.homes;
        &self.far[group][begin..begin + self.homes]
    }

    fn split(&mut self, board: &Board<N>, at: usize, next: &[u16; 4]) {
        if !board.walk.has(at) {
            self.side_beside[at] = [0; 4];
            return;
        }
        let open = |cell: u16| cell != NOWHERE && board.walk.has(usize::from(cell));
        let beside = |dir: Dir| open(next[dir.index()]);
        if board.linked_around(board.walk.without(at), at) {
            for dir in Dir::ALL {
                if beside(dir) {
                    self.side_beside[at][dir.index()] = 0;
                }
            }
            return;
        }
        self.first_part[at] = self.parts.len() as u32;
        let free = board.walk.without(at);
        let mut sides = 0;
        for dir in Dir::ALL.into_iter().filter(|&dir| beside(dir)) {
            let cell = usize::from(next[dir.index()]);
            let known = (0..sides).find(|side| {
                self.parts[self.first_part[at] as usize + usize::from(*side)].has(cell)
            });
            self.side_beside[at][dir.index()] = known.unwrap_or(sides);
            if known.is_none() {
                self.parts.push(board.flood(free, Bits::one(cell)));
                sides += 1;
            }
        }
        self.sides[at] = sides.max(1);
    }

    /// Fills `far` by breadth-first search backward from each home: where could the cargo have been pushed from?
    fn measure(&mut self, board: &Board<N>, next: &[[u16; 4]]) {
        let states = board.area() * 4;
        let mut plain = vec![NEVER; states * self.homes];
        let stands = board
            .groups
            .start
            .iter()
            .fold(board.hold, |stands, &start| stands | start);
        let mut queue: Vec<u32> = Vec::new();
        for (column, home) in board.homes.ones().enumerate() {
            queue.clear();
            for side in 0..self.side_count(home) {
                queue.push((home * 4 + side) as u32);
                plain[(home * 4 + side) * self.homes + column] = 0;
            }
            let mut head = 0;
            while head < queue.len() {
                let state = queue[head] as usize;
                head += 1;
                let far = plain[state * self.homes + column];
                for from in self
                    .pulled(board, next, stands, state)
                    .into_iter()
                    .flatten()
                {
                    let entry = &mut plain[from * self.homes + column];
                    if *entry == NEVER {
                        *entry = far + 1;
                        queue.push(from as u32);
                    }
                }
            }
        }
        let groups = board.groups.groups();
        for group in 0..groups {
            let refused: Vec<usize> = board
                .homes
                .ones()
                .enumerate()
                .filter(|&(_, home)| !board.groups.homes[group].has(home))
                .map(|(column, _)| column)
                .collect();
            let mut far = if group + 1 == groups {
                std::mem::take(&mut plain)
            } else {
                plain.clone()
            };
            if !refused.is_empty() {
                for row in far.chunks_exact_mut(self.homes) {
                    refused.iter().for_each(|&column| row[column] = NEVER);
                }
            }
            self.far.push(far);
        }
    }

    /// The states of cell and side from which one push leads to this one, by direction of the push.
    fn pulled(
        &self,
        board: &Board<N>,
        next: &[[u16; 4]],
        stands: Bits<N>,
        state: usize,
    ) -> [Option<usize>; 4] {
        let (at, side) = (state / 4, (state % 4) as u8);
        Dir::ALL.map(|dir| {
            let back = dir.opposite().index();
            let from = next[at][back];
            if !board.hold.has(at) || from == NOWHERE {
                return None;
            }
            let from = usize::from(from);
            let behind = next[from][back];
            let pushed = board.walk.has(from)
                && stands.has(from)
                && self.side_beside[at][back] == side
                && behind != NOWHERE
                && board.walk.has(usize::from(behind));
            pushed.then(|| from * 4 + usize::from(self.side_beside[from][back]))
        })
    }
}

impl<const N: usize> Distances<N> {
    /// Push distances from one cell, with the walker on one side of it, to every cell and side.
    pub fn start_distances(&self, board: &Board<N>, at: usize, side: usize) -> Vec<u16> {
        let mut far = vec![NEVER; board.area() * 4];
        far[at * 4 + side] = 0;
        let mut queue = vec![at * 4 + side];
        let mut head = 0;
        while head < queue.len() {
            let state = queue[head];
            head += 1;
            let (at, side) = (state / 4, (state % 4) as u8);
            if !board.walk.has(at) {
                continue;
            }
            for dir in Dir::ALL {
                let behind = dir.opposite().index();
                let Some(to) = board.neighbour(at, dir) else {
                    continue;
                };
                if self.side_beside[at][behind] != side || !board.hold.has(to) {
                    continue;
                }
                let next = to * 4 + usize::from(self.side_beside[to][behind]);
                if far[next] == NEVER {
                    far[next] = far[state] + 1;
                    queue.push(next);
                }
            }
        }
        far
    }
}

fn neighbours<const N: usize>(board: &Board<N>) -> Vec<[u16; 4]> {
    (0..board.area())
        .map(|at| Dir::ALL.map(|dir| board.neighbour(at, dir).map_or(NOWHERE, |next| next as u16)))
        .collect()
}
