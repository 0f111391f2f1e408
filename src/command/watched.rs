//! The watch over what the designer approved: the intended route must finish the level, par must be what is proved.

use super::answer::{Answer, Questions, Verdict};
use crate::level::{Level, Par, Route};
use crate::rules::Rules;
use crate::study::{Figure, Prove, Report, solve};

pub(super) fn watch(
    level: &Level,
    rules: &Rules,
    report: &Report,
    questions: &Questions,
    answer: &mut Answer,
) {
    if let Some(fault) = level
        .intended
        .as_ref()
        .and_then(|route| route_fault(rules, route))
    {
        answer.broken = true;
        answer.messages.push(fault);
    }
    if let Some(par) = level.par {
        watch_par(par, rules, report, questions, answer);
    }
}

/// Why a route does not finish a level, if so.
fn route_fault(rules: &Rules, route: &Route) -> Option<String> {
    let played = rules.play(route);
    if played.len() < route.len() {
        return Some(format!(
            "The intended route is broken: its step {} of {} changes nothing.",
            played.len() + 1,
            route.len()
        ));
    }
    let end = played
        .last()
        .map_or_else(|| rules.start(), |last| last.position.clone());
    (!rules.finished(&end)).then(|| {
        format!(
            "The intended route is broken: after its {} steps the level is not finished.",
            route.len()
        )
    })
}

fn watch_par(par: Par, rules: &Rules, report: &Report, questions: &Questions, answer: &mut Answer) {
    let measures = [
        ("steps", par.steps, Prove::Steps, report.steps_low),
        ("pushes", par.pushes, Prove::Pushes, report.pushes_low),
    ];
    for (name, approved, prove, low) in measures {
        let Some(approved) = approved else { continue };
        match answer.verdict {
            Verdict::Solvable => {}
            Verdict::Undecided => {
                answer.unsettled = true;
                continue;
            }
            Verdict::Unsolvable | Verdict::Invalid => {
                answer.broken = true;
                answer.messages.push(format!(
                    "The par of {approved} {name} is broken: the level can't be finished."
                ));
                continue;
            }
        }
        let (figure, low) = settle(name, prove, low, rules, questions, answer);
        match judge(approved, figure, low) {
            Judged::Holds => {}
            Judged::Broken(known) => {
                answer.broken = true;
                answer
                    .messages
                    .push(format!("The par of {approved} {name} is broken: {known}."));
            }
            Judged::Open if questions.prove == Prove::None => {}
            Judged::Open => {
                answer.unsettled = true;
                answer.messages.push(format!(
                    "The par of {approved} {name} is not proved within the limits."
                ));
            }
        }
    }
}

/// The figure of a measure, proved where the question left it open, and its lower bound.
fn settle(
    name: &str,
    prove: Prove,
    low: u32,
    rules: &Rules,
    questions: &Questions,
    answer: &mut Answer,
) -> (Option<Figure>, u32) {
    let known = if name == "steps" {
        &mut answer.steps
    } else {
        &mut answer.pushes
    };
    let asked = questions.prove == prove || matches!(questions.prove, Prove::Both | Prove::None);
    if asked || known.is_some_and(|figure| figure.proved) {
        return (*known, low);
    }
    let other = solve(rules, prove, &questions.limits, &mut ());
    let (figure, low) = if name == "steps" {
        (other.steps, other.steps_low)
    } else {
        (other.pushes, other.pushes_low)
    };
    let cheaper = |new: Figure, old: Option<Figure>| {
        old.is_none_or(|old| new.fewest < old.fewest || new.proved)
    };
    *known = figure.filter(|&figure| cheaper(figure, *known)).or(*known);
    (*known, low)
}

enum Judged {
    Holds,
    Broken(String),
    Open,
}

fn judge(approved: u32, figure: Option<Figure>, low: u32) -> Judged {
    match figure {
        Some(Figure {
            fewest,
            proved: true,
        }) if fewest == approved => Judged::Holds,
        Some(Figure {
            fewest,
            proved: true,
        }) => Judged::Broken(format!("the fewest are {fewest}")),
        Some(Figure { fewest, .. }) if fewest < approved => {
            Judged::Broken(format!("a route with {fewest} is known"))
        }
        _ if low > approved => Judged::Broken(format!("at least {low} are needed")),
        _ => Judged::Open,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(approved: u32, fewest: u32, proved: bool, low: u32, expected: &str) {
        let word = match judge(approved, Some(Figure { fewest, proved }), low) {
            Judged::Holds => "holds".to_owned(),
            Judged::Broken(known) => known,
            Judged::Open => "open".to_owned(),
        };
        assert_eq!(word, expected);
    }

    #[test]
    fn a_par_holds_only_if_it_is_proved() {
        check(7, 7, true, 7, "holds");
        check(7, 7, false, 6, "open");
        check(7, 9, false, 6, "open");
        check(7, 6, true, 6, "the fewest are 6");
        check(7, 8, true, 8, "the fewest are 8");
        check(7, 6, false, 2, "a route with 6 is known");
        check(7, 9, false, 8, "at least 8 are needed");
    }
}
