//! Checking answers without trusting the machinery that found them.
//!
//! Nothing here uses the step engine, the search or the studies; the level model is all that is shared.

pub mod plain;
