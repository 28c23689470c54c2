//! Layers, and what the toolkit takes to have changed in them.
//!
//! The toolkit paints what changed between two frames. It compares layers by their order: those
//! with equal bounds item by item, and every item that moved becomes an area of its own to be
//! painted, each with all layers that touch it; a page that scrolls has a hundred of them. A
//! layer whose bounds differ is one area. So what moves as a whole gets bounds that differ by an
//! invisible amount whenever it moves, and things that come and go keep their layer, so that the
//! layers after them are compared with themselves.

use iced::advanced::renderer::Renderer as _;
use iced::{Point, Rectangle, Size};

/// The largest invisible amount by which the bounds of a layer differ.
const MOST: f32 = 0.05;
/// How many amounts there are: neighbours must differ in a number of a few thousand, which has
/// seven digits.
const STEPS: u64 = 199;

/// Two invisible amounts, other ones for another state of affairs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Nudge(Size);

impl Nudge {
    /// The largest amount, for what has to lie inside a layer in any case.
    pub const MOST: f32 = MOST;

    /// The amounts for a state of affairs.
    #[must_use]
    pub fn of(parts: &[u64]) -> Self {
        // Multiplication by an odd number with well-mixed bits (Knuth 1998, section 6.4).
        let mixed = parts.iter().fold(0_u64, |sum, part| {
            (sum ^ part)
                .wrapping_mul(0x9E37_79B9_7F4A_7C15)
                .rotate_left(29)
        });
        let amount = |of: u64| MOST * (of % STEPS + 1) as f32 / STEPS as f32;
        Self(Size::new(amount(mixed), amount(mixed / STEPS)))
    }

    /// An area that is smaller by the amounts.
    #[must_use]
    pub fn apply(self, area: Rectangle) -> Rectangle {
        Rectangle {
            width: (area.width - self.0.width).max(0.0),
            height: (area.height - self.0.height).max(0.0),
            ..area
        }
    }
}

/// Says that everything down to the lower right corner of an area is to be painted as one when
/// the amounts are not those of the frame before.
///
/// The area that is told lies around the upper left corner of the window: areas are taken in the
/// order of the distance of their middle from there, and each that lies in the one before is
/// taken in by it.
pub fn anew(renderer: &mut iced::Renderer, area: Rectangle, nudge: Nudge) {
    let corner = Point::new(area.x + area.width, area.y + area.height);
    let all = Rectangle::new(
        Point::new(-corner.x, -corner.y),
        Size::new(2.0 * corner.x, 2.0 * corner.y),
    );
    renderer.with_layer(nudge.apply(all), |_| {});
}

/// Draws in a layer that is always there; `None` is nowhere, and nothing is drawn.
///
/// A layer that came and went would shift all that follow, and they would be painted anew.
pub fn standing(
    renderer: &mut iced::Renderer,
    area: Option<Rectangle>,
    draw: impl FnOnce(&mut iced::Renderer, Rectangle),
) {
    match area {
        Some(area) => renderer.with_layer(area, |renderer| draw(renderer, area)),
        None => renderer.with_layer(Rectangle::with_size(Size::ZERO), |_| {}),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn positions_of_a_page_that_scrolls_have_amounts_of_their_own() {
        let area = Rectangle::with_size(Size::new(3840.0, 2400.0));
        let at = |offset: f32| Nudge::of(&[7, u64::from(offset.to_bits())]).apply(area);
        for step in 0..2000 {
            let (here, next) = (60.0 * step as f32, 60.0 * (step + 1) as f32);
            assert_ne!(at(here), at(next), "at {here}");
            assert_eq!(at(here), at(here));
        }
    }

    #[test]
    fn no_amount_can_be_seen() {
        for state in 0..10_000 {
            let area = Nudge::of(&[state]).apply(Rectangle::with_size(Size::new(100.0, 100.0)));
            assert!(area.width >= 100.0 - MOST && area.height >= 100.0 - MOST);
        }
    }
}
