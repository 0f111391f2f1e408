//! The desk as a whole, without a window: the real state, executor, panels, worker and search, found by their labels.
#![cfg(feature = "desk")]

use egui::{Event, Key, Modifiers, PointerButton, vec2};
use egui_kittest::Harness;
use egui_kittest::kittest::Queryable;
use foldwright::desk::Desk;
use foldwright::desk::action::Action;
use foldwright::desk::board::Place;
use foldwright::desk::keeper::Keeper;
use foldwright::desk::state::{Brush, Dialog, Settings, Tool};
use foldwright::file::{DataFolder, read_pack};
use foldwright::level::{BodyIx, Cell, GroundIx, Pack};
use std::path::Path;
use std::time::{Duration, Instant};

/// Row: one step to the planter, three pushes to its home. Closed: a hedge between planter and home.
const PACK: &str = r#"(
    format: 1,
    name: "Test bed",
    control: Steer,
    objective: [HomesFilled],
    grounds: {
        "gravel": (label: "gravel"),
        "hedge": (label: "hedge", closed_to: [Walker, Cargo]),
        "sun-bed": (label: "sun bed", home: ["planter"]),
    },
    bodies: {
        "gardener": (label: "gardener", role: Walker),
        "planter": (label: "planter", role: Cargo),
    },
    legend: (
        grounds: {'.': "gravel", 'X': "hedge", 'o': "sun-bed"},
        bodies: {'g': "gardener", 'p': "planter"},
    ),
    levels: [
        (name: "Row", ground: ["XXXXXXXX", "X.....oX", "XXXXXXXX"], bodies: ["--------", "-g-p----", "--------"]),
        (name: "Closed", ground: ["XXXXXXXX", "X...X.oX", "XXXXXXXX"], bodies: ["--------", "-g-p----", "--------"]),
    ],
)"#;

/// How long an answer may take before a test gives up.
const PATIENCE: Duration = Duration::from_secs(30);

const HEDGE: Brush = Brush::Ground(GroundIx(1));

fn pack() -> Pack {
    read_pack(PACK.as_bytes()).expect("a sound pack").pack
}

struct Window(Harness<'static, Desk>);

impl Window {
    fn new() -> Window {
        Window::with(pack(), Keeper::none())
    }

    fn with(pack: Pack, keeper: Keeper) -> Window {
        let build = move |creation: &mut eframe::CreationContext<'static>| {
            Desk::new(&creation.egui_ctx, pack, None, Settings::default()).with_keeper(keeper)
        };
        let size = vec2(1440.0, 900.0);
        Window(Harness::builder().with_size(size).build_eframe(build))
    }

    /// With the pack opened from a file.
    fn opened(path: &Path) -> Window {
        std::fs::write(path, PACK).expect("a temporary file");
        let mut window = Window::new();
        window.act(Action::OpenPath(path.to_path_buf()));
        window.wait("the file is open", |window| {
            window.desk().state.path.is_some()
        });
        window
    }

    fn desk(&self) -> &Desk {
        self.0.state()
    }

    fn act(&mut self, action: Action) {
        self.0.state_mut().state.execute(action);
        self.0.step();
    }

    fn wait(&mut self, what: &str, holds: impl Fn(&Window) -> bool) {
        let since = Instant::now();
        while !holds(self) {
            assert!(since.elapsed() < PATIENCE, "waited in vain until {what}");
            std::thread::sleep(Duration::from_millis(5));
            self.0.step();
        }
    }

    fn sees(&self, label: &str) -> bool {
        self.0.query_all_by_label_contains(label).next().is_some()
    }

    fn wait_to_see(&mut self, label: &str) {
        self.wait(&format!("{label:?} is to be seen"), |window| {
            window.sees(label)
        });
    }

    fn place(&self) -> Place {
        let board = self.0.get_by_role(egui::accesskit::Role::Canvas).rect();
        Place::fit(self.desk().state.current().size, board, 1.0)
    }

    fn pointer(&mut self, button: PointerButton, cells: &[(u8, u8)]) {
        let place = self.place();
        let at = |&(x, y): &(u8, u8)| place.rect(Cell::new(x, y)).center();
        let (first, last) = (&cells[0], &cells[cells.len() - 1]);
        let press = |pos, pressed| Event::PointerButton {
            pos,
            button,
            pressed,
            modifiers: Modifiers::NONE,
        };
        self.0.event(Event::PointerMoved(at(first)));
        self.0.step();
        self.0.event(press(at(first), true));
        for cell in cells {
            self.0.event(Event::PointerMoved(at(cell)));
            self.0.step();
        }
        self.0.event(press(at(last), false));
        self.0.step();
    }

    fn paint(&mut self, cells: &[(u8, u8)]) {
        self.pointer(PointerButton::Primary, cells);
    }

    fn key(&mut self, modifiers: Modifiers, key: Key) {
        self.0.key_press_modifiers(modifiers, key);
        self.0.step();
        self.0.step();
    }

    fn ground(&self, x: u8, y: u8) -> GroundIx {
        self.desk().state.current().ground_at(Cell::new(x, y))
    }

    fn undo_label(&self) -> Option<String> {
        self.desk().state.history.undo_label().map(str::to_owned)
    }
}

