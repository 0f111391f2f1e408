//! Packs to and from disk, as far as the desk's state goes: what is asked, what came of it. The work itself is in `jobs.rs`.

use super::action::Action;
use super::state::{Dialog, Effect, PathPurpose, State};
use crate::file::{Fingerprint, Opened, ReadPack};
use crate::level::Pack;
use crate::worker::Request;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The most packs that are kept in the list of recent ones.
const MOST_RECENT: usize = 12;

/// Why a pack was not written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum SaveFault {
    /// The file is not what it was when it was last read or written here.
    Changed,
    /// The disk refused, in words.
    Refused(String),
}

/// What another program did to the pack's file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Change {
    /// Nothing that can be seen.
    None,
    /// It holds something else now.
    Content(Fingerprint),
    /// It took it away.
    Gone,
}

/// What came of a job on disk.
#[derive(Clone, Debug)]
pub enum FileNews {
    /// The user chose a path, or none.
    Picked {
        /// What for.
        purpose: PathPurpose,
        /// The path.
        path: Option<PathBuf>,
        /// Whether the system can't show a file dialog, so that the desk must ask itself.
        no_dialog: bool,
    },
    /// A pack was read.
    Loaded {
        /// From where.
        path: PathBuf,
        /// What it held, or what is wrong with it.
        result: Result<Box<Opened>, String>,
    },
    /// A pack was written.
    Saved {
        /// Where to.
        path: PathBuf,
        /// What was written.
        pack: Pack,
        /// The file's print now.
        result: Result<Fingerprint, SaveFault>,
    },
    /// The file was looked at.
    Looked {
        /// Which.
        path: PathBuf,
        /// What another program did to it.
        change: Change,
    },
    /// An autosave was left behind by a session that did not end well.
    LeftBehind {
        /// About it, for people.
        about: String,
    },
    /// The autosave that was left behind was read.
    Recovered {
        /// The file that it belongs to.
        path: Option<PathBuf>,
        /// The pack, or what is wrong.
        result: Result<Box<ReadPack>, String>,
    },
    /// Something was done that needs no more than a line, or nothing if it is empty.
    Done(String),
}

impl State {
    /// Begins a new pack with the kinds of the present one and an empty level.
    pub(super) fn create_pack(&mut self, name: String, start: Option<usize>) {
        let begun = start
            .and_then(|at| crate::file::STARTS.get(at))
            .and_then(|start| crate::file::read_pack(start.text).ok())
            .map(|read| read.pack);
        let pack = match begun {
            Some(pack) => Pack { name, ..pack },
            None => Pack {
                name,
                mechanics: Arc::clone(self.mechanics()),
                levels: Vec::new(),
            },
        };
        self.put_on_desk(pack, None, None, String::new());
        self.said = "began a new pack".to_owned();
    }

    /// Puts another pack on the desk.
    pub(super) fn put_on_desk(
        &mut self,
        pack: Pack,
        path: Option<PathBuf>,
        print: Option<Fingerprint>,
        preamble: String,
    ) {
        let mut fresh = State::new(pack, path, self.settings.clone());
        // Revisions go on counting, so that an answer about the old pack can't be taken for one about the new.
        fresh.revision = self.revision;
        // Questions about the old pack that were not yet asked are not asked any more.
        fresh.effects = std::mem::take(&mut self.effects);
        fresh.effects.retain(|effect| {
            !matches!(
                effect,
                Effect::Ask(Request::Study { .. } | Request::Shelf { .. })
            )
        });
        fresh.show = self.show;
        fresh.tool = self.tool;
        fresh.shown = self.shown;
        fresh.now_secs = self.now_secs;
        fresh.preamble = preamble;
        fresh.saved.print = print;
        *self = fresh;
        self.level_changed(false);
        self.ask_shelf();
    }

    /// Takes in what came of a job on disk.
    pub fn hear_file(&mut self, news: FileNews) {
        match news {
            FileNews::Picked {
                purpose,
                no_dialog: true,
                ..
            } => self.ask_path(purpose),
            FileNews::Picked {
                path: Some(path),
                purpose: PathPurpose::Open,
                ..
            } => self.effects.push(Effect::Read(path)),
            FileNews::Picked {
                path: Some(path), ..
            } => self.execute(Action::SaveTo(with_ending(path))),
            FileNews::Picked { path: None, .. } => self.after_unsaved = None,
            FileNews::Loaded { path, result } => self.hear_loaded(path, result),
            FileNews::Saved { path, pack, result } => self.hear_saved(path, pack, result),
            FileNews::Looked { path, change } => self.hear_look(&path, change),
            FileNews::LeftBehind { about } => self.dialog = Some(Dialog::Recovery { about }),
            FileNews::Recovered { path, result } => self.hear_recovered(path, result),
            FileNews::Done(said) => {
                if !said.is_empty() {
                    self.said = said;
                }
            }
        }
    }

