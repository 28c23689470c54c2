//! Plans: what they keep together, how even they are, and what they refuse.

use super::*;
use std::collections::BTreeMap;

fn params(scheme: Scheme, parts: usize) -> PartsParams {
    PartsParams {
        scheme,
        parts,
        repeats: 3,
        seed: 11,
    }
}

/// 21 rows of 11 units in no order; the last unit has one row.
fn units() -> Vec<usize> {
    (0..21).map(|row| 100 + (row * 8) % 11).collect()
}

fn all(n: usize) -> Vec<usize> {
    (0..n).collect()
}

/// For each part the number of units held out, checking that every row is held out once, that
/// sides share no unit, and that rows rise.
fn units_held_out(assignment: &Assignment, repeat: usize, units: &[usize]) -> Vec<usize> {
    let mut times = BTreeMap::new();
    let sizes = assignment
        .splits(repeat)
        .iter()
        .map(|split| {
            let of = |rows: &[usize]| {
                let mut of: Vec<usize> = rows.iter().map(|&row| units[row]).collect();
                of.sort_unstable();
                of.dedup();
                of
            };
            for &row in split.held_out() {
                *times.entry(row).or_insert(0) += 1;
            }
            assert!(split.training().is_sorted() && split.held_out().is_sorted());
            let together = split.training().len() + split.held_out().len();
            assert_eq!(together, assignment.rows().len());
            let (training, held_out) = (of(split.training()), of(split.held_out()));
            assert!(held_out.iter().all(|unit| !training.contains(unit)));
            held_out.len()
        })
        .collect();
    assert_eq!(times.len(), assignment.rows().len());
    assert!(times.values().all(|&count| count == 1));
    sizes
}

#[test]
fn units_stay_whole_and_parts_differ_by_one_unit_at_most() {
    let units = units();
    let rows: Vec<usize> = (2..21).collect();
    let structure = Structure::of_units(&units);
    for parts in 2..=9 {
        let plan = assign(&params(Scheme::Random, parts), &rows, &structure, "x").unwrap();
        assert_eq!((plan.n_repeats(), plan.n_parts()), (3, parts));
        for repeat in 0..3 {
            let sizes = units_held_out(&plan, repeat, &units);
            let (least, most) = (sizes.iter().min().unwrap(), sizes.iter().max().unwrap());
            assert!(most - least <= 1);
        }
        assert_ne!(plan.table()[0], plan.table()[1]);
    }
}

#[test]
fn the_same_seed_and_purpose_give_the_same_plan_and_others_do_not() {
    let units = units();
    let structure = Structure::of_units(&units);
    let draw = |params: &PartsParams, purpose: &str| {
        assign(params, &all(21), &structure, purpose).unwrap()
    };
    let first = params(Scheme::Random, 4);
    assert_eq!(draw(&first, "outer parts"), draw(&first, "outer parts"));
    assert_ne!(draw(&first, "outer parts"), draw(&first, "inner parts"));
    let other = PartsParams { seed: 12, ..first };
    assert_ne!(draw(&first, "outer parts"), draw(&other, "outer parts"));
    // A repeat does not depend on how many there are.
    let single = PartsParams {
        repeats: 1,
        ..first
    };
    assert_eq!(draw(&single, "x").table()[0], draw(&first, "x").table()[0]);
}

#[test]
fn balanced_parts_hold_their_share_of_every_stratum() {
    let units = all(47);
    let strata: Vec<usize> = (0..47).map(|row| usize::from(row % 4 == 0) + 5).collect();
    let structure = Structure {
        strata: Some(&strata),
        ..Structure::of_units(&units)
    };
    let plan = assign(&params(Scheme::Balanced, 5), &all(47), &structure, "x").unwrap();
    for repeat in 0..3 {
        assert!(
            units_held_out(&plan, repeat, &units)
                .iter()
                .all(|&n| n == 9 || n == 10)
        );
        for split in plan.splits(repeat) {
            let rare = split
                .held_out()
                .iter()
                .filter(|&&row| strata[row] == 6)
                .count();
            assert!(rare == 2 || rare == 3, "12 of 47 over five parts");
        }
    }
}

