//! Which class was predicted for samples of each observed class.

use crate::figure::shape::Caption;
use crate::figure::{Body, Figure, Tiles};

/// What tiles of confusion are built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Confusion {
    /// The texts.
    pub caption: Caption,
    /// What the rows are: observed classes.
    pub row_label: String,
    /// What the columns are: predicted classes.
    pub column_label: String,
    /// The classes.
    pub classes: Vec<String>,
    /// Counts, observed class by observed class.
    pub counts: Vec<f64>,
    /// Their texts, as many.
    pub texts: Vec<String>,
}

impl Confusion {
    /// The figure: a tile for each pair, coloured by its share of the observed class; errors in
    /// the colour opposite to that of hits.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let n = self.classes.len();
        let values = self
            .counts
            .iter()
            .enumerate()
            .map(|(at, count)| {
                let row = at / n.max(1);
                let total: f64 = self.counts[row * n..((row + 1) * n).min(self.counts.len())]
                    .iter()
                    .filter(|count| count.is_finite())
                    .sum();
                let share = if total > 0.0 { count / total } else { 0.0 };
                if row == at % n.max(1) { share } else { -share }
            })
            .collect();
        self.caption.figure(Body::Tiles(Tiles {
            rows: self.classes.clone(),
            columns: self.classes.clone(),
            row_label: self.row_label.clone(),
            column_label: self.column_label.clone(),
            values,
            texts: self.texts.clone(),
            full: 1.0,
            breaks: Vec::new(),
            key: Vec::new(),
            tips: Vec::new(),
        }))
    }
}
