//! The registry of folded positions.
//!
//! Positions that differ only in where the walker stands are kept under one *set*: the cells of the cargo, by group. Under a set
//! hang its *nodes*, one for each roam, chained, each with the cells of its roam. So whether a position was seen
//! is one look-up and a bit test down a short chain, and a flood is run only for roams that are new. Sets are stored whole
//! and compared whole; the hash table holds ids and some bits of the hash, never a fingerprint alone. Ids are 32 bits.
//!
//! A look-up is what a closure spends its time on, and in a large space each memory access is one to main memory. So the cargo of a set
//! of one group and the first of its roams lie side by side: most look-ups cost the table's entry and that record.
//!
//! Cost: 16 N + 8 bytes and 12 to 24 of table for a set, 8 N for each group beyond the first, 8 N + 8 for a node.

use super::bits::Bits;
use crate::study::UndecidedReason;

/// No set, no node.
pub(super) const NONE: u32 = u32::MAX;

/// Sets of cargo cells and the roams under them.
pub(super) struct Store<const N: usize> {
    groups: usize,
    sets: Vec<Set<N>>,
    /// Cargo of all groups, set by set; empty if there is but one group.
    keys: Vec<Bits<N>>,
    /// Open addressing; an entry is 32 bits of the hash above the id plus one, 0 when free.
    table: Vec<u64>,
    cells: Vec<Bits<N>>,
    next: Vec<u32>,
    set_of: Vec<u32>,
}

/// What a look-up reads.
#[derive(Clone, Copy)]
struct Set<const N: usize> {
    /// Cargo of the first group.
    cargo: Bits<N>,
    /// Cells of the first roam; empty if there is none yet.
    cells: Bits<N>,
    /// The first roam.
    node: u32,
    /// The roam that was added last, where the chain of the others begins.
    last: u32,
}

/// The hash of a set.
#[inline]
pub(super) fn hash_set<const N: usize>(groups: &[Bits<N>]) -> u64 {
    groups.iter().fold(0, |hash, set| set.hash(hash))
}

impl<const N: usize> Store<N> {
    pub fn new(groups: usize) -> Store<N> {
        Store {
            groups: groups.max(1),
            sets: Vec::new(),
            keys: Vec::new(),
            table: vec![0; 256],
            cells: Vec::new(),
            next: Vec::new(),
            set_of: Vec::new(),
        }
    }

    /// Number of nodes.
    pub fn nodes(&self) -> usize {
        self.cells.len()
    }

    /// The cells of a node's roam.
    #[inline]
    pub fn cells(&self, node: u32) -> Bits<N> {
        self.cells[node as usize]
    }

    /// The set that a node hangs under.
    #[inline]
    pub fn set_of(&self, node: u32) -> u32 {
        self.set_of[node as usize]
    }

    /// The cargo of a set, by group.
    #[inline]
    pub fn set(&self, set: u32) -> &[Bits<N>] {
        if self.groups == 1 {
            std::slice::from_ref(&self.sets[set as usize].cargo)
        } else {
            &self.keys[set as usize * self.groups..][..self.groups]
        }
    }

    /// The cargo of a node, by group.
    #[inline]
    pub fn cargo(&self, node: u32) -> &[Bits<N>] {
        self.set(self.set_of(node))
    }

    /// The set with this cargo, if it was seen.
    #[inline]
    pub fn find_set(&self, groups: &[Bits<N>], hash: u64) -> Option<u32> {
        let mask = self.table.len() - 1;
        let tag = hash >> 32 << 32;
        let mut place = hash as usize & mask;
        loop {
            let entry = self.table[place];
            if entry == 0 {
                return None;
            }
            if entry >> 32 << 32 == tag {
                let set = entry as u32 - 1;
                if self.set(set) == groups {
                    return Some(set);
                }
            }
            place = (place + 1) & mask;
        }
    }

    /// The node of a set whose roam has this cell.
    #[inline]
    pub fn find_node(&self, set: u32, at: usize) -> Option<u32> {
        let record = &self.sets[set as usize];
        if record.cells.has(at) {
            return Some(record.node);
        }
        let mut node = record.last;
        while node != record.node {
            if self.cells[node as usize].has(at) {
                return Some(node);
            }
            node = self.next[node as usize];
        }
        None
    }

