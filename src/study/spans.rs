//! The folds along a route, as the whole map has them.

use super::{Limits, UndecidedReason, map};
use crate::level::Route;
use crate::rules::Rules;

/// The lengths, in steps, of the spans between the commitments of a route (rules.md, Folds): within a span every step can be
/// undone eventually, the last step of each but the last can't. They add up to the length of the route. None if the level does
/// not take the route. Closes the whole space.
///
/// # Errors
/// The limit that was met first.
pub fn fold_spans(
    rules: &Rules,
    route: &Route,
    limits: &Limits,
) -> Result<Option<Vec<u32>>, UndecidedReason> {
    let played = rules.play(route);
    if played.len() != route.len() {
        return Ok(None);
    }
    let mut positions = vec![rules.start()];
    positions.extend(played.into_iter().map(|played| played.position));
    let closed = map::close(rules, limits)?;
    let folds = map::folds_of_positions(&closed, &positions);
    if folds.contains(&None) {
        return Ok(None);
    }
    let (mut spans, mut span) = (Vec::new(), 0);
    for step in folds.windows(2) {
        span += 1;
        if step[0] != step[1] {
            spans.push(std::mem::take(&mut span));
        }
    }
    spans.extend(Some(span).filter(|&span| span > 0));
    Ok(Some(spans))
}
