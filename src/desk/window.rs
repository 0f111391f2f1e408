//! The real window: eframe around [`Desk`].

use super::app::Desk;
use super::keeper::Keeper;
use super::state::{Dialog, State};
use crate::file::read_pack;
use crate::level::Pack;
use egui::{IconData, ViewportBuilder, vec2};
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use thiserror::Error;

/// The pack that is on the desk when none is named.
const SAMPLE: &str = include_str!("../../sample-levels/night-greenhouse.pack.ron");

/// The program's icon.
const ICON: &str = include_str!("../../assets/icon.svg");

/// Why there is no window.
#[derive(Debug, Error)]
pub enum DeskError {
    /// There is no display to open it on.
    #[error("there is no display (neither WAYLAND_DISPLAY nor DISPLAY is set)")]
    NoDisplay,
    /// The display, a system library or OpenGL refused.
    #[error("the window can't be opened: {0}")]
    NoWindow(String),
    /// The sample pack is damaged: a fault of this program.
    #[error("the sample pack can't be read: {0}")]
    NoSample(String),
}

/// Opens the window with the pack at `path`, or with the sample pack, and returns when it is closed.
///
/// A pack that can't be read is no error: the window says what is wrong with it and shows the sample pack.
///
/// # Errors
/// If there is no display, or a library that a window needs is missing.
pub fn run(path: Option<PathBuf>) -> Result<(), DeskError> {
    if cfg!(target_os = "linux") && !has_display() {
        return Err(DeskError::NoDisplay);
    }
    let sample = sample_pack()?;
    let options = eframe::NativeOptions {
        viewport: ViewportBuilder::default()
            .with_app_id("foldwright")
            .with_title("Foldwright")
            .with_inner_size([1440.0, 900.0])
            .with_min_inner_size(vec2(640.0, 480.0))
            .with_drag_and_drop(true)
            .with_icon(icon()),
        renderer: eframe::Renderer::Glow,
        persist_window: true,
        ..eframe::NativeOptions::default()
    };
    let opened = Arc::new(AtomicBool::new(false));
    let is_open = Arc::clone(&opened);
    let create = move |creation: &eframe::CreationContext<'_>| {
        is_open.store(true, Ordering::Relaxed);
        let desk = desk(&creation.egui_ctx, sample, path.as_deref());
        Ok(Box::new(desk) as Box<dyn eframe::App>)
    };
    hush_until(Arc::clone(&opened));
    // The window libraries are loaded when they are needed; what is missing comes as an error or, in places, as a panic.
    let ended = std::panic::catch_unwind(std::panic::AssertUnwindSafe(|| {
        eframe::run_native("foldwright", options, Box::new(create))
    }));
    match ended {
        Ok(Ok(())) => Ok(()),
        Ok(Err(fault)) => Err(DeskError::NoWindow(reason(&fault.to_string()))),
        Err(fault) if opened.load(Ordering::Relaxed) => std::panic::resume_unwind(fault),
        Err(_) => Err(DeskError::NoWindow("a library is missing".to_owned())),
    }
}

/// What went wrong, without the place in the source of the window library that some of its errors begin with.
fn reason(fault: &str) -> String {
    fault
        .rsplit(".rs:")
        .next()
        .map_or_else(String::new, |rest| {
            let rest = rest.trim_start_matches(|c: char| c.is_ascii_digit() || c == ':');
            rest.trim().to_owned()
        })
}

/// Panics of the window libraries while they look for a display are told as an error, not as a panic.
fn hush_until(opened: Arc<AtomicBool>) {
    let usual = std::panic::take_hook();
    std::panic::set_hook(Box::new(move |info| {
        if opened.load(Ordering::Relaxed) {
            usual(info);
        } else {
            log::debug!("{info}");
        }
    }));
}

fn has_display() -> bool {
    ["WAYLAND_DISPLAY", "WAYLAND_SOCKET", "DISPLAY"]
        .iter()
        .any(|name| std::env::var_os(name).is_some_and(|value| !value.is_empty()))
}

/// The pack in the greenhouse scenario that comes with the program.
///
/// # Errors
/// If it is damaged, which a test rules out.
pub fn sample_pack() -> Result<Pack, DeskError> {
    read_pack(SAMPLE.as_bytes())
        .map(|read| read.pack)
        .map_err(|fault| DeskError::NoSample(fault.to_string()))
}

fn desk(ctx: &egui::Context, sample: Pack, path: Option<&Path>) -> Desk {
    let keeper = Keeper::in_user_folder();
    let settings = keeper.settings();
    let mut desk = Desk::new(ctx, sample, None, settings).with_keeper(keeper);
    if let Some(path) = path {
        let recovery = desk.state.dialog.take();
        desk.state.hear_file(super::jobs::read(path.to_path_buf()));
        desk.state.dialog = first_question(&mut desk.state, recovery);
    }
    desk
}

/// What went wrong with the named pack is told first; the autosave is offered again the next time.
fn first_question(state: &mut State, recovery: Option<Dialog>) -> Option<Dialog> {
    state.dialog.take().or(recovery)
}

fn icon() -> IconData {
    let side = 128;
    let drawn = resvg::usvg::Tree::from_str(ICON, &resvg::usvg::Options::default())
        .ok()
        .zip(resvg::tiny_skia::Pixmap::new(side, side));
    let Some((tree, mut pixmap)) = drawn else {
        return IconData::default();
    };
    let scale = side as f32 / tree.size().width().max(tree.size().height());
    let fit = resvg::tiny_skia::Transform::from_scale(scale, scale);
    resvg::render(&tree, fit, &mut pixmap.as_mut());
    let rgba = pixmap
        .pixels()
        .iter()
        .map(|pixel| pixel.demultiply())
        .flat_map(|pixel| [pixel.red(), pixel.green(), pixel.blue(), pixel.alpha()])
        .collect();
    IconData {
        rgba,
        width: side,
        height: side,
    }
}

impl eframe::App for Desk {
    fn ui(&mut self, ui: &mut egui::Ui, _frame: &mut eframe::Frame) {
        Desk::ui(self, ui);
    }

    fn clear_color(&self, visuals: &egui::Visuals) -> [f32; 4] {
        visuals.panel_fill.to_normalized_gamma_f32()
    }

    /// Positions of scroll areas and the like are not worth keeping; the window's size is kept by eframe.
    fn persist_egui_memory(&self) -> bool {
        false
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_reason_has_no_path_of_the_machine_it_was_built_on() {
        let check = |fault: &str, expected: &str| assert_eq!(reason(fault), expected);
        check(
            "winit EventLoopError: os error at /a/b/mod.rs:788: Failed to open connection to X server",
            "Failed to open connection to X server",
        );
        check("no GL context", "no GL context");
    }

    #[test]
    fn the_sample_pack_can_be_read() {
        assert!(!sample_pack().expect("a sound pack").levels.is_empty());
    }
}
