//! The traits of a kind in plain words, and what switching one on or off makes of the mechanics.

use crate::level::{
    Axis, Channel, Control, Dir, Gate, GroundIx, GroundKind, Item, KindId, KindRef, Layer, Lock,
    Mechanics, Opens, Role,
};

/// One trait of rules.md, as a line of the editor.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Trait {
    /// `closed_to` Walker.
    ClosedToWalkers,
    /// `closed_to` Cargo.
    ClosedToCargo,
    /// `enter_only`.
    OneWay,
    /// `slick`.
    Slick,
    /// `sink`.
    Sink,
    /// `frail`.
    Frail,
    /// `plate`.
    Plate,
    /// `gate`.
    Gate,
    /// `warp`.
    Warp,
    /// `lock`.
    Lock,
    /// `home`.
    Home,
    /// `exit`.
    Exit,
    /// `push`.
    Push,
    /// `tow`.
    Tow,
    /// `glide`.
    Glide,
    /// `fills`.
    Fills,
    /// `presses`.
    Presses,
    /// `axis`.
    Axis,
    /// `item: Gem`, switched off it is a key.
    Gem,
    /// `item: Key`.
    Key,
}

const GROUND: [Trait; 12] = [
    Trait::ClosedToWalkers,
    Trait::ClosedToCargo,
    Trait::OneWay,
    Trait::Slick,
    Trait::Sink,
    Trait::Frail,
    Trait::Plate,
    Trait::Gate,
    Trait::Warp,
    Trait::Lock,
    Trait::Home,
    Trait::Exit,
];

/// The traits that a kind can have under a control, in the order of the editor.
pub fn traits_of(mechanics: &Mechanics, kind: KindRef) -> Vec<Trait> {
    match kind.layer {
        Layer::Ground => GROUND.into(),
        Layer::Item => vec![Trait::Gem, Trait::Key],
        Layer::Body => {
            let walker = mechanics
                .bodies
                .get(usize::from(kind.at))
                .is_some_and(|body| body.role == Role::Walker);
            match (walker, mechanics.control) {
                (true, _) => vec![Trait::Presses],
                (false, Control::Steer) => vec![
                    Trait::Push,
                    Trait::Tow,
                    Trait::Glide,
                    Trait::Fills,
                    Trait::Presses,
                ],
                (false, Control::Drag) => vec![Trait::Axis, Trait::Fills, Trait::Presses],
            }
        }
    }
}

impl Trait {
    /// What it means, as a sentence that its values go on from.
    pub fn sentence(self) -> &'static str {
        match self {
            Trait::ClosedToWalkers => "Walkers can't enter",
            Trait::ClosedToCargo => "Cargo can't enter",
            Trait::OneWay => "Can be entered only when moving",
            Trait::Slick => "Things that enter keep sliding",
            Trait::Sink => "Swallows cargo that fills, and becomes",
            Trait::Frail => "When something leaves, it becomes",
            Trait::Plate => "While something stands on it, it holds channel",
            Trait::Gate => "Only passable while channel",
            Trait::Warp => "Takes what lands here to its twin of channel",
            Trait::Lock => "Opens to a key of channel",
            Trait::Home => "A home for",
            Trait::Exit => "A way out for walkers",
            Trait::Push => "Can be pushed",
            Trait::Tow => "Follows a walker that steps away from it",
            Trait::Glide => "Keeps moving when shoved",
            Trait::Fills => "Falls into sinks and fills them",
            Trait::Presses => "Holds down what it stands on",
            Trait::Axis => "Can be dragged",
            Trait::Gem => "Something to be taken",
            Trait::Key => "A key of channel",
        }
    }

    /// Whether a kind has it.
    pub fn is_on(self, mechanics: &Mechanics, kind: KindRef) -> bool {
        let at = usize::from(kind.at);
        match kind.layer {
            Layer::Ground => mechanics
                .grounds
                .get(at)
                .is_some_and(|ground| self.of_ground(ground)),
            Layer::Item => mechanics
                .items
                .get(at)
                .is_some_and(|item| (item.item == Item::Gem) == (self == Trait::Gem)),
            Layer::Body => mechanics.bodies.get(at).is_some_and(|body| match self {
                Trait::Push => body.push,
                Trait::Tow => body.tow,
                Trait::Glide => body.glide,
                Trait::Fills => body.fills,
                Trait::Presses => body.presses,
                Trait::Axis => body.axis.is_some(),
                _ => false,
            }),
        }
    }

    fn of_ground(self, ground: &GroundKind) -> bool {
        match self {
            Trait::ClosedToWalkers => ground.closed_to.contains(&Role::Walker),
            Trait::ClosedToCargo => ground.closed_to.contains(&Role::Cargo),
            Trait::OneWay => !ground.enter_only.is_empty(),
            Trait::Slick => ground.slick,
            Trait::Sink => ground.sink.is_some(),
            Trait::Frail => ground.frail.is_some(),
            Trait::Plate => ground.plate.is_some(),
            Trait::Gate => ground.gate.is_some(),
            Trait::Warp => ground.warp.is_some(),
            Trait::Lock => ground.lock.is_some(),
            Trait::Home => !ground.home.is_empty(),
            Trait::Exit => ground.exit,
            _ => false,
        }
    }

    /// The mechanics with this trait of a kind switched over, with values that are likely to be meant.
    pub fn switched(self, mechanics: &Mechanics, kind: KindRef) -> Mechanics {
        let mut new = mechanics.clone();
        let (on, at) = (!self.is_on(mechanics, kind), usize::from(kind.at));
        match kind.layer {
            Layer::Ground => {
                let values = Likely::of(mechanics, kind.at);
                if let Some(ground) = new.grounds.get_mut(at) {
                    self.set_on_ground(ground, on, values);
                }
            }
            Layer::Item => {
                if let Some(item) = new.items.get_mut(at) {
                    let gem = (self == Trait::Gem) == on;
                    item.item = if gem {
                        Item::Gem
                    } else {
                        Item::Key(any_channel(mechanics))
                    };
                }
            }
            Layer::Body => {
                if let Some(body) = new.bodies.get_mut(at) {
                    match self {
                        Trait::Push => body.push = on,
                        Trait::Tow => body.tow = on,
                        Trait::Glide => body.glide = on,
                        Trait::Fills => body.fills = on,
                        Trait::Presses => body.presses = on,
                        Trait::Axis => body.axis = on.then_some(Axis::Any),
                        _ => {}
                    }
                }
            }
        }
        new
    }

    fn set_on_ground(self, ground: &mut GroundKind, on: bool, likely: Likely) {
        match self {
            Trait::ClosedToWalkers => set_role(&mut ground.closed_to, Role::Walker, on),
            Trait::ClosedToCargo => set_role(&mut ground.closed_to, Role::Cargo, on),
            Trait::OneWay => ground.enter_only = if on { vec![Dir::E] } else { Vec::new() },
            Trait::Slick => ground.slick = on,
            Trait::Sink => ground.sink = likely.ground.filter(|_| on),
            Trait::Frail => ground.frail = likely.ground.filter(|_| on),
            Trait::Plate => ground.plate = on.then_some(likely.channel),
            Trait::Gate => {
                ground.gate = on.then_some(Gate {
                    channel: likely.channel,
                    opens: Opens::WhenHeld,
                });
            }
            Trait::Warp => ground.warp = on.then_some(likely.channel),
            Trait::Lock => {
                ground.lock = likely.ground.filter(|_| on).map(|becomes| Lock {
                    channel: likely.channel,
                    becomes,
                });
            }
            Trait::Home => ground.home = if on { likely.cargo } else { Vec::new() },
            Trait::Exit => ground.exit = on,
            _ => {}
        }
    }
}

