//! Levels from the records of the file.

use super::fault::Fault;
use super::links;
use super::locate::Turn::{At, Char, Field};
use super::mechanics::clauses;
use super::wire::{BlockWire, IntendedWire, LevelWire};
use crate::level::{
    Block, Cell, Channel, Control, Dir, DragStep, KindId, Level, MAX_SIDE, Mechanics, Par, Route,
    Size, flood_cells,
};
use std::collections::{BTreeMap, BTreeSet};

/// The most cells of one block.
const MOST_BLOCK_CELLS: usize = 16;

/// The level, and those of its faults that the model can hold.
pub(super) fn level(mechanics: &Mechanics, wire: LevelWire) -> Result<(Level, Vec<Fault>), Fault> {
    let size = size(&wire.ground)?;
    let legend = &mechanics.legend;
    let ground = rows("ground", size, &wire.ground, &legend.grounds, false)?;
    let bodies = rows("bodies", size, &wire.bodies, &legend.bodies, true)?;
    let items = rows("items", size, &wire.items, &legend.items, true)?;
    let objective = match wire.objective {
        None => None,
        Some(wire) => {
            Some(objective(mechanics, wire).map_err(|fault| fault.under(&[Field("objective")]))?)
        }
    };
    let intended = match wire.intended {
        None => None,
        Some(wire) => Some(intended(wire).map_err(|fault| fault.under(&[Field("intended")]))?),
    };
    let mut level = Level {
        name: wire.name,
        notes: wire.notes,
        size,
        ground: ground.into_iter().flatten().collect(),
        bodies,
        items,
        blocks: Vec::new(),
        objective,
        intended,
        par: wire.par.map(|par| Par {
            steps: par.steps,
            pushes: par.pushes,
        }),
    };
    level.blocks = blocks(mechanics, &level, wire.blocks)?;
    let faults = level_faults(mechanics, &level);
    Ok((level, faults))
}

fn size(rows: &[String]) -> Result<Size, Fault> {
    let width = rows.first().map_or(0, |row| row.chars().count());
    if rows.is_empty() || rows.len() > usize::from(MAX_SIDE) {
        let message = format!(
            "A level has 1 to {MAX_SIDE} rows; this one has {}.",
            rows.len()
        );
        return Err(Fault::new(&[Field("ground")], message));
    }
    Size::new(width, rows.len()).ok_or_else(|| {
        let message = format!("A row has 1 to {MAX_SIDE} cells; this one has {width}.");
        Fault::new(&[Field("ground"), At(0)], message)
    })
}

/// The kinds that the characters of a layer stand for. Where `optional`, the layer may be left out and `-` is nothing.
fn rows<Ix: Copy>(
    layer: &'static str,
    size: Size,
    rows: &[String],
    legend: &[(char, Ix)],
    optional: bool,
) -> Result<Vec<Option<Ix>>, Fault> {
    if rows.is_empty() && optional {
        return Ok(vec![None; size.area()]);
    }
    if rows.len() != size.height() {
        let message = format!(
            "There are {} rows here and {} in ground. Make them equal.",
            rows.len(),
            size.height()
        );
        return Err(Fault::new(&[Field(layer)], message));
    }
    let kinds: BTreeMap<char, Ix> = legend.iter().copied().collect();
    let mut cells = Vec::with_capacity(size.area());
    for (y, row) in rows.iter().enumerate() {
        let width = row.chars().count();
        if width != size.width() {
            let message = format!(
                "This row has {width} cells and the first row of ground has {}. Make all rows equal.",
                size.width()
            );
            return Err(Fault::new(&[Field(layer), At(y)], message));
        }
        for (x, character) in row.chars().enumerate() {
            match kinds.get(&character) {
                Some(&kind) => cells.push(Some(kind)),
                None if optional && character == '-' => cells.push(None),
                None => {
                    let name = if layer == "ground" { "grounds" } else { layer };
                    let message = format!(
                        "The character {character:?} is not in the legend of {name}. Add it there, or use one that is."
                    );
                    return Err(Fault::new(&[Field(layer), At(y), Char(x)], message));
                }
            }
        }
    }
    Ok(cells)
}

fn objective(
    mechanics: &Mechanics,
    wire: Vec<super::wire::ClauseWire>,
) -> Result<Vec<crate::level::Clause>, Fault> {
    let objective = clauses(wire)?;
    match links::objective(mechanics, &objective) {
        None => Ok(objective),
        Some(fault) => Err(fault),
    }
}