#[test]
fn batches_stay_whole_and_a_unit_in_two_batches_joins_them() {
    let units = all(20);
    let batches: Vec<usize> = (0..20).map(|row| row % 5).collect();
    let structure = Structure {
        batches: Some(&batches),
        ..Structure::of_units(&units)
    };
    let plan = assign(&params(Scheme::WholeBatches, 5), &all(20), &structure, "x").unwrap();
    assert_eq!(
        plan.n_repeats(),
        1,
        "one batch per part leaves nothing to chance"
    );
    for (part, split) in plan.splits(0).iter().enumerate() {
        assert!(split.held_out().iter().all(|&row| batches[row] == part));
    }
    let fewer = assign(&params(Scheme::WholeBatches, 2), &all(20), &structure, "x").unwrap();
    for repeat in 0..3 {
        let mut sizes = units_held_out(&fewer, repeat, &units);
        sizes.sort_unstable();
        assert_eq!(sizes, [8, 12]);
    }
    // Rows 0 and 1, of batches 0 and 1, become one unit: four batches can be told apart.
    let joined: Vec<usize> = (0..20).map(|row| usize::max(row, 1)).collect();
    let structure = Structure {
        units: &joined,
        ..structure
    };
    let error = assign(&params(Scheme::WholeBatches, 5), &all(20), &structure, "x").unwrap_err();
    assert_eq!(
        error,
        PlanError::TooFewBatches {
            batches: 4,
            parts: 5
        }
    );
    assert_eq!(error.feasible_parts(), Some(2..=4));
}

#[test]
fn every_unit_is_left_out_once_and_blocks_follow_the_order() {
    let units = units();
    let order: Vec<f64> = (0..21).map(|row| -f64::from(row)).collect();
    let structure = Structure {
        order: Some(&order),
        ..Structure::of_units(&units)
    };
    let plan = assign(
        &params(Scheme::LeaveOneUnitOut, 0),
        &all(21),
        &structure,
        "x",
    )
    .unwrap();
    assert_eq!((plan.n_parts(), plan.n_repeats()), (11, 1));
    assert!(units_held_out(&plan, 0, &units).iter().all(|&n| n == 1));
    let single = all(21);
    let structure = Structure {
        units: &single,
        ..structure
    };
    let plan = assign(&params(Scheme::Blocked, 4), &all(21), &structure, "x").unwrap();
    let held: Vec<Vec<usize>> = plan
        .splits(0)
        .iter()
        .map(|s| s.held_out().to_vec())
        .collect();
    assert_eq!(held[0], [15, 16, 17, 18, 19, 20]);
    assert_eq!(held[3], [0, 1, 2, 3, 4]);
}

#[test]
fn infeasible_plans_say_what_would_be_feasible() {
    let units = units();
    let structure = Structure::of_units(&units);
    let refuse = |params: &PartsParams, structure: &Structure<'_>, rows: &[usize]| {
        assign(params, rows, structure, "x").unwrap_err()
    };
    let error = refuse(&params(Scheme::Random, 12), &structure, &all(21));
    assert_eq!(
        error,
        PlanError::TooFewUnits {
            units: 11,
            parts: 12
        }
    );
    assert_eq!(error.feasible_parts(), Some(2..=11));
    let error = refuse(&params(Scheme::Random, 1), &structure, &all(21));
    assert_eq!(error.feasible_parts(), Some(2..=11));
    let error = refuse(&params(Scheme::LeaveOneUnitOut, 9), &structure, &[3]);
    assert_eq!(
        (&error, error.feasible_parts()),
        (&PlanError::TooFewParts { parts: 1, units: 1 }, None)
    );
    let none = PartsParams {
        repeats: 0,
        ..params(Scheme::Random, 2)
    };
    assert_eq!(refuse(&none, &structure, &all(21)), PlanError::NoRepeats);
    for (scheme, expected) in [
        (Scheme::Balanced, PlanError::NoStrata),
        (Scheme::WholeBatches, PlanError::NoBatches),
        (Scheme::Blocked, PlanError::NoOrder),
    ] {
        assert_eq!(refuse(&params(scheme, 2), &structure, &all(21)), expected);
    }
    let order: Vec<f64> = (0..21)
        .map(|row| if row == 7 { f64::NAN } else { 0.0 })
        .collect();
    let gappy = Structure {
        order: Some(&order),
        ..structure
    };
    let error = refuse(&params(Scheme::Blocked, 2), &gappy, &all(21));
    assert_eq!(error, PlanError::OrderMissing { row: 7 });
}

