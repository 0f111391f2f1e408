//! Dialogs: small questions above the desk. Their fields live in the state; a changed field is an action like any other.

use super::action::Action;
use super::keys::{COMMANDS, Menu, OTHER_KEYS};
use super::state::{Dialog, PathPurpose, State, UnsavedChoice};
use super::theme::Theme;
use crate::file::STARTS;
use crate::level::MAX_SIDE;
use egui::{
    Align, Button, DragValue, Grid, Id, Key, Layout, Modal, RichText, ScrollArea, TextEdit, Ui,
};
use std::path::PathBuf;

/// Draws the dialog that is open, if one is, and pushes what the user did.
pub fn show(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let Some(open) = &state.dialog else {
        return;
    };
    let mut dialog = open.clone();
    let frame = egui::Frame::popup(ui.style()).inner_margin(egui::Margin::symmetric(18, 16));
    let modal = Modal::new(Id::unique("dialog"))
        .frame(frame)
        .show(ui.ctx(), |ui| {
            let most = ui.ctx().content_rect().width() - 80.0;
            ui.set_width(width_of(open).min(most));
            body(ui, state, &mut dialog, actions);
        });
    let decided = !actions.is_empty();
    if !decided && modal.should_close() {
        actions.push(if *open == Dialog::Unsaved {
            Action::Unsaved(UnsavedChoice::Stay)
        } else {
            Action::CloseDialog
        });
    } else if !decided && dialog != *open {
        actions.push(Action::DialogChanged(dialog));
    }
}

fn width_of(dialog: &Dialog) -> f32 {
    match dialog {
        Dialog::Keys | Dialog::Message { .. } | Dialog::Path { .. } => 540.0,
        Dialog::NewPack { .. } => 440.0,
        _ => 360.0,
    }
}

fn body(ui: &mut Ui, state: &State, dialog: &mut Dialog, actions: &mut Vec<Action>) {
    match dialog {
        Dialog::NewPack { name, start } => {
            heading(ui, "New pack");
            let ready = named(ui, "Name", name);
            starting_points(ui, start);
            let action = Action::CreatePack {
                name: name.clone(),
                start: *start,
            };
            decide(ui, "Begin", ready, action, actions);
        }
        Dialog::NewLevel {
            name,
            width,
            height,
        } => {
            heading(ui, "New level");
            let ready = named(ui, "Name", name);
            sides(ui, width, height);
            let action = Action::AddLevel {
                name: name.clone(),
                width: *width,
                height: *height,
            };
            decide(ui, "Add", ready, action, actions);
        }
        Dialog::RenameLevel { level, name } => {
            heading(ui, "Rename level");
            let ready = named(ui, "Name", name);
            decide(
                ui,
                "Rename",
                ready,
                Action::RenameLevel(*level, name.clone()),
                actions,
            );
        }
        Dialog::RenamePack { name } => {
            heading(ui, "Rename pack");
            let ready = named(ui, "Name", name);
            decide(
                ui,
                "Rename",
                ready,
                Action::RenamePack(name.clone()),
                actions,
            );
        }
        Dialog::Resize {
            width,
            height,
            anchor,
        } => resize(ui, width, height, anchor, actions),
        Dialog::Budget { seconds, mebibytes } => budget(ui, seconds, mebibytes, actions),
        Dialog::Path { purpose, text } => path(ui, *purpose, text, actions),
        Dialog::Unsaved => unsaved(ui, state, actions),
        Dialog::ChangedOnDisk { saving_to } => changed_on_disk(ui, saving_to.as_ref(), actions),
        Dialog::Recovery { about } => recovery(ui, about, actions),
        Dialog::Message { title, text } => message(ui, title, text, actions),
        Dialog::Keys => keys(ui, actions),
        Dialog::About => about(ui, actions),
    }
}

fn heading(ui: &mut Ui, text: &str) {
    ui.heading(text);
    ui.add_space(6.0);
}

/// A field for a name. Returns whether it is filled.
/// The starting points with what each is for; the last line takes over the kinds of the pack on the desk.
fn starting_points(ui: &mut Ui, start: &mut Option<usize>) {
    ui.label("Begin with the mechanics of");
    ScrollArea::vertical().max_height(300.0).show(ui, |ui| {
        for (at, point) in STARTS.iter().enumerate() {
            ui.horizontal_wrapped(|ui| {
                ui.radio_value(start, Some(at), point.name);
                ui.label(RichText::new(point.about).color(Theme::of(ui).muted));
            });
        }
        ui.horizontal_wrapped(|ui| {
            ui.radio_value(start, None, "The pack on the desk");
            ui.label(RichText::new("its kinds and one empty level").color(Theme::of(ui).muted));
        });
    });
}

