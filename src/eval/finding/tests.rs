//! Tests of the sentences: all of them stand in one snapshot, to be read in one place.

use crate::base::layout::Encoding;
use crate::base::problem::Place;
use crate::eval::finding::{
    join_error, join_report, mend, problem, read_problem, sentence, treatment,
};
use crate::table::finding::{
    Association, Finding, FindingKind, Likeness, Normalized, Orienting, Treatment,
};
use crate::table::read::ReadError;
use crate::table::samples::{JoinError, JoinReport, Side};

/// One finding of every kind; some in several forms.
fn all() -> Vec<Finding> {
    let names = |names: &[&str]| {
        names
            .iter()
            .map(|name| (*name).to_owned())
            .collect::<Vec<_>>()
    };
    let mut all = Vec::new();
    let mut add = |kind,
                   treatment,
                   count: usize,
                   rows: &[(usize, &str)],
                   examples: &[&str],
                   columns: &[&str]| {
        let mut finding = Finding::new(kind, treatment).counting(count);
        for (row, column) in rows {
            let place = Place::file("cellar.csv").with_row(*row);
            finding.places.push(if column.is_empty() {
                place
            } else {
                place.with_column(column)
            });
        }
        finding.examples = names(examples);
        for column in columns {
            finding.add_column(column);
        }
        all.push(finding);
    };
    use FindingKind as K;
    use Treatment as T;
    add(
        K::OtherEncoding(Encoding::Windows1252),
        T::ReadAsSuch,
        1,
        &[],
        &[],
        &[],
    );
    add(
        K::BrokenLetters,
        T::KeptAsText,
        2,
        &[(3, "place"), (9, "place")],
        &["KÃ¤se"],
        &["place"],
    );
    add(
        K::UnclosedQuote,
        T::Kept,
        1,
        &[(12, "")],
        &["\"north, 3.1, 30"],
        &[],
    );
    add(K::BreaksInQuotes, T::Kept, 1, &[(7, "")], &[], &[]);
    let sheets = |hidden: &[&str]| K::OtherSheets {
        read: "Wet chemistry".to_owned(),
        visible: names(&["Read me"]),
        hidden: names(hidden),
    };
    add(sheets(&[]), T::LeftOut, 1, &[], &[], &[]);
    add(sheets(&["old", "older"]), T::LeftOut, 3, &[], &[], &[]);
    add(K::HiddenSheet, T::Kept, 1, &[], &["old"], &[]);
    add(
        K::HiddenLines {
            rows: 2,
            columns: 1,
        },
        T::Kept,
        3,
        &[(4, ""), (9, "")],
        &[],
        &[],
    );
    add(K::MergedCells, T::Kept, 2, &[(1, "A"), (1, "F")], &[], &[]);
    add(
        K::LinesAbove,
        T::LeftOut,
        3,
        &[(1, ""), (2, ""), (3, "")],
        &["Cellar light", "Probe 2"],
        &[],
    );
    add(K::NoHeader, T::Renamed, 1, &[], &[], &[]);
    add(K::HeaderShort, T::ReadAsSuch, 1, &[(1, "")], &[], &[]);
    add(
        K::UnitsRow,
        T::ReadAsSuch,
        1,
        &[(2, "")],
        &["g/100 g", "%"],
        &[],
    );
    add(K::BlankRows, T::LeftOut, 1, &[(9, "")], &[], &[]);
    add(K::BlankColumns, T::LeftOut, 2, &[], &[], &[]);
    add(
        K::LinesBelow,
        T::LeftOut,
        1,
        &[(44, "")],
        &["weighed twice"],
        &[],
    );
    add(K::SummaryRows, T::Kept, 1, &[(43, "lot")], &["mean"], &[]);
    add(K::RepeatedHeader, T::LeftOut, 1, &[(30, "")], &[], &[]);
    add(
        K::ShortRows { expected: 14 },
        T::CountedAsMissing,
        1,
        &[(24, "")],
        &[],
        &[],
    );
    add(
        K::LongRows { expected: 14 },
        T::CountedAsMissing,
        12,
        &[(24, ""), (25, ""), (26, ""), (27, "")],
        &[],
        &[],
    );
    add(
        K::Sideways(Orienting::RowHeadsAreAnAxis),
        T::ReadAsSuch,
        700,
        &[],
        &[],
        &[],
    );
    add(
        K::PerhapsSideways(Orienting::ManyNamedRows),
        T::Kept,
        3200,
        &[],
        &[],
        &[],
    );
    add(
        K::BlankNames,
        T::Renamed,
        1,
        &[(1, "column 7")],
        &["column 7"],
        &["column 7"],
    );
    add(
        K::RepeatedNames,
        T::Renamed,
        2,
        &[(1, "4"), (1, "6")],
        &["fat"],
        &["fat (2)", "fat (3)"],
    );
    add(
        K::TextAmongNumbers,
        T::CountedAsMissing,
        4,
        &[(5, "salt"), (9, "fat"), (12, "fat"), (20, "pH")],
        &["spilled", "see note"],
        &["salt", "fat", "pH"],
    );
    add(
        K::NumbersAsText,
        T::ReadAsNumber,
        1,
        &[(5, "salt")],
        &["51.25"],
        &["salt"],
    );
    add(
        K::ErrorValues,
        T::CountedAsMissing,
        1,
        &[(5, "salt")],
        &["#DIV/0!"],
        &["salt"],
    );
    add(
        K::OtherDecimalMark,
        T::CountedAsMissing,
        2,
        &[(5, "salt"), (6, "salt")],
        &["3,1", "2,9"],
        &["salt"],
    );
    add(
        K::GroupedDigits,
        T::CountedAsMissing,
        1,
        &[(5, "salt")],
        &["1,051.5"],
        &["salt"],
    );
    add(
        K::ValuesWithUnit,
        T::CountedAsMissing,
        1,
        &[(5, "salt")],
        &["52.1 mg"],
        &["salt"],
    );
    add(
        K::DatesAmongNumbers,
        T::CountedAsMissing,
        1,
        &[(5, "salt")],
        &["2026-03-02"],
        &["salt"],
    );
    add(
        K::BelowLimit,
        T::KeptAsLimit,
        12_000,
        &[(5, "a"), (6, "b")],
        &["<0.05", "<0.1"],
        &["a", "b", "c", "d"],
    );
    add(
        K::AboveLimit,
        T::KeptAsLimit,
        1,
        &[(5, "salt")],
        &[">12"],
        &["salt"],
    );
    add(
        K::MissingWords {
            words: names(&["ND", "n.d."]),
        },
        T::CountedAsMissing,
        3,
        &[(5, "salt")],
        &["ND", "n.d."],
        &["salt"],
    );
    add(
        K::MissingCodes,
        T::CountedAsMissing,
        3,
        &[(5, "salt")],
        &["-9"],
        &["salt"],
    );
    add(
        K::SuspectedCode {
            code: "-9".to_owned(),
        },
        T::Kept,
        2,
        &[(5, "salt"), (9, "salt")],
        &["-9"],
        &["salt"],
    );
    add(
        K::NumbersTooLarge,
        T::CountedAsMissing,
        1,
        &[(5, "salt")],
        &["1e999"],
        &["salt"],
    );
    add(
        K::DigitsLost,
        T::ReadAsNumber,
        1,
        &[(5, "bar")],
        &["12345678901234567"],
        &["bar"],
    );
    add(
        K::LeadingZeros,
        T::KeptAsText,
        2,
        &[(5, "lot"), (6, "lot")],
        &["007", "012"],
        &["lot"],
    );
    add(
        K::LeadingZeros,
        T::ReadAsNumber,
        1,
        &[(5, "salt")],
        &["03"],
        &["salt"],
    );
    add(
        K::ExponentLabels,
        T::KeptAsText,
        1,
        &[(5, "sensor")],
        &["1E-05"],
        &["sensor"],
    );
    add(
        K::DateLabels,
        T::KeptAsText,
        2,
        &[(5, "sensor"), (6, "sensor")],
        &["MAR-2", "SEP-9"],
        &["sensor"],
    );
    add(
        K::DatesAmongLabels,
        T::KeptAsText,
        1,
        &[(5, "sensor")],
        &["2026-03-02"],
        &["sensor"],
    );
    add(
        K::NumbersAmongLabels,
        T::KeptAsText,
        1,
        &[(5, "sensor")],
        &["1e-5"],
        &["sensor"],
    );
    add(
        K::BlanksAround,
        T::BlanksTakenOff,
        1,
        &[(5, "cave")],
        &["north"],
        &["cave"],
    );
    add(
        K::LabelVariants,
        T::Kept,
        2,
        &[(5, "cave"), (6, "cave")],
        &["north", "North"],
        &["cave"],
    );
    add(
        K::RepeatedSamples,
        T::Kept,
        2,
        &[(5, "lot"), (9, "lot")],
        &["L-003"],
        &["lot"],
    );
    add(K::UnnamedSamples, T::Kept, 1, &[(5, "lot")], &[], &["lot"]);
    add(
        K::LooksLikeRepeats { n_units: 84 },
        T::Kept,
        190,
        &[(2, "night"), (3, "night"), (4, "night")],
        &["B07-n1", "B07-n2"],
        &["night"],
    );
    add(
        K::IdenticalSamples,
        T::Kept,
        1,
        &[(5, "lot")],
        &["K-014 and K-088"],
        &[],
    );
    add(
        K::NearIdenticalSamples { dimension: 12.3 },
        T::Kept,
        3,
        &[(5, "lot"), (7, "lot"), (8, "lot")],
        &["K-014 and K-088"],
        &[],
    );
    add(K::ConstantColumns, T::Kept, 1, &[], &[], &["x7"]);
    add(K::EmptyColumns, T::Kept, 2, &[], &[], &["x8", "x9"]);
    add(
        K::EqualColumns,
        T::Kept,
        5,
        &[],
        &["x1"],
        &["x10", "x11", "x12", "x13", "x14"],
    );
    let equals = |likeness| K::EqualsOutcome {
        predictor: "salt_calc".to_owned(),
        likeness,
    };
    add(
        equals(Likeness::Correlation(0.9996)),
        T::Kept,
        1,
        &[],
        &[],
        &["salt_calc"],
    );
    add(
        equals(Likeness::Auc(1.0)),
        T::Kept,
        2,
        &[],
        &[],
        &["salt_calc", "x"],
    );
    add(
        equals(Likeness::SameClasses),
        T::Kept,
        4,
        &[],
        &[],
        &["salt_calc", "x", "y", "z"],
    );
    add(K::NamedLikeOutcome, T::Kept, 1, &[], &[], &["salt_calc"]);
    let batch = |strength| K::BatchWithOutcome {
        batch: "cave".to_owned(),
        strength,
    };
    add(
        batch(Association::CramersV(0.35)),
        T::Kept,
        6,
        &[],
        &[],
        &["cave"],
    );
    add(
        batch(Association::EtaSquared(0.4)),
        T::Kept,
        4,
        &[],
        &[],
        &["cave"],
    );
    add(
        K::BatchOfOneClass {
            batch: "week".to_owned(),
            share: 0.82,
        },
        T::Kept,
        156,
        &[],
        &[],
        &["week"],
    );
    add(
        K::OrderWithOutcome {
            order: "run".to_owned(),
            rank_correlation: -0.47,
        },
        T::Kept,
        60,
        &[],
        &[],
        &["run"],
    );
    add(
        K::AlreadyNormalized(Normalized::Columns),
        T::Kept,
        700,
        &[],
        &[],
        &[],
    );
    add(
        K::AlreadyNormalized(Normalized::RowSums),
        T::Kept,
        120,
        &[],
        &[],
        &[],
    );
    add(
        K::AlreadyNormalized(Normalized::SortedRows),
        T::Kept,
        120,
        &[],
        &[],
        &[],
    );
    add(
        K::MissingShare { share: 0.091 },
        T::Kept,
        43_200,
        &[],
        &[],
        &[],
    );
    add(
        K::BelowLimitShare { largest: 0.7 },
        T::Kept,
        6,
        &[],
        &[],
        &["g1", "g2", "g3", "g4", "g5", "g6"],
    );
    all
}

