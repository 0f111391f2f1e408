//! What the verdict card says, as plain text: how far the answer has come, what is certain of it and what is not.
//!
//! The newest thing that is about the level as it is now speaks; what is about an earlier one is only ever quoted as such.
//! In the order of what they are worth: the answer, a glimpse of the running search, the replay of the route from before
//! the edit, and last the answer from before the edit.

use super::marks::Mark;
use super::state::State;
use super::theme::{counted, grouped};
use crate::level::Route;
use crate::study::{Bounds, Figure, Outcome, Progress, Report, Stage, UndecidedReason};
use crate::worker::Answer;

/// The verdict card in words.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Headline {
    /// The sign.
    pub mark: Mark,
    /// The verdict in two or three words.
    pub title: String,
    /// The figure under it, such as "fewest steps: 37, proved".
    pub figure: String,
    /// Whether the figure is proved; then a bar stands under it.
    pub proved: bool,
    /// Whether a search is under way.
    pub running: bool,
    /// Whether the sign is about an earlier state of the level.
    pub stale: bool,
    /// More lines, the most important first.
    pub notes: Vec<String>,
    /// What it cost so far.
    pub cost: Option<String>,
    /// What is certain and what is not, in a sentence or two.
    pub meaning: &'static str,
}

impl Headline {
    fn new(mark: Mark, title: &str, figure: impl Into<String>, meaning: &'static str) -> Headline {
        Headline {
            mark,
            title: title.to_owned(),
            figure: figure.into(),
            proved: false,
            running: false,
            stale: false,
            notes: Vec::new(),
            cost: None,
            meaning,
        }
    }
}

const MEANS_SOLVABLE: &str = "Certain: a route was found, and the step engine played it to the end. \
    A figure is called proved only if no shorter route exists.";
const MEANS_UNSOLVABLE: &str = "Certain: every position that can be reached was looked at or cut off by a rule proved \
    safe, and none is finished.";
const MEANS_UNDECIDED: &str = "Nothing is certain yet, neither that it can be finished nor that it can't. \
    More time or memory may settle it.";
const MEANS_INVALID: &str =
    "The level asks no sensible question, so no search was begun. The problems below say why.";
const MEANS_REPLAYED: &str = "Certain: the route from before the edit was played again on the level as it is now, and \
    still finishes it. There may be a shorter one.";

/// The verdict card for the desk as it is.
pub fn headline(state: &State) -> Headline {
    let answers = &state.answers;
    if let Some(answer) = answers
        .answer
        .as_ref()
        .filter(|answer| state.is_fresh(answer.revision))
    {
        let mut headline = of_answer(&answer.value);
        if answers.remembered {
            headline.notes.push("remembered from before".to_owned());
        }
        return headline;
    }
    if let Some(failed) = answers
        .failed
        .as_ref()
        .filter(|failed| state.is_fresh(failed.revision))
    {
        let mut headline = Headline::new(
            Mark::Undecided,
            "The search failed",
            "no verdict",
            "A search job broke off by a fault of the program. The desk and your level are unharmed.",
        );
        headline.notes.push(failed.value.clone());
        return headline;
    }
    let mut headline = running(state);
    headline.running = true;
    headline
}

fn of_answer(answer: &Answer) -> Headline {
    match answer {
        Answer::Invalid(problems) => Headline::new(
            Mark::Invalid,
            "Invalid",
            counted(problems.len() as u64, "problem", "problems"),
            MEANS_INVALID,
        ),
        Answer::Studied(report) => of_report(report),
    }
}

fn of_report(report: &Report) -> Headline {
    let mut headline = match report.outcome {
        Outcome::Solvable => solvable(report),
        Outcome::Unsolvable => {
            let mut headline = Headline::new(
                Mark::Unsolvable,
                "Can't be finished",
                "proved: no route exists",
                MEANS_UNSOLVABLE,
            );
            headline.proved = true;
            headline
        }
        Outcome::Undecided(reason) => {
            let mut headline = Headline::new(
                Mark::Undecided,
                "Undecided",
                reason_text(reason),
                MEANS_UNDECIDED,
            );
            if report.steps_low > 0 {
                let least = counted(u64::from(report.steps_low), "step", "steps");
                headline.notes.push(format!("at least {least}, if at all"));
            }
            headline
        }
    };
    headline.cost = Some(cost(report.positions, report.folds, report.seconds));
    headline
}

fn solvable(report: &Report) -> Headline {
    let (figure, proved) = match report.steps {
        Some(steps) => figure_text("steps", steps, report.steps_low),
        None => ("a route is known".to_owned(), false),
    };
    let mut headline = Headline::new(Mark::Solvable, "Can be finished", figure, MEANS_SOLVABLE);
    headline.proved = proved;
    if let Some(pushes) = report.pushes {
        let drags = matches!(report.route, Some(Route::Drag(_)));
        let (one, many) = if drags {
            ("move", "moves")
        } else {
            ("push", "pushes")
        };
        let fewest = u64::from(pushes.fewest);
        let note = if pushes.proved {
            format!("fewest {many}: {}, proved", grouped(fewest))
        } else {
            format!("a route with {} is known", counted(fewest, one, many))
        };
        headline.notes.push(note);
    }
    headline
}

