//! What each tile does for a level: by closing it and asking again.

use super::fast::FastLevel;
use super::map::close;
use super::{Limits, Outcome, Prove, Report, TileClass, solve};
use crate::level::{Cell, Level, Mechanics, Route};
use crate::rules::Rules;
use crate::rules::tables::flag;
use std::time::Instant;

/// What is left of the limits of a study that consists of many searches.
struct Purse<'a> {
    limits: &'a Limits,
    started: Instant,
}

impl Purse<'_> {
    /// Limits for one search more; none when time is up or the work was stopped.
    fn limits(&self) -> Option<Limits> {
        let mut left = self.limits.clone();
        if let Some(time) = left.time {
            left.time = Some(time.checked_sub(self.started.elapsed())?);
        }
        (!left.halt.fired()).then_some(left)
    }
}

/// See [`super::tile_classes`].
pub(super) fn tile_classes(
    mechanics: &Mechanics,
    level: &Level,
    known: &Report,
    limits: &Limits,
    tell: &mut dyn FnMut(Cell, TileClass),
) -> Vec<Option<TileClass>> {
    let mut classes = vec![None; level.size.area()];
    let Ok(rules) = Rules::compile(mechanics, level) else {
        return classes;
    };
    let purse = Purse {
        limits,
        started: Instant::now(),
    };
    let touched = touched_by_all(&rules, known, &purse);
    let mut settle = |classes: &mut Vec<Option<TileClass>>, cell: Cell, class: TileClass| {
        classes[level.size.index(cell)] = Some(class);
        tell(cell, class);
    };
    let mut asked = Vec::new();
    for cell in level.size.cells() {
        match touched
            .as_ref()
            .map(|touched| touched[level.size.index(cell)])
        {
            Some(false) => settle(&mut classes, cell, TileClass::CutOff),
            // Whether it is cut off, which goes before all else, is not known.
            None if !known
                .touched
                .get(level.size.index(cell))
                .is_some_and(|&on| on) => {}
            _ if is_furnished(mechanics, level, cell) => {
                settle(&mut classes, cell, TileClass::Furnished);
            }
            _ => asked.push(cell),
        }
    }
    let best = known
        .route
        .as_ref()
        .filter(|route| Some(route.len() as u32) == par_of(known));
    let on_route = cells_on_route(&rules, best);
    let only_takes_away = closing_only_takes_away(&rules);
    // Then a route that is left whole stays the best, and what can't be finished stays so.
    let surely_idle = |at: usize| {
        only_takes_away && (best.is_some() && !on_route[at] || known.outcome == Outcome::Unsolvable)
    };
    // The quick ones first: tiles off the best route.
    asked.sort_by_key(|&cell| (on_route[level.size.index(cell)], cell));
    for cell in asked {
        let at = level.size.index(cell);
        let class = if surely_idle(at) {
            Some(TileClass::Idle)
        } else {
            purse
                .limits()
                .and_then(|limits| class_of(&rules, cell, known, &limits))
        };
        if let Some(class) = class {
            settle(&mut classes, cell, class);
        }
    }
    classes
}

/// Closing a tile that holds something at the start is not asked.
fn is_furnished(mechanics: &Mechanics, level: &Level, cell: Cell) -> bool {
    level.body_at(cell).is_some()
        || level.item_at(cell).is_some()
        || !mechanics.ground(level.ground_at(cell)).home.is_empty()
}

/// Cells that a body can come onto, from the whole space; none if it did not fit the limits.
fn touched_by_all(rules: &Rules, known: &Report, purse: &Purse) -> Option<Vec<bool>> {
    if known.closed {
        return Some(known.touched.clone());
    }
    let limits = purse.limits()?;
    if let Some(fast) = FastLevel::compile(rules) {
        return fast.touched(&known.touched, &limits).ok();
    }
    let closed = close(rules, &limits).ok()?;
    Some(closed.graph.space.touched())
}

/// The proved par; none for an unsolvable level or where it is not proved.
fn par_of(known: &Report) -> Option<u32> {
    known
        .steps
        .filter(|figure| figure.proved)
        .map(|figure| figure.fewest)
}

/// Whether closing a tile can do nothing but take steps away, so that every route of the level with the tile closed is one
/// of the level as it is.
///
/// With one walker, or under Drag, a step that looks at the closed tile falls away whole: a row of cargo is not pushed at all
/// if one of it can't go on, and cargo that follows by tow enters a cell that the walker stood on, which is not closed. Any other
/// step leads where it led. Not so with slides, which may stop at a closed tile; with warps, which may lose their twin
/// and leave the body where it landed; and with several walkers, where one is stopped by the tile while the others move.
fn closing_only_takes_away(rules: &Rules) -> bool {
    let tables = rules.tables();
    let glide = tables.bodies.iter().any(|body| body.glide);
    let slick = tables.has_anywhere(flag::SLICK);
    tables.walkers.len() <= 1 && !glide && !slick && !tables.has_warps
}

/// Cells that a body came onto in the best route.
fn cells_on_route(rules: &Rules, route: Option<&Route>) -> Vec<bool> {
    let mut scratch = rules.scratch();
    let mut on_route = vec![false; rules.tables().size.area()];
    let Some(route) = route else {
        return on_route;
    };
    let mut before = rules.start();
    let mut candidates = Vec::new();
    let mut to = before.0.to_vec();
    for played in rules.play(route) {
        rules.candidate_steps_into(&mut scratch, &before.0, &mut candidates);
        for &step in &candidates {
            scratch.forget_touched();
            let made = rules.step_into(&mut scratch, &before.0, step, &mut to);
            if made.is_some() && to[..] == played.position.0[..] {
                for (seen, &touched) in on_route.iter_mut().zip(scratch.touched()) {
                    *seen |= touched;
                }
            }
        }
        before = played.position;
    }
    on_route
}

/// The class of one tile by closing it; none if a limit was met, or if what is known of the level as it is does not suffice.
fn class_of(rules: &Rules, cell: Cell, known: &Report, limits: &Limits) -> Option<TileClass> {
    let closing = rules.closing(cell);
    // The answer with every tile open decides how much has to be known.
    let par = match known.outcome {
        Outcome::Solvable => Some(par_of(known)?),
        Outcome::Unsolvable => None,
        Outcome::Undecided(_) => return None,
    };
    let answer = solve(&closing, Prove::Steps, limits, &mut ());
    match (par, answer.outcome) {
        (_, Outcome::Undecided(_)) => None,
        (Some(_), Outcome::Unsolvable) => Some(TileClass::Vital),
        (None, Outcome::Unsolvable) => Some(TileClass::Idle),
        (None, Outcome::Solvable) => Some(TileClass::Useful),
        (Some(par), Outcome::Solvable) => {
            let steps = answer.steps?;
            match (steps.fewest == par, steps.proved) {
                (true, true) => Some(TileClass::Idle),
                (false, true) => Some(TileClass::Useful),
                // A cheaper route than the par proves that the par changes.
                (false, false) if steps.fewest < par => Some(TileClass::Useful),
                (false, false) if answer.steps_low > par => Some(TileClass::Useful),
                _ => None,
            }
        }
    }
}
