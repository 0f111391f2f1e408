//! The route under the board: one bead a step, one span a fold, a latch mark at each commitment.
//!
//! A short route has beads that can be counted; a long one shrinks them, and one too long for beads becomes a bar with the
//! same spans and latches. The whole route is always in view, so that a place on it can be pointed at.

use super::action::Action;
use super::marks::{Icon, icon_button};
use super::pictures::Pictures;
use super::playback::Playback;
use super::state::State;
use super::theme::{Theme, counted, grouped};
use egui::{
    Align, Align2, CursorIcon, FontId, Key, Layout, Modifiers, Painter, Pos2, Rect, Response,
    Sense, Stroke, StrokeKind, Ui, WidgetInfo, pos2, vec2,
};

/// Height of the strip of beads, in points.
const STRIP_HEIGHT: f32 = 26.0;
/// Room for the start, before the first bead.
const START_WIDTH: f32 = 18.0;
/// Most room for a step.
const WIDEST_STEP: f32 = 30.0;
/// Steps narrower than this are no longer drawn as beads.
const NARROWEST_BEAD: f32 = 4.5;
/// Most room for a latch mark.
const WIDEST_LATCH: f32 = 14.0;

/// Draws the trail and pushes what the user did.
pub fn show(ui: &mut Ui, state: &State, _pictures: &mut Pictures, actions: &mut Vec<Action>) {
    ui.add_space(4.0);
    header(ui, state, actions);
    match &state.playback {
        Some(playback) => {
            strip(ui, state, playback, actions);
        }
        None => empty(ui, state),
    }
    ui.add_space(4.0);
}

fn header(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let theme = Theme::of(ui);
    let wide = ui.available_width() > 520.0;
    ui.horizontal(|ui| {
        super::theme::section(ui, "Route");
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.spacing_mut().item_spacing.x = 5.0;
            // Laid out from the right, so the last button comes first.
            buttons(ui, state, actions);
            if wide {
                ui.add_space(8.0);
                speed(ui, state, actions);
                ui.add_space(8.0);
            }
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                if let Some(playback) = &state.playback {
                    let text = place_text(playback);
                    ui.add(egui::Label::new(egui::RichText::new(&text).color(theme.text)).truncate())
                        .on_hover_text(text);
                    if !state.is_fresh(playback.revision) {
                        ui.label(egui::RichText::new("from before the edit").small().color(theme.muted))
                            .on_hover_text("This route was found before the last edit. Whether it still works is being asked.");
                    }
                }
            });
        });
    });
}

/// "step 9 of 37 · commitment 1 of 6".
pub fn place_text(playback: &Playback) -> String {
    if playback.is_empty() {
        return "finished at the start: no step is needed".to_owned();
    }
    let step = format!(
        "step {} of {}",
        grouped(playback.at as u64),
        grouped(playback.len() as u64)
    );
    match playback.span_at() {
        Some((made, spans)) if spans > 1 => {
            format!(
                "{step} · commitment {} of {}",
                grouped(made as u64),
                grouped(spans as u64 - 1)
            )
        }
        _ => step,
    }
}

fn buttons(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let (at, len, playing) = state.playback.as_ref().map_or((0, 0, false), |playback| {
        (playback.at, playback.len(), playback.playing)
    });
    let (not_first, not_last) = (at > 0, at < len);
    let play = if playing {
        (Icon::Pause, true, "Pause", "Stop moving", Action::PlayPause)
    } else {
        (
            Icon::Play,
            len > 0,
            "Play",
            "Play the route from here",
            Action::PlayPause,
        )
    };
    for (icon, enabled, name, hint, action) in [
        (
            Icon::Last,
            not_last,
            "Last step",
            "To the end of the route",
            Action::Last,
        ),
        (
            Icon::Forward,
            not_last,
            "Step forward",
            "One step forward",
            Action::Forward,
        ),
        play,
        (
            Icon::Back,
            not_first,
            "Step back",
            "One step back",
            Action::Back,
        ),
        (
            Icon::First,
            not_first,
            "First step",
            "To the start of the level",
            Action::First,
        ),
    ] {
        if icon_button(ui, icon, enabled, name, hint).clicked() {
            actions.push(action);
        }
    }
}

