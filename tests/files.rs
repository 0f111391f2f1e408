//! Pack files: what is read, what is refused and where, and that writing gives back what was read.

use foldwright::file::{read_pack, write_pack};
use foldwright::level::*;
use rand::rngs::StdRng;
use rand::{Rng, SeedableRng};
use std::sync::Arc;

#[path = "files/refusals.rs"]
mod refusals;

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
