//! Answers remembered by level content, so that undo answers at once.

use super::Budget;
use super::protocol::Answer;
use crate::level::{Level, Mechanics};
use crate::study::{MapCounts, Outcome, Prove, TileClass, UndecidedReason};
use std::collections::{HashMap, VecDeque};
use std::hash::{Hash, Hasher};
use std::sync::Arc;

/// The most that remembered answers may hold, in bytes, roughly counted.
const MOST_BYTES: usize = 64 << 20;

/// The question that an answer is for: the kinds, the board (not the level's name or notes) and what is to be proved.
#[derive(Clone, Debug)]
pub(crate) struct Question {
    pub(crate) mechanics: Arc<Mechanics>,
    pub(crate) level: Arc<Level>,
    pub(crate) prove: Prove,
}

impl PartialEq for Question {
    fn eq(&self, other: &Question) -> bool {
        self.prove == other.prove
            && (Arc::ptr_eq(&self.mechanics, &other.mechanics) || self.mechanics == other.mechanics)
            && (Arc::ptr_eq(&self.level, &other.level) || self.level.same_board(&other.level))
    }
}

impl Eq for Question {}

impl Hash for Question {
    fn hash<H: Hasher>(&self, state: &mut H) {
        let level = &*self.level;
        self.prove.hash(state);
        self.mechanics.hash(state);
        (level.size, &level.ground, &level.bodies, &level.items).hash(state);
        (&level.blocks, &level.objective).hash(state);
    }
}

/// What is known about one question.
#[derive(Clone, Debug)]
pub(crate) struct Known {
    pub(crate) answer: Answer,
    pub(crate) tiles: Option<Arc<Vec<Option<TileClass>>>>,
    pub(crate) map: Option<MapCounts>,
    pub(crate) spans: Option<Vec<u32>>,
    budget: Budget,
}

/// Remembered answers, the oldest forgotten first.
#[derive(Default)]
pub(crate) struct Memory {
    known: HashMap<Question, Known>,
    order: VecDeque<Question>,
    bytes: usize,
}

impl Memory {
    /// What is known, unless it was undecided under another budget.
    pub(crate) fn recall(&self, question: &Question, budget: Budget) -> Option<Known> {
        let known = self.known.get(question)?;
        (settled(&known.answer) || known.budget == budget).then(|| known.clone())
    }

    /// Keeps an answer, unless it was merely cancelled.
    pub(crate) fn keep(&mut self, question: &Question, answer: &Answer, budget: Budget) {
        if stopped(answer) {
            return;
        }
        let known = Known {
            answer: answer.clone(),
            tiles: None,
            map: None,
            spans: None,
            budget,
        };
        if self.known.insert(question.clone(), known).is_none() {
            self.bytes += bytes(question);
            self.order.push_back(question.clone());
        }
        while self.bytes > MOST_BYTES
            && let Some(oldest) = self.order.pop_front()
        {
            self.bytes -= bytes(&oldest);
            self.known.remove(&oldest);
        }
    }

    /// Adds what the studies found out.
    pub(crate) fn add(&mut self, question: &Question, change: impl FnOnce(&mut Known)) {
        if let Some(known) = self.known.get_mut(question) {
            change(known);
        }
    }
}

/// About what one entry holds: the level, the heat and the tiles.
fn bytes(question: &Question) -> usize {
    1024 + question.level.size.area() * 24
}

/// Whether more time could not change the answer.
fn settled(answer: &Answer) -> bool {
    match answer {
        Answer::Invalid(_) => true,
        Answer::Studied(report) => match report.outcome {
            Outcome::Unsolvable => true,
            Outcome::Solvable => report.steps.is_some_and(|figure| figure.proved),
            Outcome::Undecided(_) => false,
        },
    }
}

fn stopped(answer: &Answer) -> bool {
    matches!(answer, Answer::Studied(report) if report.outcome == Outcome::Undecided(UndecidedReason::Stopped))
}
