//! Kinds of any layer alike: their picture, their label, a new one.

use crate::desk::pictures::Kind;
use crate::level::{
    BodyIx, BodyKind, GroundIx, GroundKind, Item, ItemIx, ItemKind, KindId, KindRef, Layer,
    Mechanics, Pack, ReworkError, Role,
};

pub(super) fn picture_of(kind: KindRef) -> Kind {
    match kind.layer {
        Layer::Ground => Kind::Ground(GroundIx(kind.at)),
        Layer::Body => Kind::Body(BodyIx(kind.at)),
        Layer::Item => Kind::Item(ItemIx(kind.at)),
    }
}

pub(super) fn label_of(mechanics: &Mechanics, kind: KindRef) -> &str {
    let at = usize::from(kind.at);
    let label = match kind.layer {
        Layer::Ground => mechanics.grounds.get(at).map(|kind| &kind.label),
        Layer::Body => mechanics.bodies.get(at).map(|kind| &kind.label),
        Layer::Item => mechanics.items.get(at).map(|kind| &kind.label),
    };
    label.map_or("", String::as_str)
}

pub(super) fn set_label(mechanics: &mut Mechanics, kind: KindRef, label: String) {
    let at = usize::from(kind.at);
    match kind.layer {
        Layer::Ground => mechanics.grounds[at].label = label,
        Layer::Body => mechanics.bodies[at].label = label,
        Layer::Item => mechanics.items[at].label = label,
    }
}

/// The pack with a new kind of a layer.
pub(super) fn add(pack: &Pack, layer: Layer) -> Result<Pack, ReworkError> {
    let name = match layer {
        Layer::Ground => "new-ground",
        Layer::Body => "new-body",
        Layer::Item => "new-item",
    };
    let wanted = KindId::new(name).map_err(|_| ReworkError::Missing)?;
    let id = pack.mechanics.free_id(layer, &wanted);
    let label = id.as_str().replace('-', " ");
    match layer {
        Layer::Ground => pack.with_ground(GroundKind::plain(id, label)),
        Layer::Body => pack.with_body(BodyKind::plain(id, label, Role::Cargo)),
        Layer::Item => pack.with_item(ItemKind {
            id,
            label,
            look: None,
            item: Item::Gem,
        }),
    }
}
