//! What is wrong with a level before anyone searches it.

use super::grid::Cell;
use super::kinds::{Channel, Clause, Control, KindId, Mechanics, Role};
use super::pack::Level;
use std::collections::BTreeMap;

/// How bad a problem is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The level can be searched all the same.
    Advice,
    /// The level asks no sensible question; its verdict is "invalid".
    Invalid,
}

/// One thing that is wrong with a level, in words that say what to do.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Problem {
    /// Whether it stops the search.
    pub severity: Severity,
    /// A sentence for the designer.
    pub text: String,
    /// The cells that it is about, if any.
    pub cells: Vec<Cell>,
}

/// The problems that make a level's board meaningless, whatever its objective: controls that don't fit, bodies that overlap,
/// warps without a twin. The worst first.
pub fn structural_problems(mechanics: &Mechanics, level: &Level) -> Vec<Problem> {
    let mut found = Vec::new();
    shape(mechanics, level, &mut found);
    if found.is_empty() {
        control(mechanics, level, &mut found);
        warps(mechanics, level, &mut found);
    }
    found.sort_by_key(|problem| std::cmp::Reverse(problem.severity));
    found
}

/// All problems of a level, the worst first.
///
/// Only what is certain from the level as written is called invalid. A home that may turn into other ground, say, is not
/// counted as a home that must be filled.
pub fn problems(mechanics: &Mechanics, level: &Level) -> Vec<Problem> {
    let mut found = Vec::new();
    shape(mechanics, level, &mut found);
    if !found.is_empty() {
        return found;
    }
    control(mechanics, level, &mut found);
    objective(mechanics, level, &mut found);
    warps(mechanics, level, &mut found);
    channels(mechanics, level, &mut found);
    found.sort_by_key(|problem| std::cmp::Reverse(problem.severity));
    found
}

fn invalid(text: impl Into<String>, cells: Vec<Cell>) -> Problem {
    Problem {
        severity: Severity::Invalid,
        text: text.into(),
        cells,
    }
}

fn advice(text: impl Into<String>, cells: Vec<Cell>) -> Problem {
    Problem {
        severity: Severity::Advice,
        text: text.into(),
        cells,
    }
}

/// The most cells that a block may have.
const MAX_BLOCK: usize = 16;

/// What must hold before anything else can be asked: every layer covers the board with known kinds, blocks are whole and overlap nothing.
fn shape(mechanics: &Mechanics, level: &Level, found: &mut Vec<Problem>) {
    let area = level.size.area();
    let covers = [level.ground.len(), level.bodies.len(), level.items.len()] == [area; 3];
    let known_ground = level
        .ground
        .iter()
        .all(|ix| usize::from(ix.0) < mechanics.grounds.len());
    let bodies = level.bodies.iter().flatten();
    let known_body = bodies
        .chain(level.blocks.iter().map(|block| &block.kind))
        .all(|ix| usize::from(ix.0) < mechanics.bodies.len());
    let known_item = level
        .items
        .iter()
        .flatten()
        .all(|ix| usize::from(ix.0) < mechanics.items.len());
    if !(covers && known_ground && known_body && known_item) {
        found.push(invalid(
            "The layers of the level do not fit its board or its kinds. Open the pack again from its file.",
            Vec::new(),
        ));
        return;
    }
    blocks(level, found);
}

fn blocks(level: &Level, found: &mut Vec<Problem>) {
    let mut taken: Vec<bool> = level.bodies.iter().map(Option::is_some).collect();
    for block in &level.blocks {
        let on_board = block.cells.iter().all(|&cell| level.size.contains(cell));
        if !on_board || block.cells.is_empty() || block.cells.len() > MAX_BLOCK {
            let text =
                format!("A block needs 1 to {MAX_BLOCK} cells, all on the board. Draw it again.");
            found.push(invalid(text, Vec::new()));
            continue;
        }
        let overlaps = block
            .cells
            .iter()
            .any(|&cell| std::mem::replace(&mut taken[level.size.index(cell)], true));
        if overlaps {
            found.push(invalid(
                "Two bodies stand on one cell. Take one of them away.",
                block.cells.clone(),
            ));
        } else if !connected(&block.cells) {
            found.push(invalid(
                "The cells of a block do not hang together. Draw it in one piece.",
                block.cells.clone(),
            ));
        }
    }
}

fn connected(cells: &[Cell]) -> bool {
    let touch = |a: Cell, b: Cell| a.x.abs_diff(b.x) + a.y.abs_diff(b.y) == 1;
    let mut joined = vec![cells[0]];
    let mut at = 0;
    while at < joined.len() {
        let from = joined[at];
        for &cell in cells {
            if touch(from, cell) && !joined.contains(&cell) {
                joined.push(cell);
            }
        }
        at += 1;
    }
    joined.len() == cells.len()
}

