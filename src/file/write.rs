//! Packs to text, laid out for people: one kind a line, one row a line, defaults left out, always in the same order.

use super::legend::complete_legend;
use crate::level::{
    BodyKind, Clause, Control, GroundKind, Item, ItemKind, KindId, Legend, Level, Look, Mechanics,
    Pack, Par, Route,
};
use std::fmt::Write;

/// The text of a pack file.
///
/// `preamble` holds comments that go before the pack, as [`super::ReadPack::preamble`] has them; anything else than
/// comments in it is left out. Kinds that stand on a board and have no character in the legend get one. Reading the text
/// gives the same pack (with the legend so completed), and writing that gives the same text.
pub fn write_pack(pack: &Pack, preamble: &str) -> String {
    let mechanics = &*pack.mechanics;
    let legend = complete_legend(pack);
    let mut out = comments_only(preamble);
    out.push_str("(\n    format: 1,\n");
    line(&mut out, 1, &format!("name: {}", quoted(&pack.name)));
    line(&mut out, 1, &format!("control: {:?}", mechanics.control));
    if mechanics.control == Control::Steer || mechanics.strength != 1 {
        line(&mut out, 1, &format!("strength: {}", mechanics.strength));
    }
    line(
        &mut out,
        1,
        &format!("objective: {}", objective(&mechanics.objective)),
    );
    kinds(
        &mut out,
        "grounds",
        mechanics
            .grounds
            .iter()
            .map(|kind| (&kind.id, ground(kind))),
    );
    kinds(
        &mut out,
        "bodies",
        mechanics.bodies.iter().map(|kind| (&kind.id, body(kind))),
    );
    kinds(
        &mut out,
        "items",
        mechanics.items.iter().map(|kind| (&kind.id, item(kind))),
    );
    write_legend(&mut out, mechanics, &legend);
    if pack.levels.is_empty() {
        line(&mut out, 1, "levels: []");
    } else {
        out.push_str("    levels: [\n");
        for one in &pack.levels {
            level(&mut out, mechanics, &legend, one);
        }
        out.push_str("    ],\n");
    }
    out.push_str(")\n");
    out
}

fn comments_only(preamble: &str) -> String {
    let (comments, _) = super::read::comments(preamble);
    comments
}

/// One line with a comma, `depth` levels of four spaces in.
fn line(out: &mut String, depth: usize, text: &str) {
    out.extend(std::iter::repeat_n("    ", depth));
    out.push_str(text);
    out.push_str(",\n");
}

pub(super) fn quoted(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 2);
    out.push('"');
    for c in text.chars() {
        match c {
            '\'' => out.push(c),
            // Marks that combine with the letter before them are text like any other.
            c if c.is_control()
                || matches!(c, '"' | '\\' | '\u{2028}' | '\u{2029}' | '\u{feff}') =>
            {
                out.extend(c.escape_default());
            }
            c => out.push(c),
        }
    }
    out.push('"');
    out
}

fn list<T>(items: &[T], text: impl Fn(&T) -> String) -> String {
    let parts: Vec<String> = items.iter().map(text).collect();
    format!("[{}]", parts.join(", "))
}

fn ids(ids: &[KindId]) -> String {
    list(ids, |id| quoted(id.as_str()))
}

fn objective(clauses: &[Clause]) -> String {
    list(clauses, |clause| match clause {
        Clause::HomesFilled => "HomesFilled".to_owned(),
        Clause::CargoHome(kinds) => format!("CargoHome({})", ids(kinds)),
        Clause::WalkersOut => "WalkersOut".to_owned(),
        Clause::GemsTaken => "GemsTaken".to_owned(),
    })
}

fn kinds<'a>(out: &mut String, layer: &str, kinds: impl Iterator<Item = (&'a KindId, String)>) {
    let mut kinds = kinds.peekable();
    if kinds.peek().is_none() {
        return;
    }
    let _ = writeln!(out, "    {layer}: {{");
    for (id, kind) in kinds {
        line(out, 2, &format!("{}: ({kind})", quoted(id.as_str())));
    }
    out.push_str("    },\n");
}

