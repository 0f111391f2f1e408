//! The mechanics of a pack: kinds of ground, body and item with their traits, and the rules that hold pack-wide.
//!
//! Kinds refer to each other by id, as in the file; levels refer to kinds by index into [`Mechanics`], so that renaming
//! a kind touches no level. The meaning of every trait is in `src/rules/rules.md` and in the
//! step engine ([`crate::rules`]).

use super::grid::Dir;
use serde::{Deserialize, Serialize};
use std::fmt;
use thiserror::Error;

/// The id of a kind: a small letter, then small letters, digits and hyphens.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
#[serde(try_from = "String", into = "String")]
pub struct KindId(String);

/// A text that is not a kind id.
#[derive(Debug, Error, PartialEq, Eq)]
#[error(
    "{0:?} is not an id; use a small letter first, then small letters, digits and hyphens, as in \"sun-bed\""
)]
pub struct KindIdError(String);

impl KindId {
    /// Checks and wraps an id.
    ///
    /// # Errors
    /// If `text` does not match `[a-z][a-z0-9-]*`.
    pub fn new(text: impl Into<String>) -> Result<KindId, KindIdError> {
        let text = text.into();
        let starts_well = text.starts_with(|c: char| c.is_ascii_lowercase());
        let all_well = text
            .chars()
            .all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-');
        if starts_well && all_well {
            Ok(KindId(text))
        } else {
            Err(KindIdError(text))
        }
    }

    /// The id as text.
    pub fn as_str(&self) -> &str {
        &self.0
    }
}

impl TryFrom<String> for KindId {
    type Error = KindIdError;
    fn try_from(text: String) -> Result<KindId, KindIdError> {
        KindId::new(text)
    }
}

impl From<KindId> for String {
    fn from(id: KindId) -> String {
        id.0
    }
}

impl fmt::Display for KindId {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.0)
    }
}

/// The name of a channel that joins plates to gates, warps to their twins, or keys to locks.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
#[serde(transparent)]
pub struct Channel(pub String);

impl fmt::Display for Channel {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.0)
    }
}

/// Whether the player steers the walkers or drags the cargo.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Control {
    /// All walkers move together in the chosen direction and push cargo.
    Steer,
    /// There is no walker; the player moves one block at a time.
    Drag,
}

/// What a body is to the rules.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub enum Role {
    /// Moved by the player.
    Walker,
    /// Moved by walkers, or dragged.
    Cargo,
}

/// Along which directions a block may be dragged.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Axis {
    /// All four.
    Any,
    /// East and west.
    Row,
    /// North and south.
    Column,
}

impl Axis {
    /// Whether a block with this axis may be dragged in direction `dir`.
    pub const fn allows(self, dir: Dir) -> bool {
        match self {
            Axis::Any => true,
            Axis::Row => matches!(dir, Dir::E | Dir::W),
            Axis::Column => matches!(dir, Dir::N | Dir::S),
        }
    }
}

/// When a gate can be entered.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Opens {
    /// While its channel is held.
    WhenHeld,
    /// While its channel is not held.
    WhenFree,
}

/// The gate trait of a ground kind.
#[derive(Clone, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Gate {
    /// The channel that it listens to.
    pub channel: Channel,
    /// When it is open.
    pub opens: Opens,
}

/// The lock trait of a ground kind.
#[derive(Clone, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Lock {
    /// The channel of the key that opens it.
    pub channel: Channel,
    /// What the ground is after a key was spent.
    pub becomes: KindId,
}

/// A simple form that is drawn for a kind without a picture.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Shape {
    /// Fills the cell.
    Full,
    /// A disc.
    Disc,
    /// A ring.
    Ring,
    /// A square with round corners.
    Square,
    /// A square standing on a corner.
    Diamond,
    /// Three lying bars.
    Bars,
    /// Wavy lines.
    Waves,
    /// An upright cross.
    Cross,
}

