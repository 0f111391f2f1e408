//! Folding a walk: the positions that differ only in where the walker stands, found at once.

use super::packing::Field;
use super::{Rules, Scratch, Step};
use crate::level::{Cell, Control, Dir, Size};

/// One position of a roam.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Member {
    /// Where the walker stands, as an index of the row-by-row order; [`Roam::NOWHERE`] if the roam isn't told by a walker's
    /// cell.
    pub cell: u16,
    /// Fewest steps of the roam from the entry.
    pub distance: u16,
}

/// A cell reached by a step of the roam that is no plain walk over open ground.
#[derive(Clone, Copy, Debug)]
pub(super) struct Arrival {
    pub cell: u16,
    pub from: u16,
    pub dir: Dir,
}

/// A step from a member that isn't one of the roam's own. It may change nothing; it may also lead, one way, to another member,
/// or to a finished position, which is never undone.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Departure {
    /// Index of the member.
    pub member: u16,
    /// The step to try there.
    pub step: Step,
}

/// The roam of a position (rules.md, Folds), as [`Rules::roam`] fills it; reusable room.
///
/// Members and departures together tell all edges of the step graph that touch the roam: each step between members that is
/// undone at once costs what the distances say, and any other step that changes something is among the departures. A
/// one-way step that is a short cut to another member is a departure too, so a search by steps that follows members by
/// distance and departures by one step misses no cheaper route.
///
/// Members come by distance; the first is the entry. The roam is the same from each of its members but for order,
/// distances and parents, so the least cell ([`Rules::representative`]) names it.
#[derive(Clone, Debug, Default)]
pub struct Roam {
    /// The positions, by distance from the entry, the entry first.
    pub members: Vec<Member>,
    /// The steps that may lead out.
    pub departures: Vec<Departure>,
    /// How members were reached that a plain walk did not reach first.
    pub(super) arrivals: Vec<Arrival>,
    /// Open ground, by row.
    open: Vec<u64>,
    size: Option<Size>,
}

impl Roam {
    /// The cell of a member that isn't told by where a walker stands.
    pub const NOWHERE: u16 = u16::MAX;

    /// The directions of a shortest walk from the entry to a member. Takes time in the order of the members.
    pub fn walk_to(&self, member: usize) -> Vec<Dir> {
        let mut dirs = Vec::new();
        let Some(size) = self.size.filter(|_| self.members[member].distance > 0) else {
            return dirs;
        };
        let mut distance = vec![u16::MAX; size.area()];
        for member in &self.members {
            distance[usize::from(member.cell)] = member.distance;
        }
        let mut at = self.members[member].cell;
        while let Some((from, dir)) = self.step_before(size, &distance, at) {
            dirs.push(dir);
            at = from;
        }
        dirs.reverse();
        dirs
    }

    /// The member that stands on a cell, if any. Takes time in the order of the members.
    pub fn member_at(&self, cell: u16) -> Option<usize> {
        let mut members = self.members.iter();
        members.position(|member| member.cell == cell && cell != Roam::NOWHERE)
    }

    /// The last step of a shortest walk to a cell, and where it comes from.
    fn step_before(&self, size: Size, distance: &[u16], at: u16) -> Option<(u16, Dir)> {
        let before = distance[usize::from(at)].checked_sub(1)?;
        if let Some(arrival) = self.arrivals.iter().find(|arrival| arrival.cell == at) {
            return Some((arrival.from, arrival.dir));
        }
        let here = size.cell(usize::from(at));
        Dir::ALL.into_iter().find_map(|dir| {
            let from = size.neighbour(here, dir.opposite())?;
            let open = self.open[usize::from(from.y) + 1] >> from.x & 1 != 0;
            let index = size.index(from);
            (open && distance[index] == before).then_some((index as u16, dir))
        })
    }

    pub(super) fn keep_open(&mut self, open: &[u64], size: Size) {
        self.open.clear();
        self.open.extend_from_slice(open);
        self.size = Some(size);
    }

    fn begin(&mut self) {
        self.members.clear();
        self.departures.clear();
        self.arrivals.clear();
        self.size = None;
    }
}

const ENTRY: Member = Member {
    cell: Roam::NOWHERE,
    distance: 0,
};

impl Rules {
    /// Fills `out` with the roam of a position. For several walkers, and under Drag, the position itself is its roam.
    /// So is a finished position, and no step departs from it; the roams of others hold no finished position.
    pub fn roam(&self, s: &mut Scratch, from: &[u64], out: &mut Roam) {
        self.find_roam(s, from, out, true);
    }

    /// The roam without its departures: the members alone, at less cost.
    pub fn roam_members(&self, s: &mut Scratch, from: &[u64], out: &mut Roam) {
        self.find_roam(s, from, out, false);
    }

    fn find_roam(&self, s: &mut Scratch, from: &[u64], out: &mut Roam, departures: bool) {
        out.begin();
        self.load(s, from);
        let finished = self.goal_holds(s);
        let walker = match self.tables.walkers[..] {
            [walker] if self.tables.control == Control::Steer => walker,
            _ => {
                out.members.push(ENTRY);
                if departures && !finished {
                    self.each_candidate(s, |step| {
                        out.departures.push(Departure { member: 0, step });
                    });
                }
                return;
            }
        };
        let cell = s.at[usize::from(walker)];
        out.members.push(Member { cell, ..ENTRY });
        if !finished {
            self.spread(s, from, walker, out, departures);
        }
        if out.members.len() > 1 {
            for member in &out.members {
                s.touched[usize::from(member.cell)] = true;
            }
        }
    }

    pub(super) fn cell_in(&self, field: Field, words: &[u64]) -> u16 {
        let places = &self.tables.places;
        places[field.read(words).min(places.len() - 1)]
    }

    /// The position of a member: `from` is any position of the same roam.
    pub fn member_position(&self, from: &[u64], member: &Member, out: &mut [u64]) {
        out.copy_from_slice(from);
        if member.cell == Roam::NOWHERE {
            return;
        }
        if let [walker] = self.tables.walkers[..] {
            let place = self.tables.place_of[usize::from(member.cell)];
            self.layout.bodies[usize::from(walker)].write(out, usize::from(place));
        }
    }

    /// The position that names a roam: the one with the least walker cell. `from` is any position of the roam.
    pub fn representative(&self, from: &[u64], roam: &Roam, out: &mut [u64]) {
        match roam.members.iter().min_by_key(|member| member.cell) {
            Some(member) => self.member_position(from, member, out),
            None => out.copy_from_slice(from),
        }
    }

    /// The cells that the walker of a position can reach by steps that are undone at once and change nothing but where it
    /// stands (its roam), in reading order. Only its own cells with several walkers; empty under Drag.
    pub fn reach(&self, position: &super::Position) -> Vec<Cell> {
        let mut scratch = self.scratch();
        let mut roam = Roam::default();
        self.roam(&mut scratch, &position.0, &mut roam);
        let mut cells: Vec<u16> = match self.tables.walkers.len() {
            1 => roam.members.iter().map(|member| member.cell).collect(),
            _ => {
                self.load(&mut scratch, &position.0);
                let walkers = self.tables.walkers.iter();
                walkers.map(|&slot| scratch.at[usize::from(slot)]).collect()
            }
        };
        cells.sort_unstable();
        cells
            .iter()
            .filter(|&&cell| usize::from(cell) < self.tables.size.area())
            .map(|&cell| self.tables.size.cell(usize::from(cell)))
            .collect()
    }
}
