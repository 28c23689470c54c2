//! Ink says what a colour is for; a palette turns it into a colour at painting time.

/// What a colour is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Ink {
    /// The ground that everything lies on; also inside open rings.
    Ground,
    /// Text.
    Text,
    /// Text that is not read first: numbers on axes, headings of columns.
    QuietText,
    /// A text in the colour of a series.
    SeriesText(u8),
    /// A text about what was chosen.
    ChosenText,
    /// A text about what is weak or doubtful.
    CautionText,
    /// The lines of the grid.
    Grid,
    /// The line on which bars stand; ticks.
    Axis,
    /// The unused length of a bar.
    Track,
    /// The nth series, counted from 0; the first is the accent.
    Series(u8),
    /// The same, held back.
    SeriesPale(u8),
    /// The band around a series: see-through.
    SeriesBand(u8),
    /// One dot of many of a series: see-through.
    SeriesDot(u8),
    /// What was chosen.
    Chosen,
    /// A band around what was chosen: see-through.
    ChosenBand,
    /// One dot of many that were chosen: see-through.
    ChosenDot,
    /// What is weak or doubtful.
    Caution,
    /// Present, but not looked at.
    Quiet,
    /// A bar of the same: paler, because it covers more.
    QuietBar,
    /// A band of the same: see-through.
    QuietBand,
    /// A line to compare with.
    Reference,
    /// What the pointer or a choice made stand out.
    Highlight,
    /// A tile: −100 is the colour of what was chosen, 0 nearly the ground, 100 the accent.
    Heat(i8),
    /// A text on such a tile.
    HeatText(i8),
}

/// A colour: red, green and blue from 0 to 255, and how much covers what lies below, from 0 to 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Color {
    /// Red.
    pub red: u8,
    /// Green.
    pub green: u8,
    /// Blue.
    pub blue: u8,
    /// 1 covers all that lies below.
    pub opacity: f32,
}

/// The colours of one surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Palette {
    ground: Color,
    text: Color,
    quiet_text: Color,
    grid: Color,
    track: Color,
    axis: Color,
    quiet: Color,
    chosen: Color,
    caution: Color,
    series: [Color; SERIES],
    series_text: [Color; SERIES],
    /// How much of a pale colour is the colour itself.
    pale: f32,
    /// How much a band covers.
    band: f32,
}

/// How many series have colours of their own; further ones begin anew.
pub const SERIES: usize = 7;

/// The least contrast of a text: Web Content Accessibility Guidelines 2.1, level AA.
const READABLE: f64 = 4.5;

/// How much one dot of many covers.
const DOT: f32 = 0.62;

/// The first series is the accent. The others are the hues of Okabe and Ito (2008), "Color
/// universal design": reddish purple, sky blue, orange, bluish green, vermilion, blue; darkened
/// on a light ground as far as a contrast of 3:1 asks, 4.5:1 for text.
const LIGHT_SERIES: [Color; SERIES] = [
    rgb(0x0F_5E_6B),
    rgb(0xB8_60_92),
    rgb(0x2F_8F_C8),
    rgb(0xB9_7A_00),
    rgb(0x00_8F_68),
    rgb(0xD0_5A_00),
    rgb(0x00_72_B2),
];

const LIGHT_SERIES_TEXT: [Color; SERIES] = [
    rgb(0x0F_5E_6B),
    rgb(0xA0_49_7B),
    rgb(0x1F_70_A0),
    rgb(0x8A_5B_00),
    rgb(0x00_75_55),
    rgb(0xAD_4B_00),
    rgb(0x00_65_9E),
];

const DARK_SERIES: [Color; SERIES] = [
    rgb(0x5F_BE_CC),
    rgb(0xC9_68_9F),
    rgb(0x7F_A8_F0),
    rgb(0xE6_A8_2E),
    rgb(0x2F_B8_90),
    rgb(0xEE_83_3A),
    rgb(0x4A_9A_D4),
];

impl Palette {
    /// Dark ink on a light page.
    #[must_use]
    pub const fn light() -> Self {
        Self {
            ground: rgb(0xFB_FA_F6),
            text: rgb(0x1F_24_30),
            quiet_text: rgb(0x5B_62_70),
            grid: rgb(0xE6_E2_D8),
            track: rgb(0xE5_E1_D6),
            axis: rgb(0x8A_8F_99),
            quiet: rgb(0x8A_8F_99),
            chosen: rgb(0xB4_53_2A),
            caution: rgb(0xB7_79_1F),
            series: LIGHT_SERIES,
            series_text: LIGHT_SERIES_TEXT,
            pale: 0.30,
            band: 0.15,
        }
    }

