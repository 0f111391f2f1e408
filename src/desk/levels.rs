//! The levels of the pack as a list: adding, copying, renaming, moving, resizing.

use super::state::{Brush, State};
use crate::level::{GroundIx, Level, Mechanics, Pack, Size, Turn};
use std::sync::Arc;

/// Columns and rows of a level that nobody chose a size for.
pub const USUAL_SIZE: (usize, usize) = (12, 9);

/// An empty level: plain ground with a closed border, where the pack has such kinds.
pub fn empty_level(mechanics: &Mechanics, name: &str, size: Size) -> Level {
    let plain = mechanics
        .grounds
        .iter()
        .position(|kind| !kind.closed_to_all())
        .unwrap_or(0);
    let mut level = Level::filled(name, size, GroundIx(plain as u16));
    if let Some(closed) = mechanics.closed_ground() {
        let border = size.cells().filter(|cell| {
            cell.x == 0
                || cell.y == 0
                || usize::from(cell.x) + 1 == size.width()
                || usize::from(cell.y) + 1 == size.height()
        });
        level.paint(mechanics, Brush::Ground(closed), border);
    }
    level
}

/// Gives a pack without levels an empty one.
pub(super) fn ensure_a_level(pack: &mut Pack) {
    if pack.levels.is_empty()
        && let Some(size) = Size::new(USUAL_SIZE.0, USUAL_SIZE.1)
    {
        let level = empty_level(&pack.mechanics, "Level 1", size);
        pack.levels.push(Arc::new(level));
    }
}

/// By how many cells the content moves when a side changes from `old` to `new` cells; see [`super::action::Action::ResizeLevel`].
fn shift(old: usize, new: usize, anchor: u8) -> i32 {
    (new as i32 - old as i32) * i32::from(anchor.min(2)) / 2
}

impl State {
    /// Changes the pack in one labelled step that can be undone.
    pub(super) fn edit_pack(&mut self, label: impl Into<String>, edit: impl FnOnce(&mut Pack)) {
        self.end_stroke();
        let before = self.pack.clone();
        let board_before = Arc::clone(self.current());
        let label = label.into();
        edit(&mut self.pack);
        if self.pack == before {
            return;
        }
        self.history.record(label.clone(), before);
        self.said = label;
        self.settle(&board_before, true);
        self.ask_shelf();
    }

    /// After the pack was replaced as a whole: keeps the index in range and asks about the level on the board if it is another.
    pub(super) fn settle(&mut self, board_before: &Arc<Level>, same_place: bool) {
        self.level = self.level.min(self.pack.levels.len().saturating_sub(1));
        let other_kinds = self.follow_kinds();
        if other_kinds || !Arc::ptr_eq(board_before, self.current()) {
            if board_before.size != self.current().size {
                self.view = None;
                self.cursor = None;
            }
            self.level_changed(same_place);
        }
    }

    /// Puts another level on the board.
    pub(super) fn show_level(&mut self, level: usize) {
        self.end_stroke();
        if level < self.pack.levels.len() && level != self.level {
            self.level = level;
            self.view = None;
            self.cursor = None;
            self.said = format!("showing level {}", level + 1);
            self.level_changed(false);
        }
    }

    /// Adds an empty level after the present one.
    pub(super) fn add_level(&mut self, name: &str, width: usize, height: usize) {
        let Some(size) = Size::new(width, height) else {
            self.said = "a side of a level has 1 to 64 cells".to_owned();
            return;
        };
        let level = Arc::new(empty_level(self.mechanics(), name, size));
        self.insert_level(format!("added level {name}"), self.level + 1, level);
    }

    /// Adds a copy of a level after it.
    pub(super) fn duplicate_level(&mut self, level: usize) {
        if let Some(original) = self.pack.levels.get(level) {
            let mut copy = Level::clone(original);
            copy.name = format!("{} copy", copy.name);
            self.insert_level(
                format!("duplicated level {}", level + 1),
                level + 1,
                Arc::new(copy),
            );
        }
    }

    fn insert_level(&mut self, label: String, at: usize, level: Arc<Level>) {
        self.edit_pack(label, |pack| pack.levels.insert(at, level));
        let said = std::mem::take(&mut self.said);
        self.show_level(at);
        self.said = said;
    }

    /// Renames a level.
    pub(super) fn rename_level(&mut self, level: usize, name: String) {
        if level < self.pack.levels.len() {
            self.edit_pack(format!("renamed level {} to {name}", level + 1), |pack| {
                Arc::make_mut(&mut pack.levels[level]).name = name;
            });
        }
    }

    /// Takes a level out. The last one is replaced by an empty one.
    pub(super) fn delete_level(&mut self, level: usize) {
        if level >= self.pack.levels.len() {
            return;
        }
        let shown = self.level;
        self.playback = None;
        self.edit_pack(format!("deleted level {}", level + 1), |pack| {
            pack.levels.remove(level);
            ensure_a_level(pack);
        });
        if level < shown {
            self.level = shown - 1;
            self.level_changed(false);
        }
    }

