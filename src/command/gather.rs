//! From paths to packs.

use crate::file::open_pack;
use crate::level::{Level, Mechanics, Pack};
use std::fs;
use std::io;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The end of the names that are looked for in folders.
const PACK_END: &str = ".pack.ron";

/// The deepest folder that is searched.
const MOST_DEPTH: usize = 64;

/// A pack to be checked, or why it can't be.
pub(super) struct Found {
    /// The file as the user named it, or as it was found.
    pub file: String,
    /// Name of the pack, where it could be read.
    pub name: Option<String>,
    /// What is wrong with it, with the name of the file and the place.
    pub error: Option<String>,
    /// Its kinds, and its levels with their numbers from 1; none if there is an error.
    pub levels: Vec<(usize, Arc<Mechanics>, Arc<Level>)>,
}

impl Found {
    fn failed(path: &Path, error: String) -> Found {
        Found {
            file: path.display().to_string(),
            name: None,
            error: Some(error),
            levels: Vec::new(),
        }
    }

    pub(super) fn of_pack(file: String, pack: &Pack) -> Found {
        let levels = pack.levels.iter().enumerate();
        Found {
            file,
            name: Some(pack.name.clone()),
            error: None,
            levels: levels
                .map(|(at, level)| (at + 1, Arc::clone(&pack.mechanics), Arc::clone(level)))
                .collect(),
        }
    }
}

/// The packs at some paths, each file once, those of a folder sorted by path.
pub(super) fn gather(paths: &[PathBuf]) -> Vec<Found> {
    let mut found: Vec<Found> = Vec::new();
    for path in paths {
        for file in files_at(path) {
            let one = match file {
                Ok(file) => open(&file),
                Err(failed) => failed,
            };
            if found.iter().all(|other| other.file != one.file) {
                found.push(one);
            }
        }
    }
    found
}

fn files_at(path: &Path) -> Vec<Result<PathBuf, Found>> {
    if !path.is_dir() {
        return vec![Ok(path.to_path_buf())];
    }
    let mut files = Vec::new();
    if let Err(error) = search(path, 0, &mut files) {
        let message = format!(
            "{}: This folder can't be searched: {error}.",
            path.display()
        );
        return vec![Err(Found::failed(path, message))];
    }
    if files.is_empty() {
        let message = format!(
            "{}: There is no *{PACK_END} in this folder.",
            path.display()
        );
        return vec![Err(Found::failed(path, message))];
    }
    files.sort();
    files.into_iter().map(Ok).collect()
}

/// Links to folders are not followed, so that the search ends.
fn search(folder: &Path, depth: usize, files: &mut Vec<PathBuf>) -> io::Result<()> {
    for entry in fs::read_dir(folder)? {
        let entry = entry?;
        let path = entry.path();
        if entry.file_type()?.is_dir() {
            if depth < MOST_DEPTH {
                search(&path, depth + 1, files)?;
            }
        } else if entry.file_name().to_string_lossy().ends_with(PACK_END) && !path.is_dir() {
            files.push(path);
        }
    }
    Ok(())
}

fn open(path: &Path) -> Found {
    let read = match open_pack(path) {
        Ok(opened) => opened.read,
        Err(error) => return Found::failed(path, error.to_string()),
    };
    let file = path.display().to_string();
    match read.refusals.split_first() {
        None => Found::of_pack(file, &read.pack),
        Some((first, others)) => {
            let more = match others.len() {
                0 => String::new(),
                count => format!(" ({count} more)"),
            };
            Found {
                error: Some(format!("{file}:{first}{more}")),
                name: Some(read.pack.name),
                file,
                levels: Vec::new(),
            }
        }
    }
}

/// Keeps the levels that `wish` names, by name, or by number where no level has that name. Returns whether there is one.
pub(super) fn keep_level(found: &mut [Found], wish: &str) -> bool {
    let named = found
        .iter()
        .flat_map(|pack| &pack.levels)
        .any(|(_, _, level)| level.name == wish);
    let number: Option<usize> = wish.parse().ok();
    for pack in found.iter_mut() {
        pack.levels.retain(|(at, _, level)| {
            if named {
                level.name == wish
            } else {
                Some(*at) == number
            }
        });
    }
    found.iter().any(|pack| !pack.levels.is_empty())
}
