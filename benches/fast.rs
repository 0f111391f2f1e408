//! How long the fast lane takes: `cargo bench --bench fast`. A table of medians and 99th percentiles over levels of its own.
//!
//! Every time is that from the compiled rules of a level to the answer: the lane's own tables are built anew and routes are
//! replayed by the step engine within it. Each level counts with the best of a few runs.

mod levels;

use foldwright::level::{GroundIx, Level, Mechanics, Route};
use foldwright::rules::Rules;
use foldwright::study::fast::FastLevel;
use foldwright::study::{Limits, Outcome, Prove, Report};
use levels::Shape;
use std::time::{Duration, Instant};

const SMALL: Shape = Shape {
    width: 10,
    height: 10,
    cargo: 4,
    walls: 30,
    pulls: 400,
};
/// The same with more room, which makes for many more positions.
const ROOMY: Shape = Shape { walls: 20, ..SMALL };
const MIDDLE: Shape = Shape {
    width: 16,
    height: 10,
    cargo: 8,
    walls: 15,
    pulls: 1_000,
};
const LARGE: Shape = Shape {
    width: 20,
    height: 16,
    cargo: 14,
    walls: 12,
    pulls: 3_000,
};

fn limits(seconds: f64) -> Limits {
    Limits {
        time: Some(Duration::from_secs_f64(seconds)),
        ..Limits::default()
    }
}

fn solve(rules: &Rules, prove: Prove, seconds: f64) -> Report {
    let fast = FastLevel::compile(rules).expect("push-only");
    fast.solve(rules, prove, &limits(seconds), &mut ())
}

/// Runs `work` on every level and prints the spread of the best times.
fn table_row(name: &str, runs: u32, count: usize, mut work: impl FnMut(usize)) {
    let mut times: Vec<f64> = (0..count)
        .map(|at| {
            let best = (0..runs).map(|_| {
                let started = Instant::now();
                work(at);
                started.elapsed().as_secs_f64() * 1e3
            });
            best.fold(f64::INFINITY, f64::min)
        })
        .collect();
    times.sort_by(f64::total_cmp);
    let share = |percent: usize| times[(times.len() - 1) * percent / 100];
    println!(
        "{name:44} {:>5} {:>9.3} {:>9.3} {:>9.3} {:>9.3}",
        times.len(),
        share(50),
        share(90),
        share(99),
        share(100),
    );
}

/// The first levels of a shape, in order of seeds, with a proved par over `par` steps.
fn small_levels(
    mechanics: &Mechanics,
    shape: Shape,
    count: usize,
    par: u32,
) -> Vec<(Level, Rules)> {
    (0..)
        .filter_map(|seed| {
            let level = levels::level(shape, seed)?;
            let rules = Rules::compile(mechanics, &level).ok()?;
            let report = solve(&rules, Prove::Steps, 10.0);
            let steps = report.steps.filter(|steps| steps.proved)?;
            (steps.fewest > par).then_some((level, rules))
        })
        .take(count)
        .collect()
}

/// The rules with the first tile of a cheapest route closed that makes the level unsolvable.
fn shut(level: &Level, rules: &Rules) -> Option<Rules> {
    let report = solve(rules, Prove::Steps, 10.0);
    let Some(Route::Steer(steps)) = report.route else {
        return None;
    };
    let walker = level
        .bodies
        .iter()
        .position(|body| body.is_some_and(|kind| kind.0 == 0))?;
    let mut cell = level.size.cell(walker);
    for dir in steps {
        cell = level.size.neighbour(cell, dir)?;
        if level.body_at(cell).is_none() && level.ground_at(cell) == GroundIx(0) {
            let closed = rules.closing(cell);
            if solve(&closed, Prove::None, 10.0).outcome == Outcome::Unsolvable {
                return Some(closed);
            }
        }
    }
    None
}

fn small(mechanics: &Mechanics, shape: Shape, count: usize) {
    let levels = small_levels(mechanics, shape, count, 20);
    println!(
        "\n10 x 10, 4 cargo, par over 20, {} walls in 100 inside the border (milliseconds)",
        shape.walls
    );
    println!(
        "{:44} {:>5} {:>9} {:>9} {:>9} {:>9}",
        "", "n", "median", "p90", "p99", "most"
    );
    let count = levels.len();
    let rules = |at: usize| &levels[at].1;
    table_row("rules compiled (not in what follows)", 5, count, |at| {
        Rules::compile(mechanics, &levels[at].0).expect("valid");
    });
    table_row("lane compiled", 5, count, |at| {
        FastLevel::compile(rules(at)).expect("push-only");
    });
    table_row("first route", 5, count, |at| {
        solve(rules(at), Prove::None, 10.0);
    });
    table_row("fewest pushes proved", 5, count, |at| {
        solve(rules(at), Prove::Pushes, 10.0);
    });
    table_row("fewest steps proved", 5, count, |at| {
        solve(rules(at), Prove::Steps, 10.0);
    });
    let shut: Vec<Rules> = levels
        .iter()
        .filter_map(|(level, rules)| shut(level, rules))
        .collect();
    table_row("unsolvable after closing one tile", 5, shut.len(), |at| {
        solve(&shut[at], Prove::Steps, 10.0);
    });
    let mut roams: Vec<u64> = Vec::new();
    table_row("whole map", 2, count, |at| {
        let fast = FastLevel::compile(rules(at)).expect("push-only");
        let closed = fast
            .closure(&limits(60.0))
            .expect("countable")
            .expect("in time");
        roams.push(closed.roams);
    });
    roams.sort_unstable();
    println!(
        "roams in the map: median {}, most {}",
        roams[roams.len() / 2],
        roams[roams.len() - 1]
    );
}

fn larger(mechanics: &Mechanics, shape: Shape, count: usize, asked: &[(Prove, &str, f64)]) {
    println!(
        "\n{} x {}, {} cargo, {count} levels",
        shape.width, shape.height, shape.cargo
    );
    let levels: Vec<Rules> = (0..)
        .filter_map(|seed| levels::level(shape, seed))
        .filter_map(|level| Rules::compile(mechanics, &level).ok())
        .take(count)
        .collect();
    for &(prove, name, seconds) in asked {
        let mut times: Vec<f64> = Vec::new();
        for rules in &levels {
            let report = solve(rules, prove, seconds);
            let done = report.outcome == Outcome::Solvable
                && match prove {
                    Prove::None => true,
                    Prove::Pushes => report.pushes.is_some_and(|pushes| pushes.proved),
                    Prove::Steps | Prove::Both => report.steps.is_some_and(|steps| steps.proved),
                };
            times.push(if done { report.seconds } else { f64::INFINITY });
        }
        times.sort_by(f64::total_cmp);
        let done = times.iter().filter(|time| time.is_finite()).count();
        println!(
            "{name:30} {done:>4} of {count} within {seconds} s, median {:.2} ms, slowest {:.2} ms",
            times[times.len() / 2] * 1e3,
            times[done.saturating_sub(1)] * 1e3,
        );
    }
}

fn main() {
    let mechanics = levels::mechanics();
    small(&mechanics, SMALL, 200);
    small(&mechanics, ROOMY, 50);
    larger(
        &mechanics,
        MIDDLE,
        40,
        &[
            (Prove::None, "a route", 0.1),
            (Prove::Pushes, "fewest pushes", 1.0),
            (Prove::Steps, "fewest steps", 5.0),
        ],
    );
    larger(&mechanics, LARGE, 20, &[(Prove::None, "a route", 2.0)]);
}
