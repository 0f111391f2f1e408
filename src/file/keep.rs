//! What the program keeps for itself in the platform's data folder: autosaves, recent packs, settings.
//!
//! Nothing here is needed to work. A folder that can't be made or written, and files that are missing or damaged, cost the
//! convenience and never the session: reading answers with what there is, and damage goes to the log.

use super::disk::{SaveError, save_atomic};
use serde::de::DeserializeOwned;
use serde::{Deserialize, Serialize};
use std::fs::{self, File};
use std::path::{Path, PathBuf};
use std::time::{Duration, SystemTime, UNIX_EPOCH};

/// Names the data folder instead of the platform, for tests and for keeping two settings apart.
pub const DATA_VARIABLE: &str = "FOLDWRIGHT_DATA";

/// The most packs in the list of recent ones.
const MOST_RECENT: usize = 12;

/// The platform's data folder of this program.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct DataFolder(PathBuf);

impl DataFolder {
    /// The folder that [`DATA_VARIABLE`] names, else the platform's; none if the platform has none. Makes nothing yet.
    pub fn find() -> Option<DataFolder> {
        let named = std::env::var_os(DATA_VARIABLE).filter(|name| !name.is_empty());
        let platform = || {
            Some(
                directories::ProjectDirs::from("", "", "foldwright")?
                    .data_dir()
                    .to_path_buf(),
            )
        };
        named.map(PathBuf::from).or_else(platform).map(DataFolder)
    }

    /// This folder.
    pub fn at(path: impl Into<PathBuf>) -> DataFolder {
        DataFolder(path.into())
    }

    /// Where it is.
    pub fn path(&self) -> &Path {
        &self.0
    }

    /// The record kept as `NAME.ron`, or the default if there is none or it can't be read.
    pub fn load<T: DeserializeOwned + Default>(&self, name: &str) -> T {
        let path = self.0.join(format!("{name}.ron"));
        let Ok(content) = fs::read(&path) else {
            return T::default();
        };
        ron::de::from_bytes(&content).unwrap_or_else(|error| {
            log::warn!("{}:{error}; going on without it", path.display());
            T::default()
        })
    }

    /// Keeps a record as `NAME.ron`.
    ///
    /// # Errors
    /// If the folder can't be made or written.
    pub fn store<T: Serialize>(&self, name: &str, record: &T) -> Result<(), SaveError> {
        let text = ron::ser::to_string_pretty(record, ron::ser::PrettyConfig::default())
            .map_err(|error| SaveError::Other(std::io::Error::other(error)))?;
        self.write(&format!("{name}.ron"), &text)
    }

    /// Packs opened or saved lately, the latest first; those that are gone are left out.
    pub fn recent(&self) -> Vec<PathBuf> {
        let recent: Vec<PathBuf> = self.load("recent");
        recent.into_iter().filter(|path| path.exists()).collect()
    }

    /// Puts a pack at the top of the recent ones.
    ///
    /// # Errors
    /// If the folder can't be made or written.
    pub fn note_recent(&self, path: &Path) -> Result<(), SaveError> {
        let path = fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf());
        let mut recent: Vec<PathBuf> = self.load("recent");
        recent.retain(|other| *other != path);
        recent.insert(0, path);
        recent.truncate(MOST_RECENT);
        self.store("recent", &recent)
    }

    fn write(&self, name: &str, text: &str) -> Result<(), SaveError> {
        fs::create_dir_all(&self.0).map_err(SaveError::Other)?;
        save_atomic(&self.0.join(name), text).map(drop)
    }

    fn autosaves(&self) -> DataFolder {
        DataFolder(self.0.join("autosave"))
    }
}

#[derive(Serialize, Deserialize)]
struct Record {
    original: Option<String>,
    saved_at_unix_secs: u64,
    text: String,
}

/// The autosave of one running desk.
///
/// Beside the copy lies a lock file that the desk holds open and locked. The system lets go of the lock when the desk
/// ends, however it ends; so a copy whose lock can be had is one to be recovered, and one whose lock is held belongs to
/// another desk.
#[derive(Debug)]
pub struct Autosave {
    folder: DataFolder,
    name: String,
    lock: Option<File>,
}

