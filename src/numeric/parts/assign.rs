//! Drawing a plan: which unit goes to which part.

use crate::numeric::parts::{Assignment, PartsParams, PlanError, Scheme, Structure};
use crate::numeric::random::Random;
use std::collections::BTreeMap;

/// Draws a plan over `rows`, a subset of all samples.
///
/// Units are never divided. The numbers of units in the parts differ by at most one, except
/// with whole batches, where each batch goes to the part that has the fewest units so far. The
/// stream of random numbers depends on the seed, on `purpose` and on the repeat only.
///
/// Plans without chance (every unit a part, blocks, as many parts as batches) are drawn once,
/// whatever the number of repeats.
///
/// # Errors
/// [`PlanError`] when the plan is infeasible; it says what would be feasible.
///
/// # Panics
/// When a row is beyond the lists of `structure`.
pub fn assign(
    params: &PartsParams,
    rows: &[usize],
    structure: &Structure<'_>,
    purpose: &str,
) -> Result<Assignment, PlanError> {
    let units = Units::of(rows, structure);
    let parts = match params.scheme {
        Scheme::LeaveOneUnitOut => units.count(),
        Scheme::Random | Scheme::Balanced | Scheme::WholeBatches | Scheme::Blocked => params.parts,
    };
    if parts < 2 {
        return Err(PlanError::TooFewParts {
            parts,
            units: units.count(),
        });
    }
    if params.repeats == 0 {
        return Err(PlanError::NoRepeats);
    }
    if units.count() < parts {
        return Err(PlanError::TooFewUnits {
            units: units.count(),
            parts,
        });
    }
    check_strata(&units, params.scheme, parts, structure)?;
    let draw = |repeat: usize| {
        let mut random = Random::new(params.seed, purpose, repeat as u64);
        match params.scheme {
            Scheme::Random => Ok(deal(units.shuffled(&mut random), parts)),
            Scheme::Balanced => Ok(deal(units.shuffled_by_stratum(&mut random), parts)),
            Scheme::LeaveOneUnitOut => Ok((0..units.count()).collect()),
            Scheme::WholeBatches => units.by_batch(structure, parts, &mut random),
            Scheme::Blocked => units.in_blocks(rows, structure, parts),
        }
    };
    let first = draw(0)?;
    let repeats = match params.scheme {
        Scheme::Random | Scheme::Balanced => params.repeats,
        Scheme::LeaveOneUnitOut | Scheme::Blocked => 1,
        Scheme::WholeBatches if units.batches(structure).len() == parts => 1,
        Scheme::WholeBatches => params.repeats,
    };
    let mut table = Vec::with_capacity(repeats);
    for repeat in 0..repeats {
        let part_of_unit = if repeat == 0 {
            first.clone()
        } else {
            draw(repeat)?
        };
        units.check_training(&part_of_unit, parts, structure.needed)?;
        table.push(
            units
                .of_row
                .iter()
                .map(|&unit| part_of_unit[unit])
                .collect(),
        );
    }
    Ok(Assignment::new(rows, table, parts, structure.units))
}

fn check_strata(
    units: &Units,
    scheme: Scheme,
    parts: usize,
    structure: &Structure<'_>,
) -> Result<(), PlanError> {
    if structure.strata.is_none() {
        return match scheme {
            Scheme::Balanced => Err(PlanError::NoStrata),
            Scheme::Random | Scheme::WholeBatches | Scheme::LeaveOneUnitOut | Scheme::Blocked => {
                Ok(())
            }
        };
    }
    let by_stratum = units.units_by_stratum();
    if let Some(stratum) = structure.needed {
        let units = by_stratum.get(&stratum).copied().unwrap_or(0);
        return if units == 0 {
            let stratum = by_stratum.keys().next().copied().unwrap_or(stratum);
            Err(PlanError::OneStratum { stratum })
        } else if scheme == Scheme::Balanced && units < parts {
            Err(PlanError::RareStratum {
                stratum,
                units,
                parts,
            })
        } else {
            Ok(())
        };
    }
    let mut counts: Vec<(usize, usize)> = by_stratum.into_iter().collect();
    // Most frequent first; the stable sort keeps the smaller index first among equals.
    counts.sort_by_key(|&(_, count)| std::cmp::Reverse(count));
    match (counts.first(), counts.get(1)) {
        (Some(&(stratum, _)), None) => Err(PlanError::OneStratum { stratum }),
        (_, Some(&(stratum, count))) if scheme == Scheme::Balanced && count < parts => {
            Err(PlanError::RareStratum {
                stratum,
                units: count,
                parts,
            })
        }
        _ => Ok(()),
    }
}

