//! What a kind without a picture looks like: small SVG drawings made from its `look`, or from its traits alone.
//!
//! The traits draw in layers on one tile of 64 by 64: a home that is also slick shows waves and a ring. Every trait has a
//! form of its own, so that none is told from another by colour; channels are told apart by pips, one for the first name in
//! the alphabet, two for the next. What is written here goes the same way as a picture file: it is rasterised once for each
//! size and then drawn as a texture.

use crate::level::{
    BodyKind, Channel, Dir, Drawing, GroundKind, Item, ItemKind, Mechanics, Opens, Role, Shape,
};
use std::collections::BTreeSet;
use std::fmt::Write;

const FLOOR: &str = "#2a3a34";
const FLOOR_EDGE: &str = "#22302b";
const INK: &str = "#b9cbc2";
const AMBER: &str = "#f2b84b";
const LEAF: &str = "#7ccf8f";
const SKY: &str = "#7fb7e6";
const CORAL: &str = "#f2806c";

/// Colours of cargo kinds in the order of the pack, told apart by their number of bands as well.
const CARGO: [(&str, &str); 5] = [
    ("#c7714f", "#8f4c33"),
    ("#b8a888", "#7d6f54"),
    ("#6f9fc4", "#47708f"),
    ("#a58cc9", "#715c91"),
    ("#9cb562", "#6b7f3e"),
];

