//! The tray at the left: what can be painted, in what shape, and what is shown over the board.

use super::action::Action;
use super::keys::{key_text, number_key_text};
use super::pictures::{Kind, Pictures};
use super::state::{Brush, ShowFlag, State, Tool};
use super::stroke::brush_label;
use super::theme::{Theme, section};
use super::traits::describe;
use crate::level::{BodyIx, GroundIx, ItemIx};
use egui::text::LayoutJob;
use egui::{
    Align, Button, Color32, FontId, Frame, Galley, Margin, Panel, Rect, Response, Role, ScrollArea,
    Sense, StrokeKind, TextStyle, Ui, Vec2, WidgetInfo, vec2,
};
use std::sync::Arc;

/// Side of a picture in the tray, in points.
const PICTURE: f32 = 38.0;

/// Below this height, in points, the tray scrolls as a whole.
const LEAST_HEIGHT: f32 = 420.0;

/// Draws the tray and pushes what was chosen. Brush and overlays stay in sight while the kinds scroll, where there is room.
pub fn show(ui: &mut Ui, state: &State, pictures: &mut Pictures, actions: &mut Vec<Action>) {
    let roomy = ui.available_height() >= LEAST_HEIGHT;
    if roomy {
        Panel::bottom("tray-tools")
            .frame(Frame::new().inner_margin(Margin::symmetric(0, 4)))
            .resizable(false)
            .show(ui, |ui| tools_and_overlays(ui, state, actions));
    }
    ScrollArea::vertical().auto_shrink(false).show(ui, |ui| {
        ui.add_space(4.0);
        if !roomy {
            section(ui, "Brush");
            tools(ui, state, actions);
            ui.add_space(6.0);
        }
        kinds(ui, state, pictures, actions);
        if !roomy {
            section(ui, "Show");
            overlays(ui, state, actions);
        }
    });
}

fn tools_and_overlays(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    ui.add_space(2.0);
    section(ui, "Brush");
    tools(ui, state, actions);
    ui.add_space(6.0);
    section(ui, "Show");
    overlays(ui, state, actions);
    ui.add_space(4.0);
}

fn kinds(ui: &mut Ui, state: &State, pictures: &mut Pictures, actions: &mut Vec<Action>) {
    let mechanics = state.mechanics();
    let grounds: Vec<Brush> = (0..mechanics.grounds.len())
        .map(|at| Brush::Ground(GroundIx(at as u16)))
        .collect();
    let bodies: Vec<Brush> = (0..mechanics.bodies.len())
        .map(|at| Brush::Body(BodyIx(at as u16)))
        .collect();
    let items: Vec<Brush> = (0..mechanics.items.len())
        .map(|at| Brush::Item(ItemIx(at as u16)))
        .collect();
    let mut nth = 0;
    for (title, brushes) in [("Ground", grounds), ("Bodies", bodies), ("Items", items)] {
        if brushes.is_empty() {
            continue;
        }
        section(ui, title);
        grid(ui, state, pictures, &brushes, nth, actions);
        nth += brushes.len();
        ui.add_space(8.0);
    }
}

/// Kinds in as many columns as there is room for.
fn grid(
    ui: &mut Ui,
    state: &State,
    pictures: &mut Pictures,
    brushes: &[Brush],
    first_nth: usize,
    actions: &mut Vec<Action>,
) {
    let room = ui.available_width();
    let columns = (room / 52.0).floor().max(1.0) as usize;
    let width = room / columns as f32;
    for (row, line) in brushes.chunks(columns).enumerate() {
        let labels: Vec<Arc<Galley>> = line
            .iter()
            .map(|&brush| label_galley(ui, state, brush, width - 3.0))
            .collect();
        let tallest = labels
            .iter()
            .map(|label| label.size().y)
            .fold(0.0, f32::max);
        ui.horizontal(|ui| {
            ui.spacing_mut().item_spacing.x = 0.0;
            for (column, (&brush, label)) in line.iter().zip(labels).enumerate() {
                let nth = first_nth + row * columns + column;
                let size = vec2(width, PICTURE + tallest + 7.0);
                let response = kind_button(ui, state, pictures, brush, label, size);
                if hinted(response, state, brush, nth).clicked() {
                    actions.push(Action::ChooseBrush(brush));
                }
            }
        });
    }
}