/// A picture file beside the pack.
#[derive(Clone, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Picture {
    /// Path relative to the pack file, with `/` between folders.
    pub path: String,
    /// For a sheet of tiles: width and height of one tile, in pixels.
    #[serde(default)]
    pub tile: Option<(u32, u32)>,
    /// For a sheet of tiles: column and row of the tile.
    #[serde(default)]
    pub at: (u32, u32),
}

/// A shape with its colours, as `#rrggbb`.
#[derive(Clone, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Drawing {
    /// The form.
    pub shape: Shape,
    /// Colour of the form.
    pub fill: String,
    /// Colour of its outline; none is drawn without it.
    #[serde(default)]
    pub edge: Option<String>,
}

/// How a kind is drawn. Without one, a kind gets the built-in picture of its id if there is one, else a shape from its traits.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Look {
    /// The built-in picture of this name, in `assets/`.
    BuiltIn(String),
    /// A picture file.
    Picture(Picture),
    /// A shape.
    Drawing(Drawing),
}

/// A kind of ground. Plain ground has no trait.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct GroundKind {
    /// Unique among the grounds of the pack.
    pub id: KindId,
    /// What people call it.
    pub label: String,
    /// How it is drawn.
    pub look: Option<Look>,
    /// Bodies of these roles can't enter.
    pub closed_to: Vec<Role>,
    /// If not empty: may be entered only by a body that moves in one of these directions.
    pub enter_only: Vec<Dir>,
    /// A body that enters keeps moving.
    pub slick: bool,
    /// Only cargo that fills may enter; it vanishes and the ground becomes this.
    pub sink: Option<KindId>,
    /// When a body leaves, the ground becomes this.
    pub frail: Option<KindId>,
    /// This channel is held while a body that presses stands here.
    pub plate: Option<Channel>,
    /// Can be entered only while the channel is held, or is not held.
    pub gate: Option<Gate>,
    /// A body that lands here moves to the twin.
    pub warp: Option<Channel>,
    /// Only a walker with a key may enter.
    pub lock: Option<Lock>,
    /// A place where cargo of these kinds is wanted.
    pub home: Vec<KindId>,
    /// A place where walkers are wanted.
    pub exit: bool,
}

impl GroundKind {
    /// Plain ground with this id and label.
    pub fn plain(id: KindId, label: impl Into<String>) -> GroundKind {
        GroundKind {
            id,
            label: label.into(),
            look: None,
            closed_to: Vec::new(),
            enter_only: Vec::new(),
            slick: false,
            sink: None,
            frail: None,
            plate: None,
            gate: None,
            warp: None,
            lock: None,
            home: Vec::new(),
            exit: false,
        }
    }

    /// Whether it has no trait.
    pub fn is_plain(&self) -> bool {
        let bare = GroundKind {
            look: self.look.clone(),
            ..GroundKind::plain(self.id.clone(), self.label.clone())
        };
        *self == bare
    }

    /// Whether nothing can ever enter.
    pub fn closed_to_all(&self) -> bool {
        self.closed_to.contains(&Role::Walker) && self.closed_to.contains(&Role::Cargo)
    }

    /// What a cell of this kind may turn into in one go (sink, frail, lock).
    pub fn becomes(&self) -> impl Iterator<Item = &KindId> {
        self.sink
            .iter()
            .chain(&self.frail)
            .chain(self.lock.as_ref().map(|lock| &lock.becomes))
    }
}

/// A kind of body.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct BodyKind {
    /// Unique among the bodies of the pack.
    pub id: KindId,
    /// What people call it.
    pub label: String,
    /// How it is drawn.
    pub look: Option<Look>,
    /// Walker or cargo.
    pub role: Role,
    /// Cargo that can be pushed (default true).
    pub push: bool,
    /// Cargo that follows a walker that steps away from it (default false).
    pub tow: bool,
    /// Cargo that keeps moving when shoved (default false).
    pub glide: bool,
    /// Cargo that may enter sinks and fills them (default false).
    pub fills: bool,
    /// Holds plates (default true).
    pub presses: bool,
    /// Under control Drag: along what it may be dragged; without it, it stays.
    pub axis: Option<Axis>,
}

