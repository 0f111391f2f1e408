//! One level compiled for speed: what a step does, when a position is finished, which positions a walk folds into one.
//!
//! This module owns the exact meaning of a level (`rules.md` in this folder, whose Choices are these). It is compared with a plain interpreter, written a second
//! time from that page, in `tests/agreement.rs`.
//!
//! # Choices
//! Where `rules.md` is silent:
//! - Whether a step is a push is judged body by body, though interchangeable bodies make equal positions: two bodies of cargo that
//!   change places are a push, and if nothing else changed, no step.
//! - "The cell behind it, p-d, holds cargo with tow" is judged after the walker has landed and slid, together with "p is free".
//! - A becomes-link to ground that the pack lacks counts as no trait; a lock or sink without a target keeps its ground.
//! - A ground that becomes a plate, gate, home or exit is one from then on, within the step too; gates still go by what was held
//!   before the step.
//! - Under Drag nothing takes items. They stay, and `GemsTaken` then never holds on a level with a gem.
//! - Under Drag a slide of a single cell asks nothing of `axis`: it goes on in the direction of the step.
//! - `HomesFilled` and `WalkersOut` hold where there is no home, or no walker.

mod bodies;
mod facts;
mod goal;
mod moving;
mod packing;
mod peek;
mod replay;
mod roam;
mod state;
mod survey;
pub(crate) mod tables;
#[cfg(test)]
mod tests;
mod walks;

pub use facts::{BodyTraits, GroundTraits, ItemTraits};
pub use goal::Condition;
pub use roam::{Departure, Member, Roam};
pub use state::Scratch;

use crate::level::{
    BodyIx, Cell, Control, Dir, GroundIx, ItemIx, Level, Mechanics, Problem, Severity,
};
use packing::Layout;
use survey::Terrain;
use tables::{NONE, Tables};

/// A level compiled to tables. Immutable, `Send + Sync`, cheap to share behind an `Arc`.
#[derive(Clone, Debug)]
pub struct Rules {
    tables: Tables,
    layout: Layout,
    /// None: nothing is ever finished.
    goal: Option<Vec<Condition>>,
    /// What surveys of the board have in common.
    terrain: Terrain,
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

/// What a step did, for a search.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct StepInfo {
    /// Whether the step was a push (rules.md): cargo stands elsewhere or has vanished.
    pub pushed: bool,
    /// Whether the objective holds after it.
    pub finished: bool,
    /// Under Drag, the slot of the moved block in the position after the step, to tell whether the next step continues the move;
    /// [`StepInfo::NO_SLOT`] if it has vanished, and under Steer.
    pub slot: u16,
}

impl StepInfo {
    /// No slot.
    pub const NO_SLOT: u16 = u16::MAX;
}

impl Rules {
    /// Compiles a level.
    ///
    /// # Errors
    /// The problems of severity [`crate::level::Severity::Invalid`] that [`crate::level::problems`] finds.
    pub fn compile(mechanics: &Mechanics, level: &Level) -> Result<Rules, Vec<Problem>> {
        refuse_invalid(crate::level::problems(mechanics, level))?;
        let tables = Tables::compile(mechanics, level);
        let goal = goal::compile(mechanics, level, &tables);
        Ok(Rules::assemble(tables, Some(goal)))
    }

    /// Compiles a level with the objective off: nothing is ever finished, and what is wrong with homes or objective does not
    /// matter. For counts of the whole step graph.
    ///
    /// # Errors
    /// As [`Rules::compile`], but only from [`crate::level::structural_problems`].
    pub fn compile_open(mechanics: &Mechanics, level: &Level) -> Result<Rules, Vec<Problem>> {
        refuse_invalid(crate::level::structural_problems(mechanics, level))?;
        Ok(Rules::assemble(Tables::compile(mechanics, level), None))
    }

    fn assemble(tables: Tables, goal: Option<Vec<Condition>>) -> Rules {
        Rules {
            layout: Layout::new(&tables),
            terrain: Terrain::new(&tables, goal.as_deref()),
            goal,
            tables,
        }
    }

    /// The same level with one tile closed (rules.md, Measures of a level): nothing can enter it, nor can a warp bring a body
    /// there. Positions are packed alike, so those of both can be compared. The tile should hold no body at the start.
    #[must_use]
    pub fn closing(&self, cell: Cell) -> Rules {
        let mut rules = self.clone();
        let closed = self.tables.size.index(cell) as u16;
        for nexts in &mut rules.tables.next {
            for next in nexts.iter_mut().filter(|next| **next == closed) {
                *next = NONE;
            }
        }
        for twin in &mut rules.tables.twin {
            if *twin == closed {
                *twin = NONE;
            }
        }
        rules.terrain.close(closed, &rules.tables.next);
        rules
    }

