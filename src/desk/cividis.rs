//! The colour map of the heat: dark blue to yellow, evenly stepped in lightness, read alike with and without colour-blindness.
//!
//! Cividis is published in J. R. Nuñez, C. R. Anderton and R. S. Renslow, "Optimizing colormaps with consideration for color
//! vision deficiency to enable accurate interpretation of scientific data", PLoS ONE 13(7), e0199239, 2018. Here it is
//! approximated by ten evenly spaced anchors with straight lines between them.

use egui::Color32;

const ANCHORS: [[u8; 3]; 10] = [
    [0x00, 0x22, 0x4e],
    [0x12, 0x35, 0x70],
    [0x3b, 0x49, 0x6c],
    [0x57, 0x5d, 0x6d],
    [0x70, 0x71, 0x73],
    [0x8a, 0x86, 0x78],
    [0xa5, 0x9c, 0x74],
    [0xc3, 0xb3, 0x69],
    [0xe1, 0xcc, 0x55],
    [0xfe, 0xe8, 0x38],
];

/// The colour at `share`, from 0 (least) to 1 (most); values outside are brought to the nearer end.
pub fn cividis(share: f32) -> Color32 {
    let share = if share.is_nan() {
        0.0
    } else {
        share.clamp(0.0, 1.0)
    };
    let place = share * (ANCHORS.len() - 1) as f32;
    let below = (place as usize).min(ANCHORS.len() - 2);
    let rest = place - below as f32;
    let mix = |channel: usize| {
        let (from, to) = (ANCHORS[below][channel], ANCHORS[below + 1][channel]);
        (f32::from(from) + (f32::from(to) - f32::from(from)) * rest).round() as u8
    };
    Color32::from_rgb(mix(0), mix(1), mix(2))
}

/// Where a count stands between none and the greatest, on a scale of logarithms: searches visit some tiles a thousand times
/// as often as others, and a straight scale would show those alone.
pub fn heat_share(count: u64, greatest: u64) -> f32 {
    if count == 0 || greatest == 0 {
        return 0.0;
    }
    ((count as f64).ln_1p() / (greatest as f64).ln_1p()) as f32
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_ends_are_the_published_ones() {
        let check = |share: f32, expected: [u8; 3]| {
            let [r, g, b] = expected;
            assert_eq!(cividis(share), Color32::from_rgb(r, g, b));
        };
        check(0.0, [0x00, 0x22, 0x4e]);
        check(1.0, [0xfe, 0xe8, 0x38]);
        check(-3.0, [0x00, 0x22, 0x4e]);
        check(7.0, [0xfe, 0xe8, 0x38]);
        check(f32::NAN, [0x00, 0x22, 0x4e]);
    }

    #[test]
    fn lightness_grows_all_the_way() {
        let light = |share: f32| {
            let colour = cividis(share);
            0.2126 * f32::from(colour.r())
                + 0.7152 * f32::from(colour.g())
                + 0.0722 * f32::from(colour.b())
        };
        for step in 0..100 {
            let share = step as f32 / 100.0;
            assert!(light(share) < light(share + 0.01), "at {share}");
        }
    }

    #[test]
    fn more_visits_are_never_shown_cooler() {
        assert_eq!(heat_share(0, 1_000), 0.0);
        assert_eq!(heat_share(1_000, 1_000), 1.0);
        assert_eq!(heat_share(5, 0), 0.0);
        assert!(heat_share(10, 1_000) < heat_share(11, 1_000));
    }
}
