//! The cards at the right: verdict, problems, play shape, tiles, route watch.

use super::action::Action;
use super::answers::Tiles;
use super::cards::{figure_line, folding_card, quiet_row};
use super::marks::{Mark, hatch};
use super::pictures::Pictures;
use super::state::State;
use super::theme::{Theme, counted, grouped};
use super::verdict::{Headline, headline};
use super::watch::{self, Intended};
use crate::level::{Problem, Severity};
use crate::study::{MapCounts, Outcome, TileClass};
use egui::{
    Align, Layout, Rect, Response, RichText, ScrollArea, Sense, Stroke, StrokeKind, Ui, Vec2, vec2,
};

/// Draws the findings and pushes what the user did.
pub fn show(ui: &mut Ui, state: &State, pictures: &mut Pictures, actions: &mut Vec<Action>) {
    ScrollArea::vertical()
        .id_salt("findings")
        .auto_shrink(false)
        .show(ui, |ui| {
            ui.spacing_mut().item_spacing.y = 10.0;
            ui.add_space(2.0);
            verdict_card(ui, state, actions);
            ui.scope(|ui| {
                ui.spacing_mut().item_spacing.y = 10.0;
                if !state.problems.is_empty() {
                    problems_card(ui, state, actions);
                }
                if !pictures.faults().is_empty() {
                    pictures_card(ui, state, pictures);
                }
                shape_card(ui, state);
                tiles_card(ui, state);
                watch_card(ui, state, actions);
            });
            ui.add_space(4.0);
        });
}

fn verdict_card(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let theme = Theme::of(ui);
    let headline = headline(state);
    let settled = !headline.running && !headline.stale;
    let edge = if settled {
        Stroke::new(1.5, headline.mark.colour(theme))
    } else {
        theme.outline()
    };
    theme.card().stroke(edge).show(ui, |ui| {
        ui.set_width(ui.available_width());
        ui.spacing_mut().item_spacing.y = 4.0;
        title_row(ui, theme, &headline).on_hover_text(headline.meaning);
        for note in &headline.notes {
            ui.add(egui::Label::new(RichText::new(note).color(theme.muted)).wrap());
        }
        if let Some(cost) = &headline.cost {
            ui.add(egui::Label::new(RichText::new(cost).small().color(theme.muted)).wrap())
                .on_hover_text(
                    "Positions that the search looked at, and the nodes that it folded them into.",
                );
        }
        proof_bar(ui, theme, &headline);
        if headline.running {
            let stop = ui
                .button("Stop")
                .on_hover_text("Stop the search. What is known stays.");
            if stop.clicked() {
                actions.push(Action::StopSearch);
            }
        } else if headline.mark == Mark::Undecided {
            undecided_buttons(ui, actions);
        }
    });
}

fn title_row(ui: &mut Ui, theme: &Theme, headline: &Headline) -> Response {
    ui.horizontal(|ui| {
        ui.spacing_mut().item_spacing.x = 11.0;
        headline.mark.show(ui, 34.0, headline.stale);
        ui.vertical(|ui| {
            ui.spacing_mut().item_spacing.y = 2.0;
            ui.add(egui::Label::new(RichText::new(&headline.title).heading()).wrap());
            let colour = if headline.proved {
                headline.mark.colour(theme)
            } else {
                theme.text
            };
            ui.add(egui::Label::new(RichText::new(&headline.figure).color(colour)).wrap());
        });
    })
    .response
}

/// A whole bar for what is proved, a hollow one for what is not.
fn proof_bar(ui: &mut Ui, theme: &Theme, headline: &Headline) {
    let size = vec2(ui.available_width(), 6.0);
    let (rect, response) = ui.allocate_exact_size(size, Sense::hover());
    if headline.proved {
        ui.painter()
            .rect_filled(rect, 3.0, headline.mark.colour(theme));
        response.on_hover_text("Proved");
    } else {
        ui.painter()
            .rect_stroke(rect, 3.0, theme.outline(), StrokeKind::Inside);
        response.on_hover_text("Not proved yet");
    }
}

