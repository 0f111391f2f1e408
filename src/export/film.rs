//! A route as a film.

use super::canvas::Stamps;
use super::scene::{Pictures, Scene};
use image::codecs::gif::{GifEncoder, Repeat};
use image::{Delay, Frame};
use thiserror::Error;

/// The most pixels of all frames together.
const MOST_PIXELS: u64 = 1_000_000_000;

/// How the encoder trades quality of colours for speed, from 1 (best) to 30.
const ENCODER_SPEED: i32 = 10;

/// How long frames stand.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Timing {
    /// Each step, in milliseconds.
    pub step_ms: u32,
    /// The first and the last frame, in milliseconds.
    pub rest_ms: u32,
}

/// Why there is no film.
#[derive(Debug, Error)]
pub enum FilmError {
    /// The frames have too many pixels together.
    #[error("The film would be too large. Choose smaller cells.")]
    TooLarge,
    /// A film has at least one frame.
    #[error("There is nothing to show.")]
    Empty,
    /// The encoder failed.
    #[error("The film can't be made: {0}.")]
    Encoder(#[from] image::ImageError),
}

/// Scenes one after the other, all of one size, as an endless GIF with cells of `side` pixels.
///
/// # Errors
/// If there is no scene, or the frames have more than 10^9 pixels together.
pub fn film_gif(
    scenes: &[Scene],
    pictures: &dyn Pictures,
    side: u32,
    timing: Timing,
) -> Result<Vec<u8>, FilmError> {
    let first = scenes.first().ok_or(FilmError::Empty)?;
    let frame_pixels = first.size.area() as u64 * u64::from(side) * u64::from(side);
    let width = first.size.width().max(first.size.height()) as u64 * u64::from(side);
    if frame_pixels.saturating_mul(scenes.len() as u64) > MOST_PIXELS || width > u64::from(u16::MAX)
    {
        return Err(FilmError::TooLarge);
    }
    let mut bytes = Vec::new();
    let mut encoder = GifEncoder::new_with_speed(&mut bytes, ENCODER_SPEED);
    encoder.set_repeat(Repeat::Infinite)?;
    let mut stamps = Stamps::new(pictures, side);
    for (at, scene) in scenes.iter().enumerate() {
        let rests = at == 0 || at + 1 == scenes.len();
        let milliseconds = if rests {
            timing.rest_ms
        } else {
            timing.step_ms
        };
        let delay = Delay::from_numer_denom_ms(milliseconds, 1);
        encoder.encode_frame(Frame::from_parts(stamps.draw(scene), 0, 0, delay))?;
    }
    drop(encoder);
    Ok(bytes)
}
