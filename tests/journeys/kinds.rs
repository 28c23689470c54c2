//! Every kind of outcome goes from a table to the hand-over, and what cannot be fitted is refused.

use crate::run::{QUICK, dice_table, quick, repository, run_anew, try_start, widefold};
use crate::support::{Folder, get};
use serde_json::Value;
use widefold::eval::fact::FactValue;
use widefold::eval::start::Wishes;
use widefold::study::cell::Kind;
use widefold::study::settings::data::OutcomeKind;

/// Start, update, facts and export; the facts of the fit.
fn fit_of(table: &str, more: &[&str]) -> Value {
    let folder = Folder::new();
    let _ = folder.put("table.csv", table);
    let mut arguments = vec!["start", "table.csv", "-o", "study.widefold"];
    arguments.extend(more);
    arguments.extend(QUICK);
    let started = widefold(folder.path(), &arguments);
    assert_eq!(started.status, 0, "{}", started.error);
    let updated = widefold(folder.path(), &["update", "study.widefold"]);
    assert_eq!(updated.status, 0, "{}", updated.error);
    let facts = widefold(folder.path(), &["facts", "study.widefold", "--json"]);
    assert_eq!(facts.status, 0, "{}", facts.error);
    let facts: Value = serde_json::from_str(&facts.out).unwrap();
    let exported = widefold(
        folder.path(),
        &[
            "export",
            "study.widefold",
            "--workbook",
            "out.xlsx",
            "--write-up",
            "out.md",
            "--despite",
            "a journey",
        ],
    );
    assert_eq!(exported.status, 0, "{}", exported.error);
    let told = String::from_utf8(get(&folder.file("out.md"))).unwrap();
    assert!(!told.contains("{"), "a fact is missing: {told}");
    let cells = facts["cells"].as_array().unwrap();
    for cell in cells {
        assert_eq!(cell["state"], "current", "{}", cell["name"]);
    }
    cells
        .iter()
        .find(|cell| cell["kind"] == "fit")
        .unwrap()
        .clone()
}

fn file(name: &str) -> String {
    let bytes = get(&repository(&format!("tests/reference/data/{name}")));
    String::from_utf8(bytes).unwrap()
}

fn value(fit: &Value, name: &str) -> f64 {
    let facts = fit["facts"].as_array().unwrap();
    let fact = facts.iter().find(|fact| fact["name"] == name);
    let fact = fact.unwrap_or_else(|| panic!("no fact “{name}”"));
    fact["value"]
        .as_f64()
        .unwrap_or_else(|| panic!("“{name}” is not known"))
}

/// No number of the fit is unknown, apart from those that one repeat cannot know.
fn knows_all(fit: &Value) {
    for fact in fit["facts"].as_array().unwrap() {
        let name = fact["name"].as_str().unwrap();
        assert!(
            !fact["value"].is_null() || name.ends_with("spread"),
            "“{name}” is not known"
        );
    }
}

#[test]
fn yes_or_no_goes_the_whole_way() {
    // UCI breast cancer, 24 of 80 benign: measurements that are known to tell the two apart.
    let table = file("breast_cancer_80.csv");
    let fit = fit_of(&table, &["--outcome", "target", "--kind", "yes-no"]);
    knows_all(&fit);
    assert_eq!(value(&fit, "events"), 24.0);
    assert!(value(&fit, "nested auc") > 0.9);
    assert!(value(&fit, "nested brier") < value(&fit, "baseline brier"));
    assert!(value(&fit, "nested auc low") <= value(&fit, "nested auc"));
    let by_calls = fit_of(
        &table,
        &[
            "--outcome",
            "target",
            "--error-measure",
            "misclassification",
            "--choice",
            "one-se",
            "--penalty",
            "elastic-net",
        ],
    );
    assert!(value(&by_calls, "tuning error") < 0.3);
}

#[test]
fn classes_go_the_whole_way_apart_and_together() {
    let table = file("wine.csv");
    let wishes = ["--outcome", "class", "--kind", "classes"];
    let apart = fit_of(&table, &wishes);
    knows_all(&apart);
    assert!(value(&apart, "nested accuracy") > 0.9);
    let together = fit_of(
        &table,
        &[&wishes[..], &["--together", "--choice", "ebic"]].concat(),
    );
    assert!(value(&together, "nested accuracy") > 0.9);
    let words = together["facts"].as_array().unwrap();
    let grouping = words
        .iter()
        .find(|fact| fact["name"] == "grouping")
        .unwrap();
    assert!(grouping["text"].as_str().unwrap().contains("as a whole"));
}

#[test]
fn counts_go_the_whole_way_with_their_exposure() {
    // Counts about exposure times a rate that leans on the first predictor.
    let mut table = String::from("name,nights,caught");
    for at in 1..=30 {
        table.push_str(&format!(",x{at}"));
    }
    for (row, line) in dice_table(5, 60, 30, 0.0).lines().skip(1).enumerate() {
        let cells: Vec<&str> = line.split(',').collect();
        let x: f64 = cells[2].parse().unwrap();
        let nights = 1 + row % 4;
        let caught = (nights as f64 * (0.8 + 0.7 * x).exp()).round();
        table.push_str(&format!(
            "\n{},{nights},{caught},{}",
            cells[0],
            cells[2..].join(",")
        ));
    }
    let fit = fit_of(
        &table,
        &[
            "--outcome",
            "caught",
            "--kind",
            "count",
            "--exposure",
            "nights",
        ],
    );
    knows_all(&fit);
    assert!(value(&fit, "nested deviance explained") > 0.5);
    assert!(value(&fit, "nested deviance") < value(&fit, "baseline deviance"));
    let slope = value(&fit, "nested calibration slope");
    assert!((0.8..1.5).contains(&slope), "{slope}");
}