    /// Light ink on a dark page.
    #[must_use]
    pub const fn dark() -> Self {
        Self {
            ground: rgb(0x16_19_1E),
            text: rgb(0xE8_E6_E0),
            quiet_text: rgb(0xA3_A9_B3),
            grid: rgb(0x2A_2F_36),
            track: rgb(0x2C_31_38),
            axis: rgb(0x74_7B_86),
            quiet: rgb(0x74_7B_86),
            chosen: rgb(0xE8_8B_60),
            caution: rgb(0xDB_A2_4A),
            series: DARK_SERIES,
            series_text: DARK_SERIES,
            pale: 0.38,
            band: 0.20,
        }
    }

    /// Ink on white paper: for files.
    #[must_use]
    pub const fn paper() -> Self {
        Self {
            ground: rgb(0xFF_FF_FF),
            grid: rgb(0xE8_E8_E8),
            track: rgb(0xE6_E6_E6),
            ..Self::light()
        }
    }

    /// The colour of an ink.
    #[must_use]
    pub fn color(&self, ink: Ink) -> Color {
        match ink {
            Ink::Ground => self.ground,
            Ink::Text | Ink::Highlight => self.text,
            Ink::QuietText => self.quiet_text,
            Ink::SeriesText(nth) => self.series_text[usize::from(nth) % SERIES],
            Ink::ChosenText => self.chosen_text(),
            Ink::CautionText => self.caution_text(),
            Ink::Grid => self.grid,
            Ink::Axis => self.axis,
            Ink::Track => self.track,
            Ink::Series(nth) => self.nth(nth),
            Ink::SeriesPale(nth) => self.ground.towards(self.nth(nth), self.pale),
            Ink::SeriesBand(nth) => self.nth(nth).with_opacity(self.band),
            Ink::SeriesDot(nth) => self.nth(nth).with_opacity(DOT),
            Ink::Chosen => self.chosen,
            Ink::ChosenBand => self.chosen.with_opacity(self.band),
            Ink::ChosenDot => self.chosen.with_opacity(DOT),
            Ink::Caution => self.caution,
            Ink::Quiet => self.quiet,
            Ink::QuietBar => self.ground.towards(self.quiet, 0.55),
            Ink::QuietBand => self.quiet.with_opacity(self.band + 0.05),
            Ink::Reference => self.quiet_text,
            Ink::Heat(level) => self.heat(level),
            Ink::HeatText(level) => self.heat_text(level),
        }
    }

    fn nth(&self, nth: u8) -> Color {
        self.series[usize::from(nth) % SERIES]
    }

    fn chosen_text(&self) -> Color {
        self.chosen
    }

    /// Caution is a colour for marks; as a text it is mixed with ink until it can be read.
    fn caution_text(&self) -> Color {
        self.caution.towards(self.text, 0.35)
    }

    fn heat(&self, level: i8) -> Color {
        let end = if level < 0 { self.chosen } else { self.nth(0) };
        // Even zero differs a little from the ground, so that a tile can be seen.
        self.track
            .towards(self.ground, 0.35)
            .towards(end, f32::from(level.unsigned_abs().min(100)) / 100.0)
    }

    /// Text or ground if either can be read on the tile, else black or white: one of them always
    /// can.
    fn heat_text(&self, level: i8) -> Color {
        let tile = self.heat(level);
        let [black, white] = [rgb(0x00_00_00), rgb(0xFF_FF_FF)];
        let last = if contrast(black, tile) >= contrast(white, tile) {
            black
        } else {
            white
        };
        [self.text, self.ground]
            .into_iter()
            .find(|color| contrast(*color, tile) >= READABLE)
            .unwrap_or(last)
    }
}

impl Color {
    /// The colour a share of the way to another one.
    fn towards(self, other: Self, share: f32) -> Self {
        let mix = |from: u8, to: u8| {
            (f32::from(from) + share * (f32::from(to) - f32::from(from))).round() as u8
        };
        Self {
            red: mix(self.red, other.red),
            green: mix(self.green, other.green),
            blue: mix(self.blue, other.blue),
            opacity: self.opacity,
        }
    }

    fn with_opacity(self, opacity: f32) -> Self {
        Self { opacity, ..self }
    }

    /// How the colour is written in SVG, without its opacity: `#0F5E6B`.
    #[must_use]
    pub fn hex(self) -> String {
        format!("#{:02X}{:02X}{:02X}", self.red, self.green, self.blue)
    }
}

const fn rgb(code: u32) -> Color {
    Color {
        red: (code >> 16) as u8,
        green: (code >> 8) as u8,
        blue: code as u8,
        opacity: 1.0,
    }
}

/// The contrast ratio of two opaque colours, from 1 to 21: Web Content Accessibility Guidelines
/// 2.1, "contrast ratio" and "relative luminance".
#[must_use]
pub fn contrast(one: Color, other: Color) -> f64 {
    let (one, other) = (luminance(one), luminance(other));
    (one.max(other) + 0.05) / (one.min(other) + 0.05)
}

fn luminance(color: Color) -> f64 {
    let linear = |channel: u8| {
        let share = f64::from(channel) / 255.0;
        if share <= 0.04045 {
            share / 12.92
        } else {
            ((share + 0.055) / 1.055).powf(2.4)
        }
    };
    0.2126 * linear(color.red) + 0.7152 * linear(color.green) + 0.0722 * linear(color.blue)
}

