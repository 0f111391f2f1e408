//! Every kind of fault, with its place and its words.

use super::{DRAG, EXAMPLE};
use foldwright::file::read_pack;

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
