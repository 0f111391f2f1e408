//! The folded graph: roams as nodes, found one by one and shared by all engines.

use super::budget::{Budget, Column, Full};
use super::registry::Registry;
use super::space::{Arrival, EdgeList, Outlook, StateSpace};

/// Number of a roam in the order in which they were found.
pub type RoamId = u32;

/// No roam: the end of a chain, or a position that was cut.
pub const NO_ROAM: RoamId = u32::MAX;

const DEAD: u16 = u16::MAX;
const NOT_EXPANDED: u32 = u32::MAX;

/// A step out of a roam, as it is stored.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Edge {
    /// Roam that it leads to; [`NO_ROAM`] if that position was cut.
    pub to: RoamId,
    /// What the space needs to make the step again.
    pub label: u32,
    /// Place that it is made from.
    pub from_place: u16,
    /// Place that it leads to.
    pub to_place: u16,
    /// Cost in pushes.
    pub pushes: u8,
}

#[derive(Clone, Copy, Debug)]
struct KeyRecord {
    first_roam: RoamId,
    steps: u16,
    pushes: u16,
}

#[derive(Clone, Copy, Debug)]
struct RoamRecord {
    key: u32,
    /// Next roam of the same key.
    next: RoamId,
    first_edge: u32,
    edges: u32,
    /// Place by which it was found.
    place: u16,
    size: u16,
    finished: bool,
}

/// A state space as far as it was looked at, with roams as nodes.
///
/// **The problem.** Most positions differ only in where the walker stands, and most steps only walk. Treating each as a node
/// wastes time and memory by a factor of the size of a room; and whether a position was met before must still be told for each.
///
/// **The solution.** Keys are stored once ([`Registry`]); each key heads a chain of its roams, each with a mask of
/// its places. Looking a position up is a hash, then a bit test along a short chain; the walk is flooded only when no mask
/// has the bit. Edges of a roam are made when it is first opened and kept, so that several engines (a first
/// route, fewest pushes, fewest steps, closure) share all work. A search by steps runs over *entries* (a roam and the place where it
/// is entered) and adds the walk.
///
/// **Cost.** For each roam 24 bytes, its mask (8 bytes for each 64 places), 12 bytes a key beside the registry, 16 bytes an edge.
pub struct Folded<S> {
    /// The space itself.
    pub space: S,
    /// What is held of what may be held.
    pub budget: Budget,
    words: usize,
    mask_words: usize,
    prune: bool,
    keys: Registry,
    key_records: Column<KeyRecord>,
    roams: Column<RoamRecord>,
    masks: Column<u64>,
    edges: Column<Edge>,
    positions: u64,
    cut: u64,
    opened: usize,
    list: EdgeList,
    members: Vec<u16>,
    key_room: Vec<u64>,
    stop: Option<Box<dyn Fn() -> bool>>,
}

impl<S: StateSpace> Folded<S> {
    /// Nothing but the space. With `prune`, positions that the space proves dead are cut, and bounds are asked for.
    pub fn new(space: S, bytes: u64, prune: bool) -> Folded<S> {
        let words = space.words().max(1);
        let places = space.places();
        Folded {
            budget: Budget::new(bytes),
            words,
            mask_words: if places > 1 { places.div_ceil(64) } else { 0 },
            prune,
            keys: Registry::new(words),
            key_records: Column::new(),
            roams: Column::new(),
            masks: Column::new(),
            edges: Column::new(),
            positions: 0,
            cut: 0,
            opened: 0,
            list: EdgeList::default(),
            members: Vec::new(),
            key_room: vec![0; words],
            stop: None,
            space,
        }
    }

    /// The same, giving no more room ([`Full`]) once `stop` says so. It is asked before every roam is found, which on large boards is
    /// many times while one node is opened.
    #[must_use]
    pub fn stopped_by(mut self, stop: impl Fn() -> bool + 'static) -> Folded<S> {
        self.stop = Some(Box::new(stop));
        self
    }

