//! Fields in which something is typed.

use crate::app::theme;
use crate::app::theme::space;
use iced::widget::{scrollable, text_editor, text_input};
use iced::{Background, Border, Color, Theme};

/// A line in which something is typed.
#[must_use]
pub fn line(theme: &Theme, status: text_input::Status) -> text_input::Style {
    let colors = theme::colors(theme);
    let is_focused = matches!(status, text_input::Status::Focused { .. });
    text_input::Style {
        background: Background::Color(colors.sheet),
        border: border(theme, is_focused),
        icon: colors.quiet,
        placeholder: colors.quiet,
        value: colors.ink,
        selection: colors.selected,
    }
}

/// Several lines in which something is typed.
#[must_use]
pub fn editor(theme: &Theme, status: text_editor::Status) -> text_editor::Style {
    let colors = theme::colors(theme);
    let is_focused = matches!(status, text_editor::Status::Focused { .. });
    text_editor::Style {
        background: Background::Color(colors.sheet),
        border: border(theme, is_focused),
        placeholder: colors.quiet,
        value: colors.ink,
        selection: colors.selected,
    }
}

fn border(theme: &Theme, is_focused: bool) -> Border {
    let colors = theme::colors(theme);
    Border {
        color: if is_focused {
            colors.accent
        } else {
            colors.hairline
        },
        width: if is_focused { space::BAR } else { space::HAIR },
        radius: space::CORNER.into(),
    }
}

/// A list that scrolls by itself.
#[must_use]
pub fn scroller(theme: &Theme, status: scrollable::Status) -> scrollable::Style {
    let colors = theme::colors(theme);
    let mut style = scrollable::default(theme, status);
    let rail = scrollable::Rail {
        background: None,
        border: Border::default(),
        scroller: scrollable::Scroller {
            background: Background::Color(colors.hairline),
            border: Border {
                color: Color::TRANSPARENT,
                width: 0.0,
                radius: space::CORNER.into(),
            },
        },
    };
    style.vertical_rail = rail;
    style.horizontal_rail = rail;
    style
}

/// A narrow bar for such a list.
#[must_use]
pub fn narrow() -> scrollable::Direction {
    let bar = scrollable::Scrollbar::new()
        .width(space::TIGHT + space::AIR)
        .scroller_width(space::TIGHT + space::AIR)
        .spacing(space::TIGHT);
    scrollable::Direction::Vertical(bar)
}
