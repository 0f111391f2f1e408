//! Each trait in a sentence. Boards are written as rows of letters, one layer each, and compared after a route.

use super::Rules;
use crate::level::{
    Axis, Block, BodyIx, BodyKind, Cell, Channel, Control, Dir, DragStep, Gate, GroundIx,
    GroundKind, Item, ItemIx, ItemKind, KindId, Legend, Level, Lock, Mechanics, Opens, Role, Route,
    Size,
};

fn id(text: &str) -> KindId {
    KindId::new(text).expect("as the test set it up")
}

/// `.` gravel, `X` hedge, `m` moss, `d` drain, `s` slab, `G` gate open when held, `F` gate open when free, `>` turnstile,
/// `b` rotten board (to hedge), `w` shaft, `v` rotten shaft, `z` mossy shaft, `L` door, `e` exit, `q` no cargo, `o` bed for planters.
fn grounds() -> Vec<(char, GroundKind)> {
    let make = |letter: char, name: &str, edit: &dyn Fn(&mut GroundKind)| {
        let mut kind = GroundKind::plain(id(name), name);
        edit(&mut kind);
        (letter, kind)
    };
    let a = || Channel("a".into());
    let gate = |opens| {
        move |kind: &mut GroundKind| {
            kind.gate = Some(Gate {
                channel: a(),
                opens,
            });
        }
    };
    vec![
        make('.', "gravel", &|_| {}),
        make('X', "hedge", &|kind| {
            kind.closed_to = vec![Role::Walker, Role::Cargo]
        }),
        make('m', "moss", &|kind| kind.slick = true),
        make('d', "drain", &|kind| kind.sink = Some(id("gravel"))),
        make('s', "slab", &|kind| kind.plate = Some(a())),
        make('G', "sluice", &gate(Opens::WhenHeld)),
        make('F', "flap", &gate(Opens::WhenFree)),
        make('>', "turnstile", &|kind| kind.enter_only = vec![Dir::E]),
        make('b', "board", &|kind| kind.frail = Some(id("hedge"))),
        make('w', "shaft", &|kind| kind.warp = Some(Channel("s".into()))),
        make('v', "rotten-shaft", &|kind| {
            kind.warp = Some(Channel("s".into()));
            kind.frail = Some(id("gravel"));
        }),
        make('z', "mossy-shaft", &|kind| {
            kind.warp = Some(Channel("s".into()));
            kind.slick = true;
        }),
        make('L', "door", &|kind| {
            kind.lock = Some(Lock {
                channel: Channel("brass".into()),
                becomes: id("gravel"),
            })
        }),
        make('e', "way-out", &|kind| kind.exit = true),
        make('q', "bed-edge", &|kind| kind.closed_to = vec![Role::Cargo]),
        make('o', "sun-bed", &|kind| kind.home = vec![id("planter")]),
    ]
}

/// `g` gardener, `p` planter, `r` hose reel (towed, not pushed), `t` trolley (glides), `f` grit sack (fills), `u` feather (presses nothing).
fn bodies() -> Vec<(char, BodyKind)> {
    let cargo = |letter: char, name: &str, edit: &dyn Fn(&mut BodyKind)| {
        let mut kind = BodyKind::plain(id(name), name, Role::Cargo);
        edit(&mut kind);
        (letter, kind)
    };
    let gardener = BodyKind::plain(id("gardener"), "gardener", Role::Walker);
    vec![
        ('g', gardener),
        cargo('p', "planter", &|_| {}),
        cargo('r', "hose-reel", &|kind| {
            kind.push = false;
            kind.tow = true;
        }),
        cargo('t', "trolley", &|kind| kind.glide = true),
        cargo('f', "grit-sack", &|kind| kind.fills = true),
        cargo('u', "feather", &|kind| kind.presses = false),
    ]
}

/// `j` seed (gem), `k` brass key.
fn items() -> Vec<(char, ItemKind)> {
    let make = |letter, name: &str, item| {
        let (id, label) = (id(name), name.to_string());
        let look = None;
        (
            letter,
            ItemKind {
                id,
                label,
                look,
                item,
            },
        )
    };
    vec![
        make('j', "seed", Item::Gem),
        make('k', "brass-key", Item::Key(Channel("brass".into()))),
    ]
}

fn letter_at<T>(kinds: &[(char, T)], letter: char) -> Option<u16> {
    let at = kinds.iter().position(|(known, _)| *known == letter);
    at.map(|at| at as u16)
}

fn mechanics(control: Control, strength: u8) -> Mechanics {
    Mechanics {
        control,
        strength,
        objective: Vec::new(),
        grounds: grounds().into_iter().map(|(_, kind)| kind).collect(),
        bodies: bodies().into_iter().map(|(_, kind)| kind).collect(),
        items: items().into_iter().map(|(_, kind)| kind).collect(),
        legend: Legend::default(),
    }
}

