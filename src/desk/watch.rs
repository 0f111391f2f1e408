//! The guard over the route that the designer means: does it still work, and is it still the cheapest?

use super::state::State;
use super::theme::counted;
use crate::level::{Level, Route};
use crate::rules::Rules;
use std::sync::Arc;

/// What became of the intended route.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Intended {
    /// None was kept.
    None,
    /// It finishes the level.
    Works {
        /// Its length.
        steps: u32,
    },
    /// It goes through and doesn't finish the level.
    EndsShort {
        /// Its length.
        steps: u32,
    },
    /// A step of it changes nothing.
    Broken {
        /// Which step, from 1.
        at: u32,
        /// Its length.
        steps: u32,
    },
    /// The level is invalid, so it can't be played.
    Unplayable {
        /// Its length.
        steps: u32,
    },
}

impl Intended {
    /// Plays the route of a level.
    pub fn of(rules: Option<&Rules>, level: &Level) -> Intended {
        let Some(route) = &level.intended else {
            return Intended::None;
        };
        let steps = route.len() as u32;
        match rules {
            Some(rules) => played(rules, route, steps),
            None => Intended::Unplayable { steps },
        }
    }

    /// Whether the route finishes the level.
    pub fn works(self) -> bool {
        matches!(self, Intended::Works { .. })
    }

    /// What became of it, in words.
    pub fn text(self) -> String {
        let length = |steps: u32| counted(u64::from(steps), "step", "steps");
        match self {
            Intended::None => "no intended route is kept".to_owned(),
            Intended::Works { steps } => format!("intended route: {}, still works", length(steps)),
            Intended::EndsShort { steps } => {
                format!("intended route: {}, no longer finishes", length(steps))
            }
            Intended::Broken { at, steps } => {
                format!("intended route: broken at step {at} of {steps}")
            }
            Intended::Unplayable { steps } => {
                format!("intended route: {}, can't be played", length(steps))
            }
        }
    }
}

fn played(rules: &Rules, route: &Route, steps: u32) -> Intended {
    let played = rules.play(route);
    if played.len() < route.len() {
        let at = played.len() as u32 + 1;
        return Intended::Broken { at, steps };
    }
    let finished = match played.last() {
        Some(last) => rules.finished(&last.position),
        None => rules.finished(&rules.start()),
    };
    if finished {
        Intended::Works { steps }
    } else {
        Intended::EndsShort { steps }
    }
}

/// What was played last, so that a frame in which nothing changed plays nothing.
#[derive(Clone)]
struct Remembered {
    level: Arc<Level>,
    revision: u64,
    intended: Intended,
}

/// What became of the intended route of the level on the board; played again only when the level is another.
pub fn intended(ui: &egui::Ui, state: &State) -> Intended {
    let id = egui::Id::unique("route watch");
    let known: Option<Remembered> = ui.data(|data| data.get_temp(id));
    if let Some(known) = known
        && known.revision == state.revision
        && Arc::ptr_eq(&known.level, state.current())
    {
        return known.intended;
    }
    let intended = Intended::of(state.rules.as_deref(), state.current());
    let remembered = Remembered {
        level: Arc::clone(state.current()),
        revision: state.revision,
        intended,
    };
    ui.data_mut(|data| data.insert_temp(id, remembered));
    intended
}

/// How the fewest steps known compare with the intended route, in words; none while there is nothing to compare.
pub fn cheaper_text(intended: Intended, fewest: u32, proved: bool) -> Option<String> {
    let Intended::Works { steps } = intended else {
        return None;
    };
    Some(match steps.checked_sub(fewest) {
        Some(0) if proved => "no shorter route exists".to_owned(),
        Some(0) | None => "no shorter route is known".to_owned(),
        Some(less) => format!(
            "a shorter way: {}, {} fewer",
            counted(u64::from(fewest), "step", "steps"),
            less
        ),
    })
}
