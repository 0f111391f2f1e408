//! Packs from text.
//!
//! Reading goes in three passes. The RON reader turns the text into records ([`super::wire`]), refuses unknown fields and
//! knows the place of what it refuses. The records are then turned into the model ([`super::mechanics`],
//! [`super::levels`]); what is refused here is known by its path in the document, and only then is the text scanned once
//! more for the place ([`super::locate`]).
//!
//! Faults come in two grades. What the model cannot hold (a ragged row, a kind that does not exist) stops the reading.
//! What it can hold, though it is no proper pack (a warp without its twin, in the middle of an edit), is listed in
//! [`ReadPack::refusals`]: the desk opens such a pack and shows what is wrong, everything else treats it as unreadable.

use super::fault::{Fault, PackError, not_ron, not_text};
use super::levels::level;
use super::locate::{Locator, Turn, leading_trivia, literal_bytes};
use super::mechanics::mechanics;
use super::wire::PackWire;
use crate::level::Pack;
use std::sync::Arc;

/// What a pack file held.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ReadPack {
    /// The pack.
    pub pack: Pack,
    /// The comments before the pack's opening parenthesis, as they stand in the file, to be given to
    /// [`super::write_pack`] again. Empty if there are none.
    pub preamble: String,
    /// Whether there are comments elsewhere. Saving loses them.
    pub comments_inside: bool,
    /// Faults in the content of levels that do not stop the pack from being drawn and edited.
    pub refusals: Vec<PackError>,
}

/// Reads a pack file. Takes any bytes.
///
/// # Errors
/// The first fault that leaves no pack to speak of, with its place.
///
/// ```
/// let error = foldwright::file::read_pack(b"(format: 1,\n colour: 3)").unwrap_err();
/// assert_eq!((error.line, error.column), (2, 2));
/// ```
pub fn read_pack(bytes: &[u8]) -> Result<ReadPack, PackError> {
    let bytes = bytes.strip_prefix(b"\xEF\xBB\xBF").unwrap_or(bytes);
    let text = std::str::from_utf8(bytes).map_err(|error| not_text(bytes, error))?;
    let wire: PackWire = ron::Options::default()
        .with_default_extension(ron::extensions::Extensions::IMPLICIT_SOME)
        .from_str(text)
        .map_err(|error| not_ron(text, error))?;
    let (pack, faults) = pack(wire).map_err(|fault| fault.placed(&Locator::new(text)))?;
    let refusals = if faults.is_empty() {
        Vec::new()
    } else {
        let locator = Locator::new(text);
        faults
            .into_iter()
            .map(|fault| fault.placed(&locator))
            .collect()
    };
    let (preamble, comments_inside) = comments(text);
    Ok(ReadPack {
        pack,
        preamble,
        comments_inside,
        refusals,
    })
}

fn pack(wire: PackWire) -> Result<(Pack, Vec<Fault>), Fault> {
    let name = wire.name.clone();
    let (mechanics, levels) = mechanics(wire)?;
    let mut faults = Vec::new();
    let mut read = Vec::with_capacity(levels.len());
    for (at, wire) in levels.into_iter().enumerate() {
        let here = [Turn::Field("levels"), Turn::At(at)];
        let (level, level_faults) = level(&mechanics, wire).map_err(|fault| fault.under(&here))?;
        faults.extend(level_faults.into_iter().map(|fault| fault.under(&here)));
        read.push(Arc::new(level));
    }
    let pack = Pack {
        name,
        mechanics: Arc::new(mechanics),
        levels: read,
    };
    Ok((pack, faults))
}

/// The comments before the document, and whether there are others.
pub(super) fn comments(text: &str) -> (String, bool) {
    let mut preamble = String::new();
    let mut at = 0;
    for trivium in leading_trivia(text) {
        if trivium.comment {
            if !preamble.is_empty() && !preamble.ends_with('\n') {
                preamble.push('\n');
            }
            preamble.push_str(text[at..at + trivium.bytes].trim_end());
            preamble.push('\n');
        } else if !preamble.is_empty() {
            let empty_lines = text[at..at + trivium.bytes]
                .matches('\n')
                .count()
                .saturating_sub(1);
            preamble.extend(std::iter::repeat_n('\n', empty_lines));
        }
        at += trivium.bytes;
    }
    let preamble = match preamble.trim_end() {
        "" => String::new(),
        comments => format!("{comments}\n"),
    };
    (preamble.replace("\r\n", "\n"), has_comment(&text[at..]))
}

fn has_comment(text: &str) -> bool {
    let mut rest = text;
    while let Some(c) = rest.chars().next() {
        if rest.starts_with("//") || rest.starts_with("/*") {
            return true;
        }
        // An identifier may end in r or b, but no literal follows an identifier directly in RON.
        rest = &rest[literal_bytes(rest).unwrap_or(c.len_utf8())..];
    }
    false
}
