//! The facts of a Prepare cell.

use crate::base::number::Precision;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::kind::prepare::Prepared;
use crate::eval::kind::prepare::preview::{Part, Seen, Side, Stage};
use crate::eval::kind::step::{parameters, source, step_name};
use crate::numeric::samples::Origin;
use crate::study::settings::prepare::{Step, StepClass};

/// So many columns of each followed sample are shown.
const SHOWN: usize = 100;

/// Publishes what the steps are and what they do.
pub(super) fn publish(facts: &mut Facts, prepared: &Prepared, seen: &Seen) {
    let steps = &prepared.steps;
    let of_class = |wanted: &[StepClass]| {
        steps
            .iter()
            .filter(|step| wanted.contains(&step.class()))
            .count()
    };
    let count = |facts: &mut Facts, name: &str, value: usize, meaning: &str| {
        facts.push(Fact::count(name, value, meaning));
    };
    count(
        facts,
        "steps",
        steps.len(),
        "How many preparation steps are taken.",
    );
    count(
        facts,
        "learned steps",
        of_class(&[StepClass::Learned, StepClass::LearnedWithOutcome]),
        "How many steps are learnt from samples, and so learnt anew in every training part.",
    );
    let with_outcome = of_class(&[StepClass::LearnedWithOutcome]);
    if with_outcome > 0 {
        count(
            facts,
            "steps learned with the outcome",
            with_outcome,
            "How many of the learned steps look at the outcome of the training samples.",
        );
    }
    if prepared.before_averaging.is_some() {
        count(
            facts,
            "samples entering",
            prepared.measured.analysed.len(),
            "How many analysed samples there are before those of each unit are averaged.",
        );
        count(
            facts,
            "samples leaving",
            prepared.data.analysed.len(),
            "How many samples are left when those of each unit are averaged.",
        );
    }
    let (entering, leaving) = (first(&seen.left), last(&seen.left));
    count(
        facts,
        "predictors entering",
        entering,
        "How many predictors enter the preparation.",
    );
    count(
        facts,
        "predictors leaving",
        leaving,
        "How many predictors come through when the steps are learnt from all samples; inside a \
         training part it can be another number.",
    );
    facts.push(step_list(steps, seen));
    if !seen.stages.is_empty() {
        facts.push(effects(steps, seen));
        facts.push(followed(prepared, seen));
    }
}

fn first(counts: &[usize]) -> usize {
    counts.first().copied().unwrap_or(0)
}

fn last(counts: &[usize]) -> usize {
    counts.last().copied().unwrap_or(0)
}

fn step_list(steps: &[Step], seen: &Seen) -> Fact {
    let texts = |text: &dyn Fn(&Step) -> String| steps.iter().map(text).collect::<Vec<_>>();
    let change = |at: usize| seen.left[at + 1] as f64 - seen.left[at] as f64;
    Fact::table(
        "step list",
        vec![
            FactColumn::texts(
                "step",
                texts(&|step| step_name(step).to_owned()),
                "The step.",
            ),
            FactColumn::texts(
                "class",
                texts(&|step| step.class().words().to_owned()),
                "What the step needs to know, which decides where it may be fitted.",
            ),
            FactColumn::texts("parameters", texts(&parameters), "The step's settings."),
            FactColumn::numbers(
                "predictors after",
                seen.left[1..].iter().map(|&left| left as f64).collect(),
                "",
                Precision::Whole,
                "How many predictors are left after the step, learnt from all samples.",
            ),
            FactColumn::numbers(
                "change",
                (0..steps.len()).map(change).collect(),
                "",
                Precision::Whole,
                "By how many the step changes the number of predictors.",
            ),
            FactColumn::texts(
                "source",
                texts(&|step| source(step).map_or_else(String::new, |s| s.cited.to_owned())),
                "The published source of the step, where it has one.",
            ),
        ],
        "The preparation steps in their order.",
    )
}

/// How a stage is called: by the step that leads to it.
fn stage_names(steps: &[Step], seen: &Seen) -> Vec<String> {
    (0..seen.stages.len())
        .map(|at| match at {
            0 => "as measured".to_owned(),
            _ => format!("{at}. {}", step_name(&steps[at - 1])),
        })
        .collect()
}

