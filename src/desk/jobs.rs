//! What is done beside the window: choosing, reading and writing files. Each job is a function from what it needs to its
//! [`FileNews`]; the app runs one at a time on a thread of its own, so that the window never waits for a disk.

use super::files::{Change, FileNews, SaveFault};
use super::state::PathPurpose;
use crate::file::{Fingerprint, fingerprint, open_pack, save_pack};
use crate::level::Pack;
use std::io::ErrorKind;
use std::path::PathBuf;
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
    let result = open_pack(&path)
        .map(Box::new)
        .map_err(|fault| fault.to_string());
    FileNews::Loaded { path, result }
}

/// Writes a pack. Without `force`, a file that is not what `expected` says is left alone.
pub fn write(
    path: PathBuf,
    pack: Pack,
    preamble: &str,
    expected: Option<&Fingerprint>,
    force: bool,
) -> FileNews {
    let known = match expected {
        // A file that is gone or can't be read is not overwritten by mistake; saving will say what is wrong.
        Some(print) => print.still_holds(&path).unwrap_or(true),
        None => !path.exists(),
    };
    let result = if known || force {
        save_pack(&path, &pack, preamble).map_err(|fault| SaveFault::Refused(fault.to_string()))
    } else {
        Err(SaveFault::Changed)
    };
    FileNews::Saved { path, pack, result }
}

/// Looks whether a file is still what it was.
pub fn look(path: PathBuf, print: &Fingerprint) -> FileNews {
    let change = match print.still_holds(&path) {
        Ok(true) => Change::None,
        Ok(false) => fingerprint(&path).map_or(Change::None, Change::Content),
        Err(fault) if fault.kind() == ErrorKind::NotFound => Change::Gone,
        Err(_) => Change::None,
    };
    FileNews::Looked { path, change }
}