#[cfg(test)]
mod tests {
    use super::*;

    const PALETTES: [(&str, Palette); 3] = [
        ("light", Palette::light()),
        ("dark", Palette::dark()),
        ("paper", Palette::paper()),
    ];

    #[test]
    fn contrast_is_that_of_the_guidelines() {
        // Published examples: black on white 21:1, #767676 on white just above 4.5:1.
        assert!((contrast(rgb(0), rgb(0xFF_FF_FF)) - 21.0).abs() < 1e-9);
        let grey = contrast(rgb(0x76_76_76), rgb(0xFF_FF_FF));
        assert!((4.5..4.6).contains(&grey), "{grey}");
    }

    #[test]
    fn texts_can_be_read_on_every_ground() {
        for (name, palette) in PALETTES {
            let mut inks = vec![Ink::Text, Ink::QuietText, Ink::ChosenText, Ink::CautionText];
            inks.extend((0..SERIES as u8).map(Ink::SeriesText));
            for ink in inks {
                let ratio = contrast(palette.color(ink), palette.color(Ink::Ground));
                assert!(ratio >= READABLE, "{name} {ink:?} {ratio:.2}");
            }
        }
    }

    #[test]
    fn texts_can_be_read_on_every_tile() {
        for (name, palette) in PALETTES {
            for level in -100..=100 {
                let ratio = contrast(
                    palette.color(Ink::HeatText(level)),
                    palette.color(Ink::Heat(level)),
                );
                assert!(ratio >= READABLE, "{name} {level} {ratio:.2}");
            }
        }
    }

    #[test]
    fn marks_stand_out_from_every_ground() {
        for (name, palette) in PALETTES {
            let mut inks = vec![
                Ink::Chosen,
                Ink::Caution,
                Ink::Quiet,
                Ink::Axis,
                Ink::Reference,
                Ink::Highlight,
            ];
            inks.extend((0..SERIES as u8).map(Ink::Series));
            for ink in inks {
                let ratio = contrast(palette.color(ink), palette.color(Ink::Ground));
                assert!(ratio >= 3.0, "{name} {ink:?} {ratio:.2}");
            }
        }
    }

    /// Machado, Oliveira and Fernandes (2009), "A physiologically-based model for simulation of
    /// color vision deficiency", severity 1.0, on linear red, green and blue.
    const PROTAN: [[f64; 3]; 3] = [
        [0.152_286, 1.052_583, -0.204_868],
        [0.114_503, 0.786_281, 0.099_216],
        [-0.003_882, -0.048_116, 1.051_998],
    ];
    const DEUTAN: [[f64; 3]; 3] = [
        [0.367_322, 0.860_646, -0.227_968],
        [0.280_085, 0.672_501, 0.047_413],
        [-0.011_820, 0.042_940, 0.968_881],
    ];

    #[test]
    fn the_first_series_can_be_told_apart_by_the_color_blind() {
        for (name, palette) in PALETTES {
            for matrix in [PROTAN, DEUTAN] {
                for one in 0..4 {
                    for other in 0..one {
                        let seen = |nth| lab(palette.color(Ink::Series(nth)), &matrix);
                        let (a, b) = (seen(one), seen(other));
                        let distance = (0..3).map(|k| (a[k] - b[k]).powi(2)).sum::<f64>().sqrt();
                        assert!(distance > 12.0, "{name} {one} {other} {distance:.1}");
                    }
                }
            }
        }
    }

    /// CIE 1976 L*a*b* under D65 of a colour as it is seen through a matrix.
    fn lab(color: Color, matrix: &[[f64; 3]; 3]) -> [f64; 3] {
        let linear = [color.red, color.green, color.blue].map(|channel| {
            let share = f64::from(channel) / 255.0;
            if share <= 0.04045 {
                share / 12.92
            } else {
                ((share + 0.055) / 1.055).powf(2.4)
            }
        });
        let seen: Vec<f64> = matrix
            .iter()
            .map(|row| {
                (0..3)
                    .map(|k| row[k] * linear[k])
                    .sum::<f64>()
                    .clamp(0.0, 1.0)
            })
            .collect();
        let xyz = [
            (0.4124 * seen[0] + 0.3576 * seen[1] + 0.1805 * seen[2]) / 0.9505,
            0.2126 * seen[0] + 0.7152 * seen[1] + 0.0722 * seen[2],
            (0.0193 * seen[0] + 0.1192 * seen[1] + 0.9505 * seen[2]) / 1.089,
        ]
        .map(|t| {
            if t > 0.008_856 {
                t.cbrt()
            } else {
                7.787 * t + 16.0 / 116.0
            }
        });
        [
            116.0 * xyz[1] - 16.0,
            500.0 * (xyz[0] - xyz[1]),
            200.0 * (xyz[1] - xyz[2]),
        ]
    }
}
