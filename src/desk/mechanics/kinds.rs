//! The page of kinds: a list at the left, the chosen kind with its traits as sentences at the right.

use super::demo::{Demo, SIDES, demo};
use super::naming::{add, label_of, picture_of, set_label};
use super::scene::paint_view;
use super::traits::{Trait, traits_of};
use super::values::{text_line, values};
use crate::desk::action::Action;
use crate::desk::marks::{Icon, icon_button};
use crate::desk::pictures::Pictures;
use crate::desk::state::State;
use crate::desk::theme::{self, Theme, counted};
use crate::file::refusal;
use crate::level::{KindId, KindRef, Layer, Mechanics, Pack, Role, Size};
use egui::{
    Align, Color32, ComboBox, Layout, Rect, RichText, ScrollArea, Sense, Ui, Vec2, WidgetInfo, vec2,
};
use std::collections::HashMap;
use std::sync::Arc;

const LAYERS: [(Layer, &str, &str); 3] = [
    (Layer::Ground, "Grounds", "ground"),
    (Layer::Body, "Bodies", "body"),
    (Layer::Item, "Items", "item"),
];

/// What the page keeps between frames: the chosen kind and the small pictures of the traits.
pub struct KindsPage {
    chosen: KindRef,
    demos: HashMap<Trait, Option<(Demo, Pictures)>>,
    /// What takes the place of the chosen kind when it is removed.
    heir: Option<u16>,
    said: Option<String>,
}

impl Default for KindsPage {
    fn default() -> KindsPage {
        KindsPage {
            chosen: KindRef {
                layer: Layer::Ground,
                at: 0,
            },
            demos: HashMap::new(),
            heir: None,
            said: None,
        }
    }
}

/// One page frame's surroundings.
struct Scene<'a> {
    state: &'a State,
    pictures: &'a mut Pictures,
    actions: &'a mut Vec<Action>,
}

impl Scene<'_> {
    fn mechanics(&self) -> &Mechanics {
        self.state.mechanics()
    }

    /// Takes changed mechanics as an edit, unless they are refused.
    fn change(&mut self, label: impl Into<String>, mechanics: Mechanics) {
        let pack = Pack {
            mechanics: Arc::new(mechanics),
            ..self.state.pack.clone()
        };
        self.actions.push(Action::Rework {
            label: label.into(),
            pack: Box::new(pack),
        });
    }
}

impl KindsPage {
    /// Draws the page.
    pub fn show(
        &mut self,
        ui: &mut Ui,
        state: &State,
        pictures: &mut Pictures,
        actions: &mut Vec<Action>,
    ) {
        let mut scene = Scene {
            state,
            pictures,
            actions,
        };
        let count = scene.mechanics().kind_count(self.chosen.layer) as u16;
        self.chosen.at = self.chosen.at.min(count.saturating_sub(1));
        egui::Panel::left("kinds-list")
            .resizable(false)
            .exact_size(196.0)
            .show(ui, |ui| {
                ScrollArea::vertical()
                    .id_salt("kinds")
                    .auto_shrink(false)
                    .show(ui, |ui| self.list(ui, &mut scene));
            });
        egui::CentralPanel::default().show(ui, |ui| {
            ScrollArea::vertical()
                .id_salt("kind")
                .auto_shrink(false)
                .show(ui, |ui| {
                    if count == 0 {
                        ui.label("There is no such kind yet. Add one at the left.");
                    } else {
                        self.editor(ui, &mut scene);
                    }
                });
        });
    }

    fn list(&mut self, ui: &mut Ui, scene: &mut Scene) {
        for (layer, title, one) in LAYERS {
            theme::section(ui, title);
            for at in 0..scene.mechanics().kind_count(layer) as u16 {
                let kind = KindRef { layer, at };
                if self.line(ui, scene, kind) {
                    self.choose(kind);
                }
            }
            if ui.button(format!("Add a kind of {one}")).clicked() {
                let added = KindRef {
                    layer,
                    at: scene.mechanics().kind_count(layer) as u16,
                };
                match add(&scene.state.pack, layer) {
                    Ok(pack) => {
                        scene.actions.push(Action::Rework {
                            label: format!("added a kind of {one}"),
                            pack: Box::new(pack),
                        });
                        self.choose(added);
                    }
                    Err(error) => self.said = Some(error.to_string()),
                }
            }
            ui.add_space(8.0);
        }
    }

