//! All that the desk knows, as plain data. Nothing here draws, waits or touches the disk.
//!
//! The window is a function of [`State`]: panels read it and push [`super::action::Action`]s, [`State::execute`] (in
//! `execute.rs`) carries them out, and what must happen outside (asking the worker, files, the window itself) leaves as
//! [`Effect`]s that the app performs. Answers carry the revision that they are for; one that is not the present revision
//! is stale and is shown as such, never dropped silently, so that the desk does not flicker while the next one is on its way.

use super::action::Action;
use super::answers::{Answers, ShelfAnswers};
use super::playback::Playback;
use super::stroke::Stroke;
use crate::level::{Cell, History, Level, Mechanics, Pack, Problem, problems};
use crate::rules::Rules;
use crate::study::Prove;
use crate::worker::Request;
use std::path::PathBuf;
use std::sync::Arc;

pub use crate::level::Brush;

/// The shape in which a brush is laid on.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Tool {
    /// Every cell that the pointer passes.
    #[default]
    Dot,
    /// A straight line from where the pointer went down.
    Line,
    /// A filled rectangle.
    Box,
    /// All linked cells that look like the first.
    Flood,
    /// Chooses what is on the cell as the brush.
    Pick,
}

impl Tool {
    /// All tools with what they are called.
    pub const ALL: [(Tool, &'static str); 5] = [
        (Tool::Dot, "dot"),
        (Tool::Line, "line"),
        (Tool::Box, "box"),
        (Tool::Flood, "flood"),
        (Tool::Pick, "pick"),
    ];
}

/// An overlay of the board that can be shown or hidden.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum ShowFlag {
    /// Positions folded away, by tile.
    Heat,
    /// Hatching of idle and cut-off tiles.
    IdleTiles,
    /// Outline of what the walker can reach within the present fold.
    FoldReach,
    /// Marks on the cells that a problem is about.
    Problems,
}

/// Which overlays are shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Show {
    /// See [`ShowFlag::Heat`].
    pub heat: bool,
    /// See [`ShowFlag::IdleTiles`].
    pub idle_tiles: bool,
    /// See [`ShowFlag::FoldReach`].
    pub fold_reach: bool,
    /// See [`ShowFlag::Problems`].
    pub problems: bool,
}

impl Default for Show {
    fn default() -> Show {
        Show {
            heat: false,
            idle_tiles: true,
            fold_reach: true,
            problems: true,
        }
    }
}

impl Show {
    /// Whether an overlay is shown.
    pub fn is_on(self, flag: ShowFlag) -> bool {
        match flag {
            ShowFlag::Heat => self.heat,
            ShowFlag::IdleTiles => self.idle_tiles,
            ShowFlag::FoldReach => self.fold_reach,
            ShowFlag::Problems => self.problems,
        }
    }

    /// Shows what is hidden, hides what is shown.
    pub fn toggle(&mut self, flag: ShowFlag) {
        let shown = match flag {
            ShowFlag::Heat => &mut self.heat,
            ShowFlag::IdleTiles => &mut self.idle_tiles,
            ShowFlag::FoldReach => &mut self.fold_reach,
            ShowFlag::Problems => &mut self.problems,
        };
        *shown = !*shown;
    }
}

/// Scale and place of the board.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BoardView {
    /// Side of a cell, in points.
    pub cell_points: f32,
    /// The point of the level, in cells from its top left corner, that is in the middle of the panel.
    pub centre: (f32, f32),
}

/// Dark, light, or as the system has it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum ThemeChoice {
    /// As the system has it.
    #[default]
    System,
    /// Greenhouse at night.
    Dark,
    /// Greenhouse by day.
    Light,
}

/// What the user wants of the program, kept between sessions.
#[derive(Clone, Debug, PartialEq)]
pub struct Settings {
    /// Colours.
    pub theme: ThemeChoice,
    /// Which measure is proved.
    pub prove: Prove,
    /// Seconds that a search may take for a level.
    pub seconds: f64,
    /// Mebibytes that the searches may hold.
    pub mebibytes: u64,
    /// Steps a second while playing.
    pub steps_per_second: f32,
    /// Packs opened lately, the latest first.
    pub recent: Vec<PathBuf>,
}

impl Default for Settings {
    fn default() -> Settings {
        Settings {
            theme: ThemeChoice::System,
            prove: Prove::Steps,
            seconds: 60.0,
            mebibytes: 1024,
            steps_per_second: 4.0,
            recent: Vec::new(),
        }
    }
}

/// Answer to "there are unsaved changes".
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum UnsavedChoice {
    /// Save, then go on.
    Save,
    /// Go on without saving.
    Drop,
    /// Don't go on.
    Stay,
}

