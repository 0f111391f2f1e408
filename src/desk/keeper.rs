//! What the desk keeps for itself between sessions: settings, recent packs, and the autosave that outlives a kill.
//!
//! While there is something unsaved, a copy of the pack is written a few seconds after each change. It is taken away as
//! soon as all is on disk or the user chose to lose the rest, so that a copy that is found at the start is from a session
//! that was killed. A copy that was recovered stays until this session has a copy of its own.

use super::files::FileNews;
use super::state::{Settings, State, ThemeChoice};
use crate::file::{Autosave, DataFolder, Recoverable, read_pack, write_pack};
use crate::level::Pack;
use crate::study::Prove;
use serde::{Deserialize, Serialize};
use std::path::PathBuf;
use std::sync::{Arc, Mutex, PoisonError};

/// Seconds from a change to the copy that holds it: what a kill can cost at most.
const AUTOSAVE_SECS: f64 = 4.0;

/// Keeps settings and autosaves, or nothing at all, for tests and where there is no folder to keep them in.
#[derive(Default)]
pub struct Keeper {
    folder: Option<DataFolder>,
    autosave: Option<Arc<Mutex<Autosave>>>,
    found: Vec<Recoverable>,
    recovered: Option<Recoverable>,
    kept: Option<Pack>,
    due_at_secs: Option<f64>,
}

/// The settings as they lie in the data folder.
#[derive(Serialize, Deserialize)]
#[serde(default)]
struct Kept {
    theme: String,
    prove: String,
    seconds: f64,
    mebibytes: u64,
    steps_per_second: f32,
}

impl Default for Kept {
    fn default() -> Kept {
        Kept::from(&Settings::default())
    }
}

const THEMES: [(ThemeChoice, &str); 3] = [
    (ThemeChoice::System, "system"),
    (ThemeChoice::Dark, "dark"),
    (ThemeChoice::Light, "light"),
];

const PROVES: [(Prove, &str); 4] = [
    (Prove::Steps, "steps"),
    (Prove::Pushes, "pushes"),
    (Prove::Both, "both"),
    (Prove::None, "none"),
];

fn name_of<T: PartialEq>(names: &[(T, &str)], wanted: &T) -> String {
    let found = names.iter().find(|(value, _)| value == wanted);
    found.map_or_else(String::new, |(_, name)| (*name).to_owned())
}

fn named<T: Copy>(names: &[(T, &str)], wanted: &str) -> Option<T> {
    names
        .iter()
        .find(|(_, name)| *name == wanted)
        .map(|(value, _)| *value)
}

impl From<&Settings> for Kept {
    fn from(settings: &Settings) -> Kept {
        Kept {
            theme: name_of(&THEMES, &settings.theme),
            prove: name_of(&PROVES, &settings.prove),
            seconds: settings.seconds,
            mebibytes: settings.mebibytes,
            steps_per_second: settings.steps_per_second,
        }
    }
}

impl Kept {
    fn settings(&self, recent: Vec<PathBuf>) -> Settings {
        let usual = Settings::default();
        let sane = |value: f64, least: f64, most: f64, usual: f64| {
            if value.is_finite() {
                value.clamp(least, most)
            } else {
                usual
            }
        };
        let speed = sane(f64::from(self.steps_per_second), 0.5, 60.0, 4.0);
        Settings {
            theme: named(&THEMES, &self.theme).unwrap_or(usual.theme),
            prove: named(&PROVES, &self.prove).unwrap_or(usual.prove),
            seconds: sane(self.seconds, 0.1, 86_400.0, usual.seconds),
            mebibytes: self.mebibytes.clamp(16, 1 << 20),
            steps_per_second: speed as f32,
            recent,
        }
    }
}

impl Keeper {
    /// Keeps nothing.
    pub fn none() -> Keeper {
        Keeper::default()
    }

    /// Keeps all in the user's own folder for programs' data, or nothing where there is none.
    pub fn in_user_folder() -> Keeper {
        DataFolder::find().map_or_else(Keeper::none, Keeper::in_folder)
    }

    /// Keeps all in this folder.
    pub fn in_folder(folder: DataFolder) -> Keeper {
        Keeper {
            autosave: Some(Arc::new(Mutex::new(Autosave::begin(&folder)))),
            found: Recoverable::list(&folder),
            folder: Some(folder),
            ..Keeper::default()
        }
    }

    /// The settings kept last, or the usual ones.
    pub fn settings(&self) -> Settings {
        match &self.folder {
            Some(folder) => folder.load::<Kept>("settings").settings(folder.recent()),
            None => Settings::default(),
        }
    }

