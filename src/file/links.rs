//! What kinds say about each other: what is refused there, for files and for whoever edits kinds.

use super::fault::Fault;
use super::locate::Turn::{At, Field, Value};
use crate::level::{Clause, GroundKind, KindId, Look, Mechanics, Role};
use std::collections::BTreeMap;

/// The first reason why these mechanics make no pack, as a sentence; none if they do.
///
/// Whoever edits kinds asks this before a change is taken. A pack whose mechanics pass can be saved and opened again.
pub fn refusal(mechanics: &Mechanics) -> Option<String> {
    first_fault(mechanics).map(|fault| fault.message)
}

pub(super) fn first_fault(mechanics: &Mechanics) -> Option<Fault> {
    let grounds = mechanics.grounds.iter().enumerate().find_map(|(at, kind)| {
        let fault = one_of_four(kind)
            .or_else(|| becomes(mechanics, kind))
            .or_else(|| homes(mechanics, kind))
            .or_else(|| colours(kind.look.as_ref()));
        fault.map(|fault| fault.under(&[Field("grounds"), Value(at)]))
    });
    grounds
        .or_else(|| cycle(mechanics))
        .or_else(|| looks(mechanics))
        .or_else(|| {
            objective(mechanics, &mechanics.objective)
                .map(|fault| fault.under(&[Field("objective")]))
        })
}

fn looks(mechanics: &Mechanics) -> Option<Fault> {
    let bodies = mechanics.bodies.iter().map(|kind| &kind.look);
    let items = mechanics.items.iter().map(|kind| &kind.look);
    let bodies = bodies.enumerate().map(|(at, look)| ("bodies", at, look));
    let items = items.enumerate().map(|(at, look)| ("items", at, look));
    bodies.chain(items).find_map(|(layer, at, look)| {
        colours(look.as_ref()).map(|fault| fault.under(&[Field(layer), Value(at)]))
    })
}

fn colours(look: Option<&Look>) -> Option<Fault> {
    let Some(Look::Drawing(drawing)) = look else {
        return None;
    };
    let fill = (!is_colour(&drawing.fill)).then_some(("fill", drawing.fill.as_str()));
    let edge = || {
        drawing
            .edge
            .as_deref()
            .filter(|edge| !is_colour(edge))
            .map(|edge| ("edge", edge))
    };
    fill.or_else(edge).map(|(field, text)| {
        let message =
            format!("{text:?} is not a colour. Write it as \"#rrggbb\" with hexadecimal digits.");
        Fault::new(&[Field("look"), Field(field)], message)
    })
}

fn is_colour(text: &str) -> bool {
    text.strip_prefix('#').is_some_and(|digits| {
        digits.len() == 6 && digits.bytes().all(|digit| digit.is_ascii_hexdigit())
    })
}

fn one_of_four(kind: &GroundKind) -> Option<Fault> {
    let traits = [
        ("sink", kind.sink.is_some()),
        ("warp", kind.warp.is_some()),
        ("lock", kind.lock.is_some()),
        ("gate", kind.gate.is_some()),
    ];
    let given: Vec<&'static str> = traits
        .iter()
        .filter(|(_, there)| *there)
        .map(|(name, _)| *name)
        .collect();
    let (first, second) = (given.first()?, given.get(1)?);
    let message = format!(
        "\"{}\" has both {first} and {second}. A kind of ground has at most one of sink, warp, lock and gate.",
        kind.id
    );
    Some(Fault::new(&[Field(second)], message))
}

fn links(kind: &GroundKind) -> impl Iterator<Item = (&'static str, &KindId)> {
    let sink = kind.sink.iter().map(|id| ("sink", id));
    let frail = kind.frail.iter().map(|id| ("frail", id));
    let lock = kind.lock.iter().map(|lock| ("lock", &lock.becomes));
    sink.chain(frail).chain(lock)
}

fn fault_of_link(field: &'static str, message: String) -> Fault {
    match field {
        "lock" => Fault::new(&[Field("lock"), Field("becomes")], message),
        _ => Fault::new(&[Field(field)], message),
    }
}

fn becomes(mechanics: &Mechanics, kind: &GroundKind) -> Option<Fault> {
    links(kind).find_map(|(field, id)| {
        let message = match mechanics.find_ground(id).map(|ix| mechanics.ground(ix)) {
            None => format!("There is no ground \"{id}\" in the pack for {field} to become. Add it, or name another."),
            Some(to) if to.warp.is_some() => {
                format!("By {field} the ground would become \"{id}\", which is a warp. Name one that is not.")
            }
            Some(to) if field == "lock" && to.sink.is_some() => {
                format!("The lock would become \"{id}\", which is a sink. Name a ground that is not.")
            }
            Some(_) => return None,
        };
        Some(fault_of_link(field, message))
    })
}

/// Whether ground of some kind can in the end become itself again, reported at the first such kind of the pack.
fn cycle(mechanics: &Mechanics) -> Option<Fault> {
    let places: BTreeMap<&KindId, usize> = mechanics
        .grounds
        .iter()
        .enumerate()
        .map(|(at, kind)| (&kind.id, at))
        .collect();
    let next = |at: usize| {
        mechanics.grounds[at]
            .becomes()
            .filter_map(|id| places.get(id).copied())
    };
    mechanics.grounds.iter().enumerate().find_map(|(at, kind)| {
        let mut seen = vec![false; mechanics.grounds.len()];
        let leads_back = |id: &KindId, seen: &mut [bool]| {
            let mut open: Vec<usize> = places.get(id).copied().into_iter().collect();
            while let Some(here) = open.pop() {
                if here == at {
                    return true;
                }
                if !std::mem::replace(&mut seen[here], true) {
                    open.extend(next(here));
                }
            }
            false
        };
        let (field, _) = links(kind).find(|(_, id)| leads_back(id, &mut seen))?;
        let message = format!(
            "By {field} \"{}\" would in the end become itself again. Break the circle of sink, frail and lock.",
            kind.id
        );
        Some(fault_of_link(field, message).under(&[Field("grounds"), Value(at)]))
    })
}

fn homes(mechanics: &Mechanics, kind: &GroundKind) -> Option<Fault> {
    cargo_ids(mechanics, &kind.home).map(|fault| fault.under(&[Field("home")]))
}

/// What is wrong with an objective: a clause that names what is no cargo of the pack.
pub(super) fn objective(mechanics: &Mechanics, clauses: &[Clause]) -> Option<Fault> {
    clauses
        .iter()
        .enumerate()
        .find_map(|(at, clause)| match clause {
            Clause::CargoHome(ids) => {
                cargo_ids(mechanics, ids).map(|fault| fault.under(&[At(at), At(0)]))
            }
            _ => None,
        })
}

fn cargo_ids(mechanics: &Mechanics, ids: &[KindId]) -> Option<Fault> {
    ids.iter().enumerate().find_map(|(at, id)| {
        let message = match mechanics.find_body(id).map(|ix| mechanics.body(ix).role) {
            None => format!(
                "There is no body \"{id}\" in the pack. Add it to bodies, or correct the name."
            ),
            Some(Role::Walker) => {
                format!("\"{id}\" is a walker, and only cargo has homes. Name cargo.")
            }
            Some(Role::Cargo) => return None,
        };
        Some(Fault::new(&[At(at)], message))
    })
}
