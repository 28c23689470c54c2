//! What a list remembers: trees and heights of its cells, and where the view stands among them.

use crate::app::widget::layer::Nudge;
use crate::app::widget::list::Key;
use iced::advanced::layout::Layout;
use iced::advanced::widget::Tree;
use std::collections::BTreeMap;

/// How high a cell is taken to be before it has been seen.
const GUESS: f32 = 360.0;

#[derive(Default)]
pub(super) struct State {
    pub(super) trees: BTreeMap<Key, Tree>,
    pub(super) heights: BTreeMap<Key, f32>,
    pub(super) width: f32,
    /// The cell at the top of the view, and how far the view begins below its top.
    pub(super) anchor: Key,
    pub(super) anchor_at: usize,
    pub(super) offset: f32,
    /// The cells that have a node, in the order of the nodes.
    pub(super) laid: Vec<usize>,
    /// The cell that has the focus.
    pub(super) focused: Option<Key>,
    /// Whether the focused thing is to be brought into view.
    pub(super) reveals: bool,
    pub(super) served: u64,
    pub(super) drag: Option<f32>,
    pub(super) is_hovered: bool,
    pub(super) height: f32,
}

impl State {
    pub(super) fn height_of(&self, key: Key) -> f32 {
        self.heights.get(&key).copied().unwrap_or_else(|| {
            let known = self.heights.len();
            if known == 0 {
                GUESS
            } else {
                self.heights.values().sum::<f32>() / known as f32
            }
        })
    }

    pub(super) fn total(&self, keys: &[Key]) -> f32 {
        keys.iter().map(|key| self.height_of(*key)).sum()
    }

    pub(super) fn scrolled(&self, keys: &[Key]) -> f32 {
        let above: f32 = keys[..self.anchor_at.min(keys.len())]
            .iter()
            .map(|key| self.height_of(*key))
            .sum();
        above + self.offset
    }

    /// The amounts for where the cells lie: whatever moves them, the page is painted as one.
    pub(super) fn nudge(&self, layout: Layout<'_>) -> Nudge {
        let cells = self.laid.iter().zip(layout.children());
        let places: Vec<u64> = cells
            .flat_map(|(at, child)| {
                let bounds = child.bounds();
                let place = u64::from(bounds.y.to_bits()) << 32;
                [*at as u64, place | u64::from(bounds.height.to_bits())]
            })
            .collect();
        Nudge::of(&places)
    }

    /// Puts the view at a distance from the top of everything.
    pub(super) fn scroll_to(&mut self, keys: &[Key], to: f32) {
        let mut left = to.max(0.0);
        for (at, key) in keys.iter().enumerate() {
            let height = self.height_of(*key);
            if left < height || at + 1 == keys.len() {
                self.anchor_at = at;
                self.anchor = *key;
                self.offset = left;
                return;
            }
            left -= height;
        }
    }
}
