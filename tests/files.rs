//! Pack files: what is read, what is refused and where, and that writing gives back what was read.

use foldwright::file::{read_pack, write_pack};
use foldwright::level::*;
use rand::rngs::StdRng;
use rand::{Rng, SeedableRng};
use std::sync::Arc;

/// The example of the format's description.
const EXAMPLE: &str = r#"(
    format: 1,
    name: "Night greenhouse",
    control: Steer,
    strength: 1,
    objective: [HomesFilled],
    grounds: {
        "gravel": (label: "gravel"),
        "hedge": (label: "hedge", closed_to: [Walker, Cargo]),
        "sun-bed": (label: "sun bed", home: ["planter"]),
        "moss": (label: "moss", slick: true),
        "drain": (label: "drain", sink: "gravel"),
        "slab": (label: "slab", plate: "a"),
        "sluice": (label: "sluice", gate: (channel: "a", opens: WhenHeld)),
        "turnstile": (label: "turnstile", enter_only: [E]),
        "board": (label: "rotten board", frail: "drain"),
        "shaft": (label: "shaft", warp: "s"),
        "door": (label: "door", lock: (channel: "brass", becomes: "gravel")),
        "way-out": (label: "way out", exit: true),
    },
    bodies: {
        "gardener": (label: "gardener", role: Walker),
        "planter": (label: "planter", role: Cargo),
        "grit-sack": (label: "grit sack", role: Cargo, fills: true),
        "trolley": (label: "trolley", role: Cargo, glide: true),
        "bench": (label: "bench", role: Cargo, axis: Row),
        "hose-reel": (label: "hose reel", role: Cargo, push: false, tow: true),
    },
    items: {
        "seed": (label: "seed", item: Gem),
        "brass-key": (label: "brass key", item: Key("brass")),
    },
    legend: (
        grounds: {'.': "gravel", 'X': "hedge", 'o': "sun-bed"},
        bodies: {'g': "gardener", 'p': "planter"},
        items: {'s': "seed"},
    ),
    levels: [
        (
            name: "First bed",
            ground: [
                "XXXXXX",
                "X....X",
                "X..o.X",
                "XXXXXX",
            ],
            bodies: [
                "------",
                "-g----",
                "--p---",
                "------",
            ],
        ),
    ],
)
"#;

/// A small pack under Drag.
const DRAG: &str = r##"(
    format: 1,
    name: "Benches",
    control: Drag,
    objective: [CargoHome(["bench"])],
    grounds: {
        "gravel": (label: "gravel"),
        "bed": (label: "bed", home: ["bench"]),
    },
    bodies: {
        "bench": (label: "bench", role: Cargo, axis: Row),
        "pot": (label: "pot", role: Cargo, axis: Any, look: (shape: Disc, fill: "#7ccf8f", edge: "#121c19")),
        "urn": (label: "urn", role: Cargo, look: (picture: "art/pots.png", tile: (16, 16), at: (2, 3))),
        "vase": (label: "vase", role: Cargo, look: (drawing: "planter")),
    },
    legend: (
        grounds: {'.': "gravel", 'o': "bed"},
        bodies: {'p': "pot"},
    ),
    levels: [
        (
            name: "One",
            notes: "first line\nsecond \"line\"",
            ground: [
                "..oo",
                "....",
            ],
            bodies: [
                "----",
                "---p",
            ],
            blocks: [
                (kind: "bench", cells: [(0, 0), (1, 0)]),
            ],
            objective: [CargoHome(["bench"]), HomesFilled],
            intended: [(0, E), (0, E)],
            par: (steps: 2, pushes: 1),
        ),
    ],
)
"##;

fn pack_of(text: &str) -> Pack {
    read_pack(text.as_bytes()).expect("a good pack").pack
}

