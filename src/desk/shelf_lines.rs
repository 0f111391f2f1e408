//! What the shelf says about each level and about all of them, kept until the pack or an answer changes.

use super::answers::board_hash;
use super::marks::Mark;
use super::state::State;
use super::theme::{counted, grouped};
use crate::level::Level;
use crate::study::Outcome;
use crate::worker::Answer;
use rustc_hash::FxHashMap;
use std::sync::Arc;

/// What is known about one level.
#[derive(Clone, Debug)]
pub struct Line {
    level: Arc<Level>,
    hash: u64,
    /// The verdict.
    pub mark: Mark,
    /// Fewest steps known.
    pub par: Option<u32>,
    /// Whether no route is shorter.
    pub proved: bool,
}

impl Line {
    fn new(level: &Arc<Level>, hash: u64, answer: Option<&Answer>) -> Line {
        let (mark, steps) = match answer {
            None => (Mark::Looking, None),
            Some(Answer::Invalid(_)) => (Mark::Invalid, None),
            Some(Answer::Studied(report)) => match report.outcome {
                Outcome::Solvable => (Mark::Solvable, report.steps),
                Outcome::Unsolvable => (Mark::Unsolvable, None),
                Outcome::Undecided(_) => (Mark::Undecided, None),
            },
        };
        Line {
            level: Arc::clone(level),
            hash,
            mark,
            par: steps.map(|steps| steps.fewest),
            proved: steps.is_some_and(|steps| steps.proved),
        }
    }

    /// Verdict and par in words.
    pub fn text(&self) -> String {
        match self.par {
            Some(par) if self.proved => format!("par {}, proved", grouped(u64::from(par))),
            Some(par) => format!(
                "can be finished, in at most {} steps",
                grouped(u64::from(par))
            ),
            None => self.mark.word().to_owned(),
        }
    }
}

/// All lines of the shelf.
#[derive(Debug, Default)]
pub struct Lines {
    version: Option<u64>,
    lines: Vec<Line>,
    greatest_par: u32,
    summary: String,
}

impl Lines {
    /// Looks everything up again if the pack or an answer changed.
    pub fn update(&mut self, state: &State) {
        let levels = &state.pack.levels;
        let same_levels = self.lines.len() == levels.len()
            && self
                .lines
                .iter()
                .zip(levels)
                .all(|(line, level)| Arc::ptr_eq(&line.level, level));
        let version = state.shelf.version();
        if same_levels && self.version == Some(version) {
            return;
        }
        let known: FxHashMap<*const Level, u64> = self
            .lines
            .iter()
            .map(|line| (Arc::as_ptr(&line.level), line.hash))
            .collect();
        self.lines = levels
            .iter()
            .map(|level| {
                let hash = known
                    .get(&Arc::as_ptr(level))
                    .copied()
                    .unwrap_or_else(|| board_hash(level));
                Line::new(level, hash, state.shelf.get_hashed(hash, level))
            })
            .collect();
        self.version = Some(version);
        self.greatest_par = self
            .lines
            .iter()
            .filter_map(|line| line.par)
            .max()
            .unwrap_or(0);
        self.summary = summary(&self.lines);
    }

    /// One for each level, in playing order.
    pub fn lines(&self) -> &[Line] {
        &self.lines
    }

    /// The greatest par of the pack; 0 while none is known.
    pub fn greatest_par(&self) -> u32 {
        self.greatest_par
    }

    /// "9 levels · all proved · par 8 to 61".
    pub fn summary(&self) -> &str {
        &self.summary
    }
}

fn summary(lines: &[Line]) -> String {
    let count =
        |wanted: &dyn Fn(&Line) -> bool| lines.iter().filter(|line| wanted(line)).count() as u64;
    let mut parts = vec![counted(lines.len() as u64, "level", "levels")];
    let proved = count(&|line| line.proved);
    if !lines.is_empty() && proved == lines.len() as u64 {
        parts.push("all proved".to_owned());
    } else {
        let unproved = count(&|line| line.mark == Mark::Solvable && !line.proved);
        for (number, what) in [
            (proved, "proved"),
            (unproved, "solvable, par not proved"),
            (
                count(&|line| line.mark == Mark::Unsolvable),
                "can't be finished",
            ),
            (count(&|line| line.mark == Mark::Undecided), "undecided"),
            (count(&|line| line.mark == Mark::Invalid), "invalid"),
            (count(&|line| line.mark == Mark::Looking), "not known yet"),
        ] {
            if number > 0 {
                parts.push(format!("{} {what}", grouped(number)));
            }
        }
    }
    let pars = || {
        lines
            .iter()
            .filter(|line| line.proved)
            .filter_map(|line| line.par)
    };
    match (pars().min(), pars().max()) {
        (Some(least), Some(greatest)) if least == greatest => {
            parts.push(format!("par {}", grouped(u64::from(least))));
        }
        (Some(least), Some(greatest)) => parts.push(format!(
            "par {} to {}",
            grouped(u64::from(least)),
            grouped(u64::from(greatest))
        )),
        _ => {}
    }
    parts.join(" · ")
}