impl BodyKind {
    /// A body with the default traits of its role.
    pub fn plain(id: KindId, label: impl Into<String>, role: Role) -> BodyKind {
        BodyKind {
            id,
            label: label.into(),
            look: None,
            role,
            push: true,
            tow: false,
            glide: false,
            fills: false,
            presses: true,
            axis: None,
        }
    }
}

/// What an item is to the rules.
#[derive(Clone, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Item {
    /// To be taken.
    Gem,
    /// Opens one lock of its channel.
    Key(Channel),
}

/// A kind of item.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct ItemKind {
    /// Unique among the items of the pack.
    pub id: KindId,
    /// What people call it.
    pub label: String,
    /// How it is drawn.
    pub look: Option<Look>,
    /// Gem or key.
    pub item: Item,
}

/// Index of a ground kind in [`Mechanics::grounds`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct GroundIx(pub u16);

/// Index of a body kind in [`Mechanics::bodies`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct BodyIx(pub u16);

/// Index of an item kind in [`Mechanics::items`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ItemIx(pub u16);

/// One condition of an objective.
#[derive(Clone, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Clause {
    /// Every home cell holds a body that it accepts.
    HomesFilled,
    /// Every body of these kinds that is on the board stands, with all its cells, on homes that accept it.
    CargoHome(Vec<KindId>),
    /// Every walker stands on an exit.
    WalkersOut,
    /// No gem is left.
    GemsTaken,
}

/// Which character stands for which kind in the rows of the file. Kinds on a board without one get one when the pack is saved.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub struct Legend {
    /// For `ground` rows.
    pub grounds: Vec<(char, GroundIx)>,
    /// For `bodies` rows.
    pub bodies: Vec<(char, BodyIx)>,
    /// For `items` rows.
    pub items: Vec<(char, ItemIx)>,
}

/// The rules of one game: what kinds there are and what holds pack-wide.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Mechanics {
    /// Steer or Drag.
    pub control: Control,
    /// The longest row of cargo that one walker can push at once, at least 1.
    pub strength: u8,
    /// What must hold at the end, for levels without an objective of their own.
    pub objective: Vec<Clause>,
    /// In the order of the file.
    pub grounds: Vec<GroundKind>,
    /// In the order of the file.
    pub bodies: Vec<BodyKind>,
    /// In the order of the file.
    pub items: Vec<ItemKind>,
    /// Characters of the kinds.
    pub legend: Legend,
}

impl Mechanics {
    /// The ground kind at an index of this pack.
    pub fn ground(&self, ix: GroundIx) -> &GroundKind {
        &self.grounds[usize::from(ix.0)]
    }

    /// The body kind at an index of this pack.
    pub fn body(&self, ix: BodyIx) -> &BodyKind {
        &self.bodies[usize::from(ix.0)]
    }

    /// The item kind at an index of this pack.
    pub fn item(&self, ix: ItemIx) -> &ItemKind {
        &self.items[usize::from(ix.0)]
    }

    /// The ground kind with this id.
    pub fn find_ground(&self, id: &KindId) -> Option<GroundIx> {
        self.grounds
            .iter()
            .position(|kind| kind.id == *id)
            .map(|at| GroundIx(at as u16))
    }

    /// The body kind with this id.
    pub fn find_body(&self, id: &KindId) -> Option<BodyIx> {
        self.bodies
            .iter()
            .position(|kind| kind.id == *id)
            .map(|at| BodyIx(at as u16))
    }

    /// The item kind with this id.
    pub fn find_item(&self, id: &KindId) -> Option<ItemIx> {
        self.items
            .iter()
            .position(|kind| kind.id == *id)
            .map(|at| ItemIx(at as u16))
    }

    /// The first ground that is closed to everything, for borders.
    pub fn closed_ground(&self) -> Option<GroundIx> {
        self.grounds
            .iter()
            .position(GroundKind::closed_to_all)
            .map(|at| GroundIx(at as u16))
    }
}