/// Replaces the first `from` in a good pack by `to` and holds the words of the refusal, and its place, which is where the
/// mark `¦` stands.
fn check_in(text: &str, from: &str, to: &str, words: &str) {
    assert!(text.contains(from), "{from:?} is not in the example");
    let marked = text.replacen(from, to, 1);
    let before: Vec<&str> = marked.split('¦').next().unwrap_or("").split('\n').collect();
    let place = (
        before.len(),
        before.last().map_or(0, |line| line.chars().count()) + 1,
    );
    let error = match read_pack(marked.replace('¦', "").as_bytes()) {
        Err(error) => error,
        Ok(read) => read
            .refusals
            .into_iter()
            .next()
            .unwrap_or_else(|| panic!("taken: {to}")),
    };
    assert!(error.message.contains(words), "{to}: {error}");
    assert!(error.message.ends_with('.'), "{to}: {error}");
    assert_eq!((error.line, error.column), place, "{to}: {error}");
}

fn check(from: &str, to: &str, words: &str) {
    check_in(EXAMPLE, from, to, words);
}

fn check_drag(from: &str, to: &str, words: &str) {
    check_in(DRAG, from, to, words);
}

#[test]
fn the_example_is_read_and_written_letter_for_letter() {
    for text in [EXAMPLE, DRAG] {
        let read = read_pack(text.as_bytes()).expect("a good pack");
        assert_eq!(read.refusals, []);
        assert_eq!(write_pack(&read.pack, &read.preamble), text);
    }
}

#[test]
fn every_field_arrives_in_the_model() {
    let pack = pack_of(DRAG);
    let level = &pack.levels[0];
    let bench = pack
        .mechanics
        .find_body(&KindId::new("bench").expect("there"))
        .expect("there");
    assert_eq!(pack.mechanics.control, Control::Drag);
    assert_eq!(
        (
            pack.mechanics.strength,
            level.size.width(),
            level.size.height()
        ),
        (1, 4, 2)
    );
    assert_eq!(
        level.blocks,
        [Block {
            kind: bench,
            cells: vec![Cell::new(0, 0), Cell::new(1, 0)]
        }]
    );
    assert_eq!(
        level.par,
        Some(Par {
            steps: Some(2),
            pushes: Some(1)
        })
    );
    let east = DragStep {
        block: 0,
        dir: Dir::E,
    };
    assert_eq!(level.intended, Some(Route::Drag(vec![east, east])));
    assert_eq!(level.notes, "first line\nsecond \"line\"");
    let picture = Picture {
        path: "art/pots.png".into(),
        tile: Some((16, 16)),
        at: (2, 3),
    };
    assert_eq!(pack.mechanics.bodies[2].look, Some(Look::Picture(picture)));
    let pack = pack_of(EXAMPLE);
    let door = &pack.mechanics.grounds[10];
    assert_eq!(
        door.lock.as_ref().map(|lock| lock.becomes.as_str()),
        Some("gravel")
    );
    assert!(
        !pack.mechanics.bodies[5].push
            && pack.mechanics.bodies[5].tow
            && pack.mechanics.bodies[5].presses
    );
}

#[test]
fn a_byte_order_mark_windows_line_ends_and_comments_are_taken() {
    let text = format!(
        "\u{feff}// By hand.\r\n/* Two\r\nlines */\r\n{}",
        EXAMPLE.replace('\n', "\r\n")
    );
    let read = read_pack(text.as_bytes()).expect("a good pack");
    assert_eq!(read.pack, pack_of(EXAMPLE));
    assert_eq!(read.preamble, "// By hand.\n/* Two\nlines */\n");
    assert!(!read.comments_inside);
    let written = write_pack(&read.pack, &read.preamble);
    assert_eq!(written, format!("{}{EXAMPLE}", read.preamble));
    let again = read_pack(written.as_bytes()).expect("a good pack");
    assert_eq!(again.preamble, read.preamble);
}

#[test]
fn comments_inside_are_noticed_and_texts_that_look_like_them_are_not() {
    let inside = |from: &str, to: &str| {
        read_pack(EXAMPLE.replacen(from, to, 1).as_bytes())
            .expect("a good pack")
            .comments_inside
    };
    assert!(!inside("First bed", "First // bed"));
    assert!(!inside("\"First bed\"", "r#\"First \" /* bed\"#"));
    assert!(inside(
        "axis: Row),",
        "axis: Row), // only under control Drag"
    ));
    assert!(inside("],\n)\n", "],\n)\n// the end"));
}

