//! Changing the kinds of a pack with its levels following: add, duplicate, rename, move, remove.
//!
//! Levels and legend refer to kinds by index, kinds to each other by id. Each change here keeps both true at once and
//! returns a new pack, so that it is one undo entry like any other.

use super::kinds::{
    BodyIx, BodyKind, Clause, GroundIx, GroundKind, ItemIx, ItemKind, KindId, Mechanics,
};
use super::pack::{Level, Pack};
use std::sync::Arc;
use thiserror::Error;

/// One of the three layers of a board.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Layer {
    /// Grounds.
    Ground,
    /// Bodies.
    Body,
    /// Items.
    Item,
}

/// A kind of a pack: its layer and its place there.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct KindRef {
    /// Which layer.
    pub layer: Layer,
    /// Which place in the list of its layer.
    pub at: u16,
}

/// Where a kind is used.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Uses {
    /// Number of cells (blocks count once) in each level that has any: (index of the level, cells).
    pub levels: Vec<(usize, usize)>,
    /// Kinds that name it: what they become, or what they are a home for.
    pub kinds: Vec<KindId>,
    /// Whether an objective names it.
    pub objective: bool,
}

impl Uses {
    /// Whether nothing refers to it.
    pub fn none(&self) -> bool {
        self.levels.is_empty() && self.kinds.is_empty() && !self.objective
    }
}

/// Why a change of the kinds is refused.
#[derive(Clone, Debug, Error, PartialEq, Eq)]
pub enum ReworkError {
    /// The id is taken.
    #[error("there is a kind called {0} already; choose another id")]
    Taken(KindId),
    /// There is no such kind.
    #[error("there is no such kind")]
    Missing,
    /// Nothing was named to take its place.
    #[error("{0} is still used; choose what takes its place")]
    InUse(KindId),
    /// The last ground.
    #[error("a pack needs at least one kind of ground")]
    LastGround,
}

/// What may stand in a layer, so that one piece of code serves all three.
trait Kind: Clone {
    fn id(&self) -> &KindId;
    fn set_id(&mut self, id: KindId);
}

macro_rules! kind {
    ($kind:ty) => {
        impl Kind for $kind {
            fn id(&self) -> &KindId {
                &self.id
            }
            fn set_id(&mut self, id: KindId) {
                self.id = id;
            }
        }
    };
}
kind!(GroundKind);
kind!(BodyKind);
kind!(ItemKind);

impl Mechanics {
    /// The id of a kind.
    pub fn kind_id(&self, kind: KindRef) -> Option<&KindId> {
        let at = usize::from(kind.at);
        match kind.layer {
            Layer::Ground => self.grounds.get(at).map(Kind::id),
            Layer::Body => self.bodies.get(at).map(Kind::id),
            Layer::Item => self.items.get(at).map(Kind::id),
        }
    }

    /// Number of kinds of a layer.
    pub fn kind_count(&self, layer: Layer) -> usize {
        match layer {
            Layer::Ground => self.grounds.len(),
            Layer::Body => self.bodies.len(),
            Layer::Item => self.items.len(),
        }
    }

    /// An id of this layer that is not taken: `wanted` itself, or with the least number that makes it new.
    pub fn free_id(&self, layer: Layer, wanted: &KindId) -> KindId {
        let taken = |id: &KindId| {
            (0..self.kind_count(layer)).any(|at| {
                self.kind_id(KindRef {
                    layer,
                    at: at as u16,
                }) == Some(id)
            })
        };
        let numbered =
            (2_u32..).filter_map(|number| KindId::new(format!("{wanted}-{number}")).ok());
        std::iter::once(wanted.clone())
            .chain(numbered)
            .find(|id| !taken(id))
            .unwrap_or_else(|| wanted.clone())
    }

    fn check_free(&self, layer: Layer, id: &KindId) -> Result<(), ReworkError> {
        if self.free_id(layer, id) == *id {
            Ok(())
        } else {
            Err(ReworkError::Taken(id.clone()))
        }
    }
}