/// The units among the rows of a plan, numbered from 0 in the order in which they first occur.
pub(super) struct Units {
    /// For each row of the plan its unit.
    pub(super) of_row: Vec<usize>,
    /// For each unit the samples in it.
    samples: Vec<Vec<usize>>,
    /// For each unit the strata that occur in it, and the most frequent of them.
    strata: Vec<(Vec<usize>, usize)>,
}

impl Units {
    pub(super) fn of(rows: &[usize], structure: &Structure<'_>) -> Self {
        let mut index = BTreeMap::new();
        let mut samples: Vec<Vec<usize>> = Vec::new();
        let mut of_row = Vec::with_capacity(rows.len());
        for &row in rows {
            let next = samples.len();
            let unit = *index.entry(structure.units[row]).or_insert(next);
            if unit == next {
                samples.push(Vec::new());
            }
            samples[unit].push(row);
            of_row.push(unit);
        }
        let strata = samples
            .iter()
            .map(|rows| strata_of(rows, structure.strata))
            .collect();
        Self {
            of_row,
            samples,
            strata,
        }
    }

    pub(super) fn count(&self) -> usize {
        self.samples.len()
    }

    pub(super) fn shuffled(&self, random: &mut Random) -> Vec<usize> {
        let mut order: Vec<usize> = (0..self.count()).collect();
        random.shuffle(&mut order);
        order
    }

    /// Units in random order, one stratum after the other.
    pub(super) fn shuffled_by_stratum(&self, random: &mut Random) -> Vec<usize> {
        let mut order = self.shuffled(random);
        order.sort_by_key(|&unit| self.strata[unit].1);
        order
    }

    /// In how many units each stratum occurs.
    fn units_by_stratum(&self) -> BTreeMap<usize, usize> {
        let mut counts = BTreeMap::new();
        for (strata, _) in &self.strata {
            for &stratum in strata {
                *counts.entry(stratum).or_insert(0) += 1;
            }
        }
        counts
    }

    /// That no stratum, or not the one that is needed, occurs in one held-out part only.
    fn check_training(
        &self,
        part_of_unit: &[usize],
        parts: usize,
        needed: Option<usize>,
    ) -> Result<(), PlanError> {
        let totals = self.units_by_stratum();
        let mut inside: Vec<BTreeMap<usize, usize>> = vec![BTreeMap::new(); parts];
        for (unit, (strata, _)) in self.strata.iter().enumerate() {
            for &stratum in strata {
                *inside[part_of_unit[unit]].entry(stratum).or_insert(0) += 1;
            }
        }
        for (part, counts) in inside.iter().enumerate() {
            for (&stratum, &units) in counts {
                let counts = needed.is_none_or(|needed| needed == stratum);
                if counts && totals[&stratum] == units {
                    return Err(PlanError::TrainingLacksStratum {
                        part,
                        stratum,
                        units,
                    });
                }
            }
        }
        Ok(())
    }