fn effects(steps: &[Step], seen: &Seen) -> Fact {
    let stages = &seen.stages;
    let numbers = |name: &str, of: &dyn Fn(&Stage) -> f64, precision, meaning: &str| {
        FactColumn::numbers(
            name,
            stages.iter().map(of).collect(),
            "",
            precision,
            meaning,
        )
    };
    let digits = Precision::Significant(4);
    let share = Precision::Percent(1);
    let mean = |side: Side| side.mean;
    let columns = vec![
        FactColumn::texts(
            "after",
            stage_names(steps, seen),
            "The step that was taken last.",
        ),
        numbers(
            "predictors",
            &|stage| stage.active.iter().filter(|active| **active).count() as f64,
            Precision::Whole,
            "How many predictors are left, where the steps are learnt from the training samples.",
        ),
        numbers(
            "training mean",
            &|stage| mean(stage.training),
            digits,
            "The mean of all values of the training samples.",
        ),
        numbers(
            "training sd",
            &|stage| stage.training.sd,
            digits,
            "The standard deviation of all values of the training samples, divisor n.",
        ),
        numbers(
            "held-out mean",
            &|stage| mean(stage.held_out),
            digits,
            "The mean of all values of the held-out samples.",
        ),
        numbers(
            "held-out sd",
            &|stage| stage.held_out.sd,
            digits,
            "The standard deviation of all values of the held-out samples, divisor n.",
        ),
        numbers(
            "training missing",
            &|stage| stage.training.missing,
            share,
            "The share of values of the training samples that is missing or beyond a limit.",
        ),
        numbers(
            "held-out missing",
            &|stage| stage.held_out.missing,
            share,
            "The share of values of the held-out samples that is missing or beyond a limit.",
        ),
    ];
    Fact::table(
        "step effects",
        columns,
        "What each step does to training samples and to samples held out, where it is learnt from \
         four fifths of the units.",
    )
}

/// The columns that are shown at a stage: evenly spaced among those that take part.
fn shown_columns(stage: &Stage) -> Vec<usize> {
    let active: Vec<usize> = (0..stage.active.len())
        .filter(|&column| stage.active[column])
        .collect();
    let n = active.len();
    if n <= SHOWN {
        return active;
    }
    (0..SHOWN)
        .map(|k| active[k * (n - 1) / (SHOWN - 1)])
        .collect()
}

fn followed(prepared: &Prepared, seen: &Seen) -> Fact {
    let names = stage_names(&prepared.steps, seen);
    let (mut stage_at, mut after, mut sample, mut part, mut predictor) =
        (Vec::new(), Vec::new(), Vec::new(), Vec::new(), Vec::new());
    let (mut along, mut position, mut value) = (Vec::new(), Vec::new(), Vec::new());
    for (at, stage) in seen.stages.iter().enumerate() {
        let columns = shown_columns(stage);
        for one in &stage.followed {
            for &column in &columns {
                stage_at.push(at as f64);
                after.push(names[at].clone());
                sample.push(one.name.clone());
                part.push(
                    match one.part {
                        Part::Training => "training",
                        Part::HeldOut => "held-out",
                    }
                    .to_owned(),
                );
                predictor.push(prepared.origin_name(stage.origins[column]));
                let (kind, place) = match (&stage.axis, stage.origins[column]) {
                    (Some(axis), _) => ("axis", axis[column]),
                    (None, Origin::Score(_)) => ("scores", column as f64 + 1.0),
                    (None, Origin::Predictor(_) | Origin::Position(_)) => {
                        ("predictors", column as f64 + 1.0)
                    }
                };
                along.push(kind.to_owned());
                position.push(place);
                value.push(one.values[column]);
            }
        }
    }
    let digits = Precision::Significant(5);
    Fact::table(
        "followed samples",
        vec![
            FactColumn::numbers(
                "stage",
                stage_at,
                "",
                Precision::Whole,
                "How many steps were taken.",
            ),
            FactColumn::texts("after", after, "The step that was taken last."),
            FactColumn::texts("sample", sample, "The sample."),
            FactColumn::texts("part", part, "Whether the steps were learnt from it."),
            FactColumn::texts("predictor", predictor, "The predictor."),
            FactColumn::texts(
                "along",
                along,
                "Whether positions are those of an axis, or places among predictors or scores.",
            ),
            FactColumn::numbers(
                "position",
                position,
                &prepared.data.axis_unit,
                Precision::Full,
                "Its position on the axis, or its place among the predictors.",
            ),
            FactColumn::numbers("value", value, "", digits, "The value of the sample."),
        ],
        "A few samples followed through the steps, at up to 100 predictors.",
    )
}
