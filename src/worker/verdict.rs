//! The thread that answers the level on the board.

use super::aside::{AsideJob, StudiesJob};
use super::memory::Question;
use super::protocol::{Answer, Event};
use super::pump::Glimpses;
use super::{Budget, Shared};
use crate::level::{Level, Mechanics, Route};
use crate::study::{Halt, Limits, Prove};
use crossbeam_channel::{Receiver, Sender};
use std::sync::{Arc, PoisonError};

/// One wish of the desk: a verdict on the level as edited.
pub(crate) struct VerdictJob {
    pub(crate) revision: u64,
    pub(crate) mechanics: Arc<Mechanics>,
    pub(crate) level: Arc<Level>,
    pub(crate) prove: Prove,
    pub(crate) last_route: Option<Route>,
    pub(crate) studies: bool,
    pub(crate) halt: Halt,
}

/// Serves wishes until the desk is gone. Of several that wait, only the newest is served.
pub(crate) fn verdict_loop(
    shared: &Shared,
    jobs: &Receiver<VerdictJob>,
    aside: &Sender<AsideJob>,
    shelf: &Halt,
) {
    while let Ok(first) = jobs.recv() {
        let job = jobs.try_iter().last().unwrap_or(first);
        let revision = job.revision;
        let answered = shared.pump.guard(revision, || answer(shared, &job));
        if let Some((question, Answer::Studied(report))) = answered
            && job.studies
            && !job.halt.fired()
        {
            let studies = StudiesJob {
                revision,
                question,
                report,
                halt: job.halt,
            };
            let _ = aside.send(AsideJob::Studies(studies));
            let _ = shelf.advance();
        }
    }
}

fn answer(shared: &Shared, job: &VerdictJob) -> (Question, Answer) {
    let question = Question {
        mechanics: Arc::clone(&job.mechanics),
        level: Arc::clone(&job.level),
        prove: job.prove,
    };
    let budget = shared.budget();
    let known = shared
        .memory
        .lock()
        .unwrap_or_else(PoisonError::into_inner)
        .recall(&question, budget);
    if let Some(known) = known {
        let answer = known.answer;
        shared.pump.send(Event::Answered {
            revision: job.revision,
            answer: answer.clone(),
            remembered: true,
        });
        return (question, answer);
    }
    replay_last(shared, job);
    let answer = search(shared, job, budget);
    shared
        .memory
        .lock()
        .unwrap_or_else(PoisonError::into_inner)
        .keep(&question, &answer, budget);
    shared.pump.send(Event::Answered {
        revision: job.revision,
        answer: answer.clone(),
        remembered: false,
    });
    (question, answer)
}

/// Before any search: does the route of the level before the edit still finish it? Then it is an upper bound at once.
fn replay_last(shared: &Shared, job: &VerdictJob) {
    if let Some(route) = &job.last_route {
        let still_works = shared.engine.replays(&job.mechanics, &job.level, route);
        shared.pump.send(Event::Replayed {
            revision: job.revision,
            route: route.clone(),
            still_works,
        });
    }
}

fn search(shared: &Shared, job: &VerdictJob, budget: Budget) -> Answer {
    let mut glimpses = Glimpses::new(&shared.pump, job.revision);
    shared.engine.answer(
        &job.mechanics,
        &job.level,
        job.prove,
        &limits(budget, &job.halt),
        &mut glimpses,
    )
}

/// The limits of one search under a budget.
pub(crate) fn limits(budget: Budget, halt: &Halt) -> Limits {
    Limits {
        time: Some(budget.time),
        bytes: budget.bytes,
        positions: None,
        halt: halt.clone(),
    }
}
