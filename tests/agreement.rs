//! The step engine against the plain interpreter: position for position, on random levels of every trait mix.

mod support;

use foldwright::level::{Control, Dir, DragStep, Level, Mechanics, Role, Route};
use foldwright::rules::{Position as Packed, Rules, Step, View};
use foldwright::verify::plain::{Act, Body, Position, Stepped, World};
use rand::rngs::StdRng;
use rand::{Rng, SeedableRng};
use rustc_hash::FxHashMap;
use std::collections::{BTreeMap, BTreeSet, VecDeque};
use support::brute::roam;
use support::random::{self, EVERYTHING, MIXES, Mix, SMALL, TINY, mix};

/// Steps tried in one random walk.
const TRIED: usize = 50;

/// The level of a seed, compiled, or `None` if it asks no sensible question.
fn compiled(mix: &Mix, bulk: random::Bulk, seed: u64) -> Option<(Mechanics, Level, Rules)> {
    let (mechanics, level) = random::level(mix, bulk, seed);
    let rules = Rules::compile(&mechanics, &level).ok()?;
    Some((mechanics, level, rules))
}

/// What a view shows, as a plain position.
fn as_plain(view: &View) -> Position {
    let mut bodies: Vec<Body> = view
        .bodies
        .iter()
        .map(|body| {
            let mut cells = body.cells.clone();
            cells.sort();
            let kind = body.kind;
            Body { kind, cells }
        })
        .collect();
    bodies.sort();
    Position {
        ground: view.ground.clone(),
        bodies,
        items: view.items.clone(),
        keys: view
            .keys
            .iter()
            .map(|(name, count)| (foldwright::level::Channel(name.clone()), *count))
            .collect(),
    }
}

/// One random walk through a level in both interpreters at once.
struct Walk<'a> {
    rules: &'a Rules,
    world: World,
    packed: Packed,
    plain: Position,
    /// Under Drag: where each block stands, by its number.
    blocks: Vec<Option<Body>>,
    steps: Vec<Step>,
    route: Vec<DragStep>,
    passed: Vec<(Position, Packed, bool)>,
    same: BTreeMap<Packed, Position>,
    name: String,
}

