//! Random levels with their whole spaces, for comparing studies with plain exploration.

use super::brute::{Space, explore};
use super::random::{self, Bulk, Mix};
use foldwright::file::write_pack;
use foldwright::level::{Level, Mechanics, Pack};
use foldwright::rules::Rules;
use foldwright::study::Limits;
use foldwright::verify::plain::World;
use std::sync::Arc;

/// One level with both answers' ground.
pub struct Case {
    pub mechanics: Mechanics,
    pub level: Level,
    pub rules: Rules,
    pub space: Space,
}

/// The first `count` levels of a mix that are valid and have at most `most` positions, from seed `first` on.
pub fn cases(
    mix: &'static Mix,
    bulk: Bulk,
    first: u64,
    count: usize,
    most: usize,
) -> impl Iterator<Item = Case> {
    let case = move |seed| {
        let (mechanics, level) = random::level(mix, bulk, seed);
        let rules = Rules::compile(&mechanics, &level).ok()?;
        let space = explore(&World::new(&mechanics, &level), most)?;
        Some(Case {
            mechanics,
            level,
            rules,
            space,
        })
    };
    (first..first + 20 * count as u64)
        .filter_map(case)
        .take(count)
}

/// No clock: what is asked must be answered, and the same on every run.
pub fn limits() -> Limits {
    Limits {
        time: None,
        ..Limits::default()
    }
}

impl Case {
    /// The level as a pack, so that a failure can be opened and checked in.
    pub fn text(&self) -> String {
        let pack = Pack {
            name: self.level.name.clone(),
            mechanics: Arc::new(self.mechanics.clone()),
            levels: vec![Arc::new(self.level.clone())],
        };
        format!("{}\n{}", self.level.name, write_pack(&pack, ""))
    }
}
