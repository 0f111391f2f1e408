//! Spreading a roam over the board.
//!
//! Most steps of a walk are plain: from open ground to open ground, and back by the opposite step. The survey of the board
//! has open ground as one row of bits each, so a whole layer of the walk spreads at once. Steps with anything else at either end are
//! judged one by one: where traits allow, by following the walker over the notes of the survey (it slides, it warps), else by making
//! the real step forth and back. Either way the roam is exact, for every mix of traits.
//!
//! What need not be tried, for one walker:
//! - Frail ground changes when it is left, a lock when it is entered, an item is gone once taken: no step onto them or from them is undone at once.
//! - A push changes more than where the walker stands. The cell in front of the walker loses its cargo, and the walker must come onto it; what moves after that
//!   is only cargo with tow behind the walker, which takes a warp to be of use. So a push is tried where such cargo is behind, or
//!   could get there in the same step because it can be pushed too, on levels with warps.
//! - Without a warp, a slide never comes round a corner: only the opposite step can undo a step.

use super::packing::Field;
use super::roam::Arrival;
use super::survey::{Survey, note};
use super::{Departure, Member, Roam, Rules, Scratch, Step};
use crate::level::Dir;

/// What a step from a member is to the roam.
enum Walk {
    /// No step.
    Stay,
    /// A step of the roam, to this cell.
    Link(u16),
    /// A step that is not, or no step.
    Leave,
    /// Not told by the survey.
    Try,
}

/// Where the walker ends when it steps, by the notes.
#[derive(PartialEq, Eq)]
enum Stroll {
    /// Where it was.
    Stays,
    /// On another cell, with nothing else changed.
    To(u16),
    /// It changes something that no single step brings back.
    Parts,
    /// Gates would have to be judged anew.
    Unsure,
}

/// A spreading roam: the position that it began with, and where it is written.
struct Spread<'a> {
    from: &'a [u64],
    field: Field,
    out: &'a mut Roam,
    departures: bool,
}

impl Rules {
    /// Grows the roam of the position in the scratch, `from`, whose entry is the first member of `out`.
    pub(super) fn spread(
        &self,
        s: &mut Scratch,
        from: &[u64],
        walker: u16,
        out: &mut Roam,
        departures: bool,
    ) {
        let mut view = std::mem::take(&mut s.survey);
        let odd_pushes = self.tables.has_tow && self.tables.has_warps;
        view.member_of.resize(self.tables.size.area(), 0);
        self.survey(s, &mut view, walker, departures || odd_pushes);
        let mut spread = Spread {
            from,
            field: self.layout.bodies[usize::from(walker)],
            out,
            departures,
        };
        let (row, x) = self.terrain.spot[usize::from(spread.out.members[0].cell)];
        let mut rows = (usize::from(row), usize::from(row));
        view.front[rows.0] = 1 << x;
        view.seen[rows.0] = 1 << x;
        view.member_of[usize::from(spread.out.members[0].cell)] = 0;
        let mut distance = 0;
        loop {
            self.judge_layer(s, &mut view, &mut spread, rows);
            let Some(reached) = self.next_layer(&mut view, spread.out, rows) else {
                break;
            };
            rows = reached;
            distance += 1;
            self.add_layer(&mut view, spread.out, rows, distance);
        }
        spread.out.keep_open(&view.open, self.tables.size);
        s.survey = view;
    }

    /// Judges one by one the steps of this layer that are not plain.
    fn judge_layer(
        &self,
        s: &mut Scratch,
        view: &mut Survey,
        spread: &mut Spread<'_>,
        rows: (usize, usize),
    ) {
        let width = self.tables.size.width();
        for row in rows.0..=rows.1 {
            let mut bits = view.front[row] & view.judged[row];
            while bits != 0 {
                let cell = ((row - 1) * width + bits.trailing_zeros() as usize) as u16;
                bits &= bits - 1;
                self.judge_cell(s, view, spread, cell);
            }
        }
    }

