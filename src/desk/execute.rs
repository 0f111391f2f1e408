//! The executor: the one place where an action changes the desk.

use super::action::Action;
use super::state::{BoardView, Dialog, Effect, PathPurpose, State, UnsavedChoice};
use crate::level::{BodyIx, Brush, Cell, GroundIx, ItemIx};
use std::path::PathBuf;

/// The least and the greatest side of a cell on the board, in points.
pub const CELL_POINTS: std::ops::RangeInclusive<f32> = 3.0..=200.0;

impl State {
    /// Carries out one action. What must happen outside is left in [`State::effects`].
    pub fn execute(&mut self, action: Action) {
        match action {
            Action::NewPack
            | Action::CreatePack { .. }
            | Action::Open
            | Action::OpenPath(_)
            | Action::OpenNow(_)
            | Action::Save
            | Action::SaveAs
            | Action::SaveTo(_)
            | Action::Overwrite(_)
            | Action::Reload
            | Action::Recover
            | Action::DropRecovery
            | Action::Quit
            | Action::Unsaved(_) => self.execute_file(action),
            Action::Undo
            | Action::Redo
            | Action::ChooseBrush(_)
            | Action::ChooseNth(_)
            | Action::ChooseTool(_)
            | Action::StrokeStart { .. }
            | Action::StrokeMove(_)
            | Action::StrokeEnd
            | Action::StrokeCancel
            | Action::MoveCursor(..)
            | Action::PaintAtCursor { .. }
            | Action::HideCursor => self.execute_edit(action),
            Action::ShowLevel(_)
            | Action::StepLevel(_)
            | Action::NewLevel
            | Action::AddLevel { .. }
            | Action::DuplicateLevel(_)
            | Action::AskRename(_)
            | Action::RenameLevel(..)
            | Action::DeleteLevel(_)
            | Action::MoveLevel { .. }
            | Action::AskResize
            | Action::ResizeLevel { .. }
            | Action::TurnLevel(_)
            | Action::CropLevel
            | Action::SurroundLevel
            | Action::MeanThisRoute
            | Action::ApprovePar
            | Action::StudyAgain
            | Action::StopSearch => self.execute_level(action),
            Action::RenamePack(_)
            | Action::AskRenamePack
            | Action::SetProve(_)
            | Action::SetBudget { .. }
            | Action::AskBudget
            | Action::ToggleMechanics
            | Action::Rework { .. }
            | Action::Say(_) => self.execute_pack(action),
            Action::First
            | Action::Back
            | Action::PlayPause
            | Action::Forward
            | Action::Last
            | Action::Scrub(_)
            | Action::SetSpeed(_) => self.execute_trail(action),
            _ => self.execute_view(action),
        }
    }

    fn execute_file(&mut self, action: Action) {
        match action {
            Action::NewPack => {
                self.dialog = Some(Dialog::NewPack {
                    name: "New pack".to_owned(),
                    start: Some(0),
                });
            }
            Action::Open if !self.asks_first(&action) => self.effects.push(Effect::PickToOpen),
            Action::OpenPath(ref path) if !self.asks_first(&action) => {
                self.effects.push(Effect::Read(path.clone()));
            }
            Action::OpenNow(path) => self.effects.push(Effect::Read(path)),
            Action::CreatePack { ref name, start } if !self.asks_first(&action) => {
                self.create_pack(name.clone(), start);
            }
            Action::Quit if !self.asks_first(&action) => self.close(),
            Action::Save => match self.path.clone() {
                Some(path) => self.write(path, false),
                None => self.effects.push(Effect::PickToSave),
            },
            Action::SaveAs => {
                self.dialog = None;
                self.effects.push(Effect::PickToSave);
            }
            Action::SaveTo(path) => self.write(path, false),
            Action::Overwrite(path) => self.write(path, true),
            Action::Reload => {
                self.dialog = None;
                if let Some(path) = self.path.clone() {
                    self.effects.push(Effect::Read(path));
                }
            }
            Action::Recover => {
                self.dialog = None;
                self.effects.push(Effect::ReadRecovery);
            }
            Action::DropRecovery => {
                self.dialog = None;
                self.effects.push(Effect::DropRecovery);
            }
            Action::Unsaved(choice) => self.answer_unsaved(choice),
            _ => {}
        }
    }

    /// Whether there are unsaved changes, in which case the user is asked and the action waits for the answer.
    fn asks_first(&mut self, action: &Action) -> bool {
        self.end_stroke();
        let asks = self.is_dirty();
        if asks {
            self.dialog = Some(Dialog::Unsaved);
            self.after_unsaved = Some(Box::new(action.clone()));
        }
        asks
    }

