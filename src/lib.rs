//! Foldwright: a level editor for grid puzzles that knows after every edit whether the level can still be finished.
//!
//! The crate in the order in which an edit travels through it:
//! [`level`] is what a designer writes; [`file`] brings it to and from disk; [`rules`] compiles one level for speed;
//! [`search`] explores any state space and knows no level; [`study`] joins the two and answers the designer's questions;
//! [`worker`] runs studies beside the window; [`export`] turns results into bytes; `desk` is the window and
//! [`command`] the command line. DEVELOPERS.md says who may import whom; `tests/layering.rs` holds it.

pub mod command;
#[cfg(feature = "desk")]
pub mod desk;
pub mod export;
pub mod file;
pub mod level;
pub mod rules;
pub mod search;
pub mod study;
pub mod verify;
pub mod worker;
