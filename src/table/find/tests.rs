//! Tests of what is found once roles are known.

use crate::base::thread::Threads;
use crate::base::work::Work;
use crate::table::Table;
use crate::table::column::{Censored, Column, Numbers, Values};
use crate::table::find::{Roles, design, with_roles};
use crate::table::finding::{Association, Finding, FindingKind, Likeness, Normalized};

/// Numbers that look random, the same every time.
struct Dice(u64);

impl Dice {
    fn uniform(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }

    fn column(&mut self, name: &str, n: usize) -> Column {
        Column::numbers(name, (0..n).map(|_| self.normal()).collect())
    }
}

fn wide(dice: &mut Dice, n: usize, p: usize) -> Vec<Column> {
    let mut columns = vec![Column::texts(
        "sample",
        (0..n).map(|row| Some(format!("S{row:03}x"))).collect(),
    )];
    columns.push(dice.column("salt", n));
    columns.extend((0..p).map(|at| dice.column(&format!("x{at}"), n)));
    columns
}

fn find(columns: Vec<Column>, roles: Roles<'_>) -> Vec<Finding> {
    let table = Table::new(columns);
    let predictors: Vec<usize> = (2..table.columns().len())
        .filter(|&at| !["batch", "order", "unit"].contains(&table.columns()[at].name.as_str()))
        .collect();
    let rows: Vec<usize> = (0..table.n_rows()).collect();
    let roles = Roles {
        rows: &rows,
        predictors: &predictors,
        sample_name: Some("sample"),
        outcome: Some("salt"),
        ..roles
    };
    with_roles(&table, &roles, Threads::new(2), &Work::unattended()).unwrap()
}

fn codes(findings: &[Finding]) -> Vec<&'static str> {
    findings.iter().map(|finding| finding.kind.code()).collect()
}

#[test]
fn ordinary_tables_give_no_finding() {
    for seed in 1..20 {
        let mut dice = Dice(seed * 7919);
        let mut columns = wide(&mut dice, 30, 200);
        columns.push(Column::numbers("order", (0..30).map(f64::from).collect()));
        let roles = Roles {
            order: Some("order"),
            ..Roles::default()
        };
        assert_eq!(codes(&find(columns, roles)), [] as [&str; 0], "seed {seed}");
    }
}

#[test]
fn idle_predictors_are_listed() {
    let mut dice = Dice(5);
    let mut columns = wide(&mut dice, 20, 30);
    columns[5] = Column::numbers("x3", vec![2.5; 20]);
    columns[6] = Column::numbers("x4", vec![f64::NAN; 20]);
    let twin = columns[7].values.clone();
    columns[9].values = twin;
    let limits = (0..8).map(|row| (row, Censored::Below(0.1))).collect();
    let values = columns[10].as_numbers().unwrap().values().to_vec();
    columns[10].values = Values::Numbers(Numbers::with_censored(values, limits));
    let findings = find(columns, Roles::default());
    assert_eq!(
        codes(&findings),
        [
            "empty-columns",
            "constant-columns",
            "equal-columns",
            "below-limit-share"
        ]
    );
    assert_eq!(findings[2].columns, ["x7"]);
    assert_eq!(findings[2].examples, ["x5"]);
    assert_eq!(
        findings[3].kind,
        FindingKind::BelowLimitShare { largest: 0.4 }
    );
}

#[test]
fn an_outcome_in_disguise_is_named() {
    let mut dice = Dice(11);
    let mut columns = wide(&mut dice, 40, 50);
    let y = columns[1].as_numbers().unwrap().values().to_vec();
    columns[8] = Column::numbers(
        "salt_calc",
        y.iter()
            .map(|y| 3.0 - 2.0 * y + 0.01 * dice.normal())
            .collect(),
    );
    let findings = find(columns, Roles::default());
    assert_eq!(codes(&findings), ["equals-outcome", "named-like-outcome"]);
    let FindingKind::EqualsOutcome {
        predictor,
        likeness: Likeness::Correlation(r),
    } = &findings[0].kind
    else {
        panic!("{findings:?}");
    };
    assert_eq!(predictor, "salt_calc");
    assert!(*r < -0.999);

    // A class: the area under the curve, turned to the right side.
    let mut columns = wide(&mut dice, 40, 50);
    columns[1] = Column::texts(
        "salt",
        (0..40).map(|row| Some(["no", "yes"][row % 2])).collect(),
    );
    columns[8] = Column::numbers(
        "later",
        (0..40)
            .map(|row| f64::from(row % 2) * -5.0 + dice.uniform())
            .collect(),
    );
    let findings = find(columns, Roles::default());
    let expected = FindingKind::EqualsOutcome {
        predictor: "later".to_owned(),
        likeness: Likeness::Auc(1.0),
    };
    assert_eq!(findings[0].kind, expected);
}