/// A level of three layers of rows, `/` between rows; `-` is nothing.
fn level(ground: &str, body: &str, item: &str) -> Level {
    let rows: Vec<&str> = ground.split('/').collect();
    let size = Size::new(rows[0].len(), rows.len()).expect("as the test set it up");
    let mut level = Level::filled("", size, GroundIx(0));
    let (grounds, bodies, items) = (grounds(), bodies(), items());
    let letters = |text: &str| -> Vec<char> { text.chars().filter(|&c| c != '/').collect() };
    for (at, letter) in letters(ground).into_iter().enumerate() {
        level.ground[at] = GroundIx(letter_at(&grounds, letter).expect("as the test set it up"));
    }
    for (at, letter) in letters(body).into_iter().enumerate() {
        level.bodies[at] = letter_at(&bodies, letter).map(BodyIx);
    }
    for (at, letter) in letters(item).into_iter().enumerate() {
        level.items[at] = letter_at(&items, letter).map(ItemIx);
    }
    level
}

fn steer(route: &str) -> Route {
    Route::Steer(route.chars().filter_map(Dir::from_letter).collect())
}

/// Plays `route` and compares ground and bodies after its last step; a dot in `pushes` is a step that was no push. A route
/// longer than `pushes` ends in a step that changes nothing.
struct Case {
    rules: Rules,
    width: usize,
}

impl Case {
    fn new(ground: &str, body: &str, item: &str) -> Case {
        Case::strong(1, ground, body, item)
    }

    fn strong(strength: u8, ground: &str, body: &str, item: &str) -> Case {
        let mechanics = mechanics(Control::Steer, strength);
        let level = level(ground, body, item);
        Case {
            rules: Rules::compile_open(&mechanics, &level).expect("as the test set it up"),
            width: level.size.width(),
        }
    }

    fn rows(&self, letters: Vec<char>) -> String {
        let rows: Vec<String> = letters
            .chunks(self.width)
            .map(|row| row.iter().collect())
            .collect();
        rows.join("/")
    }

    fn check(&self, route: &str, pushes: &str, ground: &str, body: &str) -> &Case {
        let played = self.rules.play(&steer(route));
        let pushed: String = played
            .iter()
            .map(|step| if step.pushed { 'P' } else { '.' })
            .collect();
        assert_eq!(pushed, pushes, "pushes on {route}");
        let view = played
            .last()
            .map_or(self.rules.start_view(), |step| step.view.clone());
        let (grounds, bodies) = (grounds(), bodies());
        let mut cells = vec!['-'; view.ground.len()];
        for shown in &view.bodies {
            for cell in &shown.cells {
                let at = usize::from(cell.y) * self.width + usize::from(cell.x);
                cells[at] = bodies[usize::from(shown.kind.0)].0;
            }
        }
        let now = view.ground.iter();
        let now = now.map(|ix| grounds[usize::from(ix.0)].0).collect();
        assert_eq!(self.rows(now), ground, "ground after {route}");
        assert_eq!(self.rows(cells), body, "bodies after {route}");
        self
    }
}

#[test]
fn a_walker_pushes_one_body_and_stops_before_two() {
    let case = Case::new("......", "gp-p--", "");
    case.check("e", "P", "......", "-gpp--");
    case.check("ee", "P", "......", "-gpp--");
}

#[test]
fn a_strong_walker_pushes_a_row_but_not_a_longer_one() {
    let case = Case::strong(2, "......", "gpp-p-", "");
    case.check("ee", "P", "......", "-gppp-");
}

#[test]
fn nothing_moves_off_the_board_or_onto_closed_ground() {
    Case::new("..", "gp", "").check("e", "", "..", "gp");
    Case::new("..q", "gp-", "").check("e", "", "..q", "gp-");
    Case::new("q.", "-g", "").check("w", ".", "q.", "g-");
}

#[test]
fn a_turnstile_is_entered_in_its_direction_only() {
    Case::new(".>.", "g--", "").check("eew", "..", ".>.", "--g");
    Case::new("..>", "gp-", "").check("e", "P", "..>", "-gp");
    Case::new(">..", "-pg", "").check("w", "", ">..", "-pg");
}

#[test]
fn moss_carries_on_until_something_is_in_the_way() {
    Case::new(".mm.", "g---", "").check("e", ".", ".mm.", "---g");
    Case::new(".mmm", "g--p", "").check("e", ".", ".mmm", "--gp");
    Case::new("..mm.", "gp---", "").check("e", "P", "..mm.", "-g--p");
}

#[test]
fn a_glider_slides_when_shoved() {
    Case::new("......", "gt---p", "").check("e", "P", "......", "-g--tp");
}

