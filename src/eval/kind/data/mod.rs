//! Evaluates a Data cell: tables read and joined, columns given their roles.

mod design;
mod facts;
mod imported;
mod marked;
mod outcome;
mod roles;
mod tables;

pub use tables::{options, rule, with_units};

use crate::base::work::{Cancelled, Work};
use crate::eval::caveat;
use crate::eval::fact::Facts;
use crate::eval::kind::{Ended, Inputs, verdict};
use crate::eval::outcome::{Gives, Outcome, Verdict};
use crate::numeric::matrix::Matrix;
use crate::numeric::parts::Structure;
use crate::numeric::response::Response;
use crate::numeric::samples::Samples;
use crate::study::settings::data::{Data, Subject};
use crate::table::Table;
use std::sync::Arc;

/// Samples with roles: what all else draws on.
///
/// All lists and matrices have one entry per sample that has not been excluded, in the order of
/// the file; `analysed` and `sealed` say which of them are which.
#[derive(Debug)]
pub struct Dataset {
    /// The joined table, all samples of the file included.
    pub table: Arc<Table>,
    /// The row of the table in which each sample stands.
    pub table_rows: Vec<usize>,
    /// The samples' names.
    pub names: Vec<String>,
    /// The predictors.
    pub samples: Samples,
    /// The predictors' names.
    pub predictor_names: Vec<String>,
    /// The unit of the predictors' axis; empty when there is none.
    pub axis_unit: String,
    /// The outcome.
    pub response: Response,
    /// What is known about the outcome beside its values.
    pub outcome: OutcomeInfo,
    /// n × q covariates.
    pub covariates: Matrix,
    /// Their names; a category is one column per level but the first.
    pub covariate_names: Vec<String>,
    /// Sample weights.
    pub weights: Option<Vec<f64>>,
    /// The unit of each sample, from 0.
    pub units: Vec<usize>,
    /// The units' names.
    pub unit_names: Vec<String>,
    /// The column that names the units, if any.
    pub unit_column: Option<String>,
    /// The batch of each sample, from 0.
    pub batches: Option<Vec<usize>>,
    /// The batches' names.
    pub batch_names: Vec<String>,
    /// The column that names the batches, if any.
    pub batch_column: Option<String>,
    /// The class or event of each sample, where there is one.
    pub strata: Option<Vec<usize>>,
    /// The order of measurement.
    pub order: Option<Vec<f64>>,
    /// The samples that are analysed, rising.
    pub analysed: Vec<usize>,
    /// The samples of the sealed set, rising.
    pub sealed: Vec<usize>,
    /// What the study's subject is.
    pub subject: Subject,
}

/// What is known about an outcome beside its values.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct OutcomeInfo {
    /// Its name.
    pub name: String,
    /// Its unit; empty when there is none.
    pub unit: String,
    /// The standard deviation of the reference method's own error, in the same unit.
    pub reference_error: Option<f64>,
    /// The names of its classes, where it has classes; of a yes/no outcome “no” and “yes”.
    pub classes: Vec<String>,
}

impl Dataset {
    /// What resampling must respect.
    #[must_use]
    pub fn structure(&self) -> Structure<'_> {
        Structure {
            units: &self.units,
            batches: self.batches.as_deref(),
            strata: self.strata.as_deref(),
            // A training part can do without ends of observation, never without an event.
            needed: matches!(self.response, Response::Time { .. }).then_some(1),
            order: self.order.as_deref(),
        }
    }

    /// The quality-control samples, rising.
    #[must_use]
    pub fn quality_control(&self) -> Vec<usize> {
        let flags = self.samples.companions.is_quality_control.as_deref();
        (0..self.names.len())
            .filter(|&at| flags.is_some_and(|flags| flags[at]))
            .collect()
    }

    /// How many different units some samples belong to.
    #[must_use]
    pub fn count_units(&self, rows: &[usize]) -> usize {
        let mut units: Vec<usize> = rows.iter().map(|&row| self.units[row]).collect();
        units.sort_unstable();
        units.dedup();
        units.len()
    }

    /// What one unit is called: the name of the unit column, or “sample”.
    #[must_use]
    pub fn unit_word(&self) -> &str {
        self.unit_column.as_deref().unwrap_or("sample")
    }

    /// About how many bytes this holds.
    #[must_use]
    pub fn bytes(&self) -> usize {
        // The matrix, and the columns of the table from which it was made.
        2 * self.samples.x.len() * size_of::<f64>()
    }
}

/// Evaluates a Data cell.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn evaluate(
    settings: &Data,
    inputs: &Inputs<'_>,
    work: &Work<'_>,
) -> Result<Verdict, Cancelled> {
    verdict(data(settings, inputs, work))
}

fn data(settings: &Data, inputs: &Inputs<'_>, work: &Work<'_>) -> Result<Outcome, Ended> {
    let joined = tables::read_and_join(settings, inputs, &work.part(0.0..0.8))?;
    let roles = roles::assign(settings, joined, inputs.threads, &work.part(0.8..1.0))?;
    let mut facts = Facts::new();
    facts::publish(&mut facts, settings, &roles);
    let caveats = caveat::design::caveats(&roles.dataset, &roles.findings, &facts);
    Ok(Outcome {
        gives: Gives::Data(Arc::new(roles.dataset)),
        facts,
        caveats,
    })
}
