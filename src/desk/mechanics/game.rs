//! The page of what holds pack-wide: control, strength, objective, the measure of par.

use super::traits::cargo_ids;
use crate::desk::action::Action;
use crate::desk::state::State;
use crate::desk::theme::{self, Theme};
use crate::file::refusal;
use crate::level::{Clause, Control, KindId, Mechanics, Pack};
use crate::study::Prove;
use egui::{DragValue, RichText, ScrollArea, Ui};
use std::sync::Arc;

/// Draws the page.
pub fn show(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    ScrollArea::vertical()
        .id_salt("game")
        .auto_shrink(false)
        .show(ui, |ui| {
            let mut new = Mechanics::clone(state.mechanics());
            control(ui, &mut new);
            ui.add_space(10.0);
            objective(ui, &mut new);
            ui.add_space(10.0);
            measure(ui, state, actions);
            if new == **state.mechanics() {
                return;
            }
            match refusal(&new) {
                Some(reason) => actions.push(Action::Say(reason)),
                None => {
                    let pack = Pack {
                        mechanics: Arc::new(new),
                        ..state.pack.clone()
                    };
                    actions.push(Action::Rework {
                        label: "changed the game".into(),
                        pack: Box::new(pack),
                    });
                }
            }
        });
}

fn control(ui: &mut Ui, new: &mut Mechanics) {
    theme::section(ui, "What the player does");
    ui.radio_value(
        &mut new.control,
        Control::Steer,
        "Steers the walkers: they all move together and push cargo",
    );
    ui.radio_value(
        &mut new.control,
        Control::Drag,
        "Drags blocks: there are no walkers, any block with an axis can be moved",
    );
    let steers = new.control == Control::Steer;
    ui.horizontal(|ui| {
        ui.label("One walker can push at once at most");
        ui.add_enabled(steers, DragValue::new(&mut new.strength).range(1..=u8::MAX))
            .on_hover_text("Longest row of cargo that moves");
        ui.label("in a row");
    });
}

fn objective(ui: &mut Ui, new: &mut Mechanics) {
    theme::section(ui, "When a level is finished");
    ui.label(
        RichText::new(
            "All that is ticked must hold. A level can have an objective of its own in the file.",
        )
        .color(Theme::of(ui).muted),
    );
    let simple = [
        (
            Clause::HomesFilled,
            "Every home holds cargo that it accepts",
        ),
        (Clause::WalkersOut, "Every walker stands on a way out"),
        (Clause::GemsTaken, "Nothing to be taken is left"),
    ];
    for (clause, text) in simple {
        let mut on = new.objective.contains(&clause);
        if ui.checkbox(&mut on, text).changed() {
            new.objective.retain(|other| *other != clause);
            new.objective.extend(on.then_some(clause));
        }
    }
    let at = new
        .objective
        .iter()
        .position(|clause| matches!(clause, Clause::CargoHome(_)));
    let mut on = at.is_some();
    let cargo: Vec<(KindId, String)> = cargo_ids(new)
        .map(|id| {
            (
                id.clone(),
                new.find_body(id)
                    .map_or(id.to_string(), |ix| new.body(ix).label.clone()),
            )
        })
        .collect();
    ui.horizontal_wrapped(|ui| {
        if ui
            .checkbox(&mut on, "All cargo of these kinds stands on homes:")
            .changed()
        {
            new.objective
                .retain(|clause| !matches!(clause, Clause::CargoHome(_)));
            new.objective.extend(on.then(|| {
                Clause::CargoHome(cargo.iter().take(1).map(|(id, _)| id.clone()).collect())
            }));
        }
        if let Some(Clause::CargoHome(ids)) = at.and_then(|at| new.objective.get_mut(at)) {
            for (id, label) in &cargo {
                let mut wanted = ids.contains(id);
                if ui.checkbox(&mut wanted, label).changed() {
                    ids.retain(|other| other != id);
                    ids.extend(wanted.then(|| id.clone()));
                }
            }
        }
    });
}

fn measure(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    theme::section(ui, "What par counts");
    let moves = if state.mechanics().control == Control::Drag {
        "The fewest moves"
    } else {
        "The fewest pushes"
    };
    for (value, text) in [
        (Prove::Steps, "The fewest steps"),
        (Prove::Pushes, moves),
        (Prove::Both, "Both"),
    ] {
        if ui.radio(state.settings.prove == value, text).clicked() {
            actions.push(Action::SetProve(value));
        }
    }
}
