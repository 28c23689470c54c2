//! The facts of a Data cell.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::data::Dataset;
use crate::eval::kind::data::design;
use crate::eval::kind::data::imported;
use crate::eval::kind::data::roles::Roles;
use crate::numeric::response::Response;
use crate::numeric::samples::Side;
use crate::study::settings::data::{Data, OutcomeSeen};
use crate::table::column::Values;
use std::collections::BTreeSet;

/// Publishes the facts of a Data cell.
pub fn publish(facts: &mut Facts, settings: &Data, roles: &Roles) {
    let data = &roles.dataset;
    imported::publish(facts, settings, roles);
    acts(facts, settings);
    flow(facts, settings, data);
    design::publish(facts, settings, roles);
    outcome(facts, data);
    predictors(facts, settings, roles);
    coding(facts, settings, data);
    gaps(facts, data);
}

pub(super) fn texts<T>(items: &[T], get: impl Fn(&T) -> String) -> Vec<String> {
    items.iter().map(get).collect()
}

pub(super) fn counts<T>(
    items: &[T],
    name: &str,
    meaning: &str,
    get: impl Fn(&T) -> usize,
) -> FactColumn {
    let values = items.iter().map(|item| get(item) as f64).collect();
    FactColumn::numbers(name, values, "", Precision::Whole, meaning)
}

pub(super) fn shown(names: &[String]) -> String {
    let mut text = names.iter().take(8).cloned().collect::<Vec<_>>().join(", ");
    if names.len() > 8 {
        text.push_str(", …");
    }
    text
}

const fn seen(outcome: OutcomeSeen) -> &'static str {
    match outcome {
        OutcomeSeen::Before => "before the outcome was seen",
        OutcomeSeen::After => "after the outcome was seen",
        OutcomeSeen::NotSaid => "not said",
    }
}

fn acts(facts: &mut Facts, settings: &Data) {
    let exclusions = settings.exclusions.as_slice();
    facts.push(Fact::count(
        "samples excluded",
        exclusions.len(),
        "How many samples were excluded, each with a reason.",
    ));
    if !exclusions.is_empty() {
        facts.push(Fact::table(
            "exclusions",
            vec![
                FactColumn::texts(
                    "sample",
                    texts(exclusions, |e| e.sample.clone()),
                    "The excluded sample.",
                ),
                FactColumn::texts(
                    "reason",
                    texts(exclusions, |e| e.reason.clone()),
                    "Why it was excluded.",
                ),
                FactColumn::texts(
                    "outcome seen",
                    texts(exclusions, |e| seen(e.outcome).to_owned()),
                    "Whether the outcome had been seen.",
                ),
            ],
            "The samples that were excluded.",
        ));
    }
    let corrections = settings.corrections.as_slice();
    facts.push(Fact::count(
        "values corrected",
        corrections.len(),
        "How many values were corrected, each with a reason.",
    ));
    if !corrections.is_empty() {
        facts.push(Fact::table(
            "corrections",
            vec![
                FactColumn::texts(
                    "sample",
                    texts(corrections, |c| c.sample.clone()),
                    "The sample.",
                ),
                FactColumn::texts(
                    "column",
                    texts(corrections, |c| c.column.clone()),
                    "The column.",
                ),
                FactColumn::texts(
                    "from",
                    texts(corrections, |c| c.from.clone()),
                    "The value that was found.",
                ),
                FactColumn::texts(
                    "to",
                    texts(corrections, |c| c.to.clone()),
                    "The value that it should be.",
                ),
                FactColumn::texts(
                    "reason",
                    texts(corrections, |c| c.reason.clone()),
                    "Why it was corrected.",
                ),
                FactColumn::texts(
                    "outcome seen",
                    texts(corrections, |c| seen(c.outcome).to_owned()),
                    "Whether the outcome had been seen.",
                ),
            ],
            "The values that were corrected.",
        ));
    }
}