#[test]
fn optional_fields_may_be_left_out_or_wrapped() {
    let text = "(format: 1, name: \"\", control: Steer, grounds: {\"a\": ()})";
    let pack = pack_of(text);
    assert_eq!((pack.levels.len(), pack.mechanics.objective.len()), (0, 0));
    assert_eq!(pack.mechanics.grounds[0].label, "a");
    let wrapped = pack_of(&DRAG.replace(
        "par: (steps: 2, pushes: 1)",
        "par: Some((steps: Some(2), pushes: 1))",
    ));
    assert_eq!(wrapped, pack_of(DRAG));
}

#[test]
fn faults_of_the_text_are_refused_with_their_place() {
    check(
        "strength: 1",
        "¦strenght: 1",
        "There is no field strenght in a pack. Use format, name",
    );
    check("format: 1", "format: ¦2", "format 2");
    check("slick: true", "slick: true, ¦slick: true", "given twice");
    check("slick: true", "slick: ¦Walker", "boolean");
    check(
        "opens: WhenHeld",
        "opens: ¦Never",
        "Use WhenHeld or WhenFree",
    );
    check(
        "(label: \"seed\", item: Gem)",
        "(label: \"seed\"¦)",
        "field item of an item is missing",
    );
    check("strength: 1", "strength: ¦-1", "too great or too small");
    check(
        "strength: 1",
        "strength: ¦99999999999999999999999",
        "too great",
    );
    check("],\n)\n", "],\n)\n¦x", "closing parenthesis");
    check(
        "\"First bed\",\n            ",
        "\"First bed\"\n            ¦",
        "comma",
    );
}

#[test]
fn faults_of_kinds_are_refused_with_their_place() {
    check("strength: 1", "strength: ¦0", "strength");
    check("\"moss\":", "¦\"Moss\":", "is not an id");
    check(
        "\"moss\":",
        "¦\"hedge\":",
        "\"hedge\" is given twice in grounds",
    );
    check(
        "sink: \"gravel\"",
        "sink: ¦\"water\"",
        "no ground \"water\"",
    );
    check("frail: \"drain\"", "frail: ¦\"no way\"", "is not an id");
    check(
        "becomes: \"gravel\"",
        "becomes: ¦\"pit\"",
        "no ground \"pit\"",
    );
    check(
        "home: [\"planter\"]",
        "home: [\"planter\", ¦\"pot\"]",
        "no body \"pot\"",
    );
    check(
        "home: [\"planter\"]",
        "home: [¦\"gardener\"]",
        "is a walker",
    );
    check(
        "[HomesFilled]",
        "[WalkersOut, CargoHome([\"planter\", ¦\"pot\"])]",
        "no body \"pot\"",
    );
    check("frail: \"drain\"", "frail: ¦\"shaft\"", "is a warp");
    check("becomes: \"gravel\"", "becomes: ¦\"drain\"", "is a sink");
    check(
        "warp: \"s\"",
        "sink: \"gravel\", warp: ¦\"s\"",
        "both sink and warp",
    );
    check(
        "label: \"gravel\")",
        "label: \"gravel\", frail: ¦\"board\")",
        "itself again",
    );
    check(
        "label: \"gravel\")",
        "label: \"gravel\", frail: ¦\"gravel\")",
        "itself again",
    );
    check(
        "label: \"moss\"",
        "label: \"moss\", look: ¦(shape: Disc)",
        "colour",
    );
    check(
        "label: \"moss\"",
        "label: \"moss\", look: (shape: Disc, fill: ¦\"red\")",
        "not a colour",
    );
    check(
        "label: \"seed\"",
        "label: \"seed\", look: (shape: Disc, fill: \"#123456\", edge: ¦\"\")",
        "not a colour",
    );
    check(
        "label: \"moss\"",
        "label: \"moss\", look: (drawing: \"a\", at: ¦(1, 1))",
        "at does not belong",
    );
    check(
        "label: \"moss\"",
        "label: \"moss\", look: ¦()",
        "exactly one of",
    );
}