fn undecided_buttons(ui: &mut Ui, actions: &mut Vec<Action>) {
    ui.horizontal_wrapped(|ui| {
        if ui
            .button("Ask again")
            .on_hover_text("Search once more with the present budget")
            .clicked()
        {
            actions.push(Action::StudyAgain);
        }
        if ui
            .button("Budget...")
            .on_hover_text("Give the search more time or memory")
            .clicked()
        {
            actions.push(Action::AskBudget);
        }
    });
}

fn problems_card(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    let title = format!("Problems ({})", state.problems.len());
    folding_card(ui, "problems", &title, |ui| {
        for problem in &state.problems {
            problem_line(ui, state, problem, actions);
        }
    });
}

fn problem_line(ui: &mut Ui, state: &State, problem: &Problem, actions: &mut Vec<Action>) {
    let theme = Theme::of(ui);
    let (mark, kind) = match problem.severity {
        Severity::Invalid => (Mark::Invalid, "It stops the search."),
        Severity::Advice => (Mark::Undecided, "The level can be searched all the same."),
    };
    ui.horizontal_top(|ui| {
        mark.show(ui, 16.0, false).on_hover_text(kind);
        let text = RichText::new(&problem.text).color(theme.text);
        if problem.cells.is_empty() {
            ui.add(egui::Label::new(text).wrap()).on_hover_text(kind);
            return;
        }
        let marked = state.marked == problem.cells;
        let line = egui::Button::selectable(marked, text).wrap();
        let cells = counted(problem.cells.len() as u64, "cell", "cells");
        let hint = format!("{kind} Click to mark {cells} on the board.");
        if ui.add(line).on_hover_text(hint).clicked() {
            let cells = if marked {
                Vec::new()
            } else {
                problem.cells.clone()
            };
            actions.push(Action::MarkCells(cells));
        }
    });
}

/// Picture files that can't be shown.
fn pictures_card(ui: &mut Ui, state: &State, pictures: &Pictures) {
    folding_card(ui, "pictures", "Pictures", |ui| {
        for (kind, fault) in pictures.faults() {
            let text = format!("{}: {fault}", kind.label(state.mechanics()));
            ui.add(egui::Label::new(RichText::new(text)).wrap());
        }
    });
}

fn shape_card(ui: &mut Ui, state: &State) {
    folding_card(ui, "shape", "Play shape", |ui| {
        ui.spacing_mut().item_spacing.y = 4.0;
        if let Some(playback) = state
            .playback
            .as_ref()
            .filter(|playback| !playback.spans.is_empty())
        {
            let commitments = grouped(playback.spans.len() as u64 - 1);
            let hint = if playback.exact {
                "Steps of the route that can't be taken back, the last one to the end not counted."
            } else {
                "Steps of the route that lead from one fold to the next, as the search folds them."
            };
            figure_line(ui, "commitments on the route", &commitments).on_hover_text(hint);
            let pushes = || playback.steps.iter().filter(|step| step.pushed).count();
            let (caption, count) = match playback.route.moves() {
                Some(moves) => ("moves on the route", moves),
                None => ("pushes on the route", pushes()),
            };
            figure_line(ui, caption, &grouped(count as u64));
        }
        match &state.answers.map {
            Some(map) => {
                if !state.is_fresh(map.revision) {
                    stale_note(ui);
                }
                match &map.value {
                    Some(counts) => map_lines(ui, counts),
                    None => quiet(
                        ui,
                        "The fold map did not fit the limits, so folds and traps are not known.",
                    ),
                }
            }
            None => quiet(
                ui,
                awaited(state, "Folds and traps are counted after the verdict."),
            ),
        }
    });
}

fn map_lines(ui: &mut Ui, counts: &MapCounts) {
    figure_line(ui, "positions", &grouped(counts.positions))
        .on_hover_text("All positions that can be reached from the start. Exact.");
    let folds = format!(
        "{} ({} alive)",
        grouped(counts.folds),
        grouped(counts.alive)
    );
    figure_line(ui, "folds", &folds).on_hover_text(
        "A fold holds positions that lead to each other, so that everything inside can be undone. \
         It is alive if the level can still be finished from it. Exact.",
    );
    figure_line(ui, "traps (ways to get stuck)", &grouped(counts.traps)).on_hover_text(
        "Steps after which the level can no longer be finished, however one plays on. Exact.",
    );
    figure_line(ui, "blind finish chance", &chance_text(counts.blind_finish_chance)).on_hover_text(
        "Chance that a player who picks blindly among the steps that can't be undone ends finished and not stuck.",
    );
}