#[test]
fn a_sink_swallows_only_what_fills_it() {
    Case::new("..d", "gf-", "").check("ee", "P.", "...", "--g");
    Case::new("..d", "gp-", "").check("e", "", "..d", "gp-");
    Case::new(".d", "g-", "").check("e", "", ".d", "g-");
}

#[test]
fn frail_ground_changes_when_it_is_left() {
    Case::new(".b.", "g--", "").check("eew", "..", ".X.", "--g");
    Case::new(".b..", "gp--", "").check("e", "P", ".X..", "g-p-");
}

#[test]
fn a_gate_stays_open_until_the_step_ends() {
    // The walker leaves the plate in the very step in which it passes the gate, and can't come back.
    Case::new("sG.", "g--", "").check("e", ".", "sG.", "-g-");
    Case::new("sG.", "g--", "").check("eew", "..", "sG.", "--g");
    // A body that stands in a gate may leave it.
    Case::new("s.G", "--g", "").check("w", ".", "s.G", "-g-");
}

#[test]
fn a_gate_open_when_free_shuts_while_something_presses() {
    Case::new("s.F", "pg-", "").check("e", "", "s.F", "pg-");
    Case::new("s.F", "ug-", "").check("e", ".", "s.F", "u-g");
    Case::new("..s.G", "gp---", "").check("eee", "PPP", "..s.G", "---gp");
}

#[test]
fn a_warp_leads_to_its_free_twin_once() {
    Case::new(".wX.w", "g----", "").check("eww", "..", ".wX.w", "---g-");
}

#[test]
fn a_taken_twin_leaves_a_body_on_the_warp() {
    Case::new(".w.w", "g--p", "").check("e", ".", ".w.w", "-g-p");
}

#[test]
fn a_frail_warp_changes_when_it_is_left_and_its_twin_then_does_nothing() {
    Case::new(".vXw.", "g----", "").check("eew", "...", "..Xw.", "---g-");
}

#[test]
fn a_walker_that_warps_straight_back_makes_no_step() {
    Case::new("ww", "g-", "").check("e", "", "ww", "g-");
}

#[test]
fn a_lock_takes_a_key_and_opens_for_good() {
    let case = Case::new("..L.L", "g----", "-k---");
    case.check("eeee", "...", "....L", "---g-");
    Case::new(".L", "g-", "").check("e", "", ".L", "g-");
    Case::new("..L", "gp-", "k--").check("e", "", "..L", "gp-");
}

#[test]
fn items_are_taken_in_passing_and_not_where_a_walker_starts() {
    let rules = Case::new(".mm.", "g---", "jjj-").rules;
    let played = rules.play(&steer("ew"));
    let left = |step: usize| played[step].view.items.iter().flatten().count();
    assert_eq!(left(0), 1);
    assert_eq!(left(1), 0);
    let rules = Case::new("....", "gp--", "--k-").rules;
    let keys: Vec<usize> = rules
        .play(&steer("ee"))
        .iter()
        .map(|step| step.view.keys.len())
        .collect();
    assert_eq!(keys, [0, 1]);
}

#[test]
fn cargo_with_tow_follows_a_walker_that_steps_away() {
    let case = Case::new("....", "rg--", "");
    case.check("ee", "PP", "....", "--rg");
    case.check("w", "", "....", "rg--");
    Case::new("...", "-rg", "").check("w", "", "...", "-rg");
}

#[test]
fn walkers_move_together_the_foremost_first() {
    Case::new("....", "ggg-", "").check("e", ".", "....", "-ggg");
    Case::new("..X", "gg-", "").check("e", "", "..X", "gg-");
    // The second is stopped by the first, which can't move; the third pushes nothing.
    Case::new("../..", "gg/g-", "").check("s", ".", "../..", "g-/gg");
}

#[test]
fn a_slide_ends_where_it_comes_round_to_a_cell_it_has_stood_on() {
    // East over moss into the shaft, out in the west, over moss again to where the slide began.
    let case = Case::new("zmmmz", "-g---", "");
    case.check("e", ".", "zmmmz", "--g--");
}

fn drag(steps: &[(u16, char)]) -> Route {
    let steps = steps.iter().map(|&(block, letter)| DragStep {
        block,
        dir: Dir::from_letter(letter).expect("as the test set it up"),
    });
    Route::Drag(steps.collect())
}

