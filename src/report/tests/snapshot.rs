//! All sentences in one file per kind, so that words are reviewed in one place.

use crate::report::block::Paragraph;
use crate::report::sample::Bench;
use crate::report::sentence::{Piece, Rank, Sentence};
use crate::report::{sentences, study};
use crate::study::cell::{Cell, CellId, Kind};
use crate::study::link::Link;
use crate::study::settings::Settings;
use crate::study::settings::fit::{Fit, Judge, Penalty};
use crate::study::settings::question::{Ask, Seal};
use crate::study::settings::spread;

/// Holds a text against its reference in `tests/snapshots`. A reference that is missing fails.
/// `UPDATE=1` writes it.
fn assert_snapshot(name: &str, text: &str) {
    #![expect(
        clippy::disallowed_methods,
        reason = "a test reads and writes its references"
    )]
    let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("tests/snapshots")
        .join(name);
    if std::env::var("UPDATE").is_ok_and(|value| value == "1") {
        std::fs::write(&path, text).expect("the reference can be written");
    }
    let reference = std::fs::read_to_string(&path)
        .unwrap_or_else(|_| panic!("{name} is missing; UPDATE=1 writes it"));
    for (at, (found, wanted)) in text.lines().zip(reference.lines()).enumerate() {
        assert_eq!(found, wanted, "{name}, line {}", at + 1);
    }
    assert_eq!(text, reference, "{name}");
}

/// A sentence with its words between brackets.
fn marked(sentence: &Sentence) -> String {
    let piece = |piece: &Piece| match piece {
        Piece::Text(text) => text.clone(),
        Piece::Word(word) => format!("[{}]", word.text),
    };
    let text: String = sentence.pieces.iter().map(piece).collect();
    match sentence.rank {
        Rank::Main => text,
        Rank::Detail => format!("    {text}"),
    }
}

fn spread_of(kind: Kind) -> String {
    let bench = Bench::cellar();
    let context = bench.context();
    let mut text = String::new();
    for settings in spread::all() {
        if settings.kind() != kind {
            continue;
        }
        let cell = Cell {
            id: CellId::new(90),
            title: "new".to_owned(),
            settings,
        };
        for sentence in sentences(&context, &cell, None) {
            text.push_str(&marked(&sentence));
            text.push('\n');
        }
        text.push_str("---\n");
    }
    text
}

/// The answer and the methods of one kind, in a study around a fit.
fn told(bench: &Bench, kind: Kind) -> String {
    let mut text = String::new();
    for report in study(&bench.context()) {
        let is_kind = bench
            .study
            .cell(report.id)
            .is_some_and(|cell| cell.settings.kind() == kind);
        if !is_kind || report.id == spread::OTHER_FIT {
            continue;
        }
        if let Some(answer) = &report.answer {
            text.push_str(&format!("> {}\n", answer.plain()));
        }
        for paragraph in report.methods.iter().map(Paragraph::plain) {
            text.push_str(&paragraph);
            text.push('\n');
        }
        text.push_str("---\n");
    }
    text
}

fn fit_with(penalty: Penalty, judge: Judge) -> Fit {
    Fit {
        input: Link::to(spread::PREPARE),
        penalty,
        judge,
        ..Fit::default()
    }
}

#[test]
fn the_words_of_data_cells_are_as_reviewed() {
    let mut text = spread_of(Kind::Data);
    let fit = fit_with(Penalty::Lasso, Judge::Declined);
    for at in [1, 2, 3] {
        let bench = Bench::around(&spread::data()[at], &fit, &[]);
        text.push_str(&told(&bench, Kind::Data));
    }
    assert_snapshot("data.txt", &text);
}

#[test]
fn the_words_of_prepare_cells_are_as_reviewed() {
    let mut text = spread_of(Kind::Prepare);
    text.push_str(&told(&Bench::cellar(), Kind::Prepare));
    assert_snapshot("prepare.txt", &text);
}

#[test]
fn the_words_of_fit_cells_are_as_reviewed() {
    let mut text = spread_of(Kind::Fit);
    for fit in spread::fit() {
        text.push_str(&told(
            &Bench::around(&spread::cellar(), &fit, &[]),
            Kind::Fit,
        ));
    }
    assert_snapshot("fit.txt", &text);
}

#[test]
fn the_words_of_question_cells_are_as_reviewed() {
    let mut text = spread_of(Kind::Question);
    let asks: Vec<Ask> = Ask::catalogue()
        .into_iter()
        .chain([Ask::Ladder { seal: Seal::Opened }])
        .collect();
    let fit = fit_with(Penalty::Lasso, Fit::default().judge);
    let bench = Bench::around(&spread::cellar(), &fit, &asks);
    text.push_str(&told(&bench, Kind::Question));
    assert_snapshot("question.txt", &text);
}

#[test]
fn the_words_of_compare_and_score_cells_are_as_reviewed() {
    assert_snapshot("compare.txt", &spread_of(Kind::Compare));
    assert_snapshot("score.txt", &spread_of(Kind::Score));
    assert!(matches!(spread::all().last(), Some(Settings::Score(_))));
}
