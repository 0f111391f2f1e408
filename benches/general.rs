//! How fast the general lane answers, on levels of our own with fixed seeds.
//!
//! `cargo bench --bench general` prints a table over many levels (median, 95th in 100, greatest), then times single levels.
//! Push-only levels are made by playing backward from a finished position; mixed ones by playing forward at random and
//! wanting the cargo where it came to.

mod made;

use foldwright::level::{Level, Mechanics};
use foldwright::rules::Rules;
use foldwright::study::{Limits, Outcome, Prove, map_counts, solve, solve_general, tile_classes};
use std::time::{Duration, Instant};

fn main() {
    table();
    divan::main();
}

fn limits() -> Limits {
    Limits {
        time: Some(Duration::from_secs(20)),
        ..Limits::default()
    }
}

fn compiled(levels: &[(Mechanics, Level)]) -> Vec<Rules> {
    levels
        .iter()
        .filter_map(|(mechanics, level)| Rules::compile(mechanics, level).ok())
        .collect()
}

/// Times one question on each level, in milliseconds.
fn times(rules: &[Rules], mut ask: impl FnMut(&Rules)) -> Vec<f64> {
    let mut times: Vec<f64> = rules
        .iter()
        .map(|rules| {
            let begun = Instant::now();
            ask(rules);
            begun.elapsed().as_secs_f64() * 1e3
        })
        .collect();
    times.sort_by(f64::total_cmp);
    times
}

fn row(name: &str, times: &[f64]) {
    let at = |part: f64| times[((times.len() - 1) as f64 * part) as usize];
    println!(
        "{name:<52} {:>5} {:>9.3} {:>9.3} {:>9.3}",
        times.len(),
        at(0.5),
        at(0.95),
        at(1.0)
    );
}

fn table() {
    println!(
        "{:<52} {:>5} {:>9} {:>9} {:>9}",
        "milliseconds", "many", "median", "95 %", "greatest"
    );
    let push = compiled(&made::push_only(100, 10, 10, 4));
    table_of("10 x 10, 4 cargo, push-only", &push);
    row(
        "  fold map",
        &times(&push, |rules| {
            let _ = map_counts(rules, &limits());
        }),
    );
    let mixed = compiled(&made::mixed(200));
    table_of("8 x 8 to 12 x 12, mixed traits", &mixed);
    tiles();
    cancel();
}

fn table_of(name: &str, rules: &[Rules]) {
    println!("{name}");
    let asked = [
        ("any route", Prove::None),
        ("fewest steps proved", Prove::Steps),
        ("fewest pushes proved", Prove::Pushes),
    ];
    for (what, prove) in asked {
        let (mut undecided, mut unproved, mut unsolvable) = (0, 0, 0);
        let taken = times(rules, |rules| {
            let report = solve_general(rules, prove, &limits(), &mut ());
            match report.outcome {
                Outcome::Undecided(_) => undecided += 1,
                Outcome::Unsolvable => unsolvable += 1,
                Outcome::Solvable => {
                    let figure = match prove {
                        Prove::Pushes => report.pushes,
                        _ => report.steps,
                    };
                    let proved = figure.is_some_and(|figure| figure.proved);
                    unproved += usize::from(prove != Prove::None && !proved);
                }
            }
        });
        row(&format!("  {what}, general lane"), &taken);
        if undecided + unproved + unsolvable > 0 {
            println!(
                "    of these {unsolvable} unsolvable, {undecided} undecided, {unproved} solvable but not proved"
            );
        }
    }
    let taken = times(rules, |rules| {
        drop(solve(rules, Prove::Steps, &limits(), &mut ()))
    });
    row("  fewest steps proved, lane as chosen", &taken);
}

fn tiles() {
    let levels = made::push_only(20, 10, 10, 4);
    let mut taken: Vec<f64> = levels
        .iter()
        .filter_map(|(mechanics, level)| {
            let rules = Rules::compile(mechanics, level).ok()?;
            let known = solve(&rules, Prove::Steps, &limits(), &mut ());
            let begun = Instant::now();
            tile_classes(mechanics, level, &known, &limits(), &mut |_, _| {});
            Some(begun.elapsed().as_secs_f64() * 1e3)
        })
        .collect();
    taken.sort_by(f64::total_cmp);
    row("10 x 10, 4 cargo: classes of all tiles", &taken);
}

/// From the moment of cancelling to the return of the search, on a board of 64 x 64 with 30 cargo.
fn cancel() {
    let levels = compiled(&made::push_only_unsolved(3, 64, 64, 30));
    let mut taken = Vec::new();
    for rules in &levels {
        for wait in [20, 50, 120, 300] {
            let halt = foldwright::study::Halt::never();
            let limits = Limits {
                halt: halt.clone(),
                ..limits()
            };
            let stopped = std::thread::scope(|scope| {
                let search = scope.spawn(|| {
                    solve_general(rules, Prove::Steps, &limits, &mut ());
                    Instant::now()
                });
                std::thread::sleep(Duration::from_millis(wait));
                let cancelled = Instant::now();
                let _newer = halt.advance();
                search
                    .join()
                    .map(|ended| ended.saturating_duration_since(cancelled))
            });
            taken.extend(stopped.ok().map(|time| time.as_secs_f64() * 1e3));
        }
    }
    taken.sort_by(f64::total_cmp);
    row("64 x 64, 30 cargo: cancelled", &taken);
}

#[divan::bench(args = [Prove::None, Prove::Steps, Prove::Pushes])]
fn push_only_level(bencher: divan::Bencher, prove: Prove) {
    let rules = compiled(&made::push_only(1, 10, 10, 4));
    bencher.bench(|| solve_general(&rules[0], prove, &limits(), &mut ()));
}

#[divan::bench]
fn compile_a_level(bencher: divan::Bencher) {
    let levels = made::push_only(1, 10, 10, 4);
    bencher.bench(|| Rules::compile(&levels[0].0, &levels[0].1));
}
