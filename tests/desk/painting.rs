//! Painting and the verdict.

use super::*;

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