fn intended(wire: IntendedWire) -> Result<Route, Fault> {
    match wire {
        IntendedWire::Blocks(steps) => Ok(Route::Drag(
            steps
                .into_iter()
                .map(|(block, dir)| DragStep { block, dir })
                .collect(),
        )),
        IntendedWire::Letters(letters) => {
            let step = |(at, letter): (usize, char)| {
                Dir::from_letter(letter).ok_or_else(|| {
                    let message =
                        format!("{letter:?} is no step. A route has the letters n, e, s and w.");
                    Fault::new(&[Char(at)], message)
                })
            };
            letters
                .chars()
                .enumerate()
                .map(step)
                .collect::<Result<_, _>>()
                .map(Route::Steer)
        }
    }
}

fn blocks(mechanics: &Mechanics, level: &Level, wire: Vec<BlockWire>) -> Result<Vec<Block>, Fault> {
    let mut taken: BTreeSet<Cell> = level
        .size
        .cells()
        .filter(|&cell| level.body_at(cell).is_some())
        .collect();
    let mut blocks = Vec::with_capacity(wire.len());
    for (at, wire) in wire.into_iter().enumerate() {
        let here = [Field("blocks"), At(at)];
        blocks.push(
            block(mechanics, level.size, &mut taken, wire).map_err(|fault| fault.under(&here))?,
        );
    }
    Ok(blocks)
}

fn block(
    mechanics: &Mechanics,
    size: Size,
    taken: &mut BTreeSet<Cell>,
    wire: BlockWire,
) -> Result<Block, Fault> {
    let kind = KindId::new(wire.kind.clone())
        .ok()
        .and_then(|id| mechanics.find_body(&id));
    let Some(kind) = kind else {
        let message = format!(
            "There is no body {:?} in the pack. Add it to bodies, or correct the name.",
            wire.kind
        );
        return Err(Fault::new(&[Field("kind")], message));
    };
    if !(1..=MOST_BLOCK_CELLS).contains(&wire.cells.len()) {
        let message = format!(
            "A block has 1 to {MOST_BLOCK_CELLS} cells; this one has {}.",
            wire.cells.len()
        );
        return Err(Fault::new(&[Field("cells")], message));
    }
    let mut cells: Vec<Cell> = Vec::with_capacity(wire.cells.len());
    for (at, (x, y)) in wire.cells.into_iter().enumerate() {
        let fault = |message: String| Fault::new(&[Field("cells"), At(at)], message);
        let cell = match (u8::try_from(x), u8::try_from(y)) {
            (Ok(x), Ok(y)) if size.contains(Cell::new(x, y)) => Cell::new(x, y),
            _ => {
                let board = format!("{} x {}", size.width(), size.height());
                return Err(fault(format!(
                    "The cell ({x}, {y}) is off the board of {board}. Cells count from (0, 0) at the top left."
                )));
            }
        };
        if !taken.insert(cell) {
            return Err(fault(format!(
                "On the cell ({x}, {y}) there is a body already. A cell holds one body."
            )));
        }
        cells.push(cell);
    }
    if flood_cells(size, cells[0], |cell| cells.contains(&cell)).len() != cells.len() {
        let message =
            "The cells of this block do not hang together. Each must touch another side by side.";
        return Err(Fault::new(&[Field("cells")], message));
    }
    Ok(Block { kind, cells })
}

fn level_faults(mechanics: &Mechanics, level: &Level) -> Vec<Fault> {
    let mut faults = unpaired_warps(mechanics, level);
    if mechanics.control == Control::Steer && !level.blocks.is_empty() {
        let message =
            "Blocks need control Drag. Replace them by bodies, or change the control of the pack.";
        faults.push(Fault::new(&[Field("blocks"), At(0)], message));
    }
    let wanted = match (mechanics.control, &level.intended) {
        (Control::Steer, Some(Route::Drag(_))) => {
            Some("Under control Steer a route is a text of the letters n, e, s and w.")
        }
        (Control::Drag, Some(Route::Steer(_))) => {
            Some("Under control Drag a route is a list of (block, direction), as in [(0, E)].")
        }
        _ => None,
    };
    faults.extend(wanted.map(|message| Fault::new(&[Field("intended")], message)));
    faults
}

fn unpaired_warps(mechanics: &Mechanics, level: &Level) -> Vec<Fault> {
    let mut cells: BTreeMap<&Channel, Vec<Cell>> = BTreeMap::new();
    for cell in level.size.cells() {
        if let Some(channel) = &mechanics.ground(level.ground_at(cell)).warp {
            cells.entry(channel).or_default().push(cell);
        }
    }
    let unpaired = cells.into_iter().filter(|(_, cells)| cells.len() != 2);
    unpaired
        .map(|(channel, cells)| {
            let message = format!(
                "Warp channel {channel} is on {} cells of this level. It needs exactly two.",
                cells.len()
            );
            let cell = cells[0];
            Fault::new(
                &[
                    Field("ground"),
                    At(usize::from(cell.y)),
                    Char(usize::from(cell.x)),
                ],
                message,
            )
        })
        .collect()
}