fn refusals() -> Vec<ReadError> {
    vec![
        ReadError::Empty,
        ReadError::Blank,
        ReadError::Binary { what: None },
        ReadError::Binary {
            what: Some("a PDF document"),
        },
        ReadError::TruncatedArchive { unpacked: 0 },
        ReadError::TruncatedArchive { unpacked: 40_960 },
        ReadError::DamagedArchive {
            details: "corrupt deflate stream".to_owned(),
        },
        ReadError::NotAWorkbook,
        ReadError::Encrypted,
        ReadError::NoSuchSheet {
            asked: "Wet chemisty".to_owned(),
            sheets: vec!["Read me".to_owned(), "Wet chemistry".to_owned()],
        },
        ReadError::NoSheet,
        ReadError::EmptySheet {
            sheet: "Sheet1".to_owned(),
        },
        ReadError::NoSuchRow {
            asked: 900,
            rows: 42,
        },
        ReadError::HeaderOnly { columns: 3 },
        ReadError::TooLarge,
    ]
}

fn joins() -> Vec<String> {
    let keys = |keys: &[&str]| keys.iter().map(|key| (*key).to_owned()).collect::<Vec<_>>();
    let mut lines = vec![
        join_error(&JoinError::NoSuchColumn {
            side: Side::Left,
            name: "wheels".to_owned(),
        }),
        join_error(&JoinError::NoSuchColumn {
            side: Side::Right,
            name: "wheels".to_owned(),
        }),
    ];
    for loosely in [0, 1, 40] {
        let (left, right) = (keys(&["W1", "W2"]), keys(&["w-01"]));
        lines.push(join_error(&JoinError::NothingMatches {
            left,
            right,
            loosely,
        }));
    }
    lines.extend(join_report(&JoinReport {
        matched: 355,
        only_left: keys(&["K-007"]),
        only_right: keys(&["K-900", "K-901", "K-902", "K-903"]),
        repeated_right: keys(&["K-014"]),
        undecided: 3,
        unnamed_left: 2,
        renamed: vec![("fat".to_owned(), "fat (joined)".to_owned())],
        loosely_matched: Some(358),
        ..JoinReport::default()
    }));
    lines
}

