//! Evaluates a Fit cell: the procedure on all analysed samples, and judged on outer parts.

mod careful;
mod coefficients;
mod facts;
mod kinds;
mod measures;
mod nested;
mod performance;
mod procedure;
mod ranks;
mod scene;
mod tables;
mod trouble;
mod weights;

pub use careful::Careful;
pub use facts::{curve_error, curve_unit, error_digits, measure_words};
pub use kinds::{at_times, by_class, class_counts, confusion, reliability, thirds, thresholds};
pub use measures::{Measure, Measures, Sort};
pub use performance::{
    Performance, error_of_sums, interval, paired_loss, performance, performance_of_one,
};
pub use procedure::{
    numeric_material, numeric_measure, numeric_procedure, numeric_response, parts_params,
};
pub use ranks::Basis;
pub use scene::{Predictions, Scene, horizons};
pub use tables::{error_curve, held_out_predictions, outer_choices};
pub use trouble::halted;

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
    Cut, Extended, Halt, Hazard, HeldOut, Level, Material, PartFit, Procedure, ProcedureError,
    Reach, Tally, check_plans, chosen_predictors, hazards, nested, tune, without_pairs,
};
use crate::numeric::response::Response;
use crate::numeric::samples::Samples;
use crate::study::settings::fit::{Fit, Judge};
use crate::study::settings::weights::Interval;
use std::sync::Arc;

/// A fit: what questions are asked of.
#[derive(Debug)]
pub struct Fitted {
    /// The samples and steps.
    pub prepared: Arc<Prepared>,
    /// The settings that were carried out.
    pub settings: Fit,
    /// The outcome as it was fitted.
    pub response: Response,
    /// For times: the early, the middle and the late time at which predictions are judged.
    pub horizons: [f64; 3],
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
    /// The weights of the blocks of predictors; empty without blocks.
    pub block_weights: Vec<f64>,
    /// The lists of block weights that were compared, each with its lowest error.
    pub weights_tried: Vec<(Vec<f64>, f64)>,
    /// For learnt penalty weights: the strength of the ridge fit in the first stage.
    pub first_strength: Option<f64>,
    /// Whether the range was made longer once.
    pub extended: Extended,
    /// Whether the range was cut short.
    pub cut: Cut,
    /// The fits on all analysed samples over the whole range.
    pub path: Path,
    /// All samples as the preparation learnt from the analysed ones leaves them.
    pub samples: Samples,
    /// The fitted values of the analysed samples.
    pub apparent: Predictions,
    /// For times: the cumulative hazard at a linear predictor of zero.
    pub hazard: Option<Hazard>,
}

/// The judgement on outer parts.
#[derive(Debug)]
pub struct Judged {
    /// Which part each sample was held out in.
    pub plan: Assignment,
    /// The outer fits.
    pub held_out: HeldOut,
    /// The careful interval, where it was asked for and could be made.
    pub careful: Option<Careful>,
}

impl FinalFit {
    /// Whether the chosen strength lies at an end of the range beyond which a better one could lie.
    /// The strong end of a sparse range is the empty model, and the weak end of one that was cut is
    /// where the fit follows its samples anyway.
    #[must_use]
    pub fn is_at_edge(&self) -> bool {
        let n = self
            .curves
            .get(self.share_at)
            .map_or(0, |curve| curve.strengths.len());
        let is_weakest = self.strength_at + 1 == n && self.cut == Cut::No;
        n > 0 && (is_weakest || self.strength_at == 0 && self.share == 0.0)
    }
}

impl Fitted {
    /// The chosen predictors of the final fit, rising, with their coefficients on the scale that the
    /// penalty sees; with classes the one of largest size among them.
    #[must_use]
    pub fn chosen(&self) -> Vec<(usize, f64)> {
        chosen_predictors(&self.last.path, self.last.strength_at)
    }