    fn hear_loaded(&mut self, path: PathBuf, result: Result<Box<Opened>, String>) {
        let Opened { read, fingerprint } = match result {
            Ok(opened) => *opened,
            Err(fault) => {
                log::warn!(target: "foldwright::file", "refused {fault}");
                self.say_fault("This pack can't be opened", fault);
                return;
            }
        };
        log::info!(
            target: "foldwright::file",
            "opened {} levels {}",
            path.display(),
            read.pack.levels.len()
        );
        let again = self.path.as_deref() == Some(path.as_path());
        if again && self.pack != read.pack {
            self.take_again(read.pack.clone());
        } else if !again {
            self.put_on_desk(
                read.pack.clone(),
                Some(path.clone()),
                Some(fingerprint.clone()),
                String::new(),
            );
        }
        self.preamble = read.preamble.clone();
        self.saved.pack = self.pack.clone();
        self.saved.print = Some(fingerprint);
        self.saved.never = false;
        self.remember_recent(&path);
        self.said = format!("opened {}", path.display());
        self.tell_of_faults(&path, &read);
    }

    /// The file changed and is taken as it is now; what was on the desk can be had back by undo.
    fn take_again(&mut self, mut pack: Pack) {
        super::levels::ensure_a_level(&mut pack);
        if !Arc::ptr_eq(&self.pack.mechanics, &pack.mechanics) {
            self.shelf.clear();
        }
        self.edit_pack("read the file again", |now| *now = pack);
        if self.brush_is_gone() {
            self.brush = super::state::Brush::Clear;
        }
    }

    fn tell_of_faults(&mut self, path: &Path, read: &ReadPack) {
        if !read.refusals.is_empty() {
            let lines: Vec<String> = read
                .refusals
                .iter()
                .map(|fault| format!("{}:{fault}", path.display()))
                .collect();
            self.say_fault("This pack has faults", lines.join("\n"));
        } else if read.comments_inside {
            self.said = "opened; saving will lose the comments inside the pack".to_owned();
        }
    }

    fn hear_saved(&mut self, path: PathBuf, pack: Pack, result: Result<Fingerprint, SaveFault>) {
        match result {
            Ok(print) => {
                log::info!(
                    target: "foldwright::file",
                    "saved {} bytes {}",
                    path.display(),
                    print.bytes
                );
                self.said = format!("saved {}", path.display());
                self.saved.pack = pack;
                self.saved.never = false;
                self.saved.print = Some(print);
                self.saved.told = None;
                self.remember_recent(&path);
                self.path = Some(path);
                self.effects.push(Effect::ForgetAutosave);
                if let Some(action) = self.after_unsaved.take() {
                    self.go_on(*action);
                }
            }
            Err(SaveFault::Changed) => {
                self.dialog = Some(Dialog::ChangedOnDisk {
                    saving_to: Some(path),
                });
            }
            Err(SaveFault::Refused(fault)) => {
                self.after_unsaved = None;
                self.say_fault(
                    "The pack was not saved",
                    format!(
                        "{}: {fault}\nWhat was there before is still there.",
                        path.display()
                    ),
                );
            }
        }
    }

    fn hear_look(&mut self, path: &Path, change: Change) {
        let ours = self.path.as_deref() == Some(path);
        if !ours || self.dialog.is_some() {
            return;
        }
        match change {
            Change::None => {}
            // Each change is told once; saving asks again all the same.
            Change::Content(now) if self.saved.told.as_ref() == Some(&now) => {}
            Change::Content(now) => {
                self.saved.told = Some(now);
                self.dialog = Some(Dialog::ChangedOnDisk { saving_to: None });
            }
            Change::Gone => {
                self.said = "the pack's file is gone; save to write it again".to_owned()
            }
        }
    }

    fn hear_recovered(&mut self, path: Option<PathBuf>, result: Result<Box<ReadPack>, String>) {
        match result {
            Ok(read) => {
                log::info!(target: "foldwright::file", "recovered levels {}", read.pack.levels.len());
                self.put_on_desk(read.pack, path, None, read.preamble);
                self.saved.never = true;
                self.said = "recovered what was not saved".to_owned();
            }
            Err(fault) => self.say_fault("The autosave can't be read", fault),
        }
    }

    fn remember_recent(&mut self, path: &Path) {
        let path = std::path::absolute(path).unwrap_or_else(|_| path.to_path_buf());
        let recent = &mut self.settings.recent;
        recent.retain(|old| *old != path);
        recent.insert(0, path);
        recent.truncate(MOST_RECENT);
        self.effects.push(Effect::KeepSettings);
    }

    /// Shows what went wrong until it is put away.
    pub(super) fn say_fault(&mut self, title: &str, text: String) {
        self.said = title.to_owned();
        self.dialog = Some(Dialog::Message {
            title: title.to_owned(),
            text,
        });
    }
}

/// The path with the ending of packs, if it has none of its own.
pub fn with_ending(path: PathBuf) -> PathBuf {
    match path.extension() {
        Some(_) => path,
        None => path.with_extension("pack.ron"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_path_without_ending_gets_that_of_packs() {
        let check = |given: &str, expected: &str| {
            assert_eq!(with_ending(PathBuf::from(given)), PathBuf::from(expected));
        };
        check("a/night", "a/night.pack.ron");
        check("a/night.pack.ron", "a/night.pack.ron");
        check("a/night.ron", "a/night.ron");
    }
}