// --- Painting and the verdict -----------------------------------------------------------------------------------------

#[test]
fn a_hedge_in_the_way_turns_the_verdict_around_and_undo_turns_it_back() {
    let mut window = Window::new();
    window.wait_to_see("Can be finished");
    window.wait_to_see("fewest steps: 4, proved");
    window.paint(&[(5, 1)]);
    assert_eq!(window.ground(5, 1), GroundIx(1));
    window.wait_to_see("Can't be finished");
    window.key(Modifiers::COMMAND, Key::Z);
    window.wait_to_see("Can be finished");
    assert_eq!(*window.desk().state.pack.levels[0], *pack().levels[0]);
    window.key(Modifiers::COMMAND.plus(Modifiers::SHIFT), Key::Z);
    window.wait_to_see("Can't be finished");
    assert_eq!(window.ground(5, 1), GroundIx(1));
}

#[test]
fn a_level_without_a_walker_is_invalid_and_says_what_to_do() {
    let mut window = Window::new();
    window.pointer(PointerButton::Secondary, &[(1, 1)]);
    window.wait_to_see("Invalid");
    window.wait_to_see("Place a gardener on the board");
}

#[test]
fn a_gesture_from_pointer_down_to_up_is_one_entry_of_the_history() {
    let mut window = Window::new();
    window.paint(&[(4, 1), (5, 1), (6, 1)]);
    assert_eq!(
        window.undo_label().as_deref(),
        Some("painted hedge from 4, 1 to 6, 1")
    );
    assert!((4..=6).all(|x| window.ground(x, 1) == GroundIx(1)));
    window.act(Action::Undo);
    assert_eq!(window.undo_label(), None);
    assert_eq!(window.desk().state.pack, pack());
}

#[test]
fn a_gesture_that_changes_nothing_is_no_entry() {
    let mut window = Window::new();
    window.paint(&[(0, 0)]);
    assert_eq!(window.undo_label(), None);
    assert!(!window.desk().state.is_dirty());
}

#[test]
fn escape_gives_a_gesture_up() {
    let mut window = Window::new();
    let at = window.place().rect(Cell::new(4, 1)).center();
    window.0.event(Event::PointerMoved(at));
    window.0.step();
    window.0.event(Event::PointerButton {
        pos: at,
        button: PointerButton::Primary,
        pressed: true,
        modifiers: Modifiers::NONE,
    });
    window.0.step();
    assert_eq!(window.ground(4, 1), GroundIx(1));
    window.key(Modifiers::NONE, Key::Escape);
    assert_eq!(window.desk().state.pack, pack());
    assert_eq!(window.undo_label(), None);
}

#[test]
fn the_right_button_takes_the_body_first_and_then_the_ground() {
    let mut window = Window::new();
    let planter = Cell::new(3, 1);
    window.pointer(PointerButton::Secondary, &[(3, 1)]);
    assert_eq!(window.desk().state.current().body_at(planter), None);
    window.pointer(PointerButton::Secondary, &[(6, 1)]);
    assert_eq!(window.ground(6, 1), GroundIx(0), "the sun bed is gone");
}

#[test]
fn each_tool_covers_its_cells() {
    let check = |tool: Tool, cells: &[(u8, u8)], hedges: usize| {
        let mut window = Window::new();
        window.act(Action::AddLevel {
            name: "wide".to_owned(),
            width: 12,
            height: 9,
        });
        let before = count(&window);
        window.act(Action::ChooseTool(tool));
        window.paint(cells);
        assert_eq!(count(&window) - before, hedges, "{tool:?}");
        window.act(Action::Undo);
        assert_eq!(count(&window), before, "{tool:?} is one gesture");
    };
    fn count(window: &Window) -> usize {
        let level = window.desk().state.current();
        level
            .ground
            .iter()
            .filter(|&&ground| ground == GroundIx(1))
            .count()
    }
    check(Tool::Dot, &[(2, 2), (4, 2)], 3);
    check(Tool::Line, &[(2, 2), (5, 5)], 4);
    check(Tool::Box, &[(2, 2), (5, 4)], 12);
    check(Tool::Flood, &[(2, 2)], 70);
}

