//! The pack's levels along the bottom: picture, name, verdict and par, in playing order.
//!
//! Only the cards in view are drawn, and what is known about each level is looked up again only when the pack or an answer
//! changed, so that a thousand levels cost a frame no more than ten do.

use super::action::Action;
use super::marks::{Icon, icon_button};
use super::pictures::Pictures;
use super::shelf_lines::Line;
use super::state::State;
use super::theme::{Theme, grouped};
use egui::{
    Align, Align2, CursorIcon, FontId, Id, Key, Layout, Rect, Response, RichText, Role, ScrollArea,
    Sense, Stroke, StrokeKind, TextEdit, Ui, Vec2, WidgetInfo, pos2, vec2,
};

pub(super) use super::shelf_lines::Lines;

/// Height of a level's picture, in points, and in a low window.
const PICTURE_HEIGHT: (f32, f32) = (58.0, 36.0);
/// Room for what stands under the picture.
const TEXT_HEIGHT: f32 = 62.0;
/// Width of a card.
const CARD_WIDTH: f32 = 132.0;
/// Windows lower than this have lower cards.
const LOW_WINDOW: f32 = 720.0;
/// Room between cards.
const GAP: f32 = 8.0;

/// Draws the shelf and pushes what the user did.
pub fn show(ui: &mut Ui, state: &State, pictures: &mut Pictures, actions: &mut Vec<Action>) {
    let mut lines = std::mem::take(&mut pictures.shelf_lines);
    lines.update(state);
    ui.add_space(4.0);
    header(ui, state, &lines, actions);
    ui.add_space(2.0);
    let card_size = card_size(ui);
    let stride = CARD_WIDTH + GAP;
    let count = lines.lines().len();
    ScrollArea::horizontal()
        .id_salt("shelf")
        .auto_shrink([false, true])
        .show_viewport(ui, |ui, viewport| {
            let all = vec2(count as f32 * stride, card_size.y + 4.0);
            let (whole, _) = ui.allocate_exact_size(all, Sense::hover());
            follow_selection(ui, state, whole, stride);
            let first = (viewport.left() / stride).floor().max(0.0) as usize;
            let last = ((viewport.right() / stride).ceil().max(0.0) as usize).min(count);
            for index in first..last {
                let corner = whole.min + vec2(index as f32 * stride, 2.0);
                let card = Rect::from_min_size(corner, card_size);
                show_card(ui, card, index, &lines, state, pictures, actions);
            }
            drop_mark(ui, whole, stride, count, actions);
        });
    pictures.shelf_lines = lines;
}

fn card_size(ui: &Ui) -> Vec2 {
    let low = ui.ctx().content_rect().height() < LOW_WINDOW;
    let picture = if low {
        PICTURE_HEIGHT.1
    } else {
        PICTURE_HEIGHT.0
    };
    vec2(CARD_WIDTH, picture + TEXT_HEIGHT)
}

fn header(ui: &mut Ui, state: &State, lines: &Lines, actions: &mut Vec<Action>) {
    let theme = Theme::of(ui);
    let (level, last) = (state.level, state.pack.levels.len().saturating_sub(1));
    ui.horizontal(|ui| {
        super::theme::section(ui, "Shelf");
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.spacing_mut().item_spacing.x = 5.0;
            let later = Action::MoveLevel {
                from: level,
                to: level + 1,
            };
            let earlier = Action::MoveLevel {
                from: level,
                to: level.saturating_sub(1),
            };
            for (icon, enabled, name, hint, action) in [
                (
                    Icon::Later,
                    level < last,
                    "Move level later",
                    "One place later in the playing order",
                    later,
                ),
                (
                    Icon::Earlier,
                    level > 0,
                    "Move level earlier",
                    "One place earlier in the playing order",
                    earlier,
                ),
                (
                    Icon::Delete,
                    last > 0,
                    "Delete level",
                    "Take the level out of the pack (undo brings it back)",
                    Action::DeleteLevel(level),
                ),
                (
                    Icon::Copy,
                    true,
                    "Duplicate level",
                    "Add a copy after the level",
                    Action::DuplicateLevel(level),
                ),
                (
                    Icon::Add,
                    true,
                    "Add level",
                    "Add a new level after this one",
                    Action::NewLevel,
                ),
            ] {
                if icon_button(ui, icon, enabled, name, hint).clicked() {
                    actions.push(action);
                }
            }
            if icon_button(
                ui,
                Icon::Rename,
                true,
                "Rename level",
                "Rename the level here on the shelf",
            )
            .clicked()
            {
                begin_rename(ui, state, level);
            }
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                let text = lines.summary();
                ui.add(egui::Label::new(RichText::new(text).color(theme.muted)).truncate())
                    .on_hover_text(text);
            });
        });
    });
}

