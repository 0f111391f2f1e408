//! The one table of commands: menus, keys and tooltips are made from it.

use super::action::Action;
use super::state::{Brush, ShowFlag, State, ThemeChoice, Tool};
use crate::level::Turn;
use crate::study::Prove;
use egui::{Context, Key, KeyboardShortcut, Modifiers};

/// In which menu a command stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Menu {
    /// Packs on disk.
    File,
    /// Changing the level on the board.
    Edit,
    /// What is shown and how.
    View,
    /// The levels and the route.
    Level,
    /// The pack and its search.
    Pack,
    /// About the program.
    Help,
}

impl Menu {
    /// All menus in their order, with what they are called.
    pub const ALL: [(Menu, &'static str); 6] = [
        (Menu::File, "File"),
        (Menu::Edit, "Edit"),
        (Menu::View, "View"),
        (Menu::Level, "Level"),
        (Menu::Pack, "Pack"),
        (Menu::Help, "Help"),
    ];
}

/// Something that can be chosen from a menu or by a key.
pub struct Command {
    /// Where it stands.
    pub menu: Menu,
    /// What it is called.
    pub name: &'static str,
    /// Its key. `Modifiers::COMMAND` is Ctrl, and Cmd on a Mac.
    pub key: Option<KeyboardShortcut>,
    /// Another key for it, that menus don't show.
    pub other_key: Option<KeyboardShortcut>,
    /// Whether a line is drawn above it.
    pub divided: bool,
    /// What it does.
    pub action: fn(&State) -> Action,
    /// Whether it can be chosen now.
    pub can: fn(&State) -> bool,
    /// Whether it is ticked, for what can be on or off.
    pub ticked: Option<fn(&State) -> bool>,
}

const fn command(menu: Menu, name: &'static str, action: fn(&State) -> Action) -> Command {
    Command {
        menu,
        name,
        key: None,
        other_key: None,
        divided: false,
        action,
        can: |_| true,
        ticked: None,
    }
}

const CTRL_SHIFT: Modifiers = Modifiers::COMMAND.plus(Modifiers::SHIFT);

impl Command {
    const fn key(mut self, modifiers: Modifiers, key: Key) -> Command {
        self.key = Some(KeyboardShortcut::new(modifiers, key));
        self
    }

    const fn plain(self, key: Key) -> Command {
        self.key(Modifiers::NONE, key)
    }

    const fn ctrl(self, key: Key) -> Command {
        self.key(Modifiers::COMMAND, key)
    }

    const fn or(mut self, modifiers: Modifiers, key: Key) -> Command {
        self.other_key = Some(KeyboardShortcut::new(modifiers, key));
        self
    }

    const fn below_a_line(mut self) -> Command {
        self.divided = true;
        self
    }

    const fn can(mut self, can: fn(&State) -> bool) -> Command {
        self.can = can;
        self
    }

    const fn ticked(mut self, ticked: fn(&State) -> bool) -> Command {
        self.ticked = Some(ticked);
        self
    }

