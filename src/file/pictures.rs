//! Pictures of kinds, from SVG or PNG to pixels.
//!
//! Picture files come from anywhere, so each limit here holds off something that would stop or swamp the program: pixels
//! (a picture of 200 megapixels), nesting (a stack that overflows), and references (a drawing that refers to copies of
//! copies of itself and grows without end). Other files that a drawing refers to are not read.

use crate::level::Picture;
use image::{ImageFormat, ImageReader, RgbaImage, imageops};
use resvg::{tiny_skia, usvg};
use std::io::Cursor;
use std::path::Path;
use thiserror::Error;

/// The most pixels of a picture, and of a drawing made from it.
const MOST_PIXELS: u64 = 16_000_000;
/// The greatest picture file, in bytes.
const MOST_BYTES: usize = 32 << 20;
/// The deepest nesting of an SVG's elements.
const MOST_SVG_DEPTH: usize = 128;
/// The most references to other parts in an SVG; copies of copies multiply.
const MOST_SVG_REFERENCES: usize = 24;
/// Up to this many pixels a side a picture is taken for pixel art, and stays sharp when it is magnified.
const PIXEL_ART_SIDE: u32 = 64;

/// Why a picture can't be shown. Each prints as a sentence on what to do.
#[derive(Debug, Error, PartialEq, Eq)]
pub enum PictureError {
    /// It can't be read.
    #[error("The picture {0} can't be read: {1}. Choose it again.")]
    Unreadable(String, String),
    /// It has too many pixels or bytes.
    #[error("The picture is too large. Make it smaller than 16 megapixels.")]
    TooLarge,
    /// It is a GIF.
    #[error("Animated pictures are not shown. Save one frame as PNG.")]
    Animated,
    /// It is neither SVG nor PNG, or damaged.
    #[error("This is no picture that can be shown: {0}. Save it as SVG or PNG.")]
    Unknown(String),
    /// An SVG that is too deep or refers too much to its own parts.
    #[error("This drawing is too involved. Simplify it: fewer groups in groups, fewer clones.")]
    TooInvolved,
    /// The tile is not on the sheet.
    #[error(
        "The sheet of {0} x {1} pixels has no such tile. Check the size of the tiles, and column and row."
    )]
    NoTile(u32, u32),
}

/// Pixels, row by row from the top left: red, green, blue and straight (not multiplied) alpha, a byte each.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Pixels {
    /// Columns.
    pub width: u32,
    /// Rows.
    pub height: u32,
    /// `4 * width * height` bytes.
    pub rgba: Vec<u8>,
}

/// A picture that was read and can be drawn at any size.
pub enum Artwork {
    /// A drawing, and which part of it is shown: left, top, width, height.
    Drawn(Box<usvg::Tree>, [f32; 4]),
    /// Pixels.
    Painted(RgbaImage),
}

impl Artwork {
    /// Reads an SVG or PNG.
    ///
    /// # Errors
    /// If it is neither, or beyond the limits of this module.
    pub fn from_bytes(bytes: &[u8]) -> Result<Artwork, PictureError> {
        if bytes.len() > MOST_BYTES {
            return Err(PictureError::TooLarge);
        }
        match image::guess_format(bytes) {
            Ok(ImageFormat::Png) => png(bytes),
            Ok(ImageFormat::Gif) => Err(PictureError::Animated),
            Ok(other) => Err(PictureError::Unknown(format!("its format is {other:?}"))),
            Err(_) => svg(bytes),
        }
    }

    /// Reads the picture of a kind from disk; `folder` is the one that the pack lies in.
    ///
    /// # Errors
    /// If it can't be read, as [`Artwork::from_bytes`], or if its sheet has no such tile.
    pub fn open(folder: &Path, picture: &Picture) -> Result<Artwork, PictureError> {
        let path = picture
            .path
            .split('/')
            .fold(folder.to_path_buf(), |path, part| path.join(part));
        let unreadable = |error: std::io::Error| {
            PictureError::Unreadable(picture.path.clone(), error.to_string())
        };
        if std::fs::metadata(&path).map_err(unreadable)?.len() > MOST_BYTES as u64 {
            return Err(PictureError::TooLarge);
        }
        let whole = Artwork::from_bytes(&std::fs::read(&path).map_err(unreadable)?)?;
        match picture.tile {
            None => Ok(whole),
            Some(tile) => whole.tile(tile, picture.at),
        }
    }

    /// One tile of a sheet, by the size of its tiles and its column and row.
    fn tile(
        self,
        (width, height): (u32, u32),
        (column, row): (u32, u32),
    ) -> Result<Artwork, PictureError> {
        let (sheet_width, sheet_height) = match &self {
            Artwork::Drawn(_, part) => (part[2] as u32, part[3] as u32),
            Artwork::Painted(image) => image.dimensions(),
        };
        let fits = |tile: u32, at: u32, sheet: u32| {
            tile > 0 && u64::from(tile) * (u64::from(at) + 1) <= u64::from(sheet)
        };
        if !fits(width, column, sheet_width) || !fits(height, row, sheet_height) {
            return Err(PictureError::NoTile(sheet_width, sheet_height));
        }
        let (left, top) = (column * width, row * height);
        Ok(match self {
            Artwork::Drawn(tree, _) => {
                Artwork::Drawn(tree, [left as f32, top as f32, width as f32, height as f32])
            }
            Artwork::Painted(image) => {
                Artwork::Painted(imageops::crop_imm(&image, left, top, width, height).to_image())
            }
        })
    }