#[test]
fn samples_that_are_alike_are_listed_unless_they_are_one_unit() {
    let mut dice = Dice(17);
    let mut columns = wide(&mut dice, 30, 60);
    for column in columns.iter_mut().skip(2) {
        let mut values = column.as_numbers().unwrap().values().to_vec();
        values[20] = values[4];
        values[21] = values[6] + 0.001;
        column.values = Values::Numbers(Numbers::new(values));
    }
    let findings = find(columns.clone(), Roles::default());
    assert_eq!(
        codes(&findings),
        ["identical-samples", "near-identical-samples"]
    );
    assert_eq!(findings[0].examples, ["S004x and S020x"]);
    assert_eq!(findings[1].examples, ["S006x and S021x"]);
    let units = (0..30)
        .map(|row| {
            Some(format!(
                "u{}",
                match row {
                    20 => 4,
                    21 => 6,
                    _ => row,
                }
            ))
        })
        .collect();
    columns.push(Column::texts("unit", units));
    assert!(
        find(
            columns,
            Roles {
                unit: Some("unit"),
                ..Roles::default()
            }
        )
        .is_empty()
    );
}

#[test]
fn excluded_samples_are_not_looked_at() {
    let mut dice = Dice(19);
    let mut columns = wide(&mut dice, 12, 6);
    let mut names: Vec<Option<String>> = (0..12).map(|row| Some(format!("S{row}x"))).collect();
    names[3] = None;
    names[5] = names[4].clone();
    columns[0] = Column::texts("sample", names);
    let table = Table::new(columns);
    let found = |rows: &[usize]| {
        let roles = Roles {
            rows,
            sample_name: Some("sample"),
            ..Roles::default()
        };
        with_roles(&table, &roles, Threads::new(1), &Work::unattended()).unwrap()
    };
    assert_eq!(
        codes(&found(&(0..12).collect::<Vec<_>>())),
        ["repeated-samples", "unnamed-samples"]
    );
    let without_three = found(&[0, 1, 2, 4, 5]);
    assert_eq!(codes(&without_three), ["repeated-samples"]);
    // Places are those of the whole table.
    assert_eq!(without_three[0].places[0].row, Some(5));
    assert!(found(&[0, 1, 2, 4]).is_empty());
}

#[test]
fn names_of_samples_are_looked_at() {
    let mut dice = Dice(23);
    let mut columns = wide(&mut dice, 12, 6);
    let mut names: Vec<Option<String>> = (0..12)
        .map(|row| Some(format!("W{}-n{}", row / 2, row % 2)))
        .collect();
    names[3] = names[2].clone();
    names[7] = None;
    columns[0] = Column::texts("sample", names);
    let findings = find(columns, Roles::default());
    assert_eq!(
        codes(&findings),
        ["repeated-samples", "unnamed-samples", "looks-like-repeats"]
    );
    assert_eq!((findings[0].count, findings[1].count), (2, 1));
    assert_eq!(
        findings[2].kind,
        FindingKind::LooksLikeRepeats { n_units: 6 }
    );
}

#[test]
fn batches_and_order_that_go_with_the_outcome_are_measured() {
    let mut dice = Dice(31);
    let mut columns = wide(&mut dice, 40, 6);
    columns[1] = Column::numbers(
        "salt",
        (0..40)
            .map(|row| f64::from(row) * 0.1 + dice.normal())
            .collect(),
    );
    columns.push(Column::texts(
        "batch",
        (0..40).map(|row| Some(["a", "b"][row / 20])).collect(),
    ));
    columns.push(Column::numbers("order", (0..40).map(f64::from).collect()));
    let roles = Roles {
        batch: Some("batch"),
        order: Some("order"),
        ..Roles::default()
    };
    assert_eq!(
        codes(&find(columns.clone(), roles.clone())),
        ["batch-with-outcome", "order-with-outcome"]
    );
    columns[1] = Column::texts(
        "salt",
        (0..40).map(|row| Some(["no", "yes"][row / 20])).collect(),
    );
    let findings = find(columns, roles);
    assert_eq!(
        codes(&findings),
        [
            "batch-with-outcome",
            "batch-of-one-class",
            "order-with-outcome"
        ]
    );
    let strength = Association::CramersV(1.0);
    assert_eq!(
        findings[0].kind,
        FindingKind::BatchWithOutcome {
            batch: "batch".to_owned(),
            strength
        }
    );
}

