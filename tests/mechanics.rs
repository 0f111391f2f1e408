//! The mechanics window: its traits, its small pictures, and a change made by a person in it.

use egui_kittest::Harness;
use egui_kittest::kittest::Queryable;
use foldwright::desk::Desk;
use foldwright::desk::action::Action;
use foldwright::desk::mechanics::{Trait, demo, traits_of};
use foldwright::desk::state::Settings;
use foldwright::file::{read_pack, refusal};
use foldwright::level::{Control, KindRef, Layer, Mechanics, Pack};

fn pack() -> Pack {
    let text = r#"(
        format: 1, name: "bench", control: Steer, objective: [HomesFilled],
        grounds: {
            "gravel": (label: "gravel"),
            "hedge": (label: "hedge", closed_to: [Walker, Cargo]),
            "bed": (label: "bed", home: ["planter"]),
        },
        bodies: { "gardener": (label: "gardener", role: Walker), "planter": (label: "planter", role: Cargo) },
        items: { "seed": (label: "seed", item: Gem) },
        legend: (grounds: {'.': "gravel", 'X': "hedge", 'o': "bed"}, bodies: {'g': "gardener", 'p': "planter"}),
        levels: [(name: "one", ground: ["......", "....o."], bodies: ["------", "g-p---"])],
    )"#;
    read_pack(text.as_bytes()).expect("a good pack").pack
}

fn all_kinds(mechanics: &Mechanics) -> Vec<KindRef> {
    [Layer::Ground, Layer::Body, Layer::Item]
        .into_iter()
        .flat_map(|layer| {
            (0..mechanics.kind_count(layer) as u16).map(move |at| KindRef { layer, at })
        })
        .collect()
}

#[test]
fn every_trait_has_a_scene_in_which_something_happens() {
    let mut pack = pack();
    let mut traits = Vec::new();
    for control in [Control::Steer, Control::Drag] {
        std::sync::Arc::make_mut(&mut pack.mechanics).control = control;
        for kind in all_kinds(&pack.mechanics) {
            traits.extend(traits_of(&pack.mechanics, kind));
        }
    }
    traits.sort();
    traits.dedup();
    assert_eq!(traits.len(), 20);
    for of in traits {
        let shown = demo(of).unwrap_or_else(|| panic!("{of:?} has no scene"));
        assert_ne!(shown.frames[0], shown.frames[2], "{of:?}");
    }
}

#[test]
fn switching_a_trait_on_and_off_again_gives_the_kind_back() {
    let pack = pack();
    let mechanics = &*pack.mechanics;
    for kind in all_kinds(mechanics) {
        for of in traits_of(mechanics, kind) {
            let on = of.switched(mechanics, kind);
            if kind.layer == Layer::Item {
                continue;
            }
            assert_ne!(
                of.is_on(&on, kind),
                of.is_on(mechanics, kind),
                "{of:?} of {kind:?}"
            );
            let switched_back = of.switched(&on, kind);
            assert_eq!(
                of.is_on(&switched_back, kind),
                of.is_on(mechanics, kind),
                "{of:?} of {kind:?}"
            );
        }
    }
}

#[test]
fn a_second_of_sink_warp_lock_and_gate_is_refused_with_a_reason() {
    let pack = pack();
    let bed = KindRef {
        layer: Layer::Ground,
        at: 2,
    };
    let sink = Trait::Sink.switched(&pack.mechanics, bed);
    assert_eq!(refusal(&sink), None);
    for second in [Trait::Warp, Trait::Lock, Trait::Gate] {
        let reason = refusal(&second.switched(&sink, bed)).expect("one of four");
        assert!(reason.contains("at most one"), "{reason}");
    }
}

fn harness() -> Harness<'static, Desk> {
    let mut harness = Harness::builder()
        .with_size([1440.0, 900.0])
        .build_ui_state(
            |ui, desk: &mut Desk| desk.ui(ui),
            Desk::new(&egui::Context::default(), pack(), None, Settings::default()),
        );
    harness.state_mut().state.execute(Action::ToggleMechanics);
    harness.run_steps(3);
    harness
}