impl Autosave {
    /// Begins the autosave of this desk. Writes nothing yet.
    pub fn begin(folder: &DataFolder) -> Autosave {
        let now = SystemTime::now()
            .duration_since(UNIX_EPOCH)
            .unwrap_or_default();
        Autosave {
            folder: folder.autosaves(),
            name: format!("{}-{}", now.as_nanos(), std::process::id()),
            lock: None,
        }
    }

    /// Keeps a copy of a pack's text. `original` is the file that it would be saved to.
    ///
    /// # Errors
    /// If the folder can't be made or written.
    pub fn write(&mut self, text: &str, original: Option<&Path>) -> Result<(), SaveError> {
        self.hold_lock()?;
        let original =
            original.map(|path| std::path::absolute(path).unwrap_or_else(|_| path.to_path_buf()));
        let now = SystemTime::now()
            .duration_since(UNIX_EPOCH)
            .unwrap_or_default();
        let record = Record {
            original: original.map(|path| path.to_string_lossy().into_owned()),
            saved_at_unix_secs: now.as_secs(),
            text: text.to_owned(),
        };
        self.folder.store(&self.name, &record)
    }

    /// Takes the copy away: everything is saved, or the user chose to lose it.
    pub fn remove(&mut self) {
        let _ = fs::remove_file(self.folder.0.join(format!("{}.ron", self.name)));
        if self.lock.take().is_some() {
            let _ = fs::remove_file(self.folder.0.join(format!("{}.lock", self.name)));
        }
    }

    fn hold_lock(&mut self) -> Result<(), SaveError> {
        if self.lock.is_none() {
            fs::create_dir_all(&self.folder.0).map_err(SaveError::Other)?;
            let lock = File::create(self.folder.0.join(format!("{}.lock", self.name)))
                .map_err(SaveError::Other)?;
            if let Err(error) = lock.try_lock() {
                log::warn!("the autosave can't be locked: {error}");
            }
            self.lock = Some(lock);
        }
        Ok(())
    }
}

/// A pack that a desk left behind without saving it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Recoverable {
    /// The text of the pack.
    pub text: String,
    /// The file that it would have been saved to.
    pub original: Option<PathBuf>,
    /// When the copy was made.
    pub saved_at: SystemTime,
    copy: PathBuf,
}

impl Recoverable {
    /// All copies that no running desk holds, the latest first.
    pub fn list(folder: &DataFolder) -> Vec<Recoverable> {
        let Ok(entries) = fs::read_dir(folder.autosaves().path()) else {
            return Vec::new();
        };
        let copies = entries.filter_map(|entry| Some(entry.ok()?.path()));
        let mut found: Vec<Recoverable> = copies
            .filter(|path| path.extension().is_some_and(|end| end == "ron"))
            .filter(|path| !is_held(path))
            .filter_map(recoverable)
            .collect();
        found.sort_by(|a, b| (b.saved_at, &b.copy).cmp(&(a.saved_at, &a.copy)));
        found
    }

    /// Takes the copy away, after it was recovered and kept elsewhere, or refused.
    pub fn discard(&self) {
        let _ = fs::remove_file(&self.copy);
        let _ = fs::remove_file(self.copy.with_extension("lock"));
    }
}

fn is_held(copy: &Path) -> bool {
    File::open(copy.with_extension("lock")).is_ok_and(|lock| lock.try_lock_shared().is_err())
}

fn recoverable(copy: PathBuf) -> Option<Recoverable> {
    let content = fs::read(&copy).ok()?;
    match ron::de::from_bytes::<Record>(&content) {
        Ok(record) => Some(Recoverable {
            text: record.text,
            original: record.original.map(PathBuf::from),
            saved_at: UNIX_EPOCH.checked_add(Duration::from_secs(record.saved_at_unix_secs))?,
            copy,
        }),
        Err(error) => {
            log::warn!(
                "{}:{error}; this autosave is damaged and stays where it is",
                copy.display()
            );
            None
        }
    }
}
