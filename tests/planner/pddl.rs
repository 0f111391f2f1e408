//! A room written out as a planning task (PDDL 2.1 with action costs), straight from rules.md.
//!
//! A step is one action. Its schema is put together from three parts: how the walker leaves its cell (solid or frail
//! ground), what happens to cargo ahead (none, pushed on, pushed into a sink), and how the walker enters (plain, taking a
//! gem, taking a key, spending a key). Cargo that leaves frail ground leaves a hedge behind, so that the walker stays.

use crate::rooms::{
    BED, BOARD, DOOR, DRAIN, GARDENER, HEDGE, KEY, PLANTER, SACK, SEED, SLAB, SLUICE, TURNSTILE,
};
use foldwright::level::{Cell, Clause, Dir, Level, Mechanics};
use std::fmt::Write;

/// What the planner is to make cheapest.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Measure {
    Steps,
    Pushes,
}

struct Part {
    name: &'static str,
    parameters: &'static str,
    conditions: &'static str,
    effects: &'static str,
}

const LEAVE: [Part; 2] = [
    Part {
        name: "solid",
        parameters: "",
        conditions: "(solid ?p)",
        effects: "",
    },
    Part {
        name: "frail",
        parameters: "",
        conditions: "(frail ?p)",
        effects: "(not (open ?p)) (not (frail ?p)) (solid ?p)",
    },
];

const ENTER: [Part; 4] = [
    Part {
        name: "plain",
        parameters: "",
        conditions: "(unlocked ?q) (bare ?q)",
        effects: "",
    },
    Part {
        name: "gem",
        parameters: "",
        conditions: "(unlocked ?q) (gem ?q)",
        effects: "(not (gem ?q)) (bare ?q)",
    },
    Part {
        name: "key",
        parameters: "?k - key",
        conditions: "(unlocked ?q) (lies ?k ?q)",
        effects: "(not (lies ?k ?q)) (bare ?q) (held ?k)",
    },
    Part {
        name: "unlock",
        parameters: "?k - key",
        conditions: "(locked ?q) (bare ?q) (held ?k)",
        effects: "(not (locked ?q)) (unlocked ?q) (not (held ?k))",
    },
];

const CARGO: [Part; 3] = [
    Part {
        name: "walk",
        parameters: "",
        conditions: "(clear ?q)",
        effects: "",
    },
    Part {
        name: "push",
        parameters: "?r ?j - cell ?b - kind",
        conditions: "(cargo ?b ?q) (adjacent ?q ?r ?d) (clear ?r) (open ?r) (way ?r ?d) (gated ?r ?j) (occupied ?j) (unlocked ?r) (whole ?r)",
        effects: "(not (cargo ?b ?q)) (clear ?q) (cargo ?b ?r) (not (clear ?r)) (occupied ?r)",
    },
    Part {
        name: "sink",
        parameters: "?r - cell ?b - kind",
        conditions: "(cargo ?b ?q) (fills ?b) (adjacent ?q ?r ?d) (clear ?r) (open ?r) (sink ?r)",
        effects: "(not (cargo ?b ?q)) (clear ?q) (not (sink ?r)) (whole ?r)",
    },
];

/// What the walker always needs to enter cell q from p in direction d.
const LOOK: &str =
    "(walker ?p) (adjacent ?p ?q ?d) (open ?q) (way ?q ?d) (gated ?q ?h) (occupied ?h) (whole ?q)";

fn action(text: &mut String, parts: [Option<&Part>; 3], stays: bool, measure: Measure) {
    let named: Vec<&Part> = parts.into_iter().flatten().collect();
    let name: Vec<&str> = named.iter().map(|part| part.name).collect();
    let join = |pick: fn(&Part) -> &'static str| {
        named
            .iter()
            .map(|part| pick(part))
            .collect::<Vec<_>>()
            .join(" ")
    };
    let pushes = name.contains(&"push") || name.contains(&"sink");
    let cost = u8::from(measure == Measure::Steps || pushes);
    let (own_conditions, own_effects) = if stays {
        (
            "(frail ?q) (unlocked ?q)",
            "(not (occupied ?q)) (not (open ?q)) (not (frail ?q)) (solid ?q)",
        )
    } else if pushes {
        (
            "(solid ?q)",
            "(not (walker ?p)) (walker ?q) (not (occupied ?p))",
        )
    } else {
        (
            "",
            "(not (walker ?p)) (walker ?q) (not (occupied ?p)) (occupied ?q)",
        )
    };
    let _ = writeln!(
        text,
        "(:action {}{}\n :parameters (?p ?q ?h - cell ?d - way {})\n :precondition (and {LOOK} {} {own_conditions})\n :effect (and {own_effects} {} (increase (total-cost) {cost})))",
        name.join("-"),
        if stays { "-stays" } else { "" },
        join(|part| part.parameters),
        join(|part| part.conditions),
        join(|part| part.effects),
    );
}