    /// Number of words of every packed position.
    pub fn words(&self) -> usize {
        self.layout.words
    }

    /// Steer or Drag.
    pub fn control(&self) -> Control {
        self.tables.control
    }

    /// The position at the start.
    pub fn start(&self) -> Position {
        let mut words = vec![0; self.words()].into_boxed_slice();
        self.pack(&mut self.scratch(), &mut words);
        Position(words)
    }

    /// The position after a step and whether it was a push, or `None` if the step changes nothing.
    /// [`Rules::step_into`] does the same without allocating.
    pub fn step(&self, from: &Position, step: Step) -> Option<(Position, bool)> {
        let mut to = vec![0; self.words()].into_boxed_slice();
        let info = self.step_into(&mut self.scratch(), &from.0, step, &mut to)?;
        Some((Position(to), info.pushed))
    }

    /// Makes a step: writes the position after it to `to`, or returns `None` if it changes nothing; `to` then has no meaning.
    /// What the scratch holds afterwards has no meaning either. Both slices have [`Rules::words`] words.
    pub fn step_into(
        &self,
        scratch: &mut Scratch,
        from: &[u64],
        step: Step,
        to: &mut [u64],
    ) -> Option<StepInfo> {
        self.load(scratch, from);
        let moved = match self.tables.control {
            Control::Steer => self.steer(scratch, step.dir),
            Control::Drag => self.drag(scratch, step.slot, step.dir),
        };
        if !moved {
            return None;
        }
        self.pack(scratch, to);
        if from == to {
            return None;
        }
        for at in 0..scratch.landings.len() {
            let cell = usize::from(scratch.landings[at]);
            scratch.touched[cell] = true;
        }
        Some(StepInfo {
            pushed: self.cargo_moved(scratch),
            finished: self.goal_holds(scratch),
            slot: self.slot_after(scratch, step.slot),
        })
    }

    /// Where the block that was in `slot` before a step under Drag comes in canonical order.
    fn slot_after(&self, s: &Scratch, slot: u16) -> u16 {
        if self.tables.control == Control::Steer || s.at[usize::from(slot)] == NONE {
            return StepInfo::NO_SLOT;
        }
        let body = &self.tables.bodies[usize::from(slot)];
        let (first, end) = self.tables.classes[usize::from(body.class)].slots;
        let anchor = s.at[usize::from(slot)];
        let before = s.at[first..end].iter().filter(|&&at| at < anchor).count();
        (first + before) as u16
    }

    /// All steps that may be tried in a position, in a fixed order; some may change nothing.
    pub fn candidate_steps(&self, from: &Position) -> Vec<Step> {
        let mut scratch = self.scratch();
        let mut steps = Vec::new();
        self.candidate_steps_into(&mut scratch, &from.0, &mut steps);
        steps
    }

    /// Fills `steps` with what [`Rules::candidate_steps`] gives.
    pub fn candidate_steps_into(&self, s: &mut Scratch, from: &[u64], steps: &mut Vec<Step>) {
        steps.clear();
        self.load(s, from);
        self.each_candidate(s, |step| steps.push(step));
    }

    fn each_candidate(&self, s: &Scratch, mut tell: impl FnMut(Step)) {
        if self.tables.control == Control::Steer {
            Dir::ALL
                .into_iter()
                .for_each(|dir| tell(Step { slot: 0, dir }));
            return;
        }
        for (slot, body) in self.tables.bodies.iter().enumerate() {
            let Some(axis) = body.axis.filter(|_| s.at[slot] != NONE) else {
                continue;
            };
            for dir in Dir::ALL.into_iter().filter(|&dir| axis.allows(dir)) {
                let slot = slot as u16;
                tell(Step { slot, dir });
            }
        }
    }

    /// Whether the objective holds.
    pub fn finished(&self, position: &Position) -> bool {
        self.finished_in(&mut self.scratch(), &position.0)
    }

    /// Whether the objective holds, without allocating.
    pub fn finished_in(&self, scratch: &mut Scratch, words: &[u64]) -> bool {
        self.load(scratch, words);
        self.goal_holds(scratch)
    }
}

fn refuse_invalid(mut problems: Vec<Problem>) -> Result<(), Vec<Problem>> {
    problems.retain(|problem| problem.severity == Severity::Invalid);
    if problems.is_empty() {
        Ok(())
    } else {
        Err(problems)
    }
}
