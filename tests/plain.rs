//! The plain interpreter by itself: the published tiny rooms, and that the random levels are worth comparing on.

mod support;

use foldwright::level::{
    BodyIx, BodyKind, Clause, Control, GroundIx, GroundKind, Legend, Level, Mechanics, Role, Size,
};
use foldwright::verify::plain::World;
use support::brute::explore;
use support::random::{self, MIXES, TINY, id};

fn room(rows: &str, with_objective: bool) -> (Mechanics, Level) {
    let mut wall = GroundKind::plain(id("wall"), "wall");
    wall.closed_to = vec![Role::Walker, Role::Cargo];
    let mut home = GroundKind::plain(id("home"), "home");
    home.home = vec![id("cargo")];
    let mechanics = Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: if with_objective {
            vec![Clause::HomesFilled]
        } else {
            // Never holds: the walker is asked onto an exit, and there is none.
            vec![Clause::WalkersOut]
        },
        grounds: vec![GroundKind::plain(id("floor"), "floor"), wall, home],
        bodies: vec![
            BodyKind::plain(id("walker"), "walker", Role::Walker),
            BodyKind::plain(id("cargo"), "cargo", Role::Cargo),
        ],
        items: Vec::new(),
        legend: Legend::default(),
    };
    let rows: Vec<&str> = rows.split(" / ").collect();
    let size = Size::new(rows[0].len(), rows.len()).expect("a small size");
    let mut level = Level::filled("room", size, GroundIx(0));
    for (at, letter) in rows.concat().chars().enumerate() {
        match letter {
            'W' => level.ground[at] = GroundIx(1),
            'o' => level.ground[at] = GroundIx(2),
            'g' => level.bodies[at] = Some(BodyIx(0)),
            'p' => level.bodies[at] = Some(BodyIx(1)),
            _ => {}
        }
    }
    (mechanics, level)
}

#[track_caller]
fn check_room(rows: &str, positions: u64, folds: u64, steps: u32, pushes: u32) {
    let (mechanics, level) = room(rows, false);
    let whole = explore(&World::new(&mechanics, &level), 10_000).expect("a small space");
    assert_eq!(
        (whole.map().positions, whole.map().folds),
        (positions, folds)
    );
    let (mechanics, level) = room(rows, true);
    let played = explore(&World::new(&mechanics, &level), 10_000).expect("a small space");
    assert_eq!(
        (played.par_steps(), played.par_pushes()),
        (Some(steps), Some(pushes))
    );
}

// check-values.md, Pushing: tiny rooms A and B, recomputed there by an independent breadth-first search.
#[test]
fn tiny_room_a_has_its_published_counts() {
    check_room("WWWWW / Wg..W / W.p.W / W..oW / WWWWW", 72, 9, 5, 2);
}

#[test]
fn tiny_room_b_has_its_published_counts() {
    check_room(
        "WWWWWW / Wg...W / W.p..W / W..p.W / W.oo.W / WWWWWW",
        1_676,
        53,
        6,
        3,
    );
}

#[test]
fn every_mix_yields_levels_that_can_and_levels_that_cannot_be_finished() {
    for mix in MIXES {
        let (mut solvable, mut unsolvable, mut large, mut long) = (0, 0, 0, 0);
        for seed in 0..300 {
            let (mechanics, level) = random::level(mix, TINY, seed);
            match explore(&World::new(&mechanics, &level), 3_000) {
                None => large += 1,
                Some(space) => match space.par_steps() {
                    Some(par) => {
                        solvable += 1;
                        long += u32::from(par >= 4);
                    }
                    None => unsolvable += 1,
                },
            }
        }
        println!(
            "{}: {solvable} solvable ({long} with par 4 or more), {unsolvable} not, {large} too large",
            mix.name
        );
        assert!(
            solvable >= 30 && unsolvable >= 30 && long >= 5,
            "{}",
            mix.name
        );
        assert!(large <= 150, "{}", mix.name);
    }
}