#[test]
fn pick_and_number_keys_choose_what_is_painted() {
    let mut window = Window::new();
    window.act(Action::ChooseTool(Tool::Pick));
    window.paint(&[(3, 1)]);
    assert_eq!(window.desk().state.brush, Brush::Body(BodyIx(1)));
    window.paint(&[(6, 1)]);
    assert_eq!(window.desk().state.brush, Brush::Ground(GroundIx(2)));
    window.key(Modifiers::NONE, Key::Num4);
    assert_eq!(window.desk().state.brush, Brush::Body(BodyIx(0)));
    window.key(Modifiers::NONE, Key::Num2);
    assert_eq!(window.desk().state.brush, HEDGE);
    window.0.get_by_label("sun bed").click();
    window.0.step();
    window.0.step();
    assert_eq!(window.desk().state.brush, Brush::Ground(GroundIx(2)));
}

#[test]
fn the_keyboard_paints_as_well() {
    let mut window = Window::new();
    window.key(Modifiers::NONE, Key::ArrowRight); // Shows the cursor in the middle.
    assert_eq!(window.desk().state.cursor, Some(Cell::new(4, 1)));
    window.key(Modifiers::NONE, Key::ArrowRight);
    window.key(Modifiers::NONE, Key::Space);
    assert_eq!(window.ground(5, 1), GroundIx(1));
    window.key(Modifiers::NONE, Key::Delete);
    assert_eq!(window.ground(5, 1), GroundIx(0));
    window.key(Modifiers::NONE, Key::Escape);
    assert_eq!(window.desk().state.cursor, None);
}

// --- The route --------------------------------------------------------------------------------------------------------

#[test]
fn the_route_can_be_stepped_through_and_painting_goes_back_to_its_start() {
    let mut window = Window::new();
    window.wait("the route is proved", |window| {
        window.sees("fewest steps: 4, proved")
    });
    window.wait_to_see("step 0 of 4");
    let planter_x = |window: &Window| {
        let playback = window.desk().state.playback.as_ref().expect("a route");
        let planter = playback
            .view()
            .bodies
            .iter()
            .find(|body| body.kind == BodyIx(1));
        planter.map(|body| body.cells[0].x)
    };
    for (key, step, x) in [
        (Key::Period, "step 1 of 4", 3),
        (Key::Period, "step 2 of 4", 4),
        (Key::End, "step 4 of 4", 6),
        (Key::Comma, "step 3 of 4", 5),
    ] {
        window.key(Modifiers::NONE, key);
        assert!(window.sees(step), "{step}");
        assert_eq!(planter_x(&window), Some(x), "{step}");
    }
    window.paint(&[(2, 0)]);
    let at = window
        .desk()
        .state
        .playback
        .as_ref()
        .map(|playback| playback.at);
    assert_eq!(at.unwrap_or(0), 0);
}

#[test]
fn playing_moves_by_itself_and_stops_at_the_end() {
    let mut window = Window::new();
    window.wait_to_see("fewest steps: 4, proved");
    window.act(Action::PlayPause);
    window.wait_to_see("step 4 of 4");
    window.0.step();
    let playing = window
        .desk()
        .state
        .playback
        .as_ref()
        .map(|playback| playback.playing);
    assert_eq!(playing, Some(false));
}

#[test]
fn an_idle_desk_asks_for_no_frame() {
    let mut window = Window::new();
    window.wait_to_see("fewest steps: 4, proved");
    window.wait("tiles, map and shelf are done", |window| {
        let state = &window.desk().state;
        let tiles_done = state
            .answers
            .tiles
            .as_ref()
            .is_some_and(|tiles| tiles.value.done);
        let shelf_done = state
            .pack
            .levels
            .iter()
            .all(|level| state.shelf.get(level).is_some());
        tiles_done && shelf_done && state.answers.map.is_some()
    });
    window.0.run_steps(5);
    let delay = window.0.output().viewport_output[&egui::ViewportId::ROOT].repaint_delay;
    assert!(delay > Duration::from_secs(3600), "{delay:?}");
}

// --- Levels -----------------------------------------------------------------------------------------------------------

