//! What cells say: every place is shown by a word, every sentence is one, every number is a fact.

mod snapshot;

use crate::base::problem::Problem;
use crate::eval::fact::{FactTable, FactValue};
use crate::eval::kind::step::{class_name, numeric_step};
use crate::report::block::{Block, Item, ItemMark, Paragraph, Span};
use crate::report::sample::Bench;
use crate::report::sentence::{Editor, Piece, Sentence};
use crate::report::{CellReport, Context, cell, dictionary, kind, sentences, study};
use crate::study::cell::{Cell, CellId};
use crate::study::link::Link;
use crate::study::prose::Prose;
use crate::study::settings::Settings;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::fit::{Fit, Judge, Penalty};
use crate::study::settings::prepare::Step;
use crate::study::settings::question::{Ask, Seal};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::Value;
use crate::study::settings::slot::data::DataSlot;
use crate::study::settings::spread;

/// The sentences of every settings value of the spread, in the study of the bench.
fn spread_sentences() -> Vec<(Settings, Vec<Sentence>)> {
    let bench = Bench::cellar();
    let context = bench.context();
    spread::all()
        .into_iter()
        .map(|settings| {
            let cell = Cell {
                id: CellId::new(90),
                title: "new".to_owned(),
                settings: settings.clone(),
            };
            let said = sentences(&context, &cell, None);
            (settings, said)
        })
        .collect()
}

#[test]
fn every_place_of_every_setting_is_shown_by_a_word_that_takes_its_own_value() {
    for (settings, said) in spread_sentences() {
        let shown: Vec<Slot> = said
            .iter()
            .flat_map(|sentence| sentence.words().map(|word| word.slot))
            .collect();
        for slot in settings.slots() {
            // The bench predicts a measured quantity; what only other kinds have is kept, unseen.
            if let Slot::Fit(fit) = &slot
                && !fit.is_for(Some(&OutcomeKind::Measured))
            {
                continue;
            }
            assert!(shown.contains(&slot), "{slot:?} has no word: {settings:?}");
        }
        for slot in shown {
            let value = settings
                .value(&slot)
                .unwrap_or_else(|| panic!("{slot:?} shows nothing: {settings:?}"));
            assert_eq!(settings.with(&slot, value), Ok(settings.clone()));
        }
    }
}

#[test]
fn the_editor_of_a_word_offers_what_its_place_takes() {
    for (settings, said) in spread_sentences() {
        for word in said.iter().flat_map(Sentence::words) {
            let takes_choice = !word.slot.choices().is_empty();
            let is_choice = matches!(&word.editor, Editor::Choice(_));
            assert_eq!(takes_choice, is_choice, "{:?}", word.slot);
            let is_number = matches!(&word.editor, Editor::Number { .. });
            let takes_number = word.slot.bounds().is_some();
            // A list of lasso shares is a list whose numbers have bounds.
            let is_list = matches!(&word.editor, Editor::List);
            assert_eq!(
                takes_number,
                is_number || (takes_number && is_list),
                "{:?}",
                word.slot
            );
            if let Editor::Choice(choices) = &word.editor {
                let standing = settings.value(&word.slot);
                let current = choices
                    .iter()
                    .find(|choice| Some(&choice.value) == standing.as_ref())
                    .expect("the present choice is among those offered");
                // What is sealed stands before the word; the word only says that it is.
                let is_sealed = word.slot == Slot::Data(DataSlot::Sealed) && word.text == "sealed";
                assert!(is_sealed || current.label == word.text, "{:?}", word.slot);
            }
        }
    }
}

fn assert_is_sentence(text: &str) {
    assert!(
        text.ends_with('.') || text.ends_with('?'),
        "no full stop: {text}"
    );
    assert!(!text.contains("  "), "double blank: {text}");
    assert!(!text.contains(" ,") && !text.contains(" ."), "{text}");
    assert!(!text.contains("..") && !text.contains(",."), "{text}");
    assert!(!text.contains("()") && !text.contains("“”"), "{text}");
    assert!(text.trim() == text, "blank at an end: {text}");
    let first = text.chars().next().unwrap_or(' ');
    assert!(
        first.is_uppercase() || first.is_numeric() || first == '“',
        "no capital: {text}"
    );
}

#[test]
fn every_sentence_is_whole_and_no_word_is_empty() {
    for (_, said) in spread_sentences() {
        for sentence in said {
            assert_is_sentence(&sentence.plain());
            for piece in &sentence.pieces {
                let text = match piece {
                    Piece::Text(text) => text,
                    Piece::Word(word) => &word.text,
                };
                assert!(!text.is_empty(), "an empty piece: {}", sentence.plain());
            }
            for word in sentence.words() {
                assert_eq!(word.text.trim(), word.text);
            }
        }
    }
}

