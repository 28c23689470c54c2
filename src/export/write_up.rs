//! The methods write-up: markdown, with figures as files beside it.

use crate::base::number::{self, Precision};
use crate::eval::caveat::Severity;
use crate::eval::fact::{FactColumn, FactTable, FactValues};
use crate::export::chosen::{self, Frequencies};
use crate::export::error::ExportError;
use crate::export::fixed;
use crate::export::picture::png;
use crate::export::{Occasion, caveats, stops};
use crate::figure::ink::Palette;
use crate::figure::layout::{layout, natural_size};
use crate::figure::svg::svg;
use crate::report::block::{Align, Block, Grid, Item, ItemMark, NamedFigure, Paragraph, Span};
use crate::report::{self, CellReport, Context};
use crate::study::cell::{CellId, Kind};
use crate::study::settings::Settings;
use crate::study::settings::data::Subject;

/// A write-up: its text, and the files that the text shows.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct WriteUp {
    /// The markdown.
    pub markdown: String,
    /// The figures as PNG: file name and bytes.
    pub figures: Vec<(String, Vec<u8>)>,
}

/// How many rows of a grid are printed; the workbook holds them all.
const MOST_ROWS: usize = 40;

/// How wide a figure is laid out, in the units of its text size.
const WIDTH: f64 = 680.0;

/// The air around a figure in a file; on the page the page gives it.
const MARGIN: f64 = 16.0;

/// Pixels per unit of a figure in a file.
const PIXELS: f64 = 2.0;

/// Writes a study up. Figures are named relative to `folder`, the name of the folder beside the
/// text.
///
/// # Errors
/// When stops stand and no reason to override them is given, when nothing has been evaluated, or
/// when a figure cannot be painted.
pub fn write_up(
    context: &Context<'_>,
    occasion: &Occasion,
    folder: &str,
) -> Result<WriteUp, ExportError> {
    let standing = stops(context);
    if !standing.is_empty() && occasion.despite.is_none() {
        return Err(ExportError::Stopped(standing));
    }
    let reports = report::study(context);
    if context
        .study
        .cells()
        .iter()
        .all(|cell| context.outcome(cell.id).is_none())
    {
        return Err(ExportError::NothingToExport);
    }
    let mut page = Page {
        context,
        folder,
        text: String::new(),
        figures: Vec::new(),
        incomplete: Vec::new(),
    };
    page.heading(1, context.study.title());
    page.line(&format!(
        "*Written on {} by Widefold {}. {}*",
        occasion.date,
        env!("CARGO_PKG_VERSION"),
        fixed::STATUS
    ));
    if let Some(reason) = &occasion.despite {
        page.line(&format!(
            "*Blocking remarks were overridden. The reason given: {}*",
            escape(reason)
        ));
    }
    let prose = |report: &&CellReport| kind(context, report.id) == Some(Kind::Prose);
    for report in reports.iter().filter(prose) {
        page.blocks(report)?;
    }
    page.heading(2, "Methods");
    for report in reports
        .iter()
        .filter(|report| !prose(report) && !report.methods.is_empty())
    {
        page.heading(3, &escape(&context.title(report.id)));
        for paragraph in &report.methods {
            page.paragraph(paragraph);
        }
    }
    page.heading(2, "Results");
    for report in reports.iter().filter(|report| !prose(report)) {
        page.result(report)?;
    }
    for cell in context
        .study
        .cells()
        .iter()
        .filter(|cell| cell.settings.kind() == Kind::Fit)
    {
        page.chosen(cell.id);
    }
    page.caveats();
    page.cautions();
    page.supply();
    page.list("What this document cannot know", &fixed::NOT_KNOWABLE);
    page.references();
    Ok(WriteUp {
        markdown: page.text,
        figures: page.figures,
    })
}

fn kind(context: &Context<'_>, id: CellId) -> Option<Kind> {
    context.study.cell(id).map(|cell| cell.settings.kind())
}

struct Page<'a> {
    context: &'a Context<'a>,
    folder: &'a str,
    text: String,
    figures: Vec<(String, Vec<u8>)>,
    /// Sentences that lack a fact: left out and listed under what must be supplied.
    incomplete: Vec<String>,
}