#[test]
fn ticking_a_sentence_gives_the_kind_its_trait_and_undo_takes_it_back() {
    let mut harness = harness();
    let slick = |harness: &Harness<Desk>| harness.state().state.pack.mechanics.grounds[0].slick;
    assert!(!slick(&harness));
    harness
        .get_by_label("Things that enter keep sliding")
        .click();
    harness.run_steps(3);
    assert!(slick(&harness));
    harness.state_mut().state.execute(Action::Undo);
    harness.run_steps(2);
    assert!(!slick(&harness));
}

#[test]
fn a_kind_that_is_added_can_be_painted_and_removed_again() {
    let mut harness = harness();
    harness.get_by_label("Add a kind of ground").click();
    harness.run_steps(3);
    let mechanics = harness.state().state.pack.mechanics.clone();
    assert_eq!(mechanics.grounds.len(), 4);
    assert_eq!(mechanics.grounds[3].id.as_str(), "new-ground");
    harness.get_by_label("Remove this kind").click_accesskit();
    harness.run_steps(3);
    assert_eq!(harness.state().state.pack.mechanics.grounds.len(), 3);
}

#[test]
fn a_change_of_the_kinds_asks_about_the_level_again() {
    let mut harness = harness();
    let before = harness.state().state.revision;
    harness
        .get_by_label("Things that enter keep sliding")
        .click();
    harness.run_steps(3);
    assert!(harness.state().state.revision > before);
}

fn drag_pack() -> Pack {
    let start = foldwright::file::STARTS
        .iter()
        .find(|start| start.name == "Dragging blocks")
        .expect("there is one");
    read_pack(start.text).expect("a good pack").pack
}

#[test]
fn under_drag_one_gesture_draws_one_body_which_grows_and_is_cut() {
    let context = egui::Context::default();
    let mut desk = Desk::new(&context, drag_pack(), None, Settings::default());
    let kind = foldwright::level::BodyIx(1);
    desk.state
        .execute(Action::ChooseBrush(foldwright::level::Brush::Body(kind)));
    let stroke = |desk: &mut Desk, cells: &[(u8, u8)], clear: bool| {
        let cell = |at: usize| foldwright::level::Cell::new(cells[at].0, cells[at].1);
        desk.state.execute(Action::StrokeStart {
            cell: cell(0),
            clear,
        });
        (1..cells.len()).for_each(|at| desk.state.execute(Action::StrokeMove(cell(at))));
        desk.state.execute(Action::StrokeEnd);
    };
    let sizes = |desk: &Desk| {
        let level = desk.state.current();
        let mut sizes: Vec<usize> = level
            .bodies_in_order()
            .iter()
            .filter(|body| body.kind == kind)
            .map(|body| body.cells.len())
            .collect();
        sizes.sort_unstable();
        sizes
    };
    assert_eq!(sizes(&desk), [2]);
    stroke(&mut desk, &[(1, 1), (3, 1)], false);
    assert_eq!(sizes(&desk), [2, 3]);
    stroke(&mut desk, &[(3, 1), (5, 1)], false);
    assert_eq!(sizes(&desk), [2, 5], "begun on the block, it grows");
    stroke(&mut desk, &[(2, 1)], true);
    assert_eq!(sizes(&desk), [1, 2, 3], "cut in two");
    for _ in 0..3 {
        desk.state.execute(Action::Undo);
    }
    assert_eq!(sizes(&desk), [2]);
}

#[test]
fn a_new_pack_begins_with_the_mechanics_that_were_chosen() {
    let context = egui::Context::default();
    for (at, start) in foldwright::file::STARTS.iter().enumerate() {
        let mut desk = Desk::new(&context, pack(), None, Settings::default());
        desk.state.execute(Action::CreatePack {
            name: "mine".to_owned(),
            start: Some(at),
        });
        let expected = read_pack(start.text).expect("a good pack").pack;
        assert_eq!(
            desk.state.pack.mechanics, expected.mechanics,
            "{}",
            start.name
        );
        assert_eq!(desk.state.pack.name, "mine");
        assert!(desk.state.path.is_none());
    }
}
