//! Every pair of colours in use can be told apart: relative luminance and contrast ratio after WCAG 2.2.
#![cfg(feature = "desk")]

use egui::Color32;
use foldwright::desk::theme::Theme;

/// Relative luminance of an opaque sRGB colour (WCAG 2.2, "relative luminance").
fn luminance(colour: Color32) -> f64 {
    let linear = |byte: u8| {
        let value = f64::from(byte) / 255.0;
        if value <= 0.04045 {
            value / 12.92
        } else {
            ((value + 0.055) / 1.055).powf(2.4)
        }
    };
    0.2126 * linear(colour.r()) + 0.7152 * linear(colour.g()) + 0.0722 * linear(colour.b())
}

fn contrast(one: Color32, other: Color32) -> f64 {
    let (a, b) = (luminance(one), luminance(other));
    (a.max(b) + 0.05) / (a.min(b) + 0.05)
}

type Named = (&'static str, Color32);

fn grounds(theme: &Theme) -> [Named; 3] {
    [
        ("ground", theme.ground),
        ("panel", theme.panel),
        ("raised", theme.raised),
    ]
}

fn texts(theme: &Theme) -> [Named; 6] {
    [
        ("text", theme.text),
        ("muted", theme.muted),
        ("amber", theme.amber),
        ("leaf", theme.leaf),
        ("coral", theme.coral),
        ("sky", theme.sky),
    ]
}

fn check(theme: &Theme, fronts: &[Named], backs: &[Named], least: f64) {
    for (front_name, front) in fronts {
        for (back_name, back) in backs {
            let ratio = contrast(*front, *back);
            assert!(
                ratio >= least,
                "{front_name} on {back_name} has {ratio:.2}, needs {least} (dark: {})",
                theme.dark
            );
        }
    }
}

const BOTH: [&Theme; 2] = [&Theme::DARK, &Theme::LIGHT];

#[test]
fn the_measure_itself_gives_the_published_extremes() {
    assert!((contrast(Color32::BLACK, Color32::WHITE) - 21.0).abs() < 1e-9);
    assert!((contrast(Color32::RED, Color32::RED) - 1.0).abs() < 1e-9);
    assert!((luminance(Color32::RED) - 0.2126).abs() < 1e-9);
}

#[test]
fn text_reads_on_every_background() {
    for theme in BOTH {
        check(theme, &texts(theme), &grounds(theme), 4.5);
    }
}

#[test]
fn outlines_are_seen_on_every_background() {
    for theme in BOTH {
        check(theme, &[("line", theme.line)], &grounds(theme), 3.0);
    }
}

#[test]
fn text_reads_on_what_is_hovered_and_selected() {
    for theme in BOTH {
        let reading = [("text", theme.text), ("muted", theme.muted)];
        check(theme, &reading, &[("hover", theme.hover)], 4.5);
        let chosen = [("text", theme.text), ("amber", theme.amber)];
        check(theme, &chosen, &[("chosen", theme.chosen)], 4.5);
    }
}

#[test]
fn what_egui_draws_by_itself_reads_too() {
    for theme in BOTH {
        let visuals = theme.style().visuals;
        let states = [
            ("noninteractive", visuals.widgets.noninteractive),
            ("inactive", visuals.widgets.inactive),
            ("hovered", visuals.widgets.hovered),
            ("active", visuals.widgets.active),
            ("open", visuals.widgets.open),
        ];
        for (name, state) in states {
            check(
                theme,
                &[(name, state.fg_stroke.color)],
                &[(name, state.bg_fill)],
                4.5,
            );
        }
        for (name, state) in &states[1..] {
            check(
                theme,
                &[(name, state.bg_stroke.color)],
                &[(name, state.bg_fill)],
                3.0,
            );
        }
        let selection = visuals.selection;
        check(
            theme,
            &[("selected text", selection.stroke.color)],
            &[("selection", selection.bg_fill)],
            4.5,
        );
        let own = [
            ("warning", visuals.warn_fg_color),
            ("error", visuals.error_fg_color),
            ("link", visuals.hyperlink_color),
        ];
        check(theme, &own, &grounds(theme), 4.5);
        check(
            theme,
            &[("weak", visuals.weak_text_color())],
            &grounds(theme),
            4.5,
        );
    }
}

#[test]
fn anything_that_is_clicked_is_at_least_24_points_high() {
    for theme in BOTH {
        assert!(theme.style().spacing.interact_size.y >= 24.0);
    }
}