impl<'a> Walk<'a> {
    fn new(mechanics: &Mechanics, level: &Level, rules: &'a Rules) -> Walk<'a> {
        let world = World::new(mechanics, level);
        let blocks = level
            .bodies_in_order()
            .into_iter()
            .map(|block| {
                let mut cells = block.cells;
                cells.sort();
                let kind = block.kind;
                Some(Body { kind, cells })
            })
            .collect();
        Walk {
            rules,
            packed: rules.start(),
            plain: world.start().clone(),
            world,
            blocks,
            steps: Vec::new(),
            route: Vec::new(),
            passed: Vec::new(),
            same: BTreeMap::new(),
            name: level.name.clone(),
        }
    }

    /// Where the walk has come to, for messages.
    fn here(&self, act: Act) -> String {
        let taken: String = self.route.iter().map(|step| step.dir.letter()).collect();
        format!("{} after {taken:?}, then {act:?}", self.name)
    }

    fn try_one(&mut self, rng: &mut StdRng) {
        let dir = Dir::ALL[rng.random_range(0..4)];
        let (act, step, block) = match self.world.mechanics().control {
            Control::Steer => (Act::Walk(dir), Some(Step { slot: 0, dir }), 0),
            Control::Drag => {
                let number = rng.random_range(0..self.blocks.len());
                let Some(body) = &self.blocks[number] else {
                    return;
                };
                let act = Act::Drag(body.cells[0], dir);
                (act, self.slot_of(number, dir), number)
            }
        };
        let expected = self.world.step(&self.plain, act);
        let found = step.and_then(|step| self.rules.step(&self.packed, step));
        match (expected, step, found) {
            (None, _, None) => {}
            (Some(expected), Some(step), Some((packed, pushed))) => {
                assert_eq!(pushed, expected.pushed, "pushed: {}", self.here(act));
                let route_step = DragStep {
                    block: block as u16,
                    dir,
                };
                self.advance(expected, packed, step, route_step);
            }
            (expected, _, found) => panic!(
                "the plain interpreter {} and the engine {}: {}",
                if expected.is_some() { "steps" } else { "stays" },
                if found.is_some() { "steps" } else { "stays" },
                self.here(act)
            ),
        }
    }

    /// The step that moves the block of this number, found through the route that it would extend.
    fn slot_of(&self, number: usize, dir: Dir) -> Option<Step> {
        self.rules
            .candidate_steps(&self.packed)
            .into_iter()
            .filter(|step| step.dir == dir)
            .find(|&step| {
                let steps: Vec<Step> = self.steps.iter().copied().chain([step]).collect();
                match self.rules.route(&steps) {
                    Route::Drag(route) => {
                        route.last().map(|last| usize::from(last.block)) == Some(number)
                    }
                    Route::Steer(_) => false,
                }
            })
    }

    fn advance(&mut self, stepped: Stepped, packed: Packed, step: Step, route_step: DragStep) {
        if self.world.mechanics().control == Control::Drag {
            let block = &mut self.blocks[usize::from(route_step.block)];
            *block = block.take().and_then(|body| {
                let kind = body.kind;
                stepped.dragged.map(|cells| Body { kind, cells })
            });
        }
        self.steps.push(step);
        self.route.push(route_step);
        self.plain = stepped.position;
        self.packed = packed;
        self.passed
            .push((self.plain.clone(), self.packed.clone(), stepped.pushed));
        assert_eq!(
            self.rules.finished(&self.packed),
            self.world.finished(&self.plain),
            "finished: {} after {:?}",
            self.name,
            self.route
        );
        let known = self
            .same
            .entry(self.packed.clone())
            .or_insert_with(|| self.plain.clone());
        assert_eq!(
            *known, self.plain,
            "one packing, two positions: {}",
            self.name
        );
    }

    /// Plays the whole walk as a route and compares what every step shows.
    fn end(self) -> usize {
        let distinct: BTreeSet<&Position> = self.same.values().collect();
        assert_eq!(
            distinct.len(),
            self.same.len(),
            "one position, two packings: {}",
            self.name
        );
        assert_eq!(
            as_plain(&self.rules.start_view()),
            *self.world.start(),
            "start: {}",
            self.name
        );
        let route = match self.world.mechanics().control {
            Control::Steer => Route::Steer(self.route.iter().map(|step| step.dir).collect()),
            Control::Drag => Route::Drag(self.route.clone()),
        };
        assert_eq!(self.rules.route(&self.steps), route, "route: {}", self.name);
        let played = self.rules.play(&route);
        assert_eq!(played.len(), self.passed.len(), "length: {}", self.name);
        for (at, (played, (plain, packed, pushed))) in played.iter().zip(&self.passed).enumerate() {
            let text = || format!("{} at step {at} of {}", self.name, route.text());
            assert_eq!(as_plain(&played.view), *plain, "{}", text());
            assert_eq!(played.position, *packed, "{}", text());
            assert_eq!(played.pushed, *pushed, "{}", text());
        }
        self.passed.len()
    }
}

/// Walks through `levels` levels of a mix and returns how many steps were made.
fn walk_through(mix: &Mix, bulk: random::Bulk, levels: usize) -> usize {
    let (mut walked, mut steps, mut seed) = (0, 0, 0);
    while walked < levels {
        seed += 1;
        assert!(
            seed < 20 * levels as u64,
            "too few valid levels: {}",
            mix.name
        );
        let Some((mechanics, level, rules)) = compiled(mix, bulk, seed) else {
            continue;
        };
        let mut rng = StdRng::seed_from_u64(seed);
        let mut walk = Walk::new(&mechanics, &level, &rules);
        if walk.blocks.is_empty() {
            continue;
        }
        for _ in 0..TRIED {
            walk.try_one(&mut rng);
        }
        steps += walk.end();
        walked += 1;
    }
    steps
}

#[test]
fn the_engine_agrees_on_twenty_thousand_levels_of_all_traits() {
    let steps = walk_through(&EVERYTHING, SMALL, 12_000);
    assert!(
        steps > 150_000,
        "only {steps} of the steps tried moved anything"
    );
}

#[test]
fn the_engine_agrees_on_every_trait_mix() {
    for mix in MIXES.iter().filter(|mix| mix.control == Control::Steer) {
        let steps = walk_through(mix, SMALL, 1_000);
        assert!(steps > 10_000, "{}: only {steps} steps", mix.name);
    }
}

#[test]
fn the_engine_agrees_on_four_thousand_levels_of_dragged_blocks() {
    let steps = walk_through(mix("drag"), SMALL, 4_000);
    assert!(
        steps > 20_000,
        "only {steps} of the steps tried moved anything"
    );
}

/// Explores both step graphs side by side and returns the number of positions, up to `most`.
fn side_by_side(world: &World, rules: &Rules, most: usize, name: &str) -> usize {
    let mut packing: FxHashMap<Position, Packed> = FxHashMap::default();
    let mut unpacking: FxHashMap<Packed, Position> = FxHashMap::default();
    packing.insert(world.start().clone(), rules.start());
    unpacking.insert(rules.start(), world.start().clone());
    let mut queue = VecDeque::from([world.start().clone()]);
    while let Some(position) = queue.pop_front() {
        for dir in Dir::ALL {
            let plain = world.step(&position, Act::Walk(dir));
            let packed = rules.step(&packing[&position], Step { slot: 0, dir });
            let (Some(plain), Some((packed, _))) = (&plain, &packed) else {
                assert_eq!(plain.is_some(), packed.is_some(), "{name}");
                continue;
            };
            let known = packing.insert(plain.position.clone(), packed.clone());
            if known.is_none() {
                queue.push_back(plain.position.clone());
            }
            assert!(known.is_none_or(|known| known == *packed), "{name}");
            let known = unpacking.insert(packed.clone(), plain.position.clone());
            assert!(known.is_none_or(|known| known == plain.position), "{name}");
        }
        if packing.len() > most {
            break;
        }
    }
    packing.len()
}

#[test]
fn equal_packings_and_equal_positions_are_the_same_thing() {
    let mut positions = 0;
    for mix in MIXES.iter().filter(|mix| mix.control == Control::Steer) {
        for seed in 0..60 {
            let Some((mechanics, level, rules)) = compiled(mix, TINY, seed) else {
                continue;
            };
            let world = World::new(&mechanics, &level);
            positions += side_by_side(&world, &rules, 1_500, &level.name);
        }
    }
    assert!(positions > 50_000, "only {positions}");
}

#[test]
fn a_reach_is_the_roam_of_the_rules() {
    let (mut compared, mut wide) = (0, 0);
    for mix in MIXES.iter().filter(|mix| mix.control == Control::Steer) {
        for seed in 0..150 {
            let Some((mechanics, level, rules)) = compiled(mix, SMALL, seed) else {
                continue;
            };
            let mut rng = StdRng::seed_from_u64(seed);
            let mut walk = Walk::new(&mechanics, &level, &rules);
            for _ in 0..8 {
                let name = format!("{} after {:?}", level.name, rules.route(&walk.steps));
                let reach: BTreeSet<_> = rules.reach(&walk.packed).into_iter().collect();
                let expected = walkers_of_roam(&walk.world, &walk.plain);
                wide += usize::from(expected.len() > 3);
                compared += 1;
                assert_eq!(reach, expected, "{name}");
                walk.try_one(&mut rng);
            }
        }
    }
    assert!(wide > 1_000, "{wide} of {compared}");
}

/// The cells of the walker in its roam; with several walkers, where they stand.
fn walkers_of_roam(world: &World, position: &Position) -> BTreeSet<foldwright::level::Cell> {
    let walkers = |position: &Position| -> Vec<Body> {
        position
            .bodies
            .iter()
            .filter(|body| world.mechanics().body(body.kind).role == Role::Walker)
            .cloned()
            .collect()
    };
    let positions = if walkers(position).len() == 1 {
        roam(world, position)
    } else {
        BTreeSet::from([position.clone()])
    };
    positions
        .iter()
        .flat_map(walkers)
        .flat_map(|walker| walker.cells)
        .collect()
}
