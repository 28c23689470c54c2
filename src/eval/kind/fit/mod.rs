//! Evaluates a Fit cell: the procedure on all analysed samples, and judged on outer parts.

mod facts;
mod nested;
mod performance;
mod procedure;
mod tables;
mod trouble;

pub use facts::error_digits;
pub use performance::{Interval, Measures, Performance, errors_by_unit, interval, performance};
pub use procedure::{numeric_procedure, parts_params};
pub use tables::{error_curve, held_out_predictions, outer_choices};
pub use trouble::halted;

use crate::base::problem::Problem;
use crate::base::work::{Cancelled, Work};
use crate::eval::caveat::judgement;
use crate::eval::fact::Facts;
use crate::eval::kind::prepare::Prepared;
use crate::eval::kind::{Ended, Inputs, verdict};
use crate::eval::outcome::{Gives, Outcome, Verdict};
use crate::numeric::choose::Curve;
use crate::numeric::parts::{Assignment, Split, assign};
use crate::numeric::path::Path;
use crate::numeric::procedure::{
    Extended, HeldOut, Level, PartFit, Procedure, ProcedureError, Reach, Tally, nested, tune,
};
use crate::numeric::response::Response;
use crate::numeric::samples::Samples;
use crate::study::settings::fit::{Fit, Judge};
use std::sync::Arc;

/// A fit: what questions are asked of.
#[derive(Debug)]
pub struct Fitted {
    /// The samples and steps.
    pub prepared: Arc<Prepared>,
    /// The settings that were carried out.
    pub settings: Fit,
    /// The final fit on all analysed samples.
    pub last: FinalFit,
    /// The judgement on outer parts, unless it was declined.
    pub judged: Option<Judged>,
    /// Counts over all fits.
    pub tally: Tally,
}

/// The procedure on all analysed samples.
#[derive(Debug)]
pub struct FinalFit {
    /// One curve per lasso share; empty when the strength was given.
    pub curves: Vec<Curve>,
    /// Which curve won.
    pub share_at: usize,
    /// The place of the chosen strength in the path.
    pub strength_at: usize,
    /// The chosen lasso share.
    pub share: f64,
    /// The chosen strength.
    pub strength: f64,
    /// Whether the range was made longer once.
    pub extended: Extended,
    /// The fits on all analysed samples over the whole range.
    pub path: Path,
    /// All samples as the preparation learnt from the analysed ones leaves them.
    pub samples: Samples,
    /// The fitted value of each analysed sample.
    pub fitted: Vec<f64>,
}

/// The judgement on outer parts.
#[derive(Debug)]
pub struct Judged {
    /// Which part each sample was held out in.
    pub plan: Assignment,
    /// The outer fits.
    pub held_out: HeldOut,
}

impl Fitted {
    /// The chosen predictors of the final fit with their coefficients on the scale of the
    /// prepared predictors, and the intercept.
    #[must_use]
    pub fn chosen(&self) -> (Vec<(usize, f64)>, f64) {
        let coefficients = self.last.path.coefficients(self.last.strength_at);
        (coefficients.predictors, coefficients.intercept)
    }

    /// The name of a prepared column.
    #[must_use]
    pub fn column_name(&self, column: usize) -> String {
        self.prepared.column_name(&self.last.samples, column)
    }

    /// The measured outcome of all samples; empty for another kind of outcome.
    #[must_use]
    pub fn observed(&self) -> &[f64] {
        match &self.prepared.data.response {
            Response::Measured(values) => values,
            Response::YesNo(_)
            | Response::Classes { .. }
            | Response::Count { .. }
            | Response::Time { .. } => &[],
        }
    }

    /// About how many bytes this holds beyond the data.
    #[must_use]
    pub fn bytes(&self) -> usize {
        let shares = Arc::ptr_eq(&self.last.samples.x, &self.prepared.samples.x);
        let matrix = if shares {
            0
        } else {
            self.last.samples.x.len() * size_of::<f64>()
        };
        matrix + self.last.path.n_points() * self.prepared.data.names.len() * 16
    }
}

/// Evaluates a Fit cell.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn evaluate(
    settings: &Fit,
    inputs: &Inputs<'_>,
    work: &Work<'_>,
) -> Result<Verdict, Cancelled> {
    verdict(fit(settings, inputs, work))
}

fn fit(settings: &Fit, inputs: &Inputs<'_>, work: &Work<'_>) -> Result<Outcome, Ended> {
    let prepared = inputs.prepared(settings.input)?;
    if !matches!(prepared.data.response, Response::Measured(_)) {
        return Err(Problem::new(
            "kind-not-built-yet",
            "Fitting this kind of outcome is not built yet; measured quantities can be fitted.",
        )
        .mend("Choose a measured quantity as the outcome.")
        .into());
    }
    let material = prepared.material();
    let procedure = numeric_procedure(settings, &prepared);
    let trouble = |halt| halted(halt, &prepared, settings);
    // The share of the bar that the final fit takes is about one part in all parts.
    let n_outer = match settings.judge {
        Judge::Nested(plan) => (plan.parts * plan.repeats).max(1),
        Judge::Declined => 0,
    };
    let first = 1.0 / (n_outer as f32 + 1.0);
    let analysed = &prepared.data.analysed;
    // The outer plan first: what is not feasible is said at once, not after minutes.
    let plan = match settings.judge {
        Judge::Declined => None,
        Judge::Nested(plan) => {
            let params = parts_params(plan, settings.seed);
            let structure = prepared.data.structure();
            Some(
                assign(&params, analysed, &structure, "outer").map_err(|error| {
                    trouble(
                        ProcedureError::Plan {
                            level: Level::Outer,
                            error,
                        }
                        .into(),
                    )
                })?,
            )
        }
    };
    let last =
        final_fit(&prepared, &procedure, analysed, &work.part(0.0..first)).map_err(trouble)?;
    let (last, mut tally) = last;
    let judged = match plan {
        None => None,
        Some(plan) => {
            let bar = work.part(first..1.0);
            let held_out = nested(&material, &procedure, &plan, "outer", inputs.threads, &bar)
                .map_err(trouble)?;
            tally.merge(&held_out.tally);
            Some(Judged { plan, held_out })
        }
    };
    let fitted = Fitted {
        prepared: Arc::clone(&prepared),
        settings: settings.clone(),
        last,
        judged,
        tally,
    };
    let mut published = Facts::new();
    facts::publish(&mut published, &fitted);
    let caveats = judgement::caveats(&fitted, &published);
    Ok(Outcome {
        gives: Gives::Fit(Arc::new(fitted)),
        facts: published,
        caveats,
    })
}

/// The procedure on all analysed samples, as far as it is kept.
fn final_fit(
    prepared: &Prepared,
    procedure: &Procedure<'_>,
    analysed: &[usize],
    work: &Work<'_>,
) -> Result<(FinalFit, Tally), crate::numeric::procedure::Halt> {
    let material = prepared.material();
    let split = Split::everything(analysed);
    let tuned = tune(
        &material,
        procedure,
        &split,
        "final",
        Reach::WholeRange,
        work,
    )?;
    let predicted = tuned.fit.predict(&material, analysed);
    let fitted = predicted
        .column(tuned.strength_at)
        .iter()
        .copied()
        .collect();
    let PartFit { learnt, path } = tuned.fit;
    Ok((
        FinalFit {
            curves: tuned.curves,
            share_at: tuned.share_at,
            strength_at: tuned.strength_at,
            share: tuned.share,
            strength: tuned.strength,
            extended: tuned.extended,
            path,
            samples: learnt.samples.into_owned(),
            fitted,
        },
        tuned.tally,
    ))
}
