//! Which search proves the fewest steps.

use super::bits::Bits;
use super::board::Board;
use super::matching::Demand;
use super::meet::MeetSearch;
use super::meter::Meter;
use super::pushes::Slice;
use super::steps::StepSearch;
use crate::level::Dir;
use crate::study::UndecidedReason;

/// From both ends where there is one end to start from, else in waves from the start.
pub(super) enum Prover<'b, const N: usize> {
    Meet(Box<MeetSearch<'b, N>>),
    Waves(Box<StepSearch<'b, N>>),
}

impl<'b, const N: usize> Prover<'b, N> {
    pub fn new(board: &'b Board<N>, demand: &'b Demand) -> Prover<'b, N> {
        match MeetSearch::new(board, demand) {
            Some(search) => Prover::Meet(Box::new(search)),
            None => Prover::Waves(Box::new(StepSearch::new(board, demand))),
        }
    }

    /// Moves up to `most` fronts on.
    ///
    /// # Errors
    /// The limit that was met.
    pub fn advance(&mut self, meter: &mut Meter, most: u32) -> Result<Slice, UndecidedReason> {
        match self {
            Prover::Meet(search) => search.advance(meter, most),
            Prover::Waves(search) => search.advance(meter, most),
        }
    }

    /// From now on only routes of fewer steps are of interest.
    pub fn lower_ceiling(&mut self, steps: u32) {
        let ceiling = match self {
            Prover::Meet(search) => &mut search.ceiling,
            Prover::Waves(search) => &mut search.ceiling,
        };
        *ceiling = steps.min(*ceiling);
    }

    /// No finish needs fewer steps.
    pub fn low(&self) -> u32 {
        match self {
            Prover::Meet(search) => search.low,
            Prover::Waves(search) => search.low,
        }
    }

    /// The best route found, if there is one below the ceiling.
    pub fn route(&self) -> Option<Vec<Dir>> {
        match self {
            Prover::Meet(search) => search.route(),
            Prover::Waves(search) => search.route(),
        }
    }

    /// Whether an exhausted search may not have seen all that is reachable.
    pub fn cut(&self) -> bool {
        match self {
            Prover::Meet(_) => true,
            Prover::Waves(search) => search.cut,
        }
    }

    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        match self {
            Prover::Meet(search) => search.bytes(),
            Prover::Waves(search) => search.bytes(),
        }
    }

    /// Number of roams.
    pub fn nodes(&self) -> usize {
        match self {
            Prover::Meet(search) => search.nodes(),
            Prover::Waves(search) => search.nodes(),
        }
    }

    /// Tells the cargo and the walker cells of each roam, as far as they were looked at from the start.
    pub fn looked_at(&self, mut tell: impl FnMut(Bits<N>, Bits<N>)) {
        match self {
            Prover::Meet(search) => search.looked_at().for_each(|(all, cells)| tell(all, cells)),
            Prover::Waves(search) => search.looked_at().for_each(|(all, cells)| tell(all, cells)),
        }
    }
}
