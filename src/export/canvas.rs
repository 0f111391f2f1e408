//! Scenes as pixels.

use super::scene::{Kind, Pictures, Scene, mean_colour};
use crate::level::Dir;
use image::{ImageFormat, ImageResult, Rgba, RgbaImage};
use std::collections::BTreeMap;
use std::io::Cursor;

/// What lies under pictures that leave something clear.
const BACKGROUND: Rgba<u8> = Rgba([0x12, 0x1c, 0x19, 255]);

/// Share of a cell by which the joint between two cells of a block is narrower than they are, at each side.
const JOINT_INSET: f32 = 0.2;

/// Pictures of one size, made once and stamped many times.
pub(super) struct Stamps<'a> {
    pictures: &'a dyn Pictures,
    side: u32,
    made: BTreeMap<Kind, RgbaImage>,
}

impl<'a> Stamps<'a> {
    /// `side` is the side of a cell in pixels, at least 1.
    pub(super) fn new(pictures: &'a dyn Pictures, side: u32) -> Stamps<'a> {
        Stamps {
            pictures,
            side: side.max(1),
            made: BTreeMap::new(),
        }
    }

    fn stamp(&mut self, kind: Kind) -> &RgbaImage {
        let (pictures, side) = (self.pictures, self.side);
        self.made.entry(kind).or_insert_with(|| {
            let pixels = pictures.pixels(kind, side);
            RgbaImage::from_raw(side, side, pixels).unwrap_or_else(|| RgbaImage::new(side, side))
        })
    }

    pub(super) fn draw(&mut self, scene: &Scene) -> RgbaImage {
        let side = self.side;
        let (width, height) = (
            scene.size.width() as u32 * side,
            scene.size.height() as u32 * side,
        );
        let mut canvas = RgbaImage::from_pixel(width, height, BACKGROUND);
        let (bodies, under): (Vec<_>, Vec<_>) = scene
            .tiles()
            .into_iter()
            .partition(|(kind, _)| matches!(kind, Kind::Body(_)));
        let place = |cell: crate::level::Cell| (u32::from(cell.x) * side, u32::from(cell.y) * side);
        for (kind, cell) in under {
            lay(&mut canvas, self.stamp(kind), place(cell));
        }
        for (kind, cell, dir) in scene.joints() {
            let colour = mean_colour(self.stamp(kind));
            join(&mut canvas, colour, place(cell), dir, side);
        }
        for (kind, cell) in bodies {
            lay(&mut canvas, self.stamp(kind), place(cell));
        }
        canvas
    }
}

/// Lays a picture over a canvas that is opaque everywhere.
fn lay(canvas: &mut RgbaImage, stamp: &RgbaImage, (left, top): (u32, u32)) {
    for (x, y, over) in stamp.enumerate_pixels() {
        let under = canvas.get_pixel_mut(left + x, top + y);
        let alpha = u32::from(over[3]);
        for channel in 0..3 {
            let mixed =
                u32::from(over[channel]) * alpha + u32::from(under[channel]) * (255 - alpha);
            under[channel] = ((mixed + 127) / 255) as u8;
        }
    }
}

fn join(
    canvas: &mut RgbaImage,
    [red, green, blue]: [u8; 3],
    (left, top): (u32, u32),
    dir: Dir,
    side: u32,
) {
    let inset = (side as f32 * JOINT_INSET) as u32;
    let (width, height) = if dir == Dir::E {
        (2 * side, side)
    } else {
        (side, 2 * side)
    };
    for y in top + inset..top + height - inset {
        for x in left + inset..left + width - inset {
            canvas.put_pixel(x, y, Rgba([red, green, blue, 255]));
        }
    }
}

/// A scene as PNG, with cells of `side` pixels.
///
/// # Errors
/// If the encoder fails, which needs more pixels than any board has at a sensible size.
pub fn scene_png(scene: &Scene, pictures: &dyn Pictures, side: u32) -> ImageResult<Vec<u8>> {
    let mut bytes = Cursor::new(Vec::new());
    Stamps::new(pictures, side)
        .draw(scene)
        .write_to(&mut bytes, ImageFormat::Png)?;
    Ok(bytes.into_inner())
}
