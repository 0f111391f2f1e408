//! Changing a board as a whole: its size, its place in the frame, turning and mirroring.

use super::grid::{Cell, Dir, Size};
use super::kinds::{GroundIx, GroundKind, Mechanics};
use super::pack::{Block, Level};
use super::route::{DragStep, Route};

/// A turn or mirroring of the board.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Turn {
    /// A quarter turn clockwise.
    Right,
    /// A quarter turn anticlockwise.
    Left,
    /// Half a turn.
    Half,
    /// East and west change places.
    MirrorRow,
    /// North and south change places.
    MirrorColumn,
}

impl Turn {
    /// The size of the board afterwards.
    pub fn size(self, size: Size) -> Size {
        match self {
            Turn::Right | Turn::Left => Size::new(size.height(), size.width()).unwrap_or(size),
            Turn::Half | Turn::MirrorRow | Turn::MirrorColumn => size,
        }
    }

    /// Where a cell of a board of `size` comes to lie.
    pub fn cell(self, size: Size, cell: Cell) -> Cell {
        let (right, bottom) = (size.width() as u8 - 1, size.height() as u8 - 1);
        match self {
            Turn::Right => Cell::new(bottom - cell.y, cell.x),
            Turn::Left => Cell::new(cell.y, right - cell.x),
            Turn::Half => Cell::new(right - cell.x, bottom - cell.y),
            Turn::MirrorRow => Cell::new(right - cell.x, cell.y),
            Turn::MirrorColumn => Cell::new(cell.x, bottom - cell.y),
        }
    }

    /// Where a direction points afterwards.
    pub fn dir(self, dir: Dir) -> Dir {
        let by = |turns: usize| Dir::ALL[(dir.index() + turns) % 4];
        match self {
            Turn::Right => by(1),
            Turn::Left => by(3),
            Turn::Half => by(2),
            Turn::MirrorRow if matches!(dir, Dir::E | Dir::W) => dir.opposite(),
            Turn::MirrorColumn if matches!(dir, Dir::N | Dir::S) => dir.opposite(),
            Turn::MirrorRow | Turn::MirrorColumn => dir,
        }
    }

    /// The ground that lets enter in the turned directions and is alike otherwise; the ground itself if it minds no
    /// direction; none if the pack has no such twin.
    pub fn ground(self, mechanics: &Mechanics, ground: GroundIx) -> Option<GroundIx> {
        let kind = mechanics.ground(ground);
        let turned = sorted(kind.enter_only.iter().map(|&dir| self.dir(dir)).collect());
        if turned == sorted(kind.enter_only.clone()) {
            return Some(ground);
        }
        let traits_of = |other: &GroundKind| GroundKind {
            enter_only: turned.clone(),
            look: None,
            ..GroundKind {
                id: kind.id.clone(),
                label: String::new(),
                ..other.clone()
            }
        };
        let wanted = traits_of(kind);
        let twin = |other: &GroundKind| {
            sorted(other.enter_only.clone()) == turned && traits_of(other) == wanted
        };
        mechanics
            .grounds
            .iter()
            .position(twin)
            .map(|at| GroundIx(at as u16))
    }
}

fn sorted(mut dirs: Vec<Dir>) -> Vec<Dir> {
    dirs.sort();
    dirs.dedup();
    dirs
}

impl Level {
    /// The same content on a board of another size, moved by (`dx`, `dy`) cells; new cells get `fill`. What falls off the
    /// board is gone; a block that falls off in part is gone altogether.
    pub fn resized(&self, size: Size, dx: i32, dy: i32, fill: GroundIx) -> Level {
        let moved = |cell: Cell| {
            let (x, y) = (i32::from(cell.x) + dx, i32::from(cell.y) + dy);
            let fits =
                (0..size.width() as i32).contains(&x) && (0..size.height() as i32).contains(&y);
            fits.then(|| Cell::new(x as u8, y as u8))
        };
        self.laid_out(size, fill, moved)
    }

    /// The level turned, and the cells whose ground has no turned twin in the pack and stayed as it was.
    pub fn turned(&self, mechanics: &Mechanics, turn: Turn) -> (Level, Vec<Cell>) {
        let size = turn.size(self.size);
        let mut level = self.laid_out(size, GroundIx(0), |cell| Some(turn.cell(self.size, cell)));
        let mut untwinned = Vec::new();
        for cell in size.cells() {
            let at = size.index(cell);
            match turn.ground(mechanics, level.ground[at]) {
                Some(ground) => level.ground[at] = ground,
                None => untwinned.push(cell),
            }
        }
        level.intended = self
            .intended
            .as_ref()
            .map(|route| turned_route(route, turn, self, &level));
        (level, untwinned)
    }

