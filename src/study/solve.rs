//! The verdict: a first route, then the proof that none is cheaper, or that there is none.

use super::bounds::Bounds as Ahead;
use super::meter::Meter;
use super::moves::MoveSpace;
use super::space::LevelSpace;
use super::trail::{Replayed, replay};
use super::{
    Bounds, Figure, Limits, Outcome, Progress, Prove, Report, Stage, UndecidedReason, Watch,
};
use crate::level::Control;
use crate::rules::Rules;
use crate::search::{Advance, Aim, Engine, Folded, Full, StateSpace};

/// By which measure an engine counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Measure {
    Steps,
    Pushes,
}

/// One solving in progress: what is known, what was spent, who looks on.
struct Run<'a> {
    rules: &'a Rules,
    limits: &'a Limits,
    meter: Meter<'a>,
    watch: &'a mut dyn Watch,
    prefer: Measure,
    best_steps: Option<u32>,
    best_pushes: Option<u32>,
    route: Option<Replayed>,
    steps_low: u32,
    pushes_low: u32,
    proved: bool,
    unsolvable: bool,
    /// A route did not replay: a fault of ours. Nothing certain is said any more.
    at_fault: bool,
    /// Positions, folds and bytes of graphs that were given up or are not being advanced.
    aside: (u64, u64, u64),
    /// The same of the graph that is being advanced, when last looked at.
    seen: (u64, u64, u64),
    bytes_peak: u64,
}

pub(super) fn solve(rules: &Rules, prove: Prove, limits: &Limits, watch: &mut dyn Watch) -> Report {
    let mut run = Run {
        rules,
        limits,
        meter: Meter::new(limits),
        watch,
        prefer: match prove {
            Prove::Pushes => Measure::Pushes,
            _ => Measure::Steps,
        },
        best_steps: None,
        best_pushes: None,
        route: None,
        steps_low: 0,
        pushes_low: 0,
        proved: false,
        unsolvable: false,
        at_fault: false,
        aside: (0, 0, 0),
        seen: (0, 0, 0),
        bytes_peak: 0,
    };
    let space = LevelSpace::new(rules, Ahead::new(rules));
    let halt = limits.halt.clone();
    let mut graph = Folded::new(space, limits.bytes, true).stopped_by(move || halt.fired());
    let stopped = run
        .through(&mut graph, prove)
        .err()
        .map(|reason| match reason {
            // A graph that was stopped gives no more room, as if memory had run out.
            UndecidedReason::Memory if limits.halt.fired() => UndecidedReason::Stopped,
            reason => reason,
        });
    run.proved = stopped.is_none();
    run.glimpse();
    run.report(&graph, stopped)
}