impl Page<'_> {
    fn line(&mut self, text: &str) {
        self.text.push_str(text);
        self.text.push_str("\n\n");
    }

    fn heading(&mut self, level: usize, text: &str) {
        self.line(&format!("{} {text}", "#".repeat(level)));
    }

    fn paragraph(&mut self, paragraph: &Paragraph) {
        if paragraph.is_incomplete() {
            self.incomplete.push(paragraph.plain());
        } else {
            self.line(&inline(paragraph));
        }
    }

    fn result(&mut self, report: &CellReport) -> Result<(), ExportError> {
        if report.answer.is_none() && report.blocks.is_empty() && report.failure.is_none() {
            return Ok(());
        }
        self.heading(3, &escape(&self.context.title(report.id)));
        if let Some(failure) = &report.failure {
            self.line(&format!(
                "[This part could not be evaluated. {}]",
                escape(&failure.problem.to_string())
            ));
        }
        if let Some(answer) = &report.answer {
            self.paragraph(answer);
        }
        self.blocks(report)
    }

    fn blocks(&mut self, report: &CellReport) -> Result<(), ExportError> {
        self.painted(report.id, &report.blocks)
    }

    fn painted(&mut self, id: CellId, blocks: &[Block]) -> Result<(), ExportError> {
        for block in blocks {
            match block {
                Block::Heading(text) => self.heading(4, &escape(text)),
                Block::Paragraph(paragraph) => self.paragraph(paragraph),
                Block::List(items) => {
                    for item in items {
                        self.text.push_str(&format!("- {}\n", inline(item)));
                    }
                    self.text.push('\n');
                }
                Block::Grid(grid) => self.grid(grid),
                Block::Figure(figure) => self.figure(id, figure)?,
                // Prose begins below the title of the write-up.
                Block::Section { level, text } => {
                    self.heading(usize::from(*level).clamp(1, 5) + 1, &inline(text));
                }
                Block::Items(items) => self.items(items),
                Block::Quote(inside) => {
                    let mut quoted = Page {
                        text: String::new(),
                        figures: Vec::new(),
                        incomplete: Vec::new(),
                        ..*self
                    };
                    quoted.painted(id, inside)?;
                    let (text, figures, incomplete) =
                        (quoted.text, quoted.figures, quoted.incomplete);
                    for line in text.trim_end().lines() {
                        self.text.push_str(&format!("> {line}\n"));
                    }
                    self.text.push('\n');
                    self.figures.extend(figures);
                    self.incomplete.extend(incomplete);
                }
                Block::Code(letters) => self.line(&format!("```\n{}\n```", letters.trim_end())),
                // The grid of findings says the same in words.
                Block::Offers(_) => {}
                Block::Rule => self.line("---"),
                Block::Tabular { head, align, rows } => self.tabular(head, align, rows),
            }
        }
        Ok(())
    }

    fn items(&mut self, items: &[Item]) {
        for item in items {
            let indent = "  ".repeat(usize::from(item.depth));
            let mark = match item.mark {
                ItemMark::Bullet => "- ".to_owned(),
                ItemMark::Number(number) => format!("{number}. "),
                ItemMark::Continued => "  ".to_owned(),
            };
            self.text
                .push_str(&format!("{indent}{mark}{}\n", inline(&item.text)));
        }
        self.text.push('\n');
    }

    fn tabular(&mut self, head: &[Paragraph], align: &[Align], rows: &[Vec<Paragraph>]) {
        let line = |cells: &[Paragraph]| {
            format!(
                "| {} |\n",
                cells.iter().map(inline).collect::<Vec<_>>().join(" | ")
            )
        };
        self.text.push_str(&line(head));
        let rules: Vec<&str> = align
            .iter()
            .map(|align| match align {
                Align::Start => ":--",
                Align::Middle => ":-:",
                Align::End => "--:",
            })
            .collect();
        self.text.push_str(&format!("| {} |\n", rules.join(" | ")));
        for row in rows {
            self.text.push_str(&line(row));
        }
        self.text.push('\n');
    }

    fn grid(&mut self, grid: &Grid) {
        let table = FactTable {
            columns: grid.columns.clone(),
        };
        self.table(&grid.title, &table, MOST_ROWS);
    }

    fn table(&mut self, title: &str, table: &FactTable, most_rows: usize) {
        if table.columns.is_empty() {
            return;
        }
        if !title.is_empty() {
            self.line(&format!("**{}**", escape(title)));
        }
        let heads: Vec<String> = table
            .columns
            .iter()
            .map(|column| {
                let name = escape(&column.name);
                if column.unit.is_empty() {
                    name
                } else {
                    format!("{name}, {}", escape(&column.unit))
                }
            })
            .collect();
        self.text.push_str(&format!("| {} |\n", heads.join(" | ")));
        let rules: Vec<&str> = table.columns.iter().map(|column| rule(column)).collect();
        self.text.push_str(&format!("| {} |\n", rules.join(" | ")));
        let rows = table.n_rows();
        for row in 0..rows.min(most_rows) {
            let values: Vec<String> = table
                .columns
                .iter()
                .map(|column| escape(&column.shown(row)))
                .collect();
            self.text.push_str(&format!("| {} |\n", values.join(" | ")));
        }
        self.text.push('\n');
        if rows > most_rows {
            let count = |count: usize| number::text(count as f64, Precision::Whole);
            self.line(&format!(
                "*The first {} of {} rows; the workbook holds them all.*",
                count(most_rows),
                count(rows)
            ));
        }
    }

    fn figure(&mut self, id: CellId, figure: &NamedFigure) -> Result<(), ExportError> {
        let name = format!(
            "{}-{}.png",
            file_name(&self.context.title(id)),
            file_name(&figure.name)
        );
        let picture =
            layout(&figure.figure, natural_size(&figure.figure, WIDTH)).with_margin(MARGIN);
        let bytes = png(&svg(&picture, &Palette::paper()), PIXELS)?;
        self.figures.push((name.clone(), bytes));
        let reading = inline(&figure.reading);
        self.line(&format!(
            "![{}]({}/{name})",
            escape(&figure.figure.title),
            self.folder
        ));
        self.line(&format!(
            "*{}. {reading}*",
            escape(figure.figure.title.trim_end_matches('.'))
        ));
        Ok(())
    }

    fn chosen(&mut self, fit: CellId) {
        let Some(list) = chosen::list(self.context, fit) else {
            return;
        };
        let title = escape(&self.context.title(fit));
        match list.frequencies {
            Frequencies::Known => {
                self.heading(3, &format!("Chosen predictors of “{title}”"));
                self.table("", &list.table, MOST_ROWS);
            }
            Frequencies::NotAsked => {
                self.heading(3, &format!("Chosen predictors of “{title}”"));
                self.line(
                    "[The list is not printed: it has not been asked whether the same predictors \
                     would be chosen again. Ask “Would the same predictors be chosen again?” of \
                     this fit.]",
                );
            }
            Frequencies::NothingChosen => {}
        }
    }

    fn caveats(&mut self) {
        self.heading(2, "Caveats");
        let found = caveats(self.context);
        if found.is_empty() {
            self.line("No remark was set off by the results.");
        }
        for (cell, caveat) in found {
            let place = cell.map_or_else(
                || "the study".to_owned(),
                |id| format!("“{}”", escape(&self.context.title(id))),
            );
            let word = match caveat.severity {
                Severity::Note | Severity::Caution | Severity::Stop => caveat.severity.word(),
            };
            self.text.push_str(&format!(
                "- **{}** ({word}, on {place}). {}\n",
                escape(&caveat.heading),
                escape(&caveat.text)
            ));
        }
        self.text.push('\n');
    }

    fn cautions(&mut self) {
        let subjects = self
            .context
            .study
            .cells()
            .iter()
            .filter_map(|cell| match &cell.settings {
                Settings::Data(data) if data.subject != Subject::Ordinary => {
                    crate::eval::caveat::health::check(data.subject)
                }
                Settings::Data(_)
                | Settings::Prepare(_)
                | Settings::Fit(_)
                | Settings::Question(_)
                | Settings::Compare(_)
                | Settings::Score(_)
                | Settings::Prose(_) => None,
            });
        let texts: Vec<String> = subjects.map(|caveat| caveat.text).collect();
        if texts.is_empty() {
            return;
        }
        self.heading(2, "Caution");
        for text in texts {
            self.line(&escape(&text));
        }
    }

    fn supply(&mut self) {
        self.list(
            "What its authors must still supply",
            &fixed::TO_SUPPLY.map(|item| item),
        );
        if self.incomplete.is_empty() {
            return;
        }
        self.line("Sentences left out because a value that they state does not exist:");
        for sentence in std::mem::take(&mut self.incomplete) {
            self.text.push_str(&format!("- {}\n", escape(&sentence)));
        }
        self.text.push('\n');
    }

    fn list(&mut self, title: &str, items: &[&str]) {
        self.heading(2, title);
        for item in items {
            let text = if title.starts_with("What its authors") {
                format!("- [to supply: {item}]\n")
            } else {
                format!("- {item}\n")
            };
            self.text.push_str(&text);
        }
        self.text.push('\n');
    }

    fn references(&mut self) {
        let references = fixed::references(self.context.study);
        if references.is_empty() {
            return;
        }
        self.heading(2, "References of the methods used");
        for reference in references {
            self.text.push_str(&format!("- {reference}\n"));
        }
        self.text.push('\n');
    }
}

