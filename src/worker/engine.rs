//! The seam between the threads and what they run, so that tests can put a slow or broken engine there.

use super::protocol::Answer;
use crate::level::{Cell, Level, Mechanics, Route, Severity, problems};
use crate::rules::Rules;
use crate::study::{self, Limits, MapCounts, Prove, Report, TileClass, Watch};

/// What the worker can be asked to compute. All calls must return within a few milliseconds of their halt firing.
pub trait Engine: Send + Sync {
    /// Whether `route` finishes the level; false for a level that is invalid.
    fn replays(&self, mechanics: &Mechanics, level: &Level, route: &Route) -> bool;

    /// Problems, or verdict and par.
    fn answer(
        &self,
        mechanics: &Mechanics,
        level: &Level,
        prove: Prove,
        limits: &Limits,
        watch: &mut dyn Watch,
    ) -> Answer;

    /// The class of every cell, see [`study::tile_classes`].
    fn tiles(
        &self,
        mechanics: &Mechanics,
        level: &Level,
        known: &Report,
        limits: &Limits,
        tell: &mut dyn FnMut(Cell, TileClass),
    ) -> Vec<Option<TileClass>>;

    /// The spans of a route between its commitments, if the whole map fits the limits.
    fn spans(&self, _: &Mechanics, _: &Level, _: &Route, _: &Limits) -> Option<Vec<u32>> {
        None
    }

    /// The counts of the fold map, if they fit the limits.
    fn map(&self, mechanics: &Mechanics, level: &Level, limits: &Limits) -> Option<MapCounts>;
}

/// The engine that the program runs: [`crate::study`].
#[derive(Clone, Copy, Debug, Default)]
pub struct Studies;

impl Engine for Studies {
    fn replays(&self, mechanics: &Mechanics, level: &Level, route: &Route) -> bool {
        Rules::compile(mechanics, level).is_ok_and(|rules| {
            let played = rules.play(route);
            let end = played
                .last()
                .map_or_else(|| rules.start(), |last| last.position.clone());
            played.len() == route.len() && rules.finished(&end)
        })
    }

    fn answer(
        &self,
        mechanics: &Mechanics,
        level: &Level,
        prove: Prove,
        limits: &Limits,
        watch: &mut dyn Watch,
    ) -> Answer {
        if problems(mechanics, level)
            .iter()
            .any(|problem| problem.severity == Severity::Invalid)
        {
            return Answer::Invalid(problems(mechanics, level));
        }
        match Rules::compile(mechanics, level) {
            Ok(rules) => Answer::Studied(std::sync::Arc::new(study::solve(
                &rules, prove, limits, watch,
            ))),
            Err(problems) => Answer::Invalid(problems),
        }
    }

    fn tiles(
        &self,
        mechanics: &Mechanics,
        level: &Level,
        known: &Report,
        limits: &Limits,
        tell: &mut dyn FnMut(Cell, TileClass),
    ) -> Vec<Option<TileClass>> {
        study::tile_classes(mechanics, level, known, limits, tell)
    }

    fn spans(
        &self,
        mechanics: &Mechanics,
        level: &Level,
        route: &Route,
        limits: &Limits,
    ) -> Option<Vec<u32>> {
        let rules = Rules::compile(mechanics, level).ok()?;
        study::fold_spans(&rules, route, limits).ok().flatten()
    }

    fn map(&self, mechanics: &Mechanics, level: &Level, limits: &Limits) -> Option<MapCounts> {
        let rules = Rules::compile(mechanics, level).ok()?;
        study::map_counts(&rules, limits).ok()
    }
}
