//! The mechanics window: the designer's own game, made from traits in plain words.
//!
//! It lies on the desk like a sheet of paper, not in front of it: levels can be edited while it is open, and every change
//! of a kind is an undo entry that re-answers all levels.

mod bench;
mod demo;
mod game;
mod kinds;
mod naming;
mod rework;
mod scene;
mod traits;
mod values;

pub use demo::{Demo, demo};
pub use traits::{Trait, traits_of};

use super::action::Action;
use super::pictures::Pictures;
use super::state::State;
use bench::Bench;
use egui::{Context, Window};
use kinds::KindsPage;

/// The pages of the window.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
enum Page {
    #[default]
    Kinds,
    Game,
    Bench,
}

/// What the window keeps between frames.
#[derive(Default)]
pub struct MechanicsWindow {
    page: Page,
    kinds: KindsPage,
    bench: Bench,
}

impl MechanicsWindow {
    /// Draws the window if it is open.
    pub fn show(
        &mut self,
        ctx: &Context,
        state: &State,
        pictures: &mut Pictures,
        actions: &mut Vec<Action>,
    ) {
        if !state.mechanics_open {
            return;
        }
        let mut open = true;
        let room = ctx.content_rect().size();
        Window::new("Mechanics")
            .open(&mut open)
            .default_size([
                (room.x * 0.62).clamp(520.0, 860.0),
                (room.y * 0.72).clamp(380.0, 640.0),
            ])
            .min_size([460.0, 320.0])
            .collapsible(true)
            .show(ctx, |ui| {
                ui.horizontal(|ui| {
                    ui.selectable_value(&mut self.page, Page::Kinds, "Kinds");
                    ui.selectable_value(&mut self.page, Page::Game, "Game");
                    ui.selectable_value(&mut self.page, Page::Bench, "Try-out bench");
                });
                ui.separator();
                match self.page {
                    Page::Kinds => self.kinds.show(ui, state, pictures, actions),
                    Page::Game => game::show(ui, state, actions),
                    Page::Bench => self.bench.show(ui, state, pictures),
                }
            });
        if !open {
            actions.push(Action::ToggleMechanics);
        }
    }
}