    /// What the menu says, which for undo and redo tells what would be undone.
    pub fn text(&self, state: &State) -> String {
        let label = match (self.action)(state) {
            Action::Undo => state.history.undo_label(),
            Action::Redo => state.history.redo_label(),
            _ => None,
        };
        match label {
            Some(label) => format!("{}: {label}", self.name),
            None => self.name.to_owned(),
        }
    }
}

fn has_route(state: &State) -> bool {
    state.playback.is_some()
}

/// All commands, in the order of their menus.
pub static COMMANDS: &[Command] = &[
    command(Menu::File, "New pack…", |_| Action::NewPack).ctrl(Key::N),
    command(Menu::File, "Open…", |_| Action::Open).ctrl(Key::O),
    command(Menu::File, "Save", |_| Action::Save)
        .ctrl(Key::S)
        .below_a_line(),
    command(Menu::File, "Save as…", |_| Action::SaveAs).key(CTRL_SHIFT, Key::S),
    command(Menu::File, "Read again from disk", |_| Action::Reload)
        .can(|state| state.path.is_some()),
    command(Menu::File, "Quit", |_| Action::Quit)
        .ctrl(Key::Q)
        .below_a_line(),
    command(Menu::Edit, "Undo", |_| Action::Undo)
        .ctrl(Key::Z)
        .can(|state| state.history.undo_label().is_some()),
    command(Menu::Edit, "Redo", |_| Action::Redo)
        .key(CTRL_SHIFT, Key::Z)
        .or(Modifiers::COMMAND, Key::Y)
        .can(|state| state.history.redo_label().is_some()),
    command(Menu::Edit, "Brush: dot", |_| Action::ChooseTool(Tool::Dot))
        .plain(Key::D)
        .below_a_line()
        .ticked(|state| state.tool == Tool::Dot),
    command(Menu::Edit, "Brush: line", |_| {
        Action::ChooseTool(Tool::Line)
    })
    .plain(Key::L)
    .ticked(|state| state.tool == Tool::Line),
    command(Menu::Edit, "Brush: box", |_| Action::ChooseTool(Tool::Box))
        .plain(Key::B)
        .ticked(|state| state.tool == Tool::Box),
    command(Menu::Edit, "Brush: flood", |_| {
        Action::ChooseTool(Tool::Flood)
    })
    .plain(Key::F)
    .ticked(|state| state.tool == Tool::Flood),
    command(Menu::Edit, "Brush: pick", |_| {
        Action::ChooseTool(Tool::Pick)
    })
    .plain(Key::I)
    .ticked(|state| state.tool == Tool::Pick),
    command(Menu::Edit, "Paint nothing", |_| {
        Action::ChooseBrush(Brush::Clear)
    })
    .plain(Key::X)
    .below_a_line()
    .ticked(|state| state.brush == Brush::Clear),
    command(Menu::View, "Zoom in", |_| Action::Zoom(1.25))
        .ctrl(Key::Plus)
        .or(Modifiers::COMMAND, Key::Equals),
    command(Menu::View, "Zoom out", |_| Action::Zoom(0.8)).ctrl(Key::Minus),
    command(Menu::View, "Show the whole level", |_| Action::Fit).ctrl(Key::Num0),
    command(Menu::View, "Heat", |_| Action::Toggle(ShowFlag::Heat))
        .plain(Key::H)
        .below_a_line()
        .ticked(|state| state.show.heat),
    command(Menu::View, "Idle tiles", |_| {
        Action::Toggle(ShowFlag::IdleTiles)
    })
    .plain(Key::T)
    .ticked(|state| state.show.idle_tiles),
    command(Menu::View, "Fold reach", |_| {
        Action::Toggle(ShowFlag::FoldReach)
    })
    .plain(Key::R)
    .ticked(|state| state.show.fold_reach),
    command(Menu::View, "Problems", |_| {
        Action::Toggle(ShowFlag::Problems)
    })
    .plain(Key::M)
    .ticked(|state| state.show.problems),
    command(Menu::View, "Colours of the system", |_| {
        Action::SetTheme(ThemeChoice::System)
    })
    .below_a_line()
    .ticked(|state| state.settings.theme == ThemeChoice::System),
    command(Menu::View, "Dark", |_| Action::SetTheme(ThemeChoice::Dark))
        .ticked(|state| state.settings.theme == ThemeChoice::Dark),
    command(Menu::View, "Light", |_| {
        Action::SetTheme(ThemeChoice::Light)
    })
    .ticked(|state| state.settings.theme == ThemeChoice::Light),
    command(Menu::Level, "New level…", |_| Action::NewLevel).key(CTRL_SHIFT, Key::N),
    command(Menu::Level, "Duplicate", |state| {
        Action::DuplicateLevel(state.level)
    })
    .ctrl(Key::D),
    command(Menu::Level, "Rename…", |state| {
        Action::AskRename(state.level)
    })
    .plain(Key::F2),
    command(Menu::Level, "Delete", |state| {
        Action::DeleteLevel(state.level)
    }),
    command(Menu::Level, "Resize…", |_| Action::AskResize)
        .ctrl(Key::R)
        .below_a_line(),
    command(Menu::Level, "Turn right", |_| {
        Action::TurnLevel(Turn::Right)
    }),
    command(Menu::Level, "Mirror left and right", |_| {
        Action::TurnLevel(Turn::MirrorRow)
    }),
    command(Menu::Level, "Mirror top and bottom", |_| {
        Action::TurnLevel(Turn::MirrorColumn)
    }),
    command(Menu::Level, "Crop to what is open", |_| Action::CropLevel),
    command(Menu::Level, "Close the border", |_| Action::SurroundLevel),
    command(Menu::Level, "Previous level", |_| Action::StepLevel(-1))
        .plain(Key::PageUp)
        .below_a_line()
        .can(|state| state.level > 0),
    command(Menu::Level, "Next level", |_| Action::StepLevel(1))
        .plain(Key::PageDown)
        .can(|state| state.level + 1 < state.pack.levels.len()),
    command(Menu::Level, "Move earlier", |state| move_by(state, -1))
        .ctrl(Key::PageUp)
        .can(|state| state.level > 0),
    command(Menu::Level, "Move later", |state| move_by(state, 1))
        .ctrl(Key::PageDown)
        .can(|state| state.level + 1 < state.pack.levels.len()),
    command(Menu::Level, "Play or pause the route", |_| {
        Action::PlayPause
    })
    .plain(Key::P)
    .below_a_line()
    .can(has_route),
    command(Menu::Level, "Step back", |_| Action::Back)
        .plain(Key::Comma)
        .can(has_route),
    command(Menu::Level, "Step forward", |_| Action::Forward)
        .plain(Key::Period)
        .can(has_route),
    command(Menu::Level, "Start of the route", |_| Action::First)
        .plain(Key::Home)
        .can(has_route),
    command(Menu::Level, "End of the route", |_| Action::Last)
        .plain(Key::End)
        .can(has_route),
    command(Menu::Level, "Mean this route", |_| Action::MeanThisRoute).can(has_route),
    command(Menu::Pack, "Rename pack…", |_| Action::AskRenamePack),
    command(Menu::Pack, "Mechanics", |_| Action::ToggleMechanics)
        .plain(Key::F4)
        .ticked(|state| state.mechanics_open),
    command(Menu::Pack, "Prove the fewest steps", |_| {
        Action::SetProve(Prove::Steps)
    })
    .below_a_line()
    .ticked(|state| state.settings.prove == Prove::Steps),
    command(Menu::Pack, "Prove the fewest pushes", |_| {
        Action::SetProve(Prove::Pushes)
    })
    .ticked(|state| state.settings.prove == Prove::Pushes),
    command(Menu::Pack, "Prove both", |_| Action::SetProve(Prove::Both))
        .ticked(|state| state.settings.prove == Prove::Both),
    command(Menu::Pack, "Any route will do", |_| {
        Action::SetProve(Prove::None)
    })
    .ticked(|state| state.settings.prove == Prove::None),
    command(Menu::Pack, "Time and memory of a search…", |_| {
        Action::AskBudget
    })
    .below_a_line(),
    command(Menu::Pack, "Search again", |_| Action::StudyAgain).plain(Key::F5),
    command(Menu::Pack, "Stop the search", |_| Action::StopSearch).key(Modifiers::SHIFT, Key::F5),
    command(Menu::Help, "Keys", |_| Action::ShowKeys).plain(Key::F1),
    command(Menu::Help, "About Foldwright", |_| Action::ShowAbout),
];

fn move_by(state: &State, by: isize) -> Action {
    Action::MoveLevel {
        from: state.level,
        to: state.level.saturating_add_signed(by),
    }
}

/// The key of the command that does `action`, as people read it, such as "Ctrl+Z".
pub fn key_text(ctx: &Context, state: &State, action: &Action) -> Option<String> {
    COMMANDS
        .iter()
        .find(|command| (command.action)(state) == *action)
        .and_then(|command| command.key)
        .map(|key| ctx.format_shortcut(&key))
}

/// What was pressed, as actions. Plain keys are left alone while text is typed, and all keys while a dialog is open.
pub fn pressed(ctx: &Context, state: &State, actions: &mut Vec<Action>) {
    if state.dialog.is_some() || ctx.text_edit_focused() {
        return;
    }
    // The keys with most modifiers first: egui lets a key match when Shift is held beside it.
    for shifted in [true, false] {
        for command in COMMANDS {
            for key in [command.key, command.other_key].into_iter().flatten() {
                if key.modifiers.shift == shifted
                    && ctx.input_mut(|input| input.consume_shortcut(&key))
                    && (command.can)(state)
                {
                    actions.push((command.action)(state));
                }
            }
        }
    }
    number_keys(ctx, actions);
    if state.stroke.is_some()
        && ctx.input_mut(|input| input.consume_key(Modifiers::NONE, Key::Escape))
    {
        actions.push(Action::StrokeCancel);
    }
}

/// Keys 1 to 9 and 0 choose the first ten kinds, with Shift the next ten.
fn number_keys(ctx: &Context, actions: &mut Vec<Action>) {
    const DIGITS: [Key; 10] = [
        Key::Num1,
        Key::Num2,
        Key::Num3,
        Key::Num4,
        Key::Num5,
        Key::Num6,
        Key::Num7,
        Key::Num8,
        Key::Num9,
        Key::Num0,
    ];
    for (nth, key) in DIGITS.into_iter().enumerate() {
        if ctx.input_mut(|input| input.consume_key(Modifiers::SHIFT, key)) {
            actions.push(Action::ChooseNth(nth + 10));
        } else if ctx.input_mut(|input| input.consume_key(Modifiers::NONE, key)) {
            actions.push(Action::ChooseNth(nth));
        }
    }
}

/// The key of the nth kind in the tray, if it has one.
pub fn number_key_text(nth: usize) -> Option<String> {
    let digit = (nth % 10 + 1) % 10;
    match nth {
        0..=9 => Some(digit.to_string()),
        10..=19 => Some(format!("Shift+{digit}")),
        _ => None,
    }
}

/// The keys that are no commands, with what they do.
pub const OTHER_KEYS: &[(&str, &str)] = &[
    (
        "1 to 9, 0",
        "choose the first ten kinds; with Shift the next ten",
    ),
    ("arrows", "move the cursor on the board"),
    ("Space or Enter", "paint at the cursor"),
    ("Backspace or Delete", "clear at the cursor"),
    ("left button", "paint"),
    ("right button", "clear"),
    ("wheel", "zoom about the pointer"),
    ("middle button, or Space and left button", "move the board"),
    ("Escape", "give up the gesture, hide the cursor"),
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_two_commands_share_a_key() {
        let keys: Vec<(KeyboardShortcut, &str)> = COMMANDS
            .iter()
            .flat_map(|command| {
                [
                    (command.key, command.name),
                    (command.other_key, command.name),
                ]
            })
            .filter_map(|(key, name)| key.map(|key| (key, name)))
            .collect();
        for (at, (key, name)) in keys.iter().enumerate() {
            for (other, other_name) in &keys[at + 1..] {
                assert_ne!(key, other, "{name} and {other_name}");
            }
        }
    }

    #[test]
    fn number_keys_are_told_as_they_are_printed() {
        let check = |nth: usize, expected: Option<&str>| {
            assert_eq!(number_key_text(nth).as_deref(), expected, "{nth}");
        };
        check(0, Some("1"));
        check(9, Some("0"));
        check(10, Some("Shift+1"));
        check(19, Some("Shift+0"));
        check(20, None);
    }
}