    /// Finds the roam of the start: it and the place; [`NO_ROAM`] if the start is a proved dead end.
    ///
    /// # Errors
    /// If memory has run out.
    pub fn start(&mut self) -> Result<(RoamId, u16), Full> {
        let mut key = std::mem::take(&mut self.key_room);
        key.fill(0);
        let arrival = self.space.start(&mut key);
        let roam = self.roam_of(&key, arrival);
        self.key_room = key;
        let roam = roam?;
        self.cut += u64::from(roam == NO_ROAM);
        Ok((roam, arrival.place))
    }

    /// Number of roams found.
    pub fn roam_count(&self) -> usize {
        self.roams.len()
    }

    /// Positions in all roams found.
    pub fn positions(&self) -> u64 {
        self.positions
    }

    /// Positions cut as dead ends, each time that they were met.
    pub fn cut(&self) -> u64 {
        self.cut
    }

    /// Whether every roam found was opened and nothing was cut: everything that can be reached was looked at.
    pub fn is_closed(&self) -> bool {
        self.cut == 0 && self.opened == self.roams.len()
    }

    /// Whether the positions of a roam (then only one) are finished.
    pub fn is_finished(&self, roam: RoamId) -> bool {
        self.roams[roam as usize].finished
    }

    /// Number of positions of a roam.
    pub fn size(&self, roam: RoamId) -> u16 {
        self.roams[roam as usize].size
    }

    /// Key of a roam, and the place by which it was found.
    pub fn position(&self, roam: RoamId) -> (&[u64], u16) {
        let record = &self.roams[roam as usize];
        (self.keys.row(record.key), record.place)
    }

    /// Fewest steps ahead of a roam, at least.
    pub fn steps_ahead(&self, roam: RoamId) -> u32 {
        self.ahead(roam, |record| record.steps)
    }

    /// Fewest pushes ahead of a roam, at least.
    pub fn pushes_ahead(&self, roam: RoamId) -> u32 {
        self.ahead(roam, |record| record.pushes)
    }

    fn ahead(&self, roam: RoamId, bound: impl Fn(&KeyRecord) -> u16) -> u32 {
        let record = &self.roams[roam as usize];
        if record.finished {
            return 0;
        }
        let bound = bound(&self.key_records[record.key as usize]);
        if bound == DEAD { 0 } else { u32::from(bound) }
    }

    /// Fewest steps ahead of an entry, at least; none if it is a dead end, which then counts as cut.
    pub fn entry_steps_ahead(&mut self, roam: RoamId, place: u16) -> Option<u32> {
        let record = &self.roams[roam as usize];
        if record.finished || !self.prune {
            return Some(0);
        }
        let key = record.key;
        let ahead = self.space.steps_ahead(self.keys.row(key), place);
        self.cut += u64::from(ahead.is_none());
        Some(ahead?.max(self.steps_ahead(roam)))
    }

    /// The edges of a roam that was opened; none before.
    pub fn edges(&self, roam: RoamId) -> &[Edge] {
        let record = &self.roams[roam as usize];
        if record.edges == NOT_EXPANDED {
            return &[];
        }
        let first = record.first_edge as usize;
        &self.edges[first..first + record.edges as usize]
    }

    /// Fills `distances` with the walk from an entry.
    pub fn distances(&mut self, roam: RoamId, place: u16, distances: &mut [u16]) {
        let key = self.roams[roam as usize].key;
        self.space.distances(self.keys.row(key), place, distances);
    }

    /// Makes the edges of a roam, unless they were made before.
    ///
    /// # Errors
    /// If memory has run out; the roam then counts as not opened.
    pub fn open(&mut self, roam: RoamId) -> Result<(), Full> {
        let record = self.roams[roam as usize];
        if record.edges != NOT_EXPANDED {
            return Ok(());
        }
        let mut list = std::mem::take(&mut self.list);
        list.clear();
        if !record.finished {
            let key = self.keys.row(record.key);
            self.space.edges(key, record.place, &mut list);
        }
        let first = self.edges.len();
        let stored = self.store(&list);
        self.list = list;
        stored?;
        let record = &mut self.roams[roam as usize];
        record.first_edge = first as u32;
        record.edges = (self.edges.len() - first) as u32;
        self.opened += 1;
        Ok(())
    }

