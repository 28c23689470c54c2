//! A bar that shows how far something is.

use crate::app::theme;
use crate::app::theme::space;
use crate::app::widget::Element;
use iced::widget::progress_bar;
use iced::{Background, Border, Length};

/// A bar filled to a share from 0 to 1.
pub fn bar<'a, M: 'a>(share: f32, length: impl Into<Length>) -> Element<'a, M> {
    progress_bar(0.0..=1.0, share)
        .length(length)
        .girth(space::PROGRESS)
        .style(|theme: &iced::Theme| {
            let colors = theme::colors(theme);
            progress_bar::Style {
                background: Background::Color(colors.track),
                bar: Background::Color(colors.accent),
                border: Border {
                    radius: space::AIR.into(),
                    ..Border::default()
                },
            }
        })
        .into()
}