/// "1 in 340", "62 %", "certain", "none".
pub fn chance_text(chance: f64) -> String {
    if chance <= 0.0 {
        "none".to_owned()
    } else if chance >= 1.0 {
        "certain".to_owned()
    } else if chance >= 0.1 {
        let percent = (chance * 100.0).round().min(99.0);
        format!("{percent:.0} %")
    } else {
        format!("1 in {}", grouped((1.0 / chance).round().min(1e18) as u64))
    }
}

fn quiet(ui: &mut Ui, text: &str) {
    let theme = Theme::of(ui);
    ui.add(egui::Label::new(RichText::new(text).color(theme.muted)).wrap());
}

fn stale_note(ui: &mut Ui) {
    quiet(ui, "from before the edit:");
}

fn awaited<'a>(state: &State, otherwise: &'a str) -> &'a str {
    if state.rules.is_none() {
        "Not known while the level is invalid."
    } else {
        otherwise
    }
}

const CLASSES: [(TileClass, &str, &str); 5] = [
    (
        TileClass::Vital,
        "vital",
        "Closed, the level can no longer be finished.",
    ),
    (
        TileClass::Useful,
        "useful",
        "Closed, the fewest steps change.",
    ),
    (
        TileClass::Idle,
        "idle",
        "Closed, nothing changes: it could as well be a wall.",
    ),
    (
        TileClass::CutOff,
        "cut off",
        "No body can ever come onto it. Only open tiles are counted.",
    ),
    (
        TileClass::Furnished,
        "furnished",
        "Not asked: a body, an item or a home is on it.",
    ),
];

fn tiles_card(ui: &mut Ui, state: &State) {
    folding_card(ui, "tiles", "Tiles", |ui| {
        ui.spacing_mut().item_spacing.y = 3.0;
        let Some(tiles) = &state.answers.tiles else {
            let text = match state.answers.report() {
                Some((revision, report))
                    if state.is_fresh(revision)
                        && matches!(report.outcome, Outcome::Undecided(_)) =>
                {
                    "Not asked: without a verdict, no tile can be called needed or not."
                }
                _ => awaited(
                    state,
                    "Which tiles nobody needs is asked after the verdict.",
                ),
            };
            quiet(ui, text);
            return;
        };
        let stale = !state.is_fresh(tiles.revision);
        if stale {
            stale_note(ui);
        }
        for (class, name, meaning) in CLASSES {
            class_line(ui, state, &tiles.value, class, name, meaning);
        }
        if !stale {
            left_line(ui, &tiles.value);
        }
    });
}

fn class_line(
    ui: &mut Ui,
    state: &State,
    tiles: &Tiles,
    class: TileClass,
    name: &str,
    meaning: &str,
) {
    let theme = Theme::of(ui);
    let count = count_of(state, tiles, class);
    quiet_row(ui, |ui| {
        swatch(ui, class);
        ui.label(RichText::new(name).color(theme.muted));
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.label(grouped(count as u64));
        });
    })
    .response
    .on_hover_text(format!("{meaning} Exact for every tile that was asked."));
}

/// How many tiles are of a class. Tiles that are closed from the start are cut off too, but nobody needs to be told.
fn count_of(state: &State, tiles: &Tiles, class: TileClass) -> usize {
    let ground = &state.current().ground;
    let is_open = |at: usize| {
        ground
            .get(at)
            .is_none_or(|&ground| !state.mechanics().ground(ground).closed_to_all())
    };
    tiles
        .classes
        .iter()
        .enumerate()
        .filter(|&(at, known)| *known == Some(class) && is_open(at))
        .count()
}

