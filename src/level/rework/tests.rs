use super::super::grid::Size;
use super::super::kinds::{Control, Legend, Role};
use super::*;

fn id(text: &str) -> KindId {
    KindId::new(text).expect("a good id")
}

fn at(layer: Layer, at: u16) -> KindRef {
    KindRef { layer, at }
}

fn pack() -> Pack {
    let mut grounds: Vec<GroundKind> = ["gravel", "bed", "drain"]
        .map(|name| GroundKind::plain(id(name), name))
        .into();
    grounds[1].home = vec![id("planter")];
    grounds[2].sink = Some(id("gravel"));
    let bodies = vec![
        BodyKind::plain(id("gardener"), "gardener", Role::Walker),
        BodyKind::plain(id("planter"), "planter", Role::Cargo),
    ];
    let mechanics = Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: vec![Clause::CargoHome(vec![id("planter")])],
        grounds,
        bodies,
        items: Vec::new(),
        legend: Legend {
            grounds: vec![('.', GroundIx(0)), ('o', GroundIx(1)), ('d', GroundIx(2))],
            bodies: vec![('g', BodyIx(0)), ('p', BodyIx(1))],
            items: Vec::new(),
        },
    };
    let mut level = Level::filled(
        "a level",
        Size::new(3, 1).expect("a good size"),
        GroundIx(0),
    );
    level.ground = vec![GroundIx(0), GroundIx(1), GroundIx(2)];
    level.bodies = vec![Some(BodyIx(0)), Some(BodyIx(1)), None];
    Pack {
        name: "a pack".into(),
        mechanics: Arc::new(mechanics),
        levels: vec![Arc::new(level)],
    }
}

#[test]
fn a_renamed_kind_is_followed_by_links_homes_and_objectives() {
    let pack = pack()
        .renamed(at(Layer::Ground, 0), id("sand"))
        .expect("free");
    assert_eq!(pack.mechanics.grounds[2].sink, Some(id("sand")));
    let pack = pack.renamed(at(Layer::Body, 1), id("pot")).expect("free");
    assert_eq!(pack.mechanics.grounds[1].home, vec![id("pot")]);
    assert_eq!(
        pack.mechanics.objective,
        vec![Clause::CargoHome(vec![id("pot")])]
    );
}

#[test]
fn a_taken_id_is_refused() {
    let refused = pack().renamed(at(Layer::Ground, 0), id("bed"));
    assert_eq!(refused, Err(ReworkError::Taken(id("bed"))));
}

#[test]
fn moving_a_kind_and_back_changes_nothing_and_levels_keep_their_look() {
    let there = pack().moved(at(Layer::Ground, 0), 2).expect("there is one");
    assert_eq!(
        there.levels[0].ground,
        vec![GroundIx(2), GroundIx(0), GroundIx(1)]
    );
    assert_eq!(there.mechanics.grounds[2].id, id("gravel"));
    let back = there.moved(at(Layer::Ground, 2), 0).expect("there is one");
    assert_eq!(back, pack());
}

#[test]
fn a_ground_in_use_goes_only_with_an_heir() {
    let refused = pack().without(at(Layer::Ground, 0), None);
    assert_eq!(refused, Err(ReworkError::InUse(id("gravel"))));
    let pack = pack()
        .without(at(Layer::Ground, 0), Some(1))
        .expect("has an heir");
    assert_eq!(
        pack.levels[0].ground,
        vec![GroundIx(0), GroundIx(0), GroundIx(1)]
    );
    assert_eq!(pack.mechanics.grounds[1].sink, Some(id("bed")));
    assert_eq!(
        pack.mechanics.legend.grounds,
        vec![('o', GroundIx(0)), ('d', GroundIx(1))]
    );
}

#[test]
fn a_body_without_an_heir_vanishes_with_its_homes() {
    let pack = pack()
        .without(at(Layer::Body, 1), None)
        .expect("may vanish");
    assert_eq!(pack.levels[0].bodies, vec![Some(BodyIx(0)), None, None]);
    assert!(pack.mechanics.grounds[1].home.is_empty());
    assert_eq!(
        pack.mechanics.objective,
        vec![Clause::CargoHome(Vec::new())]
    );
}

#[test]
fn uses_tell_levels_kinds_and_objective() {
    let uses = pack().uses(at(Layer::Ground, 0));
    assert_eq!(
        (uses.levels, uses.kinds, uses.objective),
        (vec![(0, 1)], vec![id("drain")], false)
    );
    let uses = pack().uses(at(Layer::Body, 1));
    assert_eq!(
        (uses.levels, uses.kinds, uses.objective),
        (vec![(0, 1)], vec![id("bed")], true)
    );
    assert!(
        pack()
            .with_copy(at(Layer::Body, 1))
            .expect("there is one")
            .uses(at(Layer::Body, 2))
            .none()
    );
}

#[test]
fn a_copy_gets_a_free_id() {
    let pack = pack()
        .with_copy(at(Layer::Ground, 1))
        .expect("there is one");
    let pack = pack.with_copy(at(Layer::Ground, 1)).expect("there is one");
    let ids: Vec<&str> = pack
        .mechanics
        .grounds
        .iter()
        .map(|kind| kind.id.as_str())
        .collect();
    assert_eq!(ids, ["gravel", "bed", "drain", "bed-2", "bed-3"]);
}
