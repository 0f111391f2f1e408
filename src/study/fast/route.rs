//! From pushes to steps.

use super::bits::Bits;
use super::board::Board;
use crate::level::Dir;

/// A shortest walk over `free` from one cell to another, or `None` if there is none.
pub(super) fn walk<const N: usize>(
    board: &Board<N>,
    free: Bits<N>,
    from: usize,
    to: usize,
) -> Option<Vec<Dir>> {
    let mut fronts = vec![Bits::one(from)];
    let mut seen = Bits::one(from);
    while !seen.has(to) {
        let front = *fronts.last()?;
        let next = board.grown(front) & free & !seen;
        if !next.any() {
            return None;
        }
        seen |= next;
        fronts.push(next);
    }
    let mut steps = Vec::with_capacity(fronts.len());
    let mut at = to;
    fronts.pop();
    while let Some(front) = fronts.pop() {
        let dir = Dir::ALL.into_iter().find(|dir| {
            board
                .neighbour(at, dir.opposite())
                .is_some_and(|before| front.has(before))
        })?;
        steps.push(dir);
        at = board.next(at, dir.opposite());
    }
    steps.reverse();
    Some(steps)
}

/// The steps of a row of pushes, each given by the walker's cell after it and its direction, with shortest walks between and, if exits
/// are wanted, to the nearest exit at the end. It ends at the first finished position.
///
/// `None` if a walk is shut off, which a search that keeps to the rules never makes.
pub(super) fn steps_of<const N: usize>(
    board: &Board<N>,
    pushes: &[(usize, Dir)],
) -> Option<Vec<Dir>> {
    let mut cargo = board.groups.start.clone();
    let mut at = board.walker;
    let mut steps = Vec::new();
    for &(from, dir) in pushes {
        let all = Board::all(&cargo);
        let behind = board.next(from, dir.opposite());
        steps.extend(walk(board, board.walk & !all, at, behind)?);
        steps.push(dir);
        let to = board.next(from, dir);
        let group = cargo.iter().position(|set| set.has(from))?;
        cargo[group] = cargo[group].without(from).with(to);
        at = from;
    }
    if board.walkers_out {
        let free = board.walk & !Board::all(&cargo);
        let reach = board.flood(free, Bits::one(at));
        let walks = (reach & board.exits)
            .ones()
            .filter_map(|exit| walk(board, free, at, exit));
        steps.extend(walks.min_by_key(Vec::len)?);
    }
    Some(steps)
}

/// Plays a route by the plain rules of this lane and cuts it off at the first finished position. The number of pushes and the
/// lengths of the spans up to and with each push, or `None` if a step does nothing or the end is not finished.
pub(super) fn walked<const N: usize>(
    board: &Board<N>,
    steps: &mut Vec<Dir>,
) -> Option<(u32, Vec<u32>)> {
    let mut cargo = board.groups.start.clone();
    let mut at = board.walker;
    let mut spans = vec![0];
    let mut pushes = 0;
    let finished = |cargo: &[Bits<N>], at: usize| {
        board.cargo_done(&board.groups, cargo) && (!board.walkers_out || board.exits.has(at))
    };
    let mut made = 0;
    while !finished(&cargo, at) {
        let dir = *steps.get(made)?;
        let next = board.neighbour(at, dir)?;
        if !board.walk.has(next) {
            return None;
        }
        *spans.last_mut()? += 1;
        if let Some(group) = cargo.iter().position(|set| set.has(next)) {
            let to = board.neighbour(next, dir)?;
            if !board.hold.has(to) || Board::all(&cargo).has(to) {
                return None;
            }
            cargo[group] = cargo[group].without(next).with(to);
            pushes += 1;
            spans.push(0);
        }
        at = next;
        made += 1;
    }
    steps.truncate(made);
    if spans.len() > 1 && spans.last() == Some(&0) {
        spans.pop();
    }
    Some((pushes, spans))
}
