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
mod execute;
mod files;
pub mod findings;
mod levels;
pub mod marks;
mod menu;
pub mod overlay;
pub mod pictures;
pub mod playback;
pub mod shapes;
pub mod shelf;
mod shelf_lines;
pub mod state;
mod status;
mod stroke;
pub mod theme;
mod thumbnail;
pub mod trail;
mod tray;
pub mod verdict;
pub mod watch;

pub use app::Desk;
