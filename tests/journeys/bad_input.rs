//! Whatever is wrong with a table, the answer says what, where, and what would mend it.

use crate::run::{QUICK, dice_table, quick, repository, run_anew, the, try_start, widefold};
use crate::support::{Folder, get};
use widefold::base::problem::Problem;
use widefold::eval::fact::Facts;
use widefold::eval::standing::State;
use widefold::study::cell::Kind;

/// What there is to say about a table: the first problem from start or from the evaluation.
fn problem(file: &str, bytes: &[u8]) -> Problem {
    let started = match try_start(&[(file, bytes.to_vec())], &quick("y")) {
        Err(problem) => return problem,
        Ok(started) => started,
    };
    let told = run_anew(&started.study, &started.shelf);
    let mut standings = started
        .study
        .cells()
        .iter()
        .map(|cell| told.standings.get(cell.id));
    let failed = standings.find(|standing| standing.state == State::Failed);
    failed.expect("a failure").failure.unwrap().problem.clone()
}

/// What the program says on standard error, and the status of the last command.
fn said(file: &str, bytes: &[u8]) -> (i32, String) {
    let folder = Folder::new();
    let _ = folder.put(file, bytes);
    let mut start = vec!["start", file, "--outcome", "y", "-o", "study.widefold"];
    start.extend(QUICK);
    let started = widefold(folder.path(), &start);
    if started.status != 0 {
        return (started.status, started.error);
    }
    let updated = widefold(folder.path(), &["update", "study.widefold"]);
    (updated.status, started.error + &updated.error)
}

/// The answer to a table that cannot be used has this code, and names all of `names`.
fn refused(file: &str, bytes: &[u8], code: &str, names: &[&str]) {
    let problem = problem(file, bytes);
    assert_eq!(problem.code.0, code, "{problem:?}");
    assert!(!problem.mend.is_empty(), "{problem:?}");
    let (status, error) = said(file, bytes);
    assert_eq!(status, 1, "{error}");
    assert!(error.contains(&problem.found), "{error}");
    for name in names.iter().copied().chain(["→"]) {
        assert!(error.contains(name), "no “{name}” in: {error}");
    }
    assert!(!error.contains("fault of the program"), "{error}");
}

/// The facts of the data cell and of the fit of a table that can be used.
fn facts(table: &str) -> (Facts, Facts) {
    let tables = [("table.csv", table.as_bytes().to_vec())];
    let started = try_start(&tables, &quick("y")).unwrap();
    let told = run_anew(&started.study, &started.shelf);
    for cell in started.study.cells() {
        let standing = told.standings.get(cell.id);
        assert_eq!(
            standing.state,
            State::Current,
            "{}: {:?}",
            cell.title,
            standing.failure
        );
    }
    let of = |kind| {
        let standing = told.standings.get(the(&started.study, kind));
        standing.outcome.unwrap().facts.clone()
    };
    (of(Kind::Data), of(Kind::Fit))
}

/// The table of dice with one field replaced; rows and columns from 0, the head included.
fn with_field(row: usize, column: usize, field: &str) -> String {
    let table = dice_table(5, 24, 30, 2.0);
    let mut lines: Vec<Vec<String>> = table
        .lines()
        .map(|line| line.split(',').map(str::to_owned).collect())
        .collect();
    lines[row][column] = field.to_owned();
    let lines: Vec<String> = lines.iter().map(|line| line.join(",")).collect();
    lines.join("\n")
}

#[test]
fn an_outcome_that_is_no_column_is_named_with_the_columns_there_are() {
    let table = with_field(0, 1, "salt");
    refused(
        "table.csv",
        table.as_bytes(),
        "missing-outcome",
        &["table.csv", "“y”", "“salt”"],
    );
}

#[test]
fn files_that_hold_no_table_are_refused_by_what_they_are() {
    refused("empty.csv", b"", "empty-file", &["empty.csv", "empty"]);
    let bytes: Vec<u8> = (0..4096_u32).map(|at| (at * 37 % 256) as u8).collect();
    refused("binary.csv", &bytes, "no-table", &["binary.csv"]);
    let workbook = get(&repository("demo-data/cellar-lab.xlsx"));
    for share in [10, 50, 95] {
        let cut = &workbook[..workbook.len() * share / 100];
        refused(
            "cut.xlsx",
            cut,
            "truncated-archive",
            &["cut.xlsx", "ends too early"],
        );
    }
}

#[test]
fn a_text_among_numbers_counts_as_missing_and_is_found_by_row_and_column() {
    let (data, fit) = facts(&with_field(7, 4, "banana"));
    let findings = data.table("import findings").unwrap();
    assert!(findings.texts("finding")[0].contains("“banana”"));
    assert_eq!(findings.texts("places")[0], "table.csv, row 8, column “x3”");
    assert_eq!(data.value("missing values"), Some(1.0));
    assert_eq!(fit.value("samples"), Some(24.0));
}