#[test]
fn the_sentences_read_as_the_design_has_them() {
    let bench = Bench::cellar();
    let report = cell(&bench.context(), spread::FIT);
    let plain: Vec<String> = report.sentences.iter().map(Sentence::plain).collect();
    assert_eq!(
        plain[..4].join(" "),
        "Fit a lasso of salt in moisture on prepared scans. Choose the penalty strength among 100 \
         values by 10 parts, repeated 5 times, taking the lowest error. Judge the whole procedure \
         on 5 outer parts, repeated 10 times. Seed 20260301."
    );
    let report = cell(&bench.context(), spread::DATA);
    assert!(report.sentences[0].plain().starts_with(
        "Read cellar-scans.csv, samples in rows, named by scan; join cellar-lab.xlsx, sheet Wet \
         chemistry, on wheel."
    ));
}

/// Every report of a spread of studies with facts.
fn benches() -> Vec<Bench> {
    let asks: Vec<Ask> = Ask::catalogue()
        .into_iter()
        .chain([Ask::Ladder { seal: Seal::Opened }])
        .collect();
    let mut benches = Vec::new();
    for fit in spread::fit() {
        benches.push(Bench::around(&spread::cellar(), &fit, &asks));
    }
    for data in spread::data() {
        let fit = Fit {
            input: Link::to(spread::PREPARE),
            ..Fit::default()
        };
        benches.push(Bench::around(&data, &fit, &[]));
    }
    benches
}

fn paragraphs(report: &CellReport) -> Vec<Paragraph> {
    let mut all = report.methods.clone();
    all.extend(report.answer.clone());
    for block in &report.blocks {
        match block {
            Block::Paragraph(text) | Block::Section { text, .. } => all.push(text.clone()),
            Block::List(items) => all.extend(items.iter().cloned()),
            Block::Items(items) => all.extend(items.iter().map(|item| item.text.clone())),
            Block::Figure(figure) => all.push(figure.reading.clone()),
            Block::Tabular { .. }
            | Block::Heading(_)
            | Block::Quote(_)
            | Block::Code(_)
            | Block::Rule
            | Block::Offers(_)
            | Block::Grid(_) => {}
        }
    }
    all
}

fn table(context: &Context<'_>, cell: CellId, fact: &str) -> Option<FactTable> {
    match &context.outcome(cell)?.facts.get(fact)?.value {
        FactValue::Table(table) => Some(table.clone()),
        FactValue::Number(_) | FactValue::Text(_) => None,
    }
}

#[test]
fn every_number_that_is_told_is_bound_to_a_fact() {
    let mut bound = 0;
    for bench in benches() {
        let context = bench.context();
        for report in study(&context) {
            for paragraph in paragraphs(&report) {
                for span in &paragraph.spans {
                    match span {
                        Span::Text(text)
                        | Span::Strong(text)
                        | Span::Emphasis(text)
                        | Span::Code(text)
                        | Span::Link { text, .. } => {
                            assert!(!text.contains(char::is_numeric), "{text}");
                        }
                        Span::Name(_) | Span::Formula(_) | Span::Counted { .. } => {}
                        Span::Fact { cell, name, text } => {
                            bound += 1;
                            let outcome = context.outcome(*cell).expect("a cell with facts");
                            assert!(outcome.facts.get(name).is_some(), "{name}");
                            assert!(!text.is_empty());
                        }
                        Span::Entry {
                            cell,
                            fact,
                            row,
                            column,
                            text,
                        } => {
                            bound += 1;
                            let table = table(&context, *cell, fact).expect("a table");
                            let column = table.column(column).expect("a column");
                            assert!(text.starts_with(&column.shown(*row)));
                        }
                        Span::Missing(name) => panic!("{name}: {}", paragraph.plain()),
                    }
                }
            }
        }
    }
    assert!(bound > 500);
}

#[test]
fn every_paragraph_is_made_of_whole_sentences() {
    for bench in benches() {
        for report in study(&bench.context()) {
            for paragraph in paragraphs(&report) {
                assert_is_sentence(&paragraph.plain());
            }
        }
    }
}