fn speed(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let theme = Theme::of(ui);
    let mut speed = state.settings.steps_per_second;
    ui.label(
        egui::RichText::new(format!("{speed:.0} a second"))
            .small()
            .color(theme.muted),
    );
    ui.spacing_mut().slider_width = 80.0;
    ui.visuals_mut().widgets.inactive.bg_fill = theme.line;
    let slider = egui::Slider::new(&mut speed, 1.0..=30.0)
        .logarithmic(true)
        .show_value(false);
    let response = ui.add(slider).on_hover_text("Steps a second while playing");
    response.widget_info(|| WidgetInfo::slider(true, f64::from(speed), "Speed, steps a second"));
    if response.changed() {
        actions.push(Action::SetSpeed(speed));
    }
}

fn empty(ui: &mut Ui, state: &State) {
    let theme = Theme::of(ui);
    let text = if state
        .problems
        .iter()
        .any(|problem| problem.severity == crate::level::Severity::Invalid)
    {
        "No route: the level is invalid. The findings say what to mend."
    } else if state
        .answers
        .answer
        .as_ref()
        .is_some_and(|answer| state.is_fresh(answer.revision))
    {
        "No route is known. Paint on the board, and the search begins again by itself."
    } else {
        "No route yet. The search is on its way; the first route that it finds is laid out here."
    };
    ui.allocate_ui(vec2(ui.available_width(), STRIP_HEIGHT + 16.0), |ui| {
        ui.add(egui::Label::new(egui::RichText::new(text).color(theme.muted)).wrap());
    });
}

fn strip(ui: &mut Ui, state: &State, playback: &Playback, actions: &mut Vec<Action>) {
    let theme = Theme::of(ui);
    let size = vec2(ui.available_width(), STRIP_HEIGHT + 18.0);
    let (rect, response) = ui.allocate_exact_size(size, Sense::click_and_drag());
    let layout = StripLayout::new(playback.len(), &playback.spans, rect.width());
    let fresh = state.is_fresh(playback.revision);
    let name = format!("Route, {}", place_text(playback));
    response.widget_info(|| WidgetInfo::slider(true, playback.at as f64, &name));
    paint_strip(ui, rect, &layout, playback, theme, fresh);
    scrub(ui, rect, &layout, playback, &response, actions);
    if response.has_focus() {
        let ring = Rect::from_min_size(rect.min, vec2(rect.width(), STRIP_HEIGHT)).expand(2.0);
        ui.painter()
            .rect_stroke(ring, 7.0, Stroke::new(2.0, theme.amber), StrokeKind::Middle);
    }
    hover(rect, &layout, playback, response);
}

/// Clicks and drags, and the arrow keys while the trail has the focus.
fn scrub(
    ui: &mut Ui,
    rect: Rect,
    layout: &StripLayout,
    playback: &Playback,
    response: &Response,
    actions: &mut Vec<Action>,
) {
    if response.clicked() || response.dragged() {
        response.request_focus();
        if let Some(pointer) = response.interact_pointer_pos() {
            let at = layout.nearest(pointer.x - rect.left());
            if at != playback.at {
                actions.push(Action::Scrub(at));
            }
        }
    }
    if response.has_focus() {
        let filter = egui::EventFilter {
            horizontal_arrows: true,
            ..Default::default()
        };
        ui.memory_mut(|memory| memory.set_focus_lock_filter(response.id, filter));
        for (key, action) in [
            (Key::ArrowLeft, Action::Back),
            (Key::ArrowRight, Action::Forward),
            (Key::Home, Action::First),
            (Key::End, Action::Last),
        ] {
            if ui.input_mut(|input| input.consume_key(Modifiers::NONE, key)) {
                actions.push(action);
            }
        }
    }
}

