//! The mechanics of a pack, from the records of the file; and what is refused in them.

use super::fault::Fault;
use super::locate::Turn::{self, At, Field, Key, Value};
use super::wire::{
    BodyWire, ClauseWire, Entries, GroundWire, ItemWire, LevelWire, LookWire, PackWire,
};
use crate::level::{
    BodyKind, Channel, Clause, Drawing, GroundKind, ItemKind, KindId, Legend, Lock, Look,
    Mechanics, Picture,
};
use std::collections::BTreeSet;

/// The most kinds of one layer.
const MOST_KINDS: usize = 1_000;

/// Takes the pack's record apart into its mechanics and the records of its levels.
pub(super) fn mechanics(wire: PackWire) -> Result<(Mechanics, Vec<LevelWire>), Fault> {
    let strength = match wire.strength {
        1..=255 => wire.strength as u8,
        _ => {
            let message = "The strength is a number from 1 to 255: the longest row of cargo that a walker can push.";
            return Err(Fault::new(&[Field("strength")], message));
        }
    };
    if wire.grounds.0.is_empty() {
        let message = "A pack needs at least one kind of ground. Add one, as in \"gravel\": (label: \"gravel\").";
        return Err(Fault::new(&[Field("grounds")], message));
    }
    let objective = clauses(wire.objective).map_err(|fault| fault.under(&[Field("objective")]))?;
    let mut mechanics = Mechanics {
        control: wire.control,
        strength,
        objective,
        grounds: kinds("grounds", wire.grounds, ground)?,
        bodies: kinds("bodies", wire.bodies, body)?,
        items: kinds("items", wire.items, item)?,
        legend: Legend::default(),
    };
    if let Some(fault) = super::links::first_fault(&mechanics) {
        return Err(fault);
    }
    let legend = wire.legend;
    let find = &mechanics;
    mechanics.legend = Legend {
        grounds: characters("grounds", "ground", legend.grounds, |id| {
            find.find_ground(id)
        })?,
        bodies: characters("bodies", "body", legend.bodies, |id| find.find_body(id))?,
        items: characters("items", "item", legend.items, |id| find.find_item(id))?,
    };
    Ok((mechanics, wire.levels))
}

pub(super) fn clauses(wire: Vec<ClauseWire>) -> Result<Vec<Clause>, Fault> {
    let clause = |(at, clause): (usize, ClauseWire)| {
        Ok(match clause {
            ClauseWire::HomesFilled => Clause::HomesFilled,
            ClauseWire::WalkersOut => Clause::WalkersOut,
            ClauseWire::GemsTaken => Clause::GemsTaken,
            ClauseWire::CargoHome(ids) => {
                let here = [At(at), At(0)];
                Clause::CargoHome(kind_ids(ids).map_err(|fault| fault.under(&here))?)
            }
        })
    };
    wire.into_iter().enumerate().map(clause).collect()
}

fn kind_id(text: String) -> Result<KindId, Fault> {
    KindId::new(text).map_err(|error| Fault::new(&[], format!("{error}.")))
}

fn kind_ids(texts: Vec<String>) -> Result<Vec<KindId>, Fault> {
    let one = |(at, text)| kind_id(text).map_err(|fault| fault.under(&[At(at)]));
    texts.into_iter().enumerate().map(one).collect()
}

fn kinds<Wire, Kind>(
    layer: &'static str,
    entries: Entries<String, Wire>,
    make: impl Fn(KindId, Wire) -> Result<Kind, Fault>,
) -> Result<Vec<Kind>, Fault> {
    let here = Field(layer);
    if entries.0.len() > MOST_KINDS {
        let message =
            format!("A pack has at most {MOST_KINDS} kinds in each layer. Take some out.");
        return Err(Fault::new(&[here, Key(MOST_KINDS)], message));
    }
    let mut seen = BTreeSet::new();
    let mut kinds = Vec::with_capacity(entries.0.len());
    for (at, (text, wire)) in entries.0.into_iter().enumerate() {
        let id = kind_id(text).map_err(|fault| fault.under(&[here, Key(at)]))?;
        if !seen.insert(id.clone()) {
            let message =
                format!("The id \"{id}\" is given twice in {layer}. Give each kind its own.");
            return Err(Fault::new(&[here, Key(at)], message));
        }
        kinds.push(make(id, wire).map_err(|fault| fault.under(&[here, Value(at)]))?);
    }
    Ok(kinds)
}

fn in_field<T>(field: &'static str, made: Result<T, Fault>) -> Result<T, Fault> {
    made.map_err(|fault| fault.under(&[Field(field)]))
}

fn optional_id(field: &'static str, id: Option<String>) -> Result<Option<KindId>, Fault> {
    in_field(field, id.map(kind_id).transpose())
}

