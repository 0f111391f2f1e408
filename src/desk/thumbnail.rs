//! Small pictures of whole levels for the shelf, made once for each state of a level.
//!
//! Cells of four pixels and more show the pictures of their kinds, smaller ones their colours. A frame makes at most
//! [`MOST_A_FRAME`]; levels that wait for theirs are grey meanwhile. Those that were not seen for a while are given back.

use super::pictures::{Kind, Pictures};
use crate::level::{Level, Size};
use egui::{
    Color32, ColorImage, Context, Painter, Pos2, Rect, TextureHandle, TextureOptions, Vec2, vec2,
};
use rustc_hash::FxHashMap;
use std::sync::Arc;

/// Most thumbnails that one frame makes.
const MOST_A_FRAME: usize = 4;
/// Most thumbnails that are kept; past these, the ones not seen in the last frame go.
const MOST_KEPT: usize = 240;
/// Cells of at least this many pixels show pictures instead of colours.
const LEAST_PICTURE: u32 = 4;

struct Thumbnail {
    /// Held so that its address, which is the key, is not given to another level.
    level: Arc<Level>,
    texture: TextureHandle,
    cell_pixels: u32,
    used_in: u64,
}

/// The thumbnails in use.
#[derive(Default)]
pub(super) struct Thumbnails {
    by_level: FxHashMap<usize, Thumbnail>,
    frame: u64,
    made: usize,
}

impl Thumbnails {
    /// Once a frame.
    pub(super) fn begin_frame(&mut self) {
        if self.by_level.len() > MOST_KEPT {
            let last = self.frame;
            self.by_level
                .retain(|_, thumbnail| thumbnail.used_in >= last);
        }
        self.frame += 1;
        self.made = 0;
    }
}

impl Pictures {
    /// Paints a level, as large as fits, into the middle of `room`.
    pub fn paint_level(&mut self, painter: &Painter, level: &Arc<Level>, room: Rect) {
        let scale = painter.pixels_per_point();
        let cell_pixels = cell_pixels(level.size, room.size() * scale);
        let extent = vec2(level.size.width() as f32, level.size.height() as f32);
        let wanted = extent * cell_pixels as f32 / scale;
        let shrink = (room.width() / wanted.x)
            .min(room.height() / wanted.y)
            .min(1.0);
        let place = on_pixels(
            Rect::from_center_size(room.center(), wanted * shrink),
            scale,
        );
        match self.level_texture(painter.ctx(), level, cell_pixels) {
            Some(texture) => {
                let whole = Rect::from_min_max(Pos2::ZERO, Pos2::new(1.0, 1.0));
                painter.image(texture, place, whole, Color32::WHITE);
            }
            None => {
                painter.rect_filled(place, 2.0, Color32::from_gray(96));
            }
        }
    }

    fn level_texture(
        &mut self,
        ctx: &Context,
        level: &Arc<Level>,
        cell_pixels: u32,
    ) -> Option<egui::TextureId> {
        let key = Arc::as_ptr(level) as usize;
        let frame = self.thumbnails.frame;
        if let Some(known) = self.thumbnails.by_level.get_mut(&key)
            && Arc::ptr_eq(&known.level, level)
            && known.cell_pixels == cell_pixels
        {
            known.used_in = frame;
            return Some(known.texture.id());
        }
        if self.thumbnails.made >= MOST_A_FRAME {
            ctx.request_repaint();
            return None;
        }
        self.thumbnails.made += 1;
        let image = self.level_image(level, cell_pixels);
        let texture = ctx.load_texture("thumbnail", image, TextureOptions::LINEAR);
        let id = texture.id();
        let thumbnail = Thumbnail {
            level: Arc::clone(level),
            texture,
            cell_pixels,
            used_in: frame,
        };
        self.thumbnails.by_level.insert(key, thumbnail);
        Some(id)
    }

    /// A level as an image, `cell_pixels` a cell.
    pub fn level_image(&mut self, level: &Level, cell_pixels: u32) -> ColorImage {
        let side = cell_pixels as usize;
        let size = [level.size.width() * side, level.size.height() * side];
        let mut image = ColorImage::filled(size, Color32::TRANSPARENT);
        for cell in level.size.cells() {
            let corner = (usize::from(cell.x) * side, usize::from(cell.y) * side);
            let body = level.body_at(cell).map(Kind::Body);
            let item = level.item_at(cell).map(Kind::Item);
            let layers = [Some(Kind::Ground(level.ground_at(cell))), item, body];
            for (layer, kind) in layers.into_iter().enumerate() {
                if let Some(kind) = kind {
                    self.stamp(&mut image, corner, kind, cell_pixels, layer > 0);
                }
            }
        }
        image
    }

    fn stamp(
        &mut self,
        image: &mut ColorImage,
        corner: (usize, usize),
        kind: Kind,
        cell_pixels: u32,
        on_top: bool,
    ) {
        let side = cell_pixels as usize;
        if cell_pixels >= LEAST_PICTURE
            && let Some(picture) = self.small(kind, cell_pixels)
        {
            for y in 0..side {
                for x in 0..side {
                    let over = picture.pixels[y * side + x];
                    let at = (corner.1 + y) * image.width() + corner.0 + x;
                    image.pixels[at] = image.pixels[at].blend(over);
                }
            }
            return;
        }
        let colour = self.colour(kind);
        let inset = if on_top && side >= 3 { side / 4 } else { 0 };
        for y in inset..side - inset {
            for x in inset..side - inset {
                let at = (corner.1 + y) * image.width() + corner.0 + x;
                image.pixels[at] = colour;
            }
        }
    }
}

/// The greatest whole number of pixels a cell with which the level fits, at least 1.
fn cell_pixels(size: Size, room: Vec2) -> u32 {
    let fit = (room.x / size.width() as f32).min(room.y / size.height() as f32);
    (fit.floor() as u32).clamp(1, 32)
}

fn on_pixels(rect: Rect, scale: f32) -> Rect {
    let corner = (rect.min * scale).round() / scale;
    Rect::from_min_size(corner, rect.size())
}