/// Values that a new trait most likely has.
struct Likely {
    ground: Option<KindId>,
    channel: Channel,
    cargo: Vec<KindId>,
}

impl Likely {
    fn of(mechanics: &Mechanics, own: u16) -> Likely {
        Likely {
            ground: plain_but(mechanics, GroundIx(own)),
            channel: any_channel(mechanics),
            cargo: cargo_ids(mechanics).take(1).cloned().collect(),
        }
    }
}

/// The first ground without traits, else the first that can't become anything; never `own`.
fn plain_but(mechanics: &Mechanics, own: GroundIx) -> Option<KindId> {
    let others = || {
        mechanics
            .grounds
            .iter()
            .enumerate()
            .filter(|&(at, _)| at != usize::from(own.0))
            .map(|(_, kind)| kind)
    };
    let bare = |kind: &&GroundKind| GROUND.iter().all(|one| !one.of_ground(kind));
    let last = |kind: &&GroundKind| kind.becomes().next().is_none() && kind.warp.is_none();
    others()
        .find(bare)
        .or_else(|| others().find(last))
        .map(|kind| kind.id.clone())
}

/// A channel that is in use, else "a".
fn any_channel(mechanics: &Mechanics) -> Channel {
    channels(mechanics)
        .into_iter()
        .next()
        .unwrap_or_else(|| Channel("a".to_owned()))
}

/// All channels in use, in order.
pub fn channels(mechanics: &Mechanics) -> Vec<Channel> {
    let mut channels: Vec<Channel> = Vec::new();
    for ground in &mechanics.grounds {
        channels.extend(ground.plate.clone());
        channels.extend(ground.gate.as_ref().map(|gate| gate.channel.clone()));
        channels.extend(ground.warp.clone());
        channels.extend(ground.lock.as_ref().map(|lock| lock.channel.clone()));
    }
    for item in &mechanics.items {
        if let Item::Key(channel) = &item.item {
            channels.push(channel.clone());
        }
    }
    channels.sort();
    channels.dedup();
    channels
}

/// The ids of all cargo.
pub fn cargo_ids(mechanics: &Mechanics) -> impl Iterator<Item = &KindId> {
    mechanics
        .bodies
        .iter()
        .filter(|body| body.role == Role::Cargo)
        .map(|body| &body.id)
}

fn set_role(roles: &mut Vec<Role>, role: Role, on: bool) {
    roles.retain(|&other| other != role);
    if on {
        roles.push(role);
        roles.sort();
    }
}
