//! What no one would call with, and what is larger than most.

use super::*;

#[test]
fn a_bad_pack_does_not_keep_the_others_from_being_checked() {
    let folder = folder();
    fs::create_dir_all(folder.path().join("b/c")).expect("made");
    let write =
        |name: &str, text: &str| fs::write(folder.path().join(name), text).expect("written");
    write("z.pack.ron", &pack(&[corridor("")]));
    write("b/c/a.pack.ron", &pack(&[stuck()]));
    write("b/bad.pack.ron", "(format: 1,\n name: 3)");
    write(
        "b/warp.pack.ron",
        &pack(&[level("Alone", &["..%"], &["g--"], "")]),
    );
    write("notes.ron", "not a pack");
    let output = run(folder.path(), &["check", ".", "--json"]);
    assert_eq!(output.status.code(), Some(2));
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    let packs = report["packs"].as_array().expect("packs");
    let files: Vec<&str> = packs
        .iter()
        .filter_map(|pack| pack["file"].as_str())
        .collect();
    assert_eq!(
        files,
        [
            "./b/bad.pack.ron",
            "./b/c/a.pack.ron",
            "./b/warp.pack.ron",
            "./z.pack.ron"
        ]
    );
    let errors: Vec<Option<&str>> = packs.iter().map(|pack| pack["error"].as_str()).collect();
    assert!(
        errors[0].is_some_and(|error| error.starts_with("./b/bad.pack.ron:2:8: ")),
        "{errors:?}"
    );
    assert!(
        errors[2].is_some_and(|error| error.contains("Warp channel s is on 1 cells")),
        "{errors:?}"
    );
    assert_eq!((errors[1], errors[3]), (None, None));
    assert_eq!(
        (&packs[0]["name"], &packs[0]["levels"]),
        (&Value::Null, &json!([]))
    );
    assert_eq!(packs[1]["levels"][0]["verdict"], "unsolvable");
    assert!(err(&output).contains("./b/bad.pack.ron:2:8: "));
}

#[test]
fn wrong_use_ends_with_two() {
    let folder = folder();
    fs::create_dir(folder.path().join("empty")).expect("made");
    let write =
        |name: &str, text: &str| fs::write(folder.path().join(name), text).expect("written");
    write("a.pack.ron", &pack(&[corridor("")]));
    for words in [
        &["check"][..],
        &["chekc"],
        &["check", "gone.pack.ron"],
        &["check", "empty"],
        &["check", "a.pack.ron", "--limit", "soon"],
        &["check", "a.pack.ron", "--limit=-1"],
        &["check", "a.pack.ron", "--jobs", "0"],
        &["check", "a.pack.ron", "--memory", "0"],
        &["check", "a.pack.ron", "--prove", "all"],
        &["check", "a.pack.ron", "--fast"],
        &["open"],
    ] {
        let output = run(folder.path(), words);
        assert_eq!(output.status.code(), Some(2), "{words:?}");
        assert!(!output.stderr.is_empty(), "{words:?}");
    }
}

#[test]
fn no_bytes_make_the_program_panic() {
    let folder = folder();
    let good = pack(&[room("")]);
    let mut inputs: Vec<Vec<u8>> = vec![
        Vec::new(),
        vec![0; 1_000],
        vec![0xff; 1_000],
        b"(".repeat(10_000),
    ];
    inputs.extend((1..12).map(|part| good.as_bytes()[..good.len() * part / 12].to_vec()));
    inputs.push(good.replace("\"W...W\"", "\"W...\u{1f331}\"").into_bytes());
    for (at, input) in inputs.iter().enumerate() {
        fs::write(folder.path().join(format!("{at}.pack.ron")), input).expect("written");
    }
    let output = run(folder.path(), &["check", "."]);
    assert_eq!(output.status.code(), Some(2));
    let lines = err(&output);
    assert!(!lines.contains("panicked"), "{lines}");
    assert_eq!(lines.lines().count(), inputs.len(), "{lines}");
}

#[test]
fn a_thousand_levels_are_checked() {
    let folder = folder();
    fs::write(
        folder.path().join("a.pack.ron"),
        pack(&vec![corridor(""); 1_000]),
    )
    .expect("written");
    let output = run(folder.path(), &["check", "a.pack.ron"]);
    assert_eq!(output.status.code(), Some(0));
    assert!(
        out(&output).ends_with(
            "1000 levels in 1 pack: 1000 solvable, 0 unsolvable, 0 undecided, 0 invalid\n"
        )
    );
}

#[test]
fn the_largest_boards_are_checked() {
    let folder = folder();
    let mut ground = vec![".".repeat(64); 64];
    ground[0] = format!("{}o", ".".repeat(63));
    let mut bodies = vec!["-".repeat(64); 64];
    bodies[0] = format!("gp{}", "-".repeat(62));
    let ground: Vec<&str> = ground.iter().map(String::as_str).collect();
    let bodies: Vec<&str> = bodies.iter().map(String::as_str).collect();
    let large = level("Large", &ground, &bodies, "");
    fs::write(folder.path().join("a.pack.ron"), pack(&[large])).expect("written");
    let output = run(folder.path(), &["check", "a.pack.ron", "--json"]);
    let report: Value = serde_json::from_slice(&output.stdout).expect("JSON");
    assert_eq!(
        report["packs"][0]["levels"][0]["steps"]["fewest"], 62,
        "{report:#}"
    );
    assert_eq!(output.status.code(), Some(0));
}

#[test]
fn a_reader_that_goes_away_is_no_fault() {
    let folder = folder();
    fs::write(
        folder.path().join("a.pack.ron"),
        pack(&vec![corridor(""); 200]),
    )
    .expect("written");
    let mut child = Command::new(env!("CARGO_BIN_EXE_foldwright"))
        .args(["check", "a.pack.ron", "--json"])
        .current_dir(folder.path())
        .stdin(Stdio::null())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    drop(child.stdout.take());
    let output = child.wait_with_output().expect("it ends");
    assert_eq!(err(&output), "");
    assert_eq!(output.status.code(), Some(0));
}
