//! The worker against made-up engines: newest wins, cancelling, panics, memory, the shelf.

use foldwright::level::{
    BodyKind, Cell, Clause, Control, GroundIx, GroundKind, KindId, Legend, Level, Mechanics, Role,
    Route, Size,
};
use foldwright::study::{
    Bounds, Figure, Limits, MapCounts, Outcome, Progress, Prove, Report, Stage, TileClass,
    UndecidedReason, Watch,
};
use foldwright::worker::{Answer, Engine, Event, Request, Worker};
use std::sync::Arc;
use std::sync::atomic::{AtomicU64, Ordering};
use std::time::{Duration, Instant};

/// Answers by the level's notes: "slow" runs until it is halted, "panic" panics, anything else is solvable at once.
#[derive(Default)]
struct MadeUp {
    searches: Arc<AtomicU64>,
}

impl Engine for MadeUp {
    fn replays(&self, _: &Mechanics, level: &Level, _: &Route) -> bool {
        level.notes != "broken route"
    }

    fn answer(
        &self,
        _: &Mechanics,
        level: &Level,
        _: Prove,
        limits: &Limits,
        watch: &mut dyn Watch,
    ) -> Answer {
        self.searches.fetch_add(1, Ordering::SeqCst);
        assert_ne!(level.notes, "panic", "made to fail");
        let started = Instant::now();
        while level.notes == "slow"
            && !limits.halt.fired()
            && started.elapsed() < Duration::from_secs(20)
        {
            watch.progress(&glimpse());
            std::thread::sleep(Duration::from_micros(200));
        }
        let outcome = match limits.halt.fired() {
            true => Outcome::Undecided(UndecidedReason::Stopped),
            false => Outcome::Solvable,
        };
        Answer::Studied(Arc::new(report(outcome, level.size)))
    }

    fn tiles(
        &self,
        _: &Mechanics,
        level: &Level,
        _: &Report,
        _: &Limits,
        tell: &mut dyn FnMut(Cell, TileClass),
    ) -> Vec<Option<TileClass>> {
        level
            .size
            .cells()
            .for_each(|cell| tell(cell, TileClass::Idle));
        vec![Some(TileClass::Idle); level.size.area()]
    }

    fn map(&self, _: &Mechanics, _: &Level, _: &Limits) -> Option<MapCounts> {
        None
    }
}

fn glimpse() -> Progress {
    Progress {
        stage: Stage::Looking,
        steps: Bounds::default(),
        pushes: Bounds::default(),
        positions: 1,
        folds: 1,
        bytes: 1,
        seconds: 0.0,
    }
}

fn report(outcome: Outcome, size: Size) -> Report {
    let figure = (outcome == Outcome::Solvable).then_some(Figure {
        fewest: 3,
        proved: true,
    });
    Report {
        outcome,
        steps: figure,
        pushes: figure,
        steps_low: 3,
        pushes_low: 3,
        route: None,
        spans: Vec::new(),
        positions: 1,
        folds: 1,
        bytes: 1,
        seconds: 0.0,
        heat: vec![0; size.area()],
        touched: vec![false; size.area()],
        closed: true,
    }
}

fn mechanics() -> Arc<Mechanics> {
    let id = |text| KindId::new(text).expect("a good id");
    Arc::new(Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: vec![Clause::GemsTaken],
        grounds: vec![GroundKind::plain(id("gravel"), "gravel")],
        bodies: vec![BodyKind::plain(id("gardener"), "gardener", Role::Walker)],
        items: Vec::new(),
        legend: Legend::default(),
    })
}

fn level(width: usize, notes: &str) -> Arc<Level> {
    let size = Size::new(width, 2).expect("a good size");
    let mut level = Level::filled("a level", size, GroundIx(0));
    level.notes = notes.to_owned();
    Arc::new(level)
}

fn study(revision: u64, level: Arc<Level>, studies: bool) -> Request {
    Request::Study {
        revision,
        mechanics: mechanics(),
        level,
        prove: Prove::Steps,
        last_route: None,
        studies,
    }
}

