//! What a walk needs to know of the board, noted once a roam.

use super::tables::{NONE, Tables, flag};
use super::{Condition, Rules, Scratch};

/// What is noted of a cell.
pub(super) mod note {
    /// One bit a direction: the walker may enter in it, if nobody stands there.
    pub const ENTER: u16 = 0b1111;
    /// Coming here or leaving is never undone at once, or not without a trace: frail ground, a lock, an item.
    pub const PARTING: u16 = 1 << 4;
    pub const SLICK: u16 = 1 << 5;
    /// A warp whose twin is there.
    pub const WARP: u16 = 1 << 6;
    /// A plate that the walker holds while it stands here, so that gates have to be judged anew.
    pub const PLATE: u16 = 1 << 7;
    /// A gate that may hang on where the walker stands.
    pub const GATE: u16 = 1 << 8;
    /// Standing here may finish the level.
    pub const GOAL: u16 = 1 << 9;
    /// Cargo stands here.
    pub const TAKEN: u16 = 1 << 10;
    /// It can be pushed.
    pub const PUSH: u16 = 1 << 11;
    /// It may follow.
    pub const TOW: u16 = 1 << 12;
    /// Open ground: the walker may enter however it comes, and nothing else happens.
    pub const OPEN: u16 = ENTER;
}

/// What surveys of one level have in common.
#[derive(Clone, Debug)]
pub(super) struct Terrain {
    /// Notes by kind of ground.
    of_ground: Vec<u16>,
    /// Notes by cell at the start, and one more for all that is off the board.
    notes: Vec<u16>,
    open: Vec<u64>,
    special: Vec<u64>,
    /// Row, counted from 1, and column of each cell.
    pub spot: Vec<(u8, u8)>,
    /// Neighbours, with one index past the last cell for all that is off the board.
    pub next: Vec<[u16; 4]>,
    /// Cells where standing may decide whether the level is finished.
    goal_cells: Vec<u16>,
    warps: Vec<u16>,
    locks: Vec<u16>,
    /// Cells closed by [`Rules::closing`].
    closed: Vec<u16>,
}

/// The board as a walker finds it, by cell and by row; rows are counted from 1, with an empty one at each end. Also the
/// room that spreading over it takes.
#[derive(Clone, Debug, Default)]
pub(super) struct Survey {
    pub notes: Vec<u16>,
    /// Open ground away from cargo that may follow.
    pub open: Vec<u64>,
    /// Ground that may be entered and isn't open, nobody standing there.
    pub special: Vec<u64>,
    pub taken: Vec<u64>,
    /// Cells whose steps have to be judged one by one.
    pub judged: Vec<u64>,
    pub seen: Vec<u64>,
    pub front: Vec<u64>,
    pub next: Vec<u64>,
    /// Number of the member on each cell; of meaning for members alone.
    pub member_of: Vec<u16>,
    /// Cells reached by links that are no plain walk: cell, where from, by which step.
    pub arrivals: Vec<super::roam::Arrival>,
    /// Cells where the walker has stood in a slide, and all that it came onto.
    pub stood: Vec<u16>,
    pub passed: Vec<u16>,
}

fn walks(tables: &Tables, slot: u16) -> bool {
    tables.bodies[usize::from(slot)].walker
}

/// Whether a condition can hang on where a walker stands.
fn minds_walker(tables: &Tables, wanted: &Condition) -> bool {
    match wanted {
        Condition::WalkersOut => true,
        Condition::CargoHome(slots) => slots.iter().any(|&slot| walks(tables, slot)),
        Condition::HomesFilled => tables.walkers.iter().any(|&slot| {
            let kind = tables.bodies[usize::from(slot)].kind;
            (0..tables.grounds.len()).any(|ground| tables.is_home_for(ground as u16, kind))
        }),
        Condition::GemsTaken(_) => false,
    }
}