#[test]
fn parts_of_one_class_are_refused() {
    let units = all(12);
    let of = |strata: &[usize], scheme: Scheme, parts: usize| {
        let structure = Structure {
            strata: Some(strata),
            ..Structure::of_units(&units)
        };
        assign(&params(scheme, parts), &all(12), &structure, "x").unwrap_err()
    };
    let same = vec![4; 12];
    assert_eq!(
        of(&same, Scheme::Balanced, 3),
        PlanError::OneStratum { stratum: 4 }
    );
    assert_eq!(
        of(&same, Scheme::Random, 3),
        PlanError::OneStratum { stratum: 4 }
    );
    let rare: Vec<usize> = (0..12).map(|row| usize::from(row < 3)).collect();
    let error = of(&rare, Scheme::Balanced, 5);
    assert_eq!(
        error,
        PlanError::RareStratum {
            stratum: 1,
            units: 3,
            parts: 5
        }
    );
    assert_eq!(error.feasible_parts(), Some(2..=3));
    let single: Vec<usize> = (0..12).map(|row| usize::from(row == 5)).collect();
    let lacking = PlanError::TrainingLacksStratum {
        part: 5,
        stratum: 1,
        units: 1,
    };
    assert_eq!(of(&single, Scheme::LeaveOneUnitOut, 2), lacking);
}

#[test]
fn a_stored_table_gives_the_plan_back_and_a_wrong_one_is_refused() {
    let units = units();
    let structure = Structure::of_units(&units);
    let plan = assign(&params(Scheme::Random, 3), &all(21), &structure, "x").unwrap();
    let read = |rows: &[usize], table: Vec<Vec<usize>>, parts: usize| {
        Assignment::from_table(rows, table, parts, &structure)
    };
    assert_eq!(read(&all(21), plan.table().to_vec(), 3), Ok(plan.clone()));
    let changed = |at: usize, part: usize| {
        let mut table = plan.table().to_vec();
        table[1][at] = part;
        read(&all(21), table, 3)
    };
    let other = (plan.table()[1][0] + 1) % 3;
    let divided = TableError::UnitDivided {
        repeat: 1,
        unit: units[0],
    };
    assert_eq!(
        changed(0, other),
        Err(TableError::UnitDivided {
            repeat: 1,
            unit: units[11]
        })
    );
    assert_eq!(
        divided,
        TableError::UnitDivided {
            repeat: 1,
            unit: units[11]
        }
    );
    let beyond = TableError::NoSuchPart {
        repeat: 1,
        row: 4,
        part: 3,
    };
    assert_eq!(changed(4, 3), Err(beyond));
    let empty = read(&all(21), plan.table().to_vec(), 4);
    assert_eq!(empty, Err(TableError::EmptyPart { repeat: 0, part: 3 }));
    assert_eq!(read(&all(21), Vec::new(), 3), Err(TableError::Empty));
    assert_eq!(
        read(&[1, 1], vec![vec![0, 1]], 2),
        Err(TableError::WrongRow { row: 1 })
    );
    let short = TableError::WrongLength {
        repeat: 0,
        expected: 2,
        found: 1,
    };
    assert_eq!(read(&[0, 1], vec![vec![0]], 1), Err(short));
}

#[test]
fn halves_share_no_unit_and_are_equal() {
    let units = units();
    let strata: Vec<usize> = units.iter().map(|unit| usize::from(*unit < 104)).collect();
    let structure = Structure {
        strata: Some(&strata),
        ..Structure::of_units(&units)
    };
    let pairs = complementary_pairs(20, 3, &all(21), &structure).unwrap();
    assert_eq!(pairs.len(), 20);
    let mut sat_out = [0; 21];
    for (first, second) in &pairs {
        let count = |rows: &[usize]| {
            let mut of: Vec<usize> = rows.iter().map(|&row| units[row]).collect();
            of.sort_unstable();
            of.dedup();
            let rare = of.iter().filter(|&&unit| unit < 104).count();
            (of.len(), rare == 1 || rare == 2)
        };
        // Eleven units: five in each half, one sits out.
        assert_eq!(count(first.training()), (5, true));
        assert_eq!(count(second.training()), (5, true));
        assert_eq!(first.training(), second.held_out());
        assert_eq!(first.held_out(), second.training());
        for (row, count) in sat_out.iter_mut().enumerate() {
            let used = first.training().contains(&row) || second.training().contains(&row);
            *count += usize::from(!used);
        }
    }
    assert!(
        sat_out.iter().filter(|&&count| count > 0).count() > 10,
        "not always the same unit"
    );
    assert_ne!(pairs[0], pairs[1]);
    assert!(complementary_pairs(2, 3, &[5], &structure).is_err());
}

#[test]
fn a_split_that_divides_a_unit_cannot_be_made() {
    let units = units();
    let structure = Structure::of_units(&units);
    let error = Split::with_held_out(&[0, 1], &[2, 11], &structure).unwrap_err();
    assert_eq!(error, PlanError::UnitDivided { unit: 100 });
}
