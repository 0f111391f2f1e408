//! To come.

pub mod tree;
