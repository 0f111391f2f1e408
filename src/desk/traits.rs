//! The traits of a kind in words, for tooltips.

use super::state::Brush;
use crate::level::{Axis, BodyKind, Dir, GroundKind, Item, KindId, Mechanics, Opens, Role};

/// What a kind does, one line a trait.
pub fn describe(mechanics: &Mechanics, brush: Brush) -> Vec<String> {
    match brush {
        Brush::Ground(ix) => ground(mechanics, mechanics.ground(ix)),
        Brush::Body(ix) => body(mechanics.body(ix)),
        Brush::Item(ix) => vec![match &mechanics.item(ix).item {
            Item::Gem => "to be taken by a walker".to_owned(),
            Item::Key(channel) => format!("opens one lock of channel {channel}"),
        }],
        Brush::Clear => vec!["takes away what stands there, then the ground".to_owned()],
    }
}

fn ground(mechanics: &Mechanics, kind: &GroundKind) -> Vec<String> {
    let label = |id: &KindId| match mechanics.find_ground(id) {
        Some(ix) => mechanics.ground(ix).label.clone(),
        None => id.to_string(),
    };
    let mut lines = Vec::new();
    match (
        kind.closed_to.contains(&Role::Walker),
        kind.closed_to.contains(&Role::Cargo),
    ) {
        (true, true) => lines.push("closed to everything".to_owned()),
        (true, false) => lines.push("closed to walkers".to_owned()),
        (false, true) => lines.push("closed to cargo".to_owned()),
        (false, false) => {}
    }
    if !kind.enter_only.is_empty() {
        let ways: Vec<&str> = kind.enter_only.iter().map(|&dir| heading(dir)).collect();
        lines.push(format!("entered only when moving {}", ways.join(" or ")));
    }
    if kind.slick {
        lines.push("what enters keeps moving".to_owned());
    }
    if let Some(becomes) = &kind.sink {
        lines.push(format!(
            "swallows cargo that fills, and becomes {}",
            label(becomes)
        ));
    }
    if let Some(becomes) = &kind.frail {
        lines.push(format!("becomes {} when left", label(becomes)));
    }
    if let Some(channel) = &kind.plate {
        lines.push(format!(
            "holds channel {channel} while something stands on it"
        ));
    }
    if let Some(gate) = &kind.gate {
        let when = match gate.opens {
            Opens::WhenHeld => "is held",
            Opens::WhenFree => "is not held",
        };
        lines.push(format!("open while channel {} {when}", gate.channel));
    }
    if let Some(channel) = &kind.warp {
        lines.push(format!("leads to the other cell of channel {channel}"));
    }
    if let Some(lock) = &kind.lock {
        let becomes = label(&lock.becomes);
        lines.push(format!(
            "takes a key of channel {}, and becomes {becomes}",
            lock.channel
        ));
    }
    if !kind.home.is_empty() {
        let wanted: Vec<String> = kind.home.iter().map(ToString::to_string).collect();
        lines.push(format!("home of {}", wanted.join(", ")));
    }
    if kind.exit {
        lines.push("where walkers are wanted at the end".to_owned());
    }
    if lines.is_empty() {
        lines.push("plain".to_owned());
    }
    lines
}

fn body(kind: &BodyKind) -> Vec<String> {
    let mut lines = vec![match kind.role {
        Role::Walker => "moved by the player".to_owned(),
        Role::Cargo if kind.push => "can be pushed".to_owned(),
        Role::Cargo => "can't be pushed".to_owned(),
    }];
    let mut note = |holds: bool, text: &str| {
        if holds {
            lines.push(text.to_owned());
        }
    };
    note(kind.tow, "follows a walker that steps away");
    note(kind.glide, "keeps moving when shoved");
    note(kind.fills, "fills sinks");
    note(!kind.presses, "holds no plate");
    match kind.axis {
        Some(Axis::Any) => note(true, "dragged in all directions"),
        Some(Axis::Row) => note(true, "dragged left and right"),
        Some(Axis::Column) => note(true, "dragged up and down"),
        None => {}
    }
    lines
}

fn heading(dir: Dir) -> &'static str {
    match dir {
        Dir::N => "up",
        Dir::E => "right",
        Dir::S => "down",
        Dir::W => "left",
    }
}