    /// The level cut down to the smallest rectangle that holds everything but closed ground, with one cell around it.
    /// The level itself if nothing is open.
    pub fn cropped(&self, mechanics: &Mechanics) -> Level {
        let open: Vec<Cell> = self
            .size
            .cells()
            .filter(|&cell| {
                !mechanics.ground(self.ground_at(cell)).closed_to_all()
                    || self.body_at(cell).is_some()
            })
            .collect();
        let range = |values: Vec<u8>, side: usize| {
            let (least, most) = (values.iter().min().copied()?, values.iter().max().copied()?);
            let first = usize::from(least).saturating_sub(1);
            Some((first, (usize::from(most) + 1).min(side - 1)))
        };
        let columns = range(open.iter().map(|cell| cell.x).collect(), self.size.width());
        let rows = range(open.iter().map(|cell| cell.y).collect(), self.size.height());
        let (Some((left, right)), Some((top, bottom))) = (columns, rows) else {
            return self.clone();
        };
        match Size::new(right - left + 1, bottom - top + 1) {
            Some(size) => self.resized(size, -(left as i32), -(top as i32), GroundIx(0)),
            None => self.clone(),
        }
    }

    /// Closes every open cell of the board's edge with `closed`, and takes away what stood there.
    pub fn surrounded(&self, mechanics: &Mechanics, closed: GroundIx) -> Level {
        let mut level = self.clone();
        let (right, bottom) = (self.size.width() as u8 - 1, self.size.height() as u8 - 1);
        let edge = |cell: &Cell| cell.x == 0 || cell.y == 0 || cell.x == right || cell.y == bottom;
        let cells: Vec<Cell> = self.size.cells().filter(edge).collect();
        level.paint(mechanics, super::edit::Brush::Ground(closed), cells);
        level
    }

    fn laid_out(&self, size: Size, fill: GroundIx, place: impl Fn(Cell) -> Option<Cell>) -> Level {
        let mut level = Level {
            size,
            ground: vec![fill; size.area()],
            bodies: vec![None; size.area()],
            items: vec![None; size.area()],
            blocks: Vec::new(),
            ..self.clone()
        };
        for cell in self.size.cells() {
            if let Some(to) = place(cell) {
                let (from, to) = (self.size.index(cell), size.index(to));
                level.ground[to] = self.ground[from];
                level.bodies[to] = self.bodies[from];
                level.items[to] = self.items[from];
            }
        }
        for block in &self.blocks {
            let cells: Option<Vec<Cell>> = block.cells.iter().map(|&cell| place(cell)).collect();
            if let Some(cells) = cells {
                level.blocks.push(Block {
                    kind: block.kind,
                    cells,
                });
            }
        }
        level
    }
}