impl Run<'_> {
    /// All stages. Returns early with the limit that was met.
    fn through(
        &mut self,
        graph: &mut Folded<LevelSpace>,
        prove: Prove,
    ) -> Result<(), UndecidedReason> {
        self.check(graph)?;
        let (roam, place) = graph.start().map_err(|Full| UndecidedReason::Memory)?;
        if roam == crate::search::NO_ROAM {
            self.unsolvable = true;
            return Ok(());
        }
        if graph.is_finished(roam) {
            self.arrive(&[]);
            return Ok(());
        }
        let Some(steps_low) = graph.entry_steps_ahead(roam, place) else {
            self.unsolvable = true;
            return Ok(());
        };
        self.steps_low = steps_low;
        self.pushes_low = graph.pushes_ahead(roam);
        let drag = self.rules.control() == Control::Drag;
        let first = match prove {
            Prove::Steps | Prove::Both => Some(Measure::Steps),
            Prove::Pushes if !drag => Some(Measure::Pushes),
            _ => None,
        };
        self.find_first(graph, first)?;
        if self.unsolvable || self.settled(prove) {
            return Ok(());
        }
        if drag && matches!(prove, Prove::Pushes | Prove::Both) {
            self.prove_moves(graph)?;
        } else if prove == Prove::Both {
            let mut engine = engine(Aim::Pushes, graph)?;
            self.prove(graph, &mut engine, Measure::Pushes)?;
        }
        Ok(())
    }

    /// Advances the search for any route and the proof in turns, until the first has a route or there is none; then the
    /// proof alone.
    fn find_first(
        &mut self,
        graph: &mut Folded<LevelSpace>,
        proof: Option<Measure>,
    ) -> Result<(), UndecidedReason> {
        let mut scout = engine(Aim::First, graph)?;
        let mut prover = match proof {
            Some(measure) => Some((engine(aim(measure), graph)?, measure)),
            None => None,
        };
        while self.route.is_none() && !self.at_fault {
            self.check(graph)?;
            match advance(&mut scout, graph, u32::MAX)? {
                Advance::Going => {}
                Advance::Better => self.arrive(&scout.trail()),
                Advance::Closed => {
                    self.unsolvable = true;
                    return Ok(());
                }
            }
            if let Some((engine, measure)) = &mut prover
                && self.route.is_none()
                && self.advance(graph, engine, *measure)?
            {
                self.unsolvable = self.route.is_none() && !self.at_fault;
                return Ok(());
            }
        }
        drop(scout);
        match &mut prover {
            Some((engine, measure)) => self.prove(graph, engine, *measure),
            None => Ok(()),
        }
    }

    /// Advances a proof to its end.
    fn prove<S: StateSpace>(
        &mut self,
        graph: &mut Folded<S>,
        engine: &mut Engine,
        measure: Measure,
    ) -> Result<(), UndecidedReason> {
        while !self.advance(graph, engine, measure)? {
            self.check(graph)?;
        }
        Ok(())
    }

    /// One node of a proof. Returns whether it is complete.
    fn advance<S: StateSpace>(
        &mut self,
        graph: &mut Folded<S>,
        engine: &mut Engine,
        measure: Measure,
    ) -> Result<bool, UndecidedReason> {
        let known = self.best(measure);
        let result = advance(engine, graph, known.unwrap_or(u32::MAX))?;
        self.raise(measure, engine.low());
        match result {
            Advance::Going => Ok(false),
            Advance::Better => {
                self.arrive(&engine.trail());
                Ok(self.at_fault)
            }
            Advance::Closed => {
                if let Some(best) = self.best(measure) {
                    self.raise(measure, best);
                }
                Ok(true)
            }
        }
    }

    /// Proves the fewest moves on a graph of its own, with what bytes are left.
    fn prove_moves(&mut self, base: &mut Folded<LevelSpace>) -> Result<(), UndecidedReason> {
        let spare = self.limits.bytes.saturating_sub(base.budget.used());
        self.bytes_peak = base.budget.peak();
        self.aside = (
            base.positions(),
            base.roam_count() as u64,
            base.budget.used(),
        );
        let space = MoveSpace::new(self.rules, Ahead::new(self.rules));
        let halt = self.limits.halt.clone();
        let mut graph = Folded::new(space, spare, true).stopped_by(move || halt.fired());
        let mut proof = engine(Aim::Pushes, &mut graph)?;
        let result = self.prove(&mut graph, &mut proof, Measure::Pushes);
        self.bytes_peak = self.bytes_peak.max(self.aside.2 + graph.budget.peak());
        self.aside = (graph.positions(), graph.roam_count() as u64, 0);
        result
    }

    fn best(&self, measure: Measure) -> Option<u32> {
        match measure {
            Measure::Steps => self.best_steps,
            Measure::Pushes => self.best_pushes,
        }
    }

    fn raise(&mut self, measure: Measure, low: u32) {
        let best = self.best(measure).unwrap_or(u32::MAX);
        let bound = match measure {
            Measure::Steps => &mut self.steps_low,
            Measure::Pushes => &mut self.pushes_low,
        };
        *bound = (*bound).max(low.min(best));
    }

    /// Whether what was asked for is known already.
    fn settled(&self, prove: Prove) -> bool {
        let steps = self.best_steps == Some(self.steps_low);
        let pushes = self.best_pushes == Some(self.pushes_low);
        match prove {
            Prove::Steps => steps,
            Prove::Pushes => pushes,
            Prove::Both => steps && pushes,
            Prove::None => true,
        }
    }

    /// A route was found: it counts only when it replays.
    fn arrive(&mut self, trail: &[u32]) {
        let Some(replayed) = replay(self.rules, trail) else {
            debug_assert!(false, "a route that was found does not replay");
            self.at_fault = true;
            return;
        };
        let least = |known: Option<u32>, new: u32| Some(known.map_or(new, |known| known.min(new)));
        self.best_steps = least(self.best_steps, replayed.steps);
        self.best_pushes = least(self.best_pushes, replayed.pushes);
        let rank = |route: &Replayed| match self.prefer {
            Measure::Steps => (route.steps, route.pushes),
            Measure::Pushes => (route.pushes, route.steps),
        };
        if self
            .route
            .as_ref()
            .is_none_or(|known| rank(&replayed) < rank(known))
        {
            self.watch.route(&replayed.route);
            self.route = Some(replayed);
            self.glimpse();
        }
    }

    fn check<S: StateSpace>(&mut self, graph: &Folded<S>) -> Result<(), UndecidedReason> {
        self.seen = (
            graph.positions(),
            graph.roam_count() as u64,
            graph.budget.used(),
        );
        if self.meter.check(self.seen.0 + self.aside.0)? {
            self.glimpse();
        }
        Ok(())
    }

    fn glimpse(&mut self) {
        let (positions, folds, bytes) = self.seen;
        let stage = match (&self.route, self.proved) {
            (_, true) => Stage::Proved,
            (None, false) => Stage::Looking,
            (Some(_), false) => Stage::RouteFound,
        };
        let progress = Progress {
            stage,
            steps: Bounds {
                low: self.steps_low,
                high: self.best_steps,
            },
            pushes: Bounds {
                low: self.pushes_low,
                high: self.best_pushes,
            },
            positions: positions + self.aside.0,
            folds: folds + self.aside.1,
            bytes: bytes + self.aside.2,
            seconds: self.meter.seconds(),
        };
        self.watch.progress(&progress);
    }

    fn report(self, graph: &Folded<LevelSpace>, stopped: Option<UndecidedReason>) -> Report {
        let figure = |best: Option<u32>, low: u32| {
            best.map(|fewest| Figure {
                fewest,
                proved: low >= fewest,
            })
        };
        let outcome = match (&self.route, stopped) {
            (Some(_), _) => Outcome::Solvable,
            (None, Some(reason)) => Outcome::Undecided(reason),
            (None, None) if self.unsolvable && !self.at_fault => Outcome::Unsolvable,
            (None, None) => Outcome::Undecided(UndecidedReason::Stopped),
        };
        let (route, spans) = match self.route {
            Some(replayed) => (Some(replayed.route), replayed.spans),
            None => (None, Vec::new()),
        };
        Report {
            outcome,
            steps: figure(self.best_steps, self.steps_low),
            pushes: figure(self.best_pushes, self.pushes_low),
            steps_low: self.steps_low,
            pushes_low: self.pushes_low,
            spans,
            route,
            positions: graph.positions() + self.aside.0,
            folds: graph.roam_count() as u64 + self.aside.1,
            bytes: graph.budget.peak().max(self.bytes_peak),
            seconds: self.meter.seconds(),
            heat: graph.space.heat.clone(),
            touched: graph.space.touched(),
            closed: graph.is_closed(),
        }
    }
}

fn aim(measure: Measure) -> Aim {
    match measure {
        Measure::Steps => Aim::Steps,
        Measure::Pushes => Aim::Pushes,
    }
}

fn engine<S: StateSpace>(aim: Aim, graph: &mut Folded<S>) -> Result<Engine, UndecidedReason> {
    Engine::new(aim, graph).map_err(|Full| UndecidedReason::Memory)
}

fn advance<S: StateSpace>(
    engine: &mut Engine,
    graph: &mut Folded<S>,
    upper: u32,
) -> Result<Advance, UndecidedReason> {
    engine
        .advance(graph, upper)
        .map_err(|Full| UndecidedReason::Memory)
}