#[test]
fn another_level_has_its_own_verdict() {
    let mut window = Window::new();
    window.wait_to_see("Can be finished");
    window.key(Modifiers::NONE, Key::PageDown);
    assert_eq!(window.desk().state.level, 1);
    window.wait_to_see("Can't be finished");
    window.key(Modifiers::NONE, Key::PageUp);
    window.wait_to_see("Can be finished");
}

#[test]
fn levels_are_added_moved_and_deleted_and_all_of_it_can_be_undone() {
    let mut window = Window::new();
    let names = |window: &Window| -> Vec<String> {
        let levels = &window.desk().state.pack.levels;
        levels.iter().map(|level| level.name.clone()).collect()
    };
    window.act(Action::DuplicateLevel(0));
    assert_eq!(names(&window), ["Row", "Row copy", "Closed"]);
    assert_eq!(window.desk().state.level, 1);
    window.act(Action::MoveLevel { from: 1, to: 2 });
    assert_eq!(names(&window), ["Row", "Closed", "Row copy"]);
    assert_eq!(window.desk().state.level, 2);
    window.act(Action::RenameLevel(0, "Lane".to_owned()));
    window.act(Action::DeleteLevel(1));
    assert_eq!(names(&window), ["Lane", "Row copy"]);
    window.act(Action::DeleteLevel(1));
    window.act(Action::DeleteLevel(0));
    assert_eq!(names(&window), ["Level 1"], "a pack has a level");
    for _ in 0..6 {
        window.act(Action::Undo);
    }
    assert_eq!(window.desk().state.pack, pack());
}

#[test]
fn resizing_keeps_the_part_that_the_anchor_names() {
    let check = |anchor: (u8, u8), gardener: (u8, u8)| {
        let mut window = Window::new();
        window.act(Action::ResizeLevel {
            width: 10,
            height: 5,
            anchor,
        });
        let level = window.desk().state.current();
        let at = Cell::new(gardener.0, gardener.1);
        assert_eq!(level.body_at(at), Some(BodyIx(0)), "{anchor:?}");
        assert_eq!((level.size.width(), level.size.height()), (10, 5));
    };
    check((0, 0), (1, 1));
    check((1, 1), (2, 2));
    check((2, 2), (3, 3));
}

// --- Files ------------------------------------------------------------------------------------------------------------

#[test]
fn what_is_saved_is_what_is_on_the_desk() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.paint(&[(5, 1)]);
    assert!(window.sees("unsaved changes"));
    window.key(Modifiers::COMMAND, Key::S);
    window.wait("it is saved", |window| !window.desk().state.is_dirty());
    let saved = read_pack(&std::fs::read(&path).expect("a file"))
        .expect("a pack")
        .pack;
    assert_eq!(saved.levels, window.desk().state.pack.levels);
}

#[test]
fn a_damaged_pack_is_told_with_line_and_column_and_left_alone() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("damaged.pack.ron");
    let damaged = PACK
        .replace("strength", "strange")
        .replace("name: \"Test bed\"", "colour: 3");
    std::fs::write(&path, &damaged).expect("a temporary file");
    let mut window = Window::new();
    window.act(Action::OpenPath(path.clone()));
    window.wait_to_see("This pack can't be opened");
    window.wait_to_see("damaged.pack.ron:3:5: There is no field colour in a pack.");
    assert_eq!(window.desk().state.pack, pack(), "the desk keeps its pack");
    assert_eq!(std::fs::read_to_string(&path).expect("a file"), damaged);
}

#[test]
fn a_file_that_changed_on_disk_is_never_overwritten_without_asking() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.paint(&[(5, 1)]);
    let theirs = PACK.replace("Test bed", "Their bed");
    std::fs::write(&path, &theirs).expect("a temporary file");
    window.act(Action::Save);
    window.wait_to_see("Replace the file?");
    assert_eq!(std::fs::read_to_string(&path).expect("a file"), theirs);
    window.0.get_by_label("Replace it").click();
    window.wait("it is saved", |window| !window.desk().state.is_dirty());
    assert_ne!(std::fs::read_to_string(&path).expect("a file"), theirs);
}

#[test]
fn a_change_on_disk_is_noticed_on_coming_back_to_the_window() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.0.input_mut().focused = false;
    window.0.step();
    std::fs::write(&path, PACK.replace("Test bed", "Their bed")).expect("a temporary file");
    window.0.input_mut().focused = true;
    window.wait_to_see("The file changed on disk");
    window.0.get_by_label("Read it again").click();
    window.wait("it is read again", |window| {
        window.desk().state.pack.name == "Their bed"
    });
    assert!(!window.desk().state.is_dirty());
    window.act(Action::Undo);
    assert_eq!(
        window.desk().state.pack.name,
        "Test bed",
        "what was there is not lost"
    );
}

