//! Scenes as SVG.

use super::scene::{Kind, Pictures, Scene, mean_colour};
use crate::level::Dir;
use std::collections::BTreeMap;
use std::fmt::Write;

/// Side of a cell, in units of the drawing.
const SIDE: usize = 64;

/// A scene as one SVG document that needs nothing beside it. Each kind's picture is in it once, as an image, so that the
/// names inside one picture can't meet those of another.
pub fn scene_svg(scene: &Scene, pictures: &dyn Pictures, title: &str) -> String {
    let (width, height) = (scene.size.width() * SIDE, scene.size.height() * SIDE);
    let mut out = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {width} {height}\" width=\"{width}\" height=\"{height}\">\n<title>{}</title>\n<defs>\n",
        escaped(title)
    );
    let tiles = scene.tiles();
    let mut names: BTreeMap<Kind, String> = BTreeMap::new();
    for (kind, _) in &tiles {
        let name = format!("k{}", names.len());
        names.entry(*kind).or_insert(name);
    }
    for (kind, name) in &names {
        let file = pictures.file(*kind);
        let turn = match file.quarter_turns % 4 {
            0 => String::new(),
            turns => format!(" transform=\"rotate({} 32 32)\"", 90 * u32::from(turns)),
        };
        let _ = writeln!(
            out,
            "<image id=\"{name}\" width=\"{SIDE}\" height=\"{SIDE}\"{turn} href=\"data:{};base64,{}\"/>",
            file.mime,
            base64(&file.bytes)
        );
    }
    let _ = writeln!(
        out,
        "</defs>\n<rect width=\"{width}\" height=\"{height}\" fill=\"#121c19\"/>"
    );
    let mut joints = joints(scene, pictures);
    for (kind, cell) in &tiles {
        if matches!(kind, Kind::Body(_)) {
            // All joints go under all bodies, and over everything else.
            out.push_str(&std::mem::take(&mut joints));
        }
        let (x, y) = (usize::from(cell.x) * SIDE, usize::from(cell.y) * SIDE);
        let _ = writeln!(out, "<use href=\"#{}\" x=\"{x}\" y=\"{y}\"/>", names[kind]);
    }
    out.push_str("</svg>\n");
    out
}

fn joints(scene: &Scene, pictures: &dyn Pictures) -> String {
    let mut out = String::new();
    for (kind, cell, dir) in scene.joints() {
        let [red, green, blue] = mean_colour(&pictures.pixels(kind, 16));
        let (x, y) = (
            usize::from(cell.x) * SIDE + 13,
            usize::from(cell.y) * SIDE + 13,
        );
        let (width, height) = if dir == Dir::E { (102, 38) } else { (38, 102) };
        let _ = writeln!(
            out,
            "<rect x=\"{x}\" y=\"{y}\" width=\"{width}\" height=\"{height}\" fill=\"#{red:02x}{green:02x}{blue:02x}\"/>"
        );
    }
    out
}

fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            // XML has no way to write most control characters.
            c if c.is_control() || matches!(c, '\u{fffe}' | '\u{ffff}') => out.push(' '),
            c => out.push(c),
        }
    }
    out
}

/// Base 64 (RFC 4648), padded.
fn base64(bytes: &[u8]) -> String {
    const LETTERS: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut out = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for chunk in bytes.chunks(3) {
        let byte = |at: usize| u32::from(chunk.get(at).copied().unwrap_or(0));
        let bits = byte(0) << 16 | byte(1) << 8 | byte(2);
        for place in 0..4 {
            let letter = LETTERS[(bits >> (18 - 6 * place) & 63) as usize];
            out.push(if place <= chunk.len() {
                char::from(letter)
            } else {
                '='
            });
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn base_64_is_as_in_rfc_4648() {
        for (text, expected) in [
            ("", ""),
            ("f", "Zg=="),
            ("fo", "Zm8="),
            ("foo", "Zm9v"),
            ("foob", "Zm9vYg=="),
            ("fooba", "Zm9vYmE="),
            ("foobar", "Zm9vYmFy"),
        ] {
            assert_eq!(base64(text.as_bytes()), expected);
        }
    }

    #[test]
    fn titles_can_hold_anything() {
        assert_eq!(escaped("a<b>&\u{0}\"c"), "a&lt;b&gt;&amp; \"c");
    }
}
