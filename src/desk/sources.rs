//! What the images of a kind are made from: its own picture, the built-in one of its id, or a shape.

use super::pictures::Kind;
use crate::export::shapes;
use crate::file::{Artwork, builtin};
use crate::level::{BodyIx, Dir, GroundIx, ItemIx, KindId, Look, Mechanics, Picture};
use egui::{Color32, ColorImage};
use std::path::PathBuf;

/// Greatest side, in pixels, to which a picture file is kept; greater ones are made smaller when they are read.
const MOST_KEPT_PIXELS: u32 = 512;

/// A picture and by how many quarter turns, clockwise, it is turned.
pub(super) struct Source {
    artwork: Option<Artwork>,
    quarter_turns: u8,
}

impl Source {
    fn upright(artwork: Artwork) -> Source {
        Source {
            artwork: Some(artwork),
            quarter_turns: 0,
        }
    }

    /// The image at a size.
    pub(super) fn image(&self, pixels: u32) -> ColorImage {
        let drawn = self
            .artwork
            .as_ref()
            .and_then(|artwork| artwork.draw(pixels, self.quarter_turns).ok());
        match drawn {
            Some(drawn) => {
                let size = [drawn.width as usize, drawn.height as usize];
                ColorImage::from_rgba_unmultiplied(size, &drawn.rgba)
            }
            None => ColorImage::filled([pixels as usize; 2], Color32::GRAY),
        }
    }
}

/// How a kind asks to be drawn, its id, and the ways in which it may be entered.
struct Wish<'a> {
    look: Option<&'a Look>,
    id: &'a KindId,
    ways: &'a [Dir],
}

fn wish(mechanics: &Mechanics, kind: Kind) -> Option<Wish<'_>> {
    Some(match kind {
        Kind::Ground(ix) => {
            let kind = mechanics.grounds.get(usize::from(ix.0))?;
            Wish {
                look: kind.look.as_ref(),
                id: &kind.id,
                ways: &kind.enter_only,
            }
        }
        Kind::Body(ix) => {
            let kind = mechanics.bodies.get(usize::from(ix.0))?;
            Wish {
                look: kind.look.as_ref(),
                id: &kind.id,
                ways: &[],
            }
        }
        Kind::Item(ix) => {
            let kind = mechanics.items.get(usize::from(ix.0))?;
            Wish {
                look: kind.look.as_ref(),
                id: &kind.id,
                ways: &[],
            }
        }
    })
}

/// What a kind is drawn from without looking at the disk.
pub(super) fn find(mechanics: &Mechanics, kind: Kind) -> Option<Source> {
    let wish = wish(mechanics, kind)?;
    let wished = match wish.look {
        Some(Look::BuiltIn(name)) => built_in(name, wish.ways),
        Some(Look::Drawing(drawing)) => {
            let on_floor = matches!(kind, Kind::Ground(_));
            from_svg(&shapes::drawing(drawing, on_floor))
        }
        Some(Look::Picture(_)) | None => None,
    };
    wished
        .or_else(|| built_in(wish.id.as_str(), wish.ways))
        .or_else(|| {
            from_svg(&match kind {
                Kind::Ground(ix) => shapes::ground(mechanics, mechanics.ground(ix)),
                Kind::Body(ix) => shapes::body(mechanics, mechanics.body(ix)),
                Kind::Item(ix) => shapes::item(mechanics, mechanics.item(ix)),
            })
        })
        .or(Some(Source {
            artwork: None,
            quarter_turns: 0,
        }))
}

/// A built-in picture. Those of ground that is entered one way only face east and are turned; where there are several ways
/// in, the shape from the traits says more.
fn built_in(name: &str, ways: &[Dir]) -> Option<Source> {
    let quarter_turns = match ways {
        [] => 0,
        [dir] => shapes::quarter_turns(*dir),
        _ => return None,
    };
    let artwork = Artwork::from_bytes(builtin(name)?).ok()?;
    Some(Source {
        artwork: Some(artwork),
        quarter_turns,
    })
}

fn from_svg(svg: &str) -> Option<Source> {
    Artwork::from_bytes(svg.as_bytes())
        .ok()
        .map(Source::upright)
}

/// The kinds of a pack that have picture files.
pub(super) fn own_pictures(mechanics: &Mechanics) -> Vec<(Kind, Picture)> {
    let grounds = (0..mechanics.grounds.len()).map(|at| Kind::Ground(GroundIx(at as u16)));
    let bodies = (0..mechanics.bodies.len()).map(|at| Kind::Body(BodyIx(at as u16)));
    let items = (0..mechanics.items.len()).map(|at| Kind::Item(ItemIx(at as u16)));
    grounds
        .chain(bodies)
        .chain(items)
        .filter_map(|kind| match wish(mechanics, kind)?.look {
            Some(Look::Picture(picture)) => Some((kind, picture.clone())),
            _ => None,
        })
        .collect()
}

/// One picture file, read or not.
pub(super) type Read = (Kind, Result<Source, String>);

/// Reads picture files that lie beside a pack. Blocks; not for the window's thread.
pub(super) fn read(folder: PathBuf, wanted: Vec<(Kind, Picture)>) -> Vec<Read> {
    wanted
        .into_iter()
        .map(|(kind, picture)| {
            let read = Artwork::open(&folder, &picture)
                .map(|artwork| Source::upright(no_greater(artwork)))
                .map_err(|error| error.to_string());
            (kind, read)
        })
        .collect()
}

/// A picture of many pixels made smaller, so that drawing it costs the window little.
fn no_greater(artwork: Artwork) -> Artwork {
    match artwork {
        Artwork::Painted(image) if image.width().max(image.height()) > MOST_KEPT_PIXELS => {
            let whole = Artwork::Painted(image);
            let small = whole.draw(MOST_KEPT_PIXELS, 0).ok().and_then(|small| {
                image::RgbaImage::from_raw(small.width, small.height, small.rgba)
            });
            small.map_or(whole, Artwork::Painted)
        }
        other => other,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_turned_picture_is_the_picture_turned() {
        let svg = r##"<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 8 8"><rect x="4" y="0" width="4" height="8" fill="#ff0000"/></svg>"##;
        let image = |quarter_turns: u8| {
            let upright = from_svg(svg).expect("it is an SVG");
            Source {
                quarter_turns,
                ..upright
            }
            .image(8)
        };
        let red = |image: &ColorImage, x: usize, y: usize| image.pixels[y * 8 + x].r() > 200;
        let (east, south) = (image(0), image(1));
        assert!(red(&east, 6, 1) && !red(&east, 1, 6));
        assert!(red(&south, 1, 6) && !red(&south, 6, 1));
    }

    #[test]
    fn a_damaged_picture_is_grey_and_not_a_panic() {
        let nothing = Source {
            artwork: None,
            quarter_turns: 0,
        };
        assert_eq!(nothing.image(4).pixels, [Color32::GRAY; 16]);
    }
}
