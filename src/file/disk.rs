//! Files on disk: reading a pack, saving so that nothing is lost, and noticing what others change.

use super::fault::PackError;
use super::read::{ReadPack, read_pack};
use super::write::write_pack;
use crate::level::Pack;
use std::fs;
use std::hash::{DefaultHasher, Hash, Hasher};
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};
use std::time::SystemTime;
use thiserror::Error;

/// The greatest file that is read as a pack, in bytes: a thousand levels of 64 x 64 with all layers take 13 MB.
const MOST_PACK_BYTES: u64 = 256 << 20;

/// How many symbolic links are followed to the file that is saved.
const MOST_LINKS: usize = 32;

/// What a file was like at one moment, to notice later whether something else has changed it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fingerprint {
    /// Length, in bytes.
    pub bytes: u64,
    /// Time of the last change, where the file system tells it.
    pub changed: Option<SystemTime>,
    /// Hash of the content.
    pub hash: u64,
}

impl Fingerprint {
    fn of(content: &[u8], metadata: &fs::Metadata) -> Fingerprint {
        let mut hasher = DefaultHasher::new();
        content.hash(&mut hasher);
        Fingerprint {
            bytes: content.len() as u64,
            changed: metadata.modified().ok(),
            hash: hasher.finish(),
        }
    }

    /// Whether the file at `path` still has the same content. Reads it only if its length or time differ from before.
    ///
    /// # Errors
    /// If the file can't be read; a file that is gone has [`ErrorKind::NotFound`].
    pub fn still_holds(&self, path: &Path) -> io::Result<bool> {
        let metadata = fs::metadata(path)?;
        if metadata.len() == self.bytes && metadata.modified().ok() == self.changed {
            return Ok(true);
        }
        let now = fingerprint(path)?;
        Ok((now.bytes, now.hash) == (self.bytes, self.hash))
    }
}

/// The fingerprint of a file as it is now.
///
/// # Errors
/// If the file can't be read.
pub fn fingerprint(path: &Path) -> io::Result<Fingerprint> {
    let content = fs::read(path)?;
    Ok(Fingerprint::of(&content, &fs::metadata(path)?))
}

/// A pack that was opened.
#[derive(Clone, Debug)]
pub struct Opened {
    /// What the file held.
    pub read: ReadPack,
    /// What the file was like.
    pub fingerprint: Fingerprint,
}

/// Why a pack was not opened. Prints as a line that begins with the name of the file.
#[derive(Debug, Error)]
pub enum OpenError {
    /// The file can't be read.
    #[error("{}: {reason}", path.display())]
    Unreadable {
        /// The file.
        path: PathBuf,
        /// A sentence.
        reason: String,
    },
    /// It holds no pack.
    #[error("{}:{error}", path.display())]
    NoPack {
        /// The file.
        path: PathBuf,
        /// What is wrong in it.
        error: PackError,
    },
}

/// Opens a pack file.
///
/// # Errors
/// If the file can't be read, is larger than 256 MiB or holds no pack.
pub fn open_pack(path: &Path) -> Result<Opened, OpenError> {
    let unreadable = |reason: String| OpenError::Unreadable {
        path: path.to_path_buf(),
        reason,
    };
    let metadata = fs::metadata(path).map_err(|error| unreadable(reading(&error)))?;
    if metadata.is_dir() {
        return Err(unreadable(
            "This is a folder. Name a pack file in it.".to_owned(),
        ));
    }
    if metadata.len() > MOST_PACK_BYTES {
        return Err(unreadable(
            "This file is larger than any pack. Choose another one.".to_owned(),
        ));
    }
    let content = fs::read(path).map_err(|error| unreadable(reading(&error)))?;
    let read = read_pack(&content).map_err(|error| OpenError::NoPack {
        path: path.to_path_buf(),
        error,
    })?;
    let fingerprint = Fingerprint::of(&content, &metadata);
    Ok(Opened { read, fingerprint })
}

fn reading(error: &io::Error) -> String {
    match error.kind() {
        ErrorKind::NotFound => "There is no such file. Check the name.".to_owned(),
        ErrorKind::PermissionDenied => {
            "You may not read this file. Change its permissions, or copy it.".to_owned()
        }
        _ => format!("The file can't be read: {error}."),
    }
}

