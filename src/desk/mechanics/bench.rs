//! The try-out bench: a scratch board, not part of the pack, to feel a mechanic before using it.

use super::scene::{cell_rect, paint_view};
use crate::desk::pictures::Pictures;
use crate::desk::state::State;
use crate::desk::theme::Theme;
use crate::level::{
    Brush, Cell, Control, Dir, DragStep, GroundIx, KindId, Level, Mechanics, Route, Severity, Size,
    structural_problems,
};
use crate::rules::{Rules, View};
use egui::{Key, Modifiers, Rect, RichText, Sense, Stroke, StrokeKind, Ui, WidgetInfo, vec2};
use std::sync::Arc;

/// Columns and rows of the bench.
const SIDES: (usize, usize) = (11, 7);

/// The scratch board and what was played on it.
#[derive(Default)]
pub struct Bench {
    board: Option<Board>,
}

struct Board {
    mechanics: Arc<Mechanics>,
    level: Level,
    steps: Vec<DragStep>,
    /// The block that the arrow keys drag.
    block: u16,
    /// Where the pointer went down on a block, to drag it.
    held: Option<Cell>,
}

impl Board {
    fn new(mechanics: &Arc<Mechanics>) -> Option<Board> {
        let size = Size::new(SIDES.0, SIDES.1)?;
        let level = crate::desk::levels::empty_level(mechanics, "try-out", size);
        Some(Board {
            mechanics: Arc::clone(mechanics),
            level,
            steps: Vec::new(),
            block: 0,
            held: None,
        })
    }

    /// The pack's kinds may have changed: what is on the board follows by id, and what has no kind any more vanishes.
    fn follow(&mut self, mechanics: &Arc<Mechanics>) {
        if Arc::ptr_eq(&self.mechanics, mechanics) {
            return;
        }
        let old = Arc::clone(&self.mechanics);
        let floor = GroundIx(0);
        let ground = |id: &KindId| mechanics.find_ground(id).unwrap_or(floor);
        self.level
            .ground
            .iter_mut()
            .for_each(|ix| *ix = ground(&old.ground(*ix).id));
        self.level
            .bodies
            .iter_mut()
            .for_each(|body| *body = body.and_then(|ix| mechanics.find_body(&old.body(ix).id)));
        self.level
            .items
            .iter_mut()
            .for_each(|item| *item = item.and_then(|ix| mechanics.find_item(&old.item(ix).id)));
        self.mechanics = Arc::clone(mechanics);
        self.steps.clear();
    }

    fn route(&self) -> Route {
        match self.mechanics.control {
            Control::Steer => Route::Steer(self.steps.iter().map(|step| step.dir).collect()),
            Control::Drag => Route::Drag(self.steps.clone()),
        }
    }

    /// What stands where after the steps, or what keeps the board from being played.
    fn view(&self) -> Result<View, String> {
        let invalid = |problem: &&crate::level::Problem| problem.severity == Severity::Invalid;
        if let Some(problem) = structural_problems(&self.mechanics, &self.level)
            .iter()
            .find(invalid)
        {
            return Err(problem.text.clone());
        }
        let rules = Rules::compile_open(&self.mechanics, &self.level).map_err(|problems| {
            problems
                .first()
                .map(|problem| problem.text.clone())
                .unwrap_or_default()
        })?;
        let played = rules.play(&self.route());
        Ok(played
            .last()
            .map_or_else(|| rules.start_view(), |last| last.view.clone()))
    }

    /// Makes a step, if it changes anything.
    fn step(&mut self, dir: Dir) {
        let Ok(rules) = Rules::compile_open(&self.mechanics, &self.level) else {
            return;
        };
        self.steps.push(DragStep {
            block: self.block,
            dir,
        });
        if rules.play(&self.route()).len() < self.steps.len() {
            self.steps.pop();
        }
    }
}

impl Bench {
    /// Draws the bench; it paints with the brush of the tray.
    pub fn show(&mut self, ui: &mut Ui, state: &State, pictures: &mut Pictures) {
        if self.board.is_none() {
            self.board = Board::new(state.mechanics());
        }
        let Some(board) = &mut self.board else { return };
        board.follow(state.mechanics());
        ui.label(
            RichText::new("Paint with the brush of the tray, clear with the right button. Click the board, then play with the arrow keys; Backspace takes a step back.")
                .color(Theme::of(ui).muted),
        );
        let mut renew = false;
        ui.horizontal(|ui| {
            if ui.button("Back to the start").clicked() {
                board.steps.clear();
            }
            renew = ui.button("Clear the bench").clicked();
            ui.label(format!("{} steps", board.steps.len()));
        });
        let view = board.view();
        if let Err(said) = &view {
            ui.label(RichText::new(said).color(Theme::of(ui).coral));
        }
        let view = view.unwrap_or_else(|_| start_view(&board.level));
        board_area(ui, state, pictures, board, &view);
        if renew {
            self.board = None;
        }
    }
}

