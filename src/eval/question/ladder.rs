//! How honest is each number?

use crate::base::number::Precision;
use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::eval::caveat::{batches_are_harder, ungrouped_flatters};
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::Ended;
use crate::eval::kind::fit::{
    Fitted, Measure, Measures, Performance, Sort, error_digits, halted, numeric_measure,
    parts_params, performance, performance_of_one,
};
use crate::eval::outcome::{Gives, Outcome};
use crate::eval::question::agreement::not_judged;
use crate::numeric::parts::{self, PartsParams, PlanError, Split, Structure, assign};
use crate::numeric::procedure::{
    ErrorMeasure, Halt, HeldOut, Level, Material, ProcedureError, nested, one_split,
};
use crate::study::settings::fit::Judge;
use crate::study::settings::question::Seal;

/// One rung: a way of judging, from the most flattering to the most severe.
#[derive(Debug)]
struct Rung {
    step: &'static str,
    held_out: String,
    measures: Option<Measures>,
    /// The interval of the main measure.
    interval: Option<(f64, f64)>,
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
    let scene = fitted.scene();
    let main = fitted.sort().main();
    let word = data.unit_word();
    let mut rungs = vec![Rung {
        step: "apparent",
        held_out: "nothing".to_owned(),
        measures: Some(scene.measures(&fitted.last.apparent)),
        interval: None,
        n_samples: rows.len(),
        remark: "on the samples that the model was fitted to".to_owned(),
    }];
    rungs.extend(tuning(fitted));
    let repeats_units = data.unit_column.is_some() && data.count_units(rows) < rows.len();
    if repeats_units {
        let found = rows_split(fitted, threads, &work.part(0.0..0.45))
            .map_err(|halt| halted(halt, &fitted.prepared, &fitted.settings))?;
        rungs.push(Rung {
            step: "rows split",
            held_out: "single samples".to_owned(),
            interval: ends(&found, main),
            measures: Some(found.mean),
            n_samples: rows.len(),
            remark: format!("repeats of one {word} stand on both sides, which flatters"),
        });
    }
    let nested_performance = performance(&scene, data, &judged.held_out);
    rungs.push(Rung {
        step: "nested",
        held_out: format!("whole {word}s"),
        interval: ends(&nested_performance, main),
        measures: Some(nested_performance.mean),
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
    let facts = publish(fitted, &rungs);
    let value = |step: &str| {
        rungs
            .iter()
            .find(|rung| rung.step == step)
            .and_then(|rung| rung.measures.as_ref())
            .map(|measures| measures.get(main))
    };
    let caveats = [
        value("rows split")
            .and_then(|split| ungrouped_flatters::check(main, split, value("nested")?, word)),
        value("whole batches held out").and_then(|batch| {
            batches_are_harder::check(main, value("nested")?, batch, &batch_word)
        }),
    ];
    Ok(Outcome {
        gives: Gives::Facts,
        facts,
        caveats: caveats.into_iter().flatten().collect(),
    })
}

fn ends(found: &Performance, main: Measure) -> Option<(f64, f64)> {
    let own = found
        .intervals
        .iter()
        .find(|(measure, ..)| *measure == main);
    own.map(|(_, low, high)| (*low, *high))
}

/// The error that chose the strength, as far as it can stand beside the others.
fn tuning(fitted: &Fitted) -> Option<Rung> {
    let last = &fitted.last;
    let curve = last.curves.get(last.share_at)?;
    if curve.standard_errors.is_empty() {
        return None;
    }
    let error = curve.errors[last.strength_at];
    let null = fitted.scene().null_loss();
    let mut measures = Measures::default();
    let chosen_by = numeric_measure(fitted.settings.measure, &fitted.response);
    match (fitted.sort(), chosen_by) {
        (Sort::Measured, _) => {
            measures.set(Measure::Rmse, error.max(0.0).sqrt());
            measures.set(Measure::R2, 1.0 - error / null);
        }
        (Sort::YesNo | Sort::Classes, ErrorMeasure::Deviance) => {
            measures.set(Measure::LogLoss, error / 2.0);
        }
        (Sort::Count, ErrorMeasure::Deviance) => {
            measures.set(Measure::Deviance, error);
            measures.set(Measure::DevianceExplained, 1.0 - error / null);
        }
        (Sort::Classes, ErrorMeasure::Misclassification) => {
            measures.set(Measure::Accuracy, 1.0 - error);
        }
        (Sort::YesNo, ErrorMeasure::Concordance) => measures.set(Measure::Area, 1.0 - error),
        (Sort::Time, ErrorMeasure::Concordance) => {
            measures.set(Measure::Concordance, 1.0 - error);
        }
        (Sort::YesNo | Sort::Classes | Sort::Count | Sort::Time, _) => {}
    }
    let remark = if measures.get(fitted.sort().main()).is_finite() {
        "the error that chose the penalty, so it flatters"
    } else {
        "chosen by another measure of error"
    };
    Some(Rung {
        step: "tuning",
        held_out: "inner parts".to_owned(),
        measures: Some(measures),
        interval: None,
        n_samples: fitted.prepared.data.analysed.len(),
        remark: remark.to_owned(),
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
    let procedure = fitted.procedure();
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
fn rows_split(fitted: &Fitted, threads: Threads, work: &Work<'_>) -> Result<Performance, Halt> {
    let data = &fitted.prepared.data;
    let each_its_own: Vec<usize> = (0..data.names.len()).collect();
    let material = fitted.material();
    let structure = Structure {
        units: &each_its_own,
        ..material.structure
    };
    let material = Material {
        structure,
        ..material
    };
    let usual = outer_params(fitted, 2);
    let params = PartsParams {
        scheme: match usual.scheme {
            parts::Scheme::Balanced => parts::Scheme::Balanced,
            parts::Scheme::Random
            | parts::Scheme::WholeBatches
            | parts::Scheme::LeaveOneUnitOut
            | parts::Scheme::Blocked => parts::Scheme::Random,
        },
        ..usual
    };
    let held_out = judge(fitted, &material, &params, "rows split", threads, work)?;
    Ok(performance(&fitted.scene(), data, &held_out))
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
        &fitted.material(),
        &params,
        "whole batches",
        threads,
        work,
    ) {
        Ok(held_out) => {
            let found = performance(&fitted.scene(), data, &held_out);
            let interval = ends(&found, fitted.sort().main());
            Ok(rung(
                Some(found.mean),
                interval,
                format!("the number to quote for a new {column}"),
            ))
        }
        // A batch with the only events or the only samples of a class cannot be held out either.
        Err(Halt::Failed(ProcedureError::Plan {
            error: PlanError::TrainingLacksStratum { .. } | PlanError::OneStratum { .. },
            ..
        })) => Ok(rung(
            None,
            None,
            format!("without one {column} a class or the events would be missing"),
        )),
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
    let material = fitted.material();
    let procedure = fitted.procedure();
    let split = Split::with_held_out(&data.analysed, &data.sealed, &material.structure).map_err(
        |error| ProcedureError::Plan {
            level: Level::Outer,
            error,
        },
    )?;
    let (fit, _) = one_split(&material, &procedure, &split, "final", work)?;
    let found = performance_of_one(&fitted.scene_of(&fit.rows), data, &fit);
    // R² and the share of deviance are about the sealed samples' own mean; their interval would be
    // about the losses only.
    let interval = match fitted.sort() {
        Sort::Measured | Sort::Count => None,
        Sort::YesNo | Sort::Classes | Sort::Time => ends(&found, fitted.sort().main()),
    };
    Ok(Rung {
        step: "sealed set",
        held_out: "the sealed samples".to_owned(),
        interval,
        measures: Some(found.mean),
        n_samples: fit.rows.len(),
        remark: "opened; each opening is counted".to_owned(),
    })
}

fn publish(fitted: &Fitted, rungs: &[Rung]) -> Facts {
    let sort = fitted.sort();
    let (main, error) = (sort.main(), sort.error());
    let unit = &fitted.prepared.data.outcome.unit;
    let digits = error_digits(fitted);
    let mut facts = Facts::new();
    facts.push(Fact::text(
        "measure",
        main.title(),
        "What the steps of the ladder are compared by; more is better.",
    ));
    let prefix = |step: &str| match step {
        "rows split" => "ungrouped".to_owned(),
        "whole batches held out" => "batch".to_owned(),
        "sealed set" => "sealed".to_owned(),
        other => other.to_owned(),
    };
    for rung in rungs {
        let Some(measures) = &rung.measures else {
            continue;
        };
        let name = prefix(rung.step);
        let mut push = |measure: Measure, meaning: &str| {
            let value = measures.get(measure);
            if value.is_finite() || sort == Sort::Measured {
                facts.push(Fact::number(
                    &format!("{name} {}", measure.name()),
                    value,
                    measure.unit(unit),
                    measure.digits(digits),
                    meaning,
                ));
            }
        };
        for measure in [main, error] {
            let what = measure.meaning(sort);
            let (held_out, remark) = (&rung.held_out, &rung.remark);
            push(
                measure,
                &format!("{what}, with {held_out} held out: {remark}."),
            );
        }
        if rung.step == "sealed set" {
            match sort {
                Sort::Measured => {
                    push(
                        Measure::Bias,
                        "Mean of predicted minus observed values of the sealed samples.",
                    );
                    push(
                        Measure::Slope,
                        "Slope of the line of observed on predicted values of the sealed samples.",
                    );
                }
                Sort::YesNo | Sort::Count | Sort::Time => {
                    push(
                        Measure::CalibrationSlope,
                        Measure::CalibrationSlope.meaning(sort),
                    );
                }
                Sort::Classes => {}
            }
            facts.push(Fact::number(
                "sealed samples",
                rung.n_samples as f64,
                "",
                Precision::Whole,
                "How many sealed samples were predicted.",
            ));
        }
    }
    let of = |get: &dyn Fn(&Rung) -> f64| rungs.iter().map(get).collect::<Vec<f64>>();
    let measure = |wanted: Measure| {
        of(&move |rung: &Rung| rung.measures.as_ref().map_or(f64::NAN, |m| m.get(wanted)))
    };
    let end = |end: fn(&(f64, f64)) -> f64| {
        of(&move |rung: &Rung| rung.interval.as_ref().map_or(f64::NAN, end))
    };
    let texts = |get: fn(&Rung) -> String| rungs.iter().map(get).collect::<Vec<String>>();
    let shown = |name: &str, measure: Measure, values: Vec<f64>, meaning: &str| {
        FactColumn::numbers(
            name,
            values,
            measure.unit(unit),
            measure.digits(digits),
            meaning,
        )
    };
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
            shown(
                main.name(),
                main,
                measure(main),
                &format!("{}.", main.meaning(sort)),
            ),
            shown(
                &format!("{} low", main.name()),
                main,
                end(|ends| ends.0),
                "Lower end of a 95 % interval over units; it is about the procedure.",
            ),
            shown(
                &format!("{} high", main.name()),
                main,
                end(|ends| ends.1),
                "Upper end of the same interval.",
            ),
            shown(
                error.name(),
                error,
                measure(error),
                &format!("{}.", error.meaning(sort)),
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
