//! The window: all of egui.
//!
//! A frame goes through [`app`]: panels draw [`state::State`] and push [`action::Action`]s, the executor (`execute.rs`)
//! alone changes the state, and what must happen outside leaves as effects.

pub mod action;
pub mod answers;
pub mod app;
pub mod board;
mod cards;
pub mod cividis;
mod dialogs;
mod execute;
pub mod files;
pub mod findings;
mod jobs;
pub mod keeper;
mod keys;
mod levels;
pub mod marks;
pub mod mechanics;
mod menu;
pub mod overlay;
pub mod pictures;
pub mod playback;

pub mod shelf;
mod shelf_lines;
mod sources;
pub mod state;
mod status;
mod stroke;
pub mod theme;
mod thumbnail;
pub mod trail;
mod traits;
mod tray;
pub mod verdict;
pub mod watch;
mod window;

pub use app::Desk;
pub use window::{DeskError, run, sample_pack};
