//! Levels for measuring, made by backward play from finished positions, with fixed seeds.

use foldwright::level::{
    BodyIx, BodyKind, Clause, Control, Dir, GroundIx, GroundKind, KindId, Legend, Level, Mechanics,
    Role, Size,
};
use rand::rngs::StdRng;
use rand::seq::IndexedRandom;
use rand::{Rng, SeedableRng};

/// Floor, wall, home; walker, cargo.
pub fn mechanics() -> Mechanics {
    let id = |text: &str| KindId::new(text).expect("an id");
    let mut wall = GroundKind::plain(id("hedge"), "hedge");
    wall.closed_to = vec![Role::Walker, Role::Cargo];
    let mut home = GroundKind::plain(id("bed"), "bed");
    home.home = vec![id("pot")];
    Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: vec![Clause::HomesFilled],
        grounds: vec![GroundKind::plain(id("soil"), "soil"), wall, home],
        bodies: vec![
            BodyKind::plain(id("keeper"), "keeper", Role::Walker),
            BodyKind::plain(id("pot"), "pot", Role::Cargo),
        ],
        items: Vec::new(),
        legend: Legend::default(),
    }
}

/// What levels of one row have in common.
#[derive(Clone, Copy)]
pub struct Shape {
    pub width: usize,
    pub height: usize,
    pub cargo: usize,
    /// Of a hundred cells inside the border, how many are walls.
    pub walls: u32,
    /// Pulls played backward.
    pub pulls: usize,
}

/// A level of this shape, or `None` if the draw leaves too little room.
pub fn level(shape: Shape, seed: u64) -> Option<Level> {
    let mut rng = StdRng::seed_from_u64(seed);
    let size = Size::new(shape.width, shape.height).expect("a size");
    let mut level = Level::filled(format!("{seed}"), size, GroundIx(1));
    for y in 1..shape.height - 1 {
        for x in 1..shape.width - 1 {
            if rng.random_range(0..100) >= shape.walls {
                level.ground[y * shape.width + x] = GroundIx(0);
            }
        }
    }
    let open: Vec<usize> = (0..size.area())
        .filter(|&at| level.ground[at] == GroundIx(0))
        .collect();
    let walker = *open.choose(&mut rng)?;
    let room = reach(&level, &[], walker);
    if room.len() * 100 < (shape.width - 2) * (shape.height - 2) * (90 - shape.walls as usize) {
        return None;
    }
    let mut cargo: Vec<usize> = room
        .choose_multiple(&mut rng, shape.cargo)
        .copied()
        .collect();
    for &home in &cargo {
        level.ground[home] = GroundIx(2);
    }
    let free: Vec<usize> = room.into_iter().filter(|at| !cargo.contains(at)).collect();
    let mut walker = *free.choose(&mut rng)?;
    for _ in 0..shape.pulls {
        walker = pull(&level, &mut cargo, walker, &mut rng)?;
    }
    let reach = reach(&level, &cargo, walker);
    level.bodies[*reach.choose(&mut rng)?] = Some(BodyIx(0));
    for at in cargo {
        level.bodies[at] = Some(BodyIx(1));
    }
    Some(level)
}

/// Cells that a walker comes to with this cargo in the way.
fn reach(level: &Level, cargo: &[usize], walker: usize) -> Vec<usize> {
    let mut seen = vec![false; level.size.area()];
    seen[walker] = true;
    let mut cells = vec![walker];
    let mut next = 0;
    while next < cells.len() {
        for dir in Dir::ALL {
            if let Some(to) = beside(level, cells[next], dir)
                && !seen[to]
                && !cargo.contains(&to)
            {
                seen[to] = true;
                cells.push(to);
            }
        }
        next += 1;
    }
    cells
}

fn beside(level: &Level, at: usize, dir: Dir) -> Option<usize> {
    let to = level.size.neighbour(level.size.cell(at), dir)?;
    let to = level.size.index(to);
    (level.ground[to] != GroundIx(1)).then_some(to)
}

/// One push taken back, drawn from all that could have been the last. The walker's new cell.
fn pull(level: &Level, cargo: &mut [usize], walker: usize, rng: &mut StdRng) -> Option<usize> {
    let reach = reach(level, cargo, walker);
    let free = |at: Option<usize>| at.filter(|at| !cargo.contains(at));
    let mut pulls = Vec::new();
    for (which, &at) in cargo.iter().enumerate() {
        for dir in Dir::ALL {
            if let Some(near) = free(beside(level, at, dir))
                && reach.contains(&near)
                && let Some(far) = free(beside(level, near, dir))
            {
                pulls.push((which, near, far));
            }
        }
    }
    let &(which, near, far) = pulls.choose(rng)?;
    cargo[which] = near;
    Some(far)
}
