//! The four kinds of tree search at equal numbers of iterations, on the levels of `sample-levels/` that can be finished.
//!
//! `cargo bench --bench tree`. Expected from the literature on tree search with reversibility folding (2021): plain UCT adds
//! about 150 nodes for each distinct state, with folding a node stands for about 7 distinct states, and at equal iterations the
//! kinds solve in the order plain, without duplicates, folding. Direction and size are what is compared, not the digit.

use foldwright::file::read_pack;
use foldwright::level::{Control, Pack};
use foldwright::rules::Rules;
use foldwright::search::tree::{TreeCounts, TreeKind, TreeSettings};
use foldwright::study::{Limits, Outcome, Prove, solve, wander};
use std::path::Path;
use std::time::Instant;

const ITERATIONS: [u64; 4] = [300, 1_000, 3_000, 10_000];
const KINDS: [TreeKind; 4] = [
    TreeKind::Plain,
    TreeKind::Novelty,
    TreeKind::NoDuplicates,
    TreeKind::Folding,
];
/// Levels with a longer par are beyond what a search without bounds can be compared on.
const MOST_STEPS: u32 = 80;

fn packs() -> Vec<Pack> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("sample-levels");
    let mut paths: Vec<_> = std::fs::read_dir(folder)
        .expect("the sample levels are there")
        .filter_map(|entry| entry.ok().map(|entry| entry.path()))
        .collect();
    paths.sort();
    let read = |path| {
        let text = std::fs::read(path).expect("a sample pack can be read");
        read_pack(&text).expect("a good pack").pack
    };
    paths.iter().map(read).collect()
}

fn levels() -> Vec<Rules> {
    let mut chosen = Vec::new();
    for pack in packs() {
        for level in &pack.levels {
            let Ok(rules) = Rules::compile(&pack.mechanics, level) else {
                continue;
            };
            let report = solve(&rules, Prove::Steps, &Limits::default(), &mut ());
            let short = report
                .steps
                .is_some_and(|figure| figure.fewest <= MOST_STEPS);
            let steered = pack.mechanics.control == Control::Steer;
            if report.outcome == Outcome::Solvable && short && steered {
                chosen.push(rules);
            }
        }
    }
    chosen
}

fn line(levels: &[Rules], kind: TreeKind, iterations: u64) {
    let started = Instant::now();
    let (mut solved, mut sum) = (0, TreeCounts::default());
    for rules in levels {
        let settings = TreeSettings::of(kind);
        let Ok(wandered) = wander(rules, settings, iterations, &Limits::default()) else {
            continue;
        };
        solved += u32::from(wandered.route.is_some());
        sum.nodes += wandered.counts.nodes;
        sum.nodes_added += wandered.counts.nodes_added;
        sum.positions += wandered.counts.positions;
    }
    let name = format!("{kind:?}");
    println!(
        "{name:<13} {iterations:>11}  {solved:>6}  {:>14.2}  {:>14.2}  {:>9}  {:>7.2}",
        sum.nodes_added as f64 / sum.positions as f64,
        sum.positions as f64 / sum.nodes as f64,
        sum.positions,
        started.elapsed().as_secs_f64(),
    );
}

fn main() {
    let levels = levels();
    println!("{} levels of par {MOST_STEPS} or less", levels.len());
    println!(
        "kind           iterations  solved  nodes/position  positions/node  positions  seconds"
    );
    for kind in KINDS {
        for iterations in ITERATIONS {
            line(&levels, kind, iterations);
        }
    }
}
