//! The window's frame loop: draw, collect actions, execute them, perform what must happen outside.

use super::action::Action;
use super::pictures::Pictures;
use super::state::{Effect, Settings, State};
use super::{board, findings, menu, shelf, status, trail, tray};
use crate::level::Pack;
use crate::worker::Worker;
use egui::Panel;
use std::path::PathBuf;
use std::time::Duration;

/// The desk: the state, the worker and what is drawn.
pub struct Desk {
    /// All that the desk knows.
    pub state: State,
    pictures: Pictures,
    worker: Worker,
}

impl Desk {
    /// A desk with this pack on it, for a window or for a test without one. It wakes `ctx` when an answer is there.
    pub fn new(ctx: &egui::Context, pack: Pack, path: Option<PathBuf>, settings: Settings) -> Desk {
        let wake = ctx.clone();
        Desk {
            state: State::new(pack, path, settings),
            pictures: Pictures::default(),
            worker: Worker::start(move || wake.request_repaint()),
        }
    }

    /// One frame.
    pub fn ui(&mut self, ui: &mut egui::Ui) {
        let ctx = ui.ctx().clone();
        self.state.now_secs = ctx.input(|input| input.time);
        self.hear();
        if let Some(wait_secs) = self.state.advance_playback() {
            ctx.request_repaint_after(Duration::from_secs_f64(wait_secs.max(0.0)));
        }
        let mut actions = Vec::new();
        self.panels(ui, &mut actions);
        for action in actions {
            self.state.execute(action);
            ctx.request_repaint();
        }
        self.perform();
    }

    fn hear(&mut self) {
        while let Ok(event) = self.worker.events().try_recv() {
            self.state.hear(event);
        }
    }

    fn panels(&mut self, ui: &mut egui::Ui, actions: &mut Vec<Action>) {
        let Desk {
            state, pictures, ..
        } = self;
        let folder = state.path.as_deref().and_then(|path| path.parent());
        pictures.begin_frame(ui.ctx(), &state.pack.mechanics, folder);
        Panel::top("menu").show(ui, |ui| menu::show(ui, state, pictures, actions));
        Panel::bottom("status").show(ui, |ui| status::show(ui, state, pictures, actions));
        Panel::bottom("shelf").show(ui, |ui| shelf::show(ui, state, pictures, actions));
        Panel::left("tray").show(ui, |ui| tray::show(ui, state, pictures, actions));
        Panel::right("findings").show(ui, |ui| findings::show(ui, state, pictures, actions));
        Panel::bottom("trail").show(ui, |ui| trail::show(ui, state, pictures, actions));
        egui::CentralPanel::no_frame().show(ui, |ui| {
            let place = board::show(ui, state, pictures, actions);
            place.log_when_changed(ui.ctx());
            state.shown = place.view();
        });
    }

    fn perform(&mut self) {
        for effect in std::mem::take(&mut self.state.effects) {
            match effect {
                Effect::Ask(request) => self.worker.ask(request),
                other => log::debug!("not yet: {other:?}"),
            }
        }
    }
}