fn ground(id: KindId, wire: GroundWire) -> Result<GroundKind, Fault> {
    let lock = match wire.lock {
        None => None,
        Some(lock) => Some(Lock {
            channel: Channel(lock.channel),
            becomes: in_field("lock", in_field("becomes", kind_id(lock.becomes)))?,
        }),
    };
    Ok(GroundKind {
        label: wire.label.unwrap_or_else(|| id.to_string()),
        id,
        look: look(wire.look)?,
        closed_to: wire.closed_to,
        enter_only: wire.enter_only,
        slick: wire.slick,
        sink: optional_id("sink", wire.sink)?,
        frail: optional_id("frail", wire.frail)?,
        plate: wire.plate.map(Channel),
        gate: wire.gate,
        warp: wire.warp.map(Channel),
        lock,
        home: in_field("home", kind_ids(wire.home))?,
        exit: wire.exit,
    })
}

fn body(id: KindId, wire: BodyWire) -> Result<BodyKind, Fault> {
    Ok(BodyKind {
        label: wire.label.unwrap_or_else(|| id.to_string()),
        id,
        look: look(wire.look)?,
        role: wire.role,
        push: wire.push,
        tow: wire.tow,
        glide: wire.glide,
        fills: wire.fills,
        presses: wire.presses,
        axis: wire.axis,
    })
}

fn item(id: KindId, wire: ItemWire) -> Result<ItemKind, Fault> {
    Ok(ItemKind {
        label: wire.label.unwrap_or_else(|| id.to_string()),
        id,
        look: look(wire.look)?,
        item: wire.item,
    })
}

/// A look is one of `(drawing: NAME)`, `(picture: PATH, tile: (W, H), at: (COLUMN, ROW))` and
/// `(shape: SHAPE, fill: COLOUR, edge: COLOUR)`; `tile`, `at` and `edge` may be left out.
fn look(wire: Option<LookWire>) -> Result<Option<Look>, Fault> {
    let Some(wire) = wire else { return Ok(None) };
    let given = |field: &'static str, there: bool| there.then_some(field);
    let of_picture = given("tile", wire.tile.is_some()).or(given("at", wire.at.is_some()));
    let of_shape = given("fill", wire.fill.is_some()).or(given("edge", wire.edge.is_some()));
    let (made, stray) = match (wire.drawing, wire.picture, wire.shape) {
        (Some(name), None, None) => (Look::BuiltIn(name), of_picture.or(of_shape)),
        (None, Some(path), None) => {
            let picture = Picture {
                path,
                tile: wire.tile,
                at: wire.at.unwrap_or_default(),
            };
            (Look::Picture(picture), of_shape)
        }
        (None, None, Some(shape)) => {
            let Some(fill) = wire.fill else {
                let message = "A shape needs its colour. Add fill, as in fill: \"#7ccf8f\".";
                return Err(Fault::new(&[Field("look")], message));
            };
            (
                Look::Drawing(Drawing {
                    shape,
                    fill,
                    edge: wire.edge,
                }),
                of_picture,
            )
        }
        _ => {
            let message = "A look has exactly one of drawing, picture and shape.";
            return Err(Fault::new(&[Field("look")], message));
        }
    };
    match stray {
        None => Ok(Some(made)),
        Some(field) => {
            let message = format!("The field {field} does not belong to this look. Take it out.");
            Err(Fault::new(&[Field("look"), Field(field)], message))
        }
    }
}

fn characters<Ix>(
    layer: &'static str,
    what: &str,
    entries: Entries<char, String>,
    find: impl Fn(&KindId) -> Option<Ix>,
) -> Result<Vec<(char, Ix)>, Fault> {
    let here = [Field("legend"), Field(layer)];
    let at_key = |at: usize, message: String| Fault::new(&[Key(at)], message).under(&here);
    let mut seen: BTreeSet<char> = BTreeSet::new();
    let mut legend = Vec::with_capacity(entries.0.len());
    for (at, (character, text)) in entries.0.into_iter().enumerate() {
        if character == '-' {
            let message = "The character '-' means nothing in a row. Use another one.";
            return Err(at_key(at, message.to_owned()));
        }
        if !seen.insert(character) {
            let message =
                format!("The character {character:?} is used twice for {layer}. Use another one.");
            return Err(at_key(at, message));
        }
        let at_value: [Turn; 1] = [Value(at)];
        let id = kind_id(text).map_err(|fault| fault.under(&at_value).under(&here))?;
        let Some(ix) = find(&id) else {
            let message = format!(
                "There is no {what} \"{id}\" in the pack. Add it to {layer}, or correct the name."
            );
            return Err(Fault::new(&at_value, message).under(&here));
        };
        legend.push((character, ix));
    }
    Ok(legend)
}
