//! Selection on complementary halves: which predictors would be chosen again.

use crate::base::thread::{Threads, in_order};
use crate::base::work::{Cancelled, Work};
use crate::numeric::parts::Split;
use crate::numeric::procedure::{
    Halt, Material, Procedure, ProcedureError, Tally, chosen_predictors, fit_part,
};

/// What one half chose, at one strength.
#[derive(Clone, Debug)]
pub struct HalfChoice {
    /// The chosen predictors, rising, each with the sign of its coefficient; with classes of the
    /// largest of its coefficients.
    pub chosen: Vec<(usize, f64)>,
}

/// Fits the procedure at one share and strength on each half of each pair, preparation learnt
/// anew in each, and returns what each half chose: pair by pair, first half first.
///
/// # Errors
/// The first half, in order, in which preparation or fit cannot be made.
pub fn select_on_halves(
    material: &Material<'_>,
    procedure: &Procedure<'_>,
    pairs: &[(Split, Split)],
    share: f64,
    strengths: &[f64],
    threads: Threads,
    work: &Work<'_>,
) -> Result<(Vec<HalfChoice>, Tally), Halt> {
    let halves: Vec<&Split> = pairs
        .iter()
        .flat_map(|(first, second)| [first, second])
        .collect();
    let silent = work.silent();
    let results = in_order(threads, halves.len(), work, |at| {
        let mut tally = Tally::default();
        let fit = fit_part(
            material, procedure, halves[at], share, strengths, &mut tally, &silent,
        );
        match fit {
            Ok(fit) => {
                let largest = chosen_predictors(&fit.path, strengths.len() - 1);
                let chosen = largest
                    .into_iter()
                    .filter(|(_, value)| *value != 0.0)
                    .map(|(at, value)| (at, value.signum()))
                    .collect();
                Ok(Ok((HalfChoice { chosen }, tally)))
            }
            Err(Halt::Cancelled) => Err(Cancelled),
            Err(Halt::Failed(error)) => Ok(Err(error)),
        }
    })?;
    let mut choices = Vec::with_capacity(results.len());
    let mut tally = Tally::default();
    for result in results {
        let (choice, counts): (HalfChoice, Tally) =
            result.map_err(|error: ProcedureError| Halt::Failed(error))?;
        tally.merge(&counts);
        choices.push(choice);
    }
    Ok((choices, tally))
}