    /// Groups of units that share a batch, directly or through units that lie in two batches;
    /// in the order of their smallest batch.
    fn batches(&self, structure: &Structure<'_>) -> Vec<Vec<usize>> {
        let Some(batches) = structure.batches else {
            return Vec::new();
        };
        let mut group_of_unit: Vec<usize> = (0..self.count()).collect();
        let mut first_unit_of_batch: BTreeMap<usize, usize> = BTreeMap::new();
        for (unit, samples) in self.samples.iter().enumerate() {
            for &sample in samples {
                let other = *first_unit_of_batch.entry(batches[sample]).or_insert(unit);
                let (from, to) = (group_of_unit[unit], group_of_unit[other]);
                if from != to {
                    for group in &mut group_of_unit {
                        if *group == from {
                            *group = to;
                        }
                    }
                }
            }
        }
        let mut order: Vec<usize> = Vec::new();
        for unit in first_unit_of_batch.values() {
            if !order.contains(&group_of_unit[*unit]) {
                order.push(group_of_unit[*unit]);
            }
        }
        order
            .iter()
            .map(|&group| {
                (0..self.count())
                    .filter(|&unit| group_of_unit[unit] == group)
                    .collect()
            })
            .collect()
    }

    fn by_batch(
        &self,
        structure: &Structure<'_>,
        parts: usize,
        random: &mut Random,
    ) -> Result<Vec<usize>, PlanError> {
        if structure.batches.is_none() {
            return Err(PlanError::NoBatches);
        }
        let mut batches = self.batches(structure);
        if batches.len() < parts {
            return Err(PlanError::TooFewBatches {
                batches: batches.len(),
                parts,
            });
        }
        if batches.len() > parts {
            random.shuffle(&mut batches);
        }
        let mut sizes = vec![0_usize; parts];
        let mut part_of_unit = vec![0; self.count()];
        for batch in batches {
            let part = (0..parts)
                .min_by_key(|&part| sizes[part])
                .expect("there are at least two parts");
            sizes[part] += batch.len();
            for unit in batch {
                part_of_unit[unit] = part;
            }
        }
        Ok(part_of_unit)
    }

    fn in_blocks(
        &self,
        rows: &[usize],
        structure: &Structure<'_>,
        parts: usize,
    ) -> Result<Vec<usize>, PlanError> {
        let order = structure.order.ok_or(PlanError::NoOrder)?;
        if let Some(&row) = rows.iter().find(|&&row| !order[row].is_finite()) {
            return Err(PlanError::OrderMissing { row });
        }
        let places: Vec<f64> = self
            .samples
            .iter()
            .map(|samples| {
                samples.iter().map(|&row| order[row]).sum::<f64>() / samples.len() as f64
            })
            .collect();
        let mut sorted: Vec<usize> = (0..self.count()).collect();
        sorted.sort_by(|&a, &b| places[a].total_cmp(&places[b]));
        let mut part_of_unit = vec![0; self.count()];
        for (place, unit) in sorted.into_iter().enumerate() {
            part_of_unit[unit] = place * parts / self.count();
        }
        Ok(part_of_unit)
    }
}

/// The strata that occur among some samples, rising, and the most frequent (the smallest of
/// equally frequent ones). Nothing and 0 when there are no strata.
fn strata_of(rows: &[usize], strata: Option<&[usize]>) -> (Vec<usize>, usize) {
    let Some(strata) = strata else {
        return (Vec::new(), 0);
    };
    let mut counts: BTreeMap<usize, usize> = BTreeMap::new();
    for &row in rows {
        *counts.entry(strata[row]).or_insert(0) += 1;
    }
    let most = counts.values().copied().max().unwrap_or(0);
    let main = counts
        .iter()
        .find(|&(_, &count)| count == most)
        .map_or(0, |(&stratum, _)| stratum);
    (counts.into_keys().collect(), main)
}

/// Deals units out to parts one by one.
fn deal(order: Vec<usize>, parts: usize) -> Vec<usize> {
    let mut part_of_unit = vec![0; order.len()];
    for (place, unit) in order.into_iter().enumerate() {
        part_of_unit[unit] = place % parts;
    }
    part_of_unit
}