fn hover(rect: Rect, layout: &StripLayout, playback: &Playback, response: Response) {
    let Some(pointer) = response.hover_pos() else {
        return;
    };
    let at = layout.nearest(pointer.x - rect.left());
    let text = match at {
        0 => "the start of the level".to_owned(),
        at => {
            let pushed = playback.steps.get(at - 1).is_some_and(|step| step.pushed);
            let what = if pushed { ", a push" } else { "" };
            format!(
                "after step {} of {}{what}",
                grouped(at as u64),
                grouped(playback.len() as u64)
            )
        }
    };
    response
        .on_hover_cursor(CursorIcon::PointingHand)
        .on_hover_ui_at_pointer(|ui| {
            ui.label(text);
            if playback.spans.len() > 1 {
                let spans = counted(playback.spans.len() as u64, "fold", "folds");
                let hint = playback.spans_hint();
                ui.weak(format!("{spans} along the route: {hint}"));
            }
        });
}

/// Where the steps, spans and latches of a route stand, in points from the left end of the strip.
#[derive(Clone, Debug, PartialEq)]
pub struct StripLayout {
    /// Place after each number of steps, from 0 to the length of the route; grows.
    pub places: Vec<f32>,
    /// Left and right end of each span.
    pub spans: Vec<(f32, f32)>,
    /// Room for one step.
    pub step_width: f32,
    /// Room for one latch mark.
    pub latch_width: f32,
}

impl StripLayout {
    /// Lays out a route of `len` steps over `width` points. Without spans, the route is one span.
    pub fn new(len: usize, spans: &[u32], width: f32) -> StripLayout {
        let one = [len as u32];
        let spans = if spans.is_empty() { &one[..] } else { spans };
        let room = (width - START_WIDTH).max(1.0);
        let latches = spans.len().saturating_sub(1);
        let latch_width = if latches == 0 {
            0.0
        } else {
            (room * 0.3 / latches as f32).min(WIDEST_LATCH)
        };
        let for_steps = room - latch_width * latches as f32;
        let step_width = (for_steps / len.max(1) as f32).min(WIDEST_STEP);
        let mut places = vec![START_WIDTH / 2.0];
        let mut ends = Vec::with_capacity(spans.len());
        let mut x = START_WIDTH;
        for (at, &span) in spans.iter().enumerate() {
            if at > 0 {
                x += latch_width;
            }
            let left = x;
            for step in 0..span {
                places.push(left + (step as f32 + 0.5) * step_width);
            }
            x = left + span as f32 * step_width;
            ends.push((left, x));
        }
        StripLayout {
            places,
            spans: ends,
            step_width,
            latch_width,
        }
    }

    /// The number of steps whose place is nearest to `x`.
    pub fn nearest(&self, x: f32) -> usize {
        let after = self.places.partition_point(|&place| place < x);
        match (after.checked_sub(1), self.places.get(after)) {
            (Some(before), Some(&place)) if x - self.places[before] <= place - x => before,
            (Some(before), None) => before,
            _ => after,
        }
    }
}

fn paint_strip(
    ui: &Ui,
    rect: Rect,
    layout: &StripLayout,
    playback: &Playback,
    theme: &Theme,
    fresh: bool,
) {
    let painter = ui.painter();
    let (top, bottom) = (rect.top(), rect.top() + STRIP_HEIGHT);
    let middle = (top + bottom) / 2.0;
    let x = |offset: f32| rect.left() + offset;
    let reached = if fresh { theme.amber } else { theme.muted };
    let current = playback.span_at().map(|(span, _)| span);
    let font = FontId::proportional(10.5);
    for (index, &(left, right)) in layout.spans.iter().enumerate() {
        let span = Rect::from_min_max(
            pos2(x(left), top),
            pos2(x(right).max(x(left) + 1.0), bottom),
        );
        let is_current = current == Some(index) || layout.spans.len() == 1;
        let fill = if is_current {
            theme.hover
        } else {
            theme.raised
        };
        let edge = if is_current {
            Stroke::new(1.5, theme.line)
        } else {
            theme.outline()
        };
        let radius = (span.width() / 2.0).min(6.0);
        painter.rect(span, radius, fill, edge, StrokeKind::Inside);
        if index > 0 {
            latch(
                painter,
                x(left) - layout.latch_width,
                top,
                bottom,
                layout.latch_width,
                theme,
            );
        }
        if layout.spans.len() > 1 {
            span_label(painter, span, index, &font, theme, is_current);
        }
    }
    painter.circle_stroke(
        pos2(x(layout.places[0]), middle),
        4.0,
        Stroke::new(1.8, reached),
    );
    if layout.step_width >= NARROWEST_BEAD {
        let radius = (layout.step_width * 0.32).clamp(1.4, 3.6);
        for (at, &place) in layout.places.iter().enumerate().skip(1) {
            let centre = pos2(x(place), middle);
            if at <= playback.at {
                painter.circle_filled(centre, radius, reached);
            } else {
                painter.circle_stroke(centre, radius - 0.3, Stroke::new(1.3, theme.muted));
            }
        }
    } else {
        let end = layout.places[playback.at.min(layout.places.len() - 1)];
        for &(left, right) in layout.spans.iter().filter(|span| span.0 < end) {
            let bar = Rect::from_min_max(
                pos2(x(left), middle - 3.0),
                pos2(x(right.min(end)), middle + 3.0),
            );
            painter.rect_filled(bar, 2.0, reached);
        }
    }
    present(
        painter,
        pos2(
            x(layout.places[playback.at.min(layout.places.len() - 1)]),
            middle,
        ),
        theme,
        reached,
    );
}