    fn line(&self, ui: &mut Ui, scene: &mut Scene, kind: KindRef) -> bool {
        let theme = Theme::of(ui);
        let (rect, response) =
            ui.allocate_exact_size(vec2(ui.available_width(), 32.0), Sense::click());
        let name = label_of(scene.mechanics(), kind).to_owned();
        let chosen = kind == self.chosen;
        response
            .widget_info(|| WidgetInfo::selected(egui::Role::ListBoxOption, true, chosen, &name));
        if chosen || response.hovered() {
            let edge = if chosen {
                egui::Stroke::new(1.5, theme.amber)
            } else {
                theme.hairline()
            };
            ui.painter()
                .rect(rect, 6.0, theme.raised, edge, egui::StrokeKind::Inside);
        }
        let picture = Rect::from_min_size(rect.min + vec2(4.0, 4.0), Vec2::splat(24.0));
        scene
            .pictures
            .paint(ui.painter(), picture, picture_of(kind), Color32::WHITE);
        let room = Rect::from_min_max(rect.min + vec2(36.0, 0.0), rect.max - vec2(4.0, 0.0));
        let mut line = ui.new_child(
            egui::UiBuilder::new()
                .max_rect(room)
                .layout(Layout::left_to_right(Align::Center)),
        );
        line.add(
            egui::Label::new(RichText::new(&name).color(theme.text))
                .truncate()
                .selectable(false),
        );
        response.on_hover_text(name).clicked()
    }

    fn choose(&mut self, kind: KindRef) {
        self.chosen = kind;
        self.heir = None;
        self.said = None;
    }

    fn editor(&mut self, ui: &mut Ui, scene: &mut Scene) {
        let kind = self.chosen;
        self.name_lines(ui, scene);
        if kind.layer == Layer::Body {
            role_line(ui, scene, kind);
        }
        if let Some(said) = &self.said {
            ui.label(RichText::new(said).color(Theme::of(ui).coral));
        }
        ui.add_space(6.0);
        theme::section(ui, "What it does");
        for of in traits_of(scene.mechanics(), kind) {
            self.trait_line(ui, scene, of);
        }
        ui.add_space(10.0);
        theme::section(ui, "The kind itself");
        self.own_lines(ui, scene);
    }

    fn name_lines(&mut self, ui: &mut Ui, scene: &mut Scene) {
        let kind = self.chosen;
        let (label, id) = (
            label_of(scene.mechanics(), kind).to_owned(),
            scene.mechanics().kind_id(kind).cloned(),
        );
        ui.horizontal(|ui| {
            let (rect, _) = ui.allocate_exact_size(Vec2::splat(48.0), Sense::hover());
            scene
                .pictures
                .paint(ui.painter(), rect, picture_of(kind), Color32::WHITE);
            ui.vertical(|ui| {
                ui.horizontal(|ui| {
                    ui.label("Name");
                    if let Some(new) =
                        text_line(ui, ("label", kind), &label, "Name of the kind", 220.0)
                    {
                        let mut mechanics = scene.mechanics().clone();
                        set_label(&mut mechanics, kind, new.clone());
                        scene.change(format!("named a kind {new}"), mechanics);
                    }
                });
                ui.horizontal(|ui| {
                    ui.label("Id in the file");
                    let old = id.map(|id| id.to_string()).unwrap_or_default();
                    if let Some(new) = text_line(ui, ("id", kind), &old, "Id of the kind", 180.0) {
                        let renamed = KindId::new(new).map_err(|error| error.to_string());
                        let renamed = renamed.and_then(|id| {
                            scene
                                .state
                                .pack
                                .renamed(kind, id)
                                .map_err(|error| error.to_string())
                        });
                        match renamed {
                            Ok(pack) => {
                                scene.actions.push(Action::Rework {
                                    label: "renamed a kind".into(),
                                    pack: Box::new(pack),
                                });
                                self.said = None;
                            }
                            Err(said) => self.said = Some(said),
                        }
                    }
                });
            });
        });
    }

