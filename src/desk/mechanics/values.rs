//! The values of a trait: directions, channels, grounds and cargo, each with its picker.

use super::traits::{Trait, cargo_ids, channels};
use crate::level::{
    Axis, Channel, Dir, GroundKind, Item, KindId, KindRef, Layer, Mechanics, Opens,
};
use egui::{ComboBox, Id, TextEdit, Ui, WidgetInfo};

/// Draws the values of a trait that is on. Returns the mechanics with a changed value.
pub(super) fn values(
    ui: &mut Ui,
    mechanics: &Mechanics,
    kind: KindRef,
    of: Trait,
) -> Option<Mechanics> {
    let mut new = mechanics.clone();
    let at = usize::from(kind.at);
    match kind.layer {
        Layer::Ground => ground_values(ui, mechanics, &mut new.grounds[at], of),
        Layer::Body => {
            if let (Trait::Axis, Some(axis)) = (of, new.bodies[at].axis.as_mut()) {
                for (value, text) in [
                    (Axis::Any, "any way"),
                    (Axis::Row, "along rows"),
                    (Axis::Column, "along columns"),
                ] {
                    ui.radio_value(axis, value, text);
                }
            }
        }
        Layer::Item => {
            if let (Trait::Key, Item::Key(channel)) = (of, &mut new.items[at].item) {
                channel_value(ui, mechanics, channel, kind);
            }
        }
    }
    (new != *mechanics).then_some(new)
}

fn ground_values(ui: &mut Ui, mechanics: &Mechanics, ground: &mut GroundKind, of: Trait) {
    let salt = (ground.id.clone(), of);
    match of {
        Trait::OneWay => {
            for (dir, text) in [
                (Dir::N, "north"),
                (Dir::E, "east"),
                (Dir::S, "south"),
                (Dir::W, "west"),
            ] {
                let mut on = ground.enter_only.contains(&dir);
                if ui.checkbox(&mut on, text).changed() {
                    ground.enter_only.retain(|&other| other != dir);
                    ground.enter_only.extend(on.then_some(dir));
                    ground.enter_only.sort();
                }
            }
        }
        Trait::Sink => becomes_value(ui, mechanics, ground.sink.as_mut(), salt),
        Trait::Frail => becomes_value(ui, mechanics, ground.frail.as_mut(), salt),
        Trait::Plate => channel_of(ui, mechanics, ground.plate.as_mut(), salt),
        Trait::Warp => channel_of(ui, mechanics, ground.warp.as_mut(), salt),
        Trait::Gate => {
            if let Some(gate) = &mut ground.gate {
                channel_value(ui, mechanics, &mut gate.channel, salt);
                ui.radio_value(&mut gate.opens, Opens::WhenHeld, "is held");
                ui.radio_value(&mut gate.opens, Opens::WhenFree, "is free");
            }
        }
        Trait::Lock => {
            if let Some(lock) = &mut ground.lock {
                channel_value(ui, mechanics, &mut lock.channel, salt.clone());
                ui.label("and becomes");
                becomes_value(ui, mechanics, Some(&mut lock.becomes), salt);
            }
        }
        Trait::Home => {
            for id in cargo_ids(mechanics) {
                let label = mechanics
                    .find_body(id)
                    .map_or(id.as_str(), |ix| mechanics.body(ix).label.as_str());
                let mut on = ground.home.contains(id);
                if ui.checkbox(&mut on, label).changed() {
                    ground.home.retain(|other| other != id);
                    ground.home.extend(on.then(|| id.clone()));
                }
            }
        }
        _ => {}
    }
}

fn becomes_value(
    ui: &mut Ui,
    mechanics: &Mechanics,
    value: Option<&mut KindId>,
    salt: impl std::hash::Hash + std::fmt::Debug,
) {
    let Some(value) = value else { return };
    let label = |id: &KindId| {
        mechanics
            .find_ground(id)
            .map_or(id.to_string(), |ix| mechanics.ground(ix).label.clone())
    };
    ComboBox::from_id_salt(("becomes", salt))
        .selected_text(label(value))
        .show_ui(ui, |ui| {
            for ground in &mechanics.grounds {
                ui.selectable_value(value, ground.id.clone(), &ground.label);
            }
        });
}

fn channel_of(
    ui: &mut Ui,
    mechanics: &Mechanics,
    value: Option<&mut Channel>,
    salt: impl std::hash::Hash + std::fmt::Debug,
) {
    if let Some(channel) = value {
        channel_value(ui, mechanics, channel, salt);
    }
}

/// A channel is typed, or chosen among those in use.
fn channel_value(
    ui: &mut Ui,
    mechanics: &Mechanics,
    value: &mut Channel,
    salt: impl std::hash::Hash + std::fmt::Debug,
) {
    let id = ui.make_persistent_id(("channel", salt));
    if let Some(new) = text_line(ui, id, &value.0, "Channel", 64.0) {
        *value = Channel(new);
    }
    ComboBox::from_id_salt(id.with("known"))
        .selected_text("")
        .width(24.0)
        .show_ui(ui, |ui| {
            for channel in channels(mechanics) {
                let text = channel.0.clone();
                ui.selectable_value(value, channel, text);
            }
        });
}

/// A line of text that is taken when it is left or Enter is pressed. Returns the new text, if it is another.
pub(super) fn text_line(
    ui: &mut Ui,
    key: impl std::hash::Hash + std::fmt::Debug,
    now: &str,
    name: &str,
    width: f32,
) -> Option<String> {
    let id = Id::unique(("text-line", key));
    let mut text = ui
        .data(|data| data.get_temp::<String>(id))
        .unwrap_or_else(|| now.to_owned());
    let response = ui.add(
        TextEdit::singleline(&mut text)
            .id(id.with("edit"))
            .desired_width(width)
            .char_limit(60),
    );
    response.widget_info(|| WidgetInfo::labeled(egui::Role::TextInput, true, name));
    if response.has_focus() {
        ui.data_mut(|data| data.insert_temp(id, text));
        return None;
    }
    ui.data_mut(|data| data.remove::<String>(id));
    let text = text.trim().to_owned();
    (response.lost_focus() && text != now && !text.is_empty()).then_some(text)
}