#[test]
fn faults_of_the_legend_are_refused_with_their_place() {
    check("'X': \"hedge\"", "¦'-': \"hedge\"", "means nothing");
    check("'X': \"hedge\"", "¦'.': \"hedge\"", "used twice");
    check("'X': \"hedge\"", "'X': ¦\"wall\"", "no ground \"wall\"");
    check("'p': \"planter\"", "'p': ¦\"pot\"", "no body \"pot\"");
    check("'s': \"seed\"", "'s': ¦\"gravel\"", "no item \"gravel\"");
}

#[test]
fn faults_of_levels_are_refused_with_their_place() {
    check("\"X....X\"", "¦\"X...X\"", "5 cells");
    check(
        "\"X..o.X\"",
        "\"X..¦?.X\"",
        "'?' is not in the legend of grounds",
    );
    check(
        "\"X..o.X\"",
        "\"X\\u{2e}\\x2e¦?.X\"",
        "'?' is not in the legend",
    );
    check("\"X..o.X\"", "r#\"X..¦?.X\"#", "'?' is not in the legend");
    check(
        "\"X..o.X\"",
        "\"X.¦-o.X\"",
        "'-' is not in the legend of grounds",
    );
    check(
        "\"-g----\"",
        "\"-¦q----\"",
        "'q' is not in the legend of bodies",
    );
    check("[\n                \"------\",", "¦[", "3 rows here and 4");
    let rows = |row: &str, times: usize| vec![format!("\"{row}\""); times].join(",");
    let from = EXAMPLE.find("ground: [\n").expect("there");
    let ground = &EXAMPLE[from..EXAMPLE.find("            bodies: [\n").expect("there")];
    check(ground, "ground: ¦[],\n", "1 to 64 rows");
    check(
        ground,
        &format!("ground: ¦[{}],\n", rows(".", 65)),
        "has 65",
    );
    check(
        ground,
        &format!("ground: [¦{}],\n", rows("", 1)),
        "1 to 64 cells",
    );
    check(
        ground,
        &format!("ground: [¦{}],\n", rows(&".".repeat(65), 1)),
        "has 65",
    );
    check(
        "name: \"First bed\",",
        "name: \"\", intended: \"ee¦xw\",",
        "'x' is no step",
    );
    check(
        "name: \"First bed\",",
        "name: \"\", par: (steps: ¦-1),",
        "too small",
    );
    check(
        "name: \"First bed\",",
        "name: \"\", objective: [CargoHome([¦\"x\"])],",
        "no body \"x\"",
    );
}

#[test]
fn faults_of_blocks_are_refused_with_their_place() {
    check_drag("[(0, 0), (1, 0)]", "¦[(0, 0), (2, 0)]", "hang together");
    check_drag("[(0, 0), (1, 0)]", "[(0, 0), ¦(0, 0)]", "a body already");
    check_drag("[(0, 0), (1, 0)]", "[(2, 1), ¦(3, 1)]", "a body already");
    check_drag(
        "[(0, 0), (1, 0)]",
        "[(3, 0), ¦(4, 0)]",
        "off the board of 4 x 2",
    );
    check_drag("[(0, 0), (1, 0)]", "[¦(-1, 0), (0, 0)]", "off the board");
    check_drag("[(0, 0), (1, 0)]", "¦[]", "1 to 16 cells");
    check_drag("kind: \"bench\"", "kind: ¦\"stool\"", "no body \"stool\"");
    let seventeen: Vec<String> = (0..17).map(|x| format!("({x}, 0)")).collect();
    check_drag(
        "[(0, 0), (1, 0)]",
        &format!("¦[{}]", seventeen.join(", ")),
        "this one has 17",
    );
}

#[test]
fn a_missing_field_is_named() {
    for (from, field) in [
        ("    name: \"Night greenhouse\",\n", "name of a pack"),
        ("    format: 1,\n", "format of a pack"),
        ("    control: Steer,\n", "control of a pack"),
        ("            name: \"First bed\",\n", "name of a level"),
        (", role: Walker", "role of a body"),
    ] {
        let error = read_pack(EXAMPLE.replacen(from, "", 1).as_bytes()).expect_err("refused");
        assert!(error.message.contains(field), "{error}");
    }
}

