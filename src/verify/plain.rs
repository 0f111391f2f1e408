//! The rules of the world, written a second time: slowly, plainly, and straight from the page.
//!
//! The step engine in `crate::rules` compiles a level into tables and packs positions into words. Here nothing is compiled
//! and nothing is packed: each clause of rules.md is a few lines that can be read beside it. Two uses follow from that. The
//! tests hold the engine against this interpreter on random levels, position for position; and the certificate checker
//! trusts this interpreter alone, so that a mistake in the engine can't vouch for itself.
//!
//! Cost: a step clones the position and looks at every body for each cell that it asks about. That is fine for boards of a
//! few dozen cells and for checking; nothing live should call it.

use super::turn::Turn;
use crate::level::{
    BodyIx, Cell, Channel, Clause, Control, Dir, GroundIx, GroundKind, Item, ItemIx, Level,
    Mechanics, Role, Size,
};
use std::collections::{BTreeMap, BTreeSet};

/// A body on the board: its kind and its cells, in reading order.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Body {
    /// What it is.
    pub kind: BodyIx,
    /// Where it stands; one cell under control Steer.
    pub cells: Vec<Cell>,
}

/// A position of a level. Two positions are the same exactly if they are equal as values: the bodies are kept sorted, so
/// that those of one kind and shape are interchangeable.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Position {
    /// Ground of each cell, row by row.
    pub ground: Vec<GroundIx>,
    /// The bodies that are still on the board, sorted.
    pub bodies: Vec<Body>,
    /// Item on each cell, row by row.
    pub items: Vec<Option<ItemIx>>,
    /// Keys held; channels without a key are left out.
    pub keys: BTreeMap<Channel, u32>,
}

/// What the player does.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Act {
    /// Steer all walkers.
    Walk(Dir),
    /// Drag the block that covers this cell.
    Drag(Cell, Dir),
}

/// What a step did.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Stepped {
    /// The position after it.
    pub position: Position,
    /// Whether some cargo stands elsewhere than before, or has vanished.
    pub pushed: bool,
    /// Every cell that some body came onto, in passing or to stay.
    pub touched: BTreeSet<Cell>,
    /// Under control Drag: where the dragged block stands now, or nothing if it vanished.
    pub dragged: Option<Vec<Cell>>,
}

/// A level with its kinds, ready to be played.
#[derive(Clone, Debug)]
pub struct World {
    pub(super) mechanics: Mechanics,
    pub(super) size: Size,
    objective: Vec<Clause>,
    start: Position,
    pub(super) shut: Option<Cell>,
}

impl World {
    /// The world of a level.
    pub fn new(mechanics: &Mechanics, level: &Level) -> World {
        let mut bodies: Vec<Body> = level
            .bodies_in_order()
            .into_iter()
            .map(|block| Body {
                kind: block.kind,
                cells: sorted(block.cells),
            })
            .collect();
        bodies.sort();
        World {
            mechanics: mechanics.clone(),
            size: level.size,
            objective: level.objective(mechanics).to_vec(),
            start: Position {
                ground: level.ground.clone(),
                bodies,
                items: level.items.clone(),
                keys: BTreeMap::new(),
            },
            shut: None,
        }
    }

    /// The same world with one tile closed: nothing can enter it, nor can a warp bring a body there.
    pub fn with_closed_tile(&self, tile: Cell) -> World {
        World {
            shut: Some(tile),
            ..self.clone()
        }
    }

    /// The position at the start.
    pub fn start(&self) -> &Position {
        &self.start
    }

    /// The size of the board.
    pub fn size(&self) -> Size {
        self.size
    }

    /// The kinds and pack-wide rules.
    pub fn mechanics(&self) -> &Mechanics {
        &self.mechanics
    }

    /// Everything that the player could try in a position, in a fixed order.
    pub fn acts(&self, position: &Position) -> Vec<Act> {
        match self.mechanics.control {
            Control::Steer => Dir::ALL.map(Act::Walk).to_vec(),
            Control::Drag => position
                .bodies
                .iter()
                .flat_map(|body| Dir::ALL.map(|dir| Act::Drag(body.cells[0], dir)))
                .collect(),
        }
    }

    /// All steps that can be made from a position. What a finished position leads to is not left out.
    pub fn steps(&self, position: &Position) -> Vec<(Act, Stepped)> {
        self.acts(position)
            .into_iter()
            .filter_map(|act| Some((act, self.step(position, act)?)))
            .collect()
    }

    /// Makes one step, or finds that it is none.
    pub fn step(&self, from: &Position, act: Act) -> Option<Stepped> {
        let mut turn = Turn::new(self, from);
        let dragged = match act {
            Act::Walk(dir) => {
                turn.walk(dir);
                None
            }
            Act::Drag(cell, dir) => Some(turn.drag(cell, dir)?),
        };
        let (position, touched, places) = turn.end();
        let cargo_moved = from.bodies.iter().zip(&places).any(|(body, place)| {
            self.mechanics.body(body.kind).role == Role::Cargo
                && place.as_ref() != Some(&body.cells)
        });
        (position != *from).then(|| Stepped {
            pushed: cargo_moved,
            touched,
            dragged: dragged.and_then(|body| places[body].clone()),
            position,
        })
    }

    /// Whether every clause of the objective holds.
    pub fn finished(&self, position: &Position) -> bool {
        self.objective
            .iter()
            .all(|clause| self.holds(position, clause))
    }

    fn holds(&self, position: &Position, clause: &Clause) -> bool {
        match clause {
            Clause::HomesFilled => self.size.cells().all(|cell| {
                self.ground(position, cell).home.is_empty()
                    || position.bodies.iter().any(|body| {
                        body.cells.contains(&cell) && self.accepts(position, cell, body)
                    })
            }),
            Clause::CargoHome(ids) => position
                .bodies
                .iter()
                .filter(|body| ids.contains(&self.mechanics.body(body.kind).id))
                .all(|body| {
                    body.cells
                        .iter()
                        .all(|&cell| self.accepts(position, cell, body))
                }),
            Clause::WalkersOut => position
                .bodies
                .iter()
                .filter(|body| self.mechanics.body(body.kind).role == Role::Walker)
                .all(|body| {
                    body.cells
                        .iter()
                        .all(|&cell| self.ground(position, cell).exit)
                }),
            Clause::GemsTaken => position
                .items
                .iter()
                .flatten()
                .all(|&item| self.mechanics.item(item).item != Item::Gem),
        }
    }

    fn accepts(&self, position: &Position, cell: Cell, body: &Body) -> bool {
        let id = &self.mechanics.body(body.kind).id;
        self.ground(position, cell).home.contains(id)
    }

    pub(super) fn ground(&self, position: &Position, cell: Cell) -> &GroundKind {
        self.mechanics
            .ground(position.ground[self.size.index(cell)])
    }
}

pub(super) fn sorted(mut cells: Vec<Cell>) -> Vec<Cell> {
    cells.sort();
    cells
}