#[test]
fn no_text_claims_what_the_study_cannot_know() {
    const NEVER: [&str; 9] = [
        "no leakage",
        "leak-free",
        "validat",
        "robust",
        "biomarker",
        "significant",
        "importance",
        "optimal",
        "driver",
    ];
    let said = |text: &str| {
        let lower = text.to_lowercase();
        NEVER.iter().any(|word| lower.contains(word))
    };
    for bench in benches() {
        for report in study(&bench.context()) {
            for text in paragraphs(&report).iter().map(Paragraph::plain) {
                // The published name of a method and the plan of parts keep their words.
                let text = text
                    .replace("cross-validation", "")
                    .replace("cross-validated", "");
                assert!(!said(&text), "{text}");
            }
        }
    }
}

#[test]
fn the_key_sentence_is_told_only_when_the_check_found_nothing() {
    const KEY: &str = "All learned steps and the choice of strength were repeated within each outer \
                       training part";
    let told = |bench: &Bench| {
        cell(&bench.context(), spread::FIT)
            .methods
            .iter()
            .any(|paragraph| paragraph.plain().contains(KEY))
    };
    let fit = Fit {
        input: Link::to(spread::PREPARE),
        ..Fit::default()
    };
    assert!(told(&Bench::cellar()));
    let declined = Fit {
        judge: Judge::Declined,
        ..fit.clone()
    };
    assert!(!told(&Bench::around(&spread::cellar(), &declined, &[])));
    let mut violated = Bench::cellar();
    let mut standing = violated.standings.get(spread::FIT);
    let mut outcome = standing.outcome.as_deref().expect("facts").clone();
    let facts = outcome.facts.all().to_vec();
    outcome.facts = crate::eval::fact::Facts::new();
    for mut fact in facts {
        if fact.name == "proof violations" {
            fact.value = FactValue::Number(1.0);
        }
        outcome.facts.push(fact);
    }
    standing.outcome = Some(outcome.into());
    violated.standings.put(spread::FIT, standing);
    assert!(!told(&violated));
}

#[test]
fn a_list_of_chosen_predictors_comes_with_frequencies_or_a_remark() {
    let columns = |bench: &Bench| -> (Vec<String>, String) {
        let report = cell(&bench.context(), spread::FIT);
        let mut names = Vec::new();
        for block in &report.blocks {
            if let Block::Grid(grid) = block
                && grid.fact == "coefficients"
            {
                names = grid.columns.iter().map(|c| c.name.clone()).collect();
            }
        }
        let text = paragraphs(&report)
            .iter()
            .map(Paragraph::plain)
            .collect::<String>();
        (names, text)
    };
    let (names, text) = columns(&Bench::cellar());
    assert!(names.contains(&"frequency".to_owned()) && names.contains(&"stand-ins".to_owned()));
    assert!(!text.contains("Read this list with care"));
    let fit = Fit {
        input: Link::to(spread::PREPARE),
        ..Fit::default()
    };
    let (names, text) = columns(&Bench::around(&spread::cellar(), &fit, &[]));
    assert!(!names.contains(&"frequency".to_owned()));
    assert!(text.contains("Read this list with care"));
    let ridge = Fit {
        penalty: Penalty::Ridge,
        ..fit
    };
    let (_, text) = columns(&Bench::around(&spread::cellar(), &ridge, &[]));
    assert!(!text.contains("Read this list with care"));
}

#[test]
fn the_error_that_chose_the_strength_is_not_among_the_performance() {
    let bench = Bench::cellar();
    let report = cell(&bench.context(), spread::FIT);
    let Some(Block::Grid(grid)) = report.blocks.first() else {
        panic!("the performance comes first")
    };
    let rows: Vec<String> = (0..3).map(|row| grid.columns[0].shown(row)).collect();
    assert!(!rows.iter().any(|row| row.contains("tuning")));
    assert_eq!(grid.columns[1].shown(0), "0.28");
}

#[test]
fn a_cell_without_results_says_so_and_tells_no_number() {
    let cells = vec![("salt lasso", Settings::Fit(Fit::default()), None)];
    let bench = Bench::of(cells);
    let report = cell(&bench.context(), CellId::new(1));
    assert_eq!(
        report.methods[0].plain(),
        "“salt lasso” has not been evaluated, so that nothing is told of it here."
    );
    assert!(report.answer.is_none() && report.blocks.is_empty());
}

fn prose_blocks(bench: &Bench, typed: &str) -> Vec<Block> {
    kind::prose::blocks(&bench.context(), &Prose::parse(typed, &bench.study))
}