    fn trait_line(&mut self, ui: &mut Ui, scene: &mut Scene, of: Trait) {
        let kind = self.chosen;
        let on = of.is_on(scene.mechanics(), kind);
        let switched = of.switched(scene.mechanics(), kind);
        let refused = if switched == *scene.mechanics() {
            Some(no_switch(of, on))
        } else {
            refusal(&switched)
        };
        ui.horizontal(|ui| {
            self.pictures_of(ui, of);
            ui.vertical(|ui| {
                ui.add_space(4.0);
                ui.horizontal_wrapped(|ui| {
                    let mut checked = on;
                    let response = ui
                        .add_enabled(
                            refused.is_none(),
                            egui::Checkbox::new(&mut checked, of.sentence()),
                        )
                        .on_disabled_hover_text(refused.clone().unwrap_or_default());
                    if response.clicked() {
                        scene.change(
                            format!("{} {}", if on { "took away" } else { "gave" }, short(of)),
                            switched,
                        );
                    }
                    if on && let Some(changed) = values(ui, scene.mechanics(), kind, of) {
                        match refusal(&changed) {
                            None => scene.change(format!("changed {}", short(of)), changed),
                            Some(reason) => self.said = Some(reason),
                        }
                    }
                });
                if let Some(reason) = refused.filter(|_| !on) {
                    ui.label(RichText::new(reason).small().color(Theme::of(ui).muted));
                }
            });
        });
        ui.add_space(2.0);
    }

    /// Three small pictures of what the trait does, at the start, in the middle and at the end.
    fn pictures_of(&mut self, ui: &mut Ui, of: Trait) {
        const SIDE: f32 = 12.0;
        let one = vec2(SIDES.0 as f32, SIDES.1 as f32) * SIDE;
        let (rect, response) =
            ui.allocate_exact_size(vec2(one.x * 3.0 + 12.0, one.y + 4.0), Sense::hover());
        let shown = self
            .demos
            .entry(of)
            .or_insert_with(|| demo(of).map(|demo| (demo, Pictures::new())));
        let (Some((demo, pictures)), Some(size)) = (shown, Size::new(SIDES.0, SIDES.1)) else {
            return;
        };
        pictures.begin_frame(ui.ctx(), &demo.mechanics, None);
        for (at, view) in demo.frames.iter().enumerate() {
            let corner = rect.min + vec2((one.x + 6.0) * at as f32, 2.0);
            paint_view(
                ui.painter(),
                pictures,
                size,
                view,
                Rect::from_min_size(corner, one),
                SIDE,
            );
        }
        response.on_hover_text("Start, middle and end of a short play of this trait alone");
    }

    fn own_lines(&mut self, ui: &mut Ui, scene: &mut Scene) {
        let kind = self.chosen;
        let count = scene.mechanics().kind_count(kind.layer) as u16;
        ui.horizontal(|ui| {
            if icon_button(
                ui,
                Icon::Earlier,
                kind.at > 0,
                "Move the kind up",
                "Earlier in tray and file",
            )
            .clicked()
            {
                self.move_to(scene, kind.at.saturating_sub(1));
            }
            if icon_button(
                ui,
                Icon::Later,
                kind.at + 1 < count,
                "Move the kind down",
                "Later in tray and file",
            )
            .clicked()
            {
                self.move_to(scene, kind.at + 1);
            }
            if ui.button("Duplicate").clicked()
                && let Ok(pack) = scene.state.pack.with_copy(kind)
            {
                scene.actions.push(Action::Rework {
                    label: "duplicated a kind".into(),
                    pack: Box::new(pack),
                });
                self.choose(KindRef { at: count, ..kind });
            }
        });
        self.remove_line(ui, scene);
    }