#[test]
fn a_level_in_the_middle_of_an_edit_opens_with_its_fault_listed() {
    let one_warp = EXAMPLE.replace("'o': \"sun-bed\"", "'o': \"shaft\"");
    let read = read_pack(one_warp.as_bytes()).expect("opens");
    assert_eq!(read.pack.levels.len(), 1);
    let lines: Vec<String> = read.refusals.iter().map(ToString::to_string).collect();
    assert_eq!(
        lines,
        ["44:21: Warp channel s is on 1 cells of this level. It needs exactly two."]
    );
    let steered = DRAG.replace("control: Drag", "control: Steer");
    let read = read_pack(steered.as_bytes()).expect("opens");
    let places: Vec<_> = read
        .refusals
        .iter()
        .map(|fault| (fault.line, fault.column))
        .collect();
    assert_eq!(places, [(33, 17), (36, 23)]);
}

#[test]
fn kinds_without_a_character_get_one_and_the_text_is_stable_after_one_save() {
    let mut pack = pack_of(EXAMPLE);
    let mut mechanics = Mechanics::clone(&pack.mechanics);
    mechanics.legend = Legend::default();
    pack.mechanics = Arc::new(mechanics);
    let mut level = Level::clone(&pack.levels[0]);
    for (cell, ground) in [
        (Cell::new(1, 1), 4),
        (Cell::new(2, 1), 5),
        (Cell::new(3, 1), 6),
    ] {
        let at = level.size.index(cell);
        level.ground[at] = GroundIx(ground);
    }
    level.items[7] = Some(ItemIx(1));
    pack.levels = vec![Arc::new(level)];
    let text = write_pack(&pack, "");
    assert!(text.contains("grounds: {'.': \"gravel\", 'X': \"hedge\", 's': \"sun-bed\", 'd': \"drain\", 'l': \"slab\", 'u': \"sluice\"}"), "{text}");
    let read = pack_of(&text);
    assert_eq!(read.levels, pack.levels);
    assert_eq!(write_pack(&read, ""), text);
}

#[test]
fn a_thousand_kinds_on_one_pack_all_get_a_character() {
    let mut pack = pack_of(EXAMPLE);
    let mut mechanics = Mechanics::clone(&pack.mechanics);
    let id = |at: usize| KindId::new(format!("g{at}")).expect("there");
    mechanics.grounds = (0..1_000)
        .map(|at| GroundKind::plain(id(at), "g"))
        .collect();
    mechanics.legend = Legend::default();
    pack.mechanics = Arc::new(mechanics);
    let mut level = Level::filled("all", Size::new(40, 25).expect("there"), GroundIx(0));
    level.ground = (0..1_000).map(GroundIx).collect();
    pack.levels = vec![Arc::new(level)];
    assert_eq!(pack_of(&write_pack(&pack, "")).levels, pack.levels);
}

#[test]
fn any_text_survives_in_names_and_notes() {
    let mut pack = pack_of(EXAMPLE);
    let all: String = (0..=0x2100u32)
        .chain([0xfeff, 0xfffd, 0x1f331, 0x10ffff])
        .filter_map(char::from_u32)
        .collect();
    let mut level = Level::clone(&pack.levels[0]);
    level.notes = all.clone();
    level.name = "\"); DROP // /* \\".into();
    pack.levels = vec![Arc::new(level)];
    pack.name = all;
    assert_eq!(pack_of(&write_pack(&pack, "")), pack);
}

#[test]
fn any_character_may_stand_in_the_legend() {
    for c in (0..=0x500u32)
        .chain([0x2028, 0xfeff, 0x1f331])
        .filter_map(char::from_u32)
        .filter(|&c| c != '-')
    {
        let mut pack = pack_of(EXAMPLE);
        let mut mechanics = Mechanics::clone(&pack.mechanics);
        mechanics.legend.grounds[0].0 = c;
        mechanics
            .legend
            .grounds
            .retain(|&(other, ix)| other != c || ix == GroundIx(0));
        pack.mechanics = Arc::new(mechanics);
        let text = write_pack(&pack, "");
        assert_eq!(pack_of(&text).levels, pack.levels, "{c:?}\n{text}");
        assert_eq!(write_pack(&pack_of(&text), ""), text, "{c:?}");
    }
}

