//! Signs drawn with the painter: verdicts, tile classes, and the pictograms of buttons. No font needs to have them.
//!
//! Each sign has a form of its own and can be told without colour: a tick in a disc, a cross in an octagon, an open ring.

use super::theme::Theme;
use egui::{
    Color32, Painter, Pos2, Rect, Response, Role, Sense, Shape, Stroke, StrokeKind, Ui, Vec2,
    WidgetInfo, pos2, vec2,
};
use std::f32::consts::TAU;

/// What is known about a level, as a sign.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Mark {
    /// A tick in a disc.
    Solvable,
    /// A cross in an octagon.
    Unsolvable,
    /// An open ring.
    Undecided,
    /// A stroke and a dot in a triangle.
    Invalid,
    /// Three dots.
    Looking,
}

impl Mark {
    /// The colour that goes with the form.
    pub fn colour(self, theme: &Theme) -> Color32 {
        match self {
            Mark::Solvable => theme.leaf,
            Mark::Unsolvable | Mark::Invalid => theme.coral,
            Mark::Undecided | Mark::Looking => theme.muted,
        }
    }

    /// The word that goes with the form.
    pub fn word(self) -> &'static str {
        match self {
            Mark::Solvable => "can be finished",
            Mark::Unsolvable => "can't be finished",
            Mark::Undecided => "undecided",
            Mark::Invalid => "invalid",
            Mark::Looking => "not known yet",
        }
    }

    /// Paints the sign as large as `rect` allows. A `faint` one is out of date.
    pub fn paint(self, painter: &Painter, rect: Rect, theme: &Theme, faint: bool) {
        let centre = rect.center();
        let radius = rect.width().min(rect.height()) / 2.0;
        let colour = if faint {
            theme.muted
        } else {
            self.colour(theme)
        };
        let on_top = Stroke::new((radius * 0.24).max(1.5), theme.panel);
        match self {
            Mark::Solvable => {
                disc(painter, centre, radius, colour, faint);
                let ink = if faint {
                    Stroke {
                        color: colour,
                        ..on_top
                    }
                } else {
                    on_top
                };
                painter.line(scaled(centre, radius, &TICK), ink);
            }
            Mark::Unsolvable => {
                let corners = polygon(centre, radius, 8, TAU / 16.0);
                polygon_shape(painter, corners, colour, faint);
                let ink = if faint {
                    Stroke {
                        color: colour,
                        ..on_top
                    }
                } else {
                    on_top
                };
                let arm = radius * 0.36;
                painter.line_segment([centre - vec2(arm, arm), centre + vec2(arm, arm)], ink);
                painter.line_segment([centre - vec2(arm, -arm), centre + vec2(arm, -arm)], ink);
            }
            Mark::Undecided => {
                let stroke = Stroke::new((radius * 0.26).max(1.6), colour);
                painter.line(arc(centre, radius * 0.84, 0.12, 0.88), stroke);
            }
            Mark::Invalid => {
                let corners = polygon(centre + vec2(0.0, radius * 0.12), radius, 3, -TAU / 4.0);
                polygon_shape(painter, corners, colour, faint);
                let ink = if faint { colour } else { theme.panel };
                let (top, low) = (
                    centre - vec2(0.0, radius * 0.3),
                    centre + vec2(0.0, radius * 0.18),
                );
                painter.line_segment([top, low], Stroke::new((radius * 0.2).max(1.4), ink));
                painter.circle_filled(
                    centre + vec2(0.0, radius * 0.42),
                    (radius * 0.12).max(0.9),
                    ink,
                );
            }
            Mark::Looking => {
                for at in [-1.0, 0.0, 1.0] {
                    painter.circle_filled(
                        centre + vec2(at * radius * 0.62, 0.0),
                        radius * 0.2,
                        colour,
                    );
                }
            }
        }
    }

    /// Makes room for the sign and paints it.
    pub fn show(self, ui: &mut Ui, side: f32, faint: bool) -> Response {
        let (rect, response) = ui.allocate_exact_size(Vec2::splat(side), Sense::hover());
        self.paint(ui.painter(), rect, Theme::of(ui), faint);
        response
    }
}

