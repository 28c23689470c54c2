//! The bundled fonts.

/// One of the bundled fonts. Nothing else is ever used, so that every machine shows the same.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Face {
    /// Figures, tables, controls.
    Sans,
    /// The same in semi-bold.
    SansStrong,
    /// Sentences and prose.
    Serif,
    /// The one plain sentence of an answer.
    SerifItalic,
    /// Titles and names of cells.
    SerifStrong,
    /// Signs that the other fonts lack.
    Symbols,
}

/// The family of the font whose letters keep their places; figures never use it.
pub const MONO_FAMILY: &str = "Noto Sans Mono";

/// The file of that font.
pub const MONO: &[u8] = include_bytes!("../../resources/fonts/NotoSansMono-Regular.ttf");

impl Face {
    /// All of them.
    pub const ALL: [Self; 6] = [
        Self::Sans,
        Self::SansStrong,
        Self::Serif,
        Self::SerifItalic,
        Self::SerifStrong,
        Self::Symbols,
    ];

    /// The font's file.
    #[must_use]
    pub fn bytes(self) -> &'static [u8] {
        match self {
            Self::Sans => include_bytes!("../../resources/fonts/NotoSans-Regular.ttf"),
            Self::SansStrong => include_bytes!("../../resources/fonts/NotoSans-SemiBold.ttf"),
            Self::Serif => include_bytes!("../../resources/fonts/NotoSerif-Regular.ttf"),
            Self::SerifItalic => include_bytes!("../../resources/fonts/NotoSerif-Italic.ttf"),
            Self::SerifStrong => include_bytes!("../../resources/fonts/NotoSerif-SemiBold.ttf"),
            Self::Symbols => include_bytes!("../../resources/fonts/DejaVuSans.ttf"),
        }
    }

    /// The name of its family.
    #[must_use]
    pub fn family(self) -> &'static str {
        match self {
            Self::Sans | Self::SansStrong => "Noto Sans",
            Self::Serif | Self::SerifItalic | Self::SerifStrong => "Noto Serif",
            Self::Symbols => "DejaVu Sans",
        }
    }

    /// Its weight, from 100 to 900.
    #[must_use]
    pub fn weight(self) -> u16 {
        match self {
            Self::Sans | Self::Serif | Self::SerifItalic | Self::Symbols => 400,
            Self::SansStrong | Self::SerifStrong => 600,
        }
    }

    /// Whether it is slanted.
    #[must_use]
    pub fn is_italic(self) -> bool {
        self == Self::SerifItalic
    }

    /// From the top of the font's own line to its baseline, in em: where a program that places
    /// text by the top of its line has to begin (the `hhea` table).
    #[must_use]
    pub fn line_ascent(self) -> f64 {
        match self {
            Self::Sans | Self::SansStrong | Self::Serif | Self::SerifItalic | Self::SerifStrong => {
                1.069
            }
            Self::Symbols => 0.928,
        }
    }

    /// From the baseline to the bottom of the font's own line, in em.
    #[must_use]
    pub fn line_descent(self) -> f64 {
        match self {
            Self::Sans | Self::SansStrong | Self::Serif | Self::SerifItalic | Self::SerifStrong => {
                0.293
            }
            Self::Symbols => 0.236,
        }
    }

    /// How far its letters reach above the baseline, in em: what accented capitals need.
    #[must_use]
    pub fn ascent(self) -> f64 {
        0.93
    }

    /// How far its letters reach below the baseline, in em.
    #[must_use]
    pub fn descent(self) -> f64 {
        0.25
    }
}
