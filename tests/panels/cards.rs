//! The other cards of the findings.

use super::*;

#[test]
fn the_fold_map_is_told_in_counts() {
    check_findings(
        |state| {
            answered(state, solved(4, true, 4));
            let event = Event::Map {
                revision: state.revision,
                counts: Some(MapCounts {
                    folds: 98,
                    alive: 60,
                    commitments: 240,
                    traps: 31,
                    positions: 1_234,
                    blind_finish_chance: 1.0 / 340.0,
                }),
            };
            state.hear(event);
        },
        &[
            "98 (60 alive)",
            "31",
            "1 234",
            "1 in 340",
            "commitments on the route",
        ],
        &["did not fit"],
    );
}

#[test]
fn a_fold_map_that_did_not_fit_is_not_zero_traps() {
    check_findings(
        |state| {
            let event = Event::Map {
                revision: state.revision,
                counts: None,
            };
            state.hear(event);
        },
        &["did not fit the limits"],
        &["traps (ways to get stuck)"],
    );
}

#[test]
fn tiles_are_counted_with_those_still_to_be_asked() {
    check_findings(
        |state| {
            answered(state, solved(4, true, 4));
            for (x, class, left) in [(2, TileClass::Vital, 2), (4, TileClass::Idle, 1)] {
                let event = Event::Tile {
                    revision: state.revision,
                    cell: Cell::new(x, 1),
                    class,
                    left,
                };
                state.hear(event);
            }
        },
        &[
            "vital",
            "idle",
            "cut off",
            "furnished",
            "1 tile is still to be asked",
        ],
        &["every tile that can be asked was asked"],
    );
}

#[test]
fn the_route_watch_tells_whether_the_intended_route_still_works() {
    let intended = |steps: Vec<Dir>| {
        let mut kept = level("Lane", &LANE);
        kept.intended = Some(Route::Steer(steps));
        stand(findings::show, state_with(vec![kept]))
    };
    let check = |steps: Vec<Dir>, expected: &str| {
        let harness = intended(steps);
        assert!(
            says(&harness, expected),
            "missing {expected:?} in {harness:#?}"
        );
    };
    check(vec![Dir::E; 4], "intended route: 4 steps, still works");
    check(
        vec![Dir::E; 3],
        "intended route: 3 steps, no longer finishes",
    );
    check(
        vec![Dir::E, Dir::N],
        "intended route: broken at step 2 of 2",
    );
    let none = stand(findings::show, lane());
    assert!(says(&none, "no intended route is kept"));
}

#[test]
fn a_proved_par_can_be_approved_and_the_route_kept() {
    let mut state = lane();
    answered(&mut state, solved(4, true, 4));
    let mut harness = stand(findings::show, state);
    harness.get_by_label("Keep this route").click();
    harness.get_by_label("Approve par").click();
    harness.run();
    assert_eq!(
        harness.state().actions,
        [Action::MeanThisRoute, Action::ApprovePar]
    );
    let Stand { mut state, .. } = harness.into_state();
    state.execute(Action::ApprovePar);
    assert_eq!(state.current().par.and_then(|par| par.steps), Some(4));
}

#[test]
fn a_par_without_proof_is_never_approved() {
    let mut state = lane();
    answered(&mut state, solved(4, false, 2));
    state.execute(Action::ApprovePar);
    assert_eq!(state.current().par, None);
}