impl Pack {
    /// Where a kind is used.
    pub fn uses(&self, kind: KindRef) -> Uses {
        let Some(id) = self.mechanics.kind_id(kind) else {
            return Uses::default();
        };
        let mechanics = &*self.mechanics;
        let cells = |level: &Level| match kind.layer {
            Layer::Ground => level
                .ground
                .iter()
                .filter(|ground| ground.0 == kind.at)
                .count(),
            Layer::Body => level
                .bodies_in_order()
                .iter()
                .filter(|body| body.kind.0 == kind.at)
                .count(),
            Layer::Item => level
                .items
                .iter()
                .flatten()
                .filter(|item| item.0 == kind.at)
                .count(),
        };
        let levels = self
            .levels
            .iter()
            .enumerate()
            .map(|(at, level)| (at, cells(level)))
            .filter(|&(_, cells)| cells > 0);
        let names = |ground: &&GroundKind| match kind.layer {
            Layer::Ground => ground.becomes().any(|other| other == id) && ground.id != *id,
            Layer::Body => ground.home.contains(id),
            Layer::Item => false,
        };
        let clauses = self
            .levels
            .iter()
            .filter_map(|level| level.objective.as_ref())
            .flatten()
            .chain(&mechanics.objective);
        let asks = |clause: &Clause| matches!(clause, Clause::CargoHome(ids) if kind.layer == Layer::Body && ids.contains(id));
        Uses {
            levels: levels.collect(),
            kinds: mechanics
                .grounds
                .iter()
                .filter(names)
                .map(|ground| ground.id.clone())
                .collect(),
            objective: clauses.into_iter().any(asks),
        }
    }

    /// The pack with one ground more, at the end.
    ///
    /// # Errors
    /// If its id is taken.
    pub fn with_ground(&self, kind: GroundKind) -> Result<Pack, ReworkError> {
        self.mechanics.check_free(Layer::Ground, &kind.id)?;
        Ok(self.with_mechanics(|mechanics| mechanics.grounds.push(kind)))
    }

    /// The pack with one body more, at the end.
    ///
    /// # Errors
    /// If its id is taken.
    pub fn with_body(&self, kind: BodyKind) -> Result<Pack, ReworkError> {
        self.mechanics.check_free(Layer::Body, &kind.id)?;
        Ok(self.with_mechanics(|mechanics| mechanics.bodies.push(kind)))
    }

    /// The pack with one item more, at the end.
    ///
    /// # Errors
    /// If its id is taken.
    pub fn with_item(&self, kind: ItemKind) -> Result<Pack, ReworkError> {
        self.mechanics.check_free(Layer::Item, &kind.id)?;
        Ok(self.with_mechanics(|mechanics| mechanics.items.push(kind)))
    }

    /// The pack with a copy of a kind, at the end, under a free id.
    ///
    /// # Errors
    /// If there is no such kind.
    pub fn with_copy(&self, kind: KindRef) -> Result<Pack, ReworkError> {
        let wanted = self.mechanics.kind_id(kind).ok_or(ReworkError::Missing)?;
        let id = self.mechanics.free_id(kind.layer, wanted);
        Ok(self.with_mechanics(|mechanics| match kind.layer {
            Layer::Ground => copy(&mut mechanics.grounds, kind.at, id),
            Layer::Body => copy(&mut mechanics.bodies, kind.at, id),
            Layer::Item => copy(&mut mechanics.items, kind.at, id),
        }))
    }

