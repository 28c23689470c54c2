//! Complementary halves of the units, for selection frequencies.

use crate::numeric::parts::assign::Units;
use crate::numeric::parts::{PlanError, Split, Structure};
use crate::numeric::random::Random;
use std::sync::Arc;

/// Draws `pairs` pairs of halves that share no unit (Shah and Samworth 2013): each half has
/// ⌊m/2⌋ of the m units; with an odd m one unit sits out of each pair.
///
/// The first split of a pair trains on one half and holds out the other; the second the other
/// way round. With strata, each half has its share of every stratum up to one unit.
///
/// # Errors
/// [`PlanError::TooFewUnits`] when there are fewer than two units.
///
/// # Panics
/// When a row is beyond the lists of `structure`.
pub fn complementary_pairs(
    pairs: usize,
    seed: u64,
    rows: &[usize],
    structure: &Structure<'_>,
) -> Result<Vec<(Split, Split)>, PlanError> {
    let units = Units::of(rows, structure);
    if units.count() < 2 {
        return Err(PlanError::TooFewUnits {
            units: units.count(),
            parts: 2,
        });
    }
    let all_units: Arc<[usize]> = structure.units.into();
    let half = units.count() / 2;
    Ok((0..pairs)
        .map(|pair| {
            let mut random = Random::new(seed, "complementary pairs", pair as u64);
            let order = units.shuffled_by_stratum(&mut random);
            // Alternating along the strata; which unit of an odd number sits out is drawn too.
            let sits_out = (units.count() % 2 == 1).then(|| random.below(units.count()));
            let mut side = vec![None; units.count()];
            let mut dealt = 0;
            for (place, unit) in order.into_iter().enumerate() {
                if Some(place) != sits_out {
                    side[unit] = Some(dealt % 2);
                    dealt += 1;
                }
            }
            debug_assert_eq!(dealt, 2 * half);
            let rows_of = |which: usize| -> Vec<usize> {
                rows.iter()
                    .zip(&units.of_row)
                    .filter(|&(_, &unit)| side[unit] == Some(which))
                    .map(|(&row, _)| row)
                    .collect()
            };
            let (first, second) = (rows_of(0), rows_of(1));
            (
                Split::new(first.clone(), second.clone(), &all_units),
                Split::new(second, first, &all_units),
            )
        })
        .collect())
}
