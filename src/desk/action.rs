//! Everything that a user can do, as one enum. Panels only push actions; [`super::state::State::execute`] alone carries them out.

use super::state::{BoardView, Brush, Dialog, ShowFlag, ThemeChoice, Tool, UnsavedChoice};
use crate::level::{Cell, Pack, Turn};
use crate::study::Prove;
use std::path::PathBuf;

/// One thing that a user did. Menus, keys, panels and tests all speak through it.
#[derive(Clone, Debug, PartialEq)]
pub enum Action {
    // --- File -----------------------------------------------------------------------------------------------------
    /// Ask for the name of a new pack.
    NewPack,
    /// Begin a new pack; asks about unsaved changes first.
    CreatePack {
        /// Its name.
        name: String,
        /// Which of [`crate::file::STARTS`] it begins with; none for the kinds of the present pack.
        start: Option<usize>,
    },
    /// Ask which pack to open.
    Open,
    /// Open this pack; asks about unsaved changes first.
    OpenPath(PathBuf),
    /// Open this pack; the question about unsaved changes has been settled.
    OpenNow(PathBuf),
    /// Save where the pack came from, or ask where.
    Save,
    /// Ask where to save.
    SaveAs,
    /// Save here.
    SaveTo(PathBuf),
    /// Save over a file that changed on disk since it was read.
    Overwrite(PathBuf),
    /// Read the file again in place of what is on the desk. Undo brings that back.
    Reload,
    /// Take this pack from an autosave left behind by a session that did not end well.
    Recover,
    /// Throw that autosave away.
    DropRecovery,
    /// Close the window; asks about unsaved changes first.
    Quit,
    /// The answer to the question about unsaved changes.
    Unsaved(UnsavedChoice),

    // --- Edit -----------------------------------------------------------------------------------------------------
    /// Take back the last gesture.
    Undo,
    /// Do the last undone gesture again.
    Redo,
    /// Choose what is painted.
    ChooseBrush(Brush),
    /// Choose the kind behind a number key, 0 to 9: first the grounds, then bodies and items.
    ChooseNth(usize),
    /// Choose the shape of the brush.
    ChooseTool(Tool),
    /// The pointer went down on a cell; `clear` with the right button.
    StrokeStart {
        /// Where.
        cell: Cell,
        /// Whether the stroke takes away instead of painting.
        clear: bool,
    },
    /// The pointer moved to another cell while down.
    StrokeMove(Cell),
    /// The pointer went up: the gesture becomes one entry of the history.
    StrokeEnd,
    /// Give up the gesture: everything is as before it.
    StrokeCancel,
    /// Move the keyboard cursor by (columns, rows).
    MoveCursor(i32, i32),
    /// Paint (or clear) the cell under the keyboard cursor.
    PaintAtCursor {
        /// Whether to take away instead.
        clear: bool,
    },
    /// Hide the keyboard cursor.
    HideCursor,

    // --- View -----------------------------------------------------------------------------------------------------
    /// Scale the board by this factor about its centre.
    Zoom(f32),
    /// Scale and place the board so.
    SetView(BoardView),
    /// Show the whole level.
    Fit,
    /// Mark these cells on the board until the next edit, as those that a problem is about.
    MarkCells(Vec<Cell>),
    /// Show or hide an overlay.
    Toggle(ShowFlag),
    /// Dark, light, or as the system has it.
    SetTheme(ThemeChoice),

    // --- Level ----------------------------------------------------------------------------------------------------
    /// Put this level of the pack on the board.
    ShowLevel(usize),
    /// Put the level before or after the present one on the board.
    StepLevel(i32),
    /// Ask for name and size of a new level.
    NewLevel,
    /// Add a level after the present one, closed at its border, and show it.
    AddLevel {
        /// Its name.
        name: String,
        /// Columns, 1 to 64.
        width: usize,
        /// Rows, 1 to 64.
        height: usize,
    },
    /// Add a copy after the level.
    DuplicateLevel(usize),
    /// Ask for a new name of the level.
    AskRename(usize),
    /// Rename a level.
    RenameLevel(usize, String),
    /// Take a level out of the pack.
    DeleteLevel(usize),
    /// Move a level to another place in the playing order.
    MoveLevel {
        /// Where it is.
        from: usize,
        /// Where it will be.
        to: usize,
    },
    /// Ask for a new size of the level on the board.
    AskResize,
    /// Change the size of the level on the board.
    ResizeLevel {
        /// Columns, 1 to 64.
        width: usize,
        /// Rows, 1 to 64.
        height: usize,
        /// Which part stays: 0 the left or top, 1 the middle, 2 the right or bottom; for columns and rows.
        anchor: (u8, u8),
    },
    /// Turn or mirror the level on the board.
    TurnLevel(Turn),
    /// Cut the level on the board down to what is open, with one cell around it.
    CropLevel,
    /// Close the border of the level on the board.
    SurroundLevel,
    /// Note the route on the trail as the one that the designer means.
    MeanThisRoute,
    /// Note the proved figures of the level on the board as its approved par.
    ApprovePar,
    /// Ask the worker about the level on the board again, as after a stop or with another budget.
    StudyAgain,
    /// Stop the search; what is known stays.
    StopSearch,

    // --- Pack -----------------------------------------------------------------------------------------------------
    /// Rename the pack.
    RenamePack(String),
    /// Ask for a new name of the pack.
    AskRenamePack,
    /// Which measure is proved.
    SetProve(Prove),
    /// What a search may spend.
    SetBudget {
        /// Seconds for each level.
        seconds: f64,
        /// Mebibytes.
        mebibytes: u64,
    },
    /// Ask what a search may spend.
    AskBudget,

    /// Show or hide the mechanics window.
    ToggleMechanics,
    /// Take this pack with other kinds or pack-wide rules, as one edit; refused if its mechanics can't be saved.
    Rework {
        /// What was done.
        label: String,
        /// The pack afterwards.
        pack: Box<Pack>,
    },
    /// Say something in the status line.
    Say(String),

    // --- Trail ----------------------------------------------------------------------------------------------------
    /// Go to the start of the route.
    First,
    /// One step back.
    Back,
    /// Start or stop playing.
    PlayPause,
    /// One step forward.
    Forward,
    /// Go to the end of the route.
    Last,
    /// Go to after this many steps.
    Scrub(usize),
    /// Steps a second while playing.
    SetSpeed(f32),

    // --- Dialogs and help ------------------------------------------------------------------------------------------
    /// Open a dialog.
    ShowDialog(Dialog),
    /// The fields of the open dialog changed.
    DialogChanged(Dialog),
    /// Close the open dialog and give up what waited for it.
    CloseDialog,
    /// Close the open dialog; what waited for it goes on.
    PutDialogAway,
    /// Show the list of keys.
    ShowKeys,
    /// Say what this program is.
    ShowAbout,
}
