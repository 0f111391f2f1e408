//! Roams against their definition: every step tried forth and back, on random levels of every trait mix.

#![allow(clippy::unwrap_used)]

mod support;

use foldwright::rules::{Member, Position, Roam, Rules, Scratch, Step};
use rand::rngs::StdRng;
use rand::{Rng, SeedableRng};
use std::collections::{BTreeMap, BTreeSet};
use support::random::{self, MIXES, Mix, SMALL};

/// What a step leads to, by the rules of the step graph: finished positions have no outgoing edges.
fn edges(rules: &Rules, from: &Position) -> Vec<(Step, Position)> {
    if rules.finished(from) {
        return Vec::new();
    }
    let steps = rules.candidate_steps(from).into_iter();
    steps
        .filter_map(|step| rules.step(from, step).map(|(to, _)| (step, to)))
        .collect()
}

/// Everything but where the walker stands.
fn rest(rules: &Rules, position: &Position) -> Position {
    let mut words = position.clone();
    let anywhere = Member {
        cell: rules.places()[0],
        distance: 0,
    };
    rules.member_position(&position.0, &anywhere, &mut words.0);
    words
}

fn is_link(rules: &Rules, from: &Position, to: &Position) -> bool {
    rest(rules, from) == rest(rules, to) && edges(rules, to).iter().any(|(_, back)| back == from)
}

/// Distance of every position of the roam, by the definition.
fn plain_roam(rules: &Rules, from: &Position) -> BTreeMap<Position, u16> {
    let mut found = BTreeMap::from([(from.clone(), 0)]);
    let mut layer = vec![from.clone()];
    let mut distance = 0;
    while !layer.is_empty() {
        distance += 1;
        let mut next = Vec::new();
        for position in &layer {
            for (_, to) in edges(rules, position) {
                if !found.contains_key(&to) && is_link(rules, position, &to) {
                    found.insert(to.clone(), distance);
                    next.push(to);
                }
            }
        }
        layer = next;
    }
    found
}

fn check(rules: &Rules, scratch: &mut Scratch, roam: &mut Roam, from: &Position, what: &str) {
    rules.roam(scratch, &from.0, roam);
    let mut buffer = from.clone();
    let positions: Vec<Position> = roam
        .members
        .iter()
        .map(|member| {
            rules.member_position(&from.0, member, &mut buffer.0);
            buffer.clone()
        })
        .collect();
    let distances = roam.members.iter().map(|member| member.distance);
    let found: BTreeMap<Position, u16> = positions.iter().cloned().zip(distances).collect();
    assert_eq!(found, plain_roam(rules, from), "members, {what}");
    assert_eq!(positions[0], *from, "the entry comes first, {what}");

    let departures: BTreeSet<(u16, Step)> = roam
        .departures
        .iter()
        .map(|departure| (departure.member, departure.step))
        .collect();
    assert_eq!(
        departures.len(),
        roam.departures.len(),
        "none twice, {what}"
    );
    for (at, position) in positions.iter().enumerate() {
        for (step, to) in edges(rules, position) {
            let listed = departures.contains(&(at as u16, step));
            assert_eq!(listed, !is_link(rules, position, &to), "{step:?}, {what}");
        }
        let mut walked = from.clone();
        for dir in roam.walk_to(at) {
            walked = rules.step(&walked, Step { slot: 0, dir }).unwrap().0;
        }
        assert_eq!(walked, *position, "the walk leads there, {what}");
    }
    check_name(rules, scratch, roam, from, &positions, what);
}

/// The roam has one name, whichever member it is entered by.
fn check_name(
    rules: &Rules,
    scratch: &mut Scratch,
    roam: &mut Roam,
    from: &Position,
    positions: &[Position],
    what: &str,
) {
    let mut name = from.clone();
    rules.representative(&from.0, roam, &mut name.0);
    assert!(positions.contains(&name), "the name is a member, {what}");
    let last = positions.last().unwrap();
    let mut other = from.clone();
    rules.roam(scratch, &last.0, roam);
    rules.representative(&last.0, roam, &mut other.0);
    assert_eq!(other, name, "one name, {what}");
}

fn wander(mix: &Mix, seeds: std::ops::Range<u64>, steps: usize) -> usize {
    let mut folded = 0;
    for seed in seeds {
        let (mechanics, level) = random::level(mix, SMALL, seed);
        let open = seed % 3 == 0;
        let compiled = if open {
            Rules::compile_open(&mechanics, &level)
        } else {
            Rules::compile(&mechanics, &level)
        };
        let Ok(rules) = compiled else {
            continue;
        };
        let mut rng = StdRng::seed_from_u64(seed);
        let (mut scratch, mut roam) = (rules.scratch(), Roam::default());
        let mut at = rules.start();
        for number in 0..steps {
            let what = format!("{} {seed}, after {number} steps", mix.name);
            check(&rules, &mut scratch, &mut roam, &at, &what);
            folded += roam.members.len() - 1;
            let next = edges(&rules, &at);
            if next.is_empty() {
                break;
            }
            at = next[rng.random_range(0..next.len())].1.clone();
        }
    }
    folded
}

#[test]
fn a_roam_is_what_its_definition_says_on_every_mix_of_traits() {
    for mix in MIXES {
        let single = Mix {
            walkers: if mix.walkers.contains(&1) {
                1..=1
            } else {
                mix.walkers.clone()
            },
            ..mix.clone()
        };
        let folded = wander(&single, 0..150, 12);
        if single.walkers == (1..=1) {
            assert!(folded > 1000, "{} folds only {folded}", mix.name);
        }
    }
}