/// The route of the turned level. Single-cell bodies are numbered row by row, so that their numbers change with a turn.
fn turned_route(route: &Route, turn: Turn, before: &Level, after: &Level) -> Route {
    match route {
        Route::Steer(steps) => Route::Steer(steps.iter().map(|&dir| turn.dir(dir)).collect()),
        Route::Drag(steps) => {
            let (old, new) = (before.bodies_in_order(), after.bodies_in_order());
            let number = |block: u16| {
                let place = old
                    .get(usize::from(block))
                    .map(|body| turn.cell(before.size, body.cells[0]));
                new.iter()
                    .position(|body| place.is_some_and(|place| body.cells[0] == place))
            };
            let step = |step: &DragStep| DragStep {
                block: number(step.block).map_or(step.block, |at| at as u16),
                dir: turn.dir(step.dir),
            };
            Route::Drag(steps.iter().map(step).collect())
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::kinds::{BodyIx, BodyKind, Control, KindId, Legend, Role};
    use super::*;

    fn mechanics() -> Mechanics {
        let id = |text: &str| KindId::new(text).expect("a good id");
        let mut grounds = vec![
            GroundKind::plain(id("gravel"), "gravel"),
            GroundKind::plain(id("hedge"), "hedge"),
        ];
        grounds[1].closed_to = vec![Role::Walker, Role::Cargo];
        for (name, dir) in [("to-n", Dir::N), ("to-e", Dir::E)] {
            let mut kind = GroundKind::plain(id(name), name);
            kind.enter_only = vec![dir];
            grounds.push(kind);
        }
        Mechanics {
            control: Control::Steer,
            strength: 1,
            objective: Vec::new(),
            grounds,
            bodies: vec![BodyKind::plain(id("gardener"), "gardener", Role::Walker)],
            items: Vec::new(),
            legend: Legend::default(),
        }
    }

    fn level() -> Level {
        let size = Size::new(4, 3).expect("a good size");
        let mut level = Level::filled("a level", size, GroundIx(1));
        level.ground[size.index(Cell::new(1, 1))] = GroundIx(0);
        level.ground[size.index(Cell::new(2, 1))] = GroundIx(2);
        level.bodies[size.index(Cell::new(1, 1))] = Some(BodyIx(0));
        level.intended = Some(Route::Steer(vec![Dir::N, Dir::E]));
        level
    }

    #[test]
    fn four_quarter_turns_and_two_mirrorings_change_nothing() {
        let mut mechanics = mechanics();
        for (name, dir) in [("to-s", Dir::S), ("to-w", Dir::W)] {
            let mut kind = mechanics.grounds[2].clone();
            kind.id = KindId::new(name).expect("a good id");
            kind.enter_only = vec![dir];
            mechanics.grounds.push(kind);
        }
        for turns in [
            vec![Turn::Right; 4],
            vec![Turn::Left; 4],
            vec![Turn::Half; 2],
            vec![Turn::MirrorRow; 2],
            vec![Turn::MirrorColumn; 2],
            vec![Turn::Right, Turn::Left],
        ] {
            let mut turned = level();
            for &turn in &turns {
                let (next, untwinned) = turned.turned(&mechanics, turn);
                assert_eq!(untwinned, Vec::new(), "{turns:?}");
                turned = next;
            }
            assert_eq!(turned, level(), "{turns:?}");
        }
    }

    #[test]
    fn a_turn_moves_bodies_and_route_and_names_ground_without_a_twin() {
        let (right, untwinned) = level().turned(&mechanics(), Turn::Right);
        assert_eq!((right.size.width(), right.size.height()), (3, 4));
        assert_eq!(right.body_at(Cell::new(1, 1)), Some(BodyIx(0)));
        assert_eq!(
            right.ground_at(Cell::new(1, 2)),
            GroundIx(3),
            "north became east"
        );
        assert_eq!(right.intended, Some(Route::Steer(vec![Dir::E, Dir::S])));
        assert_eq!(untwinned, Vec::new());
        let (half, untwinned) = level().turned(&mechanics(), Turn::Half);
        assert_eq!(untwinned, vec![Cell::new(1, 1)]);
        assert_eq!(
            half.ground_at(Cell::new(1, 1)),
            GroundIx(2),
            "no ground that is entered to the south"
        );
    }

    #[test]
    fn resizing_there_and_back_keeps_what_fits() {
        let bigger = Size::new(9, 9).expect("a good size");
        let there = level().resized(bigger, 3, 2, GroundIx(0));
        assert_eq!(there.body_at(Cell::new(4, 3)), Some(BodyIx(0)));
        assert_eq!(there.resized(level().size, -3, -2, GroundIx(0)), level());
    }

    #[test]
    fn a_block_that_falls_off_in_part_is_gone() {
        let mut level = level();
        level.blocks.push(Block {
            kind: BodyIx(0),
            cells: vec![Cell::new(2, 2), Cell::new(3, 2)],
        });
        let narrow = Size::new(3, 3).expect("a good size");
        assert!(level.resized(narrow, 0, 0, GroundIx(0)).blocks.is_empty());
        assert_eq!(level.resized(narrow, -1, 0, GroundIx(0)).blocks.len(), 1);
    }

    #[test]
    fn cropping_leaves_one_cell_around_what_is_open() {
        let wide = level().resized(Size::new(20, 20).expect("a good size"), 7, 8, GroundIx(1));
        let cropped = wide.cropped(&mechanics());
        assert_eq!((cropped.size.width(), cropped.size.height()), (4, 3));
        assert_eq!(cropped, level());
    }
}