    /// The picture in a square of `side` pixels, as large as fits and in the middle, turned clockwise by quarter turns.
    ///
    /// # Errors
    /// If the square would have more than 16 megapixels, or none.
    pub fn draw(&self, side: u32, quarter_turns: u8) -> Result<Pixels, PictureError> {
        if side == 0 || u64::from(side) * u64::from(side) > MOST_PIXELS {
            return Err(PictureError::TooLarge);
        }
        let upright = match self {
            Artwork::Drawn(tree, part) => draw_tree(tree, *part, side)?,
            Artwork::Painted(image) => draw_image(image, side),
        };
        let turned = match quarter_turns % 4 {
            0 => upright,
            1 => imageops::rotate90(&upright),
            2 => imageops::rotate180(&upright),
            _ => imageops::rotate270(&upright),
        };
        Ok(Pixels {
            width: side,
            height: side,
            rgba: turned.into_raw(),
        })
    }
}

fn png(bytes: &[u8]) -> Result<Artwork, PictureError> {
    let unknown = |error: &dyn std::fmt::Display| PictureError::Unknown(error.to_string());
    let reader = || ImageReader::with_format(Cursor::new(bytes), ImageFormat::Png);
    let (width, height) = reader()
        .into_dimensions()
        .map_err(|error| unknown(&error))?;
    if u64::from(width) * u64::from(height) > MOST_PIXELS {
        return Err(PictureError::TooLarge);
    }
    let image = reader().decode().map_err(|error| unknown(&error))?;
    Ok(Artwork::Painted(image.into_rgba8()))
}

fn svg(bytes: &[u8]) -> Result<Artwork, PictureError> {
    let text = std::str::from_utf8(bytes)
        .map_err(|_| PictureError::Unknown("it is neither PNG nor text".to_owned()))?;
    if is_too_involved(text) {
        return Err(PictureError::TooInvolved);
    }
    let options = usvg::Options {
        image_href_resolver: usvg::ImageHrefResolver {
            resolve_data: Box::new(|_, _, _| None),
            resolve_string: Box::new(|_, _| None),
        },
        ..usvg::Options::default()
    };
    let tree = usvg::Tree::from_str(text, &options)
        .map_err(|error| PictureError::Unknown(error.to_string()))?;
    let size = tree.size();
    Ok(Artwork::Drawn(
        Box::new(tree),
        [0.0, 0.0, size.width(), size.height()],
    ))
}

/// A look at the tags alone, before anything is built from them.
fn is_too_involved(text: &str) -> bool {
    let references = text.matches("<use").count() + text.matches("<!ENTITY").count();
    let mut depth = 0usize;
    let mut deepest = 0;
    for tag in text.split('<').skip(1) {
        let inside = tag.split('>').next().unwrap_or("");
        if inside.starts_with('/') {
            depth = depth.saturating_sub(1);
        } else if !inside.ends_with('/') && !inside.starts_with(['!', '?']) {
            depth += 1;
            deepest = deepest.max(depth);
        }
    }
    references > MOST_SVG_REFERENCES || deepest > MOST_SVG_DEPTH
}

fn draw_tree(
    tree: &usvg::Tree,
    [left, top, width, height]: [f32; 4],
    side: u32,
) -> Result<RgbaImage, PictureError> {
    let mut pixmap = tiny_skia::Pixmap::new(side, side).ok_or(PictureError::TooLarge)?;
    let scale = side as f32 / width.max(height);
    let (spare_x, spare_y) = (side as f32 - width * scale, side as f32 - height * scale);
    let transform = tiny_skia::Transform::from_translate(-left, -top)
        .post_scale(scale, scale)
        .post_translate(spare_x / 2.0, spare_y / 2.0);
    resvg::render(tree, transform, &mut pixmap.as_mut());
    let rgba: Vec<u8> = pixmap
        .pixels()
        .iter()
        .flat_map(|pixel| {
            let plain = pixel.demultiply();
            [plain.red(), plain.green(), plain.blue(), plain.alpha()]
        })
        .collect();
    RgbaImage::from_raw(side, side, rgba).ok_or(PictureError::TooLarge)
}

fn draw_image(image: &RgbaImage, side: u32) -> RgbaImage {
    let (width, height) = image.dimensions();
    let greater = width.max(height).max(1);
    let scaled = |length: u32| {
        let exact = u64::from(length) * u64::from(side) / u64::from(greater);
        (exact as u32).clamp(1, side)
    };
    let filter = if greater <= PIXEL_ART_SIDE && side >= greater {
        imageops::FilterType::Nearest
    } else {
        imageops::FilterType::CatmullRom
    };
    let small = imageops::resize(image, scaled(width), scaled(height), filter);
    let mut square = RgbaImage::new(side, side);
    let left = i64::from((side - small.width()) / 2);
    let top = i64::from((side - small.height()) / 2);
    imageops::replace(&mut square, &small, left, top);
    square
}
