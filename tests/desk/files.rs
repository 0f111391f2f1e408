//! Files: saving, damage, changes on disk, recovery.

use super::*;

#[test]
fn what_is_saved_is_what_is_on_the_desk() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.paint(&[(5, 1)]);
    assert!(window.sees("unsaved changes"));
    window.key(Modifiers::COMMAND, Key::S);
    window.wait("it is saved", |window| !window.desk().state.is_dirty());
    let saved = read_pack(&std::fs::read(&path).expect("a file"))
        .expect("a pack")
        .pack;
    assert_eq!(saved.levels, window.desk().state.pack.levels);
}

#[test]
fn a_damaged_pack_is_told_with_line_and_column_and_left_alone() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("damaged.pack.ron");
    let damaged = PACK
        .replace("strength", "strange")
        .replace("name: \"Test bed\"", "colour: 3");
    std::fs::write(&path, &damaged).expect("a temporary file");
    let mut window = Window::new();
    window.act(Action::OpenPath(path.clone()));
    window.wait_to_see("This pack can't be opened");
    window.wait_to_see("damaged.pack.ron:3:5: There is no field colour in a pack.");
    assert_eq!(window.desk().state.pack, pack(), "the desk keeps its pack");
    assert_eq!(std::fs::read_to_string(&path).expect("a file"), damaged);
}

#[test]
fn a_file_that_changed_on_disk_is_never_overwritten_without_asking() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.paint(&[(5, 1)]);
    let theirs = PACK.replace("Test bed", "Their bed");
    std::fs::write(&path, &theirs).expect("a temporary file");
    window.act(Action::Save);
    window.wait_to_see("Replace the file?");
    assert_eq!(std::fs::read_to_string(&path).expect("a file"), theirs);
    window.0.get_by_label("Replace it").click();
    window.wait("it is saved", |window| !window.desk().state.is_dirty());
    assert_ne!(std::fs::read_to_string(&path).expect("a file"), theirs);
}

#[test]
fn a_change_on_disk_is_noticed_on_coming_back_to_the_window() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.0.input_mut().focused = false;
    window.0.step();
    std::fs::write(&path, PACK.replace("Test bed", "Their bed")).expect("a temporary file");
    window.0.input_mut().focused = true;
    window.wait_to_see("The file changed on disk");
    window.0.get_by_label("Read it again").click();
    window.wait("it is read again", |window| {
        window.desk().state.pack.name == "Their bed"
    });
    assert!(!window.desk().state.is_dirty());
    window.act(Action::Undo);
    assert_eq!(
        window.desk().state.pack.name,
        "Test bed",
        "what was there is not lost"
    );
}

#[test]
fn unsaved_changes_are_asked_about_before_they_are_dropped() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("bed.pack.ron");
    let mut window = Window::opened(&path);
    window.paint(&[(5, 1)]);
    window.act(Action::CreatePack {
        name: "Other".to_owned(),
        start: None,
    });
    window.wait_to_see("Save the changes?");
    window.0.get_by_label("Cancel").click();
    window.wait("the question is gone", |window| {
        window.desk().state.dialog.is_none()
    });
    assert_eq!(window.desk().state.pack.name, "Test bed");
    window.act(Action::CreatePack {
        name: "Other".to_owned(),
        start: None,
    });
    window.0.get_by_label("Save").click();
    window.wait("the new pack is on the desk", |window| {
        window.desk().state.pack.name == "Other"
    });
    let saved = read_pack(&std::fs::read(&path).expect("a file"))
        .expect("a pack")
        .pack;
    assert_eq!(
        saved.levels[0].ground_at(Cell::new(5, 1)),
        GroundIx(1),
        "saved first"
    );
}

#[test]
fn a_read_only_folder_is_told_and_nothing_is_lost() {
    let mut window = Window::new();
    window.paint(&[(5, 1)]);
    window.act(Action::SaveTo("/proc/nowhere/bed.pack.ron".into()));
    window.wait_to_see("The pack was not saved");
    assert!(window.desk().state.is_dirty());
}

#[test]
fn what_a_killed_session_left_behind_is_offered_and_recovered() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let data = DataFolder::at(folder.path());
    let mut killed = Window::with(pack(), Keeper::in_folder(data.clone()));
    killed.paint(&[(5, 1)]);
    killed.wait("an autosave is written", |_| {
        !foldwright::file::Recoverable::list(&data).is_empty() || autosaves(folder.path()) > 0
    });
    drop(killed);
    let mut window = Window::with(pack(), Keeper::in_folder(data));
    window.wait_to_see("Recover unsaved work?");
    window.0.get_by_label("Recover").click();
    window.wait("it is recovered", |window| {
        window.ground(5, 1) == GroundIx(1)
    });
    assert!(window.desk().state.is_dirty());
}

fn autosaves(data: &Path) -> usize {
    std::fs::read_dir(data.join("autosave")).map_or(0, |entries| {
        entries
            .filter_map(Result::ok)
            .filter(|entry| {
                entry
                    .path()
                    .extension()
                    .is_some_and(|ending| ending == "ron")
            })
            .count()
    })
}
