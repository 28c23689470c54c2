//! Which settings of a preparation step go together.

use crate::base::problem::Problem;
use crate::study::settings::prepare::{Reference, Step};

/// Whether the settings of a step go together.
///
/// # Errors
/// What does not, and what would mend it.
pub fn lawful(step: &Step) -> Result<(), Problem> {
    let refuse =
        |found: String, mend: String| Err(Problem::new("setting-out-of-range", found).mend(mend));
    match step {
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => {
            if window % 2 == 0 {
                return refuse(
                    format!("The window must be an odd number; “{window}” was typed."),
                    format!("Take {} or {}.", window - 1, window + 1),
                );
            }
            if window <= degree {
                return refuse(
                    format!(
                        "The window must be wider than the degree of the polynomial; the window is \
                         {window} and the degree {degree}."
                    ),
                    "Widen the window, or lower the degree.".to_owned(),
                );
            }
            if derivative > degree {
                return refuse(
                    format!(
                        "A polynomial of degree {degree} has no derivative of order {derivative} to \
                         take."
                    ),
                    "Raise the degree, or take a lower derivative.".to_owned(),
                );
            }
        }
        Step::UnitConversion { factor, .. } if factor.get() == 0.0 => {
            return refuse(
                "The factor of a unit conversion must not be 0: every value would be the same."
                    .to_owned(),
                "Take the number by which the old unit is multiplied.".to_owned(),
            );
        }
        Step::Log { offset, .. } if offset.get() < 0.0 => {
            return refuse(
                "The number added before the logarithm must be 0 or more.".to_owned(),
                "Take 0 where all values are above 0, or a small positive number.".to_owned(),
            );
        }
        Step::Power { exponent } if exponent.get() == 0.0 => {
            return refuse(
                "The exponent of a power must not be 0: every value would be 1.".to_owned(),
                "Take another exponent, or a logarithm.".to_owned(),
            );
        }
        Step::CommonAxis {
            first,
            last,
            distance,
            ..
        } => {
            let count = ((last.get() - first.get()).abs() / distance.get()).floor() + 1.0;
            let is_fine = (1.0..=200_000.0).contains(&count);
            if !is_fine {
                return refuse(
                    "A common axis must have from 1 to 200,000 positions.".to_owned(),
                    "Change its ends, or the distance of its positions.".to_owned(),
                );
            }
        }
        Step::QuantileNormalisation {
            reference: Reference::Given(values),
        } if values.windows(2).any(|pair| pair[0] > pair[1]) => {
            return refuse(
                "A distribution that is given must rise from number to number.".to_owned(),
                "Sort its numbers.".to_owned(),
            );
        }
        Step::Absorbance {
            reference: Some(values),
        } if values.iter().any(|value| value.get() <= 0.0) => {
            return refuse(
                "Every number of a reference of absorbance must be above 0.".to_owned(),
                "Give the measured values of the white standard.".to_owned(),
            );
        }
        Step::AverageUnits
        | Step::UnitConversion { .. }
        | Step::Absorbance { .. }
        | Step::CutRegions { .. }
        | Step::SpikeRemoval { .. }
        | Step::BelowLimit { .. }
        | Step::Normalisation { .. }
        | Step::StandardNormalVariate
        | Step::Detrend { .. }
        | Step::Baseline { .. }
        | Step::Log { .. }
        | Step::InverseHyperbolicSine { .. }
        | Step::Power { .. }
        | Step::PowerTransform { .. }
        | Step::CenteredLogRatio { .. }
        | Step::QualityControlDrift { .. }
        | Step::ScatterCorrection { .. }
        | Step::ExtendedScatterCorrection { .. }
        | Step::ProbabilisticQuotient { .. }
        | Step::QuantileNormalisation { .. }
        | Step::MissingShareFilter { .. }
        | Step::CallRateFilter { .. }
        | Step::MinorAlleleFilter { .. }
        | Step::NearConstantFilter { .. }
        | Step::QualityControlSpread { .. }
        | Step::OutcomeFilter { .. }
        | Step::ColumnImputation { .. }
        | Step::NearestImputation { .. }
        | Step::LowRankImputation { .. }
        | Step::BatchCentering
        | Step::CovariateRemoval
        | Step::PrincipalScores { .. }
        | Step::Center
        | Step::Scale { .. } => {}
    }
    Ok(())
}
