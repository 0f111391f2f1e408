//! The menus at the top, with the name of pack and level and whether all is saved.

use super::action::Action;
use super::keys::{COMMANDS, Command, Menu};
use super::state::State;
use super::theme::Theme;
use egui::{Align, Button, Layout, RichText, Ui};

/// Width of a menu, in points.
const MENU_WIDTH: f32 = 290.0;

/// Draws the menus and pushes what was chosen.
pub fn show(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    egui::MenuBar::new().ui(ui, |ui| {
        for (menu, name) in Menu::ALL {
            ui.menu_button(name, |ui| entries(ui, state, menu, actions));
        }
        title(ui, state);
    });
}

fn entries(ui: &mut Ui, state: &State, menu: Menu, actions: &mut Vec<Action>) {
    ui.set_width(MENU_WIDTH);
    let mut first = true;
    for command in COMMANDS.iter().filter(|command| command.menu == menu) {
        if command.divided && !first {
            ui.separator();
        }
        first = false;
        entry(ui, state, command, actions);
        if menu == Menu::File && (command.action)(state) == Action::Open {
            recent(ui, state, actions);
        }
    }
}

fn entry(ui: &mut Ui, state: &State, command: &Command, actions: &mut Vec<Action>) {
    let text = command.text(state);
    let mut button = Button::new(text).truncate();
    if let Some(key) = &command.key {
        button = button.shortcut_text(ui.ctx().format_shortcut(key));
    }
    if let Some(ticked) = command.ticked {
        button = button.selected(ticked(state));
    }
    let width = egui::vec2(MENU_WIDTH, 0.0);
    let response = ui.add_enabled((command.can)(state), button.min_size(width));
    if response.clicked() {
        actions.push((command.action)(state));
        ui.close();
    }
}

fn recent(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    ui.menu_button("Open recent", |ui| {
        ui.set_width(MENU_WIDTH);
        if state.settings.recent.is_empty() {
            ui.label(RichText::new("No pack was opened yet.").color(Theme::of(ui).muted));
        }
        for path in &state.settings.recent {
            let name = path.file_name().unwrap_or(path.as_os_str());
            let button = Button::new(name.to_string_lossy()).truncate();
            if ui
                .add(button)
                .on_hover_text(path.display().to_string())
                .clicked()
            {
                actions.push(Action::OpenPath(path.clone()));
                ui.close();
            }
        }
    });
}

fn title(ui: &mut Ui, state: &State) {
    let theme = Theme::of(ui);
    let saved = if state.is_dirty() {
        "unsaved changes"
    } else if state.path.is_some() {
        "saved"
    } else {
        "not on disk yet"
    };
    let name = format!(
        "{} / {:02} {}",
        state.pack.name,
        state.level + 1,
        state.current().name
    );
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        let colour = if state.is_dirty() {
            theme.amber
        } else {
            theme.muted
        };
        let saved = ui.label(RichText::new(saved).color(colour));
        if let Some(path) = &state.path {
            saved.on_hover_text(path.display().to_string());
        }
        ui.with_layout(
            Layout::centered_and_justified(egui::Direction::LeftToRight),
            |ui| {
                ui.add(egui::Label::new(RichText::new(name).strong()).truncate());
            },
        );
    });
}
