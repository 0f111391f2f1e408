//! Certificates of unsolvability: what they hold and how they are written down.
//!
//! A certificate is a set of positions that holds the start, that no step leaves, and in which none is finished; then
//! nothing finished can be reached (Eriksson, Roeger, Helmert, ICAPS 2017). Steps may also lead to *cut* positions, each
//! with a reason why nothing finished can be reached from there.
//!
//! The file is one JSON document that needs nothing beside it: the pack text with the one level, the closed set, the cut
//! positions, and a digest of all that. Positions that differ only in where the single walker stands share one record,
//! which makes the file as small as the folded search that found it; with several walkers, or none, each position has a
//! record of its own. The digest is there against damage in transit; the proof does not rest on it.

use super::plain::{Body, Position, World};
use crate::file::{read_pack, write_pack};
use crate::level::{BodyIx, Cell, Channel, GroundIx, Level, Mechanics, Pack, Role, Size};
use serde::{Deserialize, Serialize};
use std::collections::{BTreeMap, BTreeSet};
use std::io::{self, Write};
use std::sync::Arc;
use thiserror::Error;

/// The version of the file that this program writes and reads.
const FORMAT: u32 = 1;

/// Why nothing finished can be reached from a cut position.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub enum Reason {
    /// The homes that must be filled can't be shared out among cargo that could ever come there, or some cargo that must
    /// be home could never be, even if every other body were out of the way ([`super::hopeless`]).
    HomesOutOfReach,
}

/// A position without the single walker, if there is one.
type Frame = Position;

/// A claim that a level can't be finished, with what it rests on.
#[derive(Clone, Debug)]
pub struct Certificate {
    mechanics: Mechanics,
    level: Level,
    lone_walker: Option<BodyIx>,
    closed: BTreeMap<Frame, BTreeSet<Cell>>,
    cut: BTreeMap<(Reason, Frame), BTreeSet<Cell>>,
}

/// Why a text is no certificate.
#[derive(Debug, Error, PartialEq, Eq)]
pub enum Unreadable {
    /// It is not a JSON document of the expected form.
    #[error("this is no certificate: {0}")]
    Form(String),
    /// It is of another version.
    #[error("this certificate has format {0}; this program reads format 1")]
    Format(u32),
    /// Its digest does not fit its content.
    #[error("this certificate was damaged: its digest does not fit its content")]
    Digest,
    /// The pack in it can't be read.
    #[error("the pack in this certificate can't be read: {0}")]
    Pack(String),
    /// It does not hold exactly one level.
    #[error("a certificate is about one level, and this one holds {0}")]
    Levels(usize),
    /// A record describes no position of the level.
    #[error("record {0} describes no position of the level")]
    Record(usize),
}

impl Certificate {
    /// A certificate about a level that claims nothing yet.
    pub fn new(mechanics: &Mechanics, level: &Level) -> Certificate {
        let walkers: Vec<BodyIx> = level
            .bodies
            .iter()
            .flatten()
            .copied()
            .filter(|&kind| mechanics.body(kind).role == Role::Walker)
            .collect();
        Certificate {
            mechanics: mechanics.clone(),
            level: level.clone(),
            lone_walker: match walkers[..] {
                [walker] => Some(walker),
                _ => None,
            },
            closed: BTreeMap::new(),
            cut: BTreeMap::new(),
        }
    }

    /// The kinds of the level.
    pub fn mechanics(&self) -> &Mechanics {
        &self.mechanics
    }

    /// The level that it is about.
    pub fn level(&self) -> &Level {
        &self.level
    }

    /// Adds a position to the closed set.
    pub fn add_closed(&mut self, position: &Position) {
        let (frame, walker) = self.split(position);
        self.closed.entry(frame).or_default().extend(walker);
    }

    /// Adds a position from which the proof does not go on, and why.
    pub fn add_cut(&mut self, position: &Position, reason: Reason) {
        let (frame, walker) = self.split(position);
        self.cut.entry((reason, frame)).or_default().extend(walker);
    }

    /// Whether the closed set holds a position.
    pub fn is_closed(&self, position: &Position) -> bool {
        let (frame, walker) = self.split(position);
        self.closed
            .get(&frame)
            .is_some_and(|cells| walker.is_none_or(|cell| cells.contains(&cell)))
    }

