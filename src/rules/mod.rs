//! One level compiled for speed: what a step does, when a position is finished, which positions a walk folds into one.
//!
//! This module owns the exact meaning of a level (`rules.md`). It is compared with a plain interpreter, written a second
//! time from that page, in `tests/agreement.rs`.

use crate::level::{BodyIx, Cell, Dir, GroundIx, ItemIx, Level, Mechanics, Problem, Route};

/// A level compiled to tables. Immutable, `Send + Sync`, cheap to share behind an `Arc`.
#[derive(Debug)]
pub struct Rules {
    _todo: (),
}

/// A position in packed, canonical form: equal positions (rules.md, Position) have equal words.
/// All positions of one level have the same number of words ([`Rules::words`]).
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Position(pub Box<[u64]>);

/// A step inside a position: under Steer `slot` is 0; under Drag it is the place of the block in the canonical order of the
/// position that it is made from (routes name blocks by number instead, see [`Rules::play`]).
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Step {
    /// Which block.
    pub slot: u16,
    /// Where to.
    pub dir: Dir,
}

/// What one body looks like in a view.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ViewBody {
    /// Its kind.
    pub kind: BodyIx,
    /// Its cells: one, or those of a block.
    pub cells: Vec<Cell>,
    /// Its number in the order of [`Level::bodies_in_order`], followed through the route, so that a drawing can glide it.
    pub number: u16,
}

/// A position unpacked for drawing and for people.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct View {
    /// Ground of each cell as it is now.
    pub ground: Vec<GroundIx>,
    /// Bodies that are still on the board, by number.
    pub bodies: Vec<ViewBody>,
    /// Items left.
    pub items: Vec<Option<ItemIx>>,
    /// Keys held, by channel name, without those of which none is held.
    pub keys: Vec<(String, u32)>,
}

/// What one step of a route did.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Played {
    /// The position after the step.
    pub position: Position,
    /// The same for drawing.
    pub view: View,
    /// Whether the step was a push (rules.md): cargo stands elsewhere or has vanished.
    pub pushed: bool,
}

impl Rules {
    /// Compiles a level.
    ///
    /// # Errors
    /// The problems of severity [`crate::level::Severity::Invalid`] that [`crate::level::problems`] finds.
    pub fn compile(_mechanics: &Mechanics, _level: &Level) -> Result<Rules, Vec<Problem>> {
        todo!()
    }

    /// Number of words of every packed position.
    pub fn words(&self) -> usize {
        todo!()
    }

    /// The position at the start.
    pub fn start(&self) -> Position {
        todo!()
    }

    /// The position after a step and whether it was a push, or `None` if the step changes nothing.
    pub fn step(&self, _from: &Position, _step: Step) -> Option<(Position, bool)> {
        todo!()
    }

    /// All steps that may be tried in a position, in a fixed order; some may change nothing.
    pub fn candidate_steps(&self, _from: &Position) -> Vec<Step> {
        todo!()
    }

    /// Whether the objective holds.
    pub fn finished(&self, _position: &Position) -> bool {
        todo!()
    }

    /// The start unpacked for drawing.
    pub fn start_view(&self) -> View {
        todo!()
    }

    /// Plays a route from the start, step by step. Stops at the first step that changes nothing; the result then is shorter
    /// than the route.
    pub fn play(&self, _route: &Route) -> Vec<Played> {
        todo!()
    }

    /// The route, with numbered blocks, of steps made one after the other from the start.
    pub fn route(&self, _steps: &[Step]) -> Route {
        todo!()
    }

    /// The cells that the walker of a position can reach by steps that are undone at once and change nothing but where it
    /// stands (its roam). Only its own cells with several walkers; empty under Drag.
    pub fn reach(&self, _position: &Position) -> Vec<Cell> {
        todo!()
    }
}