fn svg(body: &str) -> String {
    format!(r#"<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 64 64">{body}</svg>"#)
}

fn floor() -> String {
    format!(
        r#"<rect width="64" height="64" fill="{FLOOR_EDGE}"/><rect x="1" y="1" width="62" height="62" rx="3" fill="{FLOOR}"/>"#
    )
}

/// The drawing of a ground kind from its traits.
pub fn ground(mechanics: &Mechanics, kind: &GroundKind) -> String {
    let mut body = floor();
    if kind.closed_to_all() {
        body.push_str(concat!(
            r##"<rect width="64" height="64" fill="#101816"/>"##,
            r##"<path d="M3 61V3H61" fill="none" stroke="#47605a" stroke-width="4"/>"##,
            r##"<path d="M61 3V61H3" fill="none" stroke="#080d0b" stroke-width="4"/>"##,
        ));
    } else {
        closed_to_some(kind, &mut body);
    }
    let pips = |channel: &Channel| channel_pips(mechanics, channel);
    if kind.slick {
        for y in [18, 32, 46] {
            let _ = write!(
                body,
                r#"<path d="M8 {y}q8-8 16 0t16 0t16 0" fill="none" stroke="{SKY}" stroke-width="3" stroke-linecap="round"/>"#
            );
        }
    }
    if kind.frail.is_some() {
        let _ = write!(
            body,
            r#"<path d="M6 20l14 6 8-8 10 16 -4 14 8 12M38 34l20-8M20 26l-4 20 6 14" fill="none" stroke="{INK}" stroke-width="2.5" stroke-linejoin="round"/>"#
        );
    }
    if kind.sink.is_some() {
        let _ = write!(
            body,
            r##"<circle cx="32" cy="32" r="24" fill="#070b0a" stroke="{INK}" stroke-width="3"/><circle cx="32" cy="32" r="15" fill="none" stroke="#3d524a" stroke-width="2.5"/>"##
        );
    }
    if let Some(channel) = &kind.plate {
        let _ = write!(
            body,
            r#"<rect x="13" y="13" width="38" height="38" rx="4" fill="none" stroke="{AMBER}" stroke-width="3.5"/><rect x="21" y="21" width="22" height="22" rx="3" fill="{AMBER}" opacity=".4"/>{}"#,
            pips(channel)
        );
    }
    if let Some(gate) = &kind.gate {
        body.push_str(&gate_bars(gate.opens));
        body.push_str(&pips(&gate.channel));
    }
    if let Some(channel) = &kind.warp {
        let _ = write!(
            body,
            r#"<g fill="none" stroke="{SKY}" stroke-width="3"><circle cx="32" cy="32" r="25"/><circle cx="32" cy="32" r="17" stroke-dasharray="9 5"/><circle cx="32" cy="32" r="9"/></g>{}"#,
            pips(channel)
        );
    }
    if let Some(lock) = &kind.lock {
        let _ = write!(
            body,
            r##"<rect x="14" y="6" width="36" height="54" rx="3" fill="#1b2824" stroke="{SKY}" stroke-width="3"/><circle cx="32" cy="30" r="5" fill="{SKY}"/><path d="M32 32l-4 13h8z" fill="{SKY}"/>{}"##,
            pips(&lock.channel)
        );
    }
    if !kind.home.is_empty() {
        body.push_str(&sun_ring());
    }
    if kind.exit {
        let _ = write!(
            body,
            r##"<path d="M14 60V28a18 18 0 0 1 36 0V60" fill="#0d1412" stroke="{LEAF}" stroke-width="4"/><path d="M32 54V34M24 41l8-8 8 8" fill="none" stroke="{LEAF}" stroke-width="4"/>"##
        );
    }
    for &dir in &kind.enter_only {
        body.push_str(&entry_arrow(dir, kind.enter_only.len() > 1));
    }
    svg(&body)
}

/// A ground that keeps out one role: that role's form, struck through.
fn closed_to_some(kind: &GroundKind, body: &mut String) {
    for role in &kind.closed_to {
        let form = match role {
            Role::Walker => r#"<circle cx="32" cy="32" r="13"/>"#,
            Role::Cargo => r#"<rect x="20" y="20" width="24" height="24" rx="3"/>"#,
        };
        let _ = write!(
            body,
            r#"<g fill="none" stroke="{CORAL}" stroke-width="3">{form}<path d="M14 50L50 14"/></g>"#
        );
    }
}

fn gate_bars(opens: Opens) -> String {
    // Open when held: whole bars, which drop away. Open when free: bars with a gap, which close.
    let bar = |x: u32| match opens {
        Opens::WhenHeld => format!("M{x} 6V58"),
        Opens::WhenFree => format!("M{x} 6V20M{x} 44V58"),
    };
    let bars: String = [14, 26, 38, 50].into_iter().map(bar).collect();
    format!(
        r#"<path d="{bars}" stroke="{AMBER}" stroke-width="5" stroke-linecap="round"/><path d="M6 10H58M6 54H58" stroke="{AMBER}" stroke-width="3"/>"#
    )
}

fn sun_ring() -> String {
    let rays: String = (0..8)
        .map(|at| {
            let (sin, cos) = (f64::from(at) * std::f64::consts::FRAC_PI_4).sin_cos();
            format!(
                "M{:.1} {:.1}L{:.1} {:.1}",
                32.0 + 22.5 * cos,
                32.0 + 22.5 * sin,
                32.0 + 28.5 * cos,
                32.0 + 28.5 * sin
            )
        })
        .collect();
    format!(
        r#"<circle cx="32" cy="32" r="17.5" fill="none" stroke="{LEAF}" stroke-width="3"/><path d="{rays}" stroke="{LEAF}" stroke-width="3" stroke-linecap="round"/>"#
    )
}

/// By how many quarter turns, clockwise, a drawing that faces east is turned to face `dir`.
pub fn quarter_turns(dir: Dir) -> u8 {
    match dir {
        Dir::E => 0,
        Dir::S => 1,
        Dir::W => 2,
        Dir::N => 3,
    }
}

fn entry_arrow(dir: Dir, one_of_several: bool) -> String {
    let turn = 90 * u32::from(quarter_turns(dir));
    let path = if one_of_several {
        "M44 24l9 8-9 8"
    } else {
        "M16 16l22 16-22 16M48 12V52"
    };
    format!(
        r#"<path transform="rotate({turn} 32 32)" d="{path}" fill="none" stroke="{INK}" stroke-width="4" stroke-linecap="round" stroke-linejoin="round"/>"#
    )
}

/// The drawing of a body kind from its traits, on nothing.
pub fn body(mechanics: &Mechanics, kind: &BodyKind) -> String {
    let alike: Vec<&BodyKind> = mechanics
        .bodies
        .iter()
        .filter(|other| other.role == kind.role)
        .collect();
    let place = alike
        .iter()
        .position(|other| other.id == kind.id)
        .unwrap_or_default();
    svg(&match kind.role {
        Role::Walker => walker(place),
        Role::Cargo => cargo(kind, place),
    })
}

/// A straw hat from above; the tail of its ribbon keeps it from being a mere disc.
fn walker(place: usize) -> String {
    let ribbon = ["#b5533c", "#3f6f9c", "#5d8a4a", "#7a5aa0"][place % 4];
    format!(
        r##"<circle cx="32" cy="32" r="23" fill="#e8cf92" stroke="#8d6f33" stroke-width="2"/><circle cx="32" cy="32" r="13" fill="{ribbon}"/><circle cx="32" cy="32" r="10" fill="#ddbb70"/><path d="M42 28l14-4-3 8 3 7-14-3z" fill="{ribbon}"/>"##
    )
}

fn cargo(kind: &BodyKind, place: usize) -> String {
    let (fill, edge) = CARGO[place % CARGO.len()];
    let mut body = format!(
        r#"<rect x="12" y="12" width="40" height="40" rx="6" fill="{fill}" stroke="{edge}" stroke-width="3"/><rect x="9" y="10" width="46" height="10" rx="4" fill="{edge}"/>"#
    );
    for band in 0..place % CARGO.len() {
        let y = 26 + 6 * band;
        let _ = write!(
            body,
            r#"<path d="M14 {y}H50" stroke="{edge}" stroke-width="2.5"/>"#
        );
    }
    if kind.fills {
        let _ = write!(
            body,
            r#"<path d="M12 44h40v4a6 6 0 0 1-6 6H18a6 6 0 0 1-6-6z" fill="{edge}"/>"#
        );
    }
    if kind.glide {
        body.push_str(r##"<g fill="#101816" stroke="#b9cbc2" stroke-width="2.5"><circle cx="20" cy="54" r="5"/><circle cx="44" cy="54" r="5"/></g>"##);
    }
    if kind.tow {
        let _ = write!(
            body,
            r#"<path d="M32 58v-8m0 0a6 6 0 1 0-6-6" fill="none" stroke="{INK}" stroke-width="3.5" stroke-linecap="round"/>"#
        );
    }
    if !kind.push {
        let _ = write!(
            body,
            r#"<path d="M18 30l28 16M46 30L18 46" stroke="{edge}" stroke-width="4"/>"#
        );
    }
    body
}

/// The drawing of an item kind, on nothing.
pub fn item(mechanics: &Mechanics, kind: &ItemKind) -> String {
    svg(&match &kind.item {
        Item::Gem => format!(
            r##"<path d="M32 14L50 32 32 50 14 32z" fill="{LEAF}" stroke="#2f6b3f" stroke-width="2.5"/><path d="M32 14L40 32 32 50 24 32z" fill="#c6f0cf"/>"##
        ),
        Item::Key(channel) => format!(
            r#"<g fill="none" stroke="{AMBER}" stroke-width="5" stroke-linecap="round"><circle cx="22" cy="26" r="9"/><path d="M29 32L50 50M42 43l5-6M48 49l4-5"/></g>{}"#,
            channel_pips(mechanics, channel)
        ),
    })
}

/// The drawing that a kind asks for by form and colours. A ground's stands on a floor, the others on nothing.
pub fn drawing(drawing: &Drawing, on_floor: bool) -> String {
    let fill = colour(&drawing.fill).unwrap_or(INK);
    let edge = drawing.edge.as_deref().and_then(colour);
    let stroke = edge.map_or(String::new(), |edge| {
        format!(r#" stroke="{edge}" stroke-width="3""#)
    });
    let line = |path: &str| {
        let under = edge.map_or(String::new(), |edge| {
            format!(r#"<path d="{path}" fill="none" stroke="{edge}" stroke-width="9" stroke-linecap="round"/>"#)
        });
        format!(
            r#"{under}<path d="{path}" fill="none" stroke="{fill}" stroke-width="5" stroke-linecap="round"/>"#
        )
    };
    let form = match drawing.shape {
        Shape::Full => {
            format!(r#"<rect x="0" y="0" width="64" height="64" fill="{fill}"{stroke}/>"#)
        }
        Shape::Disc => format!(r#"<circle cx="32" cy="32" r="22" fill="{fill}"{stroke}/>"#),
        Shape::Ring => format!(
            r#"{}<circle cx="32" cy="32" r="19" fill="none" stroke="{fill}" stroke-width="6"/>"#,
            edge.map_or(String::new(), |edge| format!(
                r#"<circle cx="32" cy="32" r="19" fill="none" stroke="{edge}" stroke-width="10"/>"#
            ))
        ),
        Shape::Square => {
            format!(r#"<rect x="12" y="12" width="40" height="40" rx="6" fill="{fill}"{stroke}/>"#)
        }
        Shape::Diamond => format!(r#"<path d="M32 8L56 32 32 56 8 32z" fill="{fill}"{stroke}/>"#),
        Shape::Bars => line("M12 16H52M12 32H52M12 48H52"),
        Shape::Waves => {
            line("M8 18q8-8 16 0t16 0t16 0M8 32q8-8 16 0t16 0t16 0M8 46q8-8 16 0t16 0t16 0")
        }
        Shape::Cross => line("M32 12V52M12 32H52"),
    };
    svg(&if on_floor { floor() + &form } else { form })
}

/// A colour as it may stand in a drawing: `#` and six hexadecimal digits, nothing else.
fn colour(text: &str) -> Option<&str> {
    let digits = text.strip_prefix('#')?;
    (digits.len() == 6 && digits.bytes().all(|byte| byte.is_ascii_hexdigit())).then_some(text)
}

/// One pip for the first channel of the pack, two for the second; none where there is but one channel.
fn channel_pips(mechanics: &Mechanics, channel: &Channel) -> String {
    let grounds = mechanics.grounds.iter().flat_map(|kind| {
        let gate = kind.gate.as_ref().map(|gate| &gate.channel);
        let lock = kind.lock.as_ref().map(|lock| &lock.channel);
        [kind.plate.as_ref(), gate, kind.warp.as_ref(), lock]
    });
    let all: BTreeSet<&Channel> = grounds.flatten().collect();
    let place = all.iter().position(|other| *other == channel);
    match place {
        Some(place) if all.len() > 1 => (0..=place.min(6))
            .map(|pip| {
                let x = 7 + 8 * pip;
                format!(r##"<circle cx="{x}" cy="57" r="3" fill="#ffffff" stroke="#101816"/>"##)
            })
            .collect(),
        _ => String::new(),
    }
}