/// Why a file was not saved. What was in the file before is untouched.
#[derive(Debug, Error)]
pub enum SaveError {
    /// The folder takes no new file.
    #[error("The folder {} can't be written to. Save under another name, in another folder.", .0.display())]
    ReadOnlyFolder(PathBuf),
    /// The file is marked as not to be written.
    #[error("The file {} is read-only. Save under another name, or change its permissions.", .0.display())]
    ReadOnlyFile(PathBuf),
    /// There is no such folder.
    #[error("There is no folder {}. Save in another one.", .0.display())]
    NoFolder(PathBuf),
    /// The name is that of something else than a file.
    #[error("{} is no file. Save under another name.", .0.display())]
    NoFile(PathBuf),
    /// The disk is full, or the user's share of it.
    #[error("The disk is full. Make room and save again, or save elsewhere.")]
    DiskFull,
    /// The text would not read back as the same pack.
    #[error("The pack can't be written so that it reads back the same: {0}")]
    NotReadable(String),
    /// Anything else.
    #[error("Saving failed: {0}.")]
    Other(io::Error),
}

impl SaveError {
    fn of(error: io::Error, path: &Path) -> SaveError {
        let folder = folder_of(path);
        match error.kind() {
            ErrorKind::PermissionDenied | ErrorKind::ReadOnlyFilesystem => {
                SaveError::ReadOnlyFolder(folder)
            }
            ErrorKind::NotFound | ErrorKind::NotADirectory => SaveError::NoFolder(folder),
            ErrorKind::IsADirectory => SaveError::NoFile(path.to_path_buf()),
            ErrorKind::StorageFull | ErrorKind::QuotaExceeded | ErrorKind::FileTooLarge => {
                SaveError::DiskFull
            }
            _ => SaveError::Other(error),
        }
    }
}

/// Saves a pack, after making sure that its text reads back as the same levels.
///
/// # Errors
/// If it would not read back, or as [`save_atomic`].
pub fn save_pack(path: &Path, pack: &Pack, preamble: &str) -> Result<Fingerprint, SaveError> {
    let text = write_pack(pack, preamble);
    let again =
        read_pack(text.as_bytes()).map_err(|error| SaveError::NotReadable(error.message))?;
    if again.pack.levels != pack.levels {
        let reason = "the levels would differ. Undo the last change, or save under another name.";
        return Err(SaveError::NotReadable(reason.to_owned()));
    }
    save_atomic(path, &text)
}

/// Puts `content` into the file at `path` in one go: after a crash at any moment the file has its old content or the new one.
///
/// It goes into a temporary file in the same folder, is brought to the disk and then takes the file's place, with
/// the permissions of the old file. A symbolic link stays one; the file that it leads to is saved.
///
/// # Errors
/// If the folder or the file can't be written, or the disk is full. The file then is untouched.
pub fn save_atomic(path: &Path, content: impl AsRef<[u8]>) -> Result<Fingerprint, SaveError> {
    let target = follow_links(path);
    let old = fs::metadata(&target).ok();
    if let Some(old) = &old {
        if !old.is_file() {
            return Err(SaveError::NoFile(target));
        }
        if old.permissions().readonly() {
            return Err(SaveError::ReadOnlyFile(target));
        }
    }
    let written = replace(&target, content.as_ref(), old.map(|old| old.permissions()));
    written.map_err(|error| SaveError::of(error, &target))
}

fn replace(
    target: &Path,
    content: &[u8],
    permissions: Option<fs::Permissions>,
) -> io::Result<Fingerprint> {
    let folder = folder_of(target);
    let mut builder = tempfile::Builder::new();
    builder.prefix(".").suffix(".saving");
    #[cfg(unix)]
    let everyone = std::os::unix::fs::PermissionsExt::from_mode(0o666);
    #[cfg(unix)]
    builder.permissions(everyone); // What the user's mask leaves of it, as for any new file.
    let mut temporary = builder.tempfile_in(&folder)?;
    temporary.write_all(content)?;
    if let Some(permissions) = permissions {
        temporary.as_file().set_permissions(permissions)?;
    }
    temporary.as_file().sync_all()?;
    let file = temporary.persist(target).map_err(|error| error.error)?;
    if let Ok(folder) = fs::File::open(&folder) {
        // Brings the new name to the disk; some file systems refuse this for folders, and have no need of it.
        let _ = folder.sync_all();
    }
    Ok(Fingerprint::of(content, &file.metadata()?))
}

fn folder_of(path: &Path) -> PathBuf {
    match path.parent() {
        Some(folder) if folder != Path::new("") => folder.to_path_buf(),
        _ => PathBuf::from("."),
    }
}

fn follow_links(path: &Path) -> PathBuf {
    let mut target = path.to_path_buf();
    for _ in 0..MOST_LINKS {
        match fs::read_link(&target) {
            Ok(next) => target = folder_of(&target).join(next),
            Err(_) => break,
        }
    }
    target
}
