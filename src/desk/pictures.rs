//! Pictures of kinds as textures, crisp at every zoom.
//!
//! A kind is drawn from the first of these that there is: the picture of its `look`, the built-in picture of its id, the
//! shape of its `look`, a shape made from its traits ([`crate::export::shapes`]). Picture files are read beside the window; until
//! they are there, and where one can't be read, the kind shows what it would show without. All of them end as a small square image for each
//! size in use. Sizes are rounded up to a bucket, so that zooming makes a few images and not one a frame; a frame spends
//! only [`FRAME_BUDGET`] on making them, shows the nearest size that it has meanwhile, and asks to be drawn again. The
//! cost in memory is bounded: past [`MOST_BYTES`] the sizes that the last frame did not use are given back.

use super::sources::{self, Source};
use crate::level::{BodyIx, Brush, Cell, GroundIx, ItemIx, Mechanics};
use crate::worker::run_aside;
use crossbeam_channel::Receiver;
use egui::{Color32, ColorImage, Mesh, Painter, Pos2, Rect, TextureHandle, TextureOptions};
use rustc_hash::FxHashMap;
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::{Duration, Instant};

/// Time that one frame may spend on making images.
const FRAME_BUDGET: Duration = Duration::from_millis(3);

/// Bytes of images above which unused sizes are given back.
const MOST_BYTES: usize = 48 << 20;

/// Greatest side of an image, in pixels; greater cells show this one magnified.
const MOST_PIXELS: u32 = 512;

/// A kind of any layer.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Kind {
    /// A ground.
    Ground(GroundIx),
    /// A body.
    Body(BodyIx),
    /// An item.
    Item(ItemIx),
}

impl Kind {
    /// The kind that a brush paints, if it paints one.
    pub fn of(brush: Brush) -> Option<Kind> {
        match brush {
            Brush::Ground(ix) => Some(Kind::Ground(ix)),
            Brush::Body(ix) => Some(Kind::Body(ix)),
            Brush::Item(ix) => Some(Kind::Item(ix)),
            Brush::Clear => None,
        }
    }

    /// What people call it.
    pub fn label(self, mechanics: &Mechanics) -> &str {
        match self {
            Kind::Ground(ix) => &mechanics.ground(ix).label,
            Kind::Body(ix) => &mechanics.body(ix).label,
            Kind::Item(ix) => &mechanics.item(ix).label,
        }
    }
}

struct Image {
    texture: TextureHandle,
    pixels: u32,
    used_in: u64,
}

/// All pictures of the pack on the desk.
#[derive(Default)]
pub struct Pictures {
    mechanics: Option<Arc<Mechanics>>,
    folder: Option<PathBuf>,
    reading: Option<Receiver<Vec<sources::Read>>>,
    faults: Vec<(Kind, String)>,
    sources: FxHashMap<Kind, Source>,
    images: FxHashMap<Kind, Vec<Image>>,
    colours: FxHashMap<Kind, Color32>,
    small: FxHashMap<(Kind, u32), Option<Arc<ColorImage>>>,
    pub(super) thumbnails: super::thumbnail::Thumbnails,
    pub(super) shelf_lines: super::shelf::Lines,
    frame: u64,
    bytes: usize,
    spent: Duration,
    made: usize,
}

impl Pictures {
    /// No pictures yet.
    pub fn new() -> Pictures {
        Pictures::default()
    }

    /// Once a frame, before anything is painted: notes which kinds there are and in which folder their picture files lie.
    pub fn begin_frame(
        &mut self,
        ctx: &egui::Context,
        mechanics: &Arc<Mechanics>,
        folder: Option<&Path>,
    ) {
        let same_kinds = self
            .mechanics
            .as_ref()
            .is_some_and(|old| Arc::ptr_eq(old, mechanics) || old == mechanics);
        if !same_kinds || self.folder.as_deref() != folder {
            *self = Pictures {
                folder: folder.map(Path::to_path_buf),
                frame: self.frame,
                ..Pictures::default()
            };
            self.read_files(ctx, mechanics);
        }
        self.mechanics = Some(Arc::clone(mechanics));
        self.take_files();
        self.frame += 1;
        self.thumbnails.begin_frame();
        self.spent = Duration::ZERO;
        self.made = 0;
        if self.bytes > MOST_BYTES {
            self.give_back();
        }
    }

