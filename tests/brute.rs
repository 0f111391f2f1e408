//! Verdict and par, by steps and by pushes, against plain exploration of whole spaces.
//!
//! The other side is the plain interpreter with a breadth-first search; it shares nothing with the engine, the bounds or
//! the folding. `tests/brute_maps.rs` does the same for fold maps and tiles.

mod support;

use foldwright::level::Route;
use foldwright::study::{Figure, Outcome, Prove, Report, solve};
use support::case::{Case, cases, limits};
use support::random::{MINUTE, MIXES, TINY, mix};

/// Levels of each mix whose verdict and par are compared: minute ones, and some that are larger.
const MINUTE_LEVELS: usize = 5_000;
const TINY_LEVELS: usize = 150;

/// A case whose answers are checked.
struct Asked(Case);

impl std::ops::Deref for Asked {
    type Target = Case;
    fn deref(&self) -> &Case {
        &self.0
    }
}

impl Asked {
    /// Asks for both measures, and by turns for one, the other or none.
    fn check_verdict(&self, turn: usize) {
        let (steps, pushes) = (self.space.par_steps(), self.space.par_pushes());
        let by_turns = [Prove::Steps, Prove::Pushes, Prove::None];
        for prove in [Prove::Both, by_turns[turn % 3]] {
            let report = solve(&self.rules, prove, &limits(), &mut ());
            let text = || format!("{prove:?}: {report:?}\n{}", self.text());
            let outcome = match steps {
                Some(_) => Outcome::Solvable,
                None => Outcome::Unsolvable,
            };
            assert_eq!(report.outcome, outcome, "verdict, {}", text());
            let steps_asked = matches!(prove, Prove::Steps | Prove::Both);
            check_figure(report.steps, steps, steps_asked, "steps", &text);
            let pushes_asked = matches!(prove, Prove::Pushes | Prove::Both);
            check_figure(report.pushes, pushes, pushes_asked, "pushes", &text);
            self.check_route(&report, prove, &text);
            if report.closed {
                self.check_touched(&report, &text);
            }
        }
    }

    /// The route finishes, and costs the figure of the measure that was asked for.
    fn check_route(&self, report: &Report, prove: Prove, text: &dyn Fn() -> String) {
        assert_eq!(report.route.is_some(), report.outcome == Outcome::Solvable);
        let Some(route) = &report.route else { return };
        let played = self.rules.play(route);
        assert_eq!(played.len(), route.len(), "route, {}", text());
        let end = played
            .last()
            .map_or(self.rules.start(), |last| last.position.clone());
        assert!(self.rules.finished(&end), "route, {}", text());
        let spans: u32 = report.spans.iter().sum();
        assert_eq!(spans as usize, route.len(), "spans, {}", text());
        let fewest = |figure: Option<Figure>| figure.map(|figure| figure.fewest);
        match prove {
            Prove::Steps | Prove::Both => {
                let length = Some(route.len() as u32);
                assert_eq!(fewest(report.steps), length, "length, {}", text());
            }
            Prove::Pushes => {
                let cost = match route {
                    Route::Steer(_) => played.iter().filter(|step| step.pushed).count(),
                    Route::Drag(steps) => steps.chunk_by(|a, b| a.block == b.block).count(),
                };
                assert_eq!(fewest(report.pushes), Some(cost as u32), "cost, {}", text());
            }
            Prove::None => {}
        }
    }

    fn check_touched(&self, report: &Report, text: &dyn Fn() -> String) {
        for cell in self.level.size.cells() {
            let touched = report.touched[self.level.size.index(cell)];
            let expected = self.space.touched.contains(&cell);
            assert_eq!(touched, expected, "touched {cell:?}, {}", text());
        }
    }
}

/// A figure never undercuts the truth; proved ones, and those asked for, are the truth.
#[track_caller]
fn check_figure(
    figure: Option<Figure>,
    truth: Option<u32>,
    asked: bool,
    what: &str,
    text: &dyn Fn() -> String,
) {
    assert_eq!(figure.is_some(), truth.is_some(), "{what}, {}", text());
    if let (Some(figure), Some(truth)) = (figure, truth) {
        assert!(figure.fewest >= truth, "{what} below {truth}, {}", text());
        if asked {
            assert!(figure.proved, "{what} not proved, {}", text());
        }
        if figure.proved {
            assert_eq!(figure.fewest, truth, "{what}, {}", text());
        }
    }
}

#[track_caller]
fn check_mix(name: &str) {
    let mix = mix(name);
    let mut solvable = 0;
    let mut compared = 0;
    let minute = cases(mix, MINUTE, 0, MINUTE_LEVELS, 250);
    let tiny = cases(mix, TINY, 1_000_000, TINY_LEVELS, 2_500);
    for case in minute.chain(tiny) {
        let case = Asked(case);
        case.check_verdict(compared);
        compared += 1;
        solvable += usize::from(case.space.par_steps().is_some_and(|par| par > 0));
    }
    assert_eq!(compared, MINUTE_LEVELS + TINY_LEVELS, "{name}");
    assert!(solvable > compared / 30, "{name}: {solvable} solvable");
}

macro_rules! mixes {
    ($($test:ident $name:literal;)*) => {
        $(
            #[test]
            fn $test() {
                check_mix($name);
            }
        )*

        #[test]
        fn every_mix_is_asked_about() {
            let named = [$($name),*];
            assert!(MIXES.iter().all(|mix| named.contains(&mix.name)));
        }
    };
}

mixes! {
    verdict_and_par_with_pushing_only "push-only";
    verdict_and_par_with_rows "rows";
    verdict_and_par_with_slides "slides";
    verdict_and_par_with_gates "gates";
    verdict_and_par_with_sinks "sinks";
    verdict_and_par_with_locks_and_gems "locks and gems";
    verdict_and_par_with_frail_ground "frail";
    verdict_and_par_with_warps "warps";
    verdict_and_par_with_tow_and_glide "tow and glide";
    verdict_and_par_with_two_walkers "two walkers";
    verdict_and_par_with_everything "everything";
    verdict_and_par_with_dragged_blocks "drag";
}