    fn move_to(&mut self, scene: &mut Scene, to: u16) {
        if let Ok(pack) = scene.state.pack.moved(self.chosen, to) {
            scene.actions.push(Action::Rework {
                label: "moved a kind".into(),
                pack: Box::new(pack),
            });
            self.chosen.at = to;
        }
    }

    fn remove_line(&mut self, ui: &mut Ui, scene: &mut Scene) {
        let kind = self.chosen;
        let uses = scene.state.pack.uses(kind);
        let cells: usize = uses.levels.iter().map(|(_, cells)| cells).sum();
        let text = if uses.none() {
            "Nothing uses it.".to_owned()
        } else {
            let levels = counted(uses.levels.len() as u64, "level", "levels");
            let kinds: Vec<&str> = uses.kinds.iter().map(KindId::as_str).collect();
            let named = if kinds.is_empty() {
                String::new()
            } else {
                format!(", named by {}", kinds.join(", "))
            };
            let asked = if uses.objective {
                ", asked for by an objective"
            } else {
                ""
            };
            format!(
                "Used on {} of {levels}{named}{asked}.",
                counted(cells as u64, "cell", "cells")
            )
        };
        ui.label(RichText::new(text).color(Theme::of(ui).muted));
        ui.horizontal_wrapped(|ui| {
            if !uses.none() {
                ui.label("Put in its place:");
                let named = self
                    .heir
                    .map(|at| label_of(scene.mechanics(), KindRef { at, ..kind }).to_owned());
                let none = if kind.layer == Layer::Ground {
                    "choose a ground"
                } else {
                    "nothing"
                };
                ComboBox::from_id_salt("heir")
                    .selected_text(named.as_deref().unwrap_or(none))
                    .show_ui(ui, |ui| {
                        ui.selectable_value(&mut self.heir, None, none);
                        for at in (0..scene.mechanics().kind_count(kind.layer) as u16)
                            .filter(|&at| at != kind.at)
                        {
                            let label = label_of(scene.mechanics(), KindRef { at, ..kind });
                            ui.selectable_value(&mut self.heir, Some(at), label);
                        }
                    });
            }
            if ui.button("Remove this kind").clicked() {
                match scene.state.pack.without(kind, self.heir) {
                    Ok(pack) => {
                        scene.actions.push(Action::Rework {
                            label: "removed a kind".into(),
                            pack: Box::new(pack),
                        });
                        self.choose(KindRef {
                            at: kind.at.saturating_sub(1),
                            ..kind
                        });
                    }
                    Err(error) => self.said = Some(error.to_string()),
                }
            }
        });
    }
}

/// Why a trait that would change nothing can't be switched.
fn no_switch(of: Trait, on: bool) -> String {
    match (of, on) {
        (Trait::Home, _) => "There is no cargo in the pack to be a home for.".to_owned(),
        (Trait::Sink | Trait::Frail | Trait::Lock, false) => {
            "There is no other ground that it could become.".to_owned()
        }
        _ => "An item is one or the other.".to_owned(),
    }
}

fn short(of: Trait) -> String {
    format!("\"{}\"", of.sentence().to_lowercase())
}

fn role_line(ui: &mut Ui, scene: &mut Scene, kind: KindRef) {
    let role = scene.mechanics().bodies[usize::from(kind.at)].role;
    ui.horizontal(|ui| {
        ui.label("It is");
        for (value, text) in [
            (Role::Walker, "moved by the player"),
            (Role::Cargo, "cargo"),
        ] {
            if ui.radio(role == value, text).clicked() && role != value {
                let mut mechanics = scene.mechanics().clone();
                mechanics.bodies[usize::from(kind.at)].role = value;
                match refusal(&mechanics) {
                    None => scene.change("changed the role of a kind", mechanics),
                    Some(reason) => scene.actions.push(Action::Say(reason)),
                }
            }
        }
    });
}
