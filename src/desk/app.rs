//! The window's frame loop: hear, draw, collect actions, execute them, perform what must happen outside.
//!
//! A frame is drawn only when there is cause: input, an answer of the worker, a job that ended, a step that is due while
//! the route plays. Nothing here waits: searches run in the worker, files and file dialogs on a thread of their own, one job
//! at a time, so that two saves never cross.

use super::action::Action;
use super::files::FileNews;
use super::mechanics::MechanicsWindow;
use super::pictures::Pictures;
use super::state::{Effect, PathPurpose, Settings, State, ThemeChoice};
use super::{board, dialogs, findings, jobs, keys, menu, shelf, status, theme, trail, tray};
use crate::level::Pack;
use crate::worker::{Worker, run_aside};
use crossbeam_channel::{Receiver, TryRecvError};
use egui::{Context, Frame, Margin, Panel, ThemePreference, ViewportCommand};
use std::collections::VecDeque;
use std::path::PathBuf;
use std::time::Duration;

/// Below this size of the window, in points, the panels shrink to leave room for the board.
const ROOMY: (f32, f32) = (1100.0, 720.0);

/// The desk: the state, the worker and what is drawn.
pub struct Desk {
    /// All that the desk knows.
    pub state: State,
    pictures: Pictures,
    mechanics: MechanicsWindow,
    worker: Worker,
    job: Option<Receiver<FileNews>>,
    picker: Option<Receiver<FileNews>>,
    waiting: VecDeque<Effect>,
    keeper: super::keeper::Keeper,
    theme: Option<ThemeChoice>,
    title: String,
    may_close: bool,
    had_focus: bool,
}

impl Desk {
    /// A desk with this pack on it, for a window or for a test without one. It wakes `ctx` when an answer is there.
    pub fn new(ctx: &Context, pack: Pack, path: Option<PathBuf>, settings: Settings) -> Desk {
        let wake = ctx.clone();
        ctx.options_mut(|options| options.zoom_with_keyboard = false);
        Desk {
            state: State::new(pack, path, settings),
            pictures: Pictures::default(),
            mechanics: MechanicsWindow::default(),
            worker: Worker::start(move || wake.request_repaint()),
            job: None,
            picker: None,
            waiting: VecDeque::new(),
            keeper: super::keeper::Keeper::none(),
            theme: None,
            title: String::new(),
            may_close: false,
            had_focus: true,
        }
    }

    /// Keeps settings and autosaves in the user's own folder, and looks whether a session left something behind there.
    #[must_use]
    pub fn with_keeper(mut self, keeper: super::keeper::Keeper) -> Desk {
        self.keeper = keeper;
        if let Some(about) = self.keeper.left_behind() {
            self.state.hear_file(FileNews::LeftBehind { about });
        }
        self
    }

    /// One frame.
    pub fn ui(&mut self, ui: &mut egui::Ui) {
        let ctx = ui.ctx().clone();
        self.state.now_secs = ctx.input(|input| input.time);
        self.set_theme(&ctx);
        self.hear(&ctx);
        if let Some(wait_secs) = self.state.advance_playback() {
            ctx.request_repaint_after(Duration::from_secs_f64(wait_secs.max(0.0)));
        }
        let mut actions = Vec::new();
        keys::pressed(&ctx, &self.state, &mut actions);
        self.window_events(&ctx, &mut actions);
        self.panels(ui, &mut actions);
        let mut answers = Vec::new();
        dialogs::show(ui, &self.state, &mut answers);
        for action in actions.into_iter().chain(answers) {
            self.state.execute(action);
            ctx.request_repaint();
        }
        self.autosave(&ctx);
        self.perform(&ctx);
        self.set_title(&ctx);
    }

    fn set_theme(&mut self, ctx: &Context) {
        let wanted = self.state.settings.theme;
        if self.theme != Some(wanted) {
            self.theme = Some(wanted);
            theme::install(
                ctx,
                match wanted {
                    ThemeChoice::System => ThemePreference::System,
                    ThemeChoice::Dark => ThemePreference::Dark,
                    ThemeChoice::Light => ThemePreference::Light,
                },
            );
        }
    }

