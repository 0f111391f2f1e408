//! Colours, sizes and distances of the window, by night and by day.
//!
//! The tokens are few and have fixed meanings, so that a colour can be read: amber marks the walker, the selection and the
//! present moment; leaf what is good; coral what is lost; sky the commitments. Nothing is told by colour alone: wherever a
//! token carries a meaning, a shape or a word beside it carries the same one. `tests/contrast.rs` computes the contrast of
//! every pair in use after WCAG 2.2 and holds text to 4.5 and graphics to 3.0.

use egui::style::{HandleShape, ScrollStyle, Selection, WidgetVisuals, Widgets};
use egui::{
    Color32, Context, CornerRadius, FontFamily, FontId, Margin, Shadow, Stroke, Style, TextStyle,
    ThemePreference, Visuals, vec2,
};

/// The colour tokens of one theme.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Theme {
    /// Whether this is the theme for the night.
    pub dark: bool,
    /// Behind the board.
    pub ground: Color32,
    /// Behind tray, trail, findings and shelf.
    pub panel: Color32,
    /// Cards and buttons.
    pub raised: Color32,
    /// A card or button under the pointer.
    pub hover: Color32,
    /// Behind what is selected.
    pub chosen: Color32,
    /// Outlines and rules.
    pub line: Color32,
    /// Text to be read first.
    pub text: Color32,
    /// Text to be read second.
    pub muted: Color32,
    /// The walker, the selection, the present moment.
    pub amber: Color32,
    /// What is good.
    pub leaf: Color32,
    /// What is lost.
    pub coral: Color32,
    /// Commitments.
    pub sky: Color32,
}

const fn rgb(code: u32) -> Color32 {
    Color32::from_rgb((code >> 16) as u8, (code >> 8) as u8, code as u8)
}

impl Theme {
    /// The greenhouse at night.
    pub const DARK: Theme = Theme {
        dark: true,
        ground: rgb(0x121c19),
        panel: rgb(0x192622),
        raised: rgb(0x21332d),
        hover: rgb(0x2b423a),
        chosen: rgb(0x40361b),
        line: rgb(0x608174),
        text: rgb(0xe8f0eb),
        muted: rgb(0x9fb5ab),
        amber: rgb(0xf2b84b),
        leaf: rgb(0x7ccf8f),
        coral: rgb(0xf2806c),
        sky: rgb(0x7fb7e6),
    };

    /// The greenhouse by day.
    pub const LIGHT: Theme = Theme {
        dark: false,
        ground: rgb(0xeef2ec),
        panel: rgb(0xf7f9f5),
        raised: rgb(0xffffff),
        hover: rgb(0xe8efe9),
        chosen: rgb(0xfbeed6),
        line: rgb(0x7a8e83),
        text: rgb(0x17241f),
        muted: rgb(0x4d6258),
        amber: rgb(0x8f5b00),
        leaf: rgb(0x1f7a3d),
        coral: rgb(0xb3372a),
        sky: rgb(0x1c64a0),
    };

