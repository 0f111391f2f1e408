//! Which search runs when, and the report that comes of it.
//!
//! A first route and the proof share one budget. The search for any route and the one for the proof take turns, in slices
//! that grow, until one of them has the verdict: the first is quick where the bound leads well, the second where the first
//! loses itself. Then the proof alone goes on, with the cost of the route as its ceiling. Slices are counted in nodes, so the order
//! is the same on every machine.

use super::board::Board;
use super::heat::Heat;
use super::matching::{Demand, Matching};
use super::meter::Meter;
use super::prover::Prover;
use super::pushes::{Order, PushSearch, Slice};
use super::route::{steps_of, walked};

use crate::level::{Dir, Route};
use crate::rules::{Rules, Step};
use crate::study::{
    Bounds, Figure, Limits, Outcome, Progress, Prove, Report, Stage, UndecidedReason, Watch,
};

/// Nodes of the first slice.
const FIRST_SLICE: u32 = 512;
/// Nodes between two looks at whether progress is due, once the engines no longer take turns.
const LONG_SLICE: u32 = 1 << 14;
const SECONDS_BETWEEN_GLIMPSES: f64 = 0.005;

/// A route and what it costs.
struct Found {
    steps: Vec<Dir>,
    pushes: u32,
    spans: Vec<u32>,
}

struct Study<'a, const N: usize> {
    board: &'a Board<N>,
    rules: Option<&'a Rules>,
    meter: Meter<'a>,
    watch: &'a mut dyn Watch,
    prove: Prove,
    heat: Heat<N>,
    folds: u64,
    best: Option<Found>,
    fewest_pushes: Option<u32>,
    steps_low: u32,
    pushes_low: u32,
    told: f64,
    closed: bool,
}

/// What ends a study before its proof.
enum Stop {
    Unsolvable { cut: bool },
    Limit(UndecidedReason),
}

impl From<UndecidedReason> for Stop {
    fn from(reason: UndecidedReason) -> Stop {
        Stop::Limit(reason)
    }
}

/// Answers whether a level can be finished and at what least cost. Routes are replayed with `rules`, if given.
pub(super) fn solve<const N: usize>(
    board: &Board<N>,
    rules: Option<&Rules>,
    prove: Prove,
    limits: &Limits,
    watch: &mut dyn Watch,
) -> Report {
    let mut study = Study {
        board,
        rules,
        meter: Meter::new(limits),
        watch,
        prove,
        heat: Heat::default(),
        folds: 0,
        best: None,
        fewest_pushes: None,
        steps_low: 0,
        pushes_low: 0,
        told: 0.0,
        closed: false,
    };
    let end = study.run();
    study.report(end.err())
}

