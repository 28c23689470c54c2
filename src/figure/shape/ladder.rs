//! The ladder of honesty: the same measure, judged more and more strictly.

use crate::figure::shape::Caption;
use crate::figure::{Align, Bar, Body, Column, Figure, Role, Row, Rows, Scale, Stress, Tip, Track};

/// What a ladder is built from.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ladder {
    /// The texts.
    pub caption: Caption,
    /// The heading of the names.
    pub names: String,
    /// The heading of the values, with their unit.
    pub values: String,
    /// The headings of further columns of text.
    pub columns: Vec<String>,
    /// The ends of the axis, such as (0, 1); `None` takes them from the steps.
    pub range: Option<(f64, f64)>,
    /// From the most flattering to the strictest.
    pub steps: Vec<Step>,
}

/// One step of a ladder.
#[derive(Clone, Debug, PartialEq)]
pub struct Step {
    /// Its name.
    pub name: String,
    /// What is known.
    pub known: Known,
    /// The value as text.
    pub text: String,
    /// One text for each further column.
    pub cells: Vec<String>,
    /// What the pointer is told.
    pub tip: Option<Tip>,
}

/// What is known at a step of a ladder.
#[derive(Clone, Debug, PartialEq)]
pub enum Known {
    /// A value that flatters: it was used to fit or to choose.
    Flattering {
        /// The value.
        value: f64,
        /// The ends of its interval.
        interval: Option<(f64, f64)>,
    },
    /// A value from samples that were used for neither.
    Honest {
        /// The value.
        value: f64,
        /// The ends of its interval.
        interval: Option<(f64, f64)>,
    },
    /// The one that is quoted.
    Headline {
        /// The value.
        value: f64,
        /// The ends of its interval.
        interval: Option<(f64, f64)>,
    },
    /// Nothing yet: the words say why.
    Closed(String),
}

impl Ladder {
    /// The figure: a row for each step.
    #[must_use]
    pub fn figure(&self) -> Figure {
        let column = |heading: &String, align| Column {
            heading: heading.clone(),
            align,
        };
        let mut columns = vec![column(&self.values, Align::Decimal)];
        columns.extend(
            self.columns
                .iter()
                .map(|heading| column(heading, Align::Start)),
        );
        self.caption.figure(Body::Rows(Rows {
            names: self.names.clone(),
            bars: String::new(),
            scale: Scale::Linear,
            range: self.range,
            track: Track::Hidden,
            rule: None,
            columns,
            rows: self.steps.iter().map(row).collect(),
            more: String::new(),
        }))
    }
}

fn row(step: &Step) -> Row {
    let value = |role, value: &f64, interval: &Option<(f64, f64)>| Bar::Value {
        role,
        value: *value,
        interval: *interval,
    };
    let (bar, stress) = match &step.known {
        Known::Flattering { value: v, interval } => {
            (value(Role::Pale(0), v, interval), Stress::Plain)
        }
        Known::Honest { value: v, interval } => {
            (value(Role::Series(0), v, interval), Stress::Plain)
        }
        Known::Headline { value: v, interval } => {
            (value(Role::Series(0), v, interval), Stress::Strong)
        }
        Known::Closed(words) => (Bar::Closed(words.clone()), Stress::Plain),
    };
    let mut cells = vec![step.text.clone()];
    cells.extend(step.cells.iter().cloned());
    Row {
        name: step.name.clone(),
        bar,
        cells,
        stress,
        tip: step.tip.clone(),
    }
}
