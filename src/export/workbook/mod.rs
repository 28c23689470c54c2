//! The hand-over workbook: for people who do not program.

mod sheet;

use crate::base::number::Precision;
use crate::eval::caveat::health;
use crate::eval::fact::{Fact, FactColumn, FactTable, FactValue};
use crate::export::chosen::{self, Frequencies};
use crate::export::error::ExportError;
use crate::export::fixed;
use crate::export::picture::png;
use crate::export::workbook::sheet::{Sheet, sheet_name};
use crate::export::{Occasion, caveats, stops};
use crate::figure::ink::Palette;
use crate::figure::layout::{layout, natural_size};
use crate::figure::svg::svg;
use crate::report::block::Block;
use crate::report::{self, CellReport, Context};
use crate::study::cell::{Cell, Kind};
use crate::study::settings::Settings;
use rust_xlsxwriter::{Chart, ChartType, Workbook, XlsxError};

impl From<XlsxError> for ExportError {
    fn from(error: XlsxError) -> Self {
        Self::Workbook(error.to_string())
    }
}

/// Builds the workbook and returns its bytes.
///
/// # Errors
/// When stops stand and no reason to override them is given, when nothing has been evaluated, or
/// when the file cannot be put together.
pub fn workbook(context: &Context<'_>, occasion: &Occasion) -> Result<Vec<u8>, ExportError> {
    let standing = stops(context);
    if !standing.is_empty() && occasion.despite.is_none() {
        return Err(ExportError::Stopped(standing));
    }
    if context
        .study
        .cells()
        .iter()
        .all(|cell| context.outcome(cell.id).is_none())
    {
        return Err(ExportError::NothingToExport);
    }
    let reports = report::study(context);
    let mut book = Workbook::new();
    // No clock below the rim: the same study gives the same bytes.
    let made = rust_xlsxwriter::DocProperties::new()
        .set_title(context.study.title())
        .set_creation_datetime(
            &rust_xlsxwriter::ExcelDateTime::parse_from_str(&occasion.date)
                .or_else(|_| rust_xlsxwriter::ExcelDateTime::from_ymd(2000, 1, 1))?,
        );
    let _ = book.set_properties(&made);
    read_me(&mut book, context, occasion)?;
    performance(&mut book, context)?;
    let fits: Vec<&Cell> = context
        .study
        .cells()
        .iter()
        .filter(|cell| cell.settings.kind() == Kind::Fit)
        .collect();
    for fit in &fits {
        let suffix = if fits.len() == 1 {
            None
        } else {
            Some(fit.title.as_str())
        };
        predictors(&mut book, context, fit, suffix)?;
        fact_sheet(
            &mut book,
            context,
            fit,
            "held-out predictions",
            "Samples",
            suffix,
        )?;
        penalty(&mut book, context, fit, suffix)?;
        fact_sheet(
            &mut book,
            context,
            fit,
            "outer choices",
            "Outer parts",
            suffix,
        )?;
        fact_sheet(
            &mut book,
            context,
            fit,
            "assignments",
            "Assignments",
            suffix,
        )?;
    }
    answers(&mut book, &reports, context)?;
    figures(&mut book, &reports, context)?;
    caveat_sheet(&mut book, context)?;
    methods(&mut book, &reports, context)?;
    dictionary(&mut book, context)?;
    Ok(book.save_to_buffer()?)
}