impl<const N: usize> Study<'_, N> {
    fn run(&mut self) -> Result<(), Stop> {
        let board = self.board;
        self.meter.spend(0, || 0)?;
        if board.cargo_done(&board.groups, &board.groups.start)
            && (!board.walkers_out || board.exits.has(board.walker))
        {
            self.note_start();
            self.closed = true;
            self.accept(Vec::new());
            return Ok(());
        }
        let Some((demand, least)) = self.least_at_start() else {
            self.note_start();
            return Err(Stop::Unsolvable { cut: true });
        };
        self.pushes_low = least;
        self.steps_low = self.pushes_low.max(1);
        match self.prove {
            Prove::None => self.any_route(&demand),
            Prove::Steps => self.fewest_steps(&demand),
            Prove::Pushes => self.fewest_pushes(&demand),
            Prove::Both => {
                self.fewest_pushes(&demand)?;
                self.fewest_steps(&demand)
            }
        }
    }

    /// What has to be matched and the pushes needed at least; none if no number suffices.
    fn least_at_start(&self) -> Option<(Demand, u32)> {
        let board = self.board;
        let demand = Demand::of(board)?;
        let start = &board.groups.start;
        let least = Matching::default().solve(board, &demand, start, board.walker)?;
        Some((demand, least))
    }

    /// Counts the roam of the start, where that is all that is looked at.
    fn note_start(&mut self) {
        let board = self.board;
        let all = Board::all(&board.groups.start);
        let done = board.cargo_done(&board.groups, &board.groups.start);
        let roam = board.roam(all, done, board.walker);
        self.meter.positions += u64::from(roam.cells.count());
        self.folds += 1;
        self.heat.add(all, roam.cells);
    }

    fn any_route(&mut self, demand: &Demand) -> Result<(), Stop> {
        let mut any = PushSearch::new(self.board, demand, Order::AnyRoute, &mut self.meter);
        loop {
            let slice = any.advance(&mut self.meter, LONG_SLICE);
            if self.settle_any(&any, slice)? {
                return Ok(());
            }
            self.glimpse(any.bytes());
        }
    }

    /// Takes note of how a slice of a search for any route ended. Whether a route was found.
    fn settle_any(
        &mut self,
        any: &PushSearch<'_, N>,
        slice: Result<Slice, UndecidedReason>,
    ) -> Result<bool, Stop> {
        match slice {
            Ok(Slice::More) => Ok(false),
            Ok(Slice::Finished(node)) => {
                self.retire_pushes(any);
                self.take_pushes(any, node);
                Ok(true)
            }
            Ok(Slice::Exhausted) => {
                self.retire_pushes(any);
                Err(Stop::Unsolvable { cut: any.cut })
            }
            Err(reason) => {
                self.retire_pushes(any);
                Err(Stop::Limit(reason))
            }
        }
    }

    fn fewest_pushes(&mut self, demand: &Demand) -> Result<(), Stop> {
        let mut fewest = PushSearch::new(self.board, demand, Order::Fewest, &mut self.meter);
        let mut any: Option<PushSearch<'_, N>> = None;
        let mut size = FIRST_SLICE;
        loop {
            self.meter.bytes_aside = any.as_ref().map_or(0, PushSearch::bytes);
            let slice = fewest.advance(&mut self.meter, size);
            self.pushes_low = self.pushes_low.max(fewest.low);
            self.steps_low = self.steps_low.max(self.pushes_low);
            match slice {
                Ok(Slice::More) => {}
                ended => {
                    if let Some(any) = &any {
                        self.retire_pushes(any);
                    }
                    self.meter.bytes_aside = 0;
                    return self.settle_fewest(&fewest, ended);
                }
            }
            if self.best.is_none() {
                let any = any.get_or_insert_with(|| {
                    PushSearch::new(self.board, demand, Order::AnyRoute, &mut self.meter)
                });
                self.meter.bytes_aside = fewest.bytes();
                let slice = any.advance(&mut self.meter, size);
                let found = self.settle_any(any, slice);
                if !matches!(found, Ok(false)) {
                    self.meter.bytes_aside = 0;
                }
                if found.inspect_err(|_| self.retire_pushes(&fewest))? {
                    fewest.ceiling = self.fewest_pushes.unwrap_or(u32::MAX);
                }
            }
            if self.best.is_some() {
                any = None;
            }
            size = (size * 2).min(LONG_SLICE);
            self.glimpse(fewest.bytes());
        }
    }

    fn settle_fewest(
        &mut self,
        fewest: &PushSearch<'_, N>,
        ended: Result<Slice, UndecidedReason>,
    ) -> Result<(), Stop> {
        self.retire_pushes(fewest);
        match ended {
            Ok(Slice::Finished(node)) => {
                self.take_pushes(fewest, node);
                self.pushes_low = self.pushes_low.max(fewest.cost(node));
                Ok(())
            }
            // Nothing below the ceiling: the route that set it is a cheapest.
            Ok(_) if self.best.is_some() => Ok(()),
            Ok(_) => Err(Stop::Unsolvable { cut: fewest.cut }),
            Err(reason) => Err(Stop::Limit(reason)),
        }
    }

    fn fewest_steps(&mut self, demand: &Demand) -> Result<(), Stop> {
        let mut any = self
            .best
            .is_none()
            .then(|| PushSearch::new(self.board, demand, Order::AnyRoute, &mut self.meter));
        let mut waves = Prover::new(self.board, demand);
        let mut size = FIRST_SLICE;
        loop {
            if let Some(search) = &mut any {
                self.meter.bytes_aside = waves.bytes();
                let slice = search.advance(&mut self.meter, size);
                match self.settle_any(search, slice) {
                    Ok(true) => any = None,
                    Ok(false) => {}
                    Err(stop) => {
                        self.retire_waves(&waves);
                        return Err(stop);
                    }
                }
            }
            if let Some(best) = &self.best {
                waves.lower_ceiling(best.steps.len() as u32);
            }
            self.meter.bytes_aside = any.as_ref().map_or(0, PushSearch::bytes);
            let slice = waves.advance(&mut self.meter, size * 4);
            self.steps_low = self.steps_low.max(waves.low());
            if !matches!(slice, Ok(Slice::More)) {
                if let Some(any) = &any {
                    self.retire_pushes(any);
                }
                return self.settle_waves(&waves, slice);
            }
            size = (size * 2).min(LONG_SLICE);
            self.glimpse(waves.bytes());
        }
    }

    fn settle_waves(
        &mut self,
        waves: &Prover<'_, N>,
        ended: Result<Slice, UndecidedReason>,
    ) -> Result<(), Stop> {
        self.retire_waves(waves);
        match ended {
            Ok(Slice::Finished(_)) => {
                if let Some(steps) = waves.route() {
                    self.accept(steps);
                }
                Ok(())
            }
            Ok(_) if self.best.is_some() => Ok(()),
            Ok(_) => Err(Stop::Unsolvable { cut: waves.cut() }),
            Err(reason) => {
                if let Some(steps) = waves.route() {
                    self.accept(steps);
                }
                Err(Stop::Limit(reason))
            }
        }
    }

    fn take_pushes(&mut self, search: &PushSearch<'_, N>, node: u32) {
        if let Some(steps) = steps_of(self.board, &search.pushes_to(node)) {
            self.accept(steps);
        }
    }

    /// Takes a route, if it replays; keeps it if it is the best by the measure asked for.
    fn accept(&mut self, mut steps: Vec<Dir>) {
        let Some((pushes, spans)) = walked(self.board, &mut steps) else {
            return;
        };
        if !self.rules.is_none_or(|rules| replays(rules, &steps)) {
            return;
        }
        self.fewest_pushes = Some(self.fewest_pushes.map_or(pushes, |known| known.min(pushes)));
        let key = |steps: usize, pushes: u32| match self.prove {
            Prove::Pushes => (u64::from(pushes), steps as u64),
            _ => (steps as u64, u64::from(pushes)),
        };
        let better = self
            .best
            .as_ref()
            .is_none_or(|best| key(steps.len(), pushes) < key(best.steps.len(), best.pushes));
        if better {
            self.watch.route(&Route::Steer(steps.clone()));
            self.best = Some(Found {
                steps,
                pushes,
                spans,
            });
            self.tell(0);
        }
    }

    fn retire_pushes(&mut self, search: &PushSearch<'_, N>) {
        self.meter.note_bytes(search.bytes());
        self.folds += search.store.nodes() as u64;
        for node in 0..search.store.nodes() as u32 {
            let all = Board::all(search.store.cargo(node));
            self.heat.add(all, search.store.cells(node));
        }
    }

    fn retire_waves(&mut self, waves: &Prover<'_, N>) {
        self.meter.note_bytes(waves.bytes());
        self.folds += waves.nodes() as u64;
        let heat = &mut self.heat;
        waves.looked_at(|all, cells| heat.add(all, cells));
    }

    /// Tells the watcher how far it has come, if the last glimpse was a while ago.
    fn glimpse(&mut self, held: u64) {
        if std::mem::take(&mut self.meter.looked)
            && self.meter.seconds() - self.told >= SECONDS_BETWEEN_GLIMPSES
        {
            self.tell(held);
        }
    }

    fn tell(&mut self, held: u64) {
        self.told = self.meter.seconds();
        let progress = Progress {
            stage: match self.best {
                Some(_) => Stage::RouteFound,
                None => Stage::Looking,
            },
            steps: Bounds {
                low: self.steps_low,
                high: self.best.as_ref().map(|best| best.steps.len() as u32),
            },
            pushes: Bounds {
                low: self.pushes_low,
                high: self.fewest_pushes,
            },
            positions: self.meter.positions,
            folds: self.folds,
            bytes: held + self.meter.bytes_aside,
            seconds: self.told,
        };
        self.watch.progress(&progress);
    }

    fn report(mut self, stop: Option<Stop>) -> Report {
        let outcome = match &stop {
            _ if self.best.is_some() => Outcome::Solvable,
            Some(Stop::Unsolvable { cut }) => {
                self.closed = !cut;
                Outcome::Unsolvable
            }
            Some(Stop::Limit(reason)) => Outcome::Undecided(*reason),
            // A search that ends well has a route; one that did not replay leaves the question open.
            None => Outcome::Undecided(UndecidedReason::Stopped),
        };
        let high = self.best.as_ref().map(|best| best.steps.len() as u32);
        let proved_steps = stop.is_none() && matches!(self.prove, Prove::Steps | Prove::Both);
        if let Some(high) = high {
            self.steps_low = if proved_steps {
                high
            } else {
                self.steps_low.min(high)
            };
        }
        Report {
            outcome,
            steps: high.map(|fewest| Figure {
                fewest,
                proved: fewest == self.steps_low,
            }),
            pushes: self.fewest_pushes.map(|fewest| Figure {
                fewest,
                proved: fewest <= self.pushes_low,
            }),
            steps_low: self.steps_low,
            pushes_low: self.pushes_low,
            spans: self
                .best
                .as_ref()
                .map(|best| best.spans.clone())
                .unwrap_or_default(),
            route: self.best.take().map(|best| Route::Steer(best.steps)),
            positions: self.meter.positions,
            folds: self.folds,
            bytes: self.meter.bytes_peak,
            seconds: self.meter.seconds(),
            heat: self.heat.counts(self.board),
            touched: self.heat.touched(self.board),
            closed: self.closed,
        }
    }
}

/// Whether the step engine finishes the level by these steps and no sooner.
fn replays(rules: &Rules, steps: &[Dir]) -> bool {
    let mut position = rules.start();
    for &dir in steps {
        if rules.finished(&position) {
            return false;
        }
        match rules.step(&position, Step { slot: 0, dir }) {
            Some((next, _)) => position = next,
            None => return false,
        }
    }
    rules.finished(&position)
}
