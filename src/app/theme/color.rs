//! Colours by purpose, for a light and for a dark page.

use crate::figure::ink::{self, Palette};
use iced::Color;

/// The colours of one page.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Colors {
    /// The ground that everything lies on.
    pub paper: Color,
    /// The ground of what is laid over the page: editors, dialogs.
    pub sheet: Color,
    /// Text that is read first.
    pub ink: Color,
    /// Text that is read second.
    pub quiet: Color,
    /// Rules between things.
    pub hairline: Color,
    /// The unused length of a bar.
    pub track: Color,
    /// Editable, current, first.
    pub accent: Color,
    /// What was chosen; stop.
    pub attention: Color,
    /// The bar of a caution.
    pub caution: Color,
    /// The bar of a note.
    pub note: Color,
    /// The bar of a stop, and its words.
    pub stop: Color,
    /// The ground under the pointer.
    pub hover: Color,
    /// The ground of what is selected.
    pub selected: Color,
    /// What is shown of the page behind a dialog.
    pub veil: Color,
    /// The inks of figures.
    pub palette: Palette,
}

const fn rgb(code: u32) -> Color {
    Color::from_rgb8((code >> 16) as u8, (code >> 8) as u8, code as u8)
}

const fn with_alpha(color: Color, alpha: f32) -> Color {
    Color { a: alpha, ..color }
}

/// Dark ink on a light page.
pub const LIGHT: Colors = Colors {
    paper: rgb(0xFB_FA_F6),
    sheet: rgb(0xFF_FF_FF),
    ink: rgb(0x1F_24_30),
    quiet: rgb(0x5B_62_70),
    hairline: rgb(0xDA_D6_CB),
    track: rgb(0xE5_E1_D6),
    accent: rgb(0x0F_5E_6B),
    attention: rgb(0xB4_53_2A),
    caution: rgb(0xB7_79_1F),
    note: rgb(0x5B_6E_84),
    stop: rgb(0xA3_3A_2B),
    hover: with_alpha(rgb(0x0F_5E_6B), 0.09),
    selected: with_alpha(rgb(0x0F_5E_6B), 0.16),
    veil: with_alpha(rgb(0xFB_FA_F6), 0.82),
    palette: Palette::light(),
};

/// Light ink on a dark page.
pub const DARK: Colors = Colors {
    paper: rgb(0x16_19_1E),
    sheet: rgb(0x1E_22_29),
    ink: rgb(0xE8_E6_E0),
    quiet: rgb(0xA3_A9_B3),
    hairline: rgb(0x33_39_42),
    track: rgb(0x2C_31_38),
    accent: rgb(0x5F_BE_CC),
    attention: rgb(0xE8_8B_60),
    caution: rgb(0xDB_A2_4A),
    note: rgb(0x8F_A3_BA),
    stop: rgb(0xEE_86_78),
    hover: with_alpha(rgb(0x5F_BE_CC), 0.13),
    selected: with_alpha(rgb(0x5F_BE_CC), 0.22),
    veil: with_alpha(rgb(0x16_19_1E), 0.82),
    palette: Palette::dark(),
};

impl Colors {
    /// The colour of an ink of a figure.
    #[must_use]
    pub fn ink(&self, ink: ink::Ink) -> Color {
        let color = self.palette.color(ink);
        Color::from_rgba8(color.red, color.green, color.blue, color.opacity)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Relative luminance and contrast ratio of the Web Content Accessibility Guidelines 2.1.
    fn luminance(color: Color) -> f64 {
        let linear = |share: f32| {
            let share = f64::from(share);
            if share <= 0.04045 {
                share / 12.92
            } else {
                ((share + 0.055) / 1.055).powf(2.4)
            }
        };
        0.2126 * linear(color.r) + 0.7152 * linear(color.g) + 0.0722 * linear(color.b)
    }

    fn contrast(one: Color, other: Color) -> f64 {
        let (one, other) = (luminance(one), luminance(other));
        (one.max(other) + 0.05) / (one.min(other) + 0.05)
    }

    /// A see-through colour over a ground.
    fn over(top: Color, ground: Color) -> Color {
        let mix = |top_part: f32, ground_part: f32| top_part * top.a + ground_part * (1.0 - top.a);
        Color::from_rgb(
            mix(top.r, ground.r),
            mix(top.g, ground.g),
            mix(top.b, ground.b),
        )
    }

    #[test]
    fn every_text_can_be_read_on_every_ground_it_stands_on() {
        for colors in [LIGHT, DARK] {
            let grounds = [
                colors.paper,
                colors.sheet,
                over(colors.hover, colors.paper),
                over(colors.selected, colors.paper),
            ];
            for ground in grounds {
                let texts = [colors.ink, colors.quiet, colors.accent, colors.stop];
                for text in texts {
                    let ratio = contrast(text, ground);
                    assert!(ratio >= 4.5, "{text:?} on {ground:?}: {ratio:.2}");
                }
            }
            let ratio = contrast(colors.attention, colors.paper);
            assert!(ratio >= 4.5, "attention on paper: {ratio:.2}");
        }
    }

    #[test]
    fn every_mark_stands_out_from_the_page() {
        for colors in [LIGHT, DARK] {
            let marks = [
                colors.accent,
                colors.attention,
                colors.caution,
                colors.note,
                colors.stop,
            ];
            for mark in marks {
                let ratio = contrast(mark, colors.paper);
                assert!(ratio >= 3.0, "{mark:?}: {ratio:.2}");
            }
        }
    }

    #[test]
    fn page_and_figures_share_their_ground_and_ink() {
        for colors in [LIGHT, DARK] {
            assert_eq!(colors.ink(ink::Ink::Ground), colors.paper);
            assert_eq!(colors.ink(ink::Ink::Text), colors.ink);
            assert_eq!(colors.ink(ink::Ink::Series(0)), colors.accent);
            assert_eq!(colors.ink(ink::Ink::Chosen), colors.attention);
        }
    }
}
