//! Packs to and from disk.

use super::state::State;
use crate::level::Pack;

/// What a file was like when it was read or written, to notice when something else changes it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FilePrint {
    /// Length, in bytes.
    pub bytes: u64,
    /// Time of the last change.
    pub changed: Option<std::time::SystemTime>,
}

impl State {
    /// Begins a new pack with the kinds of the present one and an empty level.
    pub(super) fn create_pack(&mut self, name: String) {
        let pack = Pack {
            name,
            mechanics: std::sync::Arc::clone(self.mechanics()),
            levels: Vec::new(),
        };
        self.put_on_desk(pack, None, None);
    }

    /// Puts another pack on the desk.
    pub(super) fn put_on_desk(
        &mut self,
        pack: Pack,
        path: Option<std::path::PathBuf>,
        print: Option<FilePrint>,
    ) {
        let (revision, settings, now_secs) = (self.revision, self.settings.clone(), self.now_secs);
        let effects = std::mem::take(&mut self.effects);
        let show = self.show;
        *self = State::new(pack, path, settings);
        // Revisions go on counting, so that an answer about the old pack can't be taken for one about the new.
        self.revision = revision;
        self.effects = effects;
        self.show = show;
        self.now_secs = now_secs;
        self.saved.print = print;
        self.saved.at_secs = now_secs;
        self.level_changed(false);
        self.ask_shelf();
    }
}