/// A board under Drag with one lying block of kind `p` on each of `blocks`, all kinds with `axis`.
fn drag_rules(ground: &str, body: &str, blocks: &[&[(u8, u8)]], axis: Axis) -> Rules {
    let mut mechanics = mechanics(Control::Drag, 1);
    for kind in &mut mechanics.bodies {
        kind.axis = Some(axis);
    }
    let mut level = level(ground, body, "");
    level.blocks = blocks
        .iter()
        .map(|cells| Block {
            kind: BodyIx(1),
            cells: cells.iter().map(|&(x, y)| Cell::new(x, y)).collect(),
        })
        .collect();
    Rules::compile_open(&mechanics, &level).expect("as the test set it up")
}

fn cells_after(rules: &Rules, steps: &[(u16, char)], number: u16) -> Option<Vec<Cell>> {
    let played = rules.play(&drag(steps));
    assert_eq!(
        played.len(),
        steps.len(),
        "every step of {steps:?} changes something"
    );
    let view = played.last().expect("as the test set it up").view.clone();
    let found = view.bodies.into_iter().find(|body| body.number == number);
    found.map(|body| body.cells)
}

#[test]
fn a_block_moves_as_one_along_its_axis() {
    let rules = drag_rules(".../...", "---/---", &[&[(0, 0), (1, 0)]], Axis::Row);
    let moved = cells_after(&rules, &[(0, 'e')], 0).expect("as the test set it up");
    assert_eq!(moved, [Cell::new(1, 0), Cell::new(2, 0)]);
    assert!(rules.play(&drag(&[(0, 's')])).is_empty());
    assert!(rules.play(&drag(&[(0, 'w')])).is_empty());
}

#[test]
fn a_block_keeps_its_number_when_interchangeable_ones_pass_it() {
    let rules = drag_rules("..../....", "p---/--p-", &[], Axis::Any);
    let steps = [(0, 'e'), (0, 'e'), (0, 'e'), (1, 'n'), (0, 's')];
    assert_eq!(
        cells_after(&rules, &steps, 0).expect("as the test set it up"),
        [Cell::new(3, 1)]
    );
    assert_eq!(
        cells_after(&rules, &steps, 1).expect("as the test set it up"),
        [Cell::new(2, 0)]
    );
}

#[test]
fn steps_by_slot_become_a_route_by_number() {
    let rules = drag_rules("..../....", "p---/--p-", &[], Axis::Any);
    let route = drag(&[(0, 'e'), (0, 's'), (1, 'n'), (0, 'e')]);
    let mut at = rules.start();
    let mut steps = Vec::new();
    for played in rules.play(&route) {
        let candidates = rules.candidate_steps(&at);
        let step = candidates.into_iter().find(|&step| {
            rules
                .step(&at, step)
                .is_some_and(|(to, _)| to == played.position)
        });
        steps.push(step.expect("as the test set it up"));
        at = played.position;
    }
    assert_eq!(rules.route(&steps), route);
}

#[test]
fn a_block_of_two_cells_keeps_off_moss_and_a_single_one_slides() {
    assert!(
        drag_rules("..m", "---", &[&[(0, 0), (1, 0)]], Axis::Any)
            .play(&drag(&[(0, 'e')]))
            .is_empty()
    );
    let single = drag_rules(".mm.", "p---", &[], Axis::Any);
    assert_eq!(
        cells_after(&single, &[(0, 'e')], 0).expect("as the test set it up"),
        [Cell::new(3, 0)]
    );
}

#[test]
fn a_block_in_a_shut_gate_can_move_only_out_of_it() {
    let rules = drag_rules(".G..", "----", &[&[(1, 0), (2, 0)]], Axis::Any);
    assert!(rules.play(&drag(&[(0, 'w')])).is_empty());
    assert_eq!(
        cells_after(&rules, &[(0, 'e')], 0).expect("as the test set it up"),
        [Cell::new(2, 0), Cell::new(3, 0)]
    );
}

#[test]
fn frail_ground_changes_when_a_block_has_left_it_altogether() {
    let rules = drag_rules("bb..", "----", &[&[(0, 0), (1, 0)]], Axis::Any);
    let played = rules.play(&drag(&[(0, 'e'), (0, 'e')]));
    let ground =
        |step: usize| -> Vec<u16> { played[step].view.ground.iter().map(|ix| ix.0).collect() };
    assert_eq!(ground(0), [1, 8, 0, 0]);
    assert_eq!(ground(1), [1, 1, 0, 0]);
}

#[test]
fn a_closed_tile_lets_nothing_in_and_no_warp_there() {
    let case = Case::new(".w.w.", "g----", "");
    assert_eq!(
        case.rules.play(&steer("e"))[0].view.bodies[0].cells,
        [Cell::new(3, 0)]
    );
    let closed = case.rules.closing(Cell::new(3, 0));
    assert_eq!(
        closed.play(&steer("e"))[0].view.bodies[0].cells,
        [Cell::new(1, 0)]
    );
    assert_eq!(closed.play(&steer("eee")).len(), 2);
}
