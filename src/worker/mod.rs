//! Studies beside the window: threads, the newest request first, everything cancelled by a newer edit.

mod protocol;

pub use protocol::{Answer, Event, Request, ShelfLine, Verdict};
