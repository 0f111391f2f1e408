//! Published puzzles answered by the studies; each figure with its source.

use foldwright::level::{
    Axis, Block, BodyIx, BodyKind, Cell, Clause, Control, GroundIx, GroundKind, KindId, Legend,
    Level, Mechanics, Role, Size,
};
use foldwright::rules::Rules;
use foldwright::study::{
    Figure, Halt, Limits, Outcome, Prove, Report, fold_map, map_counts, solve_general,
};

const FLOOR: GroundIx = GroundIx(0);
const WALL: GroundIx = GroundIx(1);

fn id(text: &str) -> KindId {
    KindId::new(text).expect("an id")
}

fn unlimited() -> Limits {
    Limits {
        time: None,
        bytes: 1 << 31,
        positions: None,
        halt: Halt::never(),
    }
}

fn both(rules: &Rules) -> Report {
    solve_general(rules, Prove::Both, &unlimited(), &mut ())
}

fn proved(fewest: u32) -> Option<Figure> {
    Some(Figure {
        fewest,
        proved: true,
    })
}

fn mechanics(control: Control) -> Mechanics {
    let mut wall = GroundKind::plain(id("wall"), "wall");
    wall.closed_to = vec![Role::Walker, Role::Cargo];
    Mechanics {
        control,
        strength: 1,
        objective: vec![Clause::HomesFilled],
        grounds: vec![GroundKind::plain(id("floor"), "floor"), wall],
        bodies: Vec::new(),
        items: Vec::new(),
        legend: Legend::default(),
    }
}

fn home(mechanics: &mut Mechanics, body: &str) -> GroundIx {
    let name = format!("home-{body}");
    let mut kind = GroundKind::plain(id(&name), name.clone());
    kind.home = vec![id(body)];
    mechanics.grounds.push(kind);
    GroundIx(mechanics.grounds.len() as u16 - 1)
}

fn room(rows: &[&str]) -> (Mechanics, Level) {
    let mut mechanics = mechanics(Control::Steer);
    mechanics.bodies = vec![
        BodyKind::plain(id("walker"), "walker", Role::Walker),
        BodyKind::plain(id("cargo"), "cargo", Role::Cargo),
    ];
    let home = home(&mut mechanics, "cargo");
    let size = Size::new(rows[0].len(), rows.len()).expect("a size");
    let mut level = Level::filled("", size, FLOOR);
    for (at, letter) in rows.concat().bytes().enumerate() {
        match letter {
            b'W' => level.ground[at] = WALL,
            b'o' => level.ground[at] = home,
            b'g' => level.bodies[at] = Some(BodyIx(0)),
            b'p' => level.bodies[at] = Some(BodyIx(1)),
            _ => {}
        }
    }
    (mechanics, level)
}

// Recomputed independently by breadth-first search; positions and folds with the objective off.
#[test]
fn the_tiny_rooms_have_the_known_folds_and_pars() {
    let rooms: [(&[&str], u64, u64, u32, u32); 2] = [
        (&["WWWWW", "Wg..W", "W.p.W", "W..oW", "WWWWW"], 72, 9, 5, 2),
        (
            &["WWWWWW", "Wg...W", "W.p..W", "W..p.W", "W.oo.W", "WWWWWW"],
            1_676,
            53,
            6,
            3,
        ),
    ];
    for (rows, positions, folds, steps, pushes) in rooms {
        let (mechanics, level) = room(rows);
        let open = Rules::compile_open(&mechanics, &level).expect("a valid level");
        let counts = map_counts(&open, &unlimited()).expect("no limit");
        assert_eq!((counts.positions, counts.folds), (positions, folds));
        let rules = Rules::compile(&mechanics, &level).expect("a valid level");
        let report = both(&rules);
        assert_eq!(
            (report.steps, report.pushes),
            (proved(steps), proved(pushes))
        );
    }
}

/// Tiles in reading order, each wanted where `wanted` has its number; 0 is the free cell.
fn tiles(start: &[usize], wanted: &[usize]) -> Rules {
    let mut mechanics = mechanics(Control::Drag);
    let size = Size::new(3, 3).expect("a size");
    let mut level = Level::filled("", size, FLOOR);
    for number in 1..start.len() {
        let name = format!("tile-{number}");
        let mut kind = BodyKind::plain(id(&name), "tile", Role::Cargo);
        kind.axis = Some(Axis::Any);
        mechanics.bodies.push(kind);
        let body = BodyIx(number as u16 - 1);
        let place = |order: &[usize]| order.iter().position(|&at| at == number).expect("a tile");
        level.bodies[place(start)] = Some(body);
        level.ground[place(wanted)] = home(&mut mechanics, &name);
    }
    Rules::compile(&mechanics, &level).expect("a valid level")
}