    /// The pack with a kind under another id; everything that names it follows.
    ///
    /// # Errors
    /// If there is no such kind or the id is taken.
    pub fn renamed(&self, kind: KindRef, id: KindId) -> Result<Pack, ReworkError> {
        let old = self
            .mechanics
            .kind_id(kind)
            .ok_or(ReworkError::Missing)?
            .clone();
        if old == id {
            return Ok(self.clone());
        }
        self.mechanics.check_free(kind.layer, &id)?;
        let at = usize::from(kind.at);
        let mut pack = self.with_mechanics(|mechanics| match kind.layer {
            Layer::Ground => mechanics.grounds[at].set_id(id.clone()),
            Layer::Body => mechanics.bodies[at].set_id(id.clone()),
            Layer::Item => mechanics.items[at].set_id(id.clone()),
        });
        pack.rename_links(kind.layer, &old, Some(&id));
        Ok(pack)
    }

    /// The pack with a kind moved to another place of its list.
    ///
    /// # Errors
    /// If there is no such kind.
    pub fn moved(&self, kind: KindRef, to: u16) -> Result<Pack, ReworkError> {
        let count = self.mechanics.kind_count(kind.layer) as u16;
        if kind.at >= count {
            return Err(ReworkError::Missing);
        }
        let to = to.min(count - 1);
        let mut order: Vec<u16> = (0..count).filter(|&at| at != kind.at).collect();
        order.insert(usize::from(to), kind.at);
        let place = |old: u16| order.iter().position(|&at| at == old).map(|at| at as u16);
        let mut pack = self.with_mechanics(|mechanics| match kind.layer {
            Layer::Ground => shift(&mut mechanics.grounds, kind.at, to),
            Layer::Body => shift(&mut mechanics.bodies, kind.at, to),
            Layer::Item => shift(&mut mechanics.items, kind.at, to),
        });
        pack.replace_places(kind.layer, place);
        Ok(pack)
    }

    /// The pack without a kind. On the boards and in other kinds `instead` takes its place; without one, bodies and items
    /// vanish, and so do homes and objectives for it.
    ///
    /// # Errors
    /// If there is no such kind, if it is the last ground, or if a ground that is used has nothing to take its place.
    pub fn without(&self, kind: KindRef, instead: Option<u16>) -> Result<Pack, ReworkError> {
        let old = self
            .mechanics
            .kind_id(kind)
            .ok_or(ReworkError::Missing)?
            .clone();
        let instead = instead
            .filter(|&at| at != kind.at && usize::from(at) < self.mechanics.kind_count(kind.layer));
        if kind.layer == Layer::Ground && self.mechanics.grounds.len() == 1 {
            return Err(ReworkError::LastGround);
        }
        if kind.layer == Layer::Ground && instead.is_none() && !self.uses(kind).none() {
            return Err(ReworkError::InUse(old));
        }
        let heir = instead
            .and_then(|at| {
                self.mechanics.kind_id(KindRef {
                    layer: kind.layer,
                    at,
                })
            })
            .cloned();
        let at = usize::from(kind.at);
        let mut pack = self.with_mechanics(|mechanics| match kind.layer {
            Layer::Ground => drop(mechanics.grounds.remove(at)),
            Layer::Body => drop(mechanics.bodies.remove(at)),
            Layer::Item => drop(mechanics.items.remove(at)),
        });
        let legend = pack.mechanics_mut();
        match kind.layer {
            Layer::Ground => legend.legend.grounds.retain(|(_, ix)| ix.0 != kind.at),
            Layer::Body => legend.legend.bodies.retain(|(_, ix)| ix.0 != kind.at),
            Layer::Item => legend.legend.items.retain(|(_, ix)| ix.0 != kind.at),
        }
        let closed_up = |place: u16| if place > kind.at { place - 1 } else { place };
        pack.replace_places(kind.layer, |place| {
            if place == kind.at {
                instead.map(closed_up)
            } else {
                Some(closed_up(place))
            }
        });
        pack.rename_links(kind.layer, &old, heir.as_ref());
        Ok(pack)
    }

    fn with_mechanics(&self, change: impl FnOnce(&mut Mechanics)) -> Pack {
        let mut pack = self.clone();
        change(pack.mechanics_mut());
        pack
    }

    fn mechanics_mut(&mut self) -> &mut Mechanics {
        Arc::make_mut(&mut self.mechanics)
    }