    /// What an earlier session left behind, for people.
    pub fn left_behind(&self) -> Option<String> {
        let found = self.found.first()?;
        let of = match &found.original {
            Some(path) => path.display().to_string(),
            None => "a pack that was never saved".to_owned(),
        };
        let age = found.saved_at.elapsed().unwrap_or_default().as_secs();
        Some(format!("{of}, kept {}", age_text(age)))
    }

    /// Seconds until the next autosave is due; none if there is nothing to save.
    pub fn due_in(&mut self, state: &State) -> Option<f64> {
        self.autosave.as_ref()?;
        if !state.is_dirty() {
            if self.kept.is_some() {
                self.forget_autosave();
            }
            return None;
        }
        if self.kept.as_ref() == Some(&state.pack) {
            return None;
        }
        let due_at_secs = *self
            .due_at_secs
            .get_or_insert(state.now_secs + AUTOSAVE_SECS);
        Some((due_at_secs - state.now_secs).max(0.0))
    }

    /// The work of writing an autosave.
    pub fn autosave(&mut self, state: &State) -> impl FnOnce() -> FileNews + Send + use<> {
        let (pack, preamble) = (state.pack.clone(), state.preamble.clone());
        let (path, autosave) = (state.path.clone(), self.autosave.clone());
        self.kept = Some(pack.clone());
        self.due_at_secs = None;
        let recovered = self.recovered.take();
        move || {
            let Some(autosave) = autosave else {
                return FileNews::Done(String::new());
            };
            let text = write_pack(&pack, &preamble);
            let written = autosave
                .lock()
                .unwrap_or_else(PoisonError::into_inner)
                .write(&text, path.as_deref());
            match written {
                Ok(()) => {
                    if let Some(recovered) = recovered {
                        recovered.discard();
                    }
                    FileNews::Done(String::new())
                }
                Err(fault) => FileNews::Done(format!("no autosave was made: {fault}")),
            }
        }
    }

    /// The work of reading what was left behind.
    pub fn read_left_behind(&mut self) -> impl FnOnce() -> FileNews + Send + use<> {
        let found = (!self.found.is_empty()).then(|| self.found.remove(0));
        self.recovered.clone_from(&found);
        move || match found {
            Some(found) => FileNews::Recovered {
                path: found.original,
                result: read_pack(found.text.as_bytes())
                    .map(Box::new)
                    .map_err(|fault| fault.to_string()),
            },
            None => FileNews::Done("nothing was left behind".to_owned()),
        }
    }

    /// Deletes what was left behind.
    pub fn drop_left_behind(&mut self) {
        if !self.found.is_empty() {
            self.found.remove(0).discard();
        }
    }

    /// Deletes the autosave of this session, and what it recovered.
    pub fn forget_autosave(&mut self) {
        self.kept = None;
        self.due_at_secs = None;
        if let Some(recovered) = self.recovered.take() {
            recovered.discard();
        }
        if let Some(autosave) = &self.autosave {
            autosave
                .lock()
                .unwrap_or_else(PoisonError::into_inner)
                .remove();
        }
    }

    /// The work of keeping the settings and the pack that was opened last.
    pub fn keep(&self, settings: &Settings) -> impl FnOnce() -> FileNews + Send + use<> {
        let (kept, folder) = (Kept::from(settings), self.folder.clone());
        let latest = settings.recent.first().cloned();
        move || {
            let Some(folder) = folder else {
                return FileNews::Done(String::new());
            };
            let noted = latest.map_or(Ok(()), |path| folder.note_recent(&path));
            match folder.store("settings", &kept).and(noted) {
                Ok(()) => FileNews::Done(String::new()),
                Err(fault) => FileNews::Done(format!("the settings were not kept: {fault}")),
            }
        }
    }
}

fn age_text(age_secs: u64) -> String {
    match age_secs {
        0..=89 => "a minute ago".to_owned(),
        90..=5_399 => format!("{} minutes ago", age_secs.div_ceil(60)),
        5_400..=129_599 => format!("{} hours ago", age_secs / 3600),
        _ => format!("{} days ago", age_secs / 86_400),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn settings_come_back_as_they_were_kept() {
        let settings = Settings {
            theme: ThemeChoice::Light,
            prove: Prove::Both,
            seconds: 7.5,
            mebibytes: 333,
            steps_per_second: 9.0,
            recent: Vec::new(),
        };
        assert_eq!(Kept::from(&settings).settings(Vec::new()), settings);
    }

    #[test]
    fn settings_that_make_no_sense_become_usual_ones() {
        let kept = Kept {
            theme: "plaid".to_owned(),
            prove: String::new(),
            seconds: f64::NAN,
            mebibytes: 0,
            steps_per_second: f32::INFINITY,
        };
        let expected = Settings {
            mebibytes: 16,
            ..Settings::default()
        };
        assert_eq!(kept.settings(Vec::new()), expected);
    }
}
