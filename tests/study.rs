//! Studies against plain exploration, on random levels of every trait mix.

mod support;

use foldwright::level::{Level, Mechanics, Route};
use foldwright::rules::Rules;
use foldwright::study::{
    Halt, Limits, Outcome, Prove, Report, UndecidedReason, map_counts, solve, tile_classes,
};
use foldwright::verify::plain::World;
use support::brute::{self, Space, explore};
use support::random::{self, Bulk, MIXES, Mix, TINY};

const MOST: usize = 4_000;

fn unlimited() -> Limits {
    Limits {
        time: None,
        bytes: 1 << 30,
        positions: None,
        halt: Halt::never(),
    }
}

fn answer(rules: &Rules, prove: Prove) -> Report {
    solve(rules, prove, &unlimited(), &mut ())
}

fn replays(rules: &Rules, route: &Route) -> bool {
    let played = rules.play(route);
    played.len() == route.len()
        && played
            .last()
            .is_none_or(|end| rules.finished(&end.position))
}

fn check_level(mix: &Mix, seed: u64, rules: &Rules, space: &Space) {
    let name = format!("{} {seed}", mix.name);
    let (steps, pushes) = (space.par_steps(), space.par_pushes());
    for prove in [Prove::Steps, Prove::Pushes, Prove::Both, Prove::None] {
        let report = answer(rules, prove);
        let case = format!("{name} {prove:?} {report:?}");
        match steps {
            None => {
                assert_eq!(report.outcome, Outcome::Unsolvable, "{case}");
                assert_eq!(
                    (report.steps, report.pushes, &report.route),
                    (None, None, &None),
                    "{case}"
                );
            }
            Some(_) => check_solvable(rules, prove, &report, steps, pushes, &case),
        }
        if report.closed {
            for (cell, &on) in rules_cells(rules).iter().zip(&report.touched) {
                assert_eq!(space.touched.contains(cell), on, "{cell:?} {case}");
            }
        }
    }
}

fn rules_cells(rules: &Rules) -> Vec<foldwright::level::Cell> {
    rules.size().cells().collect()
}

fn check_solvable(
    rules: &Rules,
    prove: Prove,
    report: &Report,
    steps: Option<u32>,
    pushes: Option<u32>,
    case: &str,
) {
    assert_eq!(report.outcome, Outcome::Solvable, "{case}");
    let route = report.route.as_ref().expect("a route");
    assert!(replays(rules, route), "{case}");
    assert_eq!(
        report.spans.iter().sum::<u32>(),
        route.len() as u32,
        "{case}"
    );
    let found = (report.steps.expect("steps"), report.pushes.expect("pushes"));
    for (figure, low, par) in [
        (found.0, report.steps_low, steps),
        (found.1, report.pushes_low, pushes),
    ] {
        assert!(Some(figure.fewest) >= par && Some(low) <= par, "{case}");
        assert!(!figure.proved || Some(figure.fewest) == par, "{case}");
    }
    if matches!(prove, Prove::Steps | Prove::Both) {
        assert!(
            found.0.proved && Some(route.len() as u32) == steps,
            "{case}"
        );
    }
    if matches!(prove, Prove::Pushes | Prove::Both) {
        assert!(found.1.proved, "{case}");
    }
}

fn each_small_space(
    mixes: &[Mix],
    bulk: Bulk,
    seeds: u64,
    mut tell: impl FnMut(&Mix, u64, &Mechanics, &Level, &Rules, &Space),
) -> usize {
    let mut looked_at = 0;
    for mix in mixes {
        for seed in 0..seeds {
            let (mechanics, level) = random::level(mix, bulk, seed);
            let Ok(rules) = Rules::compile(&mechanics, &level) else {
                continue;
            };
            let world = World::new(&mechanics, &level);
            let Some(space) = explore(&world, MOST) else {
                continue;
            };
            looked_at += 1;
            tell(mix, seed, &mechanics, &level, &rules, &space);
        }
    }
    looked_at
}

