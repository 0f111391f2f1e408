//! The fast lane against plain exploration: verdict, par by steps and by pushes, and the counts of the fold map.

mod support;

use foldwright::level::{
    BodyIx, BodyKind, Clause, Control, GroundIx, GroundKind, Legend, Level, Mechanics, Role, Size,
};
use foldwright::rules::Rules;
use foldwright::study::fast::FastLevel;
use foldwright::study::{
    Halt, Limits, MapCounts, Outcome, Prove, Report, UndecidedReason, fold_map, solve_general,
};
use foldwright::verify::plain::World;
use rand::rngs::StdRng;
use rand::seq::IndexedRandom;
use rand::{Rng, SeedableRng};
use support::brute::{Space, explore};
use support::random::{self, MIXES, id};

const MOST_POSITIONS: usize = 20_000;

fn unlimited() -> Limits {
    Limits {
        time: None,
        ..Limits::default()
    }
}

/// Ground: floor, wall, home of both, home of the first, exit, closed to walkers, closed to cargo, exit and home.
fn grounds() -> Vec<GroundKind> {
    let mut wall = GroundKind::plain(id("wall"), "wall");
    wall.closed_to = vec![Role::Walker, Role::Cargo];
    let mut home = GroundKind::plain(id("home"), "home");
    home.home = vec![id("pot"), id("urn")];
    let mut pot_home = GroundKind::plain(id("pot-home"), "pot home");
    pot_home.home = vec![id("pot")];
    let mut exit = GroundKind::plain(id("exit"), "exit");
    exit.exit = true;
    let mut grate = GroundKind::plain(id("grate"), "grate");
    grate.closed_to = vec![Role::Walker];
    let mut step = GroundKind::plain(id("step"), "step");
    step.closed_to = vec![Role::Cargo];
    let mut porch = GroundKind::plain(id("porch"), "porch");
    porch.home = vec![id("pot")];
    porch.exit = true;
    vec![
        GroundKind::plain(id("floor"), "floor"),
        wall,
        home,
        pot_home,
        exit,
        grate,
        step,
        porch,
    ]
}

fn objective(rng: &mut StdRng) -> Vec<Clause> {
    let pots = || Clause::CargoHome(vec![id("pot")]);
    let both = || Clause::CargoHome(vec![id("pot"), id("urn")]);
    match rng.random_range(0..10) {
        0..=3 => vec![Clause::HomesFilled],
        4 => vec![pots()],
        5 => vec![both()],
        6 => vec![Clause::HomesFilled, pots()],
        7 => vec![Clause::WalkersOut],
        8 => vec![pots(), Clause::WalkersOut],
        _ => vec![Clause::HomesFilled, Clause::WalkersOut],
    }
}

/// A random level that pushes and nothing else. `odd` adds ground and cargo that only few levels have.
fn random_level(seed: u64, odd: bool) -> (Mechanics, Level) {
    let mut rng = StdRng::seed_from_u64(seed);
    let mechanics = Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: if odd {
            objective(&mut rng)
        } else {
            vec![Clause::HomesFilled]
        },
        grounds: grounds(),
        bodies: vec![
            BodyKind::plain(id("keeper"), "keeper", Role::Walker),
            BodyKind::plain(id("pot"), "pot", Role::Cargo),
            BodyKind::plain(id("urn"), "urn", Role::Cargo),
            BodyKind {
                push: false,
                ..BodyKind::plain(id("statue"), "statue", Role::Cargo)
            },
        ],
        items: Vec::new(),
        legend: Legend::default(),
    };
    let size = Size::new(rng.random_range(3..=6), rng.random_range(3..=5)).expect("a small size");
    let mut level = Level::filled("random", size, GroundIx(0));
    let density = rng.random_range(0..30);
    for ground in &mut level.ground {
        let dice = rng.random_range(0..100);
        *ground = GroundIx(if dice < density {
            1
        } else if odd && dice < density + 12 {
            *[3, 4, 5, 6, 7].choose(&mut rng).expect("a choice")
        } else {
            0
        });
    }
    let mut free: Vec<usize> = (0..size.area())
        .filter(|&at| level.ground[at] != GroundIx(1))
        .collect();
    let mut draw = |rng: &mut StdRng| {
        (!free.is_empty()).then(|| free.swap_remove(rng.random_range(0..free.len())))
    };
    if let Some(at) = draw(&mut rng) {
        level.bodies[at] = Some(BodyIx(0));
    }
    let cargo = rng.random_range(if odd { 0..=3 } else { 1..=3 });
    let homes = if odd { rng.random_range(1..=3) } else { cargo };
    for _ in 0..cargo {
        if let Some(at) = draw(&mut rng) {
            let kind = if odd {
                *[1, 1, 2, 2, 3].choose(&mut rng).expect("a choice")
            } else {
                1
            };
            level.bodies[at] = Some(BodyIx(kind));
        }
    }
    let homely: Vec<usize> = (0..size.area())
        .filter(|&at| level.ground[at] != GroundIx(1))
        .collect();
    for &at in homely.choose_multiple(&mut rng, homes) {
        level.ground[at] = GroundIx(2);
    }
    (mechanics, level)
}

