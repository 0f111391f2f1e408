//! Levels, routes and reports as bytes: SVG, PNG, GIF and CSV. Pure: nothing here reads or writes a file.
//!
//! How a kind looks comes from the caller through [`Pictures`], because pictures lie on disks. Where a kind has none,
//! [`shapes`] draws one from its traits.

mod canvas;
mod csv;
mod film;
mod scene;
pub mod shapes;
mod vector;

pub use canvas::scene_png;
pub use csv::{Line, csv};
pub use film::{FilmError, Timing, film_gif};
pub use scene::{Kind, PictureFile, Pictures, Scene};
pub use vector::scene_svg;