    /// What a procedure works on, with the outcome as it was fitted.
    #[must_use]
    pub fn material(&self) -> Material<'_> {
        numeric_material(&self.prepared, &self.response)
    }

    /// The procedure that was carried out.
    ///
    /// # Panics
    /// Never: the fit was made with these settings.
    #[must_use]
    pub fn procedure(&self) -> Procedure<'_> {
        numeric_procedure(&self.settings, &self.prepared)
            .expect("the fit was made with these settings")
    }

    /// The same with the weights of blocks that the final fit has, so that none are left to choose.
    #[must_use]
    pub fn procedure_as_chosen(&self) -> Procedure<'_> {
        self.procedure()
            .with_block_weights(&self.last.block_weights)
    }

    /// The analysed samples, to be judged.
    #[must_use]
    pub fn scene(&self) -> Scene<'_> {
        self.scene_of(&self.prepared.data.analysed)
    }

    /// Some other samples, to be judged.
    #[must_use]
    pub fn scene_of<'a>(&'a self, rows: &'a [usize]) -> Scene<'a> {
        Scene {
            response: &self.response,
            rows,
            horizons: self.horizons,
        }
    }

    /// The sort of outcome.
    #[must_use]
    pub const fn sort(&self) -> Sort {
        Sort::of(&self.response)
    }

    /// The name of a prepared column.
    #[must_use]
    pub fn column_name(&self, column: usize) -> String {
        self.prepared.column_name(&self.last.samples, column)
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
    let response = numeric_response(settings, &prepared.data)?;
    let material = numeric_material(&prepared, &response);
    let procedure = numeric_procedure(settings, &prepared)?;
    let trouble = |halt| halted(halt, &prepared, settings);
    // The share of the bar that the final fit takes is about one part in all parts.
    let n_outer = match settings.judge {
        Judge::Nested(plan) => (plan.parts * plan.repeats).max(1),
        Judge::Declined => 0,
    };
    let first = 1.0 / (n_outer as f32 + 1.0);
    let analysed = &prepared.data.analysed;
    // The plans first: what is not feasible is said at once, not after minutes.
    let plan = match settings.judge {
        Judge::Declined => None,
        Judge::Nested(plan) => {
            let params = parts_params(plan, settings.seed);
            Some(
                assign(&params, analysed, &material.structure, "outer").map_err(|error| {
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
    if let Some(plan) = &plan
        && settings.interval == Interval::Careful
    {
        careful::check(plan.n_parts())?;
    }
    check_plans(
        &material,
        &procedure,
        analysed,
        plan.as_ref(),
        ("final", "outer"),
    )
    .map_err(|error| trouble(error.into()))?;
    let scene = Scene {
        response: &response,
        rows: analysed,
        horizons: horizons(&response, analysed),
    };
    let last = final_fit(&material, &procedure, &scene, &work.part(0.0..first));
    let (last, mut tally) = last.map_err(trouble)?;
    let judged = match plan {
        None => None,
        Some(plan) => {
            let is_careful = settings.interval == Interval::Careful;
            // A repeat has one fit for each part, and half as many pairs as parts less one.
            let pairs = 0.5 * (plan.n_parts() as f32 - 1.0);
            let middle = if is_careful {
                first + (1.0 - first) / (1.0 + pairs)
            } else {
                1.0
            };
            let bar = work.part(first..middle);
            let held_out = nested(&material, &procedure, &plan, "outer", inputs.threads, &bar)
                .map_err(trouble)?;
            tally.merge(&held_out.tally);
            let mut found = None;
            if is_careful {
                let bar = work.part(middle..1.0);
                let (pairs, counts) =
                    without_pairs(&material, &procedure, &plan, "pair", inputs.threads, &bar)
                        .map_err(trouble)?;
                tally.merge(&counts);
                let n_parts = plan.n_parts();
                found = careful::careful(&scene, &prepared.data, n_parts, &held_out.fits, &pairs);
            }
            Some(Judged {
                plan,
                held_out,
                careful: found,
            })
        }
    };
    let horizons = scene.horizons;
    let fitted = Fitted {
        prepared: Arc::clone(&prepared),
        settings: settings.clone(),
        response,
        horizons,
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
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    scene: &Scene<'_>,
    work: &Work<'_>,
) -> Result<(FinalFit, Tally), Halt> {
    let analysed = scene.rows;
    let split = Split::everything(analysed);
    let tuned = tune(
        material,
        procedure,
        &split,
        "final",
        Reach::WholeRange,
        work,
    )?;
    let at = tuned.strength_at;
    let k = tuned.fit.path.n_linear();
    let predicted = tuned.fit.predict(material, analysed);
    let hazard = hazards(material, &tuned.fit, at, analysed).map(|hazards| hazards.fitted);
    let mut apparent = Predictions::new(scene);
    for place in 0..analysed.len() {
        let linear: Vec<f64> = (0..k)
            .map(|class| predicted[(place, at * k + class)])
            .collect();
        apparent.put(scene, place, 0, &linear, hazard.as_ref());
    }
    let PartFit { learnt, path } = tuned.fit;
    Ok((
        FinalFit {
            curves: tuned.curves,
            share_at: tuned.share_at,
            strength_at: at,
            share: tuned.share,
            strength: tuned.strength,
            block_weights: tuned.block_weights,
            weights_tried: tuned.weights_tried,
            first_strength: learnt.first_strength,
            extended: tuned.extended,
            cut: tuned.cut,
            path,
            samples: learnt.samples.into_owned(),
            apparent,
            hazard,
        },
        tuned.tally,
    ))
}