fn named(ui: &mut Ui, label: &str, name: &mut String) -> bool {
    ui.horizontal(|ui| {
        let label = ui.label(label);
        let field = TextEdit::singleline(name).desired_width(f32::INFINITY);
        let response = ui.add(field).labelled_by(label.id);
        if ui.memory(|memory| memory.focused().is_none()) {
            response.request_focus();
        }
    });
    !name.trim().is_empty()
}

fn sides(ui: &mut Ui, width: &mut usize, height: &mut usize) {
    let range = 1..=usize::from(MAX_SIDE);
    ui.horizontal(|ui| {
        let label = ui.label("Columns");
        ui.add(DragValue::new(width).range(range.clone()))
            .labelled_by(label.id);
        ui.add_space(12.0);
        let label = ui.label("Rows");
        ui.add(DragValue::new(height).range(range))
            .labelled_by(label.id);
    });
}

/// The buttons below: the one that decides, and one to leave it. Enter decides as well.
fn decide(ui: &mut Ui, name: &str, ready: bool, action: Action, actions: &mut Vec<Action>) {
    ui.add_space(10.0);
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        let pressed = ui.add_enabled(ready, primary(ui, name)).clicked();
        if ready && (pressed || ui.input(|input| input.key_pressed(Key::Enter))) {
            actions.push(Action::CloseDialog);
            actions.push(action);
        } else if ui.button("Cancel").clicked() {
            actions.push(Action::CloseDialog);
        }
    });
}

fn primary<'a>(ui: &Ui, name: &'a str) -> Button<'a> {
    Button::new(RichText::new(name).strong()).stroke((1.5, Theme::of(ui).amber))
}

fn resize(
    ui: &mut Ui,
    width: &mut usize,
    height: &mut usize,
    anchor: &mut (u8, u8),
    actions: &mut Vec<Action>,
) {
    heading(ui, "Resize level");
    sides(ui, width, height);
    ui.add_space(6.0);
    ui.label("Which part stays where it is:");
    let names = [
        ["top left", "top", "top right"],
        ["left", "middle", "right"],
        ["bottom left", "bottom", "bottom right"],
    ];
    Grid::new("anchor").spacing([6.0, 6.0]).show(ui, |ui| {
        for (y, row) in names.into_iter().enumerate() {
            for (x, name) in row.into_iter().enumerate() {
                let here = (x as u8, y as u8);
                let button = Button::new(name)
                    .selected(*anchor == here)
                    .min_size(egui::vec2(96.0, 0.0));
                if ui.add(button).clicked() {
                    *anchor = here;
                }
            }
            ui.end_row();
        }
    });
    let action = Action::ResizeLevel {
        width: *width,
        height: *height,
        anchor: *anchor,
    };
    decide(ui, "Resize", true, action, actions);
}

fn budget(ui: &mut Ui, seconds: &mut f64, mebibytes: &mut u64, actions: &mut Vec<Action>) {
    heading(ui, "Time and memory of a search");
    ui.label("A search that meets one of these limits ends as undecided.");
    ui.add_space(6.0);
    ui.horizontal(|ui| {
        let label = ui.label("Seconds for a level");
        ui.add(DragValue::new(seconds).range(0.1..=86_400.0).speed(1.0))
            .labelled_by(label.id);
    });
    ui.horizontal(|ui| {
        let label = ui.label("Memory, in MiB");
        ui.add(DragValue::new(mebibytes).range(16..=1_048_576).speed(16.0))
            .labelled_by(label.id);
    });
    let action = Action::SetBudget {
        seconds: *seconds,
        mebibytes: *mebibytes,
    };
    decide(ui, "Set", true, action, actions);
}

fn path(ui: &mut Ui, purpose: PathPurpose, text: &mut String, actions: &mut Vec<Action>) {
    let (title, button) = match purpose {
        PathPurpose::Open => ("Open a pack", "Open"),
        PathPurpose::Save => ("Save the pack", "Save"),
    };
    heading(ui, title);
    ui.label("The system offers no file dialog here. Type the path of the pack.");
    let ready = named(ui, "Path", text);
    let path = PathBuf::from(text.trim());
    let action = match purpose {
        PathPurpose::Open => Action::OpenNow(path),
        PathPurpose::Save => Action::SaveTo(super::files::with_ending(path)),
    };
    ui.add_space(10.0);
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        let pressed = ui.add_enabled(ready, primary(ui, button)).clicked();
        if ready && (pressed || ui.input(|input| input.key_pressed(Key::Enter))) {
            actions.push(Action::PutDialogAway);
            actions.push(action);
        } else if ui.button("Cancel").clicked() {
            actions.push(Action::CloseDialog);
        }
    });
}