#[test]
fn measures_of_association_agree_with_scipy() {
    // scipy.stats.contingency.association([[10, 4, 3], [2, 9, 8]], "cramer") = 0.5122712062; f_oneway for the other
    let labels = |counts: &[(&str, &str, usize)]| -> (Vec<Option<String>>, Vec<Option<String>>) {
        counts
            .iter()
            .flat_map(|(batch, class, count)| {
                std::iter::repeat_n(
                    (Some((*class).to_owned()), Some((*batch).to_owned())),
                    *count,
                )
            })
            .unzip()
    };
    let (classes, batches) = labels(&[
        ("a", "x", 10),
        ("a", "y", 4),
        ("a", "z", 3),
        ("b", "x", 2),
        ("b", "y", 9),
        ("b", "z", 8),
    ]);
    let (v, corrected) = design::cramers_v(&design::cross(&classes, &batches)).unwrap();
    assert!((v - 0.5122712062351136).abs() < 1e-12, "{v}");
    assert!((corrected - 0.459691795913153).abs() < 1e-12, "{corrected}");
    let y = [1.0, 2.0, 3.5, 2.5, 6.0, 5.0, 4.5];
    let batches: Vec<_> = ["a", "a", "a", "b", "b", "c", "c"]
        .map(|b| Some(b.to_owned()))
        .to_vec();
    let (eta, _, groups) = design::eta_squared(&y, &batches).unwrap();
    assert!((eta - 0.5043859649122807).abs() < 1e-12, "{eta}");
    assert_eq!(groups, 3);
}

#[test]
fn values_that_were_normalised_before_are_recognised() {
    let mut dice = Dice(41);
    let n = 12;
    let plain = wide(&mut dice, n, 20);
    let values = |columns: &[Column]| -> Vec<Vec<f64>> {
        columns[2..]
            .iter()
            .map(|c| c.as_numbers().unwrap().values().to_vec())
            .collect()
    };
    let with = |changed: Vec<Vec<f64>>| {
        let mut columns = plain.clone();
        for (column, values) in columns[2..].iter_mut().zip(changed) {
            column.values = Values::Numbers(Numbers::new(values));
        }
        find(columns, Roles::default())
    };
    let x = values(&plain);
    let standardized = x
        .iter()
        .map(|column| {
            let mean = column.iter().sum::<f64>() / n as f64;
            let sd =
                (column.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (n - 1) as f64).sqrt();
            column.iter().map(|v| (v - mean) / sd).collect()
        })
        .collect();
    assert_eq!(
        with(standardized)[0].kind,
        FindingKind::AlreadyNormalized(Normalized::Columns)
    );
    let totals: Vec<f64> = (0..n)
        .map(|row| x.iter().map(|column| column[row].abs()).sum())
        .collect();
    let closed = x
        .iter()
        .map(|column| {
            column
                .iter()
                .zip(&totals)
                .map(|(v, total)| v.abs() / total)
                .collect()
        })
        .collect();
    assert_eq!(
        with(closed)[0].kind,
        FindingKind::AlreadyNormalized(Normalized::RowSums)
    );
    // The values of the first row, in the order that each row has.
    let mut first: Vec<f64> = x.iter().map(|column| column[0]).collect();
    first.sort_by(f64::total_cmp);
    let mut ranked = x.clone();
    for row in 0..n {
        let mut order: Vec<usize> = (0..x.len()).collect();
        order.sort_by(|&a, &b| x[a][row].total_cmp(&x[b][row]));
        for (rank, at) in order.into_iter().enumerate() {
            ranked[at][row] = first[rank];
        }
    }
    assert_eq!(
        with(ranked)[0].kind,
        FindingKind::AlreadyNormalized(Normalized::SortedRows)
    );
}
