//! What is to be drawn: a level, or a position on the way through it.

use crate::level::{BodyIx, Cell, Dir, GroundIx, ItemIx, Level, Size};
use crate::rules::View;
use std::borrow::Cow;

/// A kind of any layer.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Kind {
    /// A ground.
    Ground(GroundIx),
    /// A body.
    Body(BodyIx),
    /// An item.
    Item(ItemIx),
}

/// A picture as a file that a browser shows.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PictureFile<'a> {
    /// `image/svg+xml` or `image/png`.
    pub mime: &'static str,
    /// Content.
    pub bytes: Cow<'a, [u8]>,
    /// How often it is turned clockwise by a quarter.
    pub quarter_turns: u8,
}

/// How kinds look.
pub trait Pictures {
    /// The picture of a kind as a file.
    fn file(&self, kind: Kind) -> PictureFile<'_>;

    /// The picture of a kind as `side * side` pixels, row by row: red, green, blue and straight alpha, a byte each.
    /// Turned already.
    fn pixels(&self, kind: Kind, side: u32) -> Vec<u8>;
}

/// Everything that stands on a board at one moment.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Scene {
    /// Size of the board.
    pub size: Size,
    /// Ground of each cell, row by row.
    pub ground: Vec<GroundIx>,
    /// Item on each cell.
    pub items: Vec<Option<ItemIx>>,
    /// Bodies with their cells.
    pub bodies: Vec<(BodyIx, Vec<Cell>)>,
}

impl Scene {
    /// A level as its designer left it.
    pub fn of_level(level: &Level) -> Scene {
        let bodies = level.bodies_in_order();
        Scene {
            size: level.size,
            ground: level.ground.clone(),
            items: level.items.clone(),
            bodies: bodies
                .into_iter()
                .map(|body| (body.kind, body.cells))
                .collect(),
        }
    }

    /// A position of a level.
    pub fn of_view(size: Size, view: &View) -> Scene {
        Scene {
            size,
            ground: view.ground.clone(),
            items: view.items.clone(),
            bodies: view
                .bodies
                .iter()
                .map(|body| (body.kind, body.cells.clone()))
                .collect(),
        }
    }

    /// All single pictures, the lowest first.
    pub(super) fn tiles(&self) -> Vec<(Kind, Cell)> {
        let cells = || self.size.cells();
        let ground = cells()
            .zip(&self.ground)
            .map(|(cell, &ix)| (Kind::Ground(ix), cell));
        let items = cells()
            .zip(&self.items)
            .filter_map(|(cell, &ix)| Some((Kind::Item(ix?), cell)));
        let bodies = self
            .bodies
            .iter()
            .flat_map(|(ix, cells)| cells.iter().map(|&cell| (Kind::Body(*ix), cell)));
        ground.chain(items).chain(bodies).collect()
    }

    /// Pairs of neighbouring cells of one block, which are drawn joined; the second cell lies east or south of the first.
    pub(super) fn joints(&self) -> Vec<(Kind, Cell, Dir)> {
        let mut joints = Vec::new();
        for (ix, cells) in &self.bodies {
            for &cell in cells {
                for dir in [Dir::E, Dir::S] {
                    if self
                        .size
                        .neighbour(cell, dir)
                        .is_some_and(|next| cells.contains(&next))
                    {
                        joints.push((Kind::Body(*ix), cell, dir));
                    }
                }
            }
        }
        joints
    }
}

/// The colour that stands for a picture: the mean of what is opaque in it, as red, green and blue.
pub(super) fn mean_colour(pixels: &[u8]) -> [u8; 3] {
    let mut sums = [0u64; 3];
    let mut weight = 0u64;
    for pixel in pixels.chunks_exact(4) {
        let alpha = u64::from(pixel[3]);
        weight += alpha;
        for (sum, &value) in sums.iter_mut().zip(pixel) {
            *sum += u64::from(value) * alpha;
        }
    }
    sums.map(|sum| (sum / weight.max(1)) as u8)
}
