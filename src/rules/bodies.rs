//! The bodies of a level sorted into classes of interchangeable ones.

use super::tables::{Body, Class};
use crate::level::{BodyIx, BodyKind, Level, Mechanics, Role};

fn body(kind: &BodyKind, ix: BodyIx, class: u16) -> Body {
    let walker = kind.role == Role::Walker;
    Body {
        kind: ix,
        walker,
        push: kind.push && !walker,
        tow: kind.tow && !walker,
        glide: kind.glide && !walker,
        fills: kind.fills && !walker,
        presses: kind.presses,
        axis: kind.axis,
        class,
    }
}

pub(super) type Sorted = (Vec<Class>, Vec<Body>, Vec<u16>, Vec<u16>);

/// Bodies by kind, then shape, then anchor: classes, and kind, anchor and number of the body in each slot.
pub(super) fn sort_bodies(mechanics: &Mechanics, level: &Level) -> Sorted {
    let size = level.size;
    let sinks = mechanics.grounds.iter().any(|kind| kind.sink.is_some());
    let mut all: Vec<(BodyIx, Vec<i32>, u16, u16)> = Vec::new();
    for (number, block) in level.bodies_in_order().iter().enumerate() {
        let mut cells: Vec<i32> = block
            .cells
            .iter()
            .map(|&cell| size.index(cell) as i32)
            .collect();
        cells.sort_unstable();
        cells.dedup();
        let Some(&anchor) = cells.first() else {
            continue;
        };
        let shape = cells.iter().map(|cell| cell - anchor).collect();
        all.push((block.kind, shape, anchor as u16, number as u16));
    }
    all.sort();
    let (mut classes, mut bodies): (Vec<Class>, Vec<Body>) = (Vec::new(), Vec::new());
    let (mut start_at, mut numbers) = (Vec::new(), Vec::new());
    for (kind, shape, anchor, number) in all {
        let slot = bodies.len();
        let known = classes
            .last()
            .is_some_and(|class| class.kind == kind && class.shape == shape);
        if !known {
            let fills = mechanics.body(kind).fills && mechanics.body(kind).role == Role::Cargo;
            classes.push(Class {
                kind,
                can_vanish: fills && sinks && shape.len() == 1,
                shape,
                slots: (slot, slot),
            });
        }
        let class = classes.len() - 1;
        classes[class].slots.1 = slot + 1;
        bodies.push(body(mechanics.body(kind), kind, class as u16));
        start_at.push(anchor);
        numbers.push(number);
    }
    (classes, bodies, start_at, numbers)
}