    /// Moves a level in the playing order; the level on the board stays on it.
    pub(super) fn move_level(&mut self, from: usize, to: usize) {
        let count = self.pack.levels.len();
        if from >= count || to >= count || from == to {
            return;
        }
        let shown = Arc::clone(self.current());
        let shown_at = self.level;
        let moved_at = if shown_at == from {
            to
        } else if from < shown_at && shown_at <= to {
            shown_at - 1
        } else if to <= shown_at && shown_at < from {
            shown_at + 1
        } else {
            shown_at
        };
        self.end_stroke();
        let before = self.pack.clone();
        let level = self.pack.levels.remove(from);
        self.pack.levels.insert(to, level);
        self.level = moved_at;
        debug_assert!(Arc::ptr_eq(&shown, self.current()));
        self.said = format!("moved level {} to place {}", from + 1, to + 1);
        self.history.record(self.said.clone(), before);
    }

    /// Changes the size of the level on the board.
    pub(super) fn resize_level(&mut self, width: usize, height: usize, anchor: (u8, u8)) {
        let Some(size) = Size::new(width, height) else {
            self.said = "a side of a level has 1 to 64 cells".to_owned();
            return;
        };
        let old = self.current().size;
        let dx = shift(old.width(), width, anchor.0);
        let dy = shift(old.height(), height, anchor.1);
        let fill = self.mechanics().closed_ground().unwrap_or(GroundIx(0));
        let level = self.current().resized(size, dx, dy, fill);
        self.replace_level(format!("resized to {width} by {height}"), level);
    }

    fn replace_level(&mut self, label: impl Into<String>, level: Level) {
        let at = self.level;
        self.edit_pack(label, |pack| pack.levels[at] = Arc::new(level));
    }

    /// Turns or mirrors the level on the board.
    pub(super) fn turn_level(&mut self, turn: Turn) {
        let (level, left_alone) = self.current().turned(self.mechanics(), turn);
        let how = match turn {
            Turn::Right => "turned right",
            Turn::Left => "turned left",
            Turn::Half => "turned half around",
            Turn::MirrorRow => "mirrored left and right",
            Turn::MirrorColumn => "mirrored top and bottom",
        };
        self.playback = None;
        self.replace_level(how, level);
        if !left_alone.is_empty() {
            self.said = format!(
                "{how}; {} cells have a one-way ground without a turned twin in the pack and stayed as they were",
                left_alone.len()
            );
        }
    }

    /// Cuts the level on the board down to what is open.
    pub(super) fn crop_level(&mut self) {
        let level = self.current().cropped(self.mechanics());
        self.replace_level("cropped", level);
    }

    /// Closes the border of the level on the board.
    pub(super) fn surround_level(&mut self) {
        match self.mechanics().closed_ground() {
            Some(closed) => {
                let level = self.current().surrounded(self.mechanics(), closed);
                self.replace_level("closed the border", level);
            }
            None => self.said = "the pack has no ground that is closed to everything".to_owned(),
        }
    }

    /// Notes the route on the trail as the one that the designer means.
    pub(super) fn mean_this_route(&mut self) {
        let Some(playback) = &self.playback else {
            return;
        };
        let (at, route) = (self.level, playback.route.clone());
        self.edit_pack("noted the intended route", |pack| {
            Arc::make_mut(&mut pack.levels[at]).intended = Some(route);
        });
    }

    /// Notes the proved figures of the level on the board as its approved par. A figure that is not proved is not approved.
    pub(super) fn approve_par(&mut self) {
        let proved = |figure: Option<crate::study::Figure>| {
            figure
                .filter(|figure| figure.proved)
                .map(|figure| figure.fewest)
        };
        let par = match self.answers.report() {
            Some((revision, report)) if self.is_fresh(revision) => crate::level::Par {
                steps: proved(report.steps),
                pushes: proved(report.pushes),
            },
            _ => return,
        };
        if par == crate::level::Par::default() {
            return;
        }
        let at = self.level;
        self.edit_pack("approved the par", |pack| {
            Arc::make_mut(&mut pack.levels[at]).par = Some(par);
        });
    }

    /// Goes one step back (`undo`) or forward in the history.
    pub(super) fn travel(&mut self, undo: bool) {
        self.end_stroke();
        let board_before = Arc::clone(self.current());
        let before = self.pack.clone();
        let label = if undo {
            self.history.undo(&mut self.pack)
        } else {
            self.history.redo(&mut self.pack)
        };
        let Some(label) = label else {
            self.said = if undo {
                "nothing to undo"
            } else {
                "nothing to redo"
            }
            .to_owned();
            return;
        };
        self.said = format!("{}: {label}", if undo { "undone" } else { "redone" });
        let shown = self.level;
        self.level = where_changed(&before, &self.pack, shown);
        self.settle(&board_before, self.level == shown);
        if !Arc::ptr_eq(&before.mechanics, &self.pack.mechanics) {
            self.shelf.clear();
        }
        self.ask_shelf();
    }
}

/// Which level to show after going through the history: the shown one if it changed or nothing did, else the first changed.
fn where_changed(before: &Pack, after: &Pack, shown: usize) -> usize {
    let differs = |at: usize| before.levels.get(at) != after.levels.get(at);
    let last = after.levels.len().saturating_sub(1);
    if differs(shown) && shown <= last {
        return shown;
    }
    (0..before.levels.len().max(after.levels.len()))
        .find(|&at| differs(at))
        .unwrap_or(shown)
        .min(last)
}