    fn answer_unsaved(&mut self, choice: UnsavedChoice) {
        self.dialog = None;
        match choice {
            UnsavedChoice::Stay => self.after_unsaved = None,
            // The waiting action goes on when the pack is known to be on disk.
            UnsavedChoice::Save => self.execute(Action::Save),
            UnsavedChoice::Drop => {
                // The changes are dropped by what follows; if that fails, they are still there.
                if let Some(action) = self.after_unsaved.take() {
                    self.go_on(*action);
                }
            }
        }
    }

    /// Carries out an action that waited for the question about unsaved changes.
    pub(super) fn go_on(&mut self, action: Action) {
        match action {
            Action::Open => self.effects.push(Effect::PickToOpen),
            Action::OpenPath(path) => self.effects.push(Effect::Read(path)),
            Action::CreatePack { name, start } => self.create_pack(name, start),
            Action::Quit => self.close(),
            other => self.execute(other),
        }
    }

    fn close(&mut self) {
        self.effects.push(Effect::KeepSettings);
        self.effects.push(Effect::Close);
    }

    fn write(&mut self, path: PathBuf, force: bool) {
        self.end_stroke();
        self.dialog = None;
        self.effects.push(Effect::Write { path, force });
    }

    fn execute_edit(&mut self, action: Action) {
        match action {
            Action::Undo => self.travel(true),
            Action::Redo => self.travel(false),
            Action::ChooseBrush(brush) => self.brush = brush,
            Action::ChooseNth(nth) => {
                if let Some(brush) = nth_brush(self, nth) {
                    self.brush = brush;
                }
            }
            Action::ChooseTool(tool) => self.tool = tool,
            Action::StrokeStart { cell, clear } => self.start_stroke(cell, clear),
            Action::StrokeMove(cell) => self.move_stroke(cell),
            Action::StrokeEnd => self.end_stroke(),
            Action::StrokeCancel => self.cancel_stroke(),
            Action::MoveCursor(dx, dy) => self.move_cursor(dx, dy),
            Action::PaintAtCursor { clear } => {
                if let Some(cell) = self.cursor {
                    self.start_stroke(cell, clear);
                    self.end_stroke();
                    self.cursor = Some(cell);
                }
            }
            _ => self.cursor = None,
        }
    }

    fn move_cursor(&mut self, dx: i32, dy: i32) {
        let size = self.current().size;
        let moved = |at: u8, by: i32, side: usize| (i32::from(at) + by).clamp(0, side as i32 - 1);
        self.cursor = Some(match self.cursor {
            None => Cell::new((size.width() / 2) as u8, (size.height() / 2) as u8),
            Some(at) => Cell::new(
                moved(at.x, dx, size.width()) as u8,
                moved(at.y, dy, size.height()) as u8,
            ),
        });
    }

    fn execute_level(&mut self, action: Action) {
        match action {
            Action::ShowLevel(level) => self.show_level(level),
            Action::StepLevel(by) => {
                if let Some(to) = self.level.checked_add_signed(by as isize) {
                    self.show_level(to);
                }
            }
            Action::NewLevel => {
                let (width, height) = super::levels::USUAL_SIZE;
                let name = format!("Level {}", self.pack.levels.len() + 1);
                self.dialog = Some(Dialog::NewLevel {
                    name,
                    width,
                    height,
                });
            }
            Action::AddLevel {
                name,
                width,
                height,
            } => self.add_level(&name, width, height),
            Action::DuplicateLevel(level) => self.duplicate_level(level),
            Action::AskRename(level) => {
                self.dialog = self
                    .pack
                    .levels
                    .get(level)
                    .map(|named| Dialog::RenameLevel {
                        level,
                        name: named.name.clone(),
                    });
            }
            Action::RenameLevel(level, name) => self.rename_level(level, name),
            Action::DeleteLevel(level) => self.delete_level(level),
            Action::MoveLevel { from, to } => self.move_level(from, to),
            Action::AskResize => {
                let size = self.current().size;
                self.dialog = Some(Dialog::Resize {
                    width: size.width(),
                    height: size.height(),
                    anchor: (1, 1),
                });
            }
            Action::ResizeLevel {
                width,
                height,
                anchor,
            } => self.resize_level(width, height, anchor),
            Action::TurnLevel(turn) => self.turn_level(turn),
            Action::CropLevel => self.crop_level(),
            Action::SurroundLevel => self.surround_level(),
            Action::MeanThisRoute => self.mean_this_route(),
            Action::ApprovePar => self.approve_par(),
            Action::StopSearch => {
                self.effects.push(Effect::Ask(crate::worker::Request::Stop));
                self.said = "search stopped".to_owned();
            }
            _ => self.level_changed(true),
        }
    }