    /// The kinds whose picture files can't be shown, with a sentence on what to do.
    pub fn faults(&self) -> &[(Kind, String)] {
        &self.faults
    }

    fn read_files(&mut self, ctx: &egui::Context, mechanics: &Mechanics) {
        let wanted = sources::own_pictures(mechanics);
        let Some(folder) = self.folder.clone().filter(|_| !wanted.is_empty()) else {
            return;
        };
        let wake = ctx.clone();
        self.reading = Some(run_aside(
            move || sources::read(folder, wanted),
            move || wake.request_repaint(),
        ));
    }

    fn take_files(&mut self) {
        let Some(Ok(read)) = self.reading.as_ref().map(Receiver::try_recv) else {
            return;
        };
        self.reading = None;
        for (kind, result) in read {
            match result {
                Ok(source) => {
                    self.sources.insert(kind, source);
                    self.images.remove(&kind);
                    self.colours.remove(&kind);
                    self.small.retain(|(known, _), _| *known != kind);
                    self.thumbnails = super::thumbnail::Thumbnails::default();
                }
                Err(fault) => self.faults.push((kind, fault)),
            }
        }
    }

    /// Paints a kind into `rect`, each pixel multiplied by `tint` (white for as it is).
    pub fn paint(&mut self, painter: &Painter, rect: Rect, kind: Kind, tint: Color32) {
        self.paint_all(painter, std::slice::from_ref(&rect), kind, tint);
    }

    /// Paints a kind into many squares of one size, as one mesh: for the ground of a large level.
    pub fn paint_all(&mut self, painter: &Painter, rects: &[Rect], kind: Kind, tint: Color32) {
        let Some(first) = rects.first() else {
            return;
        };
        let pixels = bucket(first.width() * painter.pixels_per_point());
        match self.texture(painter.ctx(), kind, pixels) {
            Some(texture) => {
                let mut mesh = Mesh::with_texture(texture);
                let whole = Rect::from_min_max(Pos2::ZERO, Pos2::new(1.0, 1.0));
                for rect in rects {
                    mesh.add_rect_with_uv(*rect, whole, tint);
                }
                painter.add(mesh);
            }
            None => {
                let mut mesh = Mesh::default();
                let colour = self.colour(kind) * tint;
                for rect in rects {
                    mesh.add_colored_rect(*rect, colour);
                }
                painter.add(mesh);
            }
        }
    }

    /// Draws a body of one or more cells: its picture on each, joined by its colour where cells touch.
    pub fn paint_block(
        &mut self,
        painter: &Painter,
        kind: BodyIx,
        cells: &[Cell],
        rect_of: impl Fn(Cell) -> Rect,
        tint: Color32,
    ) {
        let kind = Kind::Body(kind);
        let rects: Vec<Rect> = cells.iter().map(|&cell| rect_of(cell)).collect();
        if cells.len() > 1 {
            let colour = self.colour(kind) * tint;
            for (at, &cell) in cells.iter().enumerate() {
                for &other in &cells[at + 1..] {
                    let apart = (i32::from(cell.x) - i32::from(other.x)).abs()
                        + (i32::from(cell.y) - i32::from(other.y)).abs();
                    if apart == 1 {
                        let (one, two) = (rect_of(cell), rect_of(other));
                        let inset = one.width() * 0.2;
                        painter.rect_filled(one.union(two).shrink(inset), 0.0, colour);
                    }
                }
            }
        }
        self.paint_all(painter, &rects, kind, tint);
    }

    /// The colour that stands for a kind where there is no room for its picture: the mean of what is drawn.
    pub fn colour(&mut self, kind: Kind) -> Color32 {
        if let Some(colour) = self.colours.get(&kind) {
            return *colour;
        }
        let colour = match self.source(kind) {
            Some(source) => mean(&source.image(16)),
            None => Color32::GRAY,
        };
        self.colours.insert(kind, colour);
        colour
    }