impl Terrain {
    pub fn new(tables: &Tables, goal: Option<&[Condition]>) -> Terrain {
        let minds = goal.is_some_and(|all| all.iter().any(|wanted| minds_walker(tables, wanted)));
        let presses = |&slot: &u16| tables.bodies[usize::from(slot)].presses;
        let plates = !tables.plates.is_empty() && tables.walkers.iter().any(presses);
        let of_ground: Vec<u16> = tables
            .grounds
            .iter()
            .map(|ground| ground_notes(ground.flags, ground.enter, minds, plates))
            .collect();
        let ground = tables.start_ground.iter();
        let mut notes: Vec<u16> = ground.map(|&at| of_ground[usize::from(at)]).collect();
        notes.push(0);
        let rows = tables.size.height() + 2;
        let cells = tables.size.cells();
        let mut terrain = Terrain {
            of_ground,
            notes: Vec::new(),
            open: vec![0; rows],
            special: vec![0; rows],
            spot: cells.map(|cell| (cell.y + 1, cell.x)).collect(),
            next: walk_next(&tables.next),
            goal_cells: match minds {
                true => tables.cells_with(flag::EXIT | flag::HOME),
                false => Vec::new(),
            },
            warps: tables.cells_with(flag::WARP),
            locks: tables.cells_with(flag::LOCK),
            closed: Vec::new(),
        };
        for (cell, &(row, x)) in terrain.spot.iter().enumerate() {
            let (row, bit) = (usize::from(row), 1 << x);
            match notes[cell] {
                note::OPEN => terrain.open[row] |= bit,
                other if other & note::ENTER != 0 => terrain.special[row] |= bit,
                _ => {}
            }
        }
        terrain.notes = notes;
        terrain
    }

    /// Closes one more cell; `next` is what neighbours are now.
    pub fn close(&mut self, cell: u16, next: &[[u16; 4]]) {
        self.closed.push(cell);
        self.next = walk_next(next);
    }
}

fn ground_notes(flags: u16, enter: u8, minds_walker: bool, plates: bool) -> u16 {
    let closed = flags & (flag::CLOSED_TO_WALKER | flag::SINK) != 0;
    let has = |bits: u16, wanted: bool| wanted && flags & bits != 0;
    let mut notes = if closed { 0 } else { u16::from(enter) };
    for (set, bit) in [
        (has(flag::FRAIL | flag::LOCK, true), note::PARTING),
        (has(flag::SLICK, true), note::SLICK),
        (has(flag::WARP, true), note::WARP),
        (has(flag::PLATE, plates), note::PLATE),
        (has(flag::GATE, plates), note::GATE),
        (has(flag::EXIT | flag::HOME, minds_walker), note::GOAL),
    ] {
        notes |= if set { bit } else { 0 };
    }
    notes
}

fn walk_next(next: &[[u16; 4]]) -> Vec<[u16; 4]> {
    let off_board = next.len() as u16;
    let on_board = |cell: u16| if cell == NONE { off_board } else { cell };
    let mut nexts: Vec<[u16; 4]> = next.iter().map(|dirs| dirs.map(on_board)).collect();
    nexts.push([off_board; 4]);
    nexts
}

impl Survey {
    fn begin(&mut self, terrain: &Terrain) {
        self.notes.clear();
        self.notes.extend_from_slice(&terrain.notes);
        self.open.clear();
        self.open.extend_from_slice(&terrain.open);
        self.special.clear();
        self.special.extend_from_slice(&terrain.special);
        let rows = terrain.open.len();
        for room in [
            &mut self.taken,
            &mut self.judged,
            &mut self.seen,
            &mut self.front,
            &mut self.next,
        ] {
            room.clear();
            room.resize(rows, 0);
        }
    }

    /// Notes something else of a cell.
    fn set(&mut self, terrain: &Terrain, cell: u16, notes: u16) {
        let (row, x) = terrain.spot[usize::from(cell)];
        let (row, bit) = (usize::from(row), 1u64 << x);
        self.notes[usize::from(cell)] = notes;
        self.open[row] &= !bit;
        self.special[row] &= !bit;
        self.taken[row] &= !bit;
        if notes == note::OPEN {
            self.open[row] |= bit;
        } else if notes & note::TAKEN != 0 {
            self.taken[row] |= bit;
        } else if notes & note::ENTER != 0 {
            self.special[row] |= bit;
        }
    }