    fn hear(&mut self, ctx: &Context) {
        while let Ok(event) = self.worker.events().try_recv() {
            self.state.hear(event);
        }
        for from_picker in [false, true] {
            let slot = if from_picker {
                &mut self.picker
            } else {
                &mut self.job
            };
            let heard = slot.as_ref().map(Receiver::try_recv);
            match heard {
                Some(Ok(news)) => {
                    *slot = None;
                    self.state.hear_file(news);
                    ctx.request_repaint();
                }
                Some(Err(TryRecvError::Disconnected)) => {
                    *slot = None;
                    self.state.after_unsaved = None;
                    let text = "The file was not read or written.".to_owned();
                    self.state.say_fault("Something went wrong", text);
                }
                Some(Err(TryRecvError::Empty)) | None => {}
            }
        }
    }

    /// Closing, files dropped on the window, and coming back to it from another program.
    fn window_events(&mut self, ctx: &Context, actions: &mut Vec<Action>) {
        let (closing, focused, dropped) = ctx.input(|input| {
            let dropped = input.raw.dropped_files.first();
            (
                input.viewport().close_requested(),
                input.focused,
                dropped.map(|file| file.path().to_path_buf()),
            )
        });
        if closing && !self.may_close {
            ctx.send_viewport_cmd(ViewportCommand::CancelClose);
            actions.push(Action::Quit);
        }
        if let Some(path) = dropped {
            actions.push(Action::OpenPath(path));
        }
        if focused
            && !self.had_focus
            && self.job.is_none()
            && let Some(path) = self.state.path.clone()
            && let Some(print) = self.state.saved.print.clone()
        {
            self.start(ctx, move || jobs::look(path, &print));
        }
        self.had_focus = focused;
    }

    fn panels(&mut self, ui: &mut egui::Ui, actions: &mut Vec<Action>) {
        let Desk {
            state,
            pictures,
            mechanics,
            ..
        } = self;
        let folder = state.path.as_deref().and_then(|path| path.parent());
        pictures.begin_frame(ui.ctx(), &state.pack.mechanics, folder);
        let theme = theme::Theme::of(ui);
        let window = ui.available_size();
        let (wide, tall) = (window.x >= ROOMY.0, window.y >= ROOMY.1);
        let frame = |x: i8, y: i8| {
            Frame::new()
                .fill(theme.panel)
                .inner_margin(Margin::symmetric(x, y))
        };
        Panel::top("menu")
            .frame(frame(8, 4))
            .show(ui, |ui| menu::show(ui, state, actions));
        Panel::bottom("status")
            .frame(frame(14, 4))
            .show(ui, |ui| status::show(ui, state));
        Panel::bottom("shelf")
            .frame(frame(12, 6))
            .show(ui, |ui| shelf::show(ui, state, pictures, actions));
        Panel::left("tray")
            .frame(frame(12, 4))
            .resizable(false)
            .exact_size(if wide { 194.0 } else { 142.0 })
            .show(ui, |ui| tray::show(ui, state, pictures, actions));
        Panel::right("findings")
            .frame(frame(10, 6))
            .resizable(false)
            .exact_size(if wide { 290.0 } else { 236.0 })
            .show(ui, |ui| findings::show(ui, state, pictures, actions));
        Panel::bottom("trail")
            .frame(frame(if wide { 16 } else { 8 }, if tall { 8 } else { 4 }))
            .show(ui, |ui| trail::show(ui, state, pictures, actions));
        egui::CentralPanel::no_frame().show(ui, |ui| {
            let shown = board::show(ui, state, pictures, actions);
            shown.place.log_when_changed(ui.ctx());
            state.shown = shown.place.view();
            state.hovered = shown.hovered;
        });
        let ctx = ui.ctx().clone();
        mechanics.show(&ctx, state, pictures, actions);
    }

