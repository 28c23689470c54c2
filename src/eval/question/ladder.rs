//! How honest is each number?

use crate::base::number::Precision;
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::eval::caveat::{batches_are_harder, ungrouped_flatters};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::error_digits;
use crate::eval::kind::fit::{
    Fitted, Interval, Measures, errors_by_unit, halted, interval, numeric_procedure, parts_params,
    performance,
};
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::question::agreement::not_judged;
use crate::numeric::parts::{self, PartsParams, Split, Structure, assign};
use crate::numeric::procedure::{
    Halt, HeldOut, Level, Material, ProcedureError, nested, one_split,
};
use crate::study::settings::fit::{Judge, Strength};
use crate::study::settings::question::Seal;

/// One rung: a way of judging, from the most flattering to the most severe.
#[derive(Debug)]
struct Rung {
    step: &'static str,
    held_out: String,
    measures: Option<Measures>,
    interval: Option<Interval>,
    n_samples: usize,
    remark: String,
}

/// Answers by judging the same procedure in harder and harder ways.
pub fn answer(
    fitted: &Fitted,
    seal: Seal,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Outcome, Ended> {
    let Some(judged) = &fitted.judged else {
        return Err(not_judged().into());
    };
    let data = &fitted.prepared.data;
    let rows = &data.analysed;
    let observed: Vec<f64> = rows.iter().map(|&row| fitted.observed()[row]).collect();
    let word = data.unit_word();
    let mut rungs = vec![Rung {
        step: "apparent",
        held_out: "nothing".to_owned(),
        measures: Some(Measures::of(&observed, &fitted.last.fitted)),
        interval: None,
        n_samples: rows.len(),
        remark: "on the samples that the model was fitted to".to_owned(),
    }];
    rungs.extend(tuning(fitted, &observed));
    let repeats_units = data.unit_column.is_some() && data.count_units(rows) < rows.len();
    if repeats_units {
        let (measures, interval) = rows_split(fitted, threads, &work.part(0.0..0.45))
            .map_err(|halt| halted(halt, &fitted.prepared, &fitted.settings))?;
        rungs.push(Rung {
            step: "rows split",
            held_out: "single samples".to_owned(),
            measures: Some(measures),
            interval: Some(interval),
            n_samples: rows.len(),
            remark: format!("repeats of one {word} stand on both sides, which flatters"),
        });
    }
    let nested_performance = performance(&judged.held_out, data, rows, fitted.observed());
    rungs.push(Rung {
        step: "nested",
        held_out: format!("whole {word}s"),
        measures: Some(nested_performance.mean),
        interval: Some(interval(
            &nested_performance.errors.model,
            &nested_performance.errors.sizes,
        )),
        n_samples: rows.len(),
        remark: "the number to quote for new units from the same batches".to_owned(),
    });
    let mut batch_word = String::new();
    if let Some(column) = &data.batch_column {
        batch_word.clone_from(column);
        rungs.push(
            whole_batches(fitted, column, threads, &work.part(0.45..0.9))
                .map_err(|halt| halted(halt, &fitted.prepared, &fitted.settings))?,
        );
    }
    if !data.sealed.is_empty() {
        rungs.push(match seal {
            Seal::Closed => Rung {
                step: "sealed set",
                held_out: "the sealed samples".to_owned(),
                measures: None,
                interval: None,
                n_samples: data.sealed.len(),
                remark: "sealed, not opened".to_owned(),
            },
            Seal::Opened => sealed(fitted, &work.part(0.9..1.0))
                .map_err(|halt| halted(halt, &fitted.prepared, &fitted.settings))?,
        });
    }
    let variance = mean_square(&observed);
    let facts = publish(fitted, &rungs, variance);
    let r2 = |step: &str| {
        rungs
            .iter()
            .find(|rung| rung.step == step)
            .and_then(|rung| rung.measures)
            .map(|m| m.r2)
    };
    let caveats = [
        r2("rows split").and_then(|split| ungrouped_flatters::check(split, r2("nested")?, word)),
        r2("whole batches held out")
            .and_then(|batch| batches_are_harder::check(r2("nested")?, batch, &batch_word)),
    ];
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats: caveats.into_iter().flatten().collect(),
    })
}

fn mean_square(observed: &[f64]) -> f64 {
    let mean = observed.iter().sum::<f64>() / observed.len() as f64;
    observed.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / observed.len() as f64
}

