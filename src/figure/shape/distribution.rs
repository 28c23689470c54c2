//! Values as dots, a row for each group.

use crate::figure::shape::Caption;
use crate::figure::{Align, Bar, Body, Column, Figure, Role, Row, Rows, Scale, Stress, Tip, Track};

/// What a figure of distributions is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Distributions {
    /// The texts.
    pub caption: Caption,
    /// The heading of the names.
    pub names: String,
    /// The heading of the dots, with their unit.
    pub values: String,
    /// How the values become places: penalty strengths are compared by their ratios.
    pub scale: Scale,
    /// The headings of the columns of text.
    pub columns: Vec<String>,
    /// A value to compare with, and its name.
    pub rule: Option<(f64, String)>,
    /// The groups, from top to bottom.
    pub groups: Vec<Group>,
    /// Said below when not all have room; `{}` stands for how many were left out.
    pub more: String,
}

/// The values of one group.
#[derive(Clone, Debug, PartialEq)]
pub struct Group {
    /// Its name.
    pub name: String,
    /// Its values.
    pub values: Vec<f64>,
    /// The one that stands for them, such as their mean.
    pub middle: Option<f64>,
    /// One text for each column.
    pub cells: Vec<String>,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

impl Distributions {
    /// The figure: a row of dots for each group.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let row = |group: &Group| Row {
            name: group.name.clone(),
            bar: Bar::Dots {
                role: Role::Series(0),
                values: group.values.clone(),
                middle: group.middle,
            },
            cells: group.cells.clone(),
            stress: Stress::Plain,
            tip: group.tip.clone(),
        };
        let column = |heading: &String| Column {
            heading: heading.clone(),
            align: Align::Decimal,
        };
        self.caption.figure(Body::Rows(Rows {
            names: self.names.clone(),
            bars: self.values.clone(),
            scale: self.scale.clone(),
            range: None,
            track: Track::Hidden,
            rule: self.rule.clone(),
            columns: self.columns.iter().map(column).collect(),
            rows: self.groups.iter().map(row).collect(),
            more: self.more.clone(),
        }))
    }
}
