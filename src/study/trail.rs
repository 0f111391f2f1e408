//! From what an engine found back to the steps of a player.

use super::space::unlabel;
use crate::level::{Control, Route};
use crate::rules::{Roam, Rules, Step};

/// The steps of a trail: from each position on the walk to the place that the next label names, then its step.
/// None if the trail does not fit the level, which would be a fault of the search.
pub(super) fn steps_of(rules: &Rules, trail: &[u32]) -> Option<Vec<Step>> {
    let mut scratch = rules.scratch();
    let mut roam = Roam::default();
    let mut here = rules.start().0.to_vec();
    let mut next = here.clone();
    let mut steps = Vec::new();
    for &label in trail {
        let (place, step) = unlabel(label);
        if rules.lone_walker().is_some() {
            rules.roam(&mut scratch, &here, &mut roam);
            let cell = *rules.tables().places.get(usize::from(place))?;
            let member = roam.member_at(cell)?;
            steps.extend(
                roam.walk_to(member)
                    .into_iter()
                    .map(|dir| Step { slot: 0, dir }),
            );
            rules.member_position(&here, &roam.members[member], &mut next);
            here.copy_from_slice(&next);
        }
        rules.step_into(&mut scratch, &here, step, &mut next)?;
        here.copy_from_slice(&next);
        steps.push(step);
    }
    Some(steps)
}

/// A route that was replayed by the step engine and found to finish the level.
#[derive(Clone, Debug)]
pub(super) struct Replayed {
    pub route: Route,
    pub steps: u32,
    /// Moves under Drag.
    pub pushes: u32,
}

/// Plays a route from the start. None unless every step of it changes something and the last position, and no earlier one, is finished.
pub(super) fn replay(rules: &Rules, route: Route) -> Option<Replayed> {
    let played = rules.play(&route);
    let finished = played.iter().map(|step| rules.finished(&step.position));
    let first = match rules.finished(&rules.start()) {
        true => 0,
        false => finished.into_iter().position(|done| done)? + 1,
    };
    if played.len() != route.len() || first != route.len() {
        return None;
    }
    let pushes = match &route {
        Route::Steer(_) => played.iter().filter(|step| step.pushed).count(),
        Route::Drag(steps) => {
            let changes = steps
                .windows(2)
                .filter(|pair| pair[0].block != pair[1].block);
            usize::from(!steps.is_empty()) + changes.count()
        }
    };
    Some(Replayed {
        steps: route.len() as u32,
        pushes: pushes as u32,
        route,
    })
}

/// Lengths of the spans of a route, which end with each step that is not taken back at once.
///
/// With a lone walker these are the roams of the route; otherwise a step that a single step takes back ends no span.
pub(super) fn spans(rules: &Rules, route: &Route) -> Vec<u32> {
    let mut scratch = rules.scratch();
    let mut roam = Roam::default();
    let mut back = vec![0; rules.words()];
    let mut candidates = Vec::new();
    let mut before = rules.start();
    let mut spans = Vec::new();
    let mut length = 0;
    let lone = rules.control() == Control::Steer && rules.lone_walker().is_some();
    for played in rules.play(route) {
        length += 1;
        let after = &played.position;
        let folds = if rules.finished(after) {
            false
        } else if lone {
            rules.roam(&mut scratch, &before.0, &mut roam);
            let mut key = after.0.to_vec();
            let place = rules.split(&mut key);
            let mut old = before.0.to_vec();
            rules.split(&mut old);
            let cell = rules.tables().places[usize::from(place)];
            key == old && roam.member_at(cell).is_some()
        } else {
            rules.candidate_steps_into(&mut scratch, &after.0, &mut candidates);
            candidates.iter().any(|&step| {
                let made = rules.step_into(&mut scratch, &after.0, step, &mut back);
                made.is_some() && back[..] == before.0[..]
            })
        };
        if !folds {
            spans.push(length);
            length = 0;
        }
        before = played.position;
    }
    if length > 0 {
        spans.push(length);
    }
    spans
}