    fn execute_pack(&mut self, action: Action) {
        match action {
            Action::RenamePack(name) => {
                self.edit_pack(format!("renamed the pack to {name}"), |pack| {
                    pack.name = name;
                });
            }
            Action::AskRenamePack => {
                let name = self.pack.name.clone();
                self.dialog = Some(Dialog::RenamePack { name });
            }
            Action::SetProve(prove) => {
                self.settings.prove = prove;
                self.effects.push(Effect::KeepSettings);
                self.level_changed(true);
                self.ask_shelf();
            }
            Action::SetBudget { seconds, mebibytes } => {
                self.settings.seconds = seconds.clamp(0.1, 86_400.0);
                self.settings.mebibytes = mebibytes.clamp(16, 1 << 20);
                self.effects.push(Effect::KeepSettings);
                self.ask_budget();
                self.level_changed(true);
            }
            Action::ToggleMechanics => self.mechanics_open = !self.mechanics_open,
            Action::Rework { label, pack } => self.rework(label, *pack),
            Action::Say(text) => self.said = text,
            _ => {
                self.dialog = Some(Dialog::Budget {
                    seconds: self.settings.seconds,
                    mebibytes: self.settings.mebibytes,
                });
            }
        }
    }

    fn execute_trail(&mut self, action: Action) {
        let at = self.playback.as_ref().map_or(0, |playback| playback.at);
        match action {
            Action::First => self.scrub(0),
            Action::Back => self.scrub(at.saturating_sub(1)),
            Action::Forward => self.scrub(at + 1),
            Action::Last => self.scrub(usize::MAX),
            Action::Scrub(to) => self.scrub(to),
            Action::SetSpeed(speed) => self.settings.steps_per_second = speed.clamp(0.5, 60.0),
            _ => self.play_or_pause(),
        }
    }

    fn execute_view(&mut self, action: Action) {
        match action {
            Action::Zoom(factor) => {
                let cell_points = self.shown.cell_points * factor;
                self.set_view(BoardView {
                    cell_points,
                    ..self.shown
                });
            }
            Action::SetView(view) => self.set_view(view),
            Action::Fit => self.view = None,
            Action::MarkCells(cells) => self.marked = cells,
            Action::Toggle(flag) => self.show.toggle(flag),
            Action::SetTheme(theme) => {
                self.settings.theme = theme;
                self.effects.push(Effect::KeepSettings);
            }
            Action::ShowDialog(dialog) | Action::DialogChanged(dialog) => {
                self.dialog = Some(dialog);
            }
            Action::CloseDialog => {
                self.dialog = None;
                self.after_unsaved = None;
            }
            Action::PutDialogAway => self.dialog = None,
            Action::ShowKeys => self.dialog = Some(Dialog::Keys),
            Action::ShowAbout => self.dialog = Some(Dialog::About),
            _ => {}
        }
    }

    fn set_view(&mut self, view: BoardView) {
        self.view = Some(BoardView {
            cell_points: view
                .cell_points
                .clamp(*CELL_POINTS.start(), *CELL_POINTS.end()),
            ..view
        });
    }

    /// Asks for a path in a dialog of the window's own, where the system has no file dialog.
    pub(super) fn ask_path(&mut self, purpose: PathPurpose) {
        let text = match (&self.path, purpose) {
            (Some(path), _) => path.display().to_string(),
            (None, PathPurpose::Save) => format!("{}.pack.ron", file_stem(&self.pack.name)),
            (None, PathPurpose::Open) => String::new(),
        };
        self.dialog = Some(Dialog::Path { purpose, text });
    }
}

/// The pack's name as the name of a file: small letters and digits, hyphens between.
pub fn file_stem(name: &str) -> String {
    let words: Vec<String> = name
        .split(|c: char| !c.is_alphanumeric())
        .filter(|word| !word.is_empty())
        .map(str::to_lowercase)
        .collect();
    if words.is_empty() {
        "pack".to_owned()
    } else {
        words.join("-")
    }
}

/// The kind behind a number key: first the grounds, then bodies, then items.
pub fn nth_brush(state: &State, nth: usize) -> Option<Brush> {
    let mechanics = state.mechanics();
    let (grounds, bodies) = (mechanics.grounds.len(), mechanics.bodies.len());
    if nth < grounds {
        Some(Brush::Ground(GroundIx(nth as u16)))
    } else if nth < grounds + bodies {
        Some(Brush::Body(BodyIx((nth - grounds) as u16)))
    } else if nth < grounds + bodies + mechanics.items.len() {
        Some(Brush::Item(ItemIx((nth - grounds - bodies) as u16)))
    } else {
        None
    }
}