/// The bead of the present moment: greater than the others, with a rim.
fn present(painter: &Painter, centre: Pos2, theme: &Theme, colour: egui::Color32) {
    painter.circle(centre, 7.0, colour, Stroke::new(2.0, theme.panel));
}

fn span_label(
    painter: &Painter,
    span: Rect,
    index: usize,
    font: &FontId,
    theme: &Theme,
    is_current: bool,
) {
    let long = format!("fold {}", index + 1);
    let short = (index + 1).to_string();
    let colour = if is_current { theme.text } else { theme.muted };
    for text in [long, short] {
        let galley = painter.layout_no_wrap(text, font.clone(), colour);
        if galley.size().x <= span.width() + 4.0 {
            let place = Align2::CENTER_TOP
                .anchor_size(pos2(span.center().x, span.bottom() + 3.0), galley.size());
            painter.galley(place.min, galley, colour);
            return;
        }
    }
}

/// A commitment: two strokes that let through one way only; one line where there is no room for them.
fn latch(painter: &Painter, left: f32, top: f32, bottom: f32, width: f32, theme: &Theme) {
    let middle = (top + bottom) / 2.0;
    if width < 7.0 {
        let stroke = Stroke::new((width * 0.5).clamp(0.6, 2.0), theme.sky);
        painter.vline(left + width / 2.0, top..=bottom, stroke);
        return;
    }
    let stroke = Stroke::new(2.0, theme.sky);
    let deep = width * 0.36;
    for from in [left + width * 0.14, left + width * 0.5] {
        painter.line(
            vec![
                pos2(from, top + 1.0),
                pos2(from + deep, middle),
                pos2(from, bottom - 1.0),
            ],
            stroke,
        );
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_step_of_every_route_can_be_pointed_at() {
        let check = |len: usize, spans: &[u32], width: f32| {
            let layout = StripLayout::new(len, spans, width);
            assert_eq!(layout.places.len(), len + 1);
            for (at, &place) in layout.places.iter().enumerate() {
                assert_eq!(layout.nearest(place), at, "step {at} of {len}");
            }
            let right = layout.spans.last().map_or(0.0, |span| span.1);
            assert!(
                right <= width + 0.5,
                "{len} steps end at {right} of {width}"
            );
        };
        check(0, &[], 700.0);
        check(1, &[1], 700.0);
        check(37, &[5, 7, 3, 9, 4, 6, 3], 700.0);
        check(37, &[], 200.0);
        check(600, &[300, 1, 299], 700.0);
        check(600, &[1; 600], 320.0);
    }

    #[test]
    fn a_pointer_beyond_the_ends_means_the_ends() {
        let layout = StripLayout::new(3, &[3], 400.0);
        assert_eq!(layout.nearest(-50.0), 0);
        assert_eq!(layout.nearest(5_000.0), 3);
    }
}