const TICK: [Vec2; 3] = [vec2(-0.44, 0.04), vec2(-0.12, 0.38), vec2(0.46, -0.34)];

fn scaled(centre: Pos2, radius: f32, points: &[Vec2]) -> Vec<Pos2> {
    points
        .iter()
        .map(|&point| centre + point * radius)
        .collect()
}

fn disc(painter: &Painter, centre: Pos2, radius: f32, colour: Color32, hollow: bool) {
    if hollow {
        painter.circle_stroke(centre, radius - 1.0, Stroke::new(1.5, colour));
    } else {
        painter.circle_filled(centre, radius, colour);
    }
}

fn polygon_shape(painter: &Painter, corners: Vec<Pos2>, colour: Color32, hollow: bool) {
    painter.add(if hollow {
        Shape::closed_line(corners, Stroke::new(1.5, colour))
    } else {
        Shape::convex_polygon(corners, colour, Stroke::NONE)
    });
}

fn polygon(centre: Pos2, radius: f32, corners: usize, from: f32) -> Vec<Pos2> {
    (0..corners)
        .map(|at| centre + radius * Vec2::angled(from + TAU * at as f32 / corners as f32))
        .collect()
}

/// Part of a circle between two shares of a turn that begins at the top and runs clockwise.
fn arc(centre: Pos2, radius: f32, from: f32, to: f32) -> Vec<Pos2> {
    (0..=40)
        .map(|at| from + (to - from) * at as f32 / 40.0)
        .map(|share| centre + radius * Vec2::angled(TAU * share - TAU / 4.0))
        .collect()
}

/// What a button shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Icon {
    /// A bar and a triangle that points at it, leftwards.
    First,
    /// A triangle to the left.
    Back,
    /// A triangle to the right, large.
    Play,
    /// Two upright bars.
    Pause,
    /// A triangle to the right.
    Forward,
    /// A triangle that points at a bar, rightwards.
    Last,
    /// An upright cross.
    Add,
    /// Two sheets.
    Copy,
    /// A pencil.
    Rename,
    /// A bin.
    Delete,
    /// An arrow to the left.
    Earlier,
    /// An arrow to the right.
    Later,
}