fn figure_text(measure: &str, figure: Figure, low: u32) -> (String, bool) {
    let fewest = grouped(u64::from(figure.fewest));
    if figure.proved {
        (format!("fewest {measure}: {fewest}, proved"), true)
    } else {
        let bounds = Bounds {
            low,
            high: Some(figure.fewest),
        };
        (bounds_text(measure, bounds), false)
    }
}

/// What is known of a measure that is not settled.
pub fn bounds_text(measure: &str, bounds: Bounds) -> String {
    let low = grouped(u64::from(bounds.low));
    match bounds.high {
        Some(high) if bounds.low == 0 => format!("at most {} {measure}", grouped(u64::from(high))),
        Some(high) if bounds.low >= high => format!("{} {measure}", grouped(u64::from(high))),
        Some(high) => format!("between {low} and {} {measure}", grouped(u64::from(high))),
        None if bounds.low == 0 => String::new(),
        None => format!("at least {low} {measure}, if at all"),
    }
}

fn reason_text(reason: UndecidedReason) -> &'static str {
    match reason {
        UndecidedReason::Time => "the time was up",
        UndecidedReason::Memory => "the memory was used up",
        UndecidedReason::Positions => "the limit of positions was reached",
        UndecidedReason::Stopped => "the search was stopped",
    }
}

fn running(state: &State) -> Headline {
    let answers = &state.answers;
    let replayed = answers
        .still_works
        .as_ref()
        .filter(|replayed| state.is_fresh(replayed.revision))
        .map(|replayed| replayed.value);
    let progress = answers
        .progress
        .as_ref()
        .filter(|progress| state.is_fresh(progress.revision))
        .map(|progress| &progress.value);
    let mut headline = match (progress, replayed) {
        (Some(progress), _) if progress.stage != Stage::Looking => found(progress),
        (_, Some(true)) => still_works(state, progress),
        _ => looking(progress),
    };
    if let Some(progress) = progress {
        headline.cost = Some(cost(progress.positions, progress.folds, progress.seconds));
    }
    if replayed == Some(false) {
        headline
            .notes
            .push("the last route no longer works".to_owned());
    }
    if headline.mark == Mark::Looking
        && let Some(answer) = &answers.answer
    {
        let before = of_answer(&answer.value);
        headline.mark = before.mark;
        headline.stale = true;
        headline.notes.push(format!(
            "before the edit: {}, {}",
            before.mark.word(),
            before.figure
        ));
    }
    headline
}

fn found(progress: &Progress) -> Headline {
    let mut headline = Headline::new(
        Mark::Solvable,
        "Can be finished",
        bounds_text("steps", progress.steps),
        MEANS_SOLVABLE,
    );
    headline.notes.push(match progress.stage {
        Stage::Proved => "proved; writing the answer".to_owned(),
        _ => "route found; proving the fewest".to_owned(),
    });
    headline
}

fn still_works(state: &State, progress: Option<&Progress>) -> Headline {
    let length = state
        .playback
        .as_ref()
        .filter(|playback| state.is_fresh(playback.revision))
        .map(|playback| playback.len() as u32);
    let bounds = Bounds {
        low: progress.map_or(0, |progress| progress.steps.low),
        high: length,
    };
    let mut headline = Headline::new(
        Mark::Solvable,
        "Can be finished",
        bounds_text("steps", bounds),
        MEANS_REPLAYED,
    );
    headline.notes.push("the last route still works".to_owned());
    headline
}

fn looking(progress: Option<&Progress>) -> Headline {
    let bounds = progress.map(|progress| progress.steps).unwrap_or_default();
    let figure = match bounds_text("steps", bounds) {
        text if text.is_empty() => "no route yet".to_owned(),
        text => text,
    };
    Headline::new(Mark::Looking, "Still looking", figure, MEANS_UNDECIDED)
}

/// "212 480 positions in 3 911 folds, 14 ms".
pub fn cost(positions: u64, folds: u64, seconds: f64) -> String {
    format!(
        "{} in {}, {}",
        counted(positions, "position", "positions"),
        counted(folds, "fold", "folds"),
        duration(seconds)
    )
}

/// A time as people say it: "under 1 ms", "14 ms", "3.2 s", "2 min 5 s".
pub fn duration(seconds: f64) -> String {
    let millis = seconds * 1_000.0;
    if millis < 1.0 {
        "under 1 ms".to_owned()
    } else if millis < 999.5 {
        format!("{millis:.0} ms")
    } else if seconds < 59.95 {
        format!("{seconds:.1} s")
    } else {
        let whole = seconds.round() as u64;
        format!("{} min {} s", grouped(whole / 60), whole % 60)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_are_said_in_the_unit_that_fits() {
        let check = |seconds: f64, expected: &str| assert_eq!(duration(seconds), expected);
        check(0.0, "under 1 ms");
        check(0.014, "14 ms");
        check(0.9994, "999 ms");
        check(0.9996, "1.0 s");
        check(3.21, "3.2 s");
        check(59.99, "1 min 0 s");
        check(125.2, "2 min 5 s");
    }

    #[test]
    fn bounds_say_only_what_is_known() {
        let check = |low: u32, high: Option<u32>, expected: &str| {
            assert_eq!(bounds_text("steps", Bounds { low, high }), expected);
        };
        check(31, Some(37), "between 31 and 37 steps");
        check(0, Some(37), "at most 37 steps");
        check(37, Some(37), "37 steps");
        check(31, None, "at least 31 steps, if at all");
        check(0, None, "");
    }
}