    fn add(&mut self, terrain: &Terrain, cell: u16, notes: u16) {
        self.set(terrain, cell, self.notes[usize::from(cell)] | notes);
    }

    fn drop(&mut self, terrain: &Terrain, cell: u16, notes: u16) {
        if self.notes[usize::from(cell)] & notes != 0 {
            self.set(terrain, cell, self.notes[usize::from(cell)] & !notes);
        }
    }
}

impl Rules {
    /// Surveys the board for the position in the scratch. `pushes`: whether steps onto cargo have to be judged.
    pub(super) fn survey(&self, s: &mut Scratch, view: &mut Survey, walker: u16, pushes: bool) {
        let (tables, terrain) = (&self.tables, &self.terrain);
        view.begin(terrain);
        for spot in &tables.mutable {
            let ground = s.ground[usize::from(spot.cell)];
            view.set(terrain, spot.cell, terrain.of_ground[usize::from(ground)]);
        }
        self.survey_gates(s, view, walker);
        for (item, &left) in tables.items.iter().zip(&s.item_left) {
            if left {
                view.add(terrain, item.cell, note::PARTING);
            }
        }
        if !terrain.goal_cells.is_empty() && !self.may_finish_by_walking(s) {
            for &cell in &terrain.goal_cells {
                view.drop(terrain, cell, note::GOAL);
            }
        }
        for &cell in &terrain.locks {
            let ground = &tables.grounds[usize::from(s.ground[usize::from(cell)])];
            if ground.lock != NONE && s.keys[usize::from(ground.lock)] == 0 {
                view.drop(terrain, cell, note::ENTER);
            }
        }
        for &cell in &terrain.warps {
            let twin = tables.twin[usize::from(cell)];
            if twin == NONE || view.notes[usize::from(twin)] & note::WARP == 0 {
                view.drop(terrain, cell, note::WARP);
            }
        }
        self.survey_bodies(s, view);
        for &cell in &terrain.closed {
            view.set(terrain, cell, 0);
        }
        for row in 1..view.open.len() - 1 {
            let taken = |at: usize| if pushes { view.taken[at] } else { 0 };
            let near = |at: usize| view.special[at] | taken(at);
            let beside = near(row) << 1 | near(row) >> 1 | near(row - 1) | near(row + 1);
            view.judged[row] = !view.open[row] | beside;
        }
    }

    /// Judges the gates with the walker off the board: where it holds a plate, that is noted.
    fn survey_gates(&self, s: &mut Scratch, view: &mut Survey, walker: u16) {
        if self.tables.gates.is_empty() {
            return;
        }
        let home = usize::from(s.at[usize::from(walker)]);
        s.occupant[home] = NONE;
        self.judge_gates(s);
        s.occupant[home] = walker;
        for &cell in &self.tables.gates {
            if !self.gate_is_open(s, cell) {
                view.drop(&self.terrain, cell, note::ENTER);
            }
        }
    }

    fn survey_bodies(&self, s: &Scratch, view: &mut Survey) {
        let (tables, terrain) = (&self.tables, &self.terrain);
        for (body, &cell) in tables.bodies.iter().zip(&s.at) {
            if cell == NONE || body.walker {
                continue;
            }
            let push = if body.push { note::PUSH } else { 0 };
            let tow = if body.tow { note::TOW } else { 0 };
            view.add(terrain, cell, note::TAKEN | push | tow);
        }
        if !tables.has_tow {
            return;
        }
        for (body, &cell) in tables.bodies.iter().zip(&s.at) {
            if cell == NONE || !body.tow {
                continue;
            }
            for &near in &tables.next[usize::from(cell)] {
                if near != NONE {
                    let (row, x) = terrain.spot[usize::from(near)];
                    let (row, bit) = (usize::from(row), 1u64 << x);
                    view.special[row] |= view.open[row] & bit;
                    view.open[row] &= !bit;
                }
            }
        }
    }

    /// Whether all holds that does not hang on where the walker stands.
    fn may_finish_by_walking(&self, s: &Scratch) -> bool {
        let conditions = self.goal.iter().flatten();
        conditions
            .filter(|wanted| !minds_walker(&self.tables, wanted))
            .all(|wanted| self.holds(s, wanted))
    }
}
