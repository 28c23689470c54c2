//! Figures of the design: the way of the samples, and the outcome by batch and by order.

use crate::eval::fact::FactTable;
use crate::figure::shape::Caption;
use crate::figure::{
    Align, Bar, Body, Column, Figure, Meaning, Role, Row, Rows, Scale, Stress, Tip, Track,
};
use crate::report::block::{NamedFigure, Paragraph};
use crate::report::tell::Source;

/// The figures that the facts allow, in reading order.
#[must_use]
pub fn figures(source: &Source<'_>) -> Vec<NamedFigure> {
    let batch = source.facts.words("batch column").unwrap_or("batch");
    let order = source.facts.words("order column").unwrap_or("order");
    let outcome = source.facts.words("outcome").unwrap_or("the outcome");
    let association = |fact: &str, before: &str, without: &str| {
        if source.has(fact) {
            source.say(&format!("{before} {{{fact}}}."), &[])
        } else {
            Paragraph::of(without)
        }
    };
    let mut figures = Vec::new();
    if let Some(table) = source.rows("flow of samples") {
        figures.push(NamedFigure {
            name: "flow".to_owned(),
            figure: flow(table),
            reading: source.say(
                "{samples read} [sample was|samples were] read; {samples} are used.",
                &[],
            ),
        });
    }
    if let Some(table) = source.rows("outcome by batch") {
        figures.push(NamedFigure {
            name: "outcome-by-batch".to_owned(),
            figure: groups(table, outcome, batch, "batch", &Meaning::Batch),
            reading: association(
                "batch association",
                "Where batches differ in the outcome, a model can recognise the batch in place of \
                 what it should see. Strength of the association:",
                "Where batches differ in the outcome, a model can recognise the batch.",
            ),
        });
    }
    if let Some(table) = source.rows("outcome by order") {
        figures.push(NamedFigure {
            name: "outcome-by-order".to_owned(),
            figure: groups(table, outcome, order, "stretch", &Meaning::Thing),
            reading: association(
                "order association",
                "An outcome that drifts along the order of measurement cannot be told from a \
                 drift of the instrument. Rank correlation:",
                "An outcome that drifts along the order of measurement cannot be told from a \
                 drift of the instrument.",
            ),
        });
    }
    figures
}

fn shown(table: &FactTable, column: &str, row: usize) -> String {
    table
        .column(column)
        .map_or_else(String::new, |column| column.shown(row))
}

fn number(table: &FactTable, column: &str, row: usize) -> f64 {
    table.numbers(column).get(row).copied().unwrap_or(f64::NAN)
}

fn heading(text: &str, align: Align) -> Column {
    Column {
        heading: text.to_owned(),
        align,
    }
}

/// How many samples are left after every step.
fn flow(table: &FactTable) -> Figure {
    let n = table.n_rows();
    let rows = (0..n).map(|at| Row {
        name: shown(table, "step", at),
        bar: Bar::Value {
            role: if at + 1 == n {
                Role::Series(0)
            } else {
                Role::Pale(0)
            },
            value: number(table, "left", at),
            interval: None,
        },
        cells: vec![shown(table, "samples", at), shown(table, "left", at)],
        stress: if at + 1 == n {
            Stress::Strong
        } else {
            Stress::Plain
        },
        tip: None,
    });
    let rows = Rows {
        names: String::new(),
        bars: String::new(),
        scale: Scale::Linear,
        range: None,
        track: Track::Hidden,
        rule: None,
        columns: vec![
            heading("concerned", Align::End),
            heading("left", Align::End),
        ],
        rows: rows.collect(),
        more: String::new(),
    };
    let caption = Caption {
        title: "From the file to the fit".to_owned(),
        description: "How many samples each step concerns and how many it leaves.".to_owned(),
        empty: "No sample was read.".to_owned(),
    };
    Figure::of(&caption.title, Body::Rows(rows))
        .with_description(&caption.description)
        .with_empty(&caption.empty)
}

/// The outcome in groups: the share of yes, the mean with its spread, or the counts of classes.
fn groups(
    table: &FactTable,
    outcome: &str,
    column: &str,
    key: &str,
    meaning: &dyn Fn(String) -> Meaning,
) -> Figure {
    let is_share = table.column("share").is_some();
    let is_mean = table.column("mean").is_some();
    let (value, scale) = if is_share {
        ("share", Scale::Percent)
    } else if is_mean {
        ("mean", Scale::Linear)
    } else {
        ("samples", Scale::Linear)
    };
    let mut columns = vec![heading("samples", Align::End)];
    let mut cells: Vec<&str> = vec!["samples"];
    let unit = table
        .column(value)
        .map_or("", |column| column.unit.as_str());
    if is_share || is_mean {
        let head = if unit.is_empty() {
            value.to_owned()
        } else {
            format!("{value}, {unit}")
        };
        columns.push(heading(&head, Align::Decimal));
        cells.push(value);
    }
    let classes = || {
        table
            .columns
            .iter()
            .filter(|column| column.name.starts_with(&format!("{outcome}: ")))
    };
    if !is_mean {
        for class in classes() {
            let short = class.name[outcome.len() + 2..].to_owned();
            columns.push(heading(&short, Align::End));
            cells.push(&class.name);
        }
    }
    let rows = (0..table.n_rows()).map(|at| {
        let (middle, spread) = (
            number(table, value, at),
            number(table, "standard deviation", at),
        );
        let name = match key {
            "stretch" => format!("{} … {}", shown(table, "from", at), shown(table, "to", at)),
            _ => shown(table, key, at),
        };
        Row {
            bar: Bar::Value {
                role: Role::Series(0),
                value: middle,
                interval: (is_mean && spread.is_finite())
                    .then_some((middle - spread, middle + spread)),
            },
            cells: cells.iter().map(|cell| shown(table, cell, at)).collect(),
            stress: Stress::Plain,
            tip: Some(Tip {
                text: format!("{column} {name}: {value} {}", shown(table, value, at)),
                meaning: meaning(name.clone()),
            }),
            name,
        }
    });
    let what = if is_share {
        "share of yes"
    } else if is_mean {
        "mean and standard deviation"
    } else {
        "samples"
    };
    let title = format!("{outcome} by {column} ({what})");
    let rows = Rows {
        names: column.to_owned(),
        bars: String::new(),
        scale,
        range: is_share.then_some((0.0, 1.0)),
        track: if is_share {
            Track::Shown
        } else {
            Track::Hidden
        },
        rule: None,
        columns,
        rows: rows.collect(),
        more: "and {} more".to_owned(),
    };
    Figure::of(&title, Body::Rows(rows))
        .with_description("The outcome of the analysed samples, group by group.")
        .with_empty("No group has an analysed sample.")
}