// Parity (Johnson & Story 1879); 9!/2 positions. Every position is looked at, once.
#[test]
fn two_tiles_swapped_are_unsolvable_after_181440_positions() {
    let rules = tiles(&[1, 2, 3, 4, 5, 6, 8, 7, 0], &[1, 2, 3, 4, 5, 6, 7, 8, 0]);
    let report = solve_general(&rules, Prove::Steps, &unlimited(), &mut ());
    assert_eq!(report.outcome, Outcome::Unsolvable);
    assert_eq!(report.positions, 181_440);
    assert!(report.closed);
}

// OEIS A089473: the two positions at the greatest depth, 31, free cell in a corner. The order below is one of them (recomputed by
// the count of the test in published.rs; the depth is what is checked here).
#[test]
fn no_order_of_tiles_needs_more_than_31_steps() {
    let rules = tiles(&[8, 6, 7, 2, 5, 4, 3, 0, 1], &[1, 2, 3, 4, 5, 6, 7, 8, 0]);
    let report = solve_general(&rules, Prove::Steps, &unlimited(), &mut ());
    assert_eq!(report.steps, proved(31));
}

/// Letters are blocks, `.` and `o` free; `A` is wanted on `wanted`.
fn blocks(rows: &[&str], wanted: &[Cell], axis: impl Fn(&[Cell]) -> Axis) -> Rules {
    let mut mechanics = mechanics(Control::Drag);
    let size = Size::new(rows[0].len(), rows.len()).expect("a size");
    let mut level = Level::filled("", size, FLOOR);
    let letters = rows.concat().into_bytes();
    let mut kinds: Vec<String> = Vec::new();
    let mut seen: Vec<u8> = Vec::new();
    for &letter in letters.iter().filter(|letter| !b".o".contains(letter)) {
        if seen.contains(&letter) {
            continue;
        }
        seen.push(letter);
        let cells: Vec<Cell> = size
            .cells()
            .filter(|&cell| letters[size.index(cell)] == letter)
            .collect();
        let axis = axis(&cells);
        let name = match letter {
            b'A' => "wanted".to_string(),
            _ => format!("{axis:?}").to_lowercase(),
        };
        let known = kinds
            .iter()
            .position(|known| *known == name)
            .unwrap_or_else(|| {
                let mut kind = BodyKind::plain(id(&name), "block", Role::Cargo);
                kind.axis = Some(axis);
                mechanics.bodies.push(kind);
                kinds.push(name);
                kinds.len() - 1
            });
        let kind = BodyIx(known as u16);
        match cells[..] {
            [cell] => level.bodies[size.index(cell)] = Some(kind),
            _ => level.blocks.push(Block { kind, cells }),
        }
    }
    let home = home(&mut mechanics, "wanted");
    for &cell in wanted {
        level.ground[size.index(cell)] = home;
    }
    Rules::compile(&mechanics, &level).expect("a valid level")
}

// 81 moves: M. Gardner, Scientific American, 1964. 116 unit steps published; 24,635 positions recomputed.
#[test]
fn the_ten_block_puzzle_takes_81_moves_or_116_steps() {
    let wanted = [(1, 3), (2, 3), (1, 4), (2, 4)].map(|(x, y)| Cell::new(x, y));
    let rules = blocks(&["vAAw", "vAAw", "xHHy", "xbcy", "d..e"], &wanted, |_| {
        Axis::Any
    });
    let report = both(&rules);
    assert_eq!((report.steps, report.pushes), (proved(116), proved(81)));
    let map = fold_map(&rules, &unlimited()).expect("no limit");
    assert_eq!(map.counts().positions, 24_635);
}

// Collette, Raskin, Servais, Computers and Games 2006; the position is from memory, 51 moves and 81 steps recomputed.
#[test]
fn the_hardest_six_by_six_cars_take_51_moves_or_81_steps() {
    let rows = ["GBBoLo", "GHIoLM", "GHIAAM", "CCCKoM", "ooJKDD", "EEJFFo"];
    let lengthwise = |cells: &[Cell]| match cells[0].y == cells[1].y {
        true => Axis::Row,
        false => Axis::Column,
    };
    let wanted = [Cell::new(4, 2), Cell::new(5, 2)];
    let report = both(&blocks(&rows, &wanted, lengthwise));
    assert_eq!((report.steps, report.pushes), (proved(81), proved(51)));
}
