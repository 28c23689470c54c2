//! Widgets of our own, and functions that set the toolkit's widgets our way.

pub mod focus;
pub mod grid;
pub mod inert;
pub mod layer;
pub mod list;
pub mod picture;
pub mod press;
pub mod progress;
pub mod rail;
pub mod sentence;

/// An element of the window.
pub type Element<'a, M> = iced::Element<'a, M, iced::Theme, iced::Renderer>;

#[cfg(test)]
mod tests;