    /// Whether a position is among the cut ones.
    pub fn is_cut(&self, position: &Position) -> bool {
        let (frame, walker) = self.split(position);
        self.cut
            .get(&(Reason::HomesOutOfReach, frame))
            .is_some_and(|cells| walker.is_none_or(|cell| cells.contains(&cell)))
    }

    /// The positions of the closed set, in a fixed order.
    pub fn closed(&self) -> impl Iterator<Item = Position> {
        self.closed
            .iter()
            .flat_map(|(frame, cells)| self.join(frame, cells))
    }

    /// The cut positions with their reasons, in a fixed order.
    pub fn cut(&self) -> impl Iterator<Item = (Position, Reason)> {
        self.cut.iter().flat_map(|((reason, frame), cells)| {
            self.join(frame, cells)
                .into_iter()
                .map(|position| (position, *reason))
        })
    }

    fn split(&self, position: &Position) -> (Frame, Option<Cell>) {
        let Some(walker) = self.lone_walker else {
            return (position.clone(), None);
        };
        let mut frame = position.clone();
        let at = frame.bodies.iter().position(|body| body.kind == walker);
        let walker = at.map(|at| frame.bodies.remove(at));
        (frame, walker.and_then(|body| body.cells.first().copied()))
    }

    fn join(&self, frame: &Frame, cells: &BTreeSet<Cell>) -> Vec<Position> {
        let Some(kind) = self.lone_walker else {
            return vec![frame.clone()];
        };
        let with_walker = |&cell: &Cell| {
            let mut position = frame.clone();
            let cells = vec![cell];
            position.bodies.push(Body { kind, cells });
            position.bodies.sort();
            position
        };
        cells.iter().map(with_walker).collect()
    }

    /// Writes the certificate as a file.
    ///
    /// # Errors
    /// Those of `out`.
    pub fn write(&self, out: &mut impl Write) -> io::Result<()> {
        let pack = Pack {
            name: self.level.name.clone(),
            mechanics: Arc::new(self.mechanics.clone()),
            levels: vec![Arc::new(self.level.clone())],
        };
        let start = World::new(&self.mechanics, &self.level).start().clone();
        let record = |frame: &Frame, cells| Record::new(self.level.size, &start, frame, cells);
        let claim = Claim {
            certificate: FORMAT,
            pack: write_pack(&pack, ""),
            closed: self
                .closed
                .iter()
                .map(|(frame, cells)| record(frame, cells))
                .collect(),
            cut: self
                .cut
                .iter()
                .map(|((reason, frame), cells)| (*reason, record(frame, cells)))
                .collect(),
        };
        let digest = claim.digest()?;
        serde_json::to_writer(&mut *out, &Document { claim, digest })?;
        out.write_all(b"\n")
    }

    /// Reads a certificate. Nothing is believed yet: see [`super::check`].
    ///
    /// # Errors
    /// What is wrong with the text.
    pub fn read(text: &str) -> Result<Certificate, Unreadable> {
        let form = |error: serde_json::Error| Unreadable::Form(error.to_string());
        let Document { claim, digest } = serde_json::from_str(text).map_err(form)?;
        if claim.certificate != FORMAT {
            return Err(Unreadable::Format(claim.certificate));
        }
        if claim.digest().map_err(form)? != digest {
            return Err(Unreadable::Digest);
        }
        let read = read_pack(claim.pack.as_bytes())
            .map_err(|error| Unreadable::Pack(error.to_string()))?;
        let levels = &read.pack.levels;
        let [level] = &levels[..] else {
            return Err(Unreadable::Levels(levels.len()));
        };
        let mut certificate = Certificate::new(&read.pack.mechanics, level);
        certificate.fill(&claim)?;
        Ok(certificate)
    }

    fn fill(&mut self, claim: &Claim) -> Result<(), Unreadable> {
        let start = World::new(&self.mechanics, &self.level).start().clone();
        for (number, record) in claim.closed.iter().enumerate() {
            let read = record.position(self, &start);
            let (frame, cells) = read.ok_or(Unreadable::Record(number))?;
            self.closed.entry(frame).or_default().extend(cells);
        }
        for (number, (reason, record)) in claim.cut.iter().enumerate() {
            let read = record.position(self, &start);
            let (frame, cells) = read.ok_or(Unreadable::Record(claim.closed.len() + number))?;
            self.cut.entry((*reason, frame)).or_default().extend(cells);
        }
        Ok(())
    }
}