    /// Writes the autosave now and then while there is something unsaved; wakes the desk for it.
    fn autosave(&mut self, ctx: &Context) {
        if self.state.stroke.is_some() {
            return;
        }
        if let Some(wait_secs) = self.keeper.due_in(&self.state) {
            if wait_secs > 0.0 {
                ctx.request_repaint_after(Duration::from_secs_f64(wait_secs));
            } else if self.job.is_none() {
                let work = self.keeper.autosave(&self.state);
                self.start(ctx, work);
            }
        }
    }

    fn start(&mut self, ctx: &Context, work: impl FnOnce() -> FileNews + Send + 'static) {
        let wake = ctx.clone();
        self.job = Some(run_aside(work, move || wake.request_repaint()));
    }

    fn perform(&mut self, ctx: &Context) {
        self.waiting.extend(std::mem::take(&mut self.state.effects));
        while let Some(effect) = self.waiting.pop_front() {
            let is_for_disk = !is_aside(&effect);
            if is_for_disk && self.job.is_some() {
                // What concerns the disk keeps its order behind the job that runs; questions to the worker go ahead.
                let (ask, later): (Vec<Effect>, Vec<Effect>) =
                    self.waiting.drain(..).partition(is_aside);
                for effect in ask {
                    self.perform_one(ctx, effect);
                }
                self.waiting.push_back(effect);
                self.waiting.extend(later);
                return;
            }
            self.perform_one(ctx, effect);
        }
    }

    fn perform_one(&mut self, ctx: &Context, effect: Effect) {
        match effect {
            Effect::Ask(request) => self.worker.ask(request),
            Effect::PickToOpen => self.pick(ctx, PathPurpose::Open),
            Effect::PickToSave => self.pick(ctx, PathPurpose::Save),
            Effect::Read(path) => self.start(ctx, move || jobs::read(path)),
            Effect::Write { path, force } => {
                let pack = self.state.pack.clone();
                let preamble = self.state.preamble.clone();
                let is_ours = self.state.path.as_ref() == Some(&path);
                let expected = self.state.saved.print.clone().filter(|_| is_ours);
                self.start(ctx, move || {
                    jobs::write(path, pack, &preamble, expected.as_ref(), force)
                });
            }
            Effect::ReadRecovery => {
                let work = self.keeper.read_left_behind();
                self.start(ctx, work);
            }
            Effect::DropRecovery => self.keeper.drop_left_behind(),
            Effect::ForgetAutosave => self.keeper.forget_autosave(),
            Effect::KeepSettings => {
                let work = self.keeper.keep(&self.state.settings);
                self.start(ctx, work);
            }
            Effect::Close => {
                self.keeper.forget_autosave();
                self.may_close = true;
                ctx.send_viewport_cmd(ViewportCommand::Close);
            }
        }
    }

    fn pick(&mut self, ctx: &Context, purpose: PathPurpose) {
        if self.picker.is_some() {
            // The system's dialog is open already, or hangs: the window's own can be had all the same.
            self.state.ask_path(purpose);
            return;
        }
        let folder = self
            .state
            .path
            .as_ref()
            .and_then(|path| path.parent())
            .map(std::path::Path::to_path_buf);
        let name = match &self.state.path {
            Some(path) => path
                .file_name()
                .unwrap_or_default()
                .to_string_lossy()
                .into_owned(),
            None => format!(
                "{}.pack.ron",
                super::execute::file_stem(&self.state.pack.name)
            ),
        };
        let wake = ctx.clone();
        let work = move || jobs::pick(purpose, folder, name);
        self.picker = Some(run_aside(work, move || wake.request_repaint()));
    }

    fn set_title(&mut self, ctx: &Context) {
        let star = if self.state.is_dirty() { "*" } else { "" };
        let title = format!("{star}{} - Foldwright", self.state.pack.name);
        if self.title != title {
            ctx.send_viewport_cmd(ViewportCommand::Title(title.clone()));
            self.title = title;
        }
    }
}

/// Whether an effect needs no turn among those that concern the disk.
fn is_aside(effect: &Effect) -> bool {
    matches!(
        effect,
        Effect::Ask(_) | Effect::PickToOpen | Effect::PickToSave
    )
}
