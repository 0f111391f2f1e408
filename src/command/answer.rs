//! One level checked.

use super::watched;
use crate::level::{Cell, Level, Mechanics, Problem, Severity, problems};
use crate::rules::Rules;
use crate::study::{
    self, Figure, Limits, MapCounts, Outcome, Prove, Report, TileClass, UndecidedReason,
};

/// What is asked about every level.
#[derive(Clone, Debug)]
pub(super) struct Questions {
    pub prove: Prove,
    pub limits: Limits,
    pub map: bool,
    pub tiles: bool,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Verdict {
    Solvable,
    Unsolvable,
    Undecided,
    Invalid,
}

impl Verdict {
    pub(super) fn word(self) -> &'static str {
        match self {
            Verdict::Solvable => "solvable",
            Verdict::Unsolvable => "unsolvable",
            Verdict::Undecided => "undecided",
            Verdict::Invalid => "invalid",
        }
    }
}

/// What was found out about one level.
#[derive(Debug)]
pub(super) struct Answer {
    pub verdict: Verdict,
    pub steps: Option<Figure>,
    pub pushes: Option<Figure>,
    /// The search's own report; none for a level that was not searched.
    pub report: Option<Report>,
    /// The settled tiles, row by row.
    pub tiles: Option<Vec<(Cell, TileClass)>>,
    pub map: Option<MapCounts>,
    /// Sentences on what is not well.
    pub messages: Vec<String>,
    /// Sentences for standard error.
    pub advice: Vec<String>,
    /// A watched route or par is broken.
    pub broken: bool,
    /// A watched par could be neither proved nor disproved.
    pub unsettled: bool,
}

impl Answer {
    pub(super) fn failed(verdict: Verdict, message: String) -> Answer {
        Answer {
            verdict,
            steps: None,
            pushes: None,
            report: None,
            tiles: None,
            map: None,
            messages: vec![message],
            advice: Vec::new(),
            broken: false,
            unsettled: false,
        }
    }

    /// The exit status that this level alone would give.
    pub(super) fn status(&self) -> u8 {
        match self.verdict {
            Verdict::Unsolvable | Verdict::Invalid => 1,
            _ if self.broken => 1,
            Verdict::Undecided => 3,
            Verdict::Solvable if self.unsettled => 3,
            Verdict::Solvable => 0,
        }
    }
}

pub(super) fn answer(mechanics: &Mechanics, level: &Level, questions: &Questions) -> Answer {
    let (invalid, advice): (Vec<Problem>, Vec<Problem>) = problems(mechanics, level)
        .into_iter()
        .partition(|problem| problem.severity == Severity::Invalid);
    let mut answer = match Rules::compile(mechanics, level) {
        _ if !invalid.is_empty() => Answer::failed(Verdict::Invalid, sentences(&invalid)),
        Err(problems) => Answer::failed(Verdict::Invalid, sentences(&problems)),
        Ok(rules) => searched(mechanics, level, &rules, questions),
    };
    answer.advice = advice.into_iter().map(|problem| problem.text).collect();
    answer
}

fn sentences(problems: &[Problem]) -> String {
    let texts: Vec<&str> = problems
        .iter()
        .map(|problem| problem.text.as_str())
        .collect();
    texts.join(" ")
}

fn searched(mechanics: &Mechanics, level: &Level, rules: &Rules, questions: &Questions) -> Answer {
    let limits = &questions.limits;
    let report = study::solve(rules, questions.prove, limits, &mut ());
    let verdict = match report.outcome {
        Outcome::Solvable => Verdict::Solvable,
        Outcome::Unsolvable => Verdict::Unsolvable,
        Outcome::Undecided(_) => Verdict::Undecided,
    };
    let mut answer = Answer {
        verdict,
        steps: report.steps,
        pushes: report.pushes,
        report: None,
        tiles: None,
        map: None,
        messages: unproved(&report, questions.prove),
        advice: Vec::new(),
        broken: false,
        unsettled: false,
    };
    watched::watch(level, rules, &report, questions, &mut answer);
    if questions.map {
        match study::map_counts(rules, limits) {
            Ok(counts) => answer.map = Some(counts),
            Err(reason) => answer
                .messages
                .push(format!("The fold map is not counted: {}.", words(reason))),
        }
    }
    if questions.tiles {
        tiles(mechanics, level, rules, &report, limits, &mut answer);
    }
    answer.report = Some(report);
    answer
}

fn words(reason: UndecidedReason) -> &'static str {
    match reason {
        UndecidedReason::Time => "the time was up",
        UndecidedReason::Memory => "the memory was used up",
        UndecidedReason::Positions => "the limit of positions was reached",
        UndecidedReason::Stopped => "it was stopped",
    }
}

/// Says why there is no verdict, or no proof of what was to be proved.
fn unproved(report: &Report, prove: Prove) -> Vec<String> {
    if let Outcome::Undecided(reason) = report.outcome {
        return vec![format!(
            "Undecided: {}. If there is a route, it has at least {} steps.",
            words(reason),
            report.steps_low
        )];
    }
    let open = |name: &str, figure: Option<Figure>, low: u32| {
        let high = figure.filter(|figure| !figure.proved)?.fewest;
        Some(format!(
            "The fewest {name} are between {low} and {high}: not settled within the limits."
        ))
    };
    let steps = matches!(prove, Prove::Steps | Prove::Both)
        .then(|| open("steps", report.steps, report.steps_low));
    let pushes = matches!(prove, Prove::Pushes | Prove::Both)
        .then(|| open("pushes", report.pushes, report.pushes_low));
    steps.into_iter().chain(pushes).flatten().collect()
}

/// The classes rest on the fewest steps, so these are proved first where the question was another.
fn tiles(
    mechanics: &Mechanics,
    level: &Level,
    rules: &Rules,
    report: &Report,
    limits: &Limits,
    answer: &mut Answer,
) {
    let other;
    let known = if report.steps.is_some_and(|steps| !steps.proved) {
        other = study::solve(rules, Prove::Steps, limits, &mut ());
        &other
    } else {
        report
    };
    let classes = study::tile_classes(mechanics, level, known, limits, &mut |_, _| ());
    let settled: Vec<(Cell, TileClass)> = level
        .size
        .cells()
        .zip(&classes)
        .filter_map(|(cell, class)| class.map(|class| (cell, class)))
        .collect();
    match level.size.area() - settled.len() {
        0 => {}
        left => answer
            .messages
            .push(format!("{left} tiles are not settled within the limits.")),
    }
    answer.tiles = Some(settled);
}