fn flow(facts: &mut Facts, settings: &Data, data: &Dataset) {
    facts.push(Fact::count(
        "samples read",
        data.table.n_rows(),
        "How many samples the first table holds.",
    ));
    facts.push(Fact::count(
        "samples",
        data.analysed.len(),
        "How many samples are analysed: those read, less the excluded, the sealed and those for \
         quality control.",
    ));
    let units = data.count_units(&data.analysed);
    facts.push(Fact::count(
        "units",
        units,
        "How many independent things the analysed samples belong to; the sample size that counts.",
    ));
    if let Some(column) = &data.unit_column {
        facts.push(Fact::text(
            "unit column",
            column.clone(),
            "The column that names the units.",
        ));
        let mut sizes = vec![0_usize; data.unit_names.len()];
        data.analysed
            .iter()
            .for_each(|&at| sizes[data.units[at]] += 1);
        sizes.retain(|size| *size > 0);
        facts.push(Fact::count(
            "samples per unit least",
            sizes.iter().copied().min().unwrap_or(0),
            "The smallest number of samples of one unit.",
        ));
        facts.push(Fact::count(
            "samples per unit most",
            sizes.iter().copied().max().unwrap_or(0),
            "The largest number of samples of one unit.",
        ));
    }
    if let (Some(column), Some(batches)) = (&data.batch_column, &data.batches) {
        let mut present: Vec<usize> = data.analysed.iter().map(|&at| batches[at]).collect();
        present.sort_unstable();
        present.dedup();
        facts.push(Fact::text(
            "batch column",
            column.clone(),
            "The column that names the batches.",
        ));
        facts.push(Fact::count(
            "batches",
            present.len(),
            "How many batches the analysed samples come from.",
        ));
    }
    if !data.sealed.is_empty() {
        facts.push(Fact::count(
            "sealed samples",
            data.sealed.len(),
            "How many samples are kept for one last check.",
        ));
        facts.push(Fact::count(
            "sealed units",
            data.count_units(&data.sealed),
            "How many units are kept for one last check.",
        ));
    }
    let marked = data.quality_control();
    if settings.quality_control.is_some() {
        facts.push(Fact::count(
            "quality-control samples",
            marked.len(),
            "How many samples are measured for quality control; they are not analysed.",
        ));
    }
    if settings.weight.is_some() {
        facts.push(Fact::text(
            "weight column",
            settings.weight.clone().unwrap_or_default(),
            "The column with sample weights.",
        ));
    }
}

fn outcome(facts: &mut Facts, data: &Dataset) {
    let info = &data.outcome;
    facts.push(Fact::text(
        "outcome",
        info.name.clone(),
        "What is predicted.",
    ));
    if !info.unit.is_empty() {
        facts.push(Fact::text(
            "outcome unit",
            info.unit.clone(),
            "The unit of the outcome.",
        ));
    }
    let kind = match data.response {
        Response::Measured(_) => "measured quantity",
        Response::YesNo(_) => "yes or no",
        Response::Classes { .. } => "one of several classes",
        Response::Count { .. } => "count",
        Response::Time { .. } => "time to an event",
    };
    facts.push(Fact::text(
        "outcome kind",
        kind,
        "What sort of thing is predicted.",
    ));
    let values: Vec<f64> = match &data.response {
        Response::Measured(values)
        | Response::Count { count: values, .. }
        | Response::Time { time: values, .. } => {
            data.analysed.iter().map(|&at| values[at]).collect()
        }
        Response::YesNo(_) | Response::Classes { .. } => Vec::new(),
    };
    if !values.is_empty() {
        let n = values.len() as f64;
        let mean = values.iter().sum::<f64>() / n;
        let sd = (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (n - 1.0)).sqrt();
        let least = values.iter().copied().fold(f64::INFINITY, f64::min);
        let most = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let precision = Precision::Decimals(crate::base::number::decimals_for(sd, 3));
        let mut push = |name: &str, value: f64, meaning: &str| {
            facts.push(Fact::number(name, value, &info.unit, precision, meaning));
        };
        push(
            "outcome mean",
            mean,
            "The mean of the outcome over the analysed samples.",
        );
        push(
            "outcome standard deviation",
            sd,
            "The standard deviation of the outcome over the analysed samples (divisor n − 1).",
        );
        push(
            "outcome least",
            least,
            "The smallest outcome among the analysed samples.",
        );
        push(
            "outcome most",
            most,
            "The largest outcome among the analysed samples.",
        );
    }
    if let Some(error) = info.reference_error {
        facts.push(Fact::number(
            "reference error",
            error,
            &info.unit,
            Precision::Significant(3),
            "The standard deviation of the reference method's own error, as stated by the user.",
        ));
    }
    let members: Option<Vec<usize>> = match &data.response {
        Response::YesNo(events) => Some(events.iter().map(|event| usize::from(*event)).collect()),
        Response::Classes { class, .. } => Some(class.clone()),
        Response::Measured(_) | Response::Count { .. } | Response::Time { .. } => None,
    };
    if let Some(members) = members {
        let classes = &info.classes;
        let count = |class: usize| {
            data.analysed
                .iter()
                .filter(|&&at| members[at] == class)
                .count()
        };
        let index: Vec<usize> = (0..classes.len()).collect();
        facts.push(Fact::table(
            "outcome classes",
            vec![
                FactColumn::texts("class", classes.clone(), "The class."),
                counts(
                    &index,
                    "samples",
                    "How many analysed samples are of this class.",
                    |&class| count(class),
                ),
            ],
            "The classes of the outcome.",
        ));
    }
    if let Response::Time { event, .. } | Response::YesNo(event) = &data.response {
        let happened: Vec<usize> = data
            .analysed
            .iter()
            .copied()
            .filter(|&at| event[at])
            .collect();
        if data.unit_column.is_some() {
            facts.push(Fact::count(
                "units with events",
                data.count_units(&happened),
                "How many units have an analysed sample with the event.",
            ));
        }
        let events = happened.len();
        facts.push(Fact::count(
            "events",
            events,
            "How many analysed samples had the event, or of yes/no answered yes.",
        ));
    }
}