/// Scrolls to the level on the board when it has become another.
fn follow_selection(ui: &mut Ui, state: &State, whole: Rect, stride: f32) {
    let id = Id::unique("shelf selection");
    let seen = (state.level, state.pack.levels.len());
    if ui.data(|data| data.get_temp(id)) != Some(seen) {
        ui.data_mut(|data| data.insert_temp(id, seen));
        let corner = whole.min + vec2(state.level as f32 * stride, 0.0);
        ui.scroll_to_rect(
            Rect::from_min_size(corner, vec2(CARD_WIDTH, 1.0)).expand2(vec2(GAP, 0.0)),
            None,
        );
    }
}

fn show_card(
    ui: &mut Ui,
    card: Rect,
    index: usize,
    lines: &Lines,
    state: &State,
    pictures: &mut Pictures,
    actions: &mut Vec<Action>,
) {
    let theme = Theme::of(ui);
    let line = &lines.lines()[index];
    let level = &state.pack.levels[index];
    let selected = index == state.level;
    let response = ui.interact(
        card,
        Id::unique(("shelf card", index)),
        Sense::click_and_drag(),
    );
    let name = format!("Level {}, {}, {}", index + 1, level.name, line.text());
    response.widget_info(|| WidgetInfo::selected(Role::Button, true, selected, &name));
    paint_frame(ui, card, theme, &response, selected);
    let inner = card.shrink2(vec2(9.0, 7.0));
    let picture = Rect::from_min_size(inner.min, vec2(inner.width(), card.height() - TEXT_HEIGHT));
    pictures.paint_level(ui.painter(), level, picture);
    par_bar(ui, inner, theme, line, lines.greatest_par());
    if !rename_field(ui, inner, index, actions) {
        caption(ui, inner, theme, index, &level.name, selected);
    }
    foot(ui, inner, theme, line);
    react(ui, &response, index, state, actions);
    let hint = format!("{}\n{}", level.name, line.text());
    response
        .on_hover_text(hint)
        .context_menu(|ui| card_menu(ui, index, state, actions));
}

fn paint_frame(ui: &Ui, card: Rect, theme: &Theme, response: &Response, selected: bool) {
    let edge = if response.has_focus() || selected {
        Stroke::new(2.0, theme.amber)
    } else if response.hovered() {
        Stroke::new(1.0, theme.muted)
    } else {
        theme.hairline()
    };
    let fill = if response.hovered() {
        theme.hover
    } else {
        theme.raised
    };
    ui.painter().rect(card, 8.0, fill, edge, StrokeKind::Inside);
    if response.has_focus() && selected {
        ui.painter().rect_stroke(
            card.shrink(4.0),
            5.0,
            Stroke::new(1.0, theme.amber),
            StrokeKind::Inside,
        );
    }
}

