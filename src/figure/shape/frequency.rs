//! How often each predictor is chosen when samples are drawn anew.

use crate::figure::shape::Caption;
use crate::figure::{Align, Bar, Body, Column, Figure, Role, Row, Rows, Scale, Stress, Tip, Track};

/// What rows of selection frequencies are built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Frequencies {
    /// The texts.
    pub caption: Caption,
    /// The heading of the names.
    pub names: String,
    /// The heading of the bars.
    pub bars: String,
    /// The headings of the columns of text, the first of which is the frequency itself.
    pub columns: Vec<String>,
    /// The frequency from which a predictor counts as chosen again, and its name.
    pub threshold: Option<(f64, String)>,
    /// From the most to the least frequent.
    pub rows: Vec<Frequency>,
    /// Said below when not all have room; `{}` stands for how many were left out.
    pub more: String,
}

/// The frequency of one predictor.
#[derive(Clone, Debug, PartialEq)]
pub struct Frequency {
    /// The predictor's name.
    pub name: String,
    /// The share of resamples in which it is chosen, from 0 to 1.
    pub share: f64,
    /// The ends of its interval.
    pub interval: Option<(f64, f64)>,
    /// One text for each column.
    pub cells: Vec<String>,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

impl Frequencies {
    /// The figure: a row for each predictor; those below the threshold in the colour of caution.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let threshold = self.threshold.as_ref().map_or(0.5, |(at, _)| *at);
        let row = |frequency: &Frequency| Row {
            name: frequency.name.clone(),
            bar: Bar::Value {
                role: if frequency.share >= threshold {
                    Role::Series(0)
                } else {
                    Role::Caution
                },
                value: frequency.share,
                interval: frequency.interval,
            },
            cells: frequency.cells.clone(),
            stress: Stress::Plain,
            tip: frequency.tip.clone(),
        };
        let column = |heading: &String| Column {
            heading: heading.clone(),
            align: Align::Decimal,
        };
        self.caption.figure(Body::Rows(Rows {
            names: self.names.clone(),
            bars: self.bars.clone(),
            scale: Scale::Percent,
            range: Some((0.0, 1.0)),
            track: Track::Shown,
            rule: self.threshold.clone(),
            columns: self.columns.iter().map(column).collect(),
            rows: self.rows.iter().map(row).collect(),
            more: self.more.clone(),
        }))
    }
}
