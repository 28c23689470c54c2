//! How things look: colours, distances, letters, by purpose.

pub mod button;
pub mod color;
pub mod container;
pub mod input;
pub mod space;
pub mod text;

use crate::app::theme::color::Colors;

/// Whether the page is light or dark.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Mode {
    /// Dark ink on a light page.
    #[default]
    Light,
    /// Light ink on a dark page.
    Dark,
}

impl Mode {
    /// The other one.
    #[must_use]
    pub const fn other(self) -> Self {
        match self {
            Self::Light => Self::Dark,
            Self::Dark => Self::Light,
        }
    }

    /// The colours of this mode.
    #[must_use]
    pub const fn colors(self) -> &'static Colors {
        match self {
            Self::Light => &color::LIGHT,
            Self::Dark => &color::DARK,
        }
    }

    /// The toolkit's theme with these colours; what it draws by itself comes from here.
    #[must_use]
    pub fn theme(self) -> iced::Theme {
        let colors = self.colors();
        let palette = iced::theme::Palette {
            background: colors.paper,
            text: colors.ink,
            primary: colors.accent,
            success: colors.accent,
            warning: colors.caution,
            danger: colors.stop,
        };
        let name = match self {
            Self::Light => "light",
            Self::Dark => "dark",
        };
        iced::Theme::custom(name.to_owned(), palette)
    }

    /// The mode of a toolkit theme that was made by [`Mode::theme`].
    #[must_use]
    pub fn of(theme: &iced::Theme) -> Self {
        if theme.extended_palette().is_dark {
            Self::Dark
        } else {
            Self::Light
        }
    }
}

/// The colours of a toolkit theme that was made by [`Mode::theme`].
#[must_use]
pub fn colors(theme: &iced::Theme) -> &'static Colors {
    Mode::of(theme).colors()
}