#[test]
fn times_go_the_whole_way_with_either_way_of_counting_ties() {
    let table = file("rossi.csv");
    let wishes = ["--outcome", "week", "--event", "arrest"];
    let efron = fit_of(&table, &wishes);
    knows_all(&efron);
    assert_eq!(
        (value(&efron, "events"), value(&efron, "censored")),
        (114.0, 318.0)
    );
    let concordance = value(&efron, "nested concordance");
    assert!((0.55..0.68).contains(&concordance), "{concordance}");
    let breslow = fit_of(&table, &[&wishes[..], &["--ties", "breslow"]].concat());
    // The all-zero points of the reference values: 0.0884044… and 0.0886301….
    assert!((value(&breslow, "strongest strength") - 0.088_404_414_66).abs() < 1e-8);
    assert!((value(&efron, "strongest strength") - 0.088_630_176_42).abs() < 1e-8);
    let ordered = fit_of(
        &table,
        &[&wishes[..], &["--error-measure", "concordance"]].concat(),
    );
    assert!(value(&ordered, "tuning error") < 0.5);
}

/// The problem of the fit of a table, or nothing when it was fitted.
fn refusal(table: &str, kind: OutcomeKind) -> Option<String> {
    let wishes = Wishes {
        kind: Some(kind),
        ..quick("y")
    };
    let started = match try_start(&[("table.csv", table.as_bytes().to_vec())], &wishes) {
        Ok(started) => started,
        Err(problem) => return Some(problem.found),
    };
    let told = run_anew(&started.study, &started.shelf);
    for cell in started.study.cells() {
        let standing = told.standings.get(cell.id);
        if let Some(failure) = &standing.failure {
            return Some(failure.problem.found.clone());
        }
        if cell.settings.kind() == Kind::Fit {
            let outcome = standing.outcome.as_ref().unwrap();
            for fact in outcome.facts.all() {
                if let FactValue::Number(value) = fact.value {
                    let may_lack = fact.name.ends_with("spread");
                    assert!(value.is_finite() || may_lack, "{}: {value}", fact.name);
                }
            }
        }
    }
    None
}

/// A table of dice with the outcome (and perhaps the event) given row by row.
fn table_with(head: &str, n: usize, outcome: impl Fn(usize, f64) -> String) -> String {
    let mut table = format!("name,{head}");
    for at in 1..=25 {
        table.push_str(&format!(",x{at}"));
    }
    for (row, line) in dice_table(11, n, 25, 0.0).lines().skip(1).enumerate() {
        let cells: Vec<&str> = line.split(',').collect();
        let x: f64 = cells[2].parse().unwrap();
        table.push_str(&format!(
            "\n{},{},{}",
            cells[0],
            outcome(row, x),
            cells[2..].join(",")
        ));
    }
    table
}

#[test]
fn separable_classes_and_ties_everywhere_are_fitted_without_a_number_that_is_none() {
    let yes = |event: bool| if event { "yes" } else { "no" }.to_owned();
    let separable = table_with("y", 40, |_, x| yes(x > 0.0));
    assert_eq!(
        refusal(&separable, OutcomeKind::YesNo { event: None }),
        None
    );
    let three = table_with("y", 45, |row, _| ["a", "b", "c"][row % 3].to_owned());
    assert_eq!(refusal(&three, OutcomeKind::Classes), None);
    let time = |event: &str| OutcomeKind::Time {
        event: event.to_owned(),
    };
    let tied = table_with("y,died", 40, |row, _| {
        format!("{},{}", 1 + row % 2, row % 3 % 2)
    });
    assert_eq!(refusal(&tied, time("died")), None);
    let all_seen = table_with("y,died", 40, |row, x| {
        format!("{:.2},{}", (x + 4.0) * (1.0 + row as f64 / 9.0), 1)
    });
    let told = refusal(&all_seen, time("died"));
    assert!(told.is_none(), "{told:?}");
    let few = table_with("y", 40, |row, _| format!("{}", u8::from(row % 3 == 0)));
    assert_eq!(refusal(&few, OutcomeKind::Count { exposure: None }), None);
}

#[test]
fn what_cannot_be_fitted_is_refused_before_any_work_with_what_is_lacking() {
    let yes = |event: bool| if event { "yes" } else { "no" }.to_owned();
    let one = table_with("y", 40, |row, _| yes(row == 3));
    let found = refusal(&one, OutcomeKind::YesNo { event: None }).unwrap();
    assert!(found.contains("only 1 independent sample"), "{found}");
    let same = table_with("y", 40, |_, _| yes(true));
    let found = refusal(&same, OutcomeKind::YesNo { event: None }).unwrap();
    assert!(found.contains("the same for all"), "{found}");
    let time = OutcomeKind::Time {
        event: "died".to_owned(),
    };
    let censored = table_with("y,died", 40, |row, _| format!("{},0", 1 + row));
    assert!(refusal(&censored, time.clone()).is_some());
    let single = table_with("y,died", 40, |row, _| {
        format!("{},{}", 1 + row, u8::from(row == 5))
    });
    let found = refusal(&single, time).unwrap();
    assert!(found.contains("event"), "{found}");
    let folder = Folder::new();
    let _ = folder.put("t.csv", table_with("y", 40, |row, _| yes(row % 3 == 0)));
    let refused = widefold(
        folder.path(),
        &[
            "start",
            "t.csv",
            "--outcome",
            "y",
            "--choice",
            "gcv",
            "-o",
            "s.json",
        ],
    );
    assert_eq!(refused.status, 1);
    assert!(
        refused.error.contains("measured quantities only"),
        "{}",
        refused.error
    );
}
