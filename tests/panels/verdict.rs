//! The verdict card.

use super::*;

#[test]
fn while_nothing_is_known_the_card_says_that_it_is_still_looking() {
    check_findings(
        |_| {},
        &["Still looking", "no route yet"],
        &["Can be finished", "Can't be finished", ", proved"],
    );
}

#[test]
fn a_lower_bound_is_shown_before_any_route() {
    check_findings(
        |state| progress(state, Stage::Looking, 31, None),
        &[
            "Still looking",
            "at least 31 steps, if at all",
            "1 000 positions",
        ],
        &["Can be finished"],
    );
}

#[test]
fn a_found_route_shows_both_bounds_and_is_not_called_proved() {
    check_findings(
        |state| progress(state, Stage::RouteFound, 31, Some(37)),
        &[
            "Can be finished",
            "between 31 and 37 steps",
            "proving the fewest",
        ],
        &["37, proved", "Still looking"],
    );
}

#[test]
fn a_proved_answer_says_so_with_its_cost() {
    check_findings(
        |state| answered(state, solved(4, true, 4)),
        &[
            "Can be finished",
            "fewest steps: 4, proved",
            "212 480 positions in 3 911 folds, 14 ms",
        ],
        &["Still looking", "Stop"],
    );
}

#[test]
fn an_answer_without_proof_keeps_its_bounds() {
    check_findings(
        |state| answered(state, solved(4, false, 2)),
        &["Can be finished", "between 2 and 4 steps"],
        &[", proved"],
    );
}

#[test]
fn an_unsolvable_level_is_called_that_and_nothing_else() {
    check_findings(
        |state| answered(state, report(Outcome::Unsolvable)),
        &["Can't be finished"],
        &["Can be finished", "Undecided"],
    );
}

#[test]
fn giving_up_is_undecided_with_its_reason() {
    let reasons = [
        (UndecidedReason::Time, "the time was up"),
        (UndecidedReason::Memory, "the memory was used up"),
        (
            UndecidedReason::Positions,
            "the limit of positions was reached",
        ),
        (UndecidedReason::Stopped, "the search was stopped"),
    ];
    for (reason, text) in reasons {
        check_findings(
            |state| answered(state, report(Outcome::Undecided(reason))),
            &["Undecided", text, "Ask again"],
            &["Can't be finished", "Can be finished"],
        );
    }
}

#[test]
fn after_an_edit_the_old_answer_is_only_quoted() {
    check_findings(
        |state| {
            answered(state, solved(4, true, 4));
            edit(state);
        },
        &[
            "Still looking",
            "before the edit: can be finished, fewest steps: 4, proved",
        ],
        &["Can be finished"],
    );
}

#[test]
fn a_replayed_route_counts_before_any_search() {
    check_findings(
        |state| {
            let event = Event::Replayed {
                revision: state.revision,
                route: lane_route(),
                still_works: true,
            };
            state.hear(event);
        },
        &[
            "Can be finished",
            "at most 4 steps",
            "the last route still works",
        ],
        &["Still looking", ", proved"],
    );
}

#[test]
fn a_route_that_no_longer_works_proves_nothing() {
    check_findings(
        |state| {
            let event = Event::Replayed {
                revision: state.revision,
                route: lane_route(),
                still_works: false,
            };
            state.hear(event);
        },
        &["Still looking", "the last route no longer works"],
        &["Can be finished", "Can't be finished"],
    );
}

#[test]
fn a_failed_job_gives_no_verdict() {
    check_findings(
        |state| {
            let event = Event::Failed {
                revision: state.revision,
                message: "index out of bounds".to_owned(),
            };
            state.hear(event);
        },
        &["The search failed", "no verdict", "index out of bounds"],
        &["Can be finished", "Can't be finished"],
    );
}

#[test]
fn an_invalid_level_lists_its_problems() {
    let mut state = state_with(vec![level("Empty", &["###", "#o#", "###"])]);
    let problems = state.problems.clone();
    let event = Event::Answered {
        revision: state.revision,
        answer: Answer::Invalid(problems),
        remembered: false,
    };
    state.hear(event);
    let mut harness = stand(findings::show, state);
    assert!(says(&harness, "Invalid"));
    assert!(says(&harness, "There is no walker"));
    assert!(says(&harness, "Problems (2)"));
    harness.get_by_label_contains("accepts no cargo").click();
    harness.run();
    let marked = vec![Cell::new(1, 1)];
    assert_eq!(harness.state().actions, [Action::MarkCells(marked)]);
}

#[test]
fn the_stop_button_stops_the_search() {
    let mut harness = stand(findings::show, lane());
    harness.get_by_label("Stop").click();
    harness.run();
    assert_eq!(harness.state().actions, [Action::StopSearch]);
}