fn control(mechanics: &Mechanics, level: &Level, found: &mut Vec<Problem>) {
    let walkers: Vec<Cell> = level
        .bodies_in_order()
        .iter()
        .filter(|body| mechanics.body(body.kind).role == Role::Walker)
        .flat_map(|body| body.cells.clone())
        .collect();
    match mechanics.control {
        Control::Steer if walkers.is_empty() => {
            let name = mechanics
                .bodies
                .iter()
                .find(|kind| kind.role == Role::Walker)
                .map(|kind| kind.label.as_str());
            found.push(match name {
                Some(name) => invalid(
                    format!("There is no walker. Place a {name} on the board."),
                    Vec::new(),
                ),
                None => invalid(
                    "The pack has no kind of walker. Add a body kind with the role Walker.",
                    Vec::new(),
                ),
            });
        }
        Control::Steer if !level.blocks.is_empty() => {
            let cells = level
                .blocks
                .iter()
                .flat_map(|block| block.cells.clone())
                .collect();
            found.push(invalid(
                "Blocks of several cells need control Drag. Replace them by single-cell bodies.",
                cells,
            ));
        }
        Control::Drag if !walkers.is_empty() => {
            found.push(invalid(
                "Under control Drag there are no walkers. Take them off the board.",
                walkers,
            ));
        }
        _ => {}
    }
}

fn objective(mechanics: &Mechanics, level: &Level, found: &mut Vec<Problem>) {
    let clauses = level.objective(mechanics);
    if clauses.is_empty() {
        found.push(invalid(
            "The objective is empty. Choose what must hold at the end.",
            Vec::new(),
        ));
    }
    if clauses.contains(&Clause::HomesFilled) {
        homes(mechanics, level, found);
    }
    if clauses.contains(&Clause::WalkersOut)
        && !level
            .size
            .cells()
            .any(|cell| may_become_exit(mechanics, level, cell))
    {
        found.push(advice(
            "Walkers must stand on exits, and there is no exit on the board.",
            Vec::new(),
        ));
    }
}

fn may_become_exit(mechanics: &Mechanics, level: &Level, cell: Cell) -> bool {
    let kind = mechanics.ground(level.ground_at(cell));
    kind.exit || kind.becomes().next().is_some()
}

fn homes(mechanics: &Mechanics, level: &Level, found: &mut Vec<Problem>) {
    let ground_can_change = mechanics
        .grounds
        .iter()
        .any(|kind| kind.becomes().next().is_some());
    let homes: Vec<Cell> = level
        .size
        .cells()
        .filter(|&cell| !mechanics.ground(level.ground_at(cell)).home.is_empty())
        .collect();
    if homes.is_empty() {
        if !ground_can_change {
            found.push(advice(
                "There is no home on the board, so filling all homes asks nothing.",
                Vec::new(),
            ));
        }
        return;
    }
    let cargo = level.bodies_in_order();
    let accepted =
        |home: Cell, id: &KindId| mechanics.ground(level.ground_at(home)).home.contains(id);
    let stays = |home: Cell| {
        mechanics
            .ground(level.ground_at(home))
            .becomes()
            .next()
            .is_none()
    };
    let fitting = |home: Cell| {
        cargo
            .iter()
            .any(|body| accepted(home, &mechanics.body(body.kind).id))
    };
    let orphans: Vec<Cell> = homes
        .iter()
        .copied()
        .filter(|&home| stays(home) && !fitting(home))
        .collect();
    if !orphans.is_empty() {
        found.push(invalid(
            "A home accepts no cargo that is on the board. Add such cargo or take the home away.",
            orphans,
        ));
        return;
    }
    let wanted = homes.iter().filter(|&&home| stays(home)).count();
    let on_offer: usize = cargo
        .iter()
        .filter(|body| {
            homes
                .iter()
                .any(|&home| accepted(home, &mechanics.body(body.kind).id))
        })
        .map(|body| body.cells.len())
        .sum();
    if on_offer < wanted {
        let text = format!(
            "{wanted} homes want cargo and only {on_offer} can be had. Add cargo, or take homes away."
        );
        found.push(invalid(text, homes));
    }
}

fn warps(mechanics: &Mechanics, level: &Level, found: &mut Vec<Problem>) {
    let mut cells: BTreeMap<&Channel, Vec<Cell>> = BTreeMap::new();
    for cell in level.size.cells() {
        if let Some(channel) = &mechanics.ground(level.ground_at(cell)).warp {
            cells.entry(channel).or_default().push(cell);
        }
    }
    for (channel, cells) in cells {
        if cells.len() != 2 {
            let text = format!(
                "Warp channel {channel} is on {} cells. It needs exactly two.",
                cells.len()
            );
            found.push(invalid(text, cells));
        }
    }
}

fn channels(mechanics: &Mechanics, level: &Level, found: &mut Vec<Problem>) {
    // Ground that may still turn into a plate counts as one: advice must not be wrong either.
    let plates: Vec<&Channel> = mechanics
        .grounds
        .iter()
        .filter_map(|kind| kind.plate.as_ref())
        .collect();
    let on_board = |channel: &Channel| {
        let ground_can_change = level
            .ground
            .iter()
            .any(|&ground| mechanics.ground(ground).becomes().next().is_some());
        ground_can_change && plates.contains(&channel)
            || level
                .ground
                .iter()
                .any(|&ground| mechanics.ground(ground).plate.as_ref() == Some(channel))
    };
    let mut silent: BTreeMap<&Channel, Vec<Cell>> = BTreeMap::new();
    for cell in level.size.cells() {
        if let Some(gate) = &mechanics.ground(level.ground_at(cell)).gate
            && !on_board(&gate.channel)
        {
            silent.entry(&gate.channel).or_default().push(cell);
        }
    }
    for (channel, cells) in silent {
        found.push(advice(
            format!("Nothing on the board can hold channel {channel}, which gates listen to."),
            cells,
        ));
    }
}
