//! The panels of the window on made-up states: what they say, what they are called, and which actions leave them.
#![cfg(feature = "desk")]

use egui::accesskit::Role;
use egui_kittest::Harness;
use egui_kittest::kittest::{NodeT, Queryable};
use foldwright::desk::action::Action;
use foldwright::desk::pictures::Pictures;
use foldwright::desk::state::{Settings, State};
use foldwright::desk::{findings, shelf, theme, trail};
use foldwright::level::{
    BodyIx, BodyKind, Brush, Cell, Clause, Control, Dir, GroundIx, GroundKind, KindId, Legend,
    Level, Mechanics, Pack, Role as BodyRole, Route, Size,
};
use foldwright::study::{
    Bounds, Figure, MapCounts, Outcome, Progress, Report, Stage, TileClass, UndecidedReason,
};
use foldwright::worker::{Answer, Event, ShelfLine};
use std::sync::Arc;

// --- A small pack -----------------------------------------------------------------------------------------------------

fn id(text: &str) -> KindId {
    KindId::new(text).expect("the id is well formed")
}

fn mechanics() -> Mechanics {
    let hedge = GroundKind {
        closed_to: vec![BodyRole::Walker, BodyRole::Cargo],
        ..GroundKind::plain(id("hedge"), "hedge")
    };
    let bed = GroundKind {
        home: vec![id("planter")],
        ..GroundKind::plain(id("sun-bed"), "sun bed")
    };
    Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: vec![Clause::HomesFilled],
        grounds: vec![GroundKind::plain(id("gravel"), "gravel"), hedge, bed],
        bodies: vec![
            BodyKind::plain(id("gardener"), "gardener", BodyRole::Walker),
            BodyKind::plain(id("planter"), "planter", BodyRole::Cargo),
        ],
        items: Vec::new(),
        legend: Legend::default(),
    }
}

/// A level from rows of `#` hedge, `.` gravel, `o` bed, `g` gardener and `p` planter.
fn level(name: &str, rows: &[&str]) -> Level {
    let size = Size::new(rows[0].len(), rows.len()).expect("the size is in range");
    let mut level = Level::filled(name, size, GroundIx(0));
    for (y, row) in rows.iter().enumerate() {
        for (x, sign) in row.chars().enumerate() {
            let at = size.index(Cell::new(x as u8, y as u8));
            match sign {
                '#' => level.ground[at] = GroundIx(1),
                'o' => level.ground[at] = GroundIx(2),
                'g' => level.bodies[at] = Some(BodyIx(0)),
                'p' => level.bodies[at] = Some(BodyIx(1)),
                _ => {}
            }
        }
    }
    level
}

const LANE: [&str; 3] = ["########", "#g.p..o#", "########"];

fn state_with(levels: Vec<Level>) -> State {
    let pack = Pack {
        name: "Test".to_owned(),
        mechanics: Arc::new(mechanics()),
        levels: levels.into_iter().map(Arc::new).collect(),
    };
    State::new(pack, None, Settings::default())
}

fn lane() -> State {
    state_with(vec![level("Lane", &LANE)])
}

/// The route of [`LANE`]: four steps, of which three push.
fn lane_route() -> Route {
    Route::Steer(vec![Dir::E; 4])
}

fn report(outcome: Outcome) -> Report {
    Report {
        outcome,
        steps: None,
        pushes: None,
        steps_low: 0,
        pushes_low: 0,
        route: None,
        spans: Vec::new(),
        positions: 212_480,
        folds: 3_911,
        bytes: 1 << 20,
        seconds: 0.014,
        heat: Vec::new(),
        touched: Vec::new(),
        closed: false,
    }
}

fn solved(fewest: u32, proved: bool, low: u32) -> Report {
    Report {
        steps: Some(Figure { fewest, proved }),
        steps_low: low,
        route: Some(lane_route()),
        spans: vec![1, 1, 2],
        ..report(Outcome::Solvable)
    }
}