fn left_line(ui: &mut Ui, tiles: &Tiles) {
    if tiles.left > 0 {
        let left = counted(tiles.left as u64, "tile is", "tiles are");
        quiet(ui, &format!("{left} still to be asked"));
    } else if tiles.done {
        quiet(ui, "every tile that can be asked was asked");
    }
}

/// The sign of a tile class, the same as on the board.
fn swatch(ui: &mut Ui, class: TileClass) {
    let theme = Theme::of(ui);
    let (rect, _) = ui.allocate_exact_size(Vec2::splat(14.0), Sense::hover());
    super::overlay::class_sign(ui.painter(), rect, class, theme);
    if matches!(class, TileClass::Idle | TileClass::CutOff) {
        let stroke = Stroke::new(1.2, theme.muted);
        hatch(ui.painter(), rect, 4.5, stroke, class == TileClass::CutOff);
        frame(ui, rect, theme);
    }
}

fn frame(ui: &Ui, rect: Rect, theme: &Theme) {
    ui.painter()
        .rect_stroke(rect, 2.0, theme.outline(), StrokeKind::Inside);
}

fn watch_card(ui: &mut Ui, state: &State, actions: &mut Vec<Action>) {
    folding_card(ui, "watch", "Route watch", |ui| {
        ui.spacing_mut().item_spacing.y = 5.0;
        let theme = Theme::of(ui);
        let intended = watch::intended(ui, state);
        ui.horizontal(|ui| {
            let mark = match intended {
                Intended::None | Intended::Unplayable { .. } => Mark::Undecided,
                intended if intended.works() => Mark::Solvable,
                _ => Mark::Unsolvable,
            };
            mark.show(ui, 15.0, false);
            ui.add(egui::Label::new(RichText::new(intended.text()).color(theme.text)).wrap());
        });
        let steps = state
            .answers
            .report()
            .filter(|(revision, _)| state.is_fresh(*revision))
            .and_then(|(_, report)| report.steps);
        if let Some(steps) = steps
            && let Some(text) = watch::cheaper_text(intended, steps.fewest, steps.proved)
        {
            quiet(ui, &text);
        }
        par_line(ui, state, steps.map(|steps| (steps.fewest, steps.proved)));
        watch_buttons(ui, state, steps.is_some_and(|steps| steps.proved), actions);
    });
}

fn par_line(ui: &mut Ui, state: &State, fewest: Option<(u32, bool)>) {
    let approved = state.current().par.and_then(|par| par.steps);
    let text = match (approved, fewest) {
        (Some(par), Some((fewest, true))) if par != fewest => {
            format!(
                "par was approved as {}, and is {} now",
                grouped(u64::from(par)),
                grouped(u64::from(fewest))
            )
        }
        (Some(par), Some((fewest, true))) if par == fewest => {
            format!("par {}, as approved", grouped(u64::from(par)))
        }
        (Some(par), _) => format!("par was approved as {}", grouped(u64::from(par))),
        (None, _) => "no par is approved".to_owned(),
    };
    quiet(ui, &text);
}

fn watch_buttons(ui: &mut Ui, state: &State, par_proved: bool, actions: &mut Vec<Action>) {
    let route = state
        .playback
        .as_ref()
        .filter(|playback| state.is_fresh(playback.revision));
    let kept =
        route.is_some_and(|playback| state.current().intended.as_ref() == Some(&playback.route));
    ui.horizontal_wrapped(|ui| {
        let keep = ui
            .add_enabled(route.is_some() && !kept, egui::Button::new("Keep this route"))
            .on_hover_text("Keep the route on the trail as the one that you mean; every edit is held against it.")
            .on_disabled_hover_text(if kept {
                "The route on the trail is the intended one."
            } else {
                "There is no route of this level on the trail."
            });
        if keep.clicked() {
            actions.push(Action::MeanThisRoute);
        }
        let approve = ui
            .add_enabled(par_proved, egui::Button::new("Approve par"))
            .on_hover_text("Note the proved figures in the pack; a check then tells when they change.")
            .on_disabled_hover_text("Only a proved par can be approved.");
        if approve.clicked() {
            actions.push(Action::ApprovePar);
        }
    });
}