impl Icon {
    /// Paints the pictogram into a square.
    pub fn paint(self, painter: &Painter, rect: Rect, colour: Color32) {
        let half = rect.width().min(rect.height()) / 2.0;
        let at = |x: f32, y: f32| rect.center() + vec2(x, y) * half;
        let stroke = Stroke::new(1.6, colour);
        let triangle = |tip: f32, base: f32, tall: f32| {
            let corners = vec![at(tip, 0.0), at(base, -tall), at(base, tall)];
            painter.add(Shape::convex_polygon(corners, colour, Stroke::NONE));
        };
        let upright = |x: f32| {
            let bar = Rect::from_center_size(at(x, 0.0), vec2(0.24, 1.3) * half);
            painter.rect_filled(bar, 0.5, colour);
        };
        let line = |points: &[(f32, f32)]| {
            painter.line(points.iter().map(|&(x, y)| at(x, y)).collect(), stroke);
        };
        match self {
            Icon::First => {
                upright(-0.62);
                triangle(-0.42, 0.6, 0.66);
            }
            Icon::Back => triangle(-0.5, 0.42, 0.6),
            Icon::Play => triangle(0.78, -0.58, 0.82),
            Icon::Pause => {
                upright(-0.32);
                upright(0.32);
            }
            Icon::Forward => triangle(0.5, -0.42, 0.6),
            Icon::Last => {
                triangle(0.42, -0.6, 0.66);
                upright(0.62);
            }
            Icon::Add => {
                line(&[(0.0, -0.75), (0.0, 0.75)]);
                line(&[(-0.75, 0.0), (0.75, 0.0)]);
            }
            Icon::Copy => {
                let sheet = |x, y| Rect::from_center_size(at(x, y), vec2(1.0, 1.1) * half);
                painter.rect_stroke(sheet(0.22, 0.2), 1.5, stroke, StrokeKind::Middle);
                line(&[
                    (-0.55, 0.4),
                    (-0.72, 0.4),
                    (-0.72, -0.75),
                    (0.35, -0.75),
                    (0.35, -0.58),
                ]);
            }
            Icon::Rename => {
                line(&[
                    (-0.7, 0.75),
                    (-0.6, 0.3),
                    (0.4, -0.75),
                    (0.75, -0.4),
                    (-0.25, 0.62),
                    (-0.7, 0.75),
                ]);
            }
            Icon::Delete => {
                line(&[(-0.75, -0.5), (0.75, -0.5)]);
                line(&[(-0.25, -0.5), (-0.2, -0.78), (0.2, -0.78), (0.25, -0.5)]);
                line(&[(-0.55, -0.5), (-0.45, 0.78), (0.45, 0.78), (0.55, -0.5)]);
                line(&[(0.0, -0.2), (0.0, 0.5)]);
            }
            Icon::Earlier => {
                line(&[(0.75, 0.0), (-0.7, 0.0)]);
                line(&[(-0.15, -0.55), (-0.75, 0.0), (-0.15, 0.55)]);
            }
            Icon::Later => {
                line(&[(-0.75, 0.0), (0.7, 0.0)]);
                line(&[(0.15, -0.55), (0.75, 0.0), (0.15, 0.55)]);
            }
        }
    }
}

/// A button with a pictogram. `name` is what screen readers and tests call it; `hint` is shown when the pointer rests on it.
pub fn icon_button(ui: &mut Ui, icon: Icon, enabled: bool, name: &str, hint: &str) -> Response {
    ui.add_enabled_ui(enabled, |ui| {
        let size = vec2(30.0, super::theme::WIDGET_HEIGHT);
        let (rect, response) = ui.allocate_exact_size(size, Sense::click());
        response.widget_info(|| WidgetInfo::labeled(Role::Button, enabled, name));
        let look = ui.style().interact(&response);
        ui.painter().rect(
            rect,
            look.corner_radius,
            look.weak_bg_fill,
            look.bg_stroke,
            StrokeKind::Inside,
        );
        let square = Rect::from_center_size(rect.center(), Vec2::splat(12.0));
        icon.paint(ui.painter(), square, look.fg_stroke.color);
        response
    })
    .inner
    .on_hover_text(hint)
    .on_disabled_hover_text(hint)
}

/// Slanted lines over a rectangle, `gap` points apart; with `crossed`, in both directions.
///
/// The lines are cut to the rectangle here and not by a clip, so that a thousand hatched tiles are still one thing to draw.
pub fn hatch(painter: &Painter, rect: Rect, gap: f32, stroke: Stroke, crossed: bool) {
    let mut from = gap / 2.0 - rect.height();
    while from < rect.width() {
        // The line rises from `from` at the foot to the right; `low` and `high` are how far up it enters and leaves.
        let low = (-from).max(0.0);
        let high = (rect.width() - from).min(rect.height());
        if high > low {
            let along = |up: f32| rect.left() + from + up;
            painter.line_segment(
                [
                    pos2(along(low), rect.bottom() - low),
                    pos2(along(high), rect.bottom() - high),
                ],
                stroke,
            );
            if crossed {
                painter.line_segment(
                    [
                        pos2(along(low), rect.top() + low),
                        pos2(along(high), rect.top() + high),
                    ],
                    stroke,
                );
            }
        }
        from += gap;
    }
}