    /// The tokens that a part of the window is drawn with.
    pub fn of(ui: &egui::Ui) -> &'static Theme {
        Theme::for_dark(ui.visuals().dark_mode)
    }

    /// The tokens by night or by day.
    pub const fn for_dark(dark: bool) -> &'static Theme {
        if dark { &Theme::DARK } else { &Theme::LIGHT }
    }

    /// A hairline between areas; it separates and means nothing, so it may be faint.
    pub fn hairline(&self) -> Stroke {
        Stroke::new(1.0, self.panel.lerp_to_gamma(self.line, 0.4))
    }

    /// An outline that can be relied on to be seen.
    pub fn outline(&self) -> Stroke {
        Stroke::new(1.0, self.line)
    }

    /// The frame of a card in findings and shelf.
    pub fn card(&self) -> egui::Frame {
        egui::Frame::new()
            .fill(self.raised)
            .corner_radius(CARD_RADIUS)
            .inner_margin(Margin::symmetric(12, 10))
            .stroke(self.hairline())
    }

    /// What egui needs to know of the theme.
    pub fn style(&self) -> Style {
        let mut style = Style {
            visuals: self.visuals(),
            text_styles: text_styles(),
            animation_time: 0.12,
            ..Style::default()
        };
        style.spacing.item_spacing = vec2(8.0, 6.0);
        style.spacing.button_padding = vec2(9.0, 4.0);
        style.spacing.interact_size = vec2(40.0, WIDGET_HEIGHT);
        style.spacing.icon_width = 16.0;
        style.spacing.icon_width_inner = 10.0;
        style.spacing.icon_spacing = 6.0;
        style.spacing.slider_rail_height = 5.0;
        style.spacing.tooltip_width = 340.0;
        style.spacing.window_margin = Margin::same(14);
        style.spacing.menu_margin = Margin::same(6);
        style.spacing.scroll = ScrollStyle::thin();
        style.interaction.selectable_labels = false;
        style.interaction.tooltip_delay = 0.35;
        style
    }

    fn visuals(&self) -> Visuals {
        let base = if self.dark {
            Visuals::dark()
        } else {
            Visuals::light()
        };
        Visuals {
            widgets: self.widgets(),
            selection: Selection {
                bg_fill: self.chosen,
                stroke: Stroke::new(1.5, self.amber),
            },
            weak_text_color: Some(self.muted),
            hyperlink_color: self.sky,
            faint_bg_color: self.raised,
            extreme_bg_color: self.ground,
            text_edit_bg_color: Some(self.ground),
            code_bg_color: self.ground,
            warn_fg_color: self.amber,
            error_fg_color: self.coral,
            window_fill: self.raised,
            window_stroke: self.outline(),
            window_corner_radius: CornerRadius::same(10),
            menu_corner_radius: CornerRadius::same(8),
            panel_fill: self.panel,
            popup_shadow: self.shadow(),
            window_shadow: self.shadow(),
            slider_trailing_fill: false,
            handle_shape: HandleShape::Circle,
            disabled_alpha: 0.55,
            ..base
        }
    }

    fn shadow(&self) -> Shadow {
        Shadow {
            offset: [0, 4],
            blur: 14,
            spread: 0,
            color: Color32::from_black_alpha(if self.dark { 110 } else { 40 }),
        }
    }

    fn widgets(&self) -> Widgets {
        let widget = |fill: Color32, edge: Stroke, text: Color32, weight: f32| WidgetVisuals {
            bg_fill: fill,
            weak_bg_fill: fill,
            bg_stroke: edge,
            corner_radius: CornerRadius::same(6),
            fg_stroke: Stroke::new(weight, text),
            expansion: 0.0,
        };
        let focus = Stroke::new(2.0, self.amber);
        Widgets {
            noninteractive: widget(self.panel, self.hairline(), self.text, 1.0),
            inactive: widget(self.raised, self.outline(), self.text, 1.2),
            hovered: widget(self.hover, Stroke::new(1.0, self.muted), self.text, 1.5),
            active: widget(self.hover, focus, self.text, 1.8),
            open: widget(self.hover, Stroke::new(1.0, self.amber), self.text, 1.2),
        }
    }
}

/// Least height of anything that can be clicked, in points.
pub const WIDGET_HEIGHT: f32 = 24.0;

/// Corner radius of cards, in points.
pub const CARD_RADIUS: u8 = 9;

fn text_styles() -> std::collections::BTreeMap<TextStyle, FontId> {
    let sans = |size| FontId::new(size, FontFamily::Proportional);
    [
        (TextStyle::Small, sans(11.5)),
        (TextStyle::Body, sans(13.5)),
        (TextStyle::Button, sans(13.5)),
        (TextStyle::Heading, sans(17.0)),
        (
            TextStyle::Monospace,
            FontId::new(13.0, FontFamily::Monospace),
        ),
    ]
    .into()
}

/// Gives both themes to egui and chooses: the system's wish, or one that the designer prefers.
pub fn install(ctx: &Context, preference: ThemePreference) {
    ctx.set_style_of(egui::Theme::Dark, Theme::DARK.style());
    ctx.set_style_of(egui::Theme::Light, Theme::LIGHT.style());
    ctx.set_theme(preference);
}

/// A heading of a part of the window, small and quiet.
pub fn section(ui: &mut egui::Ui, title: &str) -> egui::Response {
    let theme = Theme::of(ui);
    ui.label(
        egui::RichText::new(title.to_uppercase())
            .small()
            .color(theme.muted),
    )
}

/// A whole number with thin spaces between thousands, as in "212 480".
pub fn grouped(number: u64) -> String {
    let digits = number.to_string();
    let mut text = String::with_capacity(digits.len() + digits.len() / 3 * 3);
    for (at, digit) in digits.chars().enumerate() {
        if at > 0 && (digits.len() - at).is_multiple_of(3) {
            text.push('\u{2009}');
        }
        text.push(digit);
    }
    text
}

/// A count with its noun, as in "1 step" and "212 480 steps".
pub fn counted(number: u64, one: &str, many: &str) -> String {
    format!(
        "{} {}",
        grouped(number),
        if number == 1 { one } else { many }
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn thousands_are_set_apart_by_thin_spaces() {
        let check = |number: u64, expected: &str| {
            assert_eq!(grouped(number).replace('\u{2009}', "_"), expected);
        };
        check(0, "0");
        check(999, "999");
        check(1_000, "1_000");
        check(212_480, "212_480");
        check(u64::MAX, "18_446_744_073_709_551_615");
    }

    #[test]
    fn a_single_thing_is_counted_in_the_singular() {
        assert_eq!(counted(1, "step", "steps"), "1 step");
        assert_eq!(counted(0, "step", "steps"), "0 steps");
    }
}