fn tuning(fitted: &Fitted, observed: &[f64]) -> Option<Rung> {
    let last = &fitted.last;
    let curve = last.curves.get(last.share_at)?;
    if curve.standard_errors.is_empty() {
        return None;
    }
    let error = curve.errors[last.strength_at];
    let measures = Measures {
        rmse: error.max(0.0).sqrt(),
        r2: 1.0 - error / mean_square(observed),
        mae: f64::NAN,
        bias: f64::NAN,
        sep: f64::NAN,
        slope: f64::NAN,
        intercept: f64::NAN,
        correlation: f64::NAN,
    };
    Some(Rung {
        step: "tuning",
        held_out: "inner parts".to_owned(),
        measures: Some(measures),
        interval: None,
        n_samples: observed.len(),
        remark: "the error that chose the penalty, so it flatters".to_owned(),
    })
}

/// The plan of the fit's own judgement with fewer repeats: the other rungs are there to be
/// compared, and two repeats tell enough.
fn outer_params(fitted: &Fitted, most_repeats: usize) -> PartsParams {
    match fitted.settings.judge {
        Judge::Nested(plan) => {
            let params = parts_params(plan, fitted.settings.seed);
            PartsParams {
                repeats: params.repeats.min(most_repeats),
                ..params
            }
        }
        Judge::Declined => PartsParams {
            scheme: parts::Scheme::Random,
            parts: 5,
            repeats: 1,
            seed: fitted.settings.seed,
        },
    }
}

fn judge(
    fitted: &Fitted,
    material: &Material<'_>,
    params: &PartsParams,
    purpose: &str,
    threads: Threads,
    work: &Work<'_>,
) -> Result<HeldOut, Halt> {
    let procedure = numeric_procedure(&fitted.settings, &fitted.prepared);
    let plan = assign(
        params,
        &fitted.prepared.data.analysed,
        &material.structure,
        purpose,
    )
    .map_err(|error| ProcedureError::Plan {
        level: Level::Outer,
        error,
    })?;
    nested(material, &procedure, &plan, purpose, threads, work)
}

/// What ignoring the units would claim: samples split one by one, at both levels.
fn rows_split(
    fitted: &Fitted,
    threads: Threads,
    work: &Work<'_>,
) -> Result<(Measures, Interval), Halt> {
    let data = &fitted.prepared.data;
    let each_its_own: Vec<usize> = (0..data.names.len()).collect();
    let material = fitted.prepared.material();
    let structure = Structure {
        units: &each_its_own,
        ..material.structure
    };
    let material = Material {
        structure,
        ..material
    };
    let params = PartsParams {
        scheme: parts::Scheme::Random,
        ..outer_params(fitted, 2)
    };
    let held_out = judge(fitted, &material, &params, "rows split", threads, work)?;
    let found = performance(&held_out, data, &data.analysed, fitted.observed());
    let interval = interval(&found.errors.model, &found.errors.sizes);
    Ok((found.mean, interval))
}

fn whole_batches(
    fitted: &Fitted,
    column: &str,
    threads: Threads,
    work: &Work<'_>,
) -> Result<Rung, Halt> {
    let data = &fitted.prepared.data;
    let mut present: Vec<usize> = data
        .batches
        .as_ref()
        .map(|batches| data.analysed.iter().map(|&row| batches[row]).collect())
        .unwrap_or_default();
    present.sort_unstable();
    present.dedup();
    let rung = |measures, interval, remark: String| Rung {
        step: "whole batches held out",
        held_out: format!("whole {column}s"),
        measures,
        interval,
        n_samples: data.analysed.len(),
        remark,
    };
    if present.len() < 2 {
        return Ok(rung(None, None, "there is only one batch".to_owned()));
    }
    let params = PartsParams {
        scheme: parts::Scheme::WholeBatches,
        parts: present.len(),
        ..outer_params(fitted, 1)
    };
    match judge(
        fitted,
        &fitted.prepared.material(),
        &params,
        "whole batches",
        threads,
        work,
    ) {
        Ok(held_out) => {
            let found = performance(&held_out, data, &data.analysed, fitted.observed());
            let interval = interval(&found.errors.model, &found.errors.sizes);
            Ok(rung(
                Some(found.mean),
                Some(interval),
                format!("the number to quote for a new {column}"),
            ))
        }
        // A unit that spans all batches leaves nothing to hold out: that is an answer, too.
        Err(Halt::Failed(ProcedureError::Plan { .. })) => Ok(rung(
            None,
            None,
            format!("{column}s cannot be held out one by one, because units span them"),
        )),
        Err(halt) => Err(halt),
    }
}

