//! The pack file as serde sees it: one struct for each record of the format, before anything is looked up or checked.

use crate::level::{Axis, Control, Dir, Gate, Item, Role, Shape};
use serde::de::{self, Deserialize, Deserializer, MapAccess, SeqAccess, Visitor};
use std::fmt;
use std::marker::PhantomData;

/// A RON map as the list of its entries, so that a key given twice can be seen.
pub(super) struct Entries<K, V>(pub Vec<(K, V)>);

impl<K, V> Default for Entries<K, V> {
    fn default() -> Entries<K, V> {
        Entries(Vec::new())
    }
}

impl<'de, K: Deserialize<'de>, V: Deserialize<'de>> Deserialize<'de> for Entries<K, V> {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        struct EntriesVisitor<K, V>(PhantomData<(K, V)>);
        impl<'de, K: Deserialize<'de>, V: Deserialize<'de>> Visitor<'de> for EntriesVisitor<K, V> {
            type Value = Entries<K, V>;
            fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                f.write_str("a map in braces")
            }
            fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Self::Value, A::Error> {
                let mut entries = Vec::new();
                while let Some(entry) = map.next_entry()? {
                    entries.push(entry);
                }
                Ok(Entries(entries))
            }
        }
        deserializer.deserialize_map(EntriesVisitor(PhantomData))
    }
}

/// A designer's route: letters under Steer, numbered blocks under Drag.
pub(super) enum IntendedWire {
    Letters(String),
    Blocks(Vec<(u16, Dir)>),
}

impl<'de> Deserialize<'de> for IntendedWire {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        struct IntendedVisitor;
        impl<'de> Visitor<'de> for IntendedVisitor {
            type Value = IntendedWire;
            fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                f.write_str("a text of letters n, e, s, w or a list of (block, direction)")
            }
            fn visit_str<E: de::Error>(self, letters: &str) -> Result<IntendedWire, E> {
                Ok(IntendedWire::Letters(letters.to_owned()))
            }
            fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<IntendedWire, A::Error> {
                let mut steps = Vec::new();
                while let Some(step) = list.next_element()? {
                    steps.push(step);
                }
                Ok(IntendedWire::Blocks(steps))
            }
        }
        deserializer.deserialize_any(IntendedVisitor)
    }
}

fn format_one<'de, D: Deserializer<'de>>(deserializer: D) -> Result<(), D::Error> {
    match u64::deserialize(deserializer)? {
        1 => Ok(()),
        other => Err(de::Error::custom(format_args!(
            "The file has format {other}, and this program reads format 1. Open it with a newer version of the program."
        ))),
    }
}

fn yes() -> bool {
    true
}

fn one() -> u64 {
    1
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Pack")]
pub(super) struct PackWire {
    #[serde(deserialize_with = "format_one")]
    #[expect(dead_code, reason = "checked while it is read")]
    pub format: (),
    pub name: String,
    pub control: Control,
    #[serde(default = "one")]
    pub strength: u64,
    #[serde(default)]
    pub objective: Vec<ClauseWire>,
    pub grounds: Entries<String, GroundWire>,
    #[serde(default)]
    pub bodies: Entries<String, BodyWire>,
    #[serde(default)]
    pub items: Entries<String, ItemWire>,
    #[serde(default)]
    pub legend: LegendWire,
    #[serde(default)]
    pub levels: Vec<LevelWire>,
}

#[derive(serde::Deserialize)]
#[serde(rename = "Clause")]
pub(super) enum ClauseWire {
    HomesFilled,
    CargoHome(Vec<String>),
    WalkersOut,
    GemsTaken,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Lock")]
pub(super) struct LockWire {
    pub channel: String,
    pub becomes: String,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Look")]
pub(super) struct LookWire {
    pub drawing: Option<String>,
    pub picture: Option<String>,
    pub tile: Option<(u32, u32)>,
    pub at: Option<(u32, u32)>,
    pub shape: Option<Shape>,
    pub fill: Option<String>,
    pub edge: Option<String>,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Ground")]
pub(super) struct GroundWire {
    pub label: Option<String>,
    pub look: Option<LookWire>,
    #[serde(default)]
    pub closed_to: Vec<Role>,
    #[serde(default)]
    pub enter_only: Vec<Dir>,
    #[serde(default)]
    pub slick: bool,
    pub sink: Option<String>,
    pub frail: Option<String>,
    pub plate: Option<String>,
    pub gate: Option<Gate>,
    pub warp: Option<String>,
    pub lock: Option<LockWire>,
    #[serde(default)]
    pub home: Vec<String>,
    #[serde(default)]
    pub exit: bool,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Body")]
pub(super) struct BodyWire {
    pub label: Option<String>,
    pub look: Option<LookWire>,
    pub role: Role,
    #[serde(default = "yes")]
    pub push: bool,
    #[serde(default)]
    pub tow: bool,
    #[serde(default)]
    pub glide: bool,
    #[serde(default)]
    pub fills: bool,
    #[serde(default = "yes")]
    pub presses: bool,
    pub axis: Option<Axis>,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Item")]
pub(super) struct ItemWire {
    pub label: Option<String>,
    pub look: Option<LookWire>,
    pub item: Item,
}

#[derive(Default, serde::Deserialize)]
#[serde(deny_unknown_fields, default, rename = "Legend")]
pub(super) struct LegendWire {
    pub grounds: Entries<char, String>,
    pub bodies: Entries<char, String>,
    pub items: Entries<char, String>,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Block")]
pub(super) struct BlockWire {
    pub kind: String,
    pub cells: Vec<(i64, i64)>,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Par")]
pub(super) struct ParWire {
    pub steps: Option<u32>,
    pub pushes: Option<u32>,
}

#[derive(serde::Deserialize)]
#[serde(deny_unknown_fields, rename = "Level")]
pub(super) struct LevelWire {
    pub name: String,
    #[serde(default)]
    pub notes: String,
    pub ground: Vec<String>,
    #[serde(default)]
    pub bodies: Vec<String>,
    #[serde(default)]
    pub items: Vec<String>,
    #[serde(default)]
    pub blocks: Vec<BlockWire>,
    pub objective: Option<Vec<ClauseWire>>,
    pub intended: Option<IntendedWire>,
    pub par: Option<ParWire>,
}