#[test]
fn answers_equal_plain_exploration_on_every_mix() {
    let mut solvable = 0;
    let levels = each_small_space(MIXES, TINY, 150, |mix, seed, _, _, rules, space| {
        solvable += usize::from(space.par_steps().is_some());
        check_level(mix, seed, rules, space);
    });
    assert!(
        levels > 900 && solvable > 250,
        "{levels} levels, {solvable} solvable"
    );
}

#[test]
fn maps_equal_plain_exploration_on_every_mix() {
    each_small_space(MIXES, TINY, 120, |mix, seed, _, _, rules, space| {
        let ours = map_counts(rules, &unlimited()).expect("a small space");
        let theirs = space.map();
        let name = format!("{} {seed}: {ours:?} {theirs:?}", mix.name);
        assert!(
            (ours.blind_finish_chance - theirs.blind_finish_chance).abs() < 1e-9,
            "{name}"
        );
        let whole = |counts: &foldwright::study::MapCounts| {
            (
                counts.folds,
                counts.alive,
                counts.commitments,
                counts.traps,
                counts.positions,
            )
        };
        assert_eq!(whole(&ours), whole(&theirs), "{name}");
    });
}

#[test]
fn tiles_equal_plain_closing_on_every_mix() {
    each_small_space(
        MIXES,
        TINY,
        30,
        |mix, seed, mechanics, level, rules, space| {
            let known = answer(rules, Prove::Steps);
            let mut told = vec![None; level.size.area()];
            let ours = tile_classes(
                mechanics,
                level,
                &known,
                &unlimited(),
                &mut |cell, class| {
                    told[level.size.index(cell)] = Some(class);
                },
            );
            let theirs =
                brute::tile_classes(mechanics, level, space, 100_000).expect("small spaces");
            let theirs: Vec<_> = theirs.into_iter().map(Some).collect();
            assert_eq!(ours, theirs, "{} {seed}", mix.name);
            assert_eq!(told, ours, "{} {seed}", mix.name);
        },
    );
}

#[test]
fn the_same_limit_in_positions_gives_the_same_answer() {
    let mut stopped = 0;
    for seed in 0..40 {
        let (mechanics, level) = random::level(random::mix("everything"), random::SMALL, seed);
        let Ok(rules) = Rules::compile(&mechanics, &level) else {
            continue;
        };
        let limits = Limits {
            positions: Some(60),
            ..unlimited()
        };
        let run = || {
            let mut report = solve(&rules, Prove::Both, &limits, &mut ());
            report.seconds = 0.0;
            report
        };
        let first = run();
        stopped += usize::from(first.outcome == Outcome::Undecided(UndecidedReason::Positions));
        assert_eq!(first, run());
    }
    assert!(stopped > 3, "{stopped}");
}

#[test]
fn memory_stays_within_its_budget() {
    let mut stopped = 0;
    for seed in 0..60 {
        let (mechanics, level) = random::level(random::mix("everything"), random::SMALL, seed);
        let Ok(rules) = Rules::compile(&mechanics, &level) else {
            continue;
        };
        for bytes in [0, 3_000, 20_000, 60_000] {
            let limits = Limits {
                bytes,
                positions: Some(20_000),
                ..unlimited()
            };
            let report = solve(&rules, Prove::Both, &limits, &mut ());
            assert!(report.bytes <= bytes, "{report:?}");
            stopped += usize::from(report.outcome == Outcome::Undecided(UndecidedReason::Memory));
        }
    }
    assert!(stopped > 60, "{stopped}");
}

#[test]
fn a_search_that_was_stopped_says_so() {
    let (mechanics, level) = random::level(random::mix("push-only"), random::SMALL, 1);
    let rules = Rules::compile(&mechanics, &level).expect("a valid level");
    let halt = Halt::never();
    let _newer = halt.advance();
    let limits = Limits {
        halt,
        ..unlimited()
    };
    let report = solve(&rules, Prove::Steps, &limits, &mut ());
    assert_eq!(report.outcome, Outcome::Undecided(UndecidedReason::Stopped));
    assert_eq!(map_counts(&rules, &limits), Err(UndecidedReason::Stopped));
}