fn board_area(ui: &mut Ui, state: &State, pictures: &mut Pictures, board: &mut Board, view: &View) {
    let size = board.level.size;
    let room = ui.available_size();
    let side = (room.x / size.width() as f32)
        .min((room.y - 8.0) / size.height() as f32)
        .clamp(16.0, 56.0)
        .floor();
    let (rect, response) = ui.allocate_exact_size(
        vec2(size.width() as f32, size.height() as f32) * side,
        Sense::click_and_drag(),
    );
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Canvas, true, "Try-out bench"));
    paint_view(ui.painter(), pictures, size, view, rect, side);
    let theme = Theme::of(ui);
    for x in 0..=size.width() {
        ui.painter().vline(
            rect.left() + x as f32 * side,
            rect.y_range(),
            theme.hairline(),
        );
    }
    for y in 0..=size.height() {
        ui.painter().hline(
            rect.x_range(),
            rect.top() + y as f32 * side,
            theme.hairline(),
        );
    }
    if board.mechanics.control == Control::Drag
        && let Some(chosen) = view.bodies.iter().find(|body| body.number == board.block)
    {
        for &cell in &chosen.cells {
            ui.painter().rect_stroke(
                cell_rect(rect, side, cell),
                4.0,
                Stroke::new(2.0, theme.amber),
                StrokeKind::Inside,
            );
        }
    }
    if response.has_focus() {
        ui.painter().rect_stroke(
            rect,
            2.0,
            Stroke::new(2.0, theme.amber),
            StrokeKind::Outside,
        );
        ui.memory_mut(|memory| {
            let arrows = egui::EventFilter {
                horizontal_arrows: true,
                vertical_arrows: true,
                ..Default::default()
            };
            memory.set_focus_lock_filter(response.id, arrows);
        });
        keys(ui, board);
    }
    pointer(ui, state, board, view, rect, side, &response);
}

fn keys(ui: &mut Ui, board: &mut Board) {
    let arrows = [
        (Key::ArrowUp, Dir::N),
        (Key::ArrowRight, Dir::E),
        (Key::ArrowDown, Dir::S),
        (Key::ArrowLeft, Dir::W),
    ];
    for (key, dir) in arrows {
        if ui.input_mut(|input| input.consume_key(Modifiers::NONE, key)) {
            board.step(dir);
        }
    }
    if ui.input_mut(|input| input.consume_key(Modifiers::NONE, Key::Backspace)) {
        board.steps.pop();
    }
}

fn pointer(
    ui: &Ui,
    state: &State,
    board: &mut Board,
    view: &View,
    rect: Rect,
    side: f32,
    response: &egui::Response,
) {
    if response.is_pointer_button_down_on() || response.clicked() {
        response.request_focus();
    }
    let Some(at) = response.interact_pointer_pos() else {
        board.held = None;
        return;
    };
    let inside = rect.contains(at);
    let offset = (at - rect.min) / side;
    let cell = Cell::new(offset.x.max(0.0) as u8, offset.y.max(0.0) as u8);
    if !inside || !board.level.size.contains(cell) {
        return;
    }
    let clear = ui.input(|input| input.pointer.secondary_down());
    let played = !board.steps.is_empty();
    let on_body = view.bodies.iter().find(|body| body.cells.contains(&cell));
    if board.mechanics.control == Control::Drag
        && !clear
        && (board.held.is_some() || (played && on_body.is_some()))
    {
        drag(board, view, cell);
    } else if clear || ui.input(|input| input.pointer.primary_down()) {
        if let (Control::Drag, Some(body)) = (board.mechanics.control, on_body) {
            board.block = body.number;
        }
        let brush = if clear { Brush::Clear } else { state.brush };
        let mut level = board.level.clone();
        level.paint(&board.mechanics, brush, [cell]);
        if level != board.level {
            board.level = level;
            board.steps.clear();
        }
    }
}

/// Moves the held block towards the pointer, a cell at a time.
fn drag(board: &mut Board, view: &View, cell: Cell) {
    let Some(from) = board.held else {
        if let Some(body) = view.bodies.iter().find(|body| body.cells.contains(&cell)) {
            board.block = body.number;
            board.held = Some(cell);
        }
        return;
    };
    let (dx, dy) = (
        i32::from(cell.x) - i32::from(from.x),
        i32::from(cell.y) - i32::from(from.y),
    );
    let dir = match (dx.signum(), dy.signum()) {
        (1, _) => Dir::E,
        (-1, _) => Dir::W,
        (_, 1) => Dir::S,
        (_, -1) => Dir::N,
        _ => return,
    };
    let before = board.steps.len();
    board.step(dir);
    if board.steps.len() > before {
        board.held = board.level.size.neighbour(from, dir);
    }
}

/// What is painted, for a board that can't be played yet.
fn start_view(level: &Level) -> View {
    let bodies = level.bodies_in_order().into_iter().enumerate();
    View {
        ground: level.ground.clone(),
        bodies: bodies
            .map(|(number, body)| crate::rules::ViewBody {
                kind: body.kind,
                cells: body.cells,
                number: number as u16,
            })
            .collect(),
        items: level.items.clone(),
        keys: Vec::new(),
    }
}
