//! How the kinds of a pack look, for pictures that are written to files.

use crate::export::{Kind, PictureFile, Pictures, shapes};
use crate::file::{Artwork, PictureError, Pixels, builtin};
use crate::level::{BodyIx, Dir, GroundIx, ItemIx, KindId, Look, Mechanics, Picture};
use image::{ImageFormat, RgbaImage};
use std::borrow::Cow;
use std::collections::BTreeMap;
use std::io::Cursor;
use std::path::Path;

/// Side, in pixels, at which a picture of pixels goes into a drawing.
const EMBEDDED_SIDE: u32 = 128;

struct Source {
    mime: &'static str,
    bytes: Vec<u8>,
    art: Artwork,
    quarter_turns: u8,
}

/// The pictures of all kinds of a pack, read once.
pub(super) struct KindPictures(BTreeMap<Kind, Source>);

impl KindPictures {
    /// `folder` is the one that the pack lies in. What is wrong with pictures goes to `warn`; such kinds get a shape.
    pub(super) fn of(
        mechanics: &Mechanics,
        folder: &Path,
        warn: &mut dyn FnMut(String),
    ) -> KindPictures {
        let grounds = (0..mechanics.grounds.len()).map(|at| Kind::Ground(GroundIx(at as u16)));
        let bodies = (0..mechanics.bodies.len()).map(|at| Kind::Body(BodyIx(at as u16)));
        let items = (0..mechanics.items.len()).map(|at| Kind::Item(ItemIx(at as u16)));
        let all = grounds.chain(bodies).chain(items);
        KindPictures(
            all.filter_map(|kind| Some((kind, source(mechanics, folder, kind, warn)?)))
                .collect(),
        )
    }
}

impl Pictures for KindPictures {
    fn file(&self, kind: Kind) -> PictureFile<'_> {
        match self.0.get(&kind) {
            Some(source) => PictureFile {
                mime: source.mime,
                bytes: Cow::Borrowed(&source.bytes),
                quarter_turns: source.quarter_turns,
            },
            None => PictureFile {
                mime: "image/svg+xml",
                bytes: Cow::Borrowed(
                    b"<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 64 64\"/>",
                ),
                quarter_turns: 0,
            },
        }
    }

    fn pixels(&self, kind: Kind, side: u32) -> Vec<u8> {
        let drawn = self
            .0
            .get(&kind)
            .map(|source| source.art.draw(side, source.quarter_turns));
        match drawn {
            Some(Ok(Pixels { rgba, .. })) => rgba,
            _ => vec![0; side as usize * side as usize * 4],
        }
    }
}

/// A kind's picture: that of its look, else the built-in one of its id, else a shape from its traits.
fn source(
    mechanics: &Mechanics,
    folder: &Path,
    kind: Kind,
    warn: &mut dyn FnMut(String),
) -> Option<Source> {
    let (id, look, ways): (&KindId, &Option<Look>, &[Dir]) = match kind {
        Kind::Ground(ix) => {
            let ground = mechanics.ground(ix);
            (&ground.id, &ground.look, &ground.enter_only)
        }
        Kind::Body(ix) => (&mechanics.body(ix).id, &mechanics.body(ix).look, &[]),
        Kind::Item(ix) => (&mechanics.item(ix).id, &mechanics.item(ix).look, &[]),
    };
    // Pictures of ground with one way in face east and are turned; with several ways the shape says more.
    let quarter_turns = match ways {
        [] => Some(0),
        [dir] => Some(shapes::quarter_turns(*dir)),
        _ => None,
    };
    let built_in = |name: &str| drawn(builtin(name)?.to_vec(), quarter_turns?);
    let of_look = match look {
        None => None,
        Some(Look::BuiltIn(name)) => built_in(name),
        Some(Look::Drawing(drawing)) => drawn(
            shapes::drawing(drawing, matches!(kind, Kind::Ground(_))).into_bytes(),
            0,
        ),
        Some(Look::Picture(picture)) => match own(folder, picture, quarter_turns.unwrap_or(0)) {
            Ok(source) => Some(source),
            Err(error) => {
                warn(format!("{id}: {error}"));
                None
            }
        },
    };
    let of_traits = || match kind {
        Kind::Ground(ix) => shapes::ground(mechanics, mechanics.ground(ix)),
        Kind::Body(ix) => shapes::body(mechanics, mechanics.body(ix)),
        Kind::Item(ix) => shapes::item(mechanics, mechanics.item(ix)),
    };
    of_look
        .or_else(|| built_in(id.as_str()))
        .or_else(|| drawn(of_traits().into_bytes(), 0))
}

fn drawn(svg: Vec<u8>, quarter_turns: u8) -> Option<Source> {
    Some(Source {
        mime: "image/svg+xml",
        art: Artwork::from_bytes(&svg).ok()?,
        bytes: svg,
        quarter_turns,
    })
}

fn own(folder: &Path, picture: &Picture, quarter_turns: u8) -> Result<Source, PictureError> {
    let art = Artwork::open(folder, picture)?;
    let pixels = art.draw(EMBEDDED_SIDE, 0)?;
    let mut bytes = Cursor::new(Vec::new());
    if let Some(image) = RgbaImage::from_raw(pixels.width, pixels.height, pixels.rgba) {
        let written = image.write_to(&mut bytes, ImageFormat::Png);
        written.map_err(|error| PictureError::Unknown(error.to_string()))?;
    }
    Ok(Source {
        mime: "image/png",
        bytes: bytes.into_inner(),
        art,
        quarter_turns,
    })
}
