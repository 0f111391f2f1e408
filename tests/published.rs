//! Counts that no one here invented, each with its source. They need nothing but steps and a breadth-first search, and
//! are counted with the objective off: finished positions are expanded.

#![allow(clippy::unwrap_used)]

use foldwright::level::{
    Axis, Block, BodyIx, BodyKind, Cell, Control, GroundIx, GroundKind, KindId, Legend, Level,
    Mechanics, Role, Size,
};
use foldwright::rules::{Rules, Step};
use std::collections::HashSet;

fn id(text: &str) -> KindId {
    KindId::new(text).unwrap()
}

fn mechanics(control: Control) -> Mechanics {
    let mut wall = GroundKind::plain(id("wall"), "wall");
    wall.closed_to = vec![Role::Walker, Role::Cargo];
    Mechanics {
        control,
        strength: 1,
        objective: Vec::new(),
        grounds: vec![GroundKind::plain(id("floor"), "floor"), wall],
        bodies: Vec::new(),
        items: Vec::new(),
        legend: Legend::default(),
    }
}

const FLOOR: GroundIx = GroundIx(0);
const WALL: GroundIx = GroundIx(1);

/// Reachable positions by depth from the start.
fn by_depth(rules: &Rules) -> Vec<usize> {
    let mut scratch = rules.scratch();
    let start = rules.start().0;
    let mut known: HashSet<Box<[u64]>> = HashSet::from([start.clone()]);
    let mut layer = vec![start];
    let mut counts = Vec::new();
    let mut steps: Vec<Step> = Vec::new();
    let mut to = vec![0; rules.words()];
    while !layer.is_empty() {
        counts.push(layer.len());
        let mut next = Vec::new();
        for from in &layer {
            rules.candidate_steps_into(&mut scratch, from, &mut steps);
            for &step in &steps {
                if rules.step_into(&mut scratch, from, step, &mut to).is_some()
                    && known.insert(to.clone().into())
                {
                    next.push(to.clone().into());
                }
            }
        }
        layer = next;
    }
    counts
}

fn count(rules: &Rules) -> usize {
    by_depth(rules).iter().sum()
}

/// `W` closed, `g` the walker, `p` cargo; anything else is floor.
fn room(rows: &[&str]) -> Rules {
    let mut mechanics = mechanics(Control::Steer);
    mechanics.bodies = vec![
        BodyKind::plain(id("walker"), "walker", Role::Walker),
        BodyKind::plain(id("cargo"), "cargo", Role::Cargo),
    ];
    let size = Size::new(rows[0].len(), rows.len()).unwrap();
    let mut level = Level::filled("", size, FLOOR);
    for cell in size.cells() {
        let at = size.index(cell);
        match rows[usize::from(cell.y)].as_bytes()[usize::from(cell.x)] {
            b'W' => level.ground[at] = WALL,
            b'g' => level.bodies[at] = Some(BodyIx(0)),
            b'p' => level.bodies[at] = Some(BodyIx(1)),
            _ => {}
        }
    }
    Rules::compile_open(&mechanics, &level).unwrap()
}

// Recomputed independently by breadth-first search.
#[test]
fn the_tiny_rooms_have_72_and_1676_positions() {
    let a = room(&["WWWWW", "Wg..W", "W.p.W", "W..oW", "WWWWW"]);
    assert_eq!(count(&a), 72);
    let b = room(&["WWWWWW", "Wg...W", "W.p..W", "W..p.W", "W.oo.W", "WWWWWW"]);
    assert_eq!(count(&b), 1676);
}

/// A board of distinct single tiles with one free cell.
fn tiles(width: usize, height: usize, free: Cell) -> Rules {
    let mut mechanics = mechanics(Control::Drag);
    let size = Size::new(width, height).unwrap();
    let mut level = Level::filled("", size, FLOOR);
    for cell in size.cells().filter(|&cell| cell != free) {
        let ix = mechanics.bodies.len() as u16;
        let mut kind = BodyKind::plain(id(&format!("tile-{ix}")), "tile", Role::Cargo);
        kind.axis = Some(Axis::Any);
        mechanics.bodies.push(kind);
        level.bodies[size.index(cell)] = Some(BodyIx(ix));
    }
    Rules::compile_open(&mechanics, &level).unwrap()
}

