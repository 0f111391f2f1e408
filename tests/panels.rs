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

#[path = "panels/cards.rs"]
mod cards;
#[path = "panels/on_shelf.rs"]
mod on_shelf;
#[path = "panels/on_trail.rs"]
mod on_trail;
#[path = "panels/verdict.rs"]
mod verdict;

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

fn lane_with_trail() -> State {
    let mut state = lane();
    answered(&mut state, solved(4, true, 4));
    state
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
