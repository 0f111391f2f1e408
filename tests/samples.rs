//! The sample packs: written as the program writes them, drawn with its pictures, and holding what is promised of them.
//!
//! Packs called `unsolvable-*` hold levels that can't be finished, each for the reason in its notes; all other levels can.

use foldwright::file::{builtin, read_pack, write_pack};
use foldwright::level::{Control, Look, Pack};
use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

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
