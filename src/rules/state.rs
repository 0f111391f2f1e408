//! The working form of a position: what a step reads and changes in place.

use super::Rules;
use super::tables::NONE;

/// Reusable room for steps of one level: a position unpacked, and buffers. Make one a thread with [`Rules::scratch`]; it
/// works only with the [`Rules`] that made it, or with variants of it made by [`Rules::closing`].
#[derive(Clone, Debug)]
pub struct Scratch {
    /// Anchor of the body in each slot; `NONE` when it has vanished.
    pub(super) at: Vec<u16>,
    /// Slot of the body on each cell.
    pub(super) occupant: Vec<u16>,
    /// Ground of each cell.
    pub(super) ground: Vec<u16>,
    pub(super) item_left: Vec<bool>,
    /// Keys held by channel.
    pub(super) keys: Vec<u32>,
    /// Whether each gate channel was held before the step.
    pub(super) held: Vec<bool>,
    /// Cells where a body landed in this step, in passing too.
    pub(super) landings: Vec<u16>,
    /// Each landing of cargo: its slot, and where it came from.
    pub(super) cargo_moves: Vec<(u16, u16)>,
    /// Cells where the body that slides has stood in this slide.
    pub(super) stood: Vec<u16>,
    pub(super) walker_order: Vec<u16>,
    /// Places in canonical order, while packing.
    pub(super) codes: Vec<u16>,
    /// Room for positions of the roam.
    pub(super) words: [Vec<u64>; 3],
    pub(super) survey: super::survey::Survey,
    /// Cells that a body came onto in any step made so far.
    pub(super) touched: Vec<bool>,
}

impl Scratch {
    /// For each cell, row by row: whether a body came onto it, in passing or to stay, in any step made with this scratch since
    /// it was made or [`Scratch::forget_touched`] was called. The cells that a roam walks over count.
    pub fn touched(&self) -> &[bool] {
        &self.touched
    }

    /// Starts [`Scratch::touched`] anew.
    pub fn forget_touched(&mut self) {
        self.touched.fill(false);
    }
}

impl Rules {
    /// Room to make steps in.
    pub fn scratch(&self) -> Scratch {
        let tables = &self.tables;
        let area = tables.size.area();
        let words = vec![0; self.layout.words];
        let mut scratch = Scratch {
            at: vec![NONE; tables.bodies.len()],
            occupant: vec![NONE; area],
            ground: tables.start_ground.clone(),
            item_left: vec![true; tables.items.len()],
            keys: vec![0; tables.key_names.len()],
            held: vec![false; tables.gate_names.len()],
            landings: Vec::new(),
            cargo_moves: Vec::new(),
            stood: Vec::new(),
            walker_order: Vec::with_capacity(tables.walkers.len()),
            codes: vec![0; tables.bodies.len()],
            words: [words.clone(), words.clone(), words],
            survey: super::survey::Survey::default(),
            touched: vec![false; area],
        };
        self.set_start(&mut scratch);
        scratch
    }

    /// Unpacks the start.
    pub(super) fn set_start(&self, s: &mut Scratch) {
        self.lift_bodies(s);
        let tables = &self.tables;
        for (slot, &anchor) in tables.start_at.iter().enumerate() {
            self.put(s, slot, anchor);
        }
        s.ground.copy_from_slice(&tables.start_ground);
        s.item_left.fill(true);
        s.keys.fill(0);
    }

    fn lift_bodies(&self, s: &mut Scratch) {
        for slot in 0..s.at.len() {
            let anchor = s.at[slot];
            if anchor == NONE {
                continue;
            }
            if self.tables.all_single {
                s.occupant[usize::from(anchor)] = NONE;
            } else {
                for cell in self.tables.cells_of(slot, anchor) {
                    s.occupant[usize::from(cell)] = NONE;
                }
            }
        }
    }

    fn put(&self, s: &mut Scratch, slot: usize, anchor: u16) {
        s.at[slot] = anchor;
        if anchor == NONE {
            return;
        }
        if self.tables.all_single {
            s.occupant[usize::from(anchor)] = slot as u16;
        } else {
            for cell in self.tables.cells_of(slot, anchor) {
                s.occupant[usize::from(cell)] = slot as u16;
            }
        }
    }

    /// Unpacks a position of this level. Words that are no position of it give nonsense, but no panic on their own.
    pub fn load(&self, s: &mut Scratch, words: &[u64]) {
        self.lift_bodies(s);
        let (tables, layout) = (&self.tables, &self.layout);
        for (slot, field) in layout.bodies.iter().enumerate() {
            let anchor = tables.places.get(field.read(words)).copied();
            self.put(s, slot, anchor.unwrap_or(NONE));
        }
        for (spot, field) in tables.mutable.iter().zip(&layout.grounds) {
            let option = field.read(words).min(spot.options.len() - 1);
            s.ground[usize::from(spot.cell)] = spot.options[option];
        }
        for (left, field) in s.item_left.iter_mut().zip(&layout.items) {
            *left = field.read(words) != 0;
        }
        for (keys, field) in s.keys.iter_mut().zip(&layout.keys) {
            *keys = field.read(words) as u32;
        }
    }

    /// Packs what the scratch holds, in canonical form. `words` must have [`Rules::words`] words.
    pub fn pack(&self, s: &mut Scratch, words: &mut [u64]) {
        let (tables, layout) = (&self.tables, &self.layout);
        words.fill(0);
        for (code, &anchor) in s.codes.iter_mut().zip(&s.at) {
            *code = match anchor {
                NONE => tables.places.len() as u16,
                cell => tables.place_of[usize::from(cell)],
            };
        }
        for class in &tables.classes {
            sort_few(&mut s.codes[class.slots.0..class.slots.1]);
        }
        for (field, &code) in layout.bodies.iter().zip(&s.codes) {
            field.add(words, usize::from(code));
        }
        for (spot, field) in tables.mutable.iter().zip(&layout.grounds) {
            let ground = s.ground[usize::from(spot.cell)];
            let option = spot.options.iter().position(|&option| option == ground);
            field.add(words, option.unwrap_or(0));
        }
        for (&left, field) in s.item_left.iter().zip(&layout.items) {
            field.add(words, usize::from(left));
        }
        for (&keys, field) in s.keys.iter().zip(&layout.keys) {
            field.add(words, keys as usize);
        }
    }
}

/// Sorts by insertion: a step leaves all but a few in order.
fn sort_few(codes: &mut [u16]) {
    for at in 1..codes.len() {
        let mut place = at;
        while place > 0 && codes[place - 1] > codes[place] {
            codes.swap(place - 1, place);
            place -= 1;
        }
    }
}