/// What a path is wanted for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum PathPurpose {
    /// To open the pack there.
    Open,
    /// To save the pack there.
    Save,
}

/// The dialog that is open, with its fields.
#[derive(Clone, Debug, PartialEq)]
pub enum Dialog {
    /// Name and kinds of a new pack.
    NewPack {
        /// Its name.
        name: String,
        /// Which of [`crate::file::STARTS`] it begins with; none for the kinds of the present pack.
        start: Option<usize>,
    },
    /// Name and size of a new level.
    NewLevel {
        /// Its name.
        name: String,
        /// Columns.
        width: usize,
        /// Rows.
        height: usize,
    },
    /// New name of a level.
    RenameLevel {
        /// Which.
        level: usize,
        /// Its name.
        name: String,
    },
    /// New name of the pack.
    RenamePack {
        /// Its name.
        name: String,
    },
    /// New size of the level on the board.
    Resize {
        /// Columns.
        width: usize,
        /// Rows.
        height: usize,
        /// Which part stays, as in [`Action::ResizeLevel`].
        anchor: (u8, u8),
    },
    /// What a search may spend.
    Budget {
        /// Seconds.
        seconds: f64,
        /// Mebibytes.
        mebibytes: u64,
    },
    /// A path typed by hand, where the system has no file dialog.
    Path {
        /// What for.
        purpose: PathPurpose,
        /// As typed.
        text: String,
    },
    /// There are unsaved changes.
    Unsaved,
    /// The file changed on disk since it was read or written.
    ChangedOnDisk {
        /// Where the pack was about to be saved, or none if the change was merely noticed.
        saving_to: Option<PathBuf>,
    },
    /// An autosave was left behind.
    Recovery {
        /// What is known about it, for people.
        about: String,
    },
    /// Something to be read, such as an error.
    Message {
        /// Heading.
        title: String,
        /// Text.
        text: String,
    },
    /// The list of keys.
    Keys,
    /// What this program is.
    About,
}

/// What must happen outside of [`State`]. The app performs these after each frame's actions.
#[derive(Clone, Debug)]
pub enum Effect {
    /// Ask the worker.
    Ask(Request),
    /// Let the user choose a pack to open.
    PickToOpen,
    /// Let the user choose where to save.
    PickToSave,
    /// Read a pack.
    Read(PathBuf),
    /// Write the pack. `force` writes over a file that changed on disk.
    Write {
        /// Where.
        path: PathBuf,
        /// Whether a change on disk is overwritten.
        force: bool,
    },
    /// Read the autosave that was left behind.
    ReadRecovery,
    /// Delete the autosave that was left behind.
    DropRecovery,
    /// Delete the autosave of this session: all is on disk.
    ForgetAutosave,
    /// Keep the settings for the next session.
    KeepSettings,
    /// Close the window.
    Close,
}

/// What is as it is on disk.
#[derive(Clone, Debug)]
pub struct Saved {
    /// The pack when it was last read or written.
    pub pack: Pack,
    /// The fingerprint of the file then; none if it has no file.
    pub print: Option<crate::file::Fingerprint>,
    /// What another program made of the file, if the user was told.
    pub told: Option<crate::file::Fingerprint>,
    /// Whether what is on the desk was never on disk, whatever `pack` says: it was recovered.
    pub never: bool,
}

/// All that the desk knows.
pub struct State {
    /// The pack on the desk.
    pub pack: Pack,
    /// Its file.
    pub path: Option<PathBuf>,
    /// What is on disk.
    pub saved: Saved,
    /// Comments before the pack in its file, kept when it is saved.
    pub preamble: String,
    /// Index of the level on the board. Always a level of the pack.
    pub level: usize,
    /// Counts the edits and changes of level.
    pub revision: u64,
    /// Undo and redo.
    pub history: History,
    /// What is painted.
    pub brush: Brush,
    /// In what shape.
    pub tool: Tool,
    /// The gesture under way.
    pub stroke: Option<Stroke>,
    /// Keyboard cursor.
    pub cursor: Option<Cell>,
    /// Scale and place of the board; none to show the whole level.
    pub view: Option<BoardView>,
    /// How the board was shown in the last frame.
    pub shown: BoardView,
    /// Overlays.
    pub show: Show,
    /// The route on the trail, if one is known. It is stale if its revision is not the present one.
    pub playback: Option<Playback>,
    /// What the worker said about the level on the board.
    pub answers: Answers,
    /// What it said about any level.
    pub shelf: ShelfAnswers,
    /// Problems of the level on the board, of the present revision.
    pub problems: Vec<Problem>,
    /// Cells that are marked because a problem is about them.
    pub marked: Vec<Cell>,
    /// The kinds that the answers are for.
    pub(super) asked_kinds: Arc<Mechanics>,
    /// The level on the board compiled, or none if it is invalid.
    pub rules: Option<Arc<Rules>>,
    /// Whether the mechanics window is open.
    pub mechanics_open: bool,
    /// The open dialog.
    pub dialog: Option<Dialog>,
    /// What is to be done once the question about unsaved changes is settled.
    pub after_unsaved: Option<Box<Action>>,
    /// What was done last, for the status line.
    pub said: String,
    /// Cell under the pointer.
    pub hovered: Option<Cell>,
    /// The user's wishes.
    pub settings: Settings,
    /// The window's clock, in seconds.
    pub now_secs: f64,
    /// What the app must do.
    pub effects: Vec<Effect>,
}