/// Fields of a record, those that are given.
#[derive(Default)]
struct Fields(Vec<String>);

impl Fields {
    fn add(&mut self, name: &str, value: Option<String>) {
        self.0.extend(value.map(|value| format!("{name}: {value}")));
    }

    fn flag(&mut self, name: &str, value: bool, default: bool) {
        self.add(name, (value != default).then(|| value.to_string()));
    }

    fn text(self) -> String {
        self.0.join(", ")
    }
}

fn described(label: &str) -> Fields {
    Fields(vec![format!("label: {}", quoted(label))])
}

fn ground(kind: &GroundKind) -> String {
    let id = |id: &Option<KindId>| id.as_ref().map(|id| quoted(id.as_str()));
    let mut fields = described(&kind.label);
    let roles = list(&kind.closed_to, |role| format!("{role:?}"));
    fields.add("closed_to", (!kind.closed_to.is_empty()).then_some(roles));
    let dirs = list(&kind.enter_only, |dir| format!("{dir:?}"));
    fields.add("enter_only", (!kind.enter_only.is_empty()).then_some(dirs));
    fields.flag("slick", kind.slick, false);
    fields.add("sink", id(&kind.sink));
    fields.add("frail", id(&kind.frail));
    fields.add(
        "plate",
        kind.plate.as_ref().map(|channel| quoted(&channel.0)),
    );
    let gate = |gate: &crate::level::Gate| {
        format!(
            "(channel: {}, opens: {:?})",
            quoted(&gate.channel.0),
            gate.opens
        )
    };
    fields.add("gate", kind.gate.as_ref().map(gate));
    fields.add("warp", kind.warp.as_ref().map(|channel| quoted(&channel.0)));
    let lock = |lock: &crate::level::Lock| {
        format!(
            "(channel: {}, becomes: {})",
            quoted(&lock.channel.0),
            quoted(lock.becomes.as_str())
        )
    };
    fields.add("lock", kind.lock.as_ref().map(lock));
    fields.add("home", (!kind.home.is_empty()).then(|| ids(&kind.home)));
    fields.flag("exit", kind.exit, false);
    fields.add("look", kind.look.as_ref().map(look));
    fields.text()
}

fn body(kind: &BodyKind) -> String {
    let mut fields = described(&kind.label);
    fields.add("role", Some(format!("{:?}", kind.role)));
    fields.flag("push", kind.push, true);
    fields.flag("tow", kind.tow, false);
    fields.flag("glide", kind.glide, false);
    fields.flag("fills", kind.fills, false);
    fields.flag("presses", kind.presses, true);
    fields.add("axis", kind.axis.map(|axis| format!("{axis:?}")));
    fields.add("look", kind.look.as_ref().map(look));
    fields.text()
}

fn item(kind: &ItemKind) -> String {
    let mut fields = described(&kind.label);
    fields.add(
        "item",
        Some(match &kind.item {
            Item::Gem => "Gem".to_owned(),
            Item::Key(channel) => format!("Key({})", quoted(&channel.0)),
        }),
    );
    fields.add("look", kind.look.as_ref().map(look));
    fields.text()
}

fn look(look: &Look) -> String {
    let pair = |(a, b): (u32, u32)| format!("({a}, {b})");
    let mut fields = Fields::default();
    match look {
        Look::BuiltIn(name) => fields.add("drawing", Some(quoted(name))),
        Look::Picture(picture) => {
            fields.add("picture", Some(quoted(&picture.path)));
            fields.add("tile", picture.tile.map(pair));
            fields.add("at", (picture.at != (0, 0)).then(|| pair(picture.at)));
        }
        Look::Drawing(drawing) => {
            fields.add("shape", Some(format!("{:?}", drawing.shape)));
            fields.add("fill", Some(quoted(&drawing.fill)));
            fields.add("edge", drawing.edge.as_deref().map(quoted));
        }
    }
    format!("({})", fields.text())
}

