//! The thread that studies the answered level and, in between, answers the levels of the shelf.

use super::Shared;
use super::memory::Question;
use super::protocol::{Answer, Event, ShelfLine};
use super::verdict::limits;
use crate::level::{Level, Mechanics};
use crate::study::{Halt, Outcome, Prove, Report, TileClass, UndecidedReason};
use crossbeam_channel::{Receiver, TryRecvError};
use std::collections::VecDeque;
use std::sync::{Arc, PoisonError};

/// Tiles and map of an answered level.
pub(crate) struct StudiesJob {
    pub(crate) revision: u64,
    pub(crate) question: Question,
    pub(crate) report: Arc<Report>,
    pub(crate) halt: Halt,
}

/// What this thread can be asked.
pub(crate) enum AsideJob {
    /// Study the level on the board.
    Studies(StudiesJob),
    /// Answer these levels; replaces what is left of an earlier wish.
    Shelf {
        mechanics: Arc<Mechanics>,
        levels: VecDeque<Arc<Level>>,
        prove: Prove,
    },
}

/// The levels that are still to be answered.
struct Shelf {
    mechanics: Arc<Mechanics>,
    levels: VecDeque<Arc<Level>>,
    prove: Prove,
}

/// Serves wishes until the desk is gone: studies before the shelf, newest first.
pub(crate) fn aside_loop(shared: &Shared, jobs: &Receiver<AsideJob>, shelf_halt: &Halt) {
    let mut shelf: Option<Shelf> = None;
    let mut studies: Option<StudiesJob> = None;
    loop {
        let idle = studies.is_none() && shelf.is_none();
        let next = if idle {
            jobs.recv().map_err(|_| TryRecvError::Disconnected)
        } else {
            jobs.try_recv()
        };
        match next {
            Ok(AsideJob::Studies(job)) => studies = Some(job),
            Ok(AsideJob::Shelf {
                mechanics,
                levels,
                prove,
            }) => {
                shelf = Some(Shelf {
                    mechanics,
                    levels,
                    prove,
                })
            }
            Err(TryRecvError::Disconnected) => return,
            Err(TryRecvError::Empty) => {
                if let Some(job) = studies.take() {
                    shared.pump.guard(job.revision, || study(shared, &job));
                } else if let Some(wish) = &mut shelf
                    && !answer_next(shared, wish, jobs, shelf_halt)
                {
                    shelf = None;
                }
            }
        }
    }
}

fn study(shared: &Shared, job: &StudiesJob) {
    if job.halt.fired() {
        return;
    }
    let known = shared
        .memory
        .lock()
        .unwrap_or_else(PoisonError::into_inner)
        .recall(&job.question, shared.budget());
    map(shared, job, known.as_ref().and_then(|known| known.map));
    if !job.halt.fired() {
        spans(
            shared,
            job,
            known.as_ref().and_then(|known| known.spans.clone()),
        );
    }
    if !job.halt.fired() {
        tiles(shared, job, known.and_then(|known| known.tiles));
    }
}

fn spans(shared: &Shared, job: &StudiesJob, known: Option<Vec<u32>>) {
    let Some(route) = &job.report.route else {
        return;
    };
    let (question, limits) = (&job.question, limits(shared.budget(), &job.halt));
    let spans = known.or_else(|| {
        shared
            .engine
            .spans(&question.mechanics, &question.level, route, &limits)
    });
    if let Some(spans) = spans.filter(|_| !job.halt.fired()) {
        let kept = Some(spans.clone());
        let memory = &mut shared.memory.lock().unwrap_or_else(PoisonError::into_inner);
        memory.add(question, |known| known.spans = kept);
        shared.pump.send(Event::Spans {
            revision: job.revision,
            route: route.clone(),
            spans,
        });
    }
}

fn map(shared: &Shared, job: &StudiesJob, known: Option<crate::study::MapCounts>) {
    let limits = limits(shared.budget(), &job.halt);
    let counts = known.or_else(|| {
        shared
            .engine
            .map(&job.question.mechanics, &job.question.level, &limits)
    });
    if job.halt.fired() {
        return;
    }
    shared
        .memory
        .lock()
        .unwrap_or_else(PoisonError::into_inner)
        .add(&job.question, |known| known.map = counts);
    shared.pump.send(Event::Map {
        revision: job.revision,
        counts,
    });
}

fn tiles(shared: &Shared, job: &StudiesJob, known: Option<Arc<Vec<Option<TileClass>>>>) {
    let revision = job.revision;
    if let Some(classes) = known {
        shared.pump.send(Event::TilesDone { revision, classes });
        return;
    }
    let question = &job.question;
    let limits = limits(shared.budget(), &job.halt);
    let mut left = question.level.size.area();
    let mut tell = |cell, class: TileClass| {
        left = left.saturating_sub(1);
        shared.pump.send(Event::Tile {
            revision,
            cell,
            class,
            left,
        });
    };
    let classes = shared.engine.tiles(
        &question.mechanics,
        &question.level,
        &job.report,
        &limits,
        &mut tell,
    );
    if job.halt.fired() {
        return;
    }
    let classes = Arc::new(classes);
    let kept = Arc::clone(&classes);
    shared
        .memory
        .lock()
        .unwrap_or_else(PoisonError::into_inner)
        .add(question, |known| known.tiles = Some(kept));
    shared.pump.send(Event::TilesDone { revision, classes });
}

/// Answers the next level of the shelf. Returns whether any is left. A level that was interrupted comes again.
fn answer_next(
    shared: &Shared,
    shelf: &mut Shelf,
    jobs: &Receiver<AsideJob>,
    shelf_halt: &Halt,
) -> bool {
    let Some(level) = shelf.levels.pop_front() else {
        return false;
    };
    let question = Question {
        mechanics: Arc::clone(&shelf.mechanics),
        level: Arc::clone(&level),
        prove: shelf.prove,
    };
    let budget = shared.budget();
    let halt = shelf_halt.current();
    if !jobs.is_empty() {
        shelf.levels.push_front(level);
        return true;
    }
    let known = shared
        .memory
        .lock()
        .unwrap_or_else(PoisonError::into_inner)
        .recall(&question, budget);
    let answer = match known {
        Some(known) => Some(known.answer),
        None => shared.pump.guard(0, || {
            let limits = limits(budget, &halt);
            shared
                .engine
                .answer(&shelf.mechanics, &level, shelf.prove, &limits, &mut ())
        }),
    };
    match answer {
        Some(Answer::Studied(report))
            if report.outcome == Outcome::Undecided(UndecidedReason::Stopped) =>
        {
            shelf.levels.push_front(level);
        }
        Some(answer) => {
            shared
                .memory
                .lock()
                .unwrap_or_else(PoisonError::into_inner)
                .keep(&question, &answer, budget);
            shared.pump.send(Event::Shelf(ShelfLine { level, answer }));
        }
        None => {}
    }
    true
}
