//! Painting: a gesture from pointer down to pointer up, and the one entry of the history that it becomes.

use super::state::{Brush, State, Tool};
use crate::level::{
    Cell, Control, Level, MOST_BLOCK_CELLS, Mechanics, Pack, box_cells, flood_cells, line_cells,
};
use std::sync::Arc;

/// A gesture under way.
#[derive(Clone, Debug)]
pub struct Stroke {
    /// What it lays on.
    pub brush: Brush,
    /// In what shape.
    pub tool: Tool,
    /// Where the pointer went down.
    pub from: Cell,
    /// Where it is now.
    pub to: Cell,
    /// The pack before the gesture.
    before: Pack,
    /// Under control Drag, the cells of the one body that a free-hand gesture draws.
    block: Vec<Cell>,
}

impl Stroke {
    /// The cells that a line or box would cover if the pointer went up now. Empty for the other shapes, which paint at once.
    pub fn preview(&self) -> Vec<Cell> {
        match self.tool {
            Tool::Line => line_cells(self.from, self.to),
            Tool::Box => box_cells(self.from, self.to),
            Tool::Dot | Tool::Flood | Tool::Pick => Vec::new(),
        }
    }
}

impl State {
    /// The pointer went down.
    pub(super) fn start_stroke(&mut self, cell: Cell, clear: bool) {
        self.end_stroke();
        self.cursor = None;
        if !self.current().size.contains(cell) {
            return;
        }
        if self.tool == Tool::Pick && !clear {
            self.pick(cell);
            return;
        }
        let tool = match self.tool {
            Tool::Pick => Tool::Dot,
            tool => tool,
        };
        self.back_to_start();
        self.stroke = Some(Stroke {
            brush: if clear { Brush::Clear } else { self.brush },
            tool,
            from: cell,
            to: cell,
            before: self.pack.clone(),
            block: Vec::new(),
        });
        match tool {
            Tool::Dot => self.dab(vec![cell]),
            Tool::Flood => {
                let level = Arc::clone(self.current());
                self.lay(flood_cells(level.size, cell, |other| {
                    looks_alike(&level, cell, other)
                }));
            }
            Tool::Line | Tool::Box | Tool::Pick => {}
        }
    }

    /// The pointer moved while down.
    pub(super) fn move_stroke(&mut self, cell: Cell) {
        let size = self.current().size;
        let Some(stroke) = self.stroke.as_mut().filter(|_| size.contains(cell)) else {
            return;
        };
        let passed = line_cells(stroke.to, cell);
        stroke.to = cell;
        if stroke.tool == Tool::Dot {
            self.dab(passed);
        }
    }

    /// Free-hand painting. Under control Drag one gesture with a body draws one body; begun on a body of the same kind, it
    /// makes that one grow.
    fn dab(&mut self, cells: Vec<Cell>) {
        let drags = self.mechanics().control == Control::Drag;
        let (index, mechanics) = (self.level, Arc::clone(self.mechanics()));
        let Some(stroke) = self.stroke.as_mut() else {
            return;
        };
        let Brush::Body(kind) = stroke.brush else {
            return self.lay(cells);
        };
        if !drags {
            return self.lay(cells);
        }
        let before = &stroke.before.levels[index];
        if stroke.block.is_empty()
            && let Some(at) = before.block_at(stroke.from)
            && before.blocks[at].kind == kind
        {
            stroke.block = before.blocks[at].cells.clone();
        }
        for cell in side_by_side(&cells) {
            if !stroke.block.contains(&cell) && stroke.block.len() < MOST_BLOCK_CELLS {
                stroke.block.push(cell);
            }
        }
        let mut level = Level::clone(before);
        level.lay_block(&mechanics, kind, &stroke.block);
        if level != **self.current() {
            self.pack.levels[self.level] = Arc::new(level);
            self.level_changed(true);
        }
    }

