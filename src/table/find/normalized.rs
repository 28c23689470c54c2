//! Signs that values were normalised over all samples before they arrived (caveat 20).

use crate::base::work::{Cancelled, Work};
use crate::table::Table;
use crate::table::finding::{Finding, FindingKind, Normalized, Treatment};

/// Fewer predictors have equal sums or equal sorted values by chance.
const FEWEST: usize = 5;

/// The signature that the predictors carry, if any.
///
/// # Errors
/// [`Cancelled`] when the work was called off.
pub fn find(
    table: &Table,
    predictors: &[usize],
    work: &Work<'_>,
) -> Result<Option<Finding>, Cancelled> {
    let columns: Vec<&[f64]> = predictors
        .iter()
        .filter_map(|&at| table.columns()[at].as_numbers())
        .map(|numbers| numbers.values())
        .collect();
    if columns.len() < FEWEST || table.n_rows() < 4 {
        return Ok(None);
    }
    let kind = if columns.iter().all(|column| is_standardized(column)) {
        Normalized::Columns
    } else {
        work.check()?;
        let sums: Vec<(f64, f64)> = (0..table.n_rows()).map(|row| sums(&columns, row)).collect();
        work.check()?;
        // Rows of the same values have the same sum too, so they come first.
        if have_equal_values(&columns, table.n_rows(), work)? {
            Normalized::SortedRows
        } else if have_equal_sums(&sums) {
            Normalized::RowSums
        } else {
            return Ok(None);
        }
    };
    let count = match kind {
        Normalized::Columns => columns.len(),
        Normalized::RowSums | Normalized::SortedRows => table.n_rows(),
    };
    let finding = Finding::new(FindingKind::AlreadyNormalized(kind), Treatment::Kept);
    Ok(Some(finding.counting(count)))
}

/// Mean 0 within 1e-6 and standard deviation 1 within 1e-3, whichever divisor was used.
fn is_standardized(column: &[f64]) -> bool {
    let known: Vec<f64> = column
        .iter()
        .copied()
        .filter(|value| !value.is_nan())
        .collect();
    let n = known.len() as f64;
    if n < 3.0 {
        return false;
    }
    let mean = known.iter().sum::<f64>() / n;
    let squares: f64 = known.iter().map(|value| (value - mean).powi(2)).sum();
    let is_one = |divisor: f64| ((squares / divisor).sqrt() - 1.0).abs() <= 1e-3;
    mean.abs() <= 1e-6 && (is_one(n) || is_one(n - 1.0))
}

/// The sum of a row and the sum of its sizes.
fn sums(columns: &[&[f64]], row: usize) -> (f64, f64) {
    columns.iter().fold((0.0, 0.0), |(sum, size), column| {
        (sum + column[row], size + column[row].abs())
    })
}

fn have_equal_sums(sums: &[(f64, f64)]) -> bool {
    let (first, size) = sums[0];
    // Rows that were centred sum to nothing, which says nothing about other rows.
    first.abs() > 1e-3 * size
        && sums
            .iter()
            .all(|(sum, _)| (sum - first).abs() <= 1e-6 * first.abs())
}

/// Whether every row holds the same values in another order, and enough unlike ones.
fn have_equal_values(
    columns: &[&[f64]],
    n_rows: usize,
    work: &Work<'_>,
) -> Result<bool, Cancelled> {
    let sorted = |row: usize| {
        let mut values: Vec<f64> = columns.iter().map(|column| column[row]).collect();
        values.sort_by(f64::total_cmp);
        values
    };
    let first = sorted(0);
    let unlike = first.windows(2).filter(|pair| pair[0] < pair[1]).count() + 1;
    if first.iter().any(|value| value.is_nan()) || unlike < 10 || unlike * 2 < first.len() {
        return Ok(false);
    }
    for row in 1..n_rows {
        work.check()?;
        let differs = |(one, other): (&f64, &f64)| (one - other).abs() > 1e-9 * one.abs().max(1e-9);
        let values = sorted(row);
        if values.iter().any(|value| value.is_nan()) || first.iter().zip(&values).any(differs) {
            return Ok(false);
        }
    }
    Ok(true)
}