#[derive(Debug)]
struct Compared {
    levels: u32,
    solvable: u32,
    longest: u32,
}

/// Compares all answers on the levels of a row of seeds that the fast lane takes.
fn compare(seeds: std::ops::Range<u64>, make: impl Fn(u64) -> (Mechanics, Level)) -> Compared {
    let mut compared = Compared {
        levels: 0,
        solvable: 0,
        longest: 0,
    };
    for seed in seeds {
        let (mechanics, level) = make(seed);
        let Ok(rules) = Rules::compile(&mechanics, &level) else {
            continue;
        };
        let Some(fast) = FastLevel::compile(&rules) else {
            continue;
        };
        let Some(space) = explore(&World::new(&mechanics, &level), MOST_POSITIONS) else {
            continue;
        };
        let (steps, pushes) = (space.par_steps(), space.par_pushes());
        compared.levels += 1;
        compared.solvable += u32::from(steps.is_some());
        compared.longest = compared.longest.max(steps.unwrap_or(0));
        for prove in [Prove::Steps, Prove::Pushes, Prove::Both, Prove::None] {
            let report = fast.solve(&rules, prove, &unlimited(), &mut ());
            check_report(&report, prove, steps, pushes, &space, level.size, seed);
        }
        check_closure(&fast, &space, level.size, seed);
    }
    compared
}

fn check_report(
    report: &Report,
    prove: Prove,
    steps: Option<u32>,
    pushes: Option<u32>,
    space: &Space,
    size: Size,
    seed: u64,
) {
    let expected = match steps {
        Some(_) => Outcome::Solvable,
        None => Outcome::Unsolvable,
    };
    assert_eq!(report.outcome, expected, "seed {seed}, {prove:?}");
    let (Some(steps), Some(pushes)) = (steps, pushes) else {
        assert_eq!(report.steps, None, "seed {seed}");
        return;
    };
    let (by_steps, by_pushes) = (
        report.steps.expect("solvable"),
        report.pushes.expect("solvable"),
    );
    assert!(
        report.steps_low <= steps && report.pushes_low <= pushes,
        "seed {seed}, {prove:?}"
    );
    assert!(
        !by_steps.proved || by_steps.fewest == steps,
        "seed {seed}, {prove:?}"
    );
    assert!(
        !by_pushes.proved || by_pushes.fewest == pushes,
        "seed {seed}, {prove:?}"
    );
    let wants_steps = matches!(prove, Prove::Steps | Prove::Both);
    let wants_pushes = matches!(prove, Prove::Pushes | Prove::Both);
    assert!(by_steps.proved || !wants_steps, "seed {seed}, {prove:?}");
    assert!(by_pushes.proved || !wants_pushes, "seed {seed}, {prove:?}");
    let route = report.route.as_ref().expect("solvable");
    assert_eq!(
        route.len() as u32,
        report.spans.iter().sum::<u32>(),
        "seed {seed}"
    );
    if wants_steps {
        assert_eq!(route.len() as u32, steps, "seed {seed}, {prove:?}");
    }
    let exact = touched(space, size);
    for (at, (&seen, &exact)) in report.touched.iter().zip(&exact).enumerate() {
        assert!(exact || !seen, "seed {seed}: cell {at} is never touched");
        assert!(
            !report.closed || seen == exact,
            "seed {seed}: cell {at}, closed"
        );
    }
}

/// Cells that a body comes onto, row by row.
fn touched(space: &Space, size: Size) -> Vec<bool> {
    size.cells()
        .map(|cell| space.touched.contains(&cell))
        .collect()
}