/// All that a file says but its digest.
#[derive(Debug, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct Claim {
    certificate: u32,
    pack: String,
    closed: Vec<Record>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    cut: Vec<(Reason, Record)>,
}

#[derive(Debug, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct Document {
    claim: Claim,
    digest: String,
}

impl Claim {
    /// 64-bit FNV-1a over the claim's JSON text.
    fn digest(&self) -> serde_json::Result<String> {
        let mut hash = Fnv(0xcbf2_9ce4_8422_2325);
        serde_json::to_writer(&mut hash, self)?;
        Ok(format!("{:016x}", hash.0))
    }
}

struct Fnv(u64);

impl Write for Fnv {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        for &byte in bytes {
            self.0 = (self.0 ^ u64::from(byte)).wrapping_mul(0x0000_0100_0000_01b3);
        }
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

/// One or more positions as a file has them: what differs from the start, by cell number (row by row) and kind number
/// (in the order of the pack). Bodies stand as they are now, the single walker apart.
#[derive(Debug, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
struct Record {
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    ground: Vec<(u16, u16)>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    bodies: Vec<(u16, Vec<u16>)>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    taken: Vec<u16>,
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    keys: BTreeMap<Channel, u32>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    walker: Vec<u16>,
}

impl Record {
    fn new(size: Size, start: &Position, frame: &Frame, walker: &BTreeSet<Cell>) -> Record {
        let number = |cell: &Cell| size.index(*cell) as u16;
        let changed = |at: &usize| frame.ground[*at] != start.ground[*at];
        Record {
            ground: (0..frame.ground.len())
                .filter(changed)
                .map(|at| (at as u16, frame.ground[at].0))
                .collect(),
            bodies: frame
                .bodies
                .iter()
                .map(|body| (body.kind.0, body.cells.iter().map(number).collect()))
                .collect(),
            taken: (0..frame.items.len())
                .filter(|&at| frame.items[at].is_none() && start.items[at].is_some())
                .map(|at| at as u16)
                .collect(),
            keys: frame.keys.clone(),
            walker: walker.iter().map(number).collect(),
        }
    }

    /// The frame and the walker's cells, or `None` if the record does not describe a position of the level.
    fn position(&self, of: &Certificate, start: &Position) -> Option<(Frame, BTreeSet<Cell>)> {
        let size = of.level.size;
        let cell = |&at: &u16| (usize::from(at) < size.area()).then(|| size.cell(at.into()));
        let mut frame = start.clone();
        for &(at, kind) in &self.ground {
            of.mechanics.grounds.get(usize::from(kind))?;
            *frame.ground.get_mut(usize::from(at))? = GroundIx(kind);
        }
        for &at in &self.taken {
            frame.items.get_mut(usize::from(at))?.take()?;
        }
        frame.keys = self.keys.clone();
        frame.bodies.clear();
        for (kind, cells) in &self.bodies {
            of.mechanics.bodies.get(usize::from(*kind))?;
            let mut cells: Vec<Cell> = cells.iter().map(cell).collect::<Option<_>>()?;
            cells.sort();
            let kind = BodyIx(*kind);
            frame.bodies.push(Body { kind, cells });
        }
        frame.bodies.sort();
        let walker: BTreeSet<Cell> = self.walker.iter().map(cell).collect::<Option<_>>()?;
        let mut covered: Vec<Cell> = frame.bodies.iter().flat_map(|b| b.cells.clone()).collect();
        covered.sort();
        let overlap = covered.windows(2).any(|pair| pair[0] == pair[1]);
        let empty = frame.bodies.iter().any(|body| body.cells.is_empty());
        let walker_apart = walker.iter().all(|cell| !covered.contains(cell));
        let walker_fits = walker.is_empty() != of.lone_walker.is_some();
        let no_second_walker = frame
            .bodies
            .iter()
            .all(|body| Some(body.kind) != of.lone_walker);
        let no_empty_keys = frame.keys.values().all(|&count| count > 0);
        let sound =
            !overlap && !empty && walker_apart && walker_fits && no_second_walker && no_empty_keys;
        sound.then_some((frame, walker))
    }
}