/// The final fit on the sealed samples. The procedure is carried out once more on the analysed
/// samples, exactly as before, and predicts the sealed ones.
fn sealed(fitted: &Fitted, work: &Work<'_>) -> Result<Rung, Halt> {
    let data = &fitted.prepared.data;
    let material = fitted.prepared.material();
    let procedure = numeric_procedure(&fitted.settings, &fitted.prepared);
    let split = Split::with_held_out(&data.analysed, &data.sealed, &material.structure).map_err(
        |error| ProcedureError::Plan {
            level: Level::Outer,
            error,
        },
    )?;
    let (fit, _) = one_split(&material, &procedure, &split, "final", work)?;
    let observed: Vec<f64> = fit.rows.iter().map(|&row| fitted.observed()[row]).collect();
    let squares: Vec<f64> = fit
        .predicted
        .iter()
        .zip(&observed)
        .map(|(p, o)| (p - o).powi(2))
        .collect();
    let errors = errors_by_unit(data, &fit.rows, &squares, &squares);
    Ok(Rung {
        step: "sealed set",
        held_out: "the sealed samples".to_owned(),
        measures: Some(Measures::of(&observed, &fit.predicted)),
        interval: Some(interval(&errors.model, &errors.sizes)),
        n_samples: fit.rows.len(),
        remark: match fitted.settings.strength {
            Strength::ByHand(_) | Strength::Chosen { .. } => {
                "opened; each opening is counted".to_owned()
            }
        },
    })
}

fn publish(fitted: &Fitted, rungs: &[Rung], variance: f64) -> Facts {
    let unit = &fitted.prepared.data.outcome.unit;
    let digits = error_digits(fitted);
    let share = Precision::Decimals(3);
    let mut facts = Facts::new();
    let prefix = |step: &str| match step {
        "rows split" => "ungrouped".to_owned(),
        "whole batches held out" => "batch".to_owned(),
        "sealed set" => "sealed".to_owned(),
        other => other.to_owned(),
    };
    for rung in rungs {
        let Some(m) = rung.measures else { continue };
        let name = prefix(rung.step);
        let mut push = |what: &str, value: f64, unit: &str, precision: Precision, meaning: &str| {
            facts.push(Fact::number(
                &format!("{name} {what}"),
                value,
                unit,
                precision,
                meaning,
            ));
        };
        push(
            "r²",
            m.r2,
            "",
            share,
            &format!("R² with {} held out: {}.", rung.held_out, rung.remark),
        );
        push(
            "rmse",
            m.rmse,
            unit,
            digits,
            &format!(
                "Root mean squared error with {} held out: {}.",
                rung.held_out, rung.remark
            ),
        );
        if rung.step == "sealed set" {
            push(
                "bias",
                m.bias,
                unit,
                digits,
                "Mean of predicted minus observed values of the sealed samples.",
            );
            push(
                "slope",
                m.slope,
                "",
                share,
                "Slope of the line of observed on predicted values of the sealed samples.",
            );
            push(
                "samples",
                rung.n_samples as f64,
                "",
                Precision::Whole,
                "How many sealed samples were predicted.",
            );
        }
    }
    let of = |get: &dyn Fn(&Rung) -> f64| rungs.iter().map(get).collect::<Vec<f64>>();
    let measure = |get: fn(&Measures) -> f64| {
        of(&move |rung: &Rung| rung.measures.as_ref().map_or(f64::NAN, get))
    };
    // R² of a sealed set is about its own mean; an interval from the analysed samples' variance
    // would not belong to it.
    let r2_end = |end: fn(&Interval) -> f64| {
        of(&move |rung: &Rung| match (&rung.interval, rung.step) {
            (Some(_), "sealed set") | (None, _) => f64::NAN,
            (Some(interval), _) => 1.0 - end(interval) / variance,
        })
    };
    let texts = |get: fn(&Rung) -> String| rungs.iter().map(get).collect::<Vec<String>>();
    facts.push(Fact::table(
        "ladder",
        vec![
            FactColumn::texts(
                "step",
                texts(|rung| rung.step.to_owned()),
                "The way of judging.",
            ),
            FactColumn::texts(
                "what is held out",
                texts(|rung| rung.held_out.clone()),
                "What the fits had not seen.",
            ),
            FactColumn::numbers(
                "r²",
                measure(|m| m.r2),
                "",
                share,
                "R²: 1 − SSE/SST, SST about the mean of the samples judged.",
            ),
            FactColumn::numbers(
                "r² low",
                r2_end(|i| i.high),
                "",
                share,
                "Lower end of a 95 % interval over units; it is about the procedure.",
            ),
            FactColumn::numbers(
                "r² high",
                r2_end(|i| i.low.max(0.0)),
                "",
                share,
                "Upper end of the same interval.",
            ),
            FactColumn::numbers(
                "rmse",
                measure(|m| m.rmse),
                unit,
                digits,
                "Root mean squared error.",
            ),
            FactColumn::numbers(
                "samples",
                of(&|rung: &Rung| rung.n_samples as f64),
                "",
                Precision::Whole,
                "How many samples were judged.",
            ),
            FactColumn::texts(
                "remark",
                texts(|rung| rung.remark.clone()),
                "What the number means.",
            ),
        ],
        "The same procedure judged in harder and harder ways.",
    ));
    facts
}
