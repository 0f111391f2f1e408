//! The sample packs: written as the program writes them, drawn with its pictures, and each level's verdict the one that its pack
//! intends, as `foldwright check` on the built binary gives it.
//!
//! Packs called `unsolvable-*` hold levels that can't be finished, each for the reason in its notes; all other levels can.

use foldwright::file::{builtin, read_pack, write_pack};
use foldwright::level::{Control, Look, Pack};
use serde_json::Value;
use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("sample-levels")
}

/// File name, text and pack of each sample pack.
fn samples() -> Vec<(String, String, Pack)> {
    let mut files: Vec<PathBuf> = fs::read_dir(folder())
        .expect("the folder is there")
        .map(|entry| entry.expect("an entry").path())
        .filter(|path| path.to_string_lossy().ends_with(".pack.ron"))
        .collect();
    files.sort();
    let read = |path: PathBuf| {
        let name = path
            .file_name()
            .expect("a name")
            .to_string_lossy()
            .into_owned();
        let text = fs::read_to_string(&path).expect("text");
        let read = read_pack(text.as_bytes()).unwrap_or_else(|error| panic!("{name}: {error}"));
        assert!(read.refusals.is_empty(), "{name}: {:?}", read.refusals);
        (name, text, read.pack)
    };
    files.into_iter().map(read).collect()
}

fn meant_unsolvable(file: &str) -> bool {
    file.starts_with("unsolvable")
}

#[test]
fn sample_packs_are_written_as_the_program_writes_them() {
    for (name, text, _) in samples() {
        let read = read_pack(text.as_bytes()).expect("read before");
        assert_eq!(write_pack(&read.pack, &read.preamble), text, "{name}");
    }
}

#[test]
fn every_kind_of_a_sample_pack_has_a_picture_of_its_own() {
    for (name, _, pack) in samples() {
        let mechanics = &pack.mechanics;
        let grounds = mechanics.grounds.iter().map(|kind| (&kind.id, &kind.look));
        let bodies = mechanics.bodies.iter().map(|kind| (&kind.id, &kind.look));
        let items = mechanics.items.iter().map(|kind| (&kind.id, &kind.look));
        for (id, look) in grounds.chain(bodies).chain(items) {
            let picture = match look {
                None => id.as_str(),
                Some(Look::BuiltIn(picture)) => picture,
                Some(other) => panic!("{name}: {id} has {other:?}"),
            };
            assert!(builtin(picture).is_some(), "{name}: no picture {picture}");
        }
    }
}

#[test]
fn the_packs_hold_what_is_promised_of_them() {
    let packs: BTreeMap<String, Pack> = samples()
        .into_iter()
        .map(|(name, _, pack)| (name, pack))
        .collect();
    let pars = |pack: &Pack| -> Vec<u32> {
        let par = |level: &foldwright::level::Level| level.par.and_then(|par| par.steps);
        pack.levels
            .iter()
            .map(|level| par(level).expect("a recorded par"))
            .collect()
    };
    let main = &packs["night-greenhouse.pack.ron"];
    let steps = pars(main);
    assert!(steps.len() >= 10, "{} levels", steps.len());
    assert!(
        steps.is_sorted() && steps[0] <= 8 && steps[steps.len() - 1] > 60,
        "{steps:?}"
    );
    let large = |pack: &Pack| {
        let large = |level: &std::sync::Arc<foldwright::level::Level>| {
            level.size.width() >= 32 && level.size.height() >= 24
        };
        pack.levels.iter().any(large)
    };
    assert!(large(&packs["long-night.pack.ron"]));
    let blocks = &packs["moving-day.pack.ron"];
    assert_eq!(blocks.mechanics.control, Control::Drag);
    assert!(blocks.levels.len() >= 8);
    let moves =
        |level: &std::sync::Arc<foldwright::level::Level>| level.par.and_then(|par| par.pushes);
    assert!(blocks.levels.iter().filter_map(moves).max() > Some(30));
    for (name, pack) in &packs {
        for level in &pack.levels {
            let where_ = format!("{name}, {}", level.name);
            assert!(!level.notes.is_empty(), "{where_}: no notes");
            assert_eq!(
                level.par.is_none(),
                meant_unsolvable(name),
                "{where_}: par {:?}",
                level.par
            );
        }
    }
}

/// What `foldwright check sample-levels` prints with these options, and its exit status.
fn check(options: &[&str]) -> (Value, Option<i32>) {
    let output = Command::new(env!("CARGO_BIN_EXE_foldwright"))
        .arg("check")
        .arg(folder())
        .args(["--json", "--limit", "60"])
        .args(options)
        .stdin(Stdio::null())
        .output()
        .expect("the program runs");
    let report = serde_json::from_slice(&output.stdout)
        .unwrap_or_else(|error| panic!("{error}: {}", String::from_utf8_lossy(&output.stderr)));
    (report, output.status.code())
}

/// What a level is called in a report of [`check`], and the level's part of it.
fn levels(report: &Value) -> Vec<(String, String, Value)> {
    let mut all = Vec::new();
    for pack in report["packs"].as_array().expect("packs") {
        assert_eq!(pack["error"], Value::Null, "{pack}");
        let file = pack["file"].as_str().expect("a file");
        let file = file.rsplit(['/', '\\']).next().expect("a name").to_owned();
        for level in pack["levels"].as_array().expect("levels") {
            let name = level["name"].as_str().expect("a name").to_owned();
            all.push((file.clone(), name, level.clone()));
        }
    }
    all
}

#[test]
fn every_level_has_the_verdict_that_its_pack_intends_and_the_recorded_par() {
    let packs = samples();
    let (report, status) = check(&[]);
    assert_eq!(status, Some(1), "some levels are unsolvable on purpose");
    let answered = levels(&report);
    assert_eq!(
        answered.len(),
        packs
            .iter()
            .map(|(_, _, pack)| pack.levels.len())
            .sum::<usize>()
    );
    let mut next = BTreeMap::new();
    for (file, name, answer) in answered {
        let at = next.entry(file.clone()).or_insert(0);
        let (_, _, pack) = packs
            .iter()
            .find(|(other, _, _)| *other == file)
            .expect("a sample pack");
        let level = &pack.levels[*at];
        *at += 1;
        let where_ = format!("{file}, {name}");
        assert_eq!(name, level.name, "{where_}");
        if meant_unsolvable(&file) {
            assert_eq!(answer["verdict"], "unsolvable", "{where_}: {answer}");
            continue;
        }
        assert_eq!(answer["verdict"], "solvable", "{where_}: {answer}");
        assert_eq!(answer["steps"]["proved"], true, "{where_}: {answer}");
        let par = level.par.and_then(|par| par.steps);
        assert_eq!(
            answer["steps"]["fewest"].as_u64(),
            par.map(u64::from),
            "{where_}"
        );
        assert_eq!(answer["message"], Value::Null, "{where_}");
    }
}