fn predictors(facts: &mut Facts, settings: &Data, roles: &Roles) {
    let data = &roles.dataset;
    facts.push(Fact::count(
        "predictors",
        data.predictor_names.len(),
        "How many predictors there are before preparation.",
    ));
    facts.push(Fact::text(
        "predictor range",
        roles.predictor_range.clone(),
        "The predictors as ranges of columns.",
    ));
    if !data.axis_unit.is_empty() {
        facts.push(Fact::text(
            "axis unit",
            data.axis_unit.clone(),
            "The unit of the predictors' axis.",
        ));
    }
    facts.push(Fact::count(
        "predictors ignored",
        settings.ignored.len(),
        "How many columns were left out by choice.",
    ));
    if !roles.text_columns.is_empty() {
        facts.push(Fact::text(
            "text columns",
            shown(&roles.text_columns),
            "Columns that hold text and were therefore not taken as predictors.",
        ));
    }
    facts.push(Fact::count(
        "covariates",
        data.covariate_names.len(),
        "How many columns are always in the model, unpenalised.",
    ));
    if !data.covariate_names.is_empty() {
        facts.push(Fact::text("covariate names", data.covariate_names.join(", "), "The columns that are always in the model; a category is one column per level but its first."));
    }
}

/// How each covariate enters the model: as a number, or as one column for every level but one.
fn coding(facts: &mut Facts, settings: &Data, data: &Dataset) {
    struct Coded {
        name: String,
        how: &'static str,
        reference: String,
        levels: String,
    }
    let coded: Vec<Coded> = settings
        .covariates
        .iter()
        .filter_map(|name| {
            let column = data.table.column(name)?;
            let name = name.clone();
            Some(match &column.values {
                Values::Numbers(_) => Coded {
                    name,
                    how: "a number",
                    reference: String::new(),
                    levels: String::new(),
                },
                Values::Texts(texts) => {
                    let levels: BTreeSet<&str> = data
                        .table_rows
                        .iter()
                        .filter_map(|&row| texts[row].as_deref())
                        .collect();
                    let mut levels = levels.into_iter();
                    Coded {
                        name,
                        how: "one column for each other level",
                        reference: levels.next().unwrap_or_default().to_owned(),
                        levels: levels.collect::<Vec<_>>().join(", "),
                    }
                }
            })
        })
        .collect();
    if coded.is_empty() {
        return;
    }
    facts.push(Fact::table(
        "covariate coding",
        vec![
            FactColumn::texts(
                "covariate",
                texts(&coded, |c| c.name.clone()),
                "The covariate.",
            ),
            FactColumn::texts(
                "coded as",
                texts(&coded, |c| c.how.to_owned()),
                "How it enters the model.",
            ),
            FactColumn::texts(
                "reference",
                texts(&coded, |c| c.reference.clone()),
                "The level with which the others are compared; the first by its letters.",
            ),
            FactColumn::texts(
                "other levels",
                texts(&coded, |c| c.levels.clone()),
                "The levels with a column of their own.",
            ),
        ],
        "How covariates are coded.",
    ));
}

fn gaps(facts: &mut Facts, data: &Dataset) {
    let rows = &data.analysed;
    let n = rows.len();
    let p = data.predictor_names.len();
    let cells = (n * p) as f64;
    let is_analysed = |row: usize| rows.binary_search(&row).is_ok();
    let side = |wanted: Side| {
        data.samples
            .limits
            .iter()
            .filter(|l| l.side == wanted && is_analysed(l.row))
            .count()
    };
    let (below, above) = (side(Side::Below), side(Side::Above));
    let mut not_numbers = 0;
    let mut largest = 0;
    for column in 0..p {
        let values = data.samples.column(column);
        let gaps = rows.iter().filter(|&&row| values[row].is_nan()).count();
        not_numbers += gaps;
        let limits = if data.samples.limits.is_empty() {
            0
        } else {
            data.samples
                .limits
                .iter()
                .filter(|l| l.column == column && is_analysed(l.row))
                .count()
        };
        largest = largest.max(gaps - limits);
    }
    let missing = not_numbers - below - above;
    let share = |count: usize| count as f64 / cells;
    facts.push(Fact::count(
        "missing values",
        missing,
        "How many predictor values of the analysed samples are missing.",
    ));
    facts.push(Fact::number(
        "missing share",
        share(missing),
        "",
        Precision::Percent(1),
        "The share of predictor values that is missing.",
    ));
    facts.push(Fact::number(
        "largest missing share",
        largest as f64 / n as f64,
        "",
        Precision::Percent(0),
        "The largest share that is missing of one predictor.",
    ));
    facts.push(Fact::count(
        "below-limit values",
        below,
        "How many predictor values are only known to lie below a limit.",
    ));
    facts.push(Fact::number(
        "below-limit share",
        share(below),
        "",
        Precision::Percent(1),
        "The share of predictor values that is only known to lie below a limit.",
    ));
    facts.push(Fact::count(
        "above-limit values",
        above,
        "How many predictor values are only known to lie above a limit.",
    ));
}