    /// A kind's image of a few pixels, for thumbnails.
    pub(super) fn small(&mut self, kind: Kind, pixels: u32) -> Option<Arc<ColorImage>> {
        if let Some(known) = self.small.get(&(kind, pixels)) {
            return known.clone();
        }
        let image = self
            .source(kind)
            .map(|source| Arc::new(source.image(pixels)));
        self.small.insert((kind, pixels), image.clone());
        image
    }

    /// The texture of a kind at a size in pixels, or the nearest size that there is while that one is being made.
    fn texture(&mut self, ctx: &egui::Context, kind: Kind, pixels: u32) -> Option<egui::TextureId> {
        let frame = self.frame;
        let sizes = self.images.entry(kind).or_default();
        if let Some(image) = sizes.iter_mut().find(|image| image.pixels == pixels) {
            image.used_in = frame;
            return Some(image.texture.id());
        }
        if self.made == 0 || self.spent < FRAME_BUDGET {
            return self.make(ctx, kind, pixels);
        }
        ctx.request_repaint();
        let nearest = self
            .images
            .get_mut(&kind)?
            .iter_mut()
            .min_by_key(|image| image.pixels.abs_diff(pixels))?;
        nearest.used_in = frame;
        Some(nearest.texture.id())
    }

    fn make(&mut self, ctx: &egui::Context, kind: Kind, pixels: u32) -> Option<egui::TextureId> {
        let since = Instant::now();
        let image = self.source(kind)?.image(pixels);
        let texture = ctx.load_texture(format!("{kind:?} {pixels}"), image, TextureOptions::LINEAR);
        let id = texture.id();
        self.images.entry(kind).or_default().push(Image {
            texture,
            pixels,
            used_in: self.frame,
        });
        self.bytes += bytes_of(pixels);
        self.spent += since.elapsed();
        self.made += 1;
        Some(id)
    }

    fn source(&mut self, kind: Kind) -> Option<&Source> {
        if !self.sources.contains_key(&kind) {
            let source = sources::find(self.mechanics.as_ref()?, kind)?;
            self.sources.insert(kind, source);
        }
        self.sources.get(&kind)
    }

    fn give_back(&mut self) {
        let last = self.frame.saturating_sub(1);
        for sizes in self.images.values_mut() {
            sizes.retain(|image| image.used_in >= last);
        }
        self.bytes = self
            .images
            .values()
            .flatten()
            .map(|image| bytes_of(image.pixels))
            .sum();
    }
}

fn bytes_of(pixels: u32) -> usize {
    pixels as usize * pixels as usize * 4
}

/// The size of image for a side in pixels: exact to 2 when small, coarser when great, never smaller than asked.
fn bucket(side: f32) -> u32 {
    let side = (side.round().max(2.0) as u32).min(MOST_PIXELS);
    let step = match side {
        0..=64 => 2,
        65..=128 => 4,
        129..=256 => 8,
        _ => 32,
    };
    side.div_ceil(step) * step
}

/// The mean colour of what is opaque.
fn mean(image: &ColorImage) -> Color32 {
    let mut sums = [0u32; 4];
    for pixel in &image.pixels {
        for (sum, value) in sums.iter_mut().zip(pixel.to_array()) {
            *sum += u32::from(value);
        }
    }
    let opaque = sums[3].max(1);
    // Premultiplied channels over the sum of alphas give the mean of the drawn part.
    let part = |sum: u32| (sum * 255 / opaque).min(255) as u8;
    Color32::from_rgb(part(sums[0]), part(sums[1]), part(sums[2]))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn sizes_round_up_to_a_few() {
        let check = |side: f32, expected: u32| assert_eq!(bucket(side), expected, "{side}");
        check(0.0, 2);
        check(40.0, 40);
        check(41.0, 42);
        check(100.3, 100);
        check(101.0, 104);
        check(9_000.0, 512);
    }

    #[test]
    fn the_mean_leaves_out_what_is_transparent() {
        let blue = Color32::from_rgb(0x20, 0x40, 0x60);
        let pixels = vec![blue, Color32::TRANSPARENT, Color32::TRANSPARENT, blue];
        assert_eq!(mean(&ColorImage::new([2, 2], pixels)), blue);
    }
}
