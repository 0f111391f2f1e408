//! Packs to and from RON, atomic saving, autosave and pictures: the only code that touches the disk for packs.

mod builtin;
mod disk;
mod fault;
mod keep;
mod legend;
mod levels;
mod links;
mod locate;
mod mechanics;
mod pictures;
mod read;
mod starts;
mod wire;
mod write;

pub use builtin::{SAMPLE_PACK, builtin, builtin_names};
pub use disk::{
    Fingerprint, OpenError, Opened, SaveError, fingerprint, open_pack, save_atomic, save_pack,
};
pub use fault::PackError;
pub use keep::{Autosave, DATA_VARIABLE, DataFolder, Recoverable};
pub use links::refusal;
pub use pictures::{Artwork, PictureError, Pixels};
pub use read::{ReadPack, read_pack};
pub use starts::{STARTS, Start};
pub use write::write_pack;