fn check_closure(fast: &FastLevel, space: &Space, size: Size, seed: u64) {
    let Some(closed) = fast.closure(&unlimited()) else {
        return;
    };
    let closed = closed.expect("no limit is met");
    let whole = space.map();
    let chance = closed.counts.blind_finish_chance;
    assert!(
        (chance - whole.blind_finish_chance).abs() < 1e-9,
        "seed {seed}: {chance}"
    );
    let counts = MapCounts {
        blind_finish_chance: chance,
        ..whole
    };
    assert_eq!(closed.counts, counts, "seed {seed}");
    assert_eq!(closed.touched, touched(space, size), "seed {seed}");
    assert_eq!(
        closed.heat.iter().sum::<u64>(),
        whole.positions,
        "seed {seed}"
    );
}

#[test]
fn plain_levels_have_the_answers_of_plain_exploration() {
    let compared = compare(0..1_500, |seed| random_level(seed, false));
    assert!(
        compared.levels > 800 && compared.solvable > 200 && compared.longest > 20,
        "{compared:?}"
    );
}

#[test]
fn odd_ground_kinds_and_objectives_have_the_answers_of_plain_exploration() {
    let compared = compare(10_000..12_000, |seed| random_level(seed, true));
    assert!(
        compared.levels > 1_000 && compared.solvable > 200 && compared.longest > 20,
        "{compared:?}"
    );
}

#[test]
fn whatever_the_lane_takes_of_mixed_traits_has_the_answers_of_plain_exploration() {
    for mix in MIXES {
        let compared = compare(0..300, |seed| random::level(mix, random::TINY, seed));
        println!("{}: {compared:?}", mix.name);
    }
}

#[test]
fn both_lanes_answer_the_same() {
    for seed in 20_000..20_300 {
        let (mechanics, level) = random_level(seed, seed % 2 == 0);
        let Ok(rules) = Rules::compile(&mechanics, &level) else {
            continue;
        };
        let Some(fast) = FastLevel::compile(&rules) else {
            continue;
        };
        let ours = fast.solve(&rules, Prove::Both, &unlimited(), &mut ());
        let theirs = solve_general(&rules, Prove::Both, &unlimited(), &mut ());
        assert_eq!(ours.outcome, theirs.outcome, "seed {seed}");
        assert_eq!(ours.steps, theirs.steps, "seed {seed}");
        assert_eq!(ours.pushes, theirs.pushes, "seed {seed}");
        if let Some(closed) = fast.closure(&unlimited()) {
            let ours = closed.expect("no limit is met").counts;
            let theirs = fold_map(&rules, &unlimited())
                .expect("no limit is met")
                .counts();
            let chances = (ours.blind_finish_chance, theirs.blind_finish_chance);
            assert!(
                (chances.0 - chances.1).abs() < 1e-9,
                "seed {seed}: {chances:?}"
            );
            let ours = MapCounts {
                blind_finish_chance: chances.1,
                ..ours
            };
            assert_eq!(ours, theirs, "seed {seed}");
        }
    }
}

/// The first random level with a route of some length.
fn long_level() -> (Rules, FastLevel) {
    (0..)
        .find_map(|seed| {
            let (mechanics, level) = random_level(seed, false);
            let rules = Rules::compile(&mechanics, &level).ok()?;
            let fast = FastLevel::compile(&rules)?;
            let report = fast.solve(&rules, Prove::Steps, &unlimited(), &mut ());
            (report.steps?.fewest > 12).then_some((rules, fast))
        })
        .expect("there are long ones")
}

#[test]
fn a_limit_on_positions_stops_every_run_at_the_same_place() {
    let (rules, fast) = long_level();
    let limits = Limits {
        positions: Some(1),
        ..unlimited()
    };
    let first = fast.solve(&rules, Prove::Steps, &limits, &mut ());
    let second = fast.solve(&rules, Prove::Steps, &limits, &mut ());
    assert_eq!(
        first.outcome,
        Outcome::Undecided(UndecidedReason::Positions)
    );
    assert_eq!(
        (first.positions, first.folds),
        (second.positions, second.folds)
    );
}

#[test]
fn a_halt_stops_at_once() {
    let (rules, fast) = long_level();
    let halt = Halt::never();
    let _later = halt.advance();
    let limits = Limits {
        halt,
        ..unlimited()
    };
    let report = fast.solve(&rules, Prove::Steps, &limits, &mut ());
    assert_eq!(report.outcome, Outcome::Undecided(UndecidedReason::Stopped));
}
