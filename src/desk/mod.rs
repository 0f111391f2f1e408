//! The window: all of egui.

pub mod cividis;
pub mod pictures;
pub mod shapes;
pub mod theme;
