//! The trail.

use super::*;

#[test]
fn the_trail_says_where_it_stands() {
    let mut state = lane_with_trail();
    state.execute(Action::Scrub(2));
    let harness = stand(trail::show, state);
    assert!(
        says(&harness, "step 2 of 4 · commitment 2 of 2"),
        "{harness:#?}"
    );
}

#[test]
fn a_click_on_the_trail_scrubs() {
    let mut harness = stand(trail::show, lane_with_trail());
    let strip = harness
        .get_by_role_and_label(Role::Slider, "Route, step 0 of 4 · commitment 0 of 2")
        .rect();
    let layout = trail::StripLayout::new(4, &[1, 1, 2], strip.width());
    for at in [3, 1] {
        let place = egui::pos2(strip.left() + layout.places[at], strip.top() + 12.0);
        harness.drag_at(place);
        harness.run();
        harness.drop_at(place);
        harness.run();
    }
    let actions = &harness.state().actions;
    assert!(
        actions.contains(&Action::Scrub(3)) && actions.contains(&Action::Scrub(1)),
        "{actions:?}"
    );
}

#[test]
fn the_buttons_of_the_trail_have_names_and_do_what_they_say() {
    let mut state = lane_with_trail();
    state.execute(Action::Scrub(2));
    let mut harness = stand(trail::show, state);
    for name in [
        "First step",
        "Step back",
        "Play",
        "Step forward",
        "Last step",
    ] {
        harness.get_by_role_and_label(Role::Button, name).click();
    }
    harness.run();
    let expected = [
        Action::First,
        Action::Back,
        Action::PlayPause,
        Action::Forward,
        Action::Last,
    ];
    assert_eq!(harness.state().actions, expected);
}

#[test]
fn playing_turns_the_play_button_into_pause() {
    let mut state = lane_with_trail();
    state.execute(Action::PlayPause);
    let harness = stand(trail::show, state);
    assert!(
        harness
            .query_by_role_and_label(Role::Button, "Pause")
            .is_some()
    );
    assert!(
        harness
            .query_by_role_and_label(Role::Button, "Play")
            .is_none()
    );
}

#[test]
fn an_empty_trail_says_what_is_going_on() {
    let check = |state: State, expected: &str| {
        let harness = stand(trail::show, state);
        assert!(
            says(&harness, expected),
            "missing {expected:?} in {harness:#?}"
        );
    };
    check(lane(), "No route yet");
    let mut unsolvable = lane();
    answered(&mut unsolvable, report(Outcome::Unsolvable));
    check(unsolvable, "No route is known");
    let empty = level("Empty", &["###", "#.#", "###"]);
    check(state_with(vec![empty]), "the level is invalid");
}

#[test]
fn routes_of_any_length_are_drawn_at_any_width() {
    let long = "g".to_owned() + &".".repeat(61) + "po";
    let state = || {
        let mut state = state_with(vec![level("Long", &[&long])]);
        let there: Vec<Dir> = vec![Dir::E; 61];
        let back = vec![Dir::W; 61];
        let steps: Vec<Dir> = (0..10)
            .flat_map(|turn| {
                if turn % 2 == 0 {
                    there.clone()
                } else {
                    back.clone()
                }
            })
            .chain(std::iter::once(Dir::E))
            .collect();
        let steps = if steps.len().is_multiple_of(2) {
            steps
        } else {
            [there, vec![Dir::E]].concat()
        };
        let spans = vec![steps.len() as u32 - 1, 1];
        let route = Some(Route::Steer(steps));
        answered(
            &mut state,
            Report {
                route,
                spans,
                ..solved(62, false, 0)
            },
        );
        assert!(state.playback.is_some(), "the route is laid out");
        state
    };
    for width in [240.0, 760.0, 1_440.0] {
        let harness = stand_sized(trail::show, state(), [width, 200.0], false);
        assert!(says(&harness, "Route, step 0 of 62"), "{harness:#?}");
    }
}

#[test]
fn a_level_that_starts_finished_needs_no_step() {
    let mut state = state_with(vec![level("Done", &["g.."])]);
    let report = Report {
        route: Some(Route::Steer(Vec::new())),
        spans: vec![0],
        ..solved(0, true, 0)
    };
    answered(&mut state, report);
    let harness = stand(trail::show, state);
    assert!(says(&harness, "finished at the start"), "{harness:#?}");
}
