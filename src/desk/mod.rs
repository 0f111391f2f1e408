//! The window: all of egui.

pub mod theme;
