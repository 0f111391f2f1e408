//! What the worker said, each piece stamped with the revision that it is for.

use super::state::State;
use crate::level::{Cell, Level};
use crate::study::{MapCounts, Outcome, Progress, Report, TileClass};
use crate::worker::{Answer, Event};
use rustc_hash::{FxHashMap, FxHasher};
use std::hash::{Hash, Hasher};
use std::sync::Arc;

/// Something with the revision that it is for.
#[derive(Clone, Debug)]
pub struct Stamped<T> {
    /// The revision.
    pub revision: u64,
    /// The thing.
    pub value: T,
}

/// Tile classes as far as they are known.
#[derive(Clone, Debug, Default)]
pub struct Tiles {
    /// The class of every cell, row by row, where it is settled.
    pub classes: Vec<Option<TileClass>>,
    /// How many tiles are still to be asked.
    pub left: usize,
    /// Whether nothing more will come.
    pub done: bool,
}

/// The latest of everything that the worker said about the level on the board. What is not for the present revision is stale.
#[derive(Clone, Debug, Default)]
pub struct Answers {
    /// Whether the route from before the edit still finishes the level.
    pub still_works: Option<Stamped<bool>>,
    /// The latest glimpse of the search.
    pub progress: Option<Stamped<Progress>>,
    /// The answer.
    pub answer: Option<Stamped<Answer>>,
    /// Whether the answer was remembered from before.
    pub remembered: bool,
    /// Tile classes.
    pub tiles: Option<Stamped<Tiles>>,
    /// Fold map; none inside if it did not fit the limits.
    pub map: Option<Stamped<Option<MapCounts>>>,
    /// What a job that panicked said.
    pub failed: Option<Stamped<String>>,
}

impl Answers {
    /// The report, whatever its revision.
    pub fn report(&self) -> Option<(u64, &Arc<Report>)> {
        match self.answer.as_ref() {
            Some(Stamped {
                revision,
                value: Answer::Studied(report),
            }) => Some((*revision, report)),
            _ => None,
        }
    }
}

/// Answers for the levels of the shelf, found by board, so that renamed, moved and restored levels keep theirs.
#[derive(Clone, Debug, Default)]
pub struct ShelfAnswers {
    version: u64,
    by_board: FxHashMap<u64, Vec<(Arc<Level>, Answer)>>,
}

impl ShelfAnswers {
    /// The answer for a level with this board.
    pub fn get(&self, level: &Arc<Level>) -> Option<&Answer> {
        self.get_hashed(board_hash(level), level)
    }

    /// The same for a level whose [`board_hash`] is known.
    pub fn get_hashed(&self, hash: u64, level: &Arc<Level>) -> Option<&Answer> {
        self.by_board
            .get(&hash)?
            .iter()
            .find(|(known, _)| Arc::ptr_eq(known, level) || known.same_board(level))
            .map(|(_, answer)| answer)
    }

    /// Grows whenever an answer changes.
    pub fn version(&self) -> u64 {
        self.version
    }

    /// Remembers an answer, in place of an earlier one for the same board.
    pub fn put(&mut self, level: Arc<Level>, answer: Answer) {
        self.version += 1;
        let known = self.by_board.entry(board_hash(&level)).or_default();
        known.retain(|(old, _)| !old.same_board(&level));
        known.push((level, answer));
    }

    /// Forgets everything, as when the kinds change.
    pub fn clear(&mut self) {
        self.version += 1;
        self.by_board.clear();
    }
}

/// A hash of what a level asks, whatever its name, notes, route and par.
pub fn board_hash(level: &Level) -> u64 {
    let mut hasher = FxHasher::default();
    level.size.hash(&mut hasher);
    level.ground.hash(&mut hasher);
    level.bodies.hash(&mut hasher);
    level.items.hash(&mut hasher);
    level.blocks.hash(&mut hasher);
    level.objective.hash(&mut hasher);
    hasher.finish()
}

impl State {
    /// Takes in what the worker said. What is for an older revision is passed over: a newer answer is on its way.
    pub fn hear(&mut self, event: Event) {
        match event {
            Event::Shelf(line) => self.shelf.put(line.level, line.answer),
            Event::Failed { revision, message } => {
                log::error!(target: "foldwright::verdict", "revision {revision} failed: {message}");
                self.said = format!("a search failed: {message}");
                self.answers.failed = Some(Stamped {
                    revision,
                    value: message,
                });
            }
            event if self.is_fresh(revision_of(&event)) => self.hear_fresh(event),
            _ => {}
        }
    }