    /// Adds a set that is not there yet. [`Store::make_room`] must have been called.
    pub fn add_set(&mut self, groups: &[Bits<N>], hash: u64) -> u32 {
        let set = self.sets.len() as u32;
        self.sets.push(Set {
            cargo: groups.first().copied().unwrap_or(Bits::NONE),
            cells: Bits::NONE,
            node: NONE,
            last: NONE,
        });
        if self.groups > 1 {
            self.keys.extend_from_slice(groups);
        }
        insert(&mut self.table, set, hash);
        set
    }

    /// Adds a roam to a set.
    pub fn add_node(&mut self, set: u32, cells: Bits<N>) -> u32 {
        let node = self.cells.len() as u32;
        self.cells.push(cells);
        let record = &mut self.sets[set as usize];
        if record.node == NONE {
            record.node = node;
            record.cells = cells;
        }
        self.next.push(record.last);
        record.last = node;
        self.set_of.push(set);
        node
    }

    /// Bytes held.
    pub fn bytes(&self) -> u64 {
        held(&self.keys)
            + held(&self.sets)
            + held(&self.table)
            + held(&self.cells)
            + held(&self.next)
            + held(&self.set_of)
    }

    /// Makes room for `extra` sets and nodes.
    ///
    /// # Errors
    /// If that would take more than `spare` bytes, or ids run out.
    #[inline]
    pub fn make_room(
        &mut self,
        extra: usize,
        spare: impl Fn(&Store<N>) -> u64,
    ) -> Result<(), UndecidedReason> {
        let roomy = self.sets.capacity() - self.sets.len() >= extra
            && self.cells.capacity() - self.cells.len() >= extra
            && (self.sets.len() + extra) * 3 <= self.table.len() * 2;
        if roomy {
            Ok(())
        } else {
            self.grow(extra, spare)
        }
    }

    fn grow(
        &mut self,
        extra: usize,
        spare: impl Fn(&Store<N>) -> u64,
    ) -> Result<(), UndecidedReason> {
        if self.cells.len() + extra >= NONE as usize {
            return Err(UndecidedReason::Memory);
        }
        let groups = self.groups;
        let left = spare(self);
        if groups > 1 {
            reserve(&mut self.keys, extra * groups, || left)?;
        }
        let left = spare(self);
        reserve(&mut self.sets, extra, || left)?;
        let left = spare(self);
        reserve(&mut self.cells, extra, || left)?;
        let left = spare(self);
        reserve(&mut self.next, extra, || left)?;
        let left = spare(self);
        reserve(&mut self.set_of, extra, || left)?;
        let sets = self.sets.len() + extra;
        if sets * 3 > self.table.len() * 2 {
            self.grow_table(sets, spare(self))?;
        }
        Ok(())
    }

    /// Doubles the table if that fits; if not, lets it fill up to 15 in 16.
    fn grow_table(&mut self, sets: usize, spare: u64) -> Result<(), UndecidedReason> {
        let size = (self.table.len() * 2).max((sets * 2).next_power_of_two());
        if size as u64 * 8 <= spare {
            let mut table = vec![0; size];
            for set in 0..self.sets.len() as u32 {
                let hash = hash_set(self.set(set));
                insert(&mut table, set, hash);
            }
            self.table = table;
            Ok(())
        } else if sets * 16 <= self.table.len() * 15 {
            Ok(())
        } else {
            Err(UndecidedReason::Memory)
        }
    }
}

fn insert(table: &mut [u64], set: u32, hash: u64) {
    let mask = table.len() - 1;
    let mut place = hash as usize & mask;
    while table[place] != 0 {
        place = (place + 1) & mask;
    }
    table[place] = hash >> 32 << 32 | (u64::from(set) + 1);
}

/// Bytes that a vector holds.
pub(super) fn held<T>(vec: &Vec<T>) -> u64 {
    (vec.capacity() * size_of::<T>()) as u64
}

/// Makes room for `extra` entries: twice as much while small, a quarter more when large, less if only less is to be had.
///
/// # Errors
/// If the entries do not fit into `spare` bytes.
pub(super) fn reserve<T>(
    vec: &mut Vec<T>,
    extra: usize,
    spare: impl Fn() -> u64,
) -> Result<(), UndecidedReason> {
    if vec.capacity() - vec.len() >= extra {
        return Ok(());
    }
    let size = size_of::<T>() as u64;
    let generous = if held(vec) < 1 << 20 {
        vec.len()
    } else {
        vec.len() / 4
    };
    let most = (spare() / size.max(1)).min(1 << 40) as usize;
    let more = generous.max(extra).max(64).min(most);
    if more < extra {
        return Err(UndecidedReason::Memory);
    }
    vec.reserve_exact(more);
    Ok(())
}