#[test]
fn prose_shows_facts_where_they_were_typed() {
    let bench = Bench::cellar();
    let blocks = prose_blocks(
        &bench,
        "# Salt by {salt lasso: chosen predictors} bands\n\nThe error was **{salt lasso: nested \
         rmse | 3 decimals}** on *held-out* wheels.\n",
    );
    let [
        Block::Section { level: 1, text },
        Block::Paragraph(paragraph),
    ] = blocks.as_slice()
    else {
        panic!("{blocks:?}")
    };
    assert_eq!(text.plain(), "Salt by 5 bands");
    assert_eq!(
        paragraph.plain(),
        "The error was 0.276 g/100 g on held-out wheels."
    );
    assert!(
        paragraph
            .spans
            .contains(&Span::Emphasis("held-out".to_owned()))
    );
}

#[test]
fn facts_that_do_not_exist_are_marked_in_place_and_listed() {
    let bench = Bench::cellar();
    let typed = "A {salt lasso: charm} and {no such fit: error}.";
    let blocks = prose_blocks(&bench, typed);
    let [Block::Paragraph(paragraph)] = blocks.as_slice() else {
        panic!("{blocks:?}")
    };
    assert_eq!(
        paragraph.plain(),
        "A {salt lasso: charm} and {no such fit: error}."
    );
    assert_eq!(
        paragraph.missing(),
        ["salt lasso: charm", "no such fit: error"]
    );
    let prose = Prose::parse(typed, &bench.study);
    assert_eq!(
        kind::prose::missing(&bench.context(), &prose),
        ["salt lasso: charm", "no such fit: error"]
    );
}

#[test]
fn prose_knows_lists_tables_quotes_links_code_and_figures() {
    let bench = Bench::cellar();
    let blocks = prose_blocks(
        &bench,
        "1. first\n2. second {salt lasso: units}\n   - deeper\n\n> quoted\n\n| a | b |\n|---|--:|\n\
         | {salt lasso: units} | 2 |\n\n`code` and [a link](https://example.org/x).\n\n---\n\n\
         {Error and strength: figure error-curve}\n",
    );
    let [
        Block::Items(items),
        Block::Quote(quote),
        Block::Tabular { head, rows, .. },
        Block::Paragraph(linked),
        Block::Rule,
        Block::Figure(figure),
    ] = blocks.as_slice()
    else {
        panic!("{blocks:?}")
    };
    let shape = |item: &Item| (item.depth, item.mark, item.text.plain());
    assert_eq!(
        items.iter().map(shape).collect::<Vec<_>>(),
        [
            (0, ItemMark::Number(1), "first".to_owned()),
            (0, ItemMark::Number(2), "second 119".to_owned()),
            (1, ItemMark::Bullet, "deeper".to_owned()),
        ]
    );
    assert_eq!(quote.len(), 1);
    assert_eq!((head.len(), rows[0][0].plain().as_str()), (2, "119"));
    assert!(linked.spans.contains(&Span::Code("code".to_owned())));
    assert_eq!(figure.name, "error-curve");
}

#[test]
fn a_figure_that_does_not_exist_is_marked() {
    let bench = Bench::cellar();
    let blocks = prose_blocks(&bench, "{salt lasso: figure charm}");
    let [Block::Paragraph(paragraph)] = blocks.as_slice() else {
        panic!("{blocks:?}")
    };
    assert_eq!(paragraph.missing(), ["salt lasso: figure charm"]);
}

#[test]
fn the_dictionary_holds_every_fact_and_every_column_of_the_study() {
    let bench = Bench::cellar();
    let terms = dictionary::dictionary(&bench.context());
    let has = |fact: &str, column: Option<&str>| {
        terms
            .iter()
            .any(|term| term.fact == fact && term.column.as_deref() == column)
    };
    assert!(has("nested rmse", None) && has("frequencies", Some("sign consistency")));
    assert!(terms.iter().all(|term| !term.meaning.is_empty()));
}

#[test]
fn a_refusal_from_the_settings_is_a_whole_sentence() {
    let problem: Problem = Settings::Fit(Fit::default())
        .with(
            &Settings::Fit(Fit::default()).slots()[0],
            Value::Text("bridge".to_owned()),
        )
        .expect_err("no such penalty");
    assert_is_sentence(&problem.found);
}

#[test]
fn a_step_is_of_the_class_that_the_numbers_are_computed_by() {
    for step in Step::catalogue() {
        let computed = numeric_step(&step, &[]).expect("the usual settings are lawful");
        let Some(computed) = computed else {
            assert_eq!(step, Step::AverageUnits);
            continue;
        };
        assert_eq!(
            step.class().words(),
            class_name(computed.class()),
            "{step:?}"
        );
    }
}
