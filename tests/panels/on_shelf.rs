//! The shelf.

use super::*;

fn shelf_state(count: usize) -> State {
    let levels = (0..count)
        .map(|at| {
            // Lanes of different lengths, so that no two ask the same.
            let row = format!("g{}p{}o", ".".repeat(at % 30), ".".repeat(at / 30));
            level(&format!("Bed {}", at + 1), &[&row])
        })
        .collect();
    state_with(levels)
}

#[test]
fn the_shelf_sums_up_its_levels() {
    let mut state = shelf_state(3);
    for (at, par) in [(0, 8), (1, 61), (2, 20)] {
        let level = Arc::clone(&state.pack.levels[at]);
        let answer = Answer::Studied(Arc::new(solved(par, true, par)));
        state.hear(Event::Shelf(ShelfLine { level, answer }));
    }
    let harness = stand(shelf::show, state);
    assert!(
        says(&harness, "3 levels · all proved · par 8 to 61"),
        "{harness:#?}"
    );
    assert!(says(&harness, "Level 2, Bed 2, par 61, proved"));
}

#[test]
fn the_shelf_does_not_call_proved_what_is_not() {
    let mut state = shelf_state(4);
    let answers = [
        Answer::Studied(Arc::new(solved(9, true, 9))),
        Answer::Studied(Arc::new(solved(12, false, 3))),
        Answer::Studied(Arc::new(report(Outcome::Unsolvable))),
    ];
    for (at, answer) in answers.into_iter().enumerate() {
        let level = Arc::clone(&state.pack.levels[at]);
        state.hear(Event::Shelf(ShelfLine { level, answer }));
    }
    let harness = stand(shelf::show, state);
    let summary = "4 levels · 1 proved · 1 solvable, par not proved · 1 can't be finished · 1 not known yet · par 9";
    assert!(says(&harness, summary), "{harness:#?}");
    assert!(says(
        &harness,
        "Level 2, Bed 2, can be finished, in at most 12 steps"
    ));
}

#[test]
fn a_click_on_a_card_shows_its_level() {
    let mut harness = stand(shelf::show, shelf_state(4));
    harness.get_by_label_contains("Level 3, Bed 3").click();
    harness.run();
    assert_eq!(harness.state().actions, [Action::ShowLevel(2)]);
}

#[test]
fn a_card_dragged_along_the_shelf_moves_its_level() {
    let mut harness = stand(shelf::show, shelf_state(4));
    let from = harness.get_by_label_contains("Level 1, Bed 1").rect();
    let to = harness.get_by_label_contains("Level 3, Bed 3").rect();
    harness.drag_at(from.center());
    harness.run();
    harness.hover_at(from.center() + egui::vec2(40.0, 0.0));
    harness.run();
    harness.hover_at(to.right_center() - egui::vec2(8.0, 0.0));
    harness.run();
    harness.drop_at(to.right_center() - egui::vec2(8.0, 0.0));
    harness.run();
    assert_eq!(
        harness.state().actions,
        [Action::MoveLevel { from: 0, to: 2 }]
    );
}

#[test]
fn a_level_is_renamed_on_the_shelf() {
    let mut harness = stand(shelf::show, shelf_state(2));
    harness.get_by_label("Rename level").click();
    harness.run();
    harness.get_by_label("Name of the level").type_text(" anew");
    harness.run();
    harness.key_press(egui::Key::Enter);
    harness.run();
    assert_eq!(
        harness.state().actions,
        [Action::RenameLevel(0, "Bed 1 anew".to_owned())]
    );
}

#[test]
fn escape_leaves_the_name_as_it_was() {
    let mut harness = stand(shelf::show, shelf_state(2));
    harness.get_by_label("Rename level").click();
    harness.run();
    harness.get_by_label("Name of the level").type_text(" anew");
    harness.run();
    harness.key_press(egui::Key::Escape);
    harness.run();
    assert_eq!(harness.state().actions, []);
    assert!(harness.query_by_label("Name of the level").is_none());
}

#[test]
fn the_last_level_can_not_be_deleted() {
    let mut harness = stand(shelf::show, shelf_state(1));
    harness.get_by_label("Delete level").click();
    harness.run();
    assert_eq!(harness.state().actions, []);
    let mut harness = stand(shelf::show, shelf_state(2));
    harness.get_by_label("Delete level").click();
    harness.run();
    assert_eq!(harness.state().actions, [Action::DeleteLevel(0)]);
}

#[test]
fn only_the_cards_in_view_are_drawn_of_a_thousand() {
    let harness = stand(shelf::show, shelf_state(1_000));
    let cards = harness
        .get_all_by_label_contains(", not known yet")
        .filter(|node| node.accesskit_node().role() == Role::Button);
    let drawn = cards.count();
    assert!((4..12).contains(&drawn), "{drawn} cards");
    assert!(says(&harness, "1 000 levels"));
}