    fn judge_cell(&self, s: &mut Scratch, view: &mut Survey, spread: &mut Spread<'_>, cell: u16) {
        let is_open = |view: &Survey, cell: u16| {
            self.terrain
                .spot
                .get(usize::from(cell))
                .is_some_and(|&(row, x)| view.open[usize::from(row)] >> x & 1 != 0)
        };
        let open_here = is_open(view, cell);
        for dir in Dir::ALL {
            let to = self.terrain.next[usize::from(cell)][dir.index()];
            if open_here && is_open(view, to) {
                continue;
            }
            let mut walk = self.judge(s, view, cell, to, dir);
            if matches!(walk, Walk::Try) {
                walk = self.try_walk(s, spread, cell, dir);
            }
            match walk {
                Walk::Link(to) => view.arrivals.push(Arrival {
                    cell: to,
                    from: cell,
                    dir,
                }),
                Walk::Leave if spread.departures => spread.out.departures.push(Departure {
                    member: view.member_of[usize::from(cell)],
                    step: Step { slot: 0, dir },
                }),
                _ => {}
            }
        }
    }

    fn judge(&self, s: &mut Scratch, view: &mut Survey, cell: u16, to: u16, dir: Dir) -> Walk {
        let (here, there) = (view.notes[usize::from(cell)], view.notes[usize::from(to)]);
        if here & note::PLATE != 0 && there & note::GATE != 0 {
            return Walk::Try;
        }
        if there & (1 << dir.index()) == 0 {
            return Walk::Stay;
        }
        if there & note::TAKEN != 0 {
            return self.judge_push(view, cell, to, dir);
        }
        if here & note::PARTING != 0 {
            return Walk::Leave;
        }
        let behind = self.terrain.next[usize::from(cell)][dir.opposite().index()];
        if self.tables.has_tow && view.notes[usize::from(behind)] & note::TOW != 0 {
            return Walk::Try;
        }
        let end = match self.stroll(view, cell, dir) {
            Stroll::Stays => return Walk::Stay,
            Stroll::Parts => return Walk::Leave,
            Stroll::Unsure => return Walk::Try,
            Stroll::To(end) => end,
        };
        for &cell in &view.passed {
            s.touched[usize::from(cell)] = true;
        }
        self.judge_end(view, cell, end, dir)
    }

    fn judge_push(&self, view: &Survey, cell: u16, to: u16, dir: Dir) -> Walk {
        let notes = |cell: u16| view.notes[usize::from(cell)];
        let beyond = self.terrain.next[usize::from(to)][dir.index()];
        let blocked = usize::from(beyond) == self.tables.size.area()
            || self.tables.strength == 1 && notes(beyond) & note::TAKEN != 0;
        let behind = self.terrain.next[usize::from(cell)][dir.opposite().index()];
        if notes(to) & note::PUSH == 0 || blocked {
            Walk::Stay
        } else if self.tables.has_warps
            && self.tables.has_tow
            && (self.tables.pushes_to_tow || notes(behind) & note::TOW != 0)
        {
            Walk::Try
        } else {
            Walk::Leave
        }
    }

    /// Whether the walker, whom a step in `dir` has brought from `cell` to `end`, can come back at once.
    fn judge_end(&self, view: &mut Survey, cell: u16, end: u16, dir: Dir) -> Walk {
        let nexts = self.terrain.next[usize::from(end)];
        let towed = self.tables.has_tow
            && (self.tables.has_warps && self.tables.pushes_to_tow
                || nexts
                    .iter()
                    .any(|&near| view.notes[usize::from(near)] & note::TOW != 0));
        if towed || view.notes[usize::from(end)] & note::GOAL != 0 {
            return Walk::Try;
        }
        let ways = if self.tables.has_warps {
            &Dir::ALL[..]
        } else {
            &[dir.opposite()][..]
        };
        let mut unsure = false;
        for &way in ways {
            match self.stroll(view, end, way) {
                Stroll::To(back) if back == cell => return Walk::Link(end),
                Stroll::Unsure => unsure = true,
                _ => {}
            }
        }
        if unsure { Walk::Try } else { Walk::Leave }
    }