/// Par against the greatest par of the pack: whole if proved, hollow if it may still fall, none if there is no route.
fn par_bar(ui: &Ui, inner: Rect, theme: &Theme, line: &Line, greatest: u32) {
    let top = inner.bottom() - 43.0;
    let rail = Rect::from_min_size(pos2(inner.left(), top), vec2(inner.width(), 5.0));
    ui.painter()
        .rect_filled(rail, 2.5, theme.line.gamma_multiply(0.35));
    let Some(par) = line.par else {
        return;
    };
    let share = (par as f32 / greatest.max(1) as f32).clamp(0.04, 1.0);
    let bar = Rect::from_min_size(rail.min, vec2(rail.width() * share, rail.height()));
    if line.proved {
        ui.painter().rect_filled(bar, 2.5, theme.leaf);
    } else {
        ui.painter().rect_filled(bar, 2.5, theme.raised);
        ui.painter()
            .rect_stroke(bar, 2.5, Stroke::new(1.3, theme.leaf), StrokeKind::Inside);
    }
}

fn caption(ui: &Ui, inner: Rect, theme: &Theme, index: usize, name: &str, selected: bool) {
    let colour = if selected { theme.text } else { theme.muted };
    let text = format!("{:02}  {name}", index + 1);
    let mut job =
        egui::text::LayoutJob::simple_singleline(text, FontId::proportional(11.5), colour);
    job.wrap = egui::text::TextWrapping::truncate_at_width(inner.width());
    let galley = ui.painter().layout_job(job);
    ui.painter()
        .galley(pos2(inner.left(), inner.bottom() - 34.0), galley, colour);
}

fn foot(ui: &Ui, inner: Rect, theme: &Theme, line: &Line) {
    let y = inner.bottom() - 7.0;
    let mark = Rect::from_center_size(pos2(inner.left() + 7.0, y), Vec2::splat(13.0));
    line.mark.paint(ui.painter(), mark, theme, false);
    let font = FontId::proportional(11.5);
    let (text, colour) = match line.par {
        Some(par) if line.proved => (format!("par {}", grouped(u64::from(par))), theme.text),
        Some(par) => (format!("at most {}", grouped(u64::from(par))), theme.text),
        None => (line.mark.word().to_owned(), theme.muted),
    };
    ui.painter().text(
        pos2(inner.right(), y),
        Align2::RIGHT_CENTER,
        text,
        font,
        colour,
    );
}

fn react(ui: &Ui, response: &Response, index: usize, state: &State, actions: &mut Vec<Action>) {
    if response.clicked() && index != state.level {
        actions.push(Action::ShowLevel(index));
    }
    if response.double_clicked() {
        begin_rename(ui, state, index);
    }
    if response.drag_started_by(egui::PointerButton::Primary) {
        egui::DragAndDrop::set_payload(ui.ctx(), Dragged(index));
    }
    if response.has_focus() && ui.input(|input| input.key_pressed(Key::F2)) {
        begin_rename(ui, state, index);
    }
}

fn card_menu(ui: &mut Ui, index: usize, state: &State, actions: &mut Vec<Action>) {
    let last = state.pack.levels.len().saturating_sub(1);
    let mut offer = |ui: &mut Ui, enabled: bool, text: &str, action: Action| {
        if ui.add_enabled(enabled, egui::Button::new(text)).clicked() {
            actions.push(action);
            ui.close();
        }
    };
    offer(ui, true, "Show", Action::ShowLevel(index));
    offer(ui, true, "Rename...", Action::AskRename(index));
    offer(ui, true, "Duplicate", Action::DuplicateLevel(index));
    ui.separator();
    offer(
        ui,
        index > 0,
        "To the front",
        Action::MoveLevel { from: index, to: 0 },
    );
    offer(
        ui,
        index < last,
        "To the end",
        Action::MoveLevel {
            from: index,
            to: last,
        },
    );
    ui.separator();
    offer(ui, last > 0, "Delete", Action::DeleteLevel(index));
}

// --- Dragging ---------------------------------------------------------------------------------------------------------