    /// The pointer went up: what was changed becomes one entry of the history.
    pub(super) fn end_stroke(&mut self) {
        let Some(stroke) = self.stroke.clone() else {
            return;
        };
        let preview = stroke.preview();
        if !preview.is_empty() {
            self.lay(preview);
        }
        self.stroke = None;
        if self.pack == stroke.before {
            return;
        }
        let label = self.stroke_label(&stroke);
        self.history.record(label.clone(), stroke.before);
        self.said = label;
    }

    /// Gives the gesture up.
    pub(super) fn cancel_stroke(&mut self) {
        if let Some(stroke) = self.stroke.take()
            && self.pack != stroke.before
        {
            self.pack = stroke.before;
            self.level_changed(true);
        }
    }

    /// Chooses what is on a cell as the brush: the body, else the item, else the ground.
    pub(super) fn pick(&mut self, cell: Cell) {
        let level = self.current();
        self.brush = level
            .body_at(cell)
            .map(Brush::Body)
            .or(level.item_at(cell).map(Brush::Item))
            .unwrap_or(Brush::Ground(level.ground_at(cell)));
        self.said = format!("picked {}", brush_label(self.mechanics(), self.brush));
    }

    fn lay(&mut self, cells: impl IntoIterator<Item = Cell>) {
        let Some(stroke) = &self.stroke else {
            return;
        };
        let cells: Vec<Cell> = cells.into_iter().collect();
        let (brush, mechanics) = (stroke.brush, Arc::clone(self.mechanics()));
        let mut level = Level::clone(self.current());
        match brush {
            Brush::Body(kind) if is_block(&mechanics, stroke.tool, &cells) => {
                level.lay_block(&mechanics, kind, &cells);
            }
            brush => level.paint(&mechanics, brush, cells),
        }
        if level != **self.current() {
            self.pack.levels[self.level] = Arc::new(level);
            self.level_changed(true);
        }
    }

    /// Painting is about the start of the level, so that the start is what is shown.
    fn back_to_start(&mut self) {
        if self
            .playback
            .as_ref()
            .is_some_and(|playback| playback.at > 0)
        {
            self.scrub(0);
        }
    }

    fn stroke_label(&self, stroke: &Stroke) -> String {
        let what = match stroke.brush {
            Brush::Clear => "cleared".to_owned(),
            brush => format!("painted {}", brush_label(self.mechanics(), brush)),
        };
        if stroke.from == stroke.to {
            format!("{what} at {}, {}", stroke.from.x, stroke.from.y)
        } else {
            format!(
                "{what} from {}, {} to {}, {}",
                stroke.from.x, stroke.from.y, stroke.to.x, stroke.to.y
            )
        }
    }
}

/// The cells with a corner put in wherever two that follow each other touch only at a corner.
fn side_by_side(cells: &[Cell]) -> Vec<Cell> {
    let mut linked: Vec<Cell> = Vec::new();
    for &cell in cells {
        if let Some(&last) = linked.last()
            && last.x != cell.x
            && last.y != cell.y
        {
            linked.push(Cell::new(cell.x, last.y));
        }
        linked.push(cell);
    }
    linked
}

/// Under control Drag a line or box of a body lays one block, not many single bodies.
fn is_block(mechanics: &Mechanics, tool: Tool, cells: &[Cell]) -> bool {
    mechanics.control == Control::Drag
        && matches!(tool, Tool::Line | Tool::Box)
        && (2..=MOST_BLOCK_CELLS).contains(&cells.len())
        && cells
            .windows(2)
            .all(|pair| tool == Tool::Box || pair[0].x == pair[1].x || pair[0].y == pair[1].y)
}

fn looks_alike(level: &Level, one: Cell, other: Cell) -> bool {
    level.ground_at(one) == level.ground_at(other)
        && level.body_at(one) == level.body_at(other)
        && level.item_at(one) == level.item_at(other)
}

/// What people call that which a brush paints.
pub fn brush_label(mechanics: &Mechanics, brush: Brush) -> &str {
    match brush {
        Brush::Ground(ix) => &mechanics.ground(ix).label,
        Brush::Body(ix) => &mechanics.body(ix).label,
        Brush::Item(ix) => &mechanics.item(ix).label,
        Brush::Clear => "nothing",
    }
}