    /// Every reference by place goes through `place`; none takes the body or item away.
    fn replace_places(&mut self, layer: Layer, place: impl Fn(u16) -> Option<u16>) {
        let legend = &mut self.mechanics_mut().legend;
        match layer {
            Layer::Ground => replace_in_legend(&mut legend.grounds, |ix| place(ix.0).map(GroundIx)),
            Layer::Body => replace_in_legend(&mut legend.bodies, |ix| place(ix.0).map(BodyIx)),
            Layer::Item => replace_in_legend(&mut legend.items, |ix| place(ix.0).map(ItemIx)),
        }
        for level in &mut self.levels {
            let level = Arc::make_mut(level);
            match layer {
                Layer::Ground => level
                    .ground
                    .iter_mut()
                    .for_each(|ground| ground.0 = place(ground.0).unwrap_or(0)),
                Layer::Item => level
                    .items
                    .iter_mut()
                    .for_each(|item| *item = item.and_then(|item| place(item.0)).map(ItemIx)),
                Layer::Body => {
                    level
                        .bodies
                        .iter_mut()
                        .for_each(|body| *body = body.and_then(|body| place(body.0)).map(BodyIx));
                    level.blocks.retain(|block| place(block.kind.0).is_some());
                    level
                        .blocks
                        .iter_mut()
                        .for_each(|block| block.kind.0 = place(block.kind.0).unwrap_or(0));
                }
            }
        }
    }

    /// Every reference by id to `old` goes to `new`; without one it is dropped.
    fn rename_links(&mut self, layer: Layer, old: &KindId, new: Option<&KindId>) {
        let relink = |ids: &mut Vec<KindId>| {
            let linked = ids.contains(old);
            ids.retain(|id| id != old && Some(id) != new.filter(|_| linked));
            ids.extend(new.filter(|_| linked).cloned());
        };
        let mechanics = self.mechanics_mut();
        if layer == Layer::Ground {
            for ground in &mut mechanics.grounds {
                let lock = ground.lock.as_mut().map(|lock| &mut lock.becomes);
                let links = ground
                    .sink
                    .iter_mut()
                    .chain(ground.frail.iter_mut())
                    .chain(lock);
                links
                    .filter(|id| *id == old)
                    .for_each(|id| id.clone_from(new.unwrap_or(old)));
            }
        }
        if layer == Layer::Body {
            mechanics
                .grounds
                .iter_mut()
                .for_each(|ground| relink(&mut ground.home));
            let in_clause = |clause: &mut Clause| {
                if let Clause::CargoHome(ids) = clause {
                    relink(ids);
                }
            };
            mechanics.objective.iter_mut().for_each(in_clause);
            for level in &mut self.levels {
                if level.objective.is_some() {
                    Arc::make_mut(level)
                        .objective
                        .iter_mut()
                        .flatten()
                        .for_each(in_clause);
                }
            }
        }
    }
}

fn copy<K: Kind>(kinds: &mut Vec<K>, at: u16, id: KindId) {
    let mut kind = kinds[usize::from(at)].clone();
    kind.set_id(id);
    kinds.push(kind);
}

fn shift<K>(kinds: &mut Vec<K>, from: u16, to: u16) {
    let kind = kinds.remove(usize::from(from));
    kinds.insert(usize::from(to), kind);
}

/// A character whose kind is taken away goes with it; if its heir has one already, that one stays.
fn replace_in_legend<Ix: Copy + PartialEq>(
    legend: &mut Vec<(char, Ix)>,
    place: impl Fn(Ix) -> Option<Ix>,
) {
    let mut kept: Vec<(char, Ix)> = Vec::new();
    for &(letter, ix) in legend.iter() {
        if let Some(ix) = place(ix)
            && !kept.iter().any(|&(_, other)| other == ix)
        {
            kept.push((letter, ix));
        }
    }
    *legend = kept;
}

#[cfg(test)]
mod tests;
