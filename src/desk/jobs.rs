//! What is done beside the window: choosing, reading and writing files. Each job is a function from what it needs to its
//! [`FileNews`]; the app runs one at a time on a thread of the worker, so that the window never waits for a disk.

use super::files::{FileNews, FilePrint, SaveFault};
use super::state::PathPurpose;
use crate::file;
use crate::level::Pack;
use std::path::{Path, PathBuf};
use std::time::{Duration, Instant};

/// A dialog that is over sooner than this, without a choice, was never on the screen: nobody is that fast.
const FASTEST_CANCEL: Duration = Duration::from_millis(250);

/// Shows the system's file dialog and waits for it.
pub fn pick(purpose: PathPurpose, folder: Option<PathBuf>, name: String) -> FileNews {
    let since = Instant::now();
    let mut dialog = rfd::FileDialog::new().add_filter("Packs", &["ron"]);
    if let Some(folder) = folder {
        dialog = dialog.set_directory(folder);
    }
    let path = match purpose {
        PathPurpose::Open => dialog.set_title("Open a pack").pick_file(),
        PathPurpose::Save => dialog
            .set_title("Save the pack")
            .set_file_name(name)
            .save_file(),
    };
    let no_dialog = path.is_none() && since.elapsed() < FASTEST_CANCEL;
    FileNews::Picked {
        purpose,
        path,
        no_dialog,
    }
}

/// Reads a pack.
pub fn read(path: PathBuf) -> FileNews {
    let result = std::fs::read(&path)
        .map_err(|fault| format!(" {fault}"))
        .and_then(|content| {
            let print = FilePrint::of(&content);
            file::read_pack(&content)
                .map(|read| Box::new((read, print)))
                .map_err(|fault| fault.to_string())
        });
    FileNews::Loaded { path, result }
}

/// Writes a pack, unless the file is not what `expected` says and `force` is off.
pub fn write(
    path: PathBuf,
    pack: Pack,
    preamble: &str,
    expected: Option<FilePrint>,
    force: bool,
) -> FileNews {
    let result = if !force && look_at(&path).is_some_and(|now| Some(now) != expected) {
        Err(SaveFault::Changed)
    } else {
        let text = file::write_pack(&pack, preamble);
        save_atomic(&path, &text)
            .map(|()| FilePrint::of(text.as_bytes()))
            .map_err(|fault| SaveFault::Refused(fault.to_string()))
    };
    FileNews::Saved { path, pack, result }
}

/// Looks whether a file is still what it was.
pub fn look(path: PathBuf) -> FileNews {
    let print = look_at(&path);
    FileNews::Looked { path, print }
}

fn look_at(path: &Path) -> Option<FilePrint> {
    std::fs::read(path)
        .ok()
        .map(|content| FilePrint::of(&content))
}

fn save_atomic(path: &Path, text: &str) -> std::io::Result<()> {
    use std::io::Write;
    let folder = path
        .parent()
        .filter(|folder| !folder.as_os_str().is_empty());
    let mut new = tempfile::NamedTempFile::new_in(folder.unwrap_or(Path::new(".")))?;
    new.write_all(text.as_bytes())?;
    new.as_file().sync_all()?;
    new.persist(path).map(drop).map_err(|fault| fault.error)
}