fn written() -> String {
    let mut text = String::new();
    let mut line = |words: &str| {
        text.push_str(words);
        text.push('\n');
    };
    for finding in all() {
        line(&format!(
            "{}\n  {}\n  {}",
            finding.kind.code(),
            sentence(&finding),
            treatment(&finding)
        ));
        for instruction in mend(&finding) {
            line(&format!("  > {instruction}"));
        }
    }
    line("\nNo table");
    for error in refusals() {
        let problem = read_problem(&error, "cellar.csv");
        line(&format!("{}\n  {problem}", problem.code));
    }
    line("\nJoins");
    for sentence in joins() {
        line(&format!("  {sentence}"));
    }
    text
}

#[test]
#[expect(
    clippy::disallowed_methods,
    reason = "a test reads, and on request writes, its snapshot"
)]
fn all_sentences_are_as_they_were_last_read() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/snapshots/findings.txt");
    let written = written();
    if std::env::var("UPDATE").is_ok() {
        std::fs::write(path, &written).unwrap();
    }
    let kept = std::fs::read_to_string(path).unwrap_or_default();
    let differing = kept
        .lines()
        .zip(written.lines())
        .find(|(kept, now)| kept != now);
    assert!(
        kept == written,
        "first difference: {differing:?}; UPDATE=1 writes the file anew"
    );
}