    /// Follows the walker over the notes. Cargo in the way of the first step counts as parting.
    fn stroll(&self, view: &mut Survey, from: u16, dir: Dir) -> Stroll {
        let Survey {
            notes,
            stood,
            passed,
            ..
        } = view;
        stood.clear();
        passed.clear();
        let on_plate = notes[usize::from(from)] & note::PLATE != 0;
        let mut cell = from;
        loop {
            let next = self.terrain.next[usize::from(cell)][dir.index()];
            let there = notes[usize::from(next)];
            if on_plate && there & note::GATE != 0 {
                return Stroll::Unsure;
            }
            if there & (1 << dir.index()) == 0 {
                break;
            }
            if there & note::TAKEN != 0 {
                if passed.is_empty() {
                    return Stroll::Parts;
                }
                break;
            }
            cell = next;
            passed.push(cell);
            let mut under = there;
            if there & note::WARP != 0 {
                let twin = self.tables.twin[usize::from(cell)];
                if notes[usize::from(twin)] & note::TAKEN == 0 {
                    under = notes[usize::from(twin)] | there & note::PARTING;
                    cell = twin;
                    passed.push(cell);
                }
            }
            if under & note::PARTING != 0 {
                return Stroll::Parts;
            }
            if self.tables.has_warps {
                if stood.contains(&cell) {
                    break;
                }
                stood.push(cell);
            }
            if under & note::SLICK == 0 {
                break;
            }
        }
        if cell == from {
            Stroll::Stays
        } else {
            Stroll::To(cell)
        }
    }

    /// Makes the real step from a member, forth and back.
    fn try_walk(&self, s: &mut Scratch, spread: &Spread<'_>, cell: u16, dir: Dir) -> Walk {
        let [mut here, mut there, mut back] = std::mem::take(&mut s.words);
        let field = spread.field;
        self.member_position(spread.from, &Member { cell, distance: 0 }, &mut here);
        let walk = match self.step_into(s, &here, Step { slot: 0, dir }, &mut there) {
            None => Walk::Stay,
            Some(info)
                if !info.finished
                    && same_but(field, &here, &there)
                    && self.leads_back(s, &there, &here, &mut back) =>
            {
                Walk::Link(self.cell_in(field, &there))
            }
            Some(_) => Walk::Leave,
        };
        s.words = [here, there, back];
        walk
    }

    /// Whether one step leads from `there` to `here`.
    fn leads_back(&self, s: &mut Scratch, there: &[u64], here: &[u64], back: &mut [u64]) -> bool {
        Dir::ALL.into_iter().any(|dir| {
            self.step_into(s, there, Step { slot: 0, dir }, back)
                .is_some()
                && *back == *here
        })
    }

    /// Spreads over open ground, and to where links lead. Returns the first and last row reached, if any.
    fn next_layer(
        &self,
        view: &mut Survey,
        out: &mut Roam,
        rows: (usize, usize),
    ) -> Option<(usize, usize)> {
        let mut reached: Option<(usize, usize)> = None;
        let last = view.open.len() - 2;
        let (first, last) = ((rows.0 - 1).max(1), (rows.1 + 1).min(last));
        let (mut above, mut here) = (
            view.front[first - 1] & view.open[first - 1],
            view.front[first] & view.open[first],
        );
        for row in first..=last {
            let below = view.front[row + 1] & view.open[row + 1];
            let spread = here << 1 | here >> 1 | above | below;
            let found = spread & view.open[row] & !view.seen[row];
            (above, here) = (here, below);
            view.next[row] = found;
            view.seen[row] |= found;
            if found != 0 {
                reached = Some((reached.map_or(row, |rows| rows.0), row));
            }
        }
        view.front[rows.0..=rows.1].fill(0);
        std::mem::swap(&mut view.front, &mut view.next);
        for arrival in view.arrivals.drain(..) {
            let (row, x) = self.terrain.spot[usize::from(arrival.cell)];
            let (row, bit) = (usize::from(row), 1u64 << x);
            if view.seen[row] & bit == 0 {
                view.seen[row] |= bit;
                view.front[row] |= bit;
                out.arrivals.push(arrival);
                let known = reached.unwrap_or((row, row));
                reached = Some((known.0.min(row), known.1.max(row)));
            }
        }
        reached
    }

    fn add_layer(&self, view: &mut Survey, out: &mut Roam, rows: (usize, usize), distance: u16) {
        let width = self.tables.size.width();
        for row in rows.0..=rows.1 {
            let mut bits = view.front[row];
            while bits != 0 {
                let cell = ((row - 1) * width + bits.trailing_zeros() as usize) as u16;
                bits &= bits - 1;
                view.member_of[usize::from(cell)] = out.members.len() as u16;
                out.members.push(Member { cell, distance });
            }
        }
    }
}

/// Whether two positions agree in all but one field.
fn same_but(field: Field, one: &[u64], other: &[u64]) -> bool {
    one.iter().zip(other).enumerate().all(|(word, (a, b))| {
        let ignored = if word == field.word as usize {
            field.mask << field.shift
        } else {
            0
        };
        (a ^ b) & !ignored == 0
    })
}
