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

#[path = "desk/files.rs"]
mod files;
#[path = "desk/painting.rs"]
mod painting;

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