fn shelf(levels: Vec<Arc<Level>>) -> Request {
    Request::Shelf {
        mechanics: mechanics(),
        levels,
        prove: Prove::Steps,
    }
}

/// The first thing that `pick` finds among the events; fails the test after 20 seconds without it.
fn wait<T>(worker: &Worker, mut pick: impl FnMut(Event) -> Option<T>) -> T {
    let deadline = Instant::now() + Duration::from_secs(20);
    loop {
        let event = worker
            .events()
            .recv_deadline(deadline)
            .expect("an event in time");
        if let Some(found) = pick(event) {
            return found;
        }
    }
}

fn answered(event: Event) -> Option<(u64, Answer, bool)> {
    match event {
        Event::Answered {
            revision,
            answer,
            remembered,
        } => Some((revision, answer, remembered)),
        _ => None,
    }
}

fn progress_of(revision: u64) -> impl Fn(Event) -> Option<()> {
    move |event| match event {
        Event::Progress { revision: of, .. } if of == revision => Some(()),
        _ => None,
    }
}

fn outcome(answer: &Answer) -> Outcome {
    match answer {
        Answer::Studied(report) => report.outcome,
        Answer::Invalid(problems) => panic!("invalid: {problems:?}"),
    }
}

fn start() -> (Worker, Arc<AtomicU64>) {
    let engine = MadeUp::default();
    let searches = Arc::clone(&engine.searches);
    (Worker::start_with(Box::new(engine), || {}), searches)
}

/// Waits until that many searches were started, 20 seconds at most.
fn wait_for_searches(searches: &AtomicU64, wanted: u64) {
    let deadline = Instant::now() + Duration::from_secs(20);
    while searches.load(Ordering::SeqCst) < wanted && Instant::now() < deadline {
        std::thread::sleep(Duration::from_millis(1));
    }
    assert_eq!(searches.load(Ordering::SeqCst), wanted);
}

#[test]
fn a_newer_edit_cancels_the_older_search() {
    let (mut worker, _) = start();
    worker.ask(study(1, level(2, "slow"), false));
    wait(&worker, progress_of(1));
    worker.ask(study(2, level(3, ""), false));
    let (revision, first, _) = wait(&worker, answered);
    let stopped = Outcome::Undecided(UndecidedReason::Stopped);
    assert_eq!((revision, outcome(&first)), (1, stopped));
    let (revision, second, _) = wait(&worker, answered);
    assert_eq!((revision, outcome(&second)), (2, Outcome::Solvable));
}

#[test]
fn of_many_waiting_edits_not_all_are_searched_and_the_newest_is_answered() {
    let (mut worker, searches) = start();
    worker.ask(study(1, level(2, "slow"), false));
    wait(&worker, progress_of(1));
    for revision in 2..=200 {
        worker.ask(study(
            revision,
            level(2 + (revision as usize % 60), "slow"),
            false,
        ));
    }
    worker.ask(study(201, level(2, "new"), false));
    let newest = wait(&worker, |event| {
        answered(event).filter(|(revision, ..)| *revision == 201)
    });
    assert_eq!(outcome(&newest.1), Outcome::Solvable);
    assert!(
        searches.load(Ordering::SeqCst) < 200,
        "every one of the overtaken edits was searched"
    );
}

#[test]
fn stop_ends_the_search_as_undecided_and_is_not_remembered() {
    let (mut worker, searches) = start();
    worker.ask(study(1, level(2, "slow"), false));
    wait(&worker, progress_of(1));
    worker.ask(Request::Stop);
    let (_, answer, _) = wait(&worker, answered);
    assert_eq!(
        outcome(&answer),
        Outcome::Undecided(UndecidedReason::Stopped)
    );
    worker.ask(study(2, level(2, "slow"), false));
    wait(&worker, progress_of(2));
    assert_eq!(searches.load(Ordering::SeqCst), 2);
}

