//! Packs to and from RON, atomic saving, autosave and pictures: the only code that touches the disk for packs.

mod fault;
mod legend;
mod levels;
mod links;
mod locate;
mod mechanics;
mod read;
mod wire;
mod write;

pub use fault::PackError;
pub use links::refusal;
pub use read::{ReadPack, read_pack};
pub use write::write_pack;
