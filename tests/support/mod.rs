//! What several integration tests share: random levels of every trait mix, and a plain explorer of whole spaces.

#![allow(dead_code)]

pub mod brute;
pub mod case;
mod placing;
pub mod random;