/// The label of a kind in at most two lines, centred about 0.
fn label_galley(ui: &Ui, state: &State, brush: Brush, width: f32) -> Arc<Galley> {
    let theme = Theme::of(ui);
    let colour = if state.brush == brush {
        theme.text
    } else {
        theme.muted
    };
    let label = brush_label(state.mechanics(), brush).to_owned();
    let font = FontId::new(10.5, TextStyle::Small.resolve(ui.style()).family);
    let mut job = LayoutJob::simple(label, font, colour, width);
    job.halign = Align::Center;
    job.wrap.max_rows = 2;
    job.wrap.break_anywhere = false;
    ui.painter().layout_job(job)
}

fn kind_button(
    ui: &mut Ui,
    state: &State,
    pictures: &mut Pictures,
    brush: Brush,
    label: Arc<Galley>,
    size: Vec2,
) -> Response {
    let theme = Theme::of(ui);
    let (rect, response) = ui.allocate_exact_size(size, Sense::click());
    let chosen = state.brush == brush;
    response.widget_info(|| {
        let label = brush_label(state.mechanics(), brush);
        WidgetInfo::selected(Role::RadioButton, true, chosen, label)
    });
    if !ui.is_rect_visible(rect) {
        return response;
    }
    let picture = Rect::from_center_size(
        rect.center_top() + vec2(0.0, PICTURE / 2.0 + 3.0),
        vec2(PICTURE, PICTURE),
    );
    let painter = ui.painter();
    if matches!(brush, Brush::Body(_) | Brush::Item(_)) {
        painter.rect_filled(picture, 3.0, theme.raised);
    }
    if let Some(kind) = Kind::of(brush) {
        pictures.paint(painter, picture, kind, Color32::WHITE);
    }
    let frame = picture.expand(3.0);
    if chosen {
        painter.rect_stroke(frame, 5.0, (2.0, theme.amber), StrokeKind::Middle);
    } else if response.hovered() || response.has_focus() {
        painter.rect_stroke(frame, 5.0, (1.0, theme.line), StrokeKind::Middle);
    }
    let below = picture.center_bottom() + vec2(0.0, 4.0);
    painter.galley(below, label, theme.text);
    response
}

fn hinted(response: Response, state: &State, brush: Brush, nth: usize) -> Response {
    response.on_hover_ui(|ui| {
        let label = brush_label(state.mechanics(), brush);
        match number_key_text(nth) {
            Some(key) => ui.strong(format!("{label}  ({key})")),
            None => ui.strong(label),
        };
        for line in describe(state.mechanics(), brush) {
            ui.label(line);
        }
    })
}

fn tools(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let width = (ui.available_width() - 16.0) / 3.0;
    let hints = [
        "every cell that the pointer passes",
        "a straight line",
        "a filled rectangle",
        "all linked cells that look like this one",
        "choose what is on the cell",
    ];
    let tools: Vec<_> = Tool::ALL.into_iter().zip(hints).collect();
    for line in tools.chunks(3) {
        ui.horizontal(|ui| {
            for &((tool, name), hint) in line {
                let button = Button::new(name)
                    .selected(state.tool == tool)
                    .min_size(vec2(width, 0.0));
                let action = Action::ChooseTool(tool);
                let key = key_text(ui.ctx(), state, &action).unwrap_or_default();
                if ui
                    .add(button)
                    .on_hover_text(format!("{hint} ({key})"))
                    .clicked()
                {
                    actions.push(action);
                }
            }
        });
    }
}

fn overlays(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let flags = [
        (
            ShowFlag::Heat,
            "heat",
            "how many positions fold away with the walker on the tile",
        ),
        (
            ShowFlag::IdleTiles,
            "idle tiles",
            "hatch tiles that nobody needs",
        ),
        (
            ShowFlag::FoldReach,
            "fold reach",
            "outline where the walker can go and come back",
        ),
        (
            ShowFlag::Problems,
            "problems",
            "mark the cells that a problem is about",
        ),
    ];
    for (flag, name, hint) in flags {
        let mut on = state.show.is_on(flag);
        let action = Action::Toggle(flag);
        let key = key_text(ui.ctx(), state, &action).unwrap_or_default();
        if ui
            .checkbox(&mut on, name)
            .on_hover_text(format!("{hint} ({key})"))
            .changed()
        {
            actions.push(action);
        }
    }
}
