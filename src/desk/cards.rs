//! The cards of the findings and the lines on them.

use super::theme::Theme;
use egui::{Align, CollapsingHeader, InnerResponse, Layout, Response, RichText, Ui};

/// A card that can be folded; `key` stays the same when the title changes. The content is drawn only while it is open.
pub fn folding_card(ui: &mut Ui, key: &str, title: &str, content: impl FnOnce(&mut Ui)) {
    let theme = Theme::of(ui);
    theme.card().show(ui, |ui| {
        ui.set_width(ui.available_width());
        CollapsingHeader::new(RichText::new(title).strong().color(theme.text))
            .id_salt(("card", key))
            .default_open(true)
            .show_unindented(ui, content);
    });
}

/// A row of text that nobody clicks: only as high as its text.
pub fn quiet_row(ui: &mut Ui, content: impl FnOnce(&mut Ui)) -> InnerResponse<()> {
    ui.scope(|ui| {
        ui.spacing_mut().interact_size.y = 16.0;
        ui.horizontal(content);
    })
}

/// A line with a caption at the left and its figure at the right end.
pub fn figure_line(ui: &mut Ui, caption: &str, figure: &str) -> Response {
    let theme = Theme::of(ui);
    quiet_row(ui, |ui| {
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.label(RichText::new(figure).color(theme.text));
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                let caption = RichText::new(caption).color(theme.muted);
                ui.add(egui::Label::new(caption).truncate());
            });
        });
    })
    .response
}