// OEIS A089473: positions of the 3 x 3 sliding-tile puzzle by depth, free cell in a corner; their sum is 9!/2.
#[test]
fn three_by_three_tiles_have_the_published_positions_by_depth() {
    let depths = by_depth(&tiles(3, 3, Cell::new(0, 0)));
    let published = [
        1, 2, 4, 8, 16, 20, 39, 62, 116, 152, 286, 396, 748, 1024, 1893, 2512, 4485, 5638, 9529,
        10878, 16993, 17110, 23952, 20224, 24047, 15578, 14560, 6274, 3910, 760, 221, 2,
    ];
    assert_eq!(depths, published);
    assert_eq!(depths.iter().sum::<usize>(), 181_440);
}

// OEIS A151944: greatest depth by board, free cell in a corner. Positions recomputed: half of all arrangements.
#[test]
fn small_boards_of_tiles_are_as_deep_as_published() {
    for (width, height, deepest, positions) in [(2, 2, 6, 12), (3, 2, 21, 360), (4, 2, 36, 20_160)]
    {
        let depths = by_depth(&tiles(width, height, Cell::new(0, 0)));
        assert_eq!(depths.len() - 1, deepest, "{width} x {height}");
        assert_eq!(
            depths.iter().sum::<usize>(),
            positions,
            "{width} x {height}"
        );
    }
}

/// Letters are blocks, `.` and `o` free; blocks of one axis and shape are interchangeable.
fn blocks(rows: &[&str], axis: impl Fn(&[Cell]) -> Axis) -> Rules {
    let mut mechanics = mechanics(Control::Drag);
    let axes = [Axis::Any, Axis::Row, Axis::Column];
    for (name, axis) in ["any", "row", "column"].into_iter().zip(axes) {
        let mut kind = BodyKind::plain(id(name), name, Role::Cargo);
        kind.axis = Some(axis);
        mechanics.bodies.push(kind);
    }
    let size = Size::new(rows[0].len(), rows.len()).unwrap();
    let mut level = Level::filled("", size, FLOOR);
    let mut letters: Vec<(u8, Vec<Cell>)> = Vec::new();
    for cell in size.cells() {
        let letter = rows[usize::from(cell.y)].as_bytes()[usize::from(cell.x)];
        if letter == b'.' || letter == b'o' {
            continue;
        }
        match letters.iter_mut().find(|(known, _)| *known == letter) {
            Some((_, cells)) => cells.push(cell),
            None => letters.push((letter, vec![cell])),
        }
    }
    for (_, cells) in letters {
        let wanted = axis(&cells);
        let kind = axes.iter().position(|&axis| axis == wanted).unwrap();
        let kind = BodyIx(kind as u16);
        level.blocks.push(Block { kind, cells });
    }
    Rules::compile_open(&mechanics, &level).unwrap()
}

// M. Gardner, Scientific American, 1964, has the puzzle; 25,955 reachable positions recomputed.
#[test]
fn the_ten_block_puzzle_has_25955_positions() {
    let rules = blocks(&["vAAw", "vAAw", "xHHy", "xbcy", "d..e"], |_| Axis::Any);
    assert_eq!(count(&rules), 25_955);
}

fn lengthwise(cells: &[Cell]) -> Axis {
    if cells[0].y == cells[1].y {
        Axis::Row
    } else {
        Axis::Column
    }
}

// The hardest start of Collette, Raskin, Servais, Computers and Games 2006; its position is from memory, the count recomputed.
#[test]
fn the_hardest_six_by_six_cars_have_4780_positions() {
    let rows = ["GBBoLo", "GHIoLM", "GHIAAM", "CCCKoM", "ooJKDD", "EEJFFo"];
    assert_eq!(count(&blocks(&rows, lengthwise)), 4_780);
}