#[test]
fn a_board_seen_before_is_answered_from_memory() {
    let (mut worker, searches) = start();
    for (revision, width) in [(1, 4), (2, 5), (3, 4)] {
        worker.ask(study(revision, level(width, ""), false));
        let (of, _, remembered) = wait(&worker, answered);
        assert_eq!((of, remembered), (revision, revision == 3));
    }
    assert_eq!(searches.load(Ordering::SeqCst), 2);
}

#[test]
fn the_last_route_is_replayed_before_any_search() {
    for (notes, expected) in [("slow", true), ("broken route", false)] {
        let (mut worker, _) = start();
        worker.ask(Request::Study {
            revision: 7,
            mechanics: mechanics(),
            level: level(2, notes),
            prove: Prove::Steps,
            last_route: Some(Route::Steer(Vec::new())),
            studies: false,
        });
        let first = wait(&worker, Some);
        assert!(
            matches!(first, Event::Replayed { revision: 7, still_works, .. } if still_works == expected),
            "{notes}: {first:?}"
        );
    }
}

#[test]
fn a_panic_in_a_job_is_told_and_the_worker_lives_on() {
    let (mut worker, _) = start();
    worker.ask(study(1, level(2, "panic"), false));
    let message = wait(&worker, |event| match event {
        Event::Failed {
            revision: 1,
            message,
        } => Some(message),
        _ => None,
    });
    assert!(message.contains("made to fail"), "{message}");
    worker.ask(study(2, level(3, ""), false));
    assert_eq!(wait(&worker, answered).0, 2);
}

#[test]
fn glimpses_come_at_most_thirty_times_a_second() {
    let (mut worker, _) = start();
    let started = Instant::now();
    worker.ask(study(1, level(2, "slow"), false));
    wait(&worker, progress_of(1));
    std::thread::sleep(Duration::from_millis(400));
    worker.ask(Request::Stop);
    let mut glimpses = 1;
    wait(&worker, |event| {
        glimpses += u32::from(matches!(event, Event::Progress { .. }));
        answered(event)
    });
    let allowed = started.elapsed().as_secs_f64() * 30.0 + 1.0;
    assert!(
        f64::from(glimpses) <= allowed,
        "{glimpses} glimpses, {allowed} allowed"
    );
}

#[test]
fn studies_follow_the_verdict_and_the_shelf_is_answered_beside_it() {
    let (mut worker, _) = start();
    let wanted: Vec<_> = (10..14).map(|width| level(width, "")).collect();
    worker.ask(shelf(wanted.clone()));
    worker.ask(study(1, level(2, ""), true));
    let (mut lines, mut classes) = (Vec::new(), None);
    wait(&worker, |event| {
        match event {
            Event::Shelf(line) => lines.push(line.level),
            Event::TilesDone { classes: all, .. } => classes = Some(all),
            _ => {}
        }
        (lines.len() == wanted.len() && classes.is_some()).then_some(())
    });
    assert_eq!(lines, wanted);
    assert_eq!(classes.expect("just seen").len(), 4);
}

#[test]
fn a_slow_shelf_level_makes_way_for_studies_and_comes_again() {
    let (mut worker, searches) = start();
    worker.ask(shelf(vec![level(9, "slow")]));
    wait_for_searches(&searches, 1);
    worker.ask(study(1, level(2, ""), true));
    wait(&worker, |event| {
        matches!(event, Event::TilesDone { .. }).then_some(())
    });
    wait_for_searches(&searches, 3);
}

#[test]
fn dropping_the_worker_ends_its_threads() {
    let (mut worker, _) = start();
    worker.ask(study(1, level(2, "slow"), false));
    worker.ask(shelf(vec![level(9, "slow")]));
    wait(&worker, progress_of(1));
    let started = Instant::now();
    drop(worker);
    assert!(
        started.elapsed() < Duration::from_secs(10),
        "the slow jobs ran on"
    );
}
