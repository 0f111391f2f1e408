//! Par steps and par pushes against an independent answer: a classical planner from the Python registry.
//!
//! Source of the expected values: the package `up-fast-downward`, A* with the LM-cut heuristic (Helmert & Domshlak 2009),
//! run on each room written out as PDDL. It needs the planner, so it is run by `.ci/run` (or by hand) with
//! `FOLDWRIGHT_PLANNER` naming a Python that has the package: `cargo test --test planner -- --ignored`.

mod pddl;
mod rooms;

use foldwright::level::{Level, Mechanics};
use foldwright::rules::Rules;
use foldwright::study::{Limits, Outcome, Prove, Report, solve};
use pddl::Measure;
use rooms::Mix;
use std::path::Path;
use std::process::Command;

/// Rooms of each mix that can be finished, and rooms that can't.
const ROOMS: [u32; 2] = [5, 3];

/// The first seeds that give a room of each sort; ones without room for all that belongs in them are passed over.
fn chosen_rooms(mix: Mix, mechanics: &Mechanics) -> Vec<(u64, Level, Report)> {
    let (mut chosen, mut left) = (Vec::new(), ROOMS);
    for seed in 0.. {
        let level = rooms::room(mix, seed);
        let Ok(rules) = Rules::compile(mechanics, &level) else {
            continue;
        };
        let report = solve(&rules, Prove::Both, &Limits::default(), &mut ());
        let sort = match report.outcome {
            Outcome::Solvable => 0,
            Outcome::Unsolvable => 1,
            Outcome::Undecided(reason) => panic!("{mix:?} {seed} undecided: {reason:?}"),
        };
        if left[sort] > 0 {
            left[sort] -= 1;
            chosen.push((seed, level, report));
        }
        if left == [0, 0] {
            break;
        }
    }
    chosen
}

/// What the planner says: the least cost, or none if it proved that there is no plan; with its own search time in seconds.
fn plan(python: &str, folder: &Path, domain: &str, problem: &str) -> (Option<u32>, f64) {
    let (domain_file, problem_file) = (folder.join("domain.pddl"), folder.join("problem.pddl"));
    std::fs::write(&domain_file, domain).expect("the domain can be written");
    std::fs::write(&problem_file, problem).expect("the problem can be written");
    let find = "import importlib.util as u, os; print(os.path.join(os.path.dirname(u.find_spec('up_fast_downward').origin), 'downward', 'fast-downward.py'))";
    let script = Command::new(python)
        .args(["-c", find])
        .output()
        .expect("Python runs");
    let script = String::from_utf8_lossy(&script.stdout).trim().to_owned();
    let output = Command::new(python)
        .arg(script)
        .args(["--plan-file", "plan"])
        .args([&domain_file, &problem_file])
        .args(["--search", "astar(lmcut())"])
        .current_dir(folder)
        .output()
        .expect("the planner runs");
    let text = String::from_utf8_lossy(&output.stdout);
    let after = |mark: &str| {
        let line = text.lines().find(|line| line.contains(mark))?;
        line.rsplit(mark)
            .next()
            .map(|rest| rest.trim().trim_end_matches('s').to_owned())
    };
    let seconds = after("Search time: ")
        .and_then(|text| text.parse().ok())
        .unwrap_or(0.0);
    match output.status.code() {
        Some(0) => {
            let cost = after("Plan cost: ").and_then(|text| text.parse().ok());
            (Some(cost.expect("a plan has a cost")), seconds)
        }
        // Unsolvable by the translator's or by the search's proof.
        Some(10 | 11) => (None, seconds),
        code => panic!(
            "the planner ended with {code:?}:\n{text}\n{}",
            String::from_utf8_lossy(&output.stderr)
        ),
    }
}

#[test]
#[ignore = "needs the planner: set FOLDWRIGHT_PLANNER to a Python that has up-fast-downward"]
fn par_steps_and_pushes_are_those_of_a_classical_planner() {
    let python = std::env::var("FOLDWRIGHT_PLANNER")
        .expect("FOLDWRIGHT_PLANNER names a Python with up-fast-downward");
    let folder = tempfile::tempdir().expect("a temporary folder");
    println!("mix          rooms  planner s   ours s   ratio");
    for mix in Mix::ALL {
        let (mut planner_seconds, mut our_seconds) = (0.0, 0.0);
        let mechanics = rooms::mechanics(mix);
        let rooms = chosen_rooms(mix, &mechanics);
        for (seed, level, report) in &rooms {
            let ours = [report.steps, report.pushes]
                .map(|figure| figure.map(|figure| (figure.fewest, figure.proved)));
            for (measure, ours) in [Measure::Steps, Measure::Pushes].into_iter().zip(ours) {
                let problem = pddl::problem(&mechanics, level);
                let (theirs, seconds) =
                    plan(&python, folder.path(), &pddl::domain(measure), &problem);
                planner_seconds += seconds;
                let theirs = theirs.map(|cost| (cost, true));
                assert_eq!(ours, theirs, "{mix:?}, seed {seed}, {measure:?}");
            }
            our_seconds += report.seconds;
        }
        let (count, ratio) = (rooms.len(), planner_seconds / our_seconds);
        let name = format!("{mix:?}");
        println!("{name:<12} {count:>5}  {planner_seconds:>9.3}  {our_seconds:>7.4}  {ratio:>6.0}");
    }
}