fn answered(state: &mut State, report: Report) {
    let event = Event::Answered {
        revision: state.revision,
        answer: Answer::Studied(Arc::new(report)),
        remembered: false,
    };
    state.hear(event);
}

fn progress(state: &mut State, stage: Stage, low: u32, high: Option<u32>) {
    let event = Event::Progress {
        revision: state.revision,
        progress: Progress {
            stage,
            steps: Bounds { low, high },
            pushes: Bounds::default(),
            positions: 1_000,
            folds: 10,
            bytes: 0,
            seconds: 0.5,
        },
    };
    state.hear(event);
}

/// An edit: a hedge across the lane.
fn edit(state: &mut State) {
    state.execute(Action::ChooseBrush(Brush::Ground(GroundIx(1))));
    state.execute(Action::StrokeStart {
        cell: Cell::new(2, 1),
        clear: false,
    });
    state.execute(Action::StrokeEnd);
}

// --- Harness ----------------------------------------------------------------------------------------------------------

type Panel = fn(&mut egui::Ui, &State, &mut Pictures, &mut Vec<Action>);

struct Stand {
    state: State,
    pictures: Pictures,
    actions: Vec<Action>,
}

fn stand_sized<'a>(panel: Panel, state: State, size: [f32; 2], dark: bool) -> Harness<'a, Stand> {
    Harness::builder()
        .with_size(size)
        .with_theme(if dark {
            egui::Theme::Dark
        } else {
            egui::Theme::Light
        })
        .with_max_steps(16)
        .with_context_setup(|ctx| theme::install(ctx, egui::ThemePreference::System))
        .build_ui_state(
            move |ui, stand: &mut Stand| {
                let Stand {
                    state,
                    pictures,
                    actions,
                } = stand;
                pictures.begin_frame(ui.ctx(), &state.pack.mechanics, None);
                panel(ui, state, pictures, actions);
            },
            Stand {
                state,
                pictures: Pictures::default(),
                actions: Vec::new(),
            },
        )
}

fn stand<'a>(panel: Panel, state: State) -> Harness<'a, Stand> {
    stand_sized(panel, state, [760.0, 900.0], true)
}

fn says(harness: &Harness<'_, Stand>, text: &str) -> bool {
    // Thin spaces between thousands are written as plain ones here.
    let plain = text.to_owned();
    harness
        .query_all(egui_kittest::kittest::By::new().predicate(move |node| {
            [node.label(), node.value()]
                .into_iter()
                .flatten()
                .any(|said| said.replace('\u{2009}', " ").contains(&plain))
        }))
        .next()
        .is_some()
}

// --- Verdict ----------------------------------------------------------------------------------------------------------

fn check_findings(prepare: impl FnOnce(&mut State), expected: &[&str], unexpected: &[&str]) {
    let mut state = lane();
    prepare(&mut state);
    let harness = stand_sized(findings::show, state, [300.0, 900.0], true);
    for text in expected {
        assert!(says(&harness, text), "missing {text:?} in {harness:#?}");
    }
    for text in unexpected {
        assert!(!says(&harness, text), "unexpected {text:?} in {harness:#?}");
    }
}

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

// --- Other cards ------------------------------------------------------------------------------------------------------

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

// --- Trail ------------------------------------------------------------------------------------------------------------

fn lane_with_trail() -> State {
    let mut state = lane();
    answered(&mut state, solved(4, true, 4));
    state
}

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

// --- Shelf ------------------------------------------------------------------------------------------------------------

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

// --- All panels -------------------------------------------------------------------------------------------------------

#[test]
fn every_panel_draws_in_both_themes_and_in_little_room() {
    let panels: [Panel; 3] = [trail::show, findings::show, shelf::show];
    for panel in panels {
        for dark in [true, false] {
            for size in [[300.0, 120.0], [1_000.0, 700.0]] {
                let _ = stand_sized(panel, lane_with_trail(), size, dark);
            }
        }
    }
}