fn read_me(
    book: &mut Workbook,
    context: &Context<'_>,
    occasion: &Occasion,
) -> Result<(), ExportError> {
    let mut sheet = Sheet::add(book, "Read me")?;
    sheet.width(0, 110.0)?;
    sheet.title(context.study.title())?;
    sheet.text("This workbook hands over an analysis of wide data: what was predicted, how well, from which predictors, and with which reservations.")?;
    sheet.text(&format!(
        "Exported on {} by Widefold {}.",
        occasion.date,
        env!("CARGO_PKG_VERSION")
    ))?;
    if let Some(reason) = &occasion.despite {
        sheet.text(&format!(
            "Blocking remarks were overridden. The reason given: {reason}"
        ))?;
    }
    sheet.blank();
    for cell in context.study.cells() {
        if let Settings::Data(data) = &cell.settings
            && let Some(caveat) = health::check(data.subject)
        {
            sheet.strong(&caveat.heading)?;
            sheet.text(&caveat.text)?;
            sheet.blank();
        }
    }
    sheet.strong("The sheets")?;
    for (name, what) in [
        (
            "Performance",
            "How well samples that the model had not seen were predicted, with the baseline and the ladder from flattering to severe.",
        ),
        (
            "Predictors",
            "The chosen predictors with their coefficients, how often each is chosen again, and what could stand in for it.",
        ),
        (
            "Samples",
            "Observed and held-out predicted value of every sample.",
        ),
        (
            "Penalty",
            "The error of every penalty strength that was tried, with a chart.",
        ),
        ("Outer parts", "What each outer training part chose."),
        (
            "Assignments",
            "In which part each sample was held out, so that the judgement can be repeated.",
        ),
        (
            "Answers",
            "The tables behind the answers to the questions that were asked.",
        ),
        (
            "Figures",
            "The figures of the study, each with one line on how to read it.",
        ),
        (
            "Caveats",
            "Remarks on the results, with what set each off. Read them before using a number.",
        ),
        ("Methods", "How it was done, as text for a report."),
        (
            "Dictionary",
            "What every value is called, its unit and its meaning.",
        ),
    ] {
        sheet.pair(name, what)?;
    }
    sheet.blank();
    sheet.strong("The gravest remarks")?;
    let found = caveats(context);
    if found.is_empty() {
        sheet.text("No remark was set off by the results.")?;
    }
    for (_, caveat) in found.iter().take(3) {
        sheet.text(&format!(
            "{} ({}): {}",
            caveat.heading,
            caveat.severity.word(),
            caveat.text
        ))?;
    }
    sheet.blank();
    sheet.strong("What this document cannot know")?;
    for item in fixed::NOT_KNOWABLE {
        sheet.text(item)?;
    }
    Ok(())
}

/// The scalar facts of all fits and of the questions asked of them.
fn performance(book: &mut Workbook, context: &Context<'_>) -> Result<(), ExportError> {
    let mut sheet = Sheet::add(book, "Performance")?;
    for (column, width) in [24.0, 44.0, 16.0, 14.0, 90.0].into_iter().enumerate() {
        sheet.width(column as u16, width)?;
    }
    sheet.heads(&["cell", "value", "number", "unit", "meaning"])?;
    for cell in context.study.cells() {
        if !matches!(cell.settings.kind(), Kind::Fit | Kind::Question) {
            continue;
        }
        let Some(outcome) = context.outcome(cell.id) else {
            continue;
        };
        for fact in outcome.facts.all() {
            if !matches!(fact.value, FactValue::Table(_)) {
                sheet.fact(&cell.title, fact)?;
            }
        }
    }
    sheet.freeze(1)?;
    Ok(())
}

fn predictors(
    book: &mut Workbook,
    context: &Context<'_>,
    fit: &Cell,
    suffix: Option<&str>,
) -> Result<(), ExportError> {
    let Some(list) = chosen::list(context, fit.id) else {
        return Ok(());
    };
    let mut sheet = Sheet::add(book, &sheet_name("Predictors", suffix))?;
    match list.frequencies {
        Frequencies::Known | Frequencies::NothingChosen => sheet.table(&list.table)?,
        Frequencies::NotAsked => sheet.text("The list is not shown: it has not been asked whether the same predictors would be chosen again. Ask “Would the same predictors be chosen again?” of this fit.")?,
    }
    Ok(())
}

fn fact_sheet(
    book: &mut Workbook,
    context: &Context<'_>,
    cell: &Cell,
    fact: &str,
    name: &str,
    suffix: Option<&str>,
) -> Result<(), ExportError> {
    let Some(outcome) = context.outcome(cell.id) else {
        return Ok(());
    };
    let Some(table) = outcome.facts.table(fact) else {
        return Ok(());
    };
    Sheet::add(book, &sheet_name(name, suffix))?.table(table)?;
    Ok(())
}