#[test]
fn a_preamble_that_is_no_comment_does_not_spoil_the_file() {
    let pack = pack_of(EXAMPLE);
    for preamble in ["nonsense (", "// good\n)", "/* never closed"] {
        let text = write_pack(&pack, preamble);
        match read_pack(text.as_bytes()) {
            Ok(read) => assert_eq!(read.pack, pack),
            Err(error) => panic!("{preamble:?}: {error}"),
        }
    }
}

#[test]
fn no_bytes_make_the_reader_panic() {
    let deep = |open: &str, times: usize| open.repeat(times).into_bytes();
    let mut inputs = vec![
        Vec::new(),
        b"\xff\xfe(\0f\0".to_vec(),
        b"\xef\xbb\xbf".to_vec(),
        vec![0; 4_096],
        deep("(", 100_000),
        deep("[", 100_000),
        deep("/*", 100_000),
        deep("Some(", 100_000),
        deep("{\"a\":", 100_000),
        format!("(format: 1, name: {}", "[".repeat(50_000)).into_bytes(),
        b"#![enable(unwrap_newtypes)](format: 1)".to_vec(),
        b"(format: 1e999)".to_vec(),
    ];
    inputs.push(
        EXAMPLE
            .replace("1,", "340282366920938463463374607431768211456,")
            .into_bytes(),
    );
    for input in inputs {
        let error = read_pack(&input).expect_err("no pack");
        assert!(error.line >= 1 && error.column >= 1);
    }
}

#[test]
fn damaged_packs_are_refused_or_read_and_never_panic() {
    let mut rng = StdRng::seed_from_u64(20_261_201);
    let mut refused = 0;
    for round in 0..20_000 {
        let mut bytes = if round % 2 == 0 { EXAMPLE } else { DRAG }
            .as_bytes()
            .to_vec();
        for _ in 0..rng.random_range(1..4) {
            damage(&mut bytes, &mut rng);
        }
        match read_pack(&bytes) {
            Err(error) => {
                refused += 1;
                let lines = bytes.split(|&byte| byte == b'\n').count();
                assert!((1..=lines).contains(&error.line), "{error}");
            }
            Ok(read) => {
                let text = write_pack(&read.pack, &read.preamble);
                let again = read_pack(text.as_bytes()).expect("what was written can be read");
                assert_eq!(again.pack.levels, read.pack.levels);
                assert_eq!(write_pack(&again.pack, &again.preamble), text);
            }
        }
    }
    assert!(
        (8_000..19_900).contains(&refused),
        "{refused} of 20,000 refused"
    );
}

fn damage(bytes: &mut Vec<u8>, rng: &mut StdRng) {
    const PIECES: [&str; 16] = [
        "(",
        ")",
        "\"",
        "'",
        "[",
        "]",
        "{",
        "}",
        "//",
        "/*",
        "*/",
        "\\",
        "r#\"",
        "-1",
        "\u{1f331}",
        "None",
    ];
    let at = rng.random_range(0..bytes.len());
    match rng.random_range(0..6) {
        0 => bytes[at] = rng.random(),
        1 => bytes.truncate(at.max(1)),
        2 => drop(bytes.splice(at..at, PIECES[rng.random_range(0..PIECES.len())].bytes())),
        3 => {
            let end = (at + rng.random_range(1..40)).min(bytes.len());
            bytes.drain(at..end);
            bytes.push(b'\n');
        }
        4 => {
            let end = (at + rng.random_range(1..40)).min(bytes.len());
            let copy = bytes[at..end].to_vec();
            let to = rng.random_range(0..bytes.len());
            drop(bytes.splice(to..to, copy));
        }
        _ => bytes[at] ^= 1 << rng.random_range(0..7),
    }
}