fn unsaved(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    heading(ui, "Save the changes?");
    ui.label(format!(
        "{} has changes that are not on disk.",
        state.pack.name
    ));
    choose(
        ui,
        &[
            ("Save", Action::Unsaved(UnsavedChoice::Save)),
            ("Don't save", Action::Unsaved(UnsavedChoice::Drop)),
            ("Cancel", Action::Unsaved(UnsavedChoice::Stay)),
        ],
        actions,
    );
}

fn changed_on_disk(ui: &mut Ui, saving_to: Option<&PathBuf>, actions: &mut Vec<Action>) {
    match saving_to {
        Some(path) => {
            heading(ui, "Replace the file?");
            ui.label(format!(
                "{} holds something that was not read or written here.",
                path.display()
            ));
            let choices = [
                ("Save elsewhere", Action::SaveAs),
                ("Replace it", Action::Overwrite(path.clone())),
                ("Cancel", Action::CloseDialog),
            ];
            choose(ui, &choices, actions);
        }
        None => {
            heading(ui, "The file changed on disk");
            ui.label("Another program changed the pack's file since it was read.");
            let choices = [
                ("Keep what is on the desk", Action::CloseDialog),
                ("Read it again", Action::Reload),
            ];
            choose(ui, &choices, actions);
        }
    }
}

fn recovery(ui: &mut Ui, about: &str, actions: &mut Vec<Action>) {
    heading(ui, "Recover unsaved work?");
    ui.label("The program did not end well last time and left this behind:");
    ui.add_space(4.0);
    ui.label(RichText::new(about).strong());
    let choices = [
        ("Recover", Action::Recover),
        ("Later", Action::CloseDialog),
        ("Throw it away", Action::DropRecovery),
    ];
    choose(ui, &choices, actions);
}

/// Buttons from right to left; the first is the one that Enter means.
fn choose(ui: &mut Ui, choices: &[(&str, Action)], actions: &mut Vec<Action>) {
    ui.add_space(10.0);
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        for (at, (name, action)) in choices.iter().enumerate() {
            let response = if at == 0 {
                ui.add(primary(ui, name))
            } else {
                ui.button(*name)
            };
            let entered = at == 0
                && ui.memory(|memory| memory.focused().is_none())
                && ui.input(|input| input.key_pressed(Key::Enter));
            if actions.is_empty() && (response.clicked() || entered) {
                actions.push(action.clone());
            }
        }
    });
}

fn message(ui: &mut Ui, title: &str, text: &str, actions: &mut Vec<Action>) {
    heading(ui, title);
    ScrollArea::vertical().max_height(320.0).show(ui, |ui| {
        ui.add(egui::Label::new(text).wrap().selectable(true));
    });
    choose(ui, &[("Close", Action::CloseDialog)], actions);
}

fn keys(ui: &mut Ui, actions: &mut Vec<Action>) {
    heading(ui, "Keys");
    let height = (ui.ctx().content_rect().height() - 200.0).max(120.0);
    ScrollArea::vertical().max_height(height).show(ui, |ui| {
        Grid::new("keys")
            .num_columns(2)
            .striped(true)
            .spacing([24.0, 4.0])
            .show(ui, |ui| {
                for (menu, title) in Menu::ALL {
                    let of_menu = COMMANDS.iter().filter(|command| command.menu == menu);
                    for command in of_menu {
                        if let Some(key) = &command.key {
                            ui.strong(ui.ctx().format_shortcut(key));
                            ui.label(format!("{title}: {}", command.name.trim_end_matches('…')));
                            ui.end_row();
                        }
                    }
                }
                for (key, what) in OTHER_KEYS {
                    ui.strong(*key);
                    ui.label(*what);
                    ui.end_row();
                }
            });
    });
    choose(ui, &[("Close", Action::CloseDialog)], actions);
}

fn about(ui: &mut Ui, actions: &mut Vec<Action>) {
    heading(ui, "Foldwright");
    ui.label(format!("Version {}", env!("CARGO_PKG_VERSION")));
    ui.add_space(6.0);
    ui.label(
        "A level editor for grid puzzles that says after every edit whether the level can still be finished, in how few steps \
         and by which route.",
    );
    ui.add_space(6.0);
    ui.label(RichText::new("MIT or Apache-2.0, as you like.").color(Theme::of(ui).muted));
    choose(ui, &[("Close", Action::CloseDialog)], actions);
}