    fn hear_fresh(&mut self, event: Event) {
        match event {
            Event::Replayed {
                revision,
                route,
                still_works,
            } => {
                self.answers.still_works = Some(Stamped {
                    revision,
                    value: still_works,
                });
                if still_works {
                    self.lay_trail(route, Vec::new());
                }
            }
            Event::Progress { revision, progress } => {
                self.answers.progress = Some(Stamped {
                    revision,
                    value: progress,
                });
            }
            Event::Route { route, .. } => self.lay_trail(route, Vec::new()),
            Event::Answered {
                revision,
                answer,
                remembered,
            } => self.hear_answer(revision, answer, remembered),
            Event::Tile {
                revision,
                cell,
                class,
                left,
            } => self.hear_tile(revision, cell, class, left),
            Event::TilesDone { revision, classes } => {
                self.answers.tiles = Some(Stamped {
                    revision,
                    value: Tiles {
                        classes: classes.to_vec(),
                        left: 0,
                        done: true,
                    },
                });
            }
            Event::Map { revision, counts } => {
                self.answers.map = Some(Stamped {
                    revision,
                    value: counts,
                });
            }
            Event::Spans { route, spans, .. } => {
                let playback = self.playback.as_mut();
                if let Some(playback) = playback.filter(|playback| playback.route == route) {
                    playback.take_exact(spans);
                }
            }
            Event::Shelf(_) | Event::Failed { .. } => {}
        }
    }

    fn hear_answer(&mut self, revision: u64, answer: Answer, remembered: bool) {
        log::info!(
            target: "foldwright::verdict",
            "revision {revision} level {} verdict {}",
            self.level + 1,
            verdict_text(&answer)
        );
        match &answer {
            Answer::Studied(report) => match report.route.clone() {
                Some(route) => self.lay_trail(route, report.spans.clone()),
                // A route that was replayed on the level as it is now stays, whatever the search gave up on.
                None if report.outcome != Outcome::Unsolvable && self.has_fresh_route() => {}
                None => self.playback = None,
            },
            Answer::Invalid(_) => self.playback = None,
        }
        self.shelf.put(Arc::clone(self.current()), answer.clone());
        self.answers.answer = Some(Stamped {
            revision,
            value: answer,
        });
        self.answers.remembered = remembered;
    }

    fn has_fresh_route(&self) -> bool {
        self.playback
            .as_ref()
            .is_some_and(|playback| self.is_fresh(playback.revision))
    }

    fn hear_tile(&mut self, revision: u64, cell: Cell, class: TileClass, left: usize) {
        let size = self.current().size;
        let known =
            self.answers.tiles.take().filter(|tiles| {
                tiles.revision == revision && tiles.value.classes.len() == size.area()
            });
        let mut tiles = known.map_or_else(
            || Tiles {
                classes: vec![None; size.area()],
                ..Tiles::default()
            },
            |known| known.value,
        );
        if size.contains(cell) {
            tiles.classes[size.index(cell)] = Some(class);
        }
        tiles.left = left;
        self.answers.tiles = Some(Stamped {
            revision,
            value: tiles,
        });
    }
}

fn revision_of(event: &Event) -> u64 {
    match event {
        Event::Replayed { revision, .. }
        | Event::Progress { revision, .. }
        | Event::Route { revision, .. }
        | Event::Answered { revision, .. }
        | Event::Tile { revision, .. }
        | Event::TilesDone { revision, .. }
        | Event::Spans { revision, .. }
        | Event::Map { revision, .. }
        | Event::Failed { revision, .. } => *revision,
        Event::Shelf(_) => 0,
    }
}

/// The verdict as one line of the log.
pub fn verdict_text(answer: &Answer) -> String {
    let report = match answer {
        Answer::Invalid(problems) => return format!("invalid problems {}", problems.len()),
        Answer::Studied(report) => report,
    };
    match report.outcome {
        Outcome::Solvable => match report.steps {
            Some(steps) if steps.proved => format!("solvable steps {} proved", steps.fewest),
            Some(steps) => format!("solvable steps {}", steps.fewest),
            None => "solvable".to_owned(),
        },
        Outcome::Unsolvable => "unsolvable".to_owned(),
        Outcome::Undecided(reason) => format!("undecided {reason:?}").to_lowercase(),
    }
}