    fn store(&mut self, list: &EdgeList) -> Result<(), Full> {
        if self.edges.len() + list.len() >= u32::MAX as usize {
            return Err(Full);
        }
        self.edges.reserve(list.len(), &mut self.budget)?;
        let first = self.edges.len();
        for at in 0..list.len() {
            let (edge, key) = list.get(at, self.words);
            let to = match self.roam_of(key, edge.to) {
                Ok(to) => to,
                Err(Full) => {
                    self.edges.truncate(first);
                    return Err(Full);
                }
            };
            self.cut += u64::from(to == NO_ROAM);
            self.edges.push(Edge {
                to,
                label: edge.label,
                from_place: edge.from,
                to_place: edge.to.place,
                pushes: edge.pushes,
            });
        }
        Ok(())
    }

    /// The roam of a position, found anew if need be.
    fn roam_of(&mut self, key: &[u64], arrival: Arrival) -> Result<RoamId, Full> {
        self.keys.reserve(1, &mut self.budget)?;
        self.key_records.reserve(1, &mut self.budget)?;
        let (key_id, new) = self.keys.insert(key);
        if new {
            self.key_records.push(KeyRecord {
                first_roam: NO_ROAM,
                steps: DEAD,
                pushes: 0,
            });
            self.look_ahead(key, key_id, arrival.finished);
        }
        let record = self.key_records[key_id as usize];
        let mut roam = record.first_roam;
        while roam != NO_ROAM {
            if self.holds(roam, arrival.place) {
                return Ok(roam);
            }
            roam = self.roams[roam as usize].next;
        }
        if self.prune && record.steps == DEAD && !arrival.finished {
            return Ok(NO_ROAM);
        }
        self.add_roam(key, key_id, arrival)
    }

    fn look_ahead(&mut self, key: &[u64], key_id: u32, finished: bool) {
        let record = &mut self.key_records[key_id as usize];
        if !self.prune {
            record.steps = 0;
            return;
        }
        match self.space.outlook(key) {
            Outlook::Open(ahead) => {
                record.steps = ahead.steps.min(DEAD - 1);
                record.pushes = ahead.pushes;
            }
            Outlook::Dead(_) => {
                debug_assert!(!finished, "a finished position was called a dead end");
                record.steps = DEAD;
            }
        }
    }

    fn holds(&self, roam: RoamId, place: u16) -> bool {
        if self.mask_words == 0 {
            return true;
        }
        let word = roam as usize * self.mask_words + usize::from(place) / 64;
        self.masks[word] >> (place % 64) & 1 != 0
    }

    fn add_roam(&mut self, key: &[u64], key_id: u32, arrival: Arrival) -> Result<RoamId, Full> {
        if self.stop.as_ref().is_some_and(|stop| stop()) {
            return Err(Full);
        }
        self.roams.reserve(1, &mut self.budget)?;
        self.masks.reserve(self.mask_words, &mut self.budget)?;
        let mut members = std::mem::take(&mut self.members);
        members.clear();
        if arrival.finished {
            members.push(arrival.place);
        } else {
            self.space.roam(key, arrival.place, &mut members);
        }
        let roam = self.roams.len() as RoamId;
        let first_word = self.masks.len();
        for _ in 0..self.mask_words {
            self.masks.push(0);
        }
        if self.mask_words > 0 {
            for &place in &members {
                self.masks[first_word + usize::from(place) / 64] |= 1 << (place % 64);
            }
        }
        let record = &mut self.key_records[key_id as usize];
        let next = std::mem::replace(&mut record.first_roam, roam);
        self.roams.push(RoamRecord {
            key: key_id,
            next,
            first_edge: 0,
            edges: NOT_EXPANDED,
            place: arrival.place,
            size: members.len() as u16,
            finished: arrival.finished,
        });
        self.positions += members.len() as u64;
        self.members = members;
        Ok(roam)
    }

    /// The places of a roam, ascending.
    pub fn members(&self, roam: RoamId) -> Vec<u16> {
        if self.mask_words == 0 {
            return vec![0];
        }
        let first = roam as usize * self.mask_words;
        let mut places = Vec::new();
        for word in 0..self.mask_words {
            let mut mask = self.masks[first + word];
            while mask != 0 {
                places.push((word * 64) as u16 + mask.trailing_zeros() as u16);
                mask &= mask - 1;
            }
        }
        places
    }
}