/// The error curve with a native chart.
fn penalty(
    book: &mut Workbook,
    context: &Context<'_>,
    fit: &Cell,
    suffix: Option<&str>,
) -> Result<(), ExportError> {
    let Some(outcome) = context.outcome(fit.id) else {
        return Ok(());
    };
    let Some(table) = outcome.facts.table("error curve") else {
        return Ok(());
    };
    let name = sheet_name("Penalty", suffix);
    let mut sheet = Sheet::add(book, &name)?;
    sheet.table(table)?;
    let rows = table.n_rows() as u32;
    if rows < 2 {
        return Ok(());
    }
    let value = if table.column("error").is_some() {
        "error"
    } else {
        "criterion"
    };
    let at = |name: &str| {
        table
            .columns
            .iter()
            .position(|column| column.name == name)
            .map(|at| at as u16)
    };
    let (Some(x), Some(y)) = (at("strength"), at(value)) else {
        return Ok(());
    };
    let mut chart = Chart::new(ChartType::ScatterSmooth);
    let _ = chart
        .add_series()
        .set_categories((name.as_str(), 1, x, rows, x))
        .set_values((name.as_str(), 1, y, rows, y))
        .set_name(value);
    for band in ["low", "high"] {
        if let Some(column) = at(band) {
            let _ = chart
                .add_series()
                .set_categories((name.as_str(), 1, x, rows, x))
                .set_values((name.as_str(), 1, column, rows, column))
                .set_name(match band {
                    "low" => "less one standard error",
                    _ => "and one standard error",
                });
        }
    }
    let unit = table
        .column(value)
        .map(|column| column.unit.clone())
        .unwrap_or_default();
    let label = if unit.is_empty() {
        value.to_owned()
    } else {
        format!("{value}, {unit}")
    };
    let _ = chart.x_axis().set_name("penalty strength").set_log_base(10);
    let _ = chart.y_axis().set_name(&label);
    let _ = chart.title().set_name("Error against penalty strength");
    let _ = chart.set_width(720).set_height(420);
    sheet.chart(1, table.columns.len() as u16 + 1, &chart)
}

/// The tables behind the answers, one below the other.
fn answers(
    book: &mut Workbook,
    reports: &[CellReport],
    context: &Context<'_>,
) -> Result<(), ExportError> {
    let mut sheet = Sheet::add(book, "Answers")?;
    for (column, width) in [44.0, 24.0, 18.0, 60.0, 14.0, 14.0, 40.0, 40.0]
        .into_iter()
        .enumerate()
    {
        sheet.width(column as u16, width)?;
    }
    for report in reports {
        let Some(cell) = context.study.cell(report.id) else {
            continue;
        };
        if cell.settings.kind() != Kind::Question && cell.settings.kind() != Kind::Data {
            continue;
        }
        let Some(outcome) = context.outcome(report.id) else {
            continue;
        };
        sheet.title(&cell.title)?;
        if let Some(answer) = &report.answer {
            sheet.text(&answer.plain())?;
        }
        for fact in outcome.facts.all() {
            // The trace and the predictions are long and stand elsewhere or in the figures.
            if let FactValue::Table(table) = &fact.value
                && !matches!(
                    fact.name.as_str(),
                    "trace" | "held-out predictions" | "error curve" | "outer choices"
                )
            {
                sheet.blank();
                sheet.strong(&fact.meaning)?;
                sheet.rows(table)?;
            }
        }
        sheet.blank();
    }
    Ok(())
}

fn figures(
    book: &mut Workbook,
    reports: &[CellReport],
    context: &Context<'_>,
) -> Result<(), ExportError> {
    /// Laid out as in the write-up; twice as many pixels, shown at half the size.
    const WIDTH: f64 = 680.0;
    let mut sheet = Sheet::add(book, "Figures")?;
    sheet.width(0, 110.0)?;
    for report in reports {
        for block in &report.blocks {
            let Block::Figure(figure) = block else {
                continue;
            };
            let size = natural_size(&figure.figure, WIDTH);
            let bytes = png(
                &svg(
                    &layout(&figure.figure, size).with_margin(8.0),
                    &Palette::paper(),
                ),
                2.0,
            )?;
            sheet.strong(&format!(
                "{}: {}",
                context.title(report.id),
                figure.figure.title
            ))?;
            sheet.image(&bytes, 0.5, size.height)?;
            sheet.text(&figure.reading.plain())?;
            sheet.blank();
        }
    }
    Ok(())
}

