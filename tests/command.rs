//! The command line, through the real program: exit statuses, reports, and bad input.

use serde_json::{Value, json};
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

#[path = "command/watched.rs"]
mod watched;

#[path = "command/bad_input.rs"]
mod bad_input;

fn folder() -> tempfile::TempDir {
    tempfile::tempdir().expect("a temporary folder")
}

fn run(folder: &Path, words: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_foldwright"))
        .args(words)
        .current_dir(folder)
        .env("FOLDWRIGHT_DATA", folder.join("data"))
        .env_remove("DISPLAY")
        .env_remove("WAYLAND_DISPLAY")
        .env_remove("WAYLAND_SOCKET")
        .env_remove("RUST_LOG")
        .stdin(Stdio::null())
        .output()
        .expect("the program starts")
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).expect("text")
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).expect("text")
}

/// One level: ground rows with W closed, and body rows.
fn level(name: &str, ground: &[&str], bodies: &[&str], more: &str) -> String {
    let rows = |rows: &[&str]| {
        rows.iter()
            .map(|row| format!("{row:?}, "))
            .collect::<String>()
    };
    format!(
        "(name: {name:?}, ground: [{}], bodies: [{}], {more}),\n",
        rows(ground),
        rows(bodies)
    )
}

fn pack(levels: &[String]) -> String {
    format!(
        "(format: 1, name: \"Rooms\", control: Steer, objective: [HomesFilled],
          grounds: {{\"gravel\": (), \"hedge\": (closed_to: [Walker, Cargo]), \"bed\": (home: [\"planter\"]), \"shaft\": (warp: \"s\")}},
          bodies: {{\"gardener\": (role: Walker), \"planter\": (role: Cargo)}},
          legend: (grounds: {{'.': \"gravel\", 'W': \"hedge\", 'o': \"bed\", '%': \"shaft\"}}, bodies: {{'g': \"gardener\", 'p': \"planter\"}}),
          levels: [\n{}])",
        levels.concat()
    )
}

/// A corridor: two pushes to the east.
fn corridor(more: &str) -> String {
    level("Corridor", &["...o"], &["gp--"], more)
}

/// The tiny room A of the check values (recomputed there): par 5 steps and 2 pushes.
fn room(more: &str) -> String {
    level(
        "Room",
        &["WWWWW", "W...W", "W...W", "W..oW", "WWWWW"],
        &["-----", "-g---", "--p--", "-----", "-----"],
        more,
    )
}

/// The planter stands in a corner.
fn stuck() -> String {
    level("Stuck", &["....", "...o"], &["p--g", "----"], "")
}

/// Many planters in a hall.
fn hall() -> String {
    let ground = ["................"; 12].map(|row| row.replace("....", "..o."));
    let mut bodies = vec!["-".repeat(16); 12];
    for row in [3, 5, 7, 9] {
        bodies[row] = "---p--p--p--p---".to_owned();
    }
    bodies[1] = "g---------------".to_owned();
    let ground: Vec<&str> = ground.iter().map(String::as_str).collect();
    let bodies: Vec<&str> = bodies.iter().map(String::as_str).collect();
    level(
        "Hall",
        &ground,
        &bodies,
        "objective: [CargoHome([\"planter\"])]",
    )
}

/// Checks packs of these levels and holds the exit status and each verdict.
fn check(levels: &[String], more: &[&str], status: i32, verdicts: &[&str]) -> Value {
    let folder = folder();
    fs::write(folder.path().join("a.pack.ron"), pack(levels)).expect("written");
    let output = run(
        folder.path(),
        &[&["check", "a.pack.ron", "--json"], more].concat(),
    );
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let levels = report["packs"][0]["levels"].as_array().expect("levels");
    let found: Vec<&str> = levels
        .iter()
        .filter_map(|level| level["verdict"].as_str())
        .collect();
    assert_eq!(found, verdicts, "{report:#}");
    assert_eq!(
        output.status.code(),
        Some(status),
        "{report:#}\n{}",
        err(&output)
    );
    report
}

#[test]
fn the_report_has_every_field_in_its_order() {
    let report = check(
        &[corridor("")],
        &["--map", "--tiles", "--prove", "both"],
        0,
        &["solvable"],
    );
    let mut level = report["packs"][0]["levels"][0].clone();
    let seconds = level["seconds"].take();
    assert!(
        seconds
            .as_f64()
            .is_some_and(|seconds| (0.0..10.0).contains(&seconds))
    );
    let (positions, folds) = (level["positions"].take(), level["folds"].take());
    assert!(positions.as_u64() >= Some(1) && folds.as_u64() >= Some(1));
    // By hand: the start, one position after the first push from which the walker can step back and forth, the end.
    let expected = json!({
        "number": 1, "name": "Corridor", "verdict": "solvable",
        "steps": {"fewest": 2, "proved": true}, "pushes": {"fewest": 2, "proved": true},
        "route": "ee", "positions": null, "folds": null, "seconds": null, "message": null,
        "tiles": {"cut_off": [], "idle": [], "useful": [], "vital": [[2, 0]], "furnished": [[0, 0], [1, 0], [3, 0]]},
        "map": {"folds": 3, "alive": 3, "commitments": 2, "traps": 0, "positions": 4, "blind_finish_chance": 1.0}
    });
    assert_eq!(level, expected);
    assert_eq!(report["schema"], 1);
    let pack = &report["packs"][0];
    assert_eq!(
        (&pack["file"], &pack["name"], &pack["error"]),
        (&json!("a.pack.ron"), &json!("Rooms"), &Value::Null)
    );
}

#[test]
fn fields_stand_in_the_order_of_the_format() {
    let folder = folder();
    fs::write(folder.path().join("a.pack.ron"), pack(&[corridor("")])).expect("written");
    let text = out(&run(
        folder.path(),
        &["check", "a.pack.ron", "--json", "--map", "--tiles"],
    ));
    let names = [
        "schema",
        "packs",
        "file",
        "name",
        "error",
        "levels",
        "number",
        "name",
        "verdict",
        "steps",
        "fewest",
        "proved",
        "pushes",
        "fewest",
        "proved",
        "route",
        "positions",
        "folds",
        "seconds",
        "message",
        "tiles",
        "cut_off",
        "idle",
        "useful",
        "vital",
        "furnished",
        "map",
        "folds",
        "alive",
        "commitments",
        "traps",
        "positions",
        "blind_finish_chance",
    ];
    let mut rest = text.as_str();
    for name in names {
        let at = rest
            .find(&format!("\"{name}\":"))
            .unwrap_or_else(|| panic!("{name} comes too early or not at all in {text}"));
        rest = &rest[at + 1..];
    }
}

#[test]
fn what_was_not_asked_is_null() {
    let report = check(&[room("")], &[], 0, &["solvable"]);
    let level = &report["packs"][0]["levels"][0];
    assert_eq!(level["steps"], json!({"fewest": 5, "proved": true}));
    assert_eq!(level["route"].as_str().map(str::len), Some(5));
    assert_eq!(
        (&level["tiles"], &level["map"], &level["message"]),
        (&Value::Null, &Value::Null, &Value::Null)
    );
}

#[test]
fn the_status_tells_the_worst() {
    check(&[corridor(""), room("")], &[], 0, &["solvable", "solvable"]);
    check(
        &[corridor(""), stuck()],
        &[],
        1,
        &["solvable", "unsolvable"],
    );
    check(
        &[level("Nobody", &["..o"], &["-p-"], "")],
        &[],
        1,
        &["invalid"],
    );
    let undecided = ["undecided", "undecided"];
    check(&[corridor(""), hall()], &["--limit", "0"], 3, &undecided);
    let broken = corridor("intended: \"n\"");
    check(&[hall(), broken], &["--limit", "0"], 1, &undecided);
    check(&[], &[], 0, &[]);
}

#[test]
fn an_invalid_or_undecided_level_says_why() {
    let report = check(
        &[level("Nobody", &["..o"], &["-p-"], "")],
        &["--map", "--tiles"],
        1,
        &["invalid"],
    );
    let found = &report["packs"][0]["levels"][0];
    assert!(
        found["message"]
            .as_str()
            .is_some_and(|text| text.contains("There is no walker"))
    );
    for field in ["steps", "pushes", "route", "tiles", "map"] {
        assert_eq!(found[field], Value::Null, "{field}");
    }
    let report = check(&[hall()], &["--limit", "0"], 3, &["undecided"]);
    let found = &report["packs"][0]["levels"][0];
    assert!(
        found["message"]
            .as_str()
            .is_some_and(|text| text.contains("the time was up")),
        "{found}"
    );
    assert_eq!(
        (&found["steps"], &found["route"]),
        (&Value::Null, &Value::Null)
    );
}

#[test]
fn a_level_is_chosen_by_name_or_number() {
    let levels = [
        corridor(""),
        room(""),
        level("1", &["go", ".."], &["g-", "-p"], ""),
    ];
    let levels = levels.map(|level| level.replace("\"go\"", "\".o\""));
    let numbers = |wish: &str, status: i32, verdicts: &[&str]| {
        let report = check(&levels, &["--level", wish], status, verdicts);
        let found = report["packs"][0]["levels"]
            .as_array()
            .expect("levels")
            .clone();
        found
            .iter()
            .filter_map(|level| level["number"].as_u64())
            .collect::<Vec<_>>()
    };
    assert_eq!(numbers("2", 0, &["solvable"]), [2]);
    assert_eq!(numbers("Room", 0, &["solvable"]), [2]);
    assert_eq!(
        numbers("1", 1, &["unsolvable"]),
        [3],
        "a name goes before a number"
    );
    let folder = folder();
    fs::write(folder.path().join("a.pack.ron"), pack(&levels)).expect("written");
    for wish in ["0", "4", "room", ""] {
        let output = run(folder.path(), &["check", "a.pack.ron", "--level", wish]);
        assert_eq!(output.status.code(), Some(2), "{wish}");
        assert!(
            err(&output).contains("There is no level"),
            "{}",
            err(&output)
        );
    }
}

#[test]
fn help_and_version_are_no_errors() {
    let folder = folder();
    for words in [
        &["--help"][..],
        &["--version"],
        &["-V"],
        &["check", "--help"],
        &["help", "check"],
    ] {
        let output = run(folder.path(), words);
        assert_eq!(output.status.code(), Some(0), "{words:?}");
        assert!(
            output.stderr.is_empty() && !output.stdout.is_empty(),
            "{words:?}"
        );
    }
    let help = out(&run(folder.path(), &["check", "--help"]));
    for option in [
        "--json",
        "--level",
        "--limit",
        "--memory",
        "--prove",
        "--jobs",
        "--map",
        "--tiles",
        "--quiet",
        "Exit status",
    ] {
        assert!(help.contains(option), "{option} is not in the help");
    }
    assert!(out(&run(folder.path(), &["--version"])).starts_with("foldwright "));
}

#[test]
fn the_table_is_aligned_and_sums_up() {
    let folder = folder();
    let levels = [room("par: (steps: 4)"), corridor(""), stuck()];
    fs::write(folder.path().join("a.pack.ron"), pack(&levels)).expect("written");
    let output = run(folder.path(), &["check", "a.pack.ron", "gone.pack.ron"]);
    let text = out(&output);
    let lines: Vec<&str> = text.lines().collect();
    assert_eq!(lines[0], "a.pack.ron  Rooms");
    let verdict_at = lines[1].find("verdict").expect("a head");
    let ends = |line: &str, head: &str| lines[1].find(head).map(|at| line[..at + head.len()].len());
    for (line, verdict, steps) in [
        (lines[2], "solvable", "5"),
        (lines[4], "solvable", "2"),
        (lines[5], "unsolvable", "-"),
    ] {
        assert!(line[verdict_at..].starts_with(verdict), "{text}");
        let end = ends(line, "steps").expect("a column");
        assert!(line[..end].ends_with(&format!(" {steps}")), "{text}");
    }
    assert!(
        lines[3].contains("The par of 4 steps is broken: the fewest are 5."),
        "{text}"
    );
    let last = "3 levels in 2 packs: 2 solvable, 1 unsolvable, 0 undecided, 0 invalid; 1 level with a broken watch; 1 pack unreadable";
    assert_eq!(lines.last(), Some(&last), "{text}");
    let reason = "gone.pack.ron: There is no such file. Check the name.\n";
    assert_eq!(err(&output), reason);
    assert!(text.contains("gone.pack.ron  can't be read"), "{text}");
    let quiet = out(&run(folder.path(), &["check", "a.pack.ron", "--quiet"]));
    assert!(
        quiet.contains("Room") && quiet.contains("Stuck") && !quiet.contains("Corridor"),
        "{quiet}"
    );
}

#[test]
fn several_jobs_give_the_same_report() {
    let folder = folder();
    let levels: Vec<String> = (0..12)
        .map(|at| if at % 3 == 0 { stuck() } else { room("") })
        .collect();
    fs::write(folder.path().join("a.pack.ron"), pack(&levels)).expect("written");
    let report = |jobs: &str| {
        let output = run(
            folder.path(),
            &["check", "a.pack.ron", "--json", "--jobs", jobs],
        );
        let text = out(&output);
        let lines: Vec<&str> = text
            .lines()
            .filter(|line| !line.contains("\"seconds\""))
            .collect();
        lines.join("\n")
    };
    assert_eq!(report("1"), report("4"));
}

#[test]
fn dragged_levels_report_blocks_and_moves() {
    let folder = folder();
    let text = "(format: 1, name: \"Drag\", control: Drag, objective: [CargoHome([\"bench\"])],
        grounds: {\"gravel\": (), \"bed\": (home: [\"bench\"])},
        bodies: {\"bench\": (role: Cargo, axis: Row), \"pot\": (role: Cargo, axis: Column)},
        legend: (grounds: {'.': \"gravel\", 'o': \"bed\"}, bodies: {'p': \"pot\"}),
        levels: [(name: \"One\", ground: [\"..oo\", \"....\"], bodies: [\"--p-\", \"----\"],
            blocks: [(kind: \"bench\", cells: [(0, 0), (1, 0)])], intended: [(1, S), (0, E), (0, E)], par: (steps: 3, pushes: 2))])";
    fs::write(folder.path().join("a.pack.ron"), text).expect("written");
    let output = run(
        folder.path(),
        &["check", "a.pack.ron", "--json", "--prove", "both"],
    );
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let level = &report["packs"][0]["levels"][0];
    assert_eq!(
        level["route"],
        json!([[1, "s"], [0, "e"], [0, "e"]]),
        "{level:#}"
    );
    assert_eq!(level["pushes"], json!({"fewest": 2, "proved": true}));
    assert_eq!(output.status.code(), Some(0), "{level:#}");
    assert!(out(&run(folder.path(), &["check", "a.pack.ron"])).contains("moves"));
}

#[cfg(target_os = "linux")]
#[test]
fn without_a_display_one_line_says_so_and_the_pack_is_checked() {
    let folder = folder();
    fs::write(folder.path().join("a.pack.ron"), pack(&[corridor("")])).expect("written");
    let output = run(folder.path(), &["open", "a.pack.ron"]);
    assert_eq!(output.status.code(), Some(0));
    let line = err(&output);
    assert!(
        line.lines().count() == 1 && line.contains("display") && line.contains("apt install"),
        "{line}"
    );
    assert!(out(&output).contains("1 level in 1 pack: 1 solvable"));
    let gone = run(folder.path(), &["open", "gone.pack.ron"]);
    assert_eq!(gone.status.code(), Some(2));
}

#[test]
fn paths_of_any_kind_are_named_as_given() {
    let folder = folder();
    let nested: PathBuf = folder.path().join("deep").join("er");
    fs::create_dir_all(&nested).expect("made");
    let path = nested.join("night garden.txt");
    fs::write(&path, pack(&[corridor("")])).expect("written");
    let named = path.to_str().expect("a name");
    let output = run(folder.path(), &["check", named, named, "--json"]);
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    assert_eq!(
        report["packs"].as_array().map(Vec::len),
        Some(1),
        "each file once"
    );
    assert_eq!(report["packs"][0]["file"], named);
}