impl State {
    /// A desk with this pack on it. A pack without levels gets an empty one.
    pub fn new(mut pack: Pack, path: Option<PathBuf>, settings: Settings) -> State {
        super::levels::ensure_a_level(&mut pack);
        let brush = Brush::Ground(
            pack.mechanics
                .closed_ground()
                .unwrap_or(crate::level::GroundIx(0)),
        );
        let mut state = State {
            asked_kinds: Arc::clone(&pack.mechanics),
            saved: Saved {
                pack: pack.clone(),
                print: None,
                told: None,
                never: false,
            },
            preamble: String::new(),
            pack,
            path,
            level: 0,
            revision: 0,
            history: History::default(),
            brush,
            tool: Tool::default(),
            stroke: None,
            cursor: None,
            view: None,
            shown: BoardView {
                cell_points: 32.0,
                centre: (0.0, 0.0),
            },
            show: Show::default(),
            playback: None,
            answers: Answers::default(),
            shelf: ShelfAnswers::default(),
            problems: Vec::new(),
            marked: Vec::new(),
            rules: None,
            mechanics_open: false,
            dialog: None,
            after_unsaved: None,
            said: String::new(),
            hovered: None,
            settings,
            now_secs: 0.0,
            effects: Vec::new(),
        };
        state.ask_budget();
        state.level_changed(false);
        state.ask_shelf();
        state
    }

    /// The level on the board.
    pub fn current(&self) -> &Arc<Level> {
        &self.pack.levels[self.level]
    }

    /// The kinds of the pack.
    pub fn mechanics(&self) -> &Arc<Mechanics> {
        &self.pack.mechanics
    }

    /// Whether there are changes that are not on disk.
    pub fn is_dirty(&self) -> bool {
        self.saved.never || self.pack != self.saved.pack
    }

    /// Whether the brush paints a kind that the pack does not have.
    pub(super) fn brush_is_gone(&self) -> bool {
        let mechanics = self.mechanics();
        match self.brush {
            Brush::Ground(ix) => usize::from(ix.0) >= mechanics.grounds.len(),
            Brush::Body(ix) => usize::from(ix.0) >= mechanics.bodies.len(),
            Brush::Item(ix) => usize::from(ix.0) >= mechanics.items.len(),
            Brush::Clear => false,
        }
    }

    /// Whether something stamped with `revision` is about the level as it is now.
    pub fn is_fresh(&self, revision: u64) -> bool {
        revision == self.revision
    }

    /// The level on the board is another than before, by an edit (`edited`) or because another level is shown: everything
    /// that is known about it is out of date, and the worker is asked.
    pub(super) fn level_changed(&mut self, edited: bool) {
        self.revision += 1;
        let level = Arc::clone(self.current());
        self.marked.clear();
        self.problems = problems(&self.pack.mechanics, &level);
        self.rules = Rules::compile(&self.pack.mechanics, &level)
            .ok()
            .map(Arc::new);
        let last_route = self
            .playback
            .as_ref()
            .map(|playback| playback.route.clone());
        if !edited {
            self.answers = Answers::default();
            self.playback = None;
        }
        self.effects.push(Effect::Ask(Request::Study {
            revision: self.revision,
            mechanics: Arc::clone(&self.pack.mechanics),
            level,
            prove: self.settings.prove,
            last_route: last_route.filter(|_| edited),
            studies: true,
        }));
    }

    /// Asks for the verdicts of all levels, for the shelf.
    pub(super) fn ask_shelf(&mut self) {
        self.effects.push(Effect::Ask(Request::Shelf {
            mechanics: Arc::clone(&self.pack.mechanics),
            levels: self.pack.levels.clone(),
            prove: self.settings.prove,
        }));
    }

    /// Tells the worker what it may spend.
    pub(super) fn ask_budget(&mut self) {
        self.effects.push(Effect::Ask(Request::Budget {
            seconds: self.settings.seconds,
            mebibytes: self.settings.mebibytes,
        }));
    }
}
