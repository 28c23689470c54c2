//! What can be pressed, by purpose.

use crate::app::theme;
use iced::{Background, Color};

/// What a thing that can be pressed is for.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Look {
    /// Words in the head line and beside cells.
    #[default]
    Quiet,
    /// The word that is most likely wanted next.
    Main,
    /// Words in the accent colour: they change something.
    Accent,
    /// Stops or removes.
    Attention,
    /// A row of a list.
    Row,
    /// The row of a list that is in force.
    Chosen,
}

/// How a thing that can be pressed looks at the moment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Style {
    /// Its words.
    pub text: Color,
    /// What lies under them.
    pub ground: Option<Background>,
}

/// The style of a look.
#[must_use]
pub fn style(theme: &iced::Theme, look: Look, hover: Hover) -> Style {
    let colors = theme::colors(theme);
    let text = match look {
        Look::Quiet => colors.quiet,
        Look::Main | Look::Accent => colors.accent,
        Look::Attention => colors.attention,
        Look::Row | Look::Chosen => colors.ink,
    };
    let ground = match (hover, look) {
        (Hover::Over, _) => Some(colors.hover),
        (Hover::Away, Look::Chosen) => Some(colors.selected),
        (Hover::Away, Look::Quiet | Look::Main | Look::Accent | Look::Attention | Look::Row) => {
            None
        }
        (Hover::Off, _) => None,
    };
    Style {
        text: match hover {
            Hover::Off => Color {
                a: 0.45,
                ..colors.quiet
            },
            Hover::Over | Hover::Away => text,
        },
        ground: ground.map(Background::Color),
    }
}

/// Where the pointer is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Hover {
    /// Over the thing.
    Over,
    /// Elsewhere.
    Away,
    /// The thing cannot be pressed.
    Off,
}