#[test]
fn names_that_stand_twice_do_not_name_samples() {
    // Not taken by start, because they do not tell samples apart.
    let table = with_field(3, 0, "sample-1");
    let (data, _) = facts(&table);
    assert_eq!(data.value("samples"), Some(24.0));
    // Asked for, they are refused with the name that stands twice.
    let mut wishes = quick("y");
    wishes.samples = Some("name".to_owned());
    let tables = [("table.csv", table.clone().into_bytes())];
    let started = try_start(&tables, &wishes).unwrap();
    let told = run_anew(&started.study, &started.shelf);
    let failure = told.standings.get(the(&started.study, Kind::Data)).failure;
    assert_eq!(failure.unwrap().problem.code.0, "repeated-sample-names");
    let folder = Folder::new();
    let _ = folder.put("table.csv", table);
    let here = folder.path();
    let arguments = "start table.csv --outcome y --samples name -o study.widefold";
    let arguments: Vec<&str> = arguments.split(' ').collect();
    assert_eq!(widefold(here, &arguments).status, 0);
    let answer = widefold(here, &["update", "study.widefold"]);
    assert_eq!(answer.status, 1);
    for name in ["“Tables”", "table.csv", "column “name”", "“sample-1”", "→"] {
        assert!(answer.error.contains(name), "{}", answer.error);
    }
}

#[test]
fn three_samples_are_too_few_and_said_to_be() {
    let table = dice_table(5, 3, 6, 2.0);
    refused(
        "three.csv",
        table.as_bytes(),
        "plan-not-feasible",
        &["Only 3 independent samples", "bring in more samples"],
    );
}

#[test]
fn an_outcome_that_never_varies_cannot_be_predicted() {
    let table = dice_table(5, 24, 30, 2.0);
    let lines: Vec<String> = table
        .lines()
        .enumerate()
        .map(|(row, line)| {
            let mut fields: Vec<&str> = line.split(',').collect();
            if row > 0 {
                fields[1] = "2.5";
            }
            fields.join(",")
        })
        .collect();
    let table = lines.join("\n");
    refused(
        "table.csv",
        table.as_bytes(),
        "constant-outcome",
        &["“Tables”", "table.csv", "column “y”"],
    );
}

#[test]
fn one_predictor_works_and_so_do_more_samples_than_predictors() {
    let (_, fit) = facts(&dice_table(5, 24, 1, 2.0));
    assert_eq!(fit.value("predictors"), Some(1.0));
    // Outcome = 2 x + noise of equal variance: the truth explains 80 %.
    assert!(fit.value("nested r²").unwrap() > 0.6);
    let (_, fit) = facts(&dice_table(6, 80, 5, 2.0));
    assert_eq!(
        (fit.value("samples"), fit.value("predictors")),
        (Some(80.0), Some(5.0))
    );
    assert!(fit.value("nested r²").unwrap() > 0.7);
}

#[test]
fn samples_without_an_outcome_are_excluded_with_that_reason_and_said_to_be() {
    let table = with_field(5, 1, "");
    let (data, fit) = facts(&table);
    let exclusions = data.table("exclusions").unwrap();
    assert_eq!(exclusions.texts("sample"), ["sample-5"]);
    assert_eq!(exclusions.texts("reason"), ["The outcome is missing."]);
    assert_eq!(fit.value("samples"), Some(23.0));
    let (status, said) = said("table.csv", table.as_bytes());
    assert_eq!(status, 0);
    assert!(
        said.contains("1 sample without an outcome is excluded"),
        "{said}"
    );
}

#[test]
fn a_readable_study_whose_table_has_vanished_names_it() {
    let folder = Folder::new();
    let _ = folder.put("table.csv", dice_table(5, 24, 30, 2.0));
    let arguments = "start table.csv --outcome y -o study.json";
    let arguments: Vec<&str> = arguments.split(' ').collect();
    let started = widefold(folder.path(), &arguments);
    assert_eq!(started.status, 0, "{}", started.error);
    let _ = std::fs::remove_file(folder.file("table.csv"));
    let _ = std::fs::remove_dir_all(folder.file("study-tables"));
    let answer = widefold(folder.path(), &["update", "study.json"]);
    assert_eq!(answer.status, 1, "{}", answer.error);
    for name in ["study.json", "table.csv", "→"] {
        assert!(answer.error.contains(name), "{}", answer.error);
    }
}

#[test]
fn a_study_is_saved_only_under_an_ending_that_says_its_form() {
    let folder = Folder::new();
    let _ = folder.put("table.csv", dice_table(5, 24, 30, 2.0));
    let arguments = "start table.csv --outcome y -o study.txt";
    let arguments: Vec<&str> = arguments.split(' ').collect();
    let answer = widefold(folder.path(), &arguments);
    assert_eq!(answer.status, 1);
    for name in ["study.txt", ".widefold", ".json"] {
        assert!(answer.error.contains(name), "{}", answer.error);
    }
    assert!(!folder.file("study.txt").exists());
}
