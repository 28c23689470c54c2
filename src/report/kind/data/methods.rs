//! What was done, for the write-up: sources, flow of samples, outcome, predictors, units.

use crate::eval::fact::FactTable;
use crate::report::block::Paragraph;
use crate::report::noun;
use crate::report::tell::{Source, Telling};
use crate::study::settings::data::Data;

/// From this many recorded acts on, they are counted here and listed in a table only.
const LISTED: usize = 20;

/// The paragraphs of the methods.
#[must_use]
pub fn methods(data: &Data, source: &Source<'_>) -> Vec<Paragraph> {
    let mut telling = Telling::new();
    sources(&mut telling, source);
    flow(&mut telling, data, source);
    outcome(&mut telling, source);
    predictors(&mut telling, source);
    telling.done()
}

fn sources(telling: &mut Telling, source: &Source<'_>) {
    match source.rows("source files") {
        None => telling.say(source.say("The samples were read from {source files}.", &[])),
        Some(table) => {
            for row in 0..table.n_rows() {
                telling.say(read(source, table, row));
            }
        }
    }
    if let Some(table) = source.rows("join report") {
        for row in 0..table.n_rows() {
            telling.say(joined(source, table, row));
        }
    }
    if source.rows("import findings").is_some() {
        telling.say(source.say(
            "The import report lists {import findings} [finding|findings] about the tables.",
            &[],
        ));
    }
    telling.end();
}

fn read(source: &Source<'_>, table: &FactTable, row: usize) -> Paragraph {
    let entry = |paragraph: Paragraph, column: &str| {
        paragraph.entry(source.cell, "source files", table, row, column)
    };
    let mut said = Paragraph::of(if row == 0 {
        "Samples were read from the file “"
    } else {
        "Further columns were read from the file “"
    });
    said = entry(said, "file").text("”");
    let has_sheet = table
        .texts("sheet")
        .get(row)
        .is_some_and(|sheet| !sheet.is_empty() && sheet != "–");
    if has_sheet {
        said = entry(said.text(", sheet “"), "sheet").text("”");
    }
    said = entry(said.text(" ("), "bytes").text(" bytes, ");
    said = entry(said.formula("SHA-256").text(" "), "sha-256");
    let is_dated = table
        .texts("taken on")
        .get(row)
        .is_some_and(|day| !day.is_empty());
    if is_dated {
        said = entry(said.text(", taken in on "), "taken on");
    }
    said = said.text("; ");
    said = entry(said, "rows read").text(" samples or things in ");
    said = entry(said, "columns read").text(" columns; ");
    entry(said, "orientation").text(").")
}

fn joined(source: &Source<'_>, table: &FactTable, row: usize) -> Paragraph {
    let mut said = Paragraph::new();
    for (before, column) in [
        ("“", "table"),
        ("” was joined on “", "key"),
        ("” (samples that found their row: ", "matched"),
        ("; names only in the tables before: ", "only left"),
        ("; names only in this table: ", "only right"),
        (
            "; names that occurred in it more than once with differing values: ",
            "repeated",
        ),
        (
            "; most samples served by one of its rows: ",
            "samples per row",
        ),
        ("; ", "rule"),
    ] {
        // A report of an earlier version lacks some of it.
        if table.column(column).is_none() {
            continue;
        }
        said = said
            .text(before)
            .entry(source.cell, "join report", table, row, column);
    }
    said.text(").")
}

fn flow(telling: &mut Telling, data: &Data, source: &Source<'_>) {
    let units = noun::unit(Some(data));
    let samples = noun::sample(Some(data));
    let read = if data.tables.len() > 1 && source.has("samples joined") {
        format!(
            "Of {{samples read}} [{}|{}] read, {{samples joined}} remained after joining.",
            samples.one, samples.many
        )
    } else {
        format!(
            "{{samples read}} [{} was|{} were] read.",
            samples.one, samples.many
        )
    };
    telling.say(source.say(&read, &[]));
    if source.is_above_zero("samples excluded") {
        telling.say(source.say("{samples excluded} [was|were] excluded, with reasons.", &[]));
        acts(telling, source, "exclusions", "Excluded were");
    } else {
        telling.say(source.say("None was excluded.", &[]));
    }
    if source.is_above_zero("samples without outcome") {
        telling.say(source.say(
            "{samples without outcome} had no outcome and took no part.",
            &[],
        ));
    }
    if source.rows("corrections").is_some() {
        telling.say(source.say("{corrections} [value was|values were] corrected.", &[]));
        acts(telling, source, "corrections", "Corrected were");
    }
    if source.is_above_zero("sealed samples") {
        let of_units = if data.unit.is_some() {
            format!(" of {{sealed units}} [{}|{}]", units.one, units.many)
        } else {
            String::new()
        };
        telling.say(source.say(
            &format!(
                "{{sealed samples}} [{}|{}]{of_units} stayed sealed for one last check and took no \
                 part in what follows.",
                samples.one, samples.many
            ),
            &[],
        ));
    }
    if source.is_above_zero("quality-control samples") {
        telling.say(source.say(
            "{quality-control samples} quality-control [sample|samples] [was|were] measured along \
             with the others; [it is|they are] not analysed, and preparation steps may learn from \
             [it|them].",
            &[],
        ));
    }
    if data.unit.is_some() {
        telling.say(source.say(
            &format!(
                "{{samples}} [{}|{}] of {{units}} [{}|{}] were analysed. The independent unit was \
                 the {} (column “{{unit column}}”), with {{samples per unit least}} to {{samples \
                 per unit most}} {} each; samples of one {} were kept together.",
                samples.one,
                samples.many,
                units.one,
                units.many,
                units.one,
                samples.many,
                units.one
            ),
            &[],
        ));
    } else {
        telling.say(source.say(
            &format!(
                "{{samples}} [{} was|{} were] analysed, each as a unit of its own.",
                samples.one, samples.many
            ),
            &[],
        ));
    }
    if data.batch.is_some() {
        telling.say(source.say(
            "The column “{batch column}” told {batches} [batch|batches] apart.",
            &[],
        ));
        if source.has("batch association") {
            telling.say(source.say(
                "Before any fit, the association of batch and outcome was {batch association}.",
                &[],
            ));
        }
    }
    if data.order.is_some() && source.has("order association") {
        telling.say(source.say(
            "The rank correlation of the outcome with the order of measurement was {order \
             association}.",
            &[],
        ));
    }
    telling.end();
}

