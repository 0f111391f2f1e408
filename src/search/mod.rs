//! Exploring state spaces, of which nothing is known here but what [`StateSpace`] says: no level, no mechanics.
//!
//! [`Folded`] is a space as far as it was looked at, with walks folded into single nodes; [`Engine`]s search it by any of three
//! aims and share what it holds; [`Closure`] looks at all of it; [`strongly_connected`] folds it further, into everything
//! that can be undone. Engines are advanced one node at a time, so that whoever drives them holds the limits. Memory is counted
//! by [`Budget`], in bytes allocated. [`tree`] is the search that needs no bound.

mod budget;
mod closure;
mod components;
mod engine;
mod folded;
mod open;
mod registry;
mod space;
pub mod tree;

pub use budget::{Budget, Column, Full};
pub use closure::Closure;
pub use components::strongly_connected;
pub use engine::{Advance, Aim, Engine, Trail};
pub use folded::{Edge, Folded, NO_ROAM, RoamId};
pub use open::OpenList;
pub use registry::Registry;
pub use space::{Ahead, Arrival, EdgeList, EdgeOut, Hint, Outlook, SafeCut, StateSpace};