#[test]
fn unsaved_changes_are_asked_about_before_they_are_dropped() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.paint(&[(5, 1)]);
    window.act(Action::CreatePack {
        name: "Other".to_owned(),
        start: None,
    });
    window.wait_to_see("Save the changes?");
    window.0.get_by_label("Cancel").click();
    window.wait("the question is gone", |window| {
        window.desk().state.dialog.is_none()
    });
    assert_eq!(window.desk().state.pack.name, "Test bed");
    window.act(Action::CreatePack {
        name: "Other".to_owned(),
        start: None,
    });
    window.0.get_by_label("Save").click();
    window.wait("the new pack is on the desk", |window| {
        window.desk().state.pack.name == "Other"
    });
    let saved = read_pack(&std::fs::read(&path).expect("a file"))
        .expect("a pack")
        .pack;
    assert_eq!(
        saved.levels[0].ground_at(Cell::new(5, 1)),
        GroundIx(1),
        "saved first"
    );
}

#[test]
fn a_read_only_folder_is_told_and_nothing_is_lost() {
    let mut window = Window::new();
    window.paint(&[(5, 1)]);
    window.act(Action::SaveTo("/proc/nowhere/bed.pack.ron".into()));
    window.wait_to_see("The pack was not saved");
    assert!(window.desk().state.is_dirty());
}

#[test]
fn what_a_killed_session_left_behind_is_offered_and_recovered() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let data = DataFolder::at(folder.path());
    let mut killed = Window::with(pack(), Keeper::in_folder(data.clone()));
    killed.paint(&[(5, 1)]);
    killed.wait("an autosave is written", |_| {
        !foldwright::file::Recoverable::list(&data).is_empty() || autosaves(folder.path()) > 0
    });
    drop(killed);
    let mut window = Window::with(pack(), Keeper::in_folder(data));
    window.wait_to_see("Recover unsaved work?");
    window.0.get_by_label("Recover").click();
    window.wait("it is recovered", |window| {
        window.ground(5, 1) == GroundIx(1)
    });
    assert!(window.desk().state.is_dirty());
}

fn autosaves(data: &Path) -> usize {
    std::fs::read_dir(data.join("autosave")).map_or(0, |entries| {
        entries
            .filter_map(Result::ok)
            .filter(|entry| {
                entry
                    .path()
                    .extension()
                    .is_some_and(|ending| ending == "ron")
            })
            .count()
    })
}

// --- Menus and dialogs ------------------------------------------------------------------------------------------------

#[test]
fn menus_show_names_and_keys_and_do_what_they_say() {
    let mut window = Window::new();
    window.0.get_by_label("Level").click();
    window.0.run_steps(3);
    assert!(window.sees("Ctrl+D"));
    window.0.get_by_label("Duplicate Ctrl+D").click();
    window.0.run_steps(3);
    assert_eq!(window.desk().state.pack.levels.len(), 3);
}

#[test]
fn a_new_level_is_made_from_its_dialog() {
    let mut window = Window::new();
    window.act(Action::NewLevel);
    assert!(matches!(
        window.desk().state.dialog,
        Some(Dialog::NewLevel { .. })
    ));
    window.0.run_steps(2);
    window.0.get_by_label("Add").click();
    window.wait("it is added", |window| {
        window.desk().state.pack.levels.len() == 3
    });
    assert_eq!(window.desk().state.level, 1);
    assert_eq!(window.desk().state.dialog, None);
}

#[test]
fn a_dialog_keeps_the_keys_from_the_desk() {
    let mut window = Window::new();
    window.paint(&[(5, 1)]);
    window.act(Action::ShowAbout);
    window.key(Modifiers::COMMAND, Key::Z);
    assert!(window.undo_label().is_some());
    window.key(Modifiers::NONE, Key::Escape);
    assert_eq!(window.desk().state.dialog, None);
    window.key(Modifiers::COMMAND, Key::Z);
    assert_eq!(window.undo_label(), None);
}

#[test]
fn every_widget_has_a_name() {
    let mut window = Window::new();
    window.wait_to_see("fewest steps: 4, proved");
    window.0.check_accessibility();
    for dialog in [
        Action::ShowKeys,
        Action::ShowAbout,
        Action::AskResize,
        Action::AskBudget,
        Action::NewLevel,
        Action::NewPack,
    ] {
        window.act(dialog);
        window.0.run_steps(3);
        window.0.check_accessibility();
        window.act(Action::CloseDialog);
    }
}