/// The recorded acts with their reasons, as far as a sentence can hold them.
fn acts(telling: &mut Telling, source: &Source<'_>, fact: &str, opening: &str) {
    let Some(table) = source.rows(fact) else {
        return;
    };
    if table.n_rows() > LISTED {
        return;
    }
    let mut said = Paragraph::of(format!("{opening}: "));
    for row in 0..table.n_rows() {
        let entry = |paragraph: Paragraph, column: &str| {
            paragraph.entry(source.cell, fact, table, row, column)
        };
        if row > 0 {
            said = said.text("; ");
        }
        said = entry(said, "sample");
        if table.column("column").is_some() {
            said = entry(said.text(", “"), "column");
            said = entry(said.text("” from “"), "from");
            said = entry(said.text("” to “"), "to").text("”");
        }
        said = entry(said.text(" (reason: "), "reason");
        let is_said = table
            .texts("outcome seen")
            .get(row)
            .is_some_and(|seen| seen != "not said");
        said = if is_said {
            entry(said.text("; "), "outcome seen").text(")")
        } else {
            said.text("; not said whether the outcome had been seen)")
        };
    }
    telling.say(said.text("."));
}

fn outcome(telling: &mut Telling, source: &Source<'_>) {
    let unit = source
        .facts
        .words("outcome unit")
        .is_some_and(|unit| !unit.is_empty());
    telling.say(if unit {
        source.say(
            "The outcome was “{outcome}” ({outcome kind}), in {outcome unit}.",
            &[],
        )
    } else {
        source.say("The outcome was “{outcome}” ({outcome kind}).", &[])
    });
    if source.has("outcome mean") {
        telling.say(source.say(
            "Among the samples analysed its mean was {outcome mean} and its standard deviation \
             {outcome standard deviation}, with values from {outcome least} to {outcome most}.",
            &[],
        ));
    }
    if source.has("events") {
        telling.say(source.say("{events} [event was|events were] observed.", &[]));
    }
    if source.has("reference error") {
        telling.say(source.say(
            "The standard deviation of the reference method’s own error was stated as {reference \
             error}.",
            &[],
        ));
    }
    telling.end();
}

fn predictors(telling: &mut Telling, source: &Source<'_>) {
    let range = source
        .facts
        .words("predictor range")
        .is_some_and(|range| !range.is_empty());
    telling.say(if range {
        source.say(
            "{predictors} [predictor was|predictors were] available: {predictor range}.",
            &[],
        )
    } else {
        source.say(
            "{predictors} [predictor was|predictors were] available.",
            &[],
        )
    });
    if source.is_above_zero("predictors ignored") {
        telling.say(source.say(
            "{predictors ignored} [column was|columns were] left out by choice.",
            &[],
        ));
    }
    if source.is_above_zero("covariates") {
        telling.say(source.say(
            "{covariates} [covariate|covariates] ({covariate names}) stayed in every model \
             without penalty.",
            &[],
        ));
    }
    if let Some(table) = source.rows("covariate coding") {
        for row in 0..table.n_rows() {
            let is_coded = table
                .texts("reference")
                .get(row)
                .is_some_and(|reference| !reference.is_empty());
            if is_coded {
                let entry = |paragraph: Paragraph, column: &str| {
                    paragraph.entry(source.cell, "covariate coding", table, row, column)
                };
                let said = entry(Paragraph::of("“"), "covariate").text("” entered as ");
                let said = entry(said, "coded as").text(" (");
                let said = entry(said, "other levels").text("), compared with “");
                telling.say(entry(said, "reference").text("”."));
            }
        }
    }
    if source.has("weight column") {
        telling.say(source.say(
            "Samples were weighted by the column “{weight column}”.",
            &[],
        ));
    }
    if source.is_above_zero("missing values") {
        telling.say(source.say(
            "{missing values} of the predictors’ values ({missing share}) were missing, at most \
             {largest missing share} for one predictor.",
            &[],
        ));
    } else if source.value("missing values") == Some(0.0) {
        telling.say(source.say("No value of a predictor was missing.", &[]));
    }
    if source.is_above_zero("below-limit values") {
        telling.say(source.say(
            "{below-limit values} ({below-limit share}) were only known to lie below a limit of \
             detection.",
            &[],
        ));
    }
    if source.is_above_zero("above-limit values") {
        telling.say(source.say(
            "{above-limit values} were only known to lie above a limit.",
            &[],
        ));
    }
    telling.end();
}