/// Numbers stand to the right, words to the left.
fn rule(column: &FactColumn) -> &'static str {
    match column.values {
        FactValues::Numbers(_) => "--:",
        FactValues::Texts(_) => ":--",
    }
}

/// A paragraph as a line of markdown.
fn inline(paragraph: &Paragraph) -> String {
    let mut line = String::new();
    for span in &paragraph.spans {
        match span {
            Span::Text(text)
            | Span::Name(text)
            | Span::Fact { text, .. }
            | Span::Entry { text, .. }
            | Span::Counted { text, .. } => {
                line.push_str(&escape(text));
            }
            Span::Strong(text) => line.push_str(&format!("**{}**", escape(text))),
            Span::Emphasis(text) => line.push_str(&format!("*{}*", escape(text))),
            Span::Code(text) | Span::Formula(text) => line.push_str(&format!("`{text}`")),
            Span::Link { text, address } => {
                line.push_str(&format!(
                    "[{}]({})",
                    escape(text),
                    address.replace([' ', ')'], "")
                ));
            }
            Span::Missing(name) => line.push_str(&format!("[to supply: {}]", escape(name))),
        }
    }
    line
}

/// Text from the study inside markdown: signs that would be read as marks are marked as text.
#[must_use]
pub fn escape(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            '\\' | '`' | '*' | '_' | '[' | ']' | '<' | '>' | '#' | '|' | '~' => {
                escaped.push('\\');
                escaped.push(letter);
            }
            '\n' | '\r' => escaped.push(' '),
            _ => escaped.push(letter),
        }
    }
    escaped
}

/// A name that every file system takes.
#[must_use]
pub fn file_name(text: &str) -> String {
    let mut name = String::new();
    for letter in text.chars() {
        if letter.is_alphanumeric() {
            name.extend(letter.to_lowercase());
        } else if !name.ends_with('-') && !name.is_empty() {
            name.push('-');
        }
    }
    let name = name.trim_end_matches('-');
    if name.is_empty() {
        "figure".to_owned()
    } else {
        name.chars().take(60).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_from_the_data_are_never_read_as_marks() {
        assert_eq!(escape("a|b_[c]*<d>"), "a\\|b\\_\\[c\\]\\*\\<d\\>");
        assert_eq!(escape("MAR-2"), "MAR-2");
    }

    #[test]
    fn file_names_hold_letters_digits_and_hyphens_only() {
        assert_eq!(file_name("Chosen again? (salt)"), "chosen-again-salt");
        assert_eq!(file_name("???"), "figure");
    }
}