fn caveat_sheet(book: &mut Workbook, context: &Context<'_>) -> Result<(), ExportError> {
    let found = caveats(context);
    let texts = |get: &dyn Fn(&crate::eval::caveat::Caveat) -> String| {
        found
            .iter()
            .map(|(_, caveat)| get(caveat))
            .collect::<Vec<String>>()
    };
    let cells = found
        .iter()
        .map(|(cell, _)| cell.map_or_else(|| "the study".to_owned(), |id| context.title(id)))
        .collect();
    let column = |name: &str, values: Vec<String>| FactColumn::texts(name, values, "");
    let table = FactTable {
        columns: vec![
            column("severity", texts(&|c| c.severity.word().to_owned())),
            column("cell", cells),
            column("remark", texts(&|c| c.heading.clone())),
            column("text", texts(&|c| c.text.clone())),
            column(
                "set off by",
                texts(&|c| {
                    c.trigger
                        .iter()
                        .map(|(name, value)| format!("{name}: {value}"))
                        .collect::<Vec<_>>()
                        .join("; ")
                }),
            ),
            column("threshold", texts(&|c| c.threshold.clone())),
            column(
                "origin of the threshold",
                texts(&|c| c.origin.word().to_owned()),
            ),
            column("name", texts(&|c| c.id.clone())),
        ],
    };
    let mut sheet = Sheet::add(book, "Caveats")?;
    sheet.table(&table)
}

fn methods(
    book: &mut Workbook,
    reports: &[CellReport],
    context: &Context<'_>,
) -> Result<(), ExportError> {
    let mut sheet = Sheet::add(book, "Methods")?;
    sheet.width(0, 110.0)?;
    sheet.text(fixed::STATUS)?;
    for report in reports.iter().filter(|report| !report.methods.is_empty()) {
        sheet.blank();
        sheet.strong(&context.title(report.id))?;
        for paragraph in report
            .methods
            .iter()
            .filter(|paragraph| !paragraph.is_incomplete())
        {
            sheet.text(&paragraph.plain())?;
        }
    }
    sheet.blank();
    sheet.strong("What its authors must still supply")?;
    for item in fixed::TO_SUPPLY {
        sheet.text(&format!("[to supply: {item}]"))?;
    }
    sheet.blank();
    sheet.strong("References of the methods used")?;
    for reference in fixed::references(context.study) {
        sheet.text(reference)?;
    }
    Ok(())
}

fn dictionary(book: &mut Workbook, context: &Context<'_>) -> Result<(), ExportError> {
    let mut sheet = Sheet::add(book, "Dictionary")?;
    for (column, width) in [28.0, 40.0, 34.0, 14.0, 100.0].into_iter().enumerate() {
        sheet.width(column as u16, width)?;
    }
    sheet.heads(&["cell", "value", "column", "unit", "meaning"])?;
    for cell in context.study.cells() {
        let Some(outcome) = context.outcome(cell.id) else {
            continue;
        };
        for fact in outcome.facts.all() {
            sheet.row(&[&cell.title, &fact.name, "", &fact.unit, &fact.meaning])?;
            if let FactValue::Table(table) = &fact.value {
                for column in &table.columns {
                    sheet.row(&[
                        &cell.title,
                        &fact.name,
                        &column.name,
                        &column.unit,
                        &column.meaning,
                    ])?;
                }
            }
        }
    }
    sheet.freeze(1)
}

/// Whether a fact's number goes into a cell as a number.
fn number_of(fact: &Fact) -> Option<(f64, Precision)> {
    match &fact.value {
        FactValue::Number(value) if value.is_finite() => Some((*value, fact.precision)),
        FactValue::Number(_) | FactValue::Text(_) | FactValue::Table(_) => None,
    }
}