fn write_legend(out: &mut String, mechanics: &Mechanics, legend: &Legend) {
    let map = |entries: Vec<(char, &KindId)>| {
        let parts: Vec<String> = entries
            .into_iter()
            .map(|(c, id)| format!("{}: {}", quoted_char(c), quoted(id.as_str())))
            .collect();
        (!parts.is_empty()).then(|| format!("{{{}}}", parts.join(", ")))
    };
    let grounds = map(legend
        .grounds
        .iter()
        .map(|&(c, ix)| (c, &mechanics.ground(ix).id))
        .collect());
    let bodies = map(legend
        .bodies
        .iter()
        .map(|&(c, ix)| (c, &mechanics.body(ix).id))
        .collect());
    let items = map(legend
        .items
        .iter()
        .map(|&(c, ix)| (c, &mechanics.item(ix).id))
        .collect());
    let layers = [("grounds", grounds), ("bodies", bodies), ("items", items)];
    if layers.iter().all(|(_, map)| map.is_none()) {
        return;
    }
    out.push_str("    legend: (\n");
    for (layer, map) in layers {
        if let Some(map) = map {
            line(out, 2, &format!("{layer}: {map}"));
        }
    }
    out.push_str("    ),\n");
}

fn quoted_char(c: char) -> String {
    match c {
        '"' => "'\"'".to_owned(),
        '\'' | '\\' => format!("'\\{c}'"),
        c if c.is_control() => format!("'{}'", c.escape_default()),
        c => format!("'{c}'"),
    }
}

fn level(out: &mut String, mechanics: &Mechanics, legend: &Legend, level: &Level) {
    out.push_str("        (\n");
    line(out, 3, &format!("name: {}", quoted(&level.name)));
    if !level.notes.is_empty() {
        line(out, 3, &format!("notes: {}", quoted(&level.notes)));
    }
    let ground: Vec<Option<_>> = level.ground.iter().copied().map(Some).collect();
    rows(out, "ground", level, &ground, &legend.grounds);
    if level.bodies.iter().any(Option::is_some) {
        rows(out, "bodies", level, &level.bodies, &legend.bodies);
    }
    if level.items.iter().any(Option::is_some) {
        rows(out, "items", level, &level.items, &legend.items);
    }
    if !level.blocks.is_empty() {
        out.push_str("            blocks: [\n");
        for block in &level.blocks {
            let cells = list(&block.cells, |cell| format!("({}, {})", cell.x, cell.y));
            let kind = quoted(mechanics.body(block.kind).id.as_str());
            line(out, 4, &format!("(kind: {kind}, cells: {cells})"));
        }
        out.push_str("            ],\n");
    }
    if let Some(clauses) = &level.objective {
        line(out, 3, &format!("objective: {}", objective(clauses)));
    }
    if let Some(route) = &level.intended {
        line(out, 3, &format!("intended: {}", intended(route)));
    }
    if let Some(par) = &level.par {
        line(out, 3, &format!("par: {}", par_text(par)));
    }
    out.push_str("        ),\n");
}

fn rows<Ix: Copy + PartialEq>(
    out: &mut String,
    layer: &str,
    level: &Level,
    kinds: &[Option<Ix>],
    legend: &[(char, Ix)],
) {
    let character = |kind: &Option<Ix>| {
        let entry = kind.and_then(|kind| legend.iter().find(|(_, other)| *other == kind));
        entry.map_or('-', |&(c, _)| c)
    };
    let _ = writeln!(out, "            {layer}: [");
    for row in kinds.chunks(level.size.width()) {
        line(
            out,
            4,
            &quoted(&row.iter().map(character).collect::<String>()),
        );
    }
    out.push_str("            ],\n");
}

fn intended(route: &Route) -> String {
    match route {
        Route::Steer(_) => quoted(&route.text()),
        Route::Drag(steps) => list(steps, |step| format!("({}, {:?})", step.block, step.dir)),
    }
}

fn par_text(par: &Par) -> String {
    let mut fields = Fields::default();
    fields.add("steps", par.steps.map(|steps| steps.to_string()));
    fields.add("pushes", par.pushes.map(|pushes| pushes.to_string()));
    format!("({})", fields.text())
}
