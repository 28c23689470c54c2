//! How strongly the chosen predictors agree with those that could stand in for them.

use crate::figure::shape::Caption;
use crate::figure::{Body, Figure, Tiles, Tip};

/// What tiles of stand-ins are built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct StandIns {
    /// The texts.
    pub caption: Caption,
    /// What the rows are.
    pub row_label: String,
    /// What the columns are.
    pub column_label: String,
    /// The chosen predictors.
    pub chosen: Vec<String>,
    /// The stand-ins.
    pub stand_ins: Vec<String>,
    /// The correlations, row by row; what is not finite has no tile.
    pub correlations: Vec<f64>,
    /// Their texts, as many; empty for none.
    pub texts: Vec<String>,
    /// The words at the ends of the key: −1 and 1.
    pub key: Vec<String>,
    /// What the pointer is told, as many; empty for nothing.
    pub tips: Vec<Tip>,
}

impl StandIns {
    /// The figure: a tile for each pair.
    #[must_use]
    pub fn figure(&self) -> Figure {
        self.caption.figure(Body::Tiles(Tiles {
            rows: self.chosen.clone(),
            columns: self.stand_ins.clone(),
            row_label: self.row_label.clone(),
            column_label: self.column_label.clone(),
            values: self.correlations.clone(),
            texts: self.texts.clone(),
            full: 1.0,
            breaks: Vec::new(),
            key: self.key.clone(),
            tips: self.tips.clone(),
        }))
    }
}
