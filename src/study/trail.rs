//! From what an engine found back to the steps of a player.

use super::space::unlabel;
use crate::level::{Control, Route};
use crate::rules::{Roam, Rules, Scratch, Step};

/// The steps of a trail, and the lengths of its spans.
pub(super) struct Walked {
    pub steps: Vec<Step>,
    pub spans: Vec<u32>,
}

/// The steps of a trail: from each position on the walk to the place that the next label names, then its step.
/// None if the trail does not fit the level, which would be a fault of the search.
///
/// With a lone walker a walk and the step after it are a span: what leaves a roam ends one. Otherwise a step ends a span unless
/// a single step takes it back.
pub(super) fn walk(rules: &Rules, trail: &[u32]) -> Option<Walked> {
    let mut scratch = rules.scratch();
    let mut roam = Roam::default();
    let mut here = rules.start().0.to_vec();
    let mut next = here.clone();
    let (mut steps, mut spans) = (Vec::new(), Vec::new());
    let mut span = 0;
    for &label in trail {
        let (place, step) = unlabel(label);
        if rules.lone_walker().is_some() {
            rules.roam_members(&mut scratch, &here, &mut roam);
            let cell = *rules.tables().places.get(usize::from(place))?;
            let member = roam.member_at(cell)?;
            let walk = roam.walk_to(member);
            span += walk.len() as u32;
            steps.extend(walk.into_iter().map(|dir| Step { slot: 0, dir }));
            rules.member_position(&here, &roam.members[member], &mut next);
            here.copy_from_slice(&next);
        }
        let info = rules.step_into(&mut scratch, &here, step, &mut next)?;
        steps.push(step);
        span += 1;
        let folds = rules.lone_walker().is_none()
            && !info.finished
            && taken_back(rules, &mut scratch, &here, &next);
        if !folds {
            spans.push(std::mem::take(&mut span));
        }
        here.copy_from_slice(&next);
    }
    spans.extend(Some(span).filter(|&span| span > 0));
    Some(Walked { steps, spans })
}

/// Whether one step leads from `there` back to `here`.
fn taken_back(rules: &Rules, scratch: &mut Scratch, here: &[u64], there: &[u64]) -> bool {
    let mut candidates = Vec::new();
    let mut back = vec![0; here.len()];
    rules.candidate_steps_into(scratch, there, &mut candidates);
    candidates.iter().any(|&step| {
        let made = rules.step_into(scratch, there, step, &mut back);
        made.is_some() && back == here
    })
}

/// A route that was replayed by the step engine and found to finish the level.
#[derive(Clone, Debug)]
pub(super) struct Replayed {
    pub route: Route,
    pub spans: Vec<u32>,
    pub steps: u32,
    /// Moves under Drag.
    pub pushes: u32,
}

/// Plays a trail from the start, step by step, without any folding. None unless every step of it changes something and the
/// last position, and no earlier one, is finished.
pub(super) fn replay(rules: &Rules, trail: &[u32]) -> Option<Replayed> {
    let Walked { steps, spans } = walk(rules, trail)?;
    let mut scratch = rules.scratch();
    let mut here = rules.start().0.to_vec();
    let mut next = here.clone();
    let mut finished = rules.finished_in(&mut scratch, &here);
    let (mut pushes, mut last) = (0, None);
    for &step in &steps {
        if finished {
            return None;
        }
        let info = rules.step_into(&mut scratch, &here, step, &mut next)?;
        finished = info.finished;
        pushes += match rules.control() {
            Control::Steer => u32::from(info.pushed),
            Control::Drag => u32::from(last != Some(step.slot)),
        };
        last = Some(info.slot);
        std::mem::swap(&mut here, &mut next);
    }
    // The same once more from the packed position, not from what the step told.
    let ends_well = finished && rules.finished_in(&mut scratch, &here);
    let route = rules.route(&steps);
    (ends_well && route.len() == steps.len()).then_some(Replayed {
        steps: steps.len() as u32,
        route,
        spans,
        pushes,
    })
}