#[test]
fn sentences_are_whole_and_keep_to_the_words() {
    let mut sentences: Vec<String> = Vec::new();
    for finding in all() {
        sentences.push(sentence(&finding));
        sentences.push(treatment(&finding).to_owned());
        sentences.extend(mend(&finding).into_iter().map(str::to_owned));
        // A finding can be told as a problem, with the same code.
        assert_eq!(problem(&finding).code.0, finding.kind.code());
    }
    for error in refusals() {
        let problem = read_problem(&error, "x");
        sentences.push(problem.found);
        sentences.extend(problem.mend);
    }
    for sentence in sentences {
        // What stands in quotes is the file's own.
        let sentence: String = sentence
            .split('“')
            .map(|piece| piece.split_once('”').map_or(piece, |(_, rest)| rest))
            .collect::<Vec<_>>()
            .join("“");
        assert!(
            sentence.ends_with('.') && !sentence.contains(".."),
            "{sentence}"
        );
        assert!(
            !sentence.contains("  ") && !sentence.contains('!'),
            "{sentence}"
        );
        let first = sentence.chars().next().unwrap();
        assert!(
            first.is_uppercase() || first.is_ascii_digit() || first == '“',
            "{sentence}"
        );
        for word in [
            "invalid",
            "illegal",
            "failed to",
            "please",
            "oops",
            "NaN",
            "error:",
        ] {
            assert!(
                !sentence.to_lowercase().contains(&word.to_lowercase()),
                "{sentence}"
            );
        }
    }
}

#[test]
fn every_kind_of_finding_is_in_the_snapshot() {
    let mut codes: Vec<&str> = all().iter().map(|finding| finding.kind.code()).collect();
    codes.sort_unstable();
    codes.dedup();
    // The kinds are counted in the enum’s own list of names.
    let source = include_str!("../../table/finding.rs");
    let listed = source
        .lines()
        .filter(|line| line.trim_start().starts_with("Self::"))
        .count();
    assert_eq!(codes.len(), listed);
}

#[test]
fn every_offer_is_taken_by_the_door_of_the_settings_and_every_finding_says_what_could_be_done() {
    let mut data = crate::study::settings::spread::cellar();
    data.tables[0].file = "a.csv".to_owned();
    data.tables[0].header_row = Some(30);
    data.tables[0].decimal = None;
    let mut offered = 0;
    for mut finding in all() {
        if matches!(finding.kind, FindingKind::OtherSheets { .. }) {
            finding.file = Some("cellar-lab.xlsx".to_owned());
        }
        let offers = super::offers(&finding, &data);
        assert!(
            !offers.is_empty() || !mend(&finding).is_empty(),
            "nothing could be done about {}",
            finding.kind.code()
        );
        for offer in offers {
            let after = crate::study::settings::said::said(&data, &offer.line)
                .unwrap_or_else(|problem| panic!("{}: {problem}", offer.line));
            // Some offers put back what stands there; none may change nothing for another reason.
            assert!(
                after != data || offer.line.ends_with("rows") || offer.line.contains("utf-8"),
                "{} changes nothing",
                offer.line
            );
            assert!(!offer.label.is_empty());
            offered += 1;
        }
    }
    assert!(offered >= 20, "only {offered} offers");
}