/// The level that is being dragged along the shelf.
#[derive(Clone, Copy)]
struct Dragged(usize);

/// The place in the order that a level dragged from `from` takes when it is dropped before the card `gap`.
fn place_after_drop(from: usize, gap: usize) -> usize {
    if gap > from { gap - 1 } else { gap }
}

fn drop_mark(ui: &Ui, whole: Rect, stride: f32, count: usize, actions: &mut Vec<Action>) {
    let Some(dragged) = egui::DragAndDrop::payload::<Dragged>(ui.ctx()) else {
        return;
    };
    let Some(pointer) = ui.input(|input| input.pointer.latest_pos()) else {
        return;
    };
    if !whole.expand(24.0).contains(pointer) {
        return;
    }
    ui.ctx().set_cursor_icon(CursorIcon::Grabbing);
    let gap = ((pointer.x - whole.left()) / stride + 0.5).floor().max(0.0) as usize;
    let gap = gap.min(count);
    let x = whole.left() + gap as f32 * stride - GAP / 2.0;
    let theme = Theme::of(ui);
    ui.painter()
        .vline(x, whole.y_range(), Stroke::new(3.0, theme.amber));
    if ui.input(|input| input.pointer.any_released()) {
        egui::DragAndDrop::clear_payload(ui.ctx());
        let to = place_after_drop(dragged.0, gap);
        if to != dragged.0 {
            actions.push(Action::MoveLevel {
                from: dragged.0,
                to,
            });
        }
    }
}

// --- Renaming in place ------------------------------------------------------------------------------------------------

/// The name being typed, and for which level.
#[derive(Clone)]
struct Renaming {
    index: usize,
    text: String,
    begun: bool,
}

fn renaming_id() -> Id {
    Id::unique("shelf renaming")
}

fn begin_rename(ui: &Ui, state: &State, index: usize) {
    let renaming = Renaming {
        index,
        text: state.pack.levels[index].name.clone(),
        begun: false,
    };
    ui.data_mut(|data| data.insert_temp(renaming_id(), renaming));
}

/// The field in which the level's name is typed, if it is being renamed. Enter or a click elsewhere keeps the name, Escape doesn't.
fn rename_field(ui: &mut Ui, inner: Rect, index: usize, actions: &mut Vec<Action>) -> bool {
    let known: Option<Renaming> = ui.data(|data| data.get_temp(renaming_id()));
    let Some(mut renaming) = known.filter(|renaming| renaming.index == index) else {
        return false;
    };
    let place = Rect::from_min_size(
        pos2(inner.left() - 3.0, inner.bottom() - 38.0),
        vec2(inner.width() + 6.0, 22.0),
    );
    let field = TextEdit::singleline(&mut renaming.text)
        .id(Id::unique("shelf name"))
        .font(FontId::proportional(11.5))
        .margin(vec2(4.0, 3.0));
    let response = ui.put(place, field);
    response.widget_info(|| WidgetInfo::labeled(Role::TextInput, true, "Name of the level"));
    if !renaming.begun {
        response.request_focus();
        renaming.begun = true;
    }
    let left = response.lost_focus();
    let given_up = ui.input(|input| input.key_pressed(Key::Escape));
    if left {
        let name = renaming.text.trim();
        if !given_up && !name.is_empty() {
            actions.push(Action::RenameLevel(index, name.to_owned()));
        }
        ui.data_mut(|data| data.remove::<Renaming>(renaming_id()));
    } else {
        ui.data_mut(|data| data.insert_temp(renaming_id(), renaming));
    }
    true
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_level_lands_where_it_is_dropped() {
        let check = |from: usize, gap: usize, expected: usize| {
            assert_eq!(place_after_drop(from, gap), expected, "{from} before {gap}");
        };
        check(0, 0, 0);
        check(0, 1, 0);
        check(0, 3, 2);
        check(3, 0, 0);
        check(3, 3, 3);
        check(3, 5, 4);
    }
}