/// The actions, with the predicates that they speak of.
pub fn domain(measure: Measure) -> String {
    let mut text = String::from(
        "(define (domain room)\n(:requirements :strips :typing :action-costs)\n(:types cell way kind key)\n(:predicates \
         (adjacent ?a ?b - cell ?d - way) (walker ?c - cell) (cargo ?b - kind ?c - cell) (fills ?b - kind) (clear ?c - cell) \
         (occupied ?c - cell) (open ?c - cell) (way ?c - cell ?d - way) (gated ?c ?h - cell) (solid ?c - cell) (frail ?c - cell) \
         (sink ?c - cell) (whole ?c - cell) (locked ?c - cell) (unlocked ?c - cell) (bare ?c - cell) (gem ?c - cell) \
         (lies ?k - key ?c - cell) (held ?k - key))\n(:functions (total-cost) - number)\n",
    );
    for leave in &LEAVE {
        for cargo in &CARGO {
            for enter in &ENTER {
                action(
                    &mut text,
                    [Some(leave), Some(cargo), Some(enter)],
                    false,
                    measure,
                );
            }
        }
    }
    for cargo in &CARGO[1..] {
        action(&mut text, [None, Some(cargo), None], true, measure);
    }
    text.push_str(")\n");
    text
}

fn name(cell: Cell) -> String {
    format!("c{}x{}", cell.x, cell.y)
}

/// The room as it stands at the start, and what is wanted.
pub fn problem(mechanics: &Mechanics, level: &Level) -> String {
    let size = level.size;
    let cells: Vec<Cell> = size
        .cells()
        .filter(|&cell| level.ground_at(cell) != HEDGE)
        .collect();
    let keys = level
        .items
        .iter()
        .filter(|&&item| item == Some(KEY))
        .count();
    let mut facts = vec![
        "(occupied always)".to_owned(),
        "(fills sack)".to_owned(),
        "(= (total-cost) 0)".to_owned(),
    ];
    let mut goals = Vec::new();
    let mut key = 0;
    for &cell in &cells {
        facts.extend(ground_facts(level, cell));
        facts.extend(body_facts(level, cell));
        match level.item_at(cell) {
            Some(KEY) => {
                facts.push(format!("(lies k{key} {})", name(cell)));
                key += 1;
            }
            Some(SEED) => {
                facts.push(format!("(gem {})", name(cell)));
                if mechanics.objective.contains(&Clause::GemsTaken) {
                    goals.push(format!("(bare {})", name(cell)));
                }
            }
            _ => facts.push(format!("(bare {})", name(cell))),
        }
        if level.ground_at(cell) == BED {
            goals.push(format!("(cargo planter {})", name(cell)));
        }
    }
    let cells: String = cells.iter().map(|&cell| name(cell) + " ").collect();
    let keys: String = (0..keys).map(|key| format!("k{key} ")).collect();
    format!(
        "(define (problem one) (:domain room)\n(:objects {cells}always - cell n e s w - way planter sack - kind {}{})\n(:init {})\n(:goal (and {}))\n(:metric minimize (total-cost)))\n",
        keys,
        if keys.is_empty() { "" } else { "- key" },
        facts.join("\n"),
        goals.join(" "),
    )
}

fn ground_facts(level: &Level, cell: Cell) -> Vec<String> {
    let (size, ground, here) = (level.size, level.ground_at(cell), name(cell));
    let either = |is: bool, yes: &str, no: &str| format!("({} {here})", if is { yes } else { no });
    let mut facts = vec![
        format!("(open {here})"),
        either(ground == BOARD, "frail", "solid"),
        either(ground == DRAIN, "sink", "whole"),
        either(ground == DOOR, "locked", "unlocked"),
    ];
    for dir in Dir::ALL {
        let one_way = (TURNSTILE.0..TURNSTILE.0 + 4).contains(&ground.0);
        if !one_way || usize::from(ground.0 - TURNSTILE.0) == dir.index() {
            facts.push(format!("(way {here} {})", dir.letter()));
        }
        if let Some(next) = size
            .neighbour(cell, dir)
            .filter(|&next| level.ground_at(next) != HEDGE)
        {
            facts.push(format!("(adjacent {here} {} {})", name(next), dir.letter()));
        }
    }
    if ground == SLUICE {
        let plates = size.cells().filter(|&plate| level.ground_at(plate) == SLAB);
        facts.extend(plates.map(|plate| format!("(gated {here} {})", name(plate))));
    } else {
        facts.push(format!("(gated {here} always)"));
    }
    facts
}

fn body_facts(level: &Level, cell: Cell) -> Vec<String> {
    let here = name(cell);
    let cargo = |kind: &str| {
        vec![
            format!("(cargo {kind} {here})"),
            format!("(occupied {here})"),
        ]
    };
    match level.body_at(cell) {
        Some(GARDENER) => vec![
            format!("(walker {here})"),
            format!("(occupied {here})"),
            format!("(clear {here})"),
        ],
        Some(PLANTER) => cargo("planter"),
        Some(SACK) => cargo("sack"),
        _ => vec![format!("(clear {here})")],
    }
}
