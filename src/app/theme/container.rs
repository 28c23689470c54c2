//! Grounds and rules, by purpose.

use crate::app::theme;
use crate::app::theme::space;
use crate::eval::caveat::Severity;
use iced::widget::{container, rule};
use iced::{Background, Border, Theme};

/// The whole window. It lays no ground: the window is cleared with the paper's colour before
/// anything is drawn, and a ground over all of it would be painted once more for every change.
#[must_use]
pub fn page(theme: &Theme) -> container::Style {
    let colors = theme::colors(theme);
    container::Style {
        text_color: Some(colors.ink),
        ..container::Style::default()
    }
}

/// An editor that opens in place.
#[must_use]
pub fn sheet(theme: &Theme) -> container::Style {
    let colors = theme::colors(theme);
    container::Style {
        background: Some(Background::Color(colors.sheet)),
        text_color: Some(colors.ink),
        border: Border {
            color: colors.hairline,
            width: space::HAIR,
            radius: space::CORNER.into(),
        },
        ..container::Style::default()
    }
}

/// What lies over the page while a dialog is open.
#[must_use]
pub fn veil(theme: &Theme) -> container::Style {
    container::Style {
        background: Some(Background::Color(theme::colors(theme).veil)),
        ..container::Style::default()
    }
}

/// The bar beside a caveat.
pub fn severity(severity: Severity) -> impl Fn(&Theme) -> container::Style {
    move |theme| {
        let colors = theme::colors(theme);
        let color = match severity {
            Severity::Note => colors.note,
            Severity::Caution => colors.caution,
            Severity::Stop => colors.stop,
        };
        container::Style {
            background: Some(Background::Color(color)),
            ..container::Style::default()
        }
    }
}

/// The bar beside what is being edited.
#[must_use]
pub fn accent(theme: &Theme) -> container::Style {
    container::Style {
        background: Some(Background::Color(theme::colors(theme).accent)),
        ..container::Style::default()
    }
}

/// A dashed-out piece of prose that names no fact.
#[must_use]
pub fn marked(theme: &Theme) -> container::Style {
    let colors = theme::colors(theme);
    container::Style {
        border: Border {
            color: colors.attention,
            width: space::HAIR,
            radius: space::CORNER.into(),
        },
        ..container::Style::default()
    }
}

/// A rule between things.
#[must_use]
pub fn hairline(theme: &Theme) -> rule::Style {
    rule::Style {
        color: theme::colors(theme).hairline,
        radius: 0.0.into(),
        fill_mode: rule::FillMode::Full,
        snap: true,
    }
}

/// The bar beside a quotation.
#[must_use]
pub fn rule_like(theme: &Theme) -> container::Style {
    container::Style {
        background: Some(Background::Color(theme::colors(theme).hairline)),
        ..container::Style::default()
    }
}
