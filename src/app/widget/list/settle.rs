//! Which cells of a list are built, and where they lie.

use crate::app::widget::list::{List, State};
use iced::Size;
use iced::advanced::layout;
use iced::advanced::widget::Tree;
use std::collections::BTreeMap;

impl<'a, M: 'a> List<'a, M> {
    /// Builds a cell if it is not built, lays it out, and remembers its height.
    fn measure(&mut self, state: &mut State, renderer: &iced::Renderer, at: usize) -> layout::Node {
        let key = self.keys[at];
        let tree = state.trees.entry(key).or_insert_with(Tree::empty);
        let element = self.built.entry(at).or_insert_with(|| {
            let element = (self.build)(at);
            tree.diff(&element);
            element
        });
        let limits = layout::Limits::new(Size::ZERO, Size::new(state.width, f32::INFINITY));
        let node = element.as_widget_mut().layout(tree, renderer, &limits);
        let _ = state.heights.insert(key, node.size().height);
        node
    }

    /// Moves the anchor until the view begins inside it and is filled as far as there are cells.
    /// Returns the nodes of the cells in view by position.
    pub(super) fn settle(
        &mut self,
        state: &mut State,
        renderer: &iced::Renderer,
    ) -> BTreeMap<usize, (f32, layout::Node)> {
        let n_cells = self.keys.len();
        let mut nodes: BTreeMap<usize, layout::Node> = BTreeMap::new();
        let mut node_of = |list: &mut Self, state: &mut State, at: usize| -> f32 {
            nodes
                .entry(at)
                .or_insert_with(|| list.measure(state, renderer, at))
                .size()
                .height
        };
        // Upwards: the view begins above the anchor.
        while state.offset < 0.0 {
            if state.anchor_at == 0 {
                state.offset = 0.0;
                break;
            }
            state.anchor_at -= 1;
            state.offset += node_of(self, state, state.anchor_at);
        }
        // Downwards: the view begins below the anchor.
        loop {
            let height = node_of(self, state, state.anchor_at);
            if state.offset < height || state.anchor_at + 1 >= n_cells {
                break;
            }
            state.offset -= height;
            state.anchor_at += 1;
        }
        // The view ends below the last cell: go back up.
        let mut filled = -state.offset;
        let mut at = state.anchor_at;
        while at < n_cells && filled < state.height {
            filled += node_of(self, state, at);
            at += 1;
        }
        let mut missing = (state.height - filled).max(0.0);
        while missing > 0.0 {
            let room = state.offset;
            if room >= missing {
                state.offset -= missing;
                break;
            }
            missing -= room;
            if state.anchor_at == 0 {
                state.offset = 0.0;
                break;
            }
            state.anchor_at -= 1;
            state.offset = node_of(self, state, state.anchor_at);
        }
        state.anchor = self.keys[state.anchor_at];

        // The cells in view, one more on each side, and the focused one with its neighbours.
        let mut wanted: Vec<usize> = Vec::new();
        let mut y = -state.offset;
        let mut at = state.anchor_at;
        while at < n_cells && y < state.height {
            wanted.push(at);
            y += node_of(self, state, at);
            at += 1;
        }
        wanted.extend((at < n_cells).then_some(at));
        wanted.extend(state.anchor_at.checked_sub(1));
        let focused = state
            .focused
            .and_then(|key| self.keys.iter().position(|known| *known == key));
        if let Some(focused) = focused {
            wanted.extend([focused, (focused + 1).min(n_cells - 1)]);
            wanted.extend(focused.checked_sub(1));
        }
        wanted.sort_unstable();
        wanted.dedup();
        for &at in &wanted {
            let _ = node_of(self, state, at);
        }
        self.built.retain(|at, _| wanted.contains(at));

        let top = state.scrolled(&self.keys);
        let mut placed = BTreeMap::new();
        for at in wanted {
            let above: f32 = self.keys[..at]
                .iter()
                .map(|key| state.height_of(*key))
                .sum();
            let node = nodes.remove(&at).expect("every wanted cell was measured");
            let _ = placed.insert(at, (above - top, node));
        }
        placed
    }
}
